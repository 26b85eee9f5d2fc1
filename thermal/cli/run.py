"""`thermal run`."""

from pathlib import Path
from typing import Annotated

import typer

from thermal.cli.changes import Changes, overrides
from thermal.cli.exits import INTERRUPTED, NOT_REACHED, exit_codes, say, tell
from thermal.cli.material import Folder

CODES = {"cannot_reach": NOT_REACHED, "limit": NOT_REACHED, "interrupted": INTERRUPTED}
"""Exit codes of the ways a run can end; 0 for the others."""


def run(
    case: Annotated[Path, typer.Argument(help="Case file (TOML).")],
    out: Annotated[Path | None, typer.Option(help="Folder for the results; results/<case name> if left out.")] = None,
    changes: Changes = None,
    materials: Folder = None,
    as_json: Annotated[bool, typer.Option("--json", help="Print the summary as JSON.")] = False,
    quiet: Annotated[bool, typer.Option("--quiet", help="Print the verdict only, no progress.")] = False,
    force: Annotated[bool, typer.Option("--force", help="Replace results that are there.")] = False,
) -> None:
    """Run a case and write its results.

    Exit code 0: done, targets met; 2: bad input; 3: a target was not reached or the piece got too hot; 4: no
    result; 130: interrupted, what there was is kept.
    """
    with exit_codes():
        from thermal import loop
        from thermal.build import build
        from thermal.case import load_case
        from thermal.cli.progress import Progress
        from thermal.report.files import demand_place, write_results
        from thermal.results.stages import stage_names

        loaded = load_case(case, overrides(changes), materials=materials)
        folder = out if out is not None else Path("results") / loaded.name
        demand_place(folder, force)
        setup = build(loaded)
        progress = Progress(stage_names(setup), quiet)
        try:
            history = loop.run(setup, progress.see)
        finally:
            progress.clear()
        if history.status == "interrupted":
            tell("interrupted: writing what there is, marked incomplete")
        written: Path | None = None
        try:
            write_results(folder, setup, loaded, history, force=force)
            written = folder
        finally:  # the answer is shown even where it cannot be written
            if as_json:
                from thermal.report.summary import summary_text

                say(summary_text(setup, loaded, history))
            elif quiet:
                from thermal.results.verdict import sentence

                say(f"{sentence(setup, history)}\n")
            else:
                from thermal.report.tables import result_text

                say(result_text(setup, loaded, history, written))
        raise typer.Exit(CODES.get(history.status, 0))
