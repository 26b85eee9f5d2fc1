"""A sweep as text, table, JSON and files."""

import csv
import io
import json
import tempfile
from collections import Counter
from pathlib import Path
from typing import Any

from thermal.constants import ZERO_CELSIUS
from thermal.questions.sweep import FIGURES, Sweep
from thermal.questions.sweep_plan import Axis
from thermal.questions.sweep_store import RESULTS, Row, SweepError, write_whole
from thermal.report.advice import cautions, expectation
from thermal.report.frame import save_figure
from thermal.report.sweep_map import Figure, draw_sweep, drawable, figures_of_picture, fits, rounded
from thermal.report.text import bullets, columns, paragraph
from thermal.report.versions import versions
from thermal.setup import Setup

ROWS_SHOWN, REASONS_SHOWN = 60, 5
"""Longest table on the console, and most reasons of failed runs that are told there."""
OUTCOMES = {
    "target": "targets met",
    "finished": "no target asked",
    "cannot_reach": "a target missed",
    "limit": "hotter than the solidus",
    "failed": "no result",
}
"""Status of a run in the sentence that counts them."""
OUTCOME = {"target": "met", "finished": "done", "cannot_reach": "not met", "limit": "too hot", "failed": "failed"}
BEST = {
    "time_s": "shortest time {:.4g} s",
    "spread_K": "smallest spread {:.3g} K",
    "supply_energy_kWh_per_t": "least energy {:.4g} kWh/t from the supply",
    "absorbed_energy_kWh_per_t": "least energy {:.4g} kWh/t absorbed",
}


def sweep_sentence(sweep: Sweep) -> str:
    """How many runs ended how, and which of those that met everything is the best in what."""
    found = Counter(row.status for row in sweep.rows)
    told = ", ".join(f"{words} in {found[status]}" for status, words in OUTCOMES.items() if found[status])
    good = [row for row in sweep.rows if row.status in ("target", "finished")]
    bests = [text for figure in figures_of_picture(sweep) if (text := _best(sweep, good, figure)) is not None]
    best = "; ".join(bests)
    return f"{_runs(len(sweep.rows))}: {told}." + (f" {best[:1].upper()}{best[1:]}." if best else "")


def sweep_csv(sweep: Sweep) -> str:
    """One row a run in the order of the grid; a figure that does not exist is left empty."""
    text = io.StringIO()
    table = csv.writer(text, lineterminator="\n")
    table.writerow(["run", *map(_head, sweep.axes), "status", "met", *FIGURES, "limits", "sentence"])
    for row in sweep.rows:
        figures = [f"{row.figures[name]:.7g}" if name in row.figures else "" for name in FIGURES]
        met = "" if row.met is None else str(row.met).lower()
        values = [_cell(axis, value) for axis, value in zip(sweep.axes, row.values, strict=True)]
        table.writerow([row.run, *values, row.status, met, *figures, " ".join(row.limits), row.sentence])
    return text.getvalue()


def sweep_text(sweep: Sweep, setup: Setup, folder: Path) -> str:
    """Sentence, table, reasons of failed runs and what belongs to them; setup : of the case as it stands."""
    parts = [setup.title, paragraph(sweep_sentence(sweep))]
    if len(sweep.rows) <= ROWS_SHOWN:
        parts.append(f"Runs\n{columns(_rows(sweep))}")
    if reasons := Counter(row.sentence for row in sweep.rows if row.status == "failed").most_common():
        told = [f"{_runs(count)}: {reason}" for reason, count in reasons[:REASONS_SHOWN]]
        if len(reasons) > REASONS_SHOWN:
            told.append(f"{len(reasons) - REASONS_SHOWN} further reasons are in {RESULTS[0]}.")
        parts.append(f"Failed\n{bullets(told)}")
    parts.append(f"What to expect\n{bullets(expectation(sweep.case))}")
    parts.append(
        paragraph(f"Files: {folder}") + (f"\n{bullets([no_picture])}" if (no_picture := _why_not(sweep)) else "")
    )
    short = [each.short for each in cautions(setup, _hottest(sweep))]
    parts.append(f"Cautions, in short (in full with --json)\n{bullets(short)}")
    return "\n\n".join(parts) + "\n"


