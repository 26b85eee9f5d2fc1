"""One row of the verification table, and what it has in common with its neighbours."""

import math
from dataclasses import dataclass
from typing import Literal

Group = Literal["field", "heat", "coupled", "coil", "measured"]

PUBLISHED_MU_0 = 4e-7 * math.pi
"""Magnetic constant the expected figures were computed with [H/m]; the problems are posed with it, never with that of
the tool, or an error there would move both sides alike. CODATA 2018 is 5.5e-10 below."""


@dataclass(frozen=True)
class Check:
    """What rows of one kind share.

    id : case of the verification table ; group ; meaning : in words, for a reader who heats metal ; function : dotted
    name of what computed it ; grid : mesh and tolerance in words ; source : of the expected figures ; in_runs : False
    for a closed form that no run calls yet.
    """

    id: str
    group: Group
    meaning: str
    function: str
    grid: str
    source: str
    in_runs: bool = True

    def relative(self, quantity: str, expected: float, got: float, unit: str, allowed: float) -> "Row":
        """A row whose error counts as a share of the expected value."""
        return Row(self, quantity, expected, float(got), unit, allowed, True)

    def absolute(self, quantity: str, expected: float, got: float, unit: str, allowed: float) -> "Row":
        """A row whose error counts in its own unit."""
        return Row(self, quantity, expected, float(got), unit, allowed, False)


@dataclass(frozen=True)
class Row:
    """One comparison.

    quantity : in words ; expected, got : in unit ("-" for a ratio) ; allowed : largest error, a share of the expected
    value where relative, else in unit.
    """

    check: Check
    quantity: str
    expected: float
    got: float
    unit: str
    allowed: float
    relative: bool

    @property
    def error(self) -> float:
        """How far off, measured as `allowed` is."""
        off = abs(self.got - self.expected)
        return off / abs(self.expected) if self.relative else off

    @property
    def passed(self) -> bool:
        """Whether the error is allowed; a value that is not a number never is."""
        return self.error <= self.allowed
