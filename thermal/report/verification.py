"""The verification table as text and as JSON."""

from itertools import groupby

from thermal.crosscheck.checks.row import Group, Row
from thermal.crosscheck.verify import Verification
from thermal.report.text import bullets, columns, indented, paragraph
from thermal.report.versions import own_version

WIDEST_LABEL = 42
HEADINGS: dict[Group, str] = {
    "field": "Field: eddy currents in the workpiece",
    "heat": "Heat: conduction, radiation, convection and latent heat in the section",
    "coupled": "Field and heat together",
    "coil": "Coil: inductance, copper, and the workpiece as its terminals see it",
    "measured": "Measured: field inside non-magnetic metal at room temperature",
}
INTRODUCTION = (
    "What this program computes against what is known: closed solutions, published figures, measurements. Every row "
    "is computed now, by the functions a run calls unless it says otherwise."
)
NOT_VERIFIED = (
    "Nothing measured covers saturation, the fall of power at the Curie point, or a piece heated by induction with its "
    "temperature over time: no public record was found that gives power or current, frequency, sizes and temperatures "
    "together. The measured rows are non-magnetic metal, with the conductivity fitted, and see no error below a few "
    "per cent.",
    "Not in this table: the numbers of the materials and surfaces, convection of gases, the coil lining, the ends of "
    "coil and piece, heat along the length. It shows that the equations are solved rightly, not that they describe "
    "your piece; the README says what to expect of that.",
)


def verification_text(result: Verification) -> str:
    """The table in groups, what fails, what is not verified, and how many rows in what time."""
    sources = list(dict.fromkeys(row.check.source for row in result.rows))
    parts = [paragraph(INTRODUCTION)]
    for group, rows in groupby(result.rows, lambda row: row.check.group):
        parts.append(_group(group, list(rows), sources))
    if result.failed:
        parts.append(f"These rows FAIL\n{bullets([_failure(row) for row in result.failed])}")
    numbered = [f"[{number}] {source}" for number, source in enumerate(sources, start=1)]
    parts.append("Expected figures from\n" + bullets(numbered))
    parts.append(f"Not verified\n{bullets(NOT_VERIFIED)}")
    parts.append(paragraph(_hint(result)))
    parts.append(_count(result))
    return "\n\n".join(parts) + "\n"


def verification_json(result: Verification) -> dict[str, object]:
    """The table with function, grid and source of every row."""
    return {
        "version": own_version(),
        "full": result.full,
        "passed": len(result.rows) - len(result.failed),
        "failed": len(result.failed),
        "wall_s": round(result.wall_s, 3),
        "not_verified": list(NOT_VERIFIED),
        "rows": [_entry(row) for row in result.rows],
    }


def _entry(row: Row) -> dict[str, object]:
    return {
        "id": row.check.id,
        "group": row.check.group,
        "meaning": row.check.meaning,
        "quantity": row.quantity,
        "function": row.check.function,
        "used_by_runs": row.check.in_runs,
        "grid": row.check.grid,
        "expected": row.expected,
        "got": row.got,
        "unit": row.unit,
        "error": row.error,
        "allowed": row.allowed,
        "error_is": "relative" if row.relative else "absolute",
        "passed": row.passed,
        "source": row.check.source,
    }


def _group(group: Group, rows: list[Row], sources: list[str]) -> str:
    """Heading and rows, over each kind of row its meaning and its source; the columns of the group are aligned."""
    head = ["", "expected", "got", "error / allowed"]
    cells = [_cells(row) for row in rows]
    if not all(row.passed for row in rows):
        head.append("")
        cells = [[*line, "" if row.passed else "FAILS"] for row, line in zip(rows, cells, strict=True)]
    widths = [max(len(line[column]) for line in [head, *cells]) for column in range(len(head))]

    def aligned(lines: list[list[str]]) -> str:
        padded = [[line[0].ljust(widths[0]), *map(str.rjust, line[1:], widths[1:])] for line in lines]
        return columns(padded, WIDEST_LABEL)

    told = [HEADINGS[group], aligned([head])]
    for check, kind in groupby(zip(rows, cells, strict=True), lambda pair: pair[0].check):
        number = sources.index(check.source) + 1
        told.append(paragraph(f"{check.id}  {check.meaning} [{number}]"))
        told.append(indented(f"by {check.function}; {check.grid}"))
        told.append(aligned([line for _, line in kind]))
    return "\n".join(told)


def _cells(row: Row) -> list[str]:
    unit = "" if row.unit == "-" else f", {row.unit}"
    return [f"  {row.quantity}{unit}", f"{row.expected:.6g}", f"{row.got:.6g}", _error(row)]


def _error(row: Row) -> str:
    if not row.relative:
        unit = {"-": "", "°C": " K"}.get(row.unit, f" {row.unit}")
        return f"{row.error:.2g} / {row.allowed:.2g}{unit}"
    if row.allowed < 1e-5:
        return f"{row.error:.1g} / {row.allowed:.1g}"
    error = "<0.001" if row.error < 1e-5 else f"{100.0 * row.error:.2g}"
    return f"{error} / {100.0 * row.allowed:g} %"


def _failure(row: Row) -> str:
    unit = "" if row.unit == "-" else f" {row.unit}"
    return (
        f"{row.check.id}, {row.quantity}: {row.got:.8g}{unit} instead of {row.expected:.8g}{unit}, error over allowed "
        f"{_error(row)} ({row.check.function})"
    )


def _hint(result: Verification) -> str:
    if result.full:
        return "`--json` gives every row in full."
    return "`thermal verify --full` takes more sizes, times and frequencies; `--json` gives every row in full."


def _count(result: Verification) -> str:
    total, failed = len(result.rows), len(result.failed)
    measured = sum(row.check.group == "measured" for row in result.rows)
    formulas = sum("no grid" in row.check.grid for row in result.rows)
    solved = total - measured - formulas
    kinds = f"{solved} solved on a grid, {formulas} formulas evaluated, {measured} against measurements"
    verdict = f"All {total} rows agree" if not failed else f"{failed} of {total} rows FAIL"
    return paragraph(f"{verdict} ({kinds}); {result.wall_s:.1f} s.")
