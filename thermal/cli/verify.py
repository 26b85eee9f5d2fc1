"""`thermal verify`."""

import sys
from pathlib import Path
from typing import Annotated

import typer

from thermal.cli.changes import Changes, overrides
from thermal.cli.exits import NO_RESULT, exit_codes, say
from thermal.cli.material import Folder


def verify(
    case: Annotated[
        Path | None, typer.Argument(help="Case file (TOML): check this case with a second engine instead.")
    ] = None,
    full: Annotated[bool, typer.Option("--full", help="More sizes, times and frequencies.")] = False,
    as_json: Annotated[bool, typer.Option("--json", help="Print JSON.")] = False,
    changes: Changes = None,
    materials: Folder = None,
) -> None:
    """Check the program here and now against closed solutions and measurements.

    Exit code 0: every row agrees, or the second engine does; 4: not.
    """
    with exit_codes():
        if case is not None:
            _second_engine(case, full or as_json, changes, materials)
            return

        import json

        from thermal.crosscheck.verify import verify as verified
        from thermal.report.verification import verification_json, verification_text

        try:
            result = verified(full, on_row=lambda row: _progress(f"{row.check.id}  {row.quantity}"))
        finally:
            _progress("")
        if as_json:
            say(json.dumps(verification_json(result), indent=2, ensure_ascii=False) + "\n")
        else:
            say(verification_text(result))
        if result.failed:
            raise typer.Exit(NO_RESULT)


def _second_engine(path: Path, table_options: bool, changes: list[str] | None, materials: Path | None) -> None:
    from thermal.errors import CaseError

    if table_options:
        raise CaseError("verify    --full and --json belong to the table, not to a case; leave one of them out")

    from thermal.case import load_case
    from thermal.crosscheck.fipy_heat import compare
    from thermal.report.second_engine import second_engine_text

    try:
        result = compare(load_case(path, overrides(changes), materials=materials), _progress)
    finally:
        _progress("")
    say(second_engine_text(result))
    if not result.agrees:
        raise typer.Exit(NO_RESULT)


def _progress(words: str) -> None:
    """One line on the terminal, rewritten; silent where that is none."""
    if sys.stderr.isatty():
        print(f"\r{words[:79]:<79}\r", end="", file=sys.stderr, flush=True)
