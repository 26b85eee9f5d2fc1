"""The verification table: every row computed here and now by the functions a run calls."""

import time
from collections.abc import Callable, Iterator
from dataclasses import dataclass

from thermal.crosscheck.checks import coil, coupled, field, heat_steady, heat_transient, measured
from thermal.crosscheck.checks.row import Group, Row

PARTS: dict[Group, tuple[Callable[[bool], Iterator[Row]], ...]] = {
    "field": (field.rows,),
    "heat": (heat_transient.rows, heat_steady.rows),
    "coupled": (coupled.rows,),
    "coil": (coil.rows,),
    "measured": (measured.rows,),
}


@dataclass(frozen=True)
class Verification:
    """The table.

    rows ; full : every point or the quick choice ; wall_s : [s] it took.
    """

    rows: tuple[Row, ...]
    full: bool
    wall_s: float

    @property
    def failed(self) -> tuple[Row, ...]:
        """Rows off by more than is allowed."""
        return tuple(row for row in self.rows if not row.passed)


def verify(
    full: bool = False, groups: tuple[Group, ...] = tuple(PARTS), on_row: Callable[[Row], None] | None = None
) -> Verification:
    """Compute the table.

    full : more sizes, times and frequencies ; groups : which parts ; on_row : called after every row (progress).

    Raises
    ------
    NoConvergence, BalanceError : a problem of the table has no solution.
    """
    began = time.perf_counter()
    found: list[Row] = []
    for group in groups:
        of_group: list[Row] = []
        for part in PARTS[group]:
            for row in part(full):
                of_group.append(row)
                if on_row is not None:
                    on_row(row)
        found += sorted(of_group, key=lambda row: row.check.id)
    return Verification(tuple(found), full, time.perf_counter() - began)
