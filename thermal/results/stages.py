"""Where the stages of a run ended, when limits bound and when the power was off."""

from dataclasses import dataclass

import numpy as np

from thermal.case.naming import numbered
from thermal.results.history import Array, History, StageRecord
from thermal.setup import Setup

Span = tuple[float, float]


@dataclass(frozen=True)
class StageEnd:
    """One stage that was begun.

    number : in the schedule ; name : its kind, numbered where the kind occurs more than once ; record : as it
    happened, with the reason "interrupted" where it did not come to its end ; last : index of its last step.
    """

    number: int
    name: str
    record: StageRecord
    last: int


def stage_ends(setup: Setup, history: History) -> tuple[StageEnd, ...]:
    """Every stage that was begun, in order."""
    names = stage_names(setup)
    ends = []
    for number in range(int(history.stage[-1]) + 1):
        steps = np.flatnonzero(history.stage == number)
        if number < len(history.stages):
            record = history.stages[number]
        else:
            start, end = float(history.time[steps[0]]), float(history.time[steps[-1]])
            met = setup.stages[number].stop is None
            record = StageRecord(setup.stages[number].kind, start, end, "interrupted", met, {})
        ends.append(StageEnd(number, names[number], record, int(steps[-1])))
    return tuple(ends)


def stage_names(setup: Setup) -> tuple[str, ...]:
    """Kind of every planned stage, with a running number where the kind occurs more than once."""
    return numbered([stage.kind for stage in setup.stages])


def limit_spans(history: History) -> dict[str, list[Span]]:
    """Limit of the supply -> spans [s] in which it bound, joined across stages."""
    found: dict[str, list[Span]] = {}
    for name in dict.fromkeys(limit for limit in history.limit if limit is not None):
        bound = np.array([limit == name for limit in history.limit])
        found[name] = _joined(history, bound)
    return found


def off_spans(history: History) -> list[Span]:
    """Spans [s] without power."""
    return _joined(history, history.absorbed_power <= 0.0)


def time_above(time: Array, values: Array, level: float) -> float:
    """How long [s] a series (s,), straight between its points, lies above a level."""
    over = values - level
    before, after = over[:-1], over[1:]
    width = np.maximum(np.abs(before) + np.abs(after), np.finfo(float).tiny)
    share = (np.maximum(before, 0.0) + np.maximum(after, 0.0)) / width
    return float(np.sum(np.diff(time) * share))


def first_crossing(time: Array, values: Array, level: float) -> float | None:
    """First moment [s] a series (s,), straight between its points, lies above a level; None where it never does."""
    above = np.flatnonzero(values > level)
    if above.size == 0:
        return None
    i = int(above[0])
    if i == 0 or values[i] == values[i - 1]:
        return float(time[i])
    return float(time[i - 1] + (time[i] - time[i - 1]) * (level - values[i - 1]) / (values[i] - values[i - 1]))


def _joined(history: History, holds: np.typing.NDArray[np.bool_]) -> list[Span]:
    """Spans of the steps at whose end something holds."""
    spans: list[Span] = []
    for i in np.flatnonzero(holds & (history.step > 0.0)):
        start, end = float(history.time[i] - history.step[i]), float(history.time[i])
        if spans and start - spans[-1][1] < 1e-9 * max(end, 1.0):
            spans[-1] = (spans[-1][0], end)
        else:
            spans.append((start, end))
    return spans
