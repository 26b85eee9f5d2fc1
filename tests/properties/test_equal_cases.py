"""Cases that must have the same answer, or one that follows from the other.

Steps are chosen by measured errors, so two ways to say the same may step differently: then both are as good as the
tolerance of the runs. Where the arithmetic is the same, so must be every step.
"""

import copy
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from whole_cases import BY_COIL, FEW, Document, Draw, Drawn, setup_of, share, whole_cases

from materials.units import quantity
from thermal.loop import run
from thermal.results.history import History

TOLERANCE = 0.1
"""[K] of the runs."""
SAME = 0.5
"""Tolerances between runs that step alike (measured 0.2 in 600)."""
SPLIT = 4.0
"""Tolerances between runs that step differently (measured 3.3 in 400)."""
LONE_HEAT = (("heat",),)
lone_heats = whole_cases(tolerances=(f"{TOLERANCE} K",), refinements=(1,), plans=LONE_HEAT, free=False)


def history_of(document: Document) -> History:
    return run(setup_of(document))


def changed(document: Document, path: str, value: Any) -> Document:
    """A copy of the document with one value set: "workpiece.length", "schedule.0.duration"."""
    made = copy.deepcopy(document)
    here: Any = made
    *way, last = path.split(".")
    for key in way:
        here = here[int(key)] if key.isdecimal() else here[key]
    here[last] = value
    return made


def multiple(text: str, factor: float) -> str:
    """A text with a unit, times a factor."""
    number, unit = text.split(" ", 1)
    return f"{float(number) * factor!r} {unit}"


def largest_difference(one: History, other: History) -> float:
    """[K] between the readings at the end, in tolerances."""
    gaps = [abs(series[-1] - other.readings[name][-1]) for name, series in one.readings.items()]
    return float(max(gaps)) / TOLERANCE


# Names --------------------------------------------------------------------------------------------------------------


def renamed(document: Document) -> Document:
    """Another title, other names of the readings."""

    def anew(value: Any) -> Any:
        if isinstance(value, dict):
            return {key.replace("TC", "probe-"): anew(entry) for key, entry in value.items()}
        if isinstance(value, list):
            return [anew(entry) for entry in value]
        return value.replace("TC", "probe-") if isinstance(value, str) else value

    return {**anew(document), "title": "The same by another name"}


@given(drawn=whole_cases())
@FEW
def test_names_do_not_matter(drawn: Drawn) -> None:
    one, other = history_of(drawn.document), history_of(renamed(drawn.document))
    assert one.status == other.status
    assert np.array_equal(one.time, other.time)
    assert np.array_equal(one.T, other.T)
    assert [record.reason for record in one.stages] == [record.reason for record in other.stages]


# Length -------------------------------------------------------------------------------------------------------------


@given(
    drawn=whole_cases(
        drives=[name for name in BY_COIL if name != "absorbed_power"], plans=LONE_HEAT, refinements=(1,), free=False
    )
)
@FEW
def test_twice_the_length_of_a_row_takes_twice_the_power(drawn: Drawn) -> None:
    # In a coil that is longer than both: its row does not change, only how much of it is one piece.
    document = changed(drawn.document, "workpiece.neighbours", "touching")
    document = changed(document, "workpiece.axis", "horizontal")
    length = document["workpiece"]["length"]
    if "coil" in document:
        document = changed(document, "coil.length", multiple(length, 3.0))
    twice = history_of(changed(document, "workpiece.length", multiple(length, 2.0)))
    once = history_of(document)
    assert twice.T == pytest.approx(once.T, rel=1e-9)
    assert twice.time == pytest.approx(once.time, rel=1e-9)
    assert twice.absorbed_power == pytest.approx(2.0 * once.absorbed_power, rel=1e-9)
    for name, account in once.energy.items():
        assert twice.energy[name] == pytest.approx(2.0 * account, rel=1e-9, abs=1e-9 * once.energy["absorbed"][-1])


# Similar pieces -----------------------------------------------------------------------------------------------------

POWERS_OF_SIZE = {
    "length": 1,
    "time": 2,
    "frequency": -2,
    "heat_transfer": -1,
    "power": 1,
    "current": 1,
    "voltage": 0,
    "magnetic_field": 0,
    "resistance": -1,
    "inductance": 1,
}
"""How every amount goes with size for the same temperatures: fields alike, skin depth and diffusion in proportion."""


