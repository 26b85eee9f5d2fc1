"""Fair times: everything has its turn in every round, and times are compared at errors that can be compared.

What else the machine does then hits all alike.
"""

import math
import sys
import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Generic, TypeVar

COMPARABLE = 2.0
"""Two times are compared where the errors differ by no more than this factor."""

CLOCK = time.perf_counter if sys.platform == "win32" else time.process_time
"""Processor time, which other work on the machine leaves alone; wall-clock time where that ticks too coarsely."""

Announce = Callable[[str], None]
Result = TypeVar("Result")


@dataclass(frozen=True)
class Effort:
    """How often everything has its turn, unless it has taken so long already [s]."""

    rounds: int
    patience: float


@dataclass(frozen=True)
class Timing:
    """Best time [s] of so many turns."""

    seconds: float
    turns: int


@dataclass(frozen=True)
class Entrant(Generic[Result]):
    """Something to be timed, in words and as work to be done anew at every call."""

    solver: str
    setting: str
    work: Callable[[], Result]


def time_all(entrants: Sequence[Entrant[Result]], effort: Effort, announce: Announce) -> list[tuple[Timing, Result]]:
    """Best times of entrants that have their turns one after the other, and what they came to."""
    best = [math.inf] * len(entrants)
    spent = [0.0] * len(entrants)
    turns = [0] * len(entrants)
    outcomes: list[Result] = []
    for number in range(effort.rounds):
        for i, entrant in enumerate(entrants):
            if spent[i] > effort.patience:
                continue
            if number == 0:
                announce(f"{entrant.solver}, {entrant.setting}")
            began = CLOCK()
            outcome = entrant.work()
            took = CLOCK() - began
            if number == 0:
                outcomes.append(outcome)
            best[i] = min(best[i], took)
            spent[i] += took
            turns[i] += 1
    return [(Timing(*each), outcome) for each, outcome in zip(zip(best, turns, strict=True), outcomes, strict=True)]


def nearest_in_error(error: float, others: Sequence[float]) -> int | None:
    """Place of the error nearest to one by ratio; None where even that differs by more than a factor of two."""
    place = min(range(len(others)), key=lambda i: abs(math.log(others[i] / error)))
    nearest = others[place]
    return place if max(nearest, error) <= COMPARABLE * min(nearest, error) else None