def sweep_json(sweep: Sweep, setup: Setup) -> str:
    """The sweep as JSON text; setup : of the case as it stands."""
    axes = [
        {"path": axis.path, "unit": axis.unit or None, "values": list(axis.numbers or axis.values)}
        for axis in sweep.axes
    ]
    told: dict[str, Any] = {
        "question": "sweep",
        "title": setup.title,
        "sentence": sweep_sentence(sweep),
        "axes": axes,
        "runs": [_run(row) for row in sweep.rows],
        "expectation": list(expectation(sweep.case)),
        "cautions": [each.full for each in cautions(setup, _hottest(sweep))],
        "versions": versions(),
    }
    return json.dumps(told, indent=2, ensure_ascii=False, allow_nan=False) + "\n"


def write_sweep(folder: Path, sweep: Sweep, setup: Setup) -> None:
    """Write table and picture of a finished sweep into its folder.

    Raises
    ------
    SweepError : writing fails.
    """
    table, *pictures = (folder / name for name in RESULTS)
    try:
        write_whole(table, sweep_csv(sweep))
        if _why_not(sweep) is None:
            with tempfile.TemporaryDirectory(dir=folder) as fresh:
                save_figure(
                    table.stem,
                    Path(fresh),
                    lambda picture: draw_sweep(picture, sweep, setup.title, sweep_sentence(sweep)),
                )
                for picture in pictures:
                    (Path(fresh) / picture.name).replace(picture)
    except OSError as error:
        raise SweepError(f"{folder}: cannot be written ({error.strerror})") from None


def _why_not(sweep: Sweep) -> str | None:
    """Why there is no picture, None where there is one."""
    if not fits(sweep):
        return f"No picture: {len(sweep.axes)} axes do not fit one, leave all but two out for a map."
    return None if drawable(sweep) else "No picture: no run met its target."


def _runs(count: int) -> str:
    return "1 run" if count == 1 else f"{count} runs"


def _best(sweep: Sweep, rows: list[Row], figure: Figure) -> str | None:
    known = [row for row in rows if figure.name in row.figures]
    if len(known) < 2:
        return None
    best = min(known, key=lambda row: abs(row.figures[figure.name]))
    return f"{BEST[figure.name].format(best.figures[figure.name])} at {_where(sweep, best)}"


def _where(sweep: Sweep, row: Row) -> str:
    keys = [axis.path.rpartition(".")[2] for axis in sweep.axes]
    if len(set(keys)) < len(keys):
        keys = [axis.path for axis in sweep.axes]
    return ", ".join(f"{key} {value}" for key, value in zip(keys, _short(sweep, row), strict=True))


def _rows(sweep: Sweep) -> list[list[str]]:
    time, spread, energy = figures_of_picture(sweep)
    last = energy.label.rpartition(", ")[2]
    heads = ["", "targets", "time, s", "surface, °C", "core, °C", "spread, K", last, "limits"]
    rows = [heads]
    for row in sweep.rows:
        numbers = [
            f"{row.figures[name]:.{digits}f}" if name in row.figures else "-"
            for name, digits in ((time.name, 1), ("surface_C", 0), ("core_C", 0), (spread.name, 0), (energy.name, 1))
        ]
        label = ", ".join(_short(sweep, row))
        rows.append([label, OUTCOME[row.status], *numbers, ", ".join(row.limits) or "-"])
    return rows


def _run(row: Row) -> dict[str, Any]:
    return {
        "run": row.run,
        "values": list(row.values),
        "status": row.status,
        "met": row.met,
        "sentence": row.sentence,
        **{name: row.figures.get(name) for name in FIGURES},
        "limits": list(row.limits),
    }


def _head(axis: Axis) -> str:
    return f"{axis.path}_{axis.unit.replace('°', '')}" if axis.unit else axis.path


def _short(sweep: Sweep, row: Row) -> list[str]:
    """Values of a row to be read, numbers with five figures."""
    return [
        _plain(value)
        if axis.numbers is None
        else f"{rounded(axis.numbers[axis.values.index(value)], 5)} {axis.unit}".strip()
        for axis, value in zip(sweep.axes, row.values, strict=True)
    ]


def _cell(axis: Axis, value: str) -> str:
    if axis.numbers is None:
        return _plain(value)
    return f"{axis.numbers[axis.values.index(value)]:.10g}"


def _plain(value: str) -> str:
    """A value without the quotes it may have been written in."""
    return value.strip("\"'")


def _hottest(sweep: Sweep) -> float:
    """Highest temperature [K] of all runs, or of the piece before them."""
    known = [row.figures["hottest_C"] + ZERO_CELSIUS for row in sweep.rows if "hottest_C" in row.figures]
    return max([sweep.case.workpiece.initial, *known])
