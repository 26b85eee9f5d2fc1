"""`thermal sweep`."""

import sys
import time
from pathlib import Path
from typing import Annotated

import typer

from thermal.cli.changes import Changes, overrides
from thermal.cli.exits import INTERRUPTED, NO_RESULT, exit_codes, say
from thermal.cli.material import Folder

EVERY = 0.2
"""Seconds between two rewrites of the line that shows how far the sweep is."""
WIDTH = 79


def sweep(
    case: Annotated[Path, typer.Argument(help="Case file (TOML).")],
    over: Annotated[
        list[str],
        typer.Option(
            "--over",
            metavar="PATH=VALUES",
            help='An axis: supply.power="40 kW:120 kW:9" (even steps), supply.frequency="1 kHz:30 kHz:6:log" (even '
            "ratios) or workpiece.material=steel-c45,copper; several make the full grid.",
        ),
    ],
    workers: Annotated[
        int | None, typer.Option(min=1, help="Processes; as many as there are cores if left out.")
    ] = None,
    out: Annotated[Path | None, typer.Option(help="Folder; results/<case name>-sweep if left out.")] = None,
    changes: Changes = None,
    materials: Folder = None,
    as_json: Annotated[bool, typer.Option("--json", help="Print all rows as JSON.")] = False,
    quiet: Annotated[bool, typer.Option("--quiet", help="Print the answer in words only, no progress.")] = False,
    force: Annotated[bool, typer.Option("--force", help="Throw away the runs that are there, begin anew.")] = False,
) -> None:
    """Run a case over a grid of its values; one that was interrupted goes on where it stopped.

    Exit code 0: all runs are done, whatever became of their targets; 2: bad input; 4: every run failed, or a worker
    was lost; 130: interrupted, the runs that ended are kept.
    """
    with exit_codes():
        from thermal.build import build
        from thermal.case import load_case
        from thermal.questions import sweep as question
        from thermal.questions.sweep_plan import axis_of, grid_size
        from thermal.report.sweep import sweep_json, sweep_sentence, sweep_text, write_sweep

        loaded = load_case(case, overrides(changes), materials=materials)
        axes = [axis_of(text) for text in over]
        setup = build(loaded)
        folder = out if out is not None else Path("results") / f"{loaded.name}-sweep"
        count = min(workers or question.usable_cores(), grid_size(axes))
        meter = Meter([len(axis.values) for axis in axes], count, quiet)
        try:
            with question.workers(count) as executor:
                found = question.sweep(loaded, axes, executor=executor, folder=folder, force=force, progress=meter.see)
        except question.WorkerLost as error:
            print(f"{error}; what ended is kept in {folder}, the same command goes on from there", file=sys.stderr)
            raise typer.Exit(NO_RESULT) from None
        finally:
            meter.clear()
        if found.interrupted:
            print(
                f"interrupted: {len(found.rows)} of {grid_size(axes)} runs are kept in {folder}, "
                "the same command goes on from there",
                file=sys.stderr,
            )
            raise typer.Exit(INTERRUPTED)
        try:
            write_sweep(folder, found, setup)
        finally:  # the answer is shown even where it cannot be written
            if as_json:
                say(sweep_json(found, setup))
            elif quiet:
                say(f"{sweep_sentence(found)}\n")
            else:
                say(sweep_text(found, setup, folder))
        raise typer.Exit(NO_RESULT if all(row.status == "failed" for row in found.rows) else 0)


class Meter:
    """Says on stderr how many runs there will be; on a terminal one line shows how far they are.

    sizes : of the axes ; workers : processes.
    """

    def __init__(self, sizes: list[int], workers: int, quiet: bool) -> None:
        self._sizes = sizes
        self._workers = workers
        self._quiet = quiet
        self._shown = not quiet and sys.stderr.isatty()
        self._began = self._last = 0.0
        self._before: int | None = None

    def see(self, done: int, total: int) -> None:
        """Show how many runs have ended; the first time also how many there are."""
        now = time.monotonic()
        if self._before is None:
            self._before, self._began = done, now
            self._announce(done, total)
        if not self._shown or (now - self._last < EVERY and done < total):
            return
        self._last = now
        line = f"{done} of {total} runs"
        if (new := done - self._before) > 0:
            rate = new / max(now - self._began, 1e-9)
            line += f"   {rate:.3g} runs/s   {_duration((total - done) / rate)} left"
        print(f"\r{line[:WIDTH]:<{WIDTH}}", end="", file=sys.stderr, flush=True)

    def clear(self) -> None:
        """Wipe the line."""
        if self._shown:
            print(f"\r{'':<{WIDTH}}\r", end="", file=sys.stderr, flush=True)

    def _announce(self, done: int, total: int) -> None:
        if self._quiet:
            return
        grid = f" ({' x '.join(map(str, self._sizes))})" if len(self._sizes) > 1 else ""
        there = f", {done} of them are there already" if done else ""
        processes = f", {self._workers} at a time" if self._workers > 1 and done < total else ""
        print(f"{total} runs{grid}{there}{processes}", file=sys.stderr)


def _duration(seconds: float) -> str:
    """A time in hours and minutes, minutes and seconds or seconds."""
    whole = round(seconds)
    if whole >= 3600:
        return f"{whole // 3600} h {whole % 3600 // 60:02d} min"
    return f"{whole // 60} min {whole % 60:02d} s" if whole >= 60 else f"{whole} s"
