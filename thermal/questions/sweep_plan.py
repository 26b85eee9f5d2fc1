"""The grid of a sweep: axes as a user writes them, and the runs they make."""

import math
import random
import re
from collections.abc import Sequence
from dataclasses import dataclass

from materials.errors import UnitError
from materials.units import dimension_of, display, quantity
from thermal.case import Case, with_changes
from thermal.errors import CaseError

RUNS_AT_MOST = 100_000
"""Largest grid; more is a slip of the pen."""
TRIED = 100
"""Runs that are looked at for a valid one before anything is computed."""
EXAMPLE = 'write for example --over "supply.power=40 kW:120 kW:9" or --over "workpiece.material=steel-c45,copper"'

_NUMBER = re.compile(r"([+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)\s*(.*)")
_OPENING, _CLOSING, _QUOTES = "{[(", "}])", "\"'"


@dataclass(frozen=True)
class Axis:
    """One value of a case that takes several values in turn.

    path : dotted, as for --set ; values : texts, as they are set in the case ; numbers : the same as plain numbers in
    `unit`, None where they are not all numbers of one unit ; unit : as the user wrote it ; logarithmic : equal ratios.
    """

    path: str
    values: tuple[str, ...]
    numbers: tuple[float, ...] | None
    unit: str
    logarithmic: bool = False


def axis_of(text: str) -> Axis:
    """An axis from its text.

    Parameters
    ----------
    text : str
        "path=from:to:n" for n values in equal steps, "path=from:to:n:log" in equal ratios, "path=a,b,c" one by one.

    Raises
    ------
    CaseError
        The text is none of these, or the ends of a range do not go together.

    >>> axis_of("supply.power=40 kW:120 kW:5").values
    ('40 kW', '60 kW', '80 kW', '100 kW', '120 kW')
    >>> axis_of("supply.frequency=500 Hz:8 kHz:5:log").values
    ('500 Hz', '1000 Hz', '2000 Hz', '4000 Hz', '8000 Hz')
    """
    path, equals, given = (part.strip() for part in text.partition("="))
    if not (equals and path and given):
        raise _refused(f"'{text}' is not path=values, {EXAMPLE}")
    ends = _split(given, ":")
    axis = _listed(path, _split(given, ",")) if len(ends) == 1 else _range(path, ends)
    if len(set(axis.numbers or axis.values)) < len(axis.values):
        raise _refused(f"{path}: a value is there twice in {given}")
    return axis


def demand_axes(axes: Sequence[Axis]) -> None:
    """Refuse axes that get in each other's way, and grids beyond all reason.

    Raises
    ------
    CaseError
        No axis, two on the same value or on a table and a value inside it, too many runs.
    """
    if not axes:
        raise _refused(f"is missing, {EXAMPLE}")
    for i, axis in enumerate(axes):
        for other in axes[:i]:
            short, long = sorted((axis.path, other.path), key=len)
            if short == long:
                raise _refused(f"{short}: there are two axes on it")
            if long.startswith(f"{short}."):
                raise _refused(f"{long} lies inside {short}, leave one of the two axes out")
    if (count := grid_size(axes)) > RUNS_AT_MOST:
        raise _refused(f"the axes make {count} runs, at most {RUNS_AT_MOST} are accepted")


def demand_some_valid(case: Case, axes: Sequence[Axis]) -> None:
    """Refuse a sweep without a single valid case, as one with a wrong path or unit; wrong combinations may occur.

    Raises
    ------
    CaseError
        The mistakes of the first run, where it and a random hundred of the others are all wrong.
    """
    count = grid_size(axes)
    others = random.Random(0).sample(range(2, count + 1), min(TRIED, count - 1))
    first: CaseError | None = None
    for run in (1, *others):
        try:
            with_changes(case, changes_of(axes, run))
        except CaseError as error:
            first = first or error
        else:
            return
    assert first is not None
    raise _refused(*(without_place(problem) for problem in first.problems))


def grid_size(axes: Sequence[Axis]) -> int:
    """Number of runs of the full grid."""
    return math.prod(len(axis.values) for axis in axes)


def values_of(axes: Sequence[Axis], run: int) -> tuple[str, ...]:
    """Values of all axes in a run, counted from 1; the last axis changes from run to run."""
    places = []
    rest = run - 1
    for axis in reversed(axes):
        rest, place = divmod(rest, len(axis.values))
        places.append(axis.values[place])
    return tuple(reversed(places))