def similar(document: Document, size: float) -> Document:
    """The same case, `size` times as large; temperatures and plain numbers as they are."""

    def scaled(value: Any) -> Any:
        match value:
            case dict():
                return {key: scaled(entry) for key, entry in value.items()}
            case list():
                return [scaled(entry) for entry in value]
            case str():
                return _scaled_text(value, size)
            case _:
                return value

    return {name: scaled(table) for name, table in document.items()}


def _scaled_text(text: str, size: float) -> str:
    if " x " in text:
        width, height = text.removesuffix(" mm").split(" x ")
        return f"{float(width) * size!r} x {float(height) * size!r} mm"
    for dimension, power in POWERS_OF_SIZE.items():
        try:
            quantity(text, dimension)
        except ValueError:
            continue
        return multiple(text, size**power)
    return text


@st.composite
def without_radiation(draw: Draw) -> Document:
    """Cases whose losses follow size: a constant coefficient, next to no radiation, no gas in gaps or bores."""
    plans = (("heat",), ("heat", "hold"), ("heat", "heat"))
    document = draw(whole_cases(tolerances=(f"{TOLERANCE} K",), refinements=(1,), plans=plans)).document
    piece = {key: value for key, value in document["workpiece"].items() if key != "surface"}
    document = {key: value for key, value in document.items() if key != "lining"}
    document["workpiece"] = piece | {"emissivity": 1e-9, "neighbours": "touching"}
    document["surroundings"] = {"temperature": "20 °C", "h": f"{draw(share(1.0, 300.0))!r} W/(m2 K)"}
    if "coil" in document:
        document = changed(document, "coil.wall", multiple(document["coil"]["tube"], 0.2))
    for number, stage in enumerate(document["schedule"]):
        if stage["stage"] == "hold":
            document = changed(document, f"schedule.{number}.response", "0.5 s")
            document = changed(document, f"schedule.{number}.reset", "2 s")
    return document


@given(document=without_radiation(), size=st.sampled_from((0.5, 2.0, 3.0)))
@FEW
def test_similar_pieces_have_the_same_temperatures(document: Document, size: float) -> None:
    one, other = history_of(document), history_of(similar(document, size))
    assert one.status == other.status
    assert largest_difference(one, other) <= SAME
    assert other.energy["absorbed"][-1] == pytest.approx(size**3 * one.energy["absorbed"][-1], rel=1e-3)


# One stage or two ---------------------------------------------------------------------------------------------------


def in_two(document: Document, part: float) -> Document:
    (stage,) = document["schedule"]
    first, second = copy.deepcopy(stage), copy.deepcopy(stage)
    first["duration"] = multiple(stage["duration"], part)
    second["duration"] = multiple(stage["duration"], 1.0 - part)
    return {**document, "schedule": [first, second]}


@given(drawn=lone_heats, part=share(0.1, 0.9))
@FEW
def test_one_stage_or_two(drawn: Drawn, part: float) -> None:
    one, two = history_of(drawn.document), history_of(in_two(drawn.document, part))
    assert one.status == two.status
    if one.stages[-1].reason == "too hot":
        # Landing on the liquidus is the least exact of all steps: the heat capacity falls off there.
        assert two.time[-1] == pytest.approx(one.time[-1], rel=1e-2)
    else:
        assert two.time[-1] == pytest.approx(one.time[-1], rel=1e-9)
        assert largest_difference(one, two) <= SPLIT


# A limit or a drive -------------------------------------------------------------------------------------------------

LIMITS = {"coil_current": "max_current", "coil_voltage": "max_voltage", "supply_power": "power"}


def at_the_limit(document: Document) -> Document:
    """A drive that asks for too much, with the limit where the document has its drive."""
    (stage,) = document["schedule"]
    ((asked, value),) = stage["drive"].items()
    limited = changed(document, f"supply.{LIMITS[asked]}", value)
    return changed(limited, "schedule.0.drive", {"surface_field": "10000 kA/m"})


@given(
    drawn=whole_cases(
        drives=tuple(LIMITS), tolerances=(f"{TOLERANCE} K",), refinements=(1,), plans=LONE_HEAT, free=False
    )
)
@FEW
def test_a_limit_that_binds_is_a_drive(drawn: Drawn) -> None:
    driven, limited = history_of(drawn.document), history_of(at_the_limit(drawn.document))
    assert None in driven.limit and None not in limited.limit
    assert driven.status == limited.status
    assert largest_difference(driven, limited) <= SAME
