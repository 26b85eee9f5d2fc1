"""Any valid case loads, and its values come out in SI."""

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from thermal.case import as_run, from_text, with_changes

_millimetres = st.floats(1.0, 500.0).map(lambda value: round(value, 3))


@settings(deadline=None, max_examples=40)
@given(
    diameter=_millimetres,
    gap=st.floats(0.1, 50.0),
    length=_millimetres,
    tube=st.floats(4.0, 20.0),
    turns=st.integers(1, 40),
    kilowatt=st.floats(0.1, 5000.0),
    kilohertz=st.floats(0.05, 400.0),
    celsius=st.floats(30.0, 1300.0),
    seconds=st.floats(0.1, 1e4),
    emissivity=st.floats(0.01, 1.0),
    share=st.floats(0.0, 1.0),
)
def test_random_case(
    diameter: float,
    gap: float,
    length: float,
    tube: float,
    turns: int,
    kilowatt: float,
    kilohertz: float,
    celsius: float,
    seconds: float,
    emissivity: float,
    share: float,
) -> None:
    text = f"""
format = 1
[workpiece]
shape = "cylinder"
diameter = "{diameter!r} mm"
length = "{length!r} mm"
material = "steel-c45"
emissivity = {emissivity!r}
[coil]
turns = {turns}
inner_diameter = "{diameter + 2 * gap!r} mm"
length = "{turns * tube!r} mm"
tube = "{tube!r} mm"
[supply]
power = "{kilowatt!r} kW"
frequency = "{kilohertz!r} kHz"
[[schedule]]
stage = "heat"
drive = {{ supply_power = "{kilowatt!r} kW" }}
until = {{ TC = "{celsius!r} °C" }}
longest = "{seconds!r} s"
[[reading]]
name = "TC"
depth = "{share * diameter / 2!r} mm"
"""
    case = from_text(text, ".")
    assert case.workpiece.section == pytest.approx(diameter / 2e3)
    assert case.workpiece.length == pytest.approx(length / 1e3)
    assert case.coil is not None and case.supply is not None
    assert case.coil.bore == pytest.approx(2 * ((diameter + 2 * gap) / 1e3,))
    assert case.coil.length >= case.coil.turns * case.coil.tube * (1 - 1e-9)
    assert case.supply.power == pytest.approx(kilowatt * 1e3)
    assert case.frequency(0) == pytest.approx(kilohertz * 1e3)
    heat = case.schedule[0]
    assert heat.stage == "heat" and heat.until is not None
    assert heat.until.targets == pytest.approx({"TC": celsius + 273.15})
    assert heat.longest == pytest.approx(seconds)
    assert 0.0 <= case.readings[0].depth <= case.workpiece.section * (1 + 1e-9)
    doubled = with_changes(case, {"supply.power": f"{2 * kilowatt!r} kW"})
    assert from_text(as_run(doubled), ".").supply == doubled.supply
