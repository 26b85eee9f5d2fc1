"""What the second engine says to a run, as plain text."""

from thermal.constants import ZERO_CELSIUS
from thermal.crosscheck.fipy_heat import (
    ALLOWED,
    ALLOWED_SHARE,
    FIRST_ORDER,
    READINGS,
    SecondEngine,
)
from thermal.report.text import bullets, columns, paragraph
from thermal.results.verdict import celsius, seconds

OWN = (
    "Done again there: grid, enthalpy table, time steps, surface temperatures, energy accounts. Its heat is that of "
    "the run, straight in time between two records and scaled to the energy booked for each step."
)
NOT_CHECKED = (
    "Not checked by it: the heat in the section (eddy currents, coil, supply and control), the formulas of the losses "
    "and the material data; both engines use the same."
)


def second_engine_text(result: SecondEngine) -> str:
    """Verdict, differences, how they were found, and what they do not say."""
    parts = [
        result.title,
        paragraph(_verdict(result)),
        "Largest difference, run minus second engine\n" + _largest(result),
        "Difference at the end of each stage, K\n" + _ends(result),
        "How the second engine got there\n" + _passes(result),
        bullets([_order(result), _lost(result), OWN, NOT_CHECKED]),
    ]
    return "\n\n".join(parts) + "\n"


def _verdict(result: SecondEngine) -> str:
    worst = result.worst
    told = (
        f"{abs(worst.difference):.2f} K ({worst.reading} at {seconds(worst.time)}, {worst.stage}, at "
        f"{celsius(worst.T)}); {result.allowed:.1f} K are allowed ({ALLOWED:g} K and {100.0 * ALLOWED_SHARE:g} % of "
        f"the rise of {result.rise:.0f} K)"
    )
    engine = f"The second engine, FiPy {result.version},"
    if result.agrees:
        return f"{engine} agrees with the temperatures of the run within {told}."
    return f"{engine} DOES NOT AGREE with the temperatures of the run: they differ by {told}."


def _largest(result: SecondEngine) -> str:
    rows = [["", "K", "at, s", "in", "there, °C"]]
    for each in result.largest:
        reading = f"{each.T - ZERO_CELSIUS:.0f}"
        rows.append([each.reading, f"{each.difference:+.2f}", f"{each.time:.2f}", each.stage, reading])
    return columns(rows)


def _ends(result: SecondEngine) -> str:
    rows = [["", *(each.stage for each in result.ends)]]
    rows.append(["time, s", *(f"{each.time:.2f}" for each in result.ends)])
    rows += [[name, *(f"{each.difference[name]:+.3f}" for each in result.ends)] for name in READINGS]
    return columns(rows)


def _passes(result: SecondEngine) -> str:
    def row(label: str, show: str, pick: str) -> list[str]:
        return [label, *(format(getattr(each, pick), show) for each in result.passes)]

    rows = [
        ["", "steps", "half steps"],
        row("time steps", "d", "steps"),
        row("sweeps", "d", "sweeps"),
        row("most sweeps in one step", "d", "most_sweeps"),
        row("largest difference before extrapolation, K", ".2f", "raw"),
        row("its energy accounts close within", ".0e", "closure"),
        row("time taken, s", ".1f", "wall_s"),
    ]
    return columns(rows)


def _order(result: SecondEngine) -> str:
    low, high = FIRST_ORDER
    told = f"Half the step brings the difference before extrapolation down {result.ratio:.2f} times"
    if result.first_order:
        return f"{told}, about 2 as it must ({low:g} to {high:g}): the extrapolation to no step at all holds."
    return (
        f"{told}, not about 2 ({low:g} to {high:g}): its step is not all that shows in it. Take the differences above "
        f"as good to {result.passes[1].raw:.2f} K, that at half the step."
    )


def _lost(result: SecondEngine) -> str:
    run, second = result.lost
    cells = f"{result.cells[1]} cells against {result.cells[0]} of the run"
    return f"Heat lost: {run / 1e3:.5g} kJ in the run, {second / 1e3:.5g} kJ by the second engine, on {cells}."