def changes_of(axes: Sequence[Axis], run: int) -> dict[str, str]:
    """Dotted path -> value of a run."""
    return dict(zip((axis.path for axis in axes), values_of(axes, run), strict=True))


def without_place(problem: str) -> str:
    """A mistake of a changed case without the line of the file or the option that it is shown with."""
    return re.sub(r"^(--set|line \d+)\s+", "", problem)


def _range(path: str, ends: list[str]) -> Axis:
    if len(ends) not in (3, 4) or (len(ends) == 4 and ends[3] != "log"):
        raise _refused(f"{path}: '{':'.join(ends)}' is not a range, write from:to:n or from:to:n:log")
    if not ends[2].isdecimal() or not 2 <= int(ends[2]) <= RUNS_AT_MOST:
        raise _refused(f"{path}: '{ends[2]}' is not a number of values, write a whole number from 2 to {RUNS_AT_MOST}")
    parts = [_NUMBER.fullmatch(end) for end in ends[:2]]
    if (bad := next((end for end, part in zip(ends, parts, strict=False) if part is None), None)) is not None:
        raise _refused(f"{path}: '{bad}' is not a number with a unit, write the values one by one: {path}=a,b,c")
    (first, last), unit = _in_one_unit(path, [part.groups() for part in parts if part is not None])
    logarithmic = len(ends) == 4
    if logarithmic and (first <= 0.0 or last <= 0.0):
        raise _refused(f"{path}: a range in equal ratios needs two ends above zero")
    if logarithmic and unit not in ("", "K") and _dimension(path, unit) == "temperature":
        raise _refused(f"{path}: a ratio of temperatures in {unit} has no meaning, write them in K or without log")
    count = int(ends[2])
    shares = [i / (count - 1) for i in range(count)]
    if logarithmic:
        exact = [first * (last / first) ** share for share in shares]
    else:
        exact = [first + (last - first) * share for share in shares]
    texts = [f"{value:.10g}" for value in exact]
    return Axis(path, tuple(f"{text} {unit}".strip() for text in texts), tuple(map(float, texts)), unit, logarithmic)


def _listed(path: str, values: list[str]) -> Axis:
    if "" in values:
        raise _refused(f"{path}: a value is empty in '{','.join(values)}'")
    parts = [_NUMBER.fullmatch(value) for value in values]
    try:
        numbers, unit = _in_one_unit(path, [part.groups() for part in parts if part is not None])
    except CaseError:
        # Not numbers of one kind: that is for the case to judge, run by run.
        return Axis(path, tuple(values), None, "")
    if len(numbers) < len(values):
        return Axis(path, tuple(values), None, "")
    return Axis(path, tuple(values), tuple(numbers), unit)


def _in_one_unit(path: str, parts: Sequence[Sequence[str]]) -> tuple[list[float], str]:
    """Numbers in the unit of the first one."""
    if not parts:
        return [], ""
    unit = parts[0][1]
    dimension = _dimension(path, unit) if unit else ""
    found = []
    for number, own in parts:
        if own == unit:
            found.append(float(number))
            continue
        if not (own and unit):
            raise _refused(f"{path}: write the unit at every value, '{number}{f' {own}' if own else ''}' has another")
        if _dimension(path, own) != dimension:
            raise _refused(f"{path}: {own} and {unit} are units of different things")
        found.append(float(f"{display(quantity(f'{number} {own}', dimension), unit):.12g}"))
    return found, unit


def _dimension(path: str, unit: str) -> str:
    try:
        return dimension_of(unit)
    except UnitError as error:
        raise _refused(f"{path}: {error}") from None


def _split(text: str, mark: str) -> list[str]:
    """Parts between marks that stand outside brackets and quotes, stripped."""
    parts, depth, quote = [""], 0, ""
    for letter in text:
        if quote:
            quote = "" if letter == quote else quote
        elif letter in _QUOTES:
            quote = letter
        else:
            depth += (letter in _OPENING) - (letter in _CLOSING)
        if letter == mark and depth == 0 and not quote:
            parts.append("")
        else:
            parts[-1] += letter
    return [part.strip() for part in parts]


def _refused(*sentences: str) -> CaseError:
    return CaseError(*(f"{'--over':<9}{sentence}" for sentence in sentences))
