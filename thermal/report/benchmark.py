"""The benchmark as text and JSON."""

from importlib.metadata import version
from importlib.util import find_spec
from typing import Any

from thermal.crosscheck.bench import OWN, PROBLEMS, TIGHT, Benchmark, Measured, comparison
from thermal.crosscheck.rivals import OPTIONAL
from thermal.crosscheck.timing import COMPARABLE
from thermal.report.benchmark_extras import (
    about_sweep,
    question_lines,
    questions_json,
    start_lines,
    sweep_json,
    sweep_table,
)
from thermal.report.text import bullets, columns, paragraph
from thermal.report.versions import versions

NO_CASE = "No case was timed: {path} is not here; name a case file to time it."
HEAD = ["", "time, ms", "error, K", "steps", "rates", "ratio", "to own"]
ABOUT = (
    "P1s: a steel bar of 60 mm with fixed heat under its surface until that is at 1200 °C. P1: the same bar in a field "
    "of 100 kA/m at 3 kHz for 600 s, the field solved anew as it heats.",
    "Time: one thread, BLAS included, best of several turns. Error: largest deviation of surface and "
    f"core, over the whole history, from one run at {TIGHT:g} K. Rates: how often the rates of change were "
    "evaluated, in P1 with a field solution each; for FiPy, solutions of its equations.",
    f"Ratio: time of the rival over that of the own run with the nearest error, given where the two errors are within "
    f"a factor of {COMPARABLE:g}.",
    "The rivals get the own mesh, field solver and surface temperature, so that their errors are those of stepping; "
    "SciPy (solve_ivp) and CVODE (SUNDIALS) integrate temperature with cp(T) from a table in NumPy, banded where they "
    "are told that a cell acts on its neighbours only. The own solver has to find the end of P1s, the rivals know it.",
    "FiPy runs a script as one writes it by hand; `thermal bench --show-fipy` prints it in full.",
)


def benchmark_text(found: Benchmark, absent_case: str | None) -> str:
    """Tables and what they mean; absent_case : path of the usual case where it is not to be found."""
    parts = [f"Processor: {found.processor}\n" + paragraph(f"Versions: {_listed(library_versions(found.missing))}")]
    for each in PROBLEMS:
        rows = [row for row in found.rows if row.problem == each.name]
        table = columns([HEAD, *(_cells(row, found.rows) for row in rows)])
        parts.append(f"{each.name}\n{table}")
    parts.append(sweep_table(found.sweep))
    cold = found.cold
    lines = [
        *start_lines(found.sweep),
        f"Cold start: a fresh interpreter prints a result of P1 after {_ms(cold.p1.seconds)} ms (wall clock), "
        f"{cold.ratio:.1f} times as long as one that only imports NumPy.",
    ]
    if found.case is not None:
        case = found.case
        lines.append(
            f"{case.name}: {_ms(case.timing.seconds)} ms, {case.steps} steps, {case.evaluations} field solves; "
            f"{case.times_p1:.1f} times as long as P1 at 0.1 K."
        )
    lines += question_lines(found.questions)
    if absent_case is not None:
        lines.append(NO_CASE.format(path=absent_case))
    if found.missing:
        lines.append(missing_text(found.missing))
    parts.append(bullets(lines))
    parts.append("\n".join(paragraph(text) for text in (*ABOUT, about_sweep(found.sweep))))
    return "\n\n".join(parts) + "\n"


def missing_text(missing: tuple[str, ...]) -> str:
    """One sentence on libraries that are not installed."""
    are = "is" if len(missing) == 1 else "are"
    return (
        f"{' and '.join(missing)} {are} not installed and left out; "
        "pip install 'workpiece-heating[bench]' brings what is missing."
    )


def benchmark_json(found: Benchmark, absent_case: str | None) -> dict[str, Any]:
    """The same for scripts."""
    case = found.case
    return {
        "processor": found.processor,
        "versions": library_versions(found.missing),
        "blas_threads": 1,
        "rows": [_entry(row, found.rows) for row in found.rows],
        "case": None
        if case is None
        else {
            "name": case.name,
            "time_s": case.timing.seconds,
            "turns": case.timing.turns,
            "steps": case.steps,
            "field_solves": case.evaluations,
            "times_P1_at_0.1_K": case.times_p1,
        },
        "sweep": sweep_json(found.sweep),
        "questions": questions_json(found.questions),
        "cold_start": {
            "P1_s": found.cold.p1.seconds,
            "import_numpy_s": found.cold.numpy.seconds,
            "turns": found.cold.p1.turns,
            "ratio": found.cold.ratio,
        },
        "not_installed": list(found.missing),
        "case_not_found": absent_case,
    }


def library_versions(missing: tuple[str, ...]) -> dict[str, str]:
    """Versions of everything that takes part."""
    return versions() | {name: version(name) for name in OPTIONAL if name not in missing and find_spec(OPTIONAL[name])}


def _entry(row: Measured, rows: tuple[Measured, ...]) -> dict[str, Any]:
    against = None if row.solver == OWN else comparison(row, rows)
    return {
        "problem": row.problem,
        "solver": row.solver,
        "setting": row.setting,
        "time_s": row.timing.seconds,
        "turns": row.timing.turns,
        "error_K": row.error,
        "steps": row.steps,
        "right_hand_sides": row.evaluations,
        "compared_with": None if against is None else against[0].setting,
        "ratio": None if against is None else against[1],
    }


def _cells(row: Measured, rows: tuple[Measured, ...]) -> list[str]:
    against = None if row.solver == OWN else comparison(row, rows)
    return [
        f"{row.solver}, {row.setting}",
        _ms(row.timing.seconds),
        f"{row.error:.2g}" if row.error < 10.0 else f"{row.error:.0f}",
        str(row.steps),
        str(row.evaluations),
        "" if against is None else f"{against[1]:.3g}",
        "" if against is None else against[0].setting,
    ]


def _ms(seconds: float) -> str:
    return f"{1e3 * seconds:.1f}" if seconds < 1.0 else f"{1e3 * seconds:.0f}"


def _listed(found: dict[str, str]) -> str:
    return ", ".join(f"{name} {number}" for name, number in found.items())
