"""What a question answers: a sentence first, then a table, then the numbers behind it."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Generic, TypeVar

from thermal.loop import run
from thermal.results.history import History
from thermal.results.verdict import celsius, power_unit
from thermal.setup import Setup

Result = TypeVar("Result", covariant=True)

Value = float | str | bool | None | list["Value"] | dict[str, "Value"]
"""What JSON can hold."""


@dataclass(frozen=True)
class Table:
    """heading ; rows : of texts, the first one the heads of the columns, the first of each the label of the row."""

    heading: str
    rows: tuple[tuple[str, ...], ...]


@dataclass(frozen=True)
class Answer(Generic[Result]):
    """The answer to a question about a case.

    question : "time", "peak", "compare" or "frequency" ; sentence : the answer in words ; tables ; values : name with
    its unit -> number or text, what scripts may rely on ; met : False where a target cannot be reached or the piece
    would melt (exit code 3) ; notes : what the reader should know besides ; setup : of the case as it was asked, with
    its assumptions ; pieces : every workpiece the answer is about and the hottest it gets [K] ; result : the arrays
    behind it.
    """

    question: str
    sentence: str
    tables: tuple[Table, ...]
    values: Mapping[str, Value]
    met: bool
    notes: tuple[str, ...]
    setup: Setup
    pieces: tuple[tuple[Setup, float], ...]
    result: Result


def full_run(setup: Setup) -> History:
    """A run for an answer: interrupted, there is none.

    Raises
    ------
    NoConvergence, BalanceError : see run.
    KeyboardInterrupt : interrupted.
    """
    history = run(setup)
    if history.status == "interrupted":
        raise KeyboardInterrupt
    return history


def of_a_row(setup: Setup) -> tuple[str, ...]:
    """A note where the workpiece is one of several in the coil."""
    if setup.share >= 1.0:
        return ()
    return (
        "One piece of a row: what is absorbed, lost or per tonne is of this piece; supply and coil figures are of the "
        f"whole coil, of which this piece takes {100.0 * setup.share:.1f} %.",
    )


def owned(label: str, setup: Setup, *, coil: bool) -> str:
    """The label of a power, with what it is of where the workpiece is one of several in the coil."""
    return label if setup.share >= 1.0 else f"{label} ({'whole coil' if coil else 'this piece'})"


def power_row(label: str, watts: Sequence[float], largest: float) -> tuple[str, ...]:
    """Powers [W] in the unit that fits the largest of all rows that belong together."""
    unit, size = power_unit(largest)
    digits = 1 if size == 1.0 else 2
    # + 0.0: no minus before nothing
    return (f"{label}, {unit}", *(f"{round(each / size, digits) + 0.0:.{digits}f}" for each in watts))


def kelvins(difference: float) -> str:
    """A spread [K] in a table."""
    return f"{round(float(difference)):+d}"


def burnt(setup: Setup, hottest: float) -> str | None:
    """What becomes of a piece whose hottest point [K] lies above the solidus, None where it does not."""
    solidus = setup.material.solidus
    if solidus is None or hottest <= solidus:
        return None
    return f"the hottest point passes the solidus {celsius(solidus)}: the piece burns or melts there"
