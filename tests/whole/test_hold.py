"""Holding a temperature: hand-over, ringing, limits of the supply, readings inside the section.

A 60 mm C45 bar in its coil, the surface 100 to 300 K ahead of the core at the hand-over. Measured for a hold at the
surface at 1150 °C: dip 3.9 K, within 1 K after 2.2 s, overshoot 0.3 K.
"""

from functools import cache

import numpy as np
import pytest

from thermal.build import build
from thermal.case import from_text
from thermal.interfaces import Array
from thermal.loop import run
from thermal.results.history import History

CASE = """
format = 1
[workpiece]
shape = "cylinder"
diameter = "60 mm"
length = "200 mm"
material = "steel-c45"
surface = "oxidised"
neighbours = "touching"
initial = "{initial} °C"

[coil]
turns = 16
inner_diameter = "90 mm"
length = "220 mm"
tube = "10 mm"

[lining]
thickness = "8 mm"

[supply]
power = "90 kW"
frequency = "2 kHz"
{limits}

[[reading]]
name = "TC"
depth = "10 mm"

[numerics]
tolerance = "{tolerance}"

[[schedule]]
stage = "heat"
drive = {{ supply_power = "{power}" }}
until = {{ {reading} = "{reached} °C" }}
longest = "900 s"

[[schedule]]
stage = "hold"
at = {{ {reading} = "{set_point} °C" }}
duration = "{duration}"
"""


@cache
def held(
    reading: str,
    set_point: float,
    power: str = "80 kW",
    duration: str = "60 s",
    tolerance: str = "0.1 K",
    reached: float | None = None,
    limits: str = "",
) -> History:
    words = CASE.format(
        # Hot stock where the set point allows: the way through the Curie point is no matter here.
        initial=950 if set_point >= 1000.0 else 20,
        reading=reading,
        set_point=set_point,
        reached=set_point if reached is None else reached,
        power=power,
        duration=duration,
        tolerance=tolerance,
        limits=limits,
    )
    history = run(build(from_text(words, ".")))
    assert [record.kind for record in history.stages] == ["heat", "hold"]
    return history


def deviation(history: History, reading: str, set_point: float) -> tuple[Array, Array]:
    """Time since the hand-over [s] and reading minus set point [K], at every step of the hold."""
    hold = history.stage == 1
    return history.time[hold] - history.time[hold][0], history.readings[reading][hold] - 273.15 - set_point


def sign_changes(off: Array) -> int:
    """Of the deviations larger than 0.2 K."""
    return int(np.count_nonzero(np.diff(np.sign(off[np.abs(off) > 0.2]))))


@pytest.mark.parametrize(
    ("reading", "set_point", "power", "reached"),
    [
        ("surface", 1150.0, "80 kW", None),
        ("surface", 1180.0, "80 kW", 1150.0),
        ("surface", 1100.0, "80 kW", 1150.0),
        ("surface", 1000.0, "30 kW", None),
        ("surface", 700.0, "80 kW", None),
        ("surface", 760.0, "80 kW", None),
        ("mean", 1100.0, "80 kW", None),
        ("mean", 600.0, "12 kW", None),
    ],
)
def test_within_a_kelvin_after_five_seconds(reading: str, set_point: float, power: str, reached: float | None) -> None:
    time, off = deviation(held(reading, set_point, power, reached=reached), reading, set_point)
    assert np.abs(off[time >= 5.0]).max() <= 1.0
    assert sign_changes(off) <= 2
    assert np.abs(off[time >= 30.0]).max() <= 0.4


@pytest.mark.parametrize("tolerance", [0.1, 1.0])
@pytest.mark.parametrize(("reading", "set_point", "power"), [("surface", 1150.0, "80 kW"), ("mean", 1000.0, "30 kW")])
def test_long_hold_is_quiet(reading: str, set_point: float, power: str, tolerance: float) -> None:
    # Ten minutes. Once the section has evened out nothing happens any more, whatever the tolerance.
    history = held(reading, set_point, power, duration="600 s", tolerance=f"{tolerance} K")
    time, off = deviation(history, reading, set_point)
    assert np.abs(off[time >= 30.0]).max() <= 0.4
    assert sign_changes(off) <= 2
    # The power is then what the workpiece loses.
    assert history.absorbed_power[-1] == pytest.approx(history.loss_power[-1], rel=5e-3)


def test_steps_of_a_hold() -> None:
    # Not stiff: the step grows far beyond the response of 0.5 s. Measured: 20 to 50 steps for the first minute.
    history = held("surface", 1150.0)
    time, _ = deviation(history, "surface", 1150.0)
    assert time.size <= 60
    assert np.diff(time).max() > 3.0


def test_power_limit_is_kept() -> None:
    # The set point lies 60 K above what has been reached: full power first, noted as the limit it is.
    history = held("surface", 1180.0, reached=1120.0)
    assert history.supply_power.max() <= 90e3 * (1.0 + 1e-5)
    (start, end), *_ = history.stages[1].limits["power"]
    assert start == history.stages[1].start
    assert 0.5 < end - start < 10.0


@pytest.mark.parametrize(("limit", "name"), [("1.8 kA", "current"), ("130 V", "voltage")])
def test_current_and_voltage_limits_are_kept(limit: str, name: str) -> None:
    history = held("surface", 1000.0, limits=f'max_{name} = "{limit}"', reached=970.0)
    found = history.coil_current_rms if name == "current" else history.coil_voltage_rms
    allowed = 1800.0 if name == "current" else 130.0
    assert found.max() <= allowed * (1.0 + 1e-5)
    assert name in history.stages[1].limits
    _, off = deviation(history, "surface", 1000.0)
    assert abs(off[-1]) <= 1.0


def test_no_heat_is_taken_back() -> None:
    # Set point below: the supply is off until the surface has come down, and never negative.
    history = held("surface", 1100.0, reached=1150.0)
    assert history.heat.min() >= 0.0
    assert history.absorbed_power.min() >= 0.0
    hold = history.stage == 1
    assert history.supply_power[hold][0] == 0.0
    assert history.supply_power[hold][-1] > 0.0


@pytest.mark.parametrize("reading", ["core", "TC"])
def test_a_reading_inside_is_held_through_the_surface(reading: str) -> None:
    # The surface is asked for no more than the hottest it has been. On the way the section evens out: what is stored
    # when the supply goes off can not be taken back. Then the reading comes to its set point and stays (measured: core
    # 65 K above after 20 s, within 1 K after 350 s, 0.15 K off after 600 s; TC 7 K above at most).
    set_point = 1000.0
    history = held(reading, set_point, "30 kW", duration="600 s")
    hold = history.stage == 1
    hottest = history.readings["surface"][~hold].max()
    assert history.readings["surface"][hold].max() <= hottest + 0.5
    time, off = deviation(history, reading, set_point)
    lag = history.readings["surface"][~hold][-1] - history.readings[reading][~hold][-1]
    assert off.min() >= -0.1 * lag
    assert off.max() <= lag
    assert np.abs(off[time >= 400.0]).max() <= 1.0
    assert abs(off[-1]) <= 0.3
    assert sign_changes(off) <= 2


def test_a_hold_entered_from_above_does_not_live_on_steps_without_power():
    # The surface is above the set point when the hold begins. Off at the start of a step, the controller must still be
    # in the matrix, or every step of the hold ends without power (350 steps, and 0.2 K too hot).
    case = from_text(
        """
format = 1
[workpiece]
shape = "tube"
outer_diameter = "88.9 mm"
wall = "10 mm"
length = "300 mm"
material = "steel-c45"
surface = "machined"
[coil]
turns = 14
inner_diameter = "125 mm"
length = "340 mm"
tube = "14 mm"
[supply]
power = "20 kW"
frequency = "4 kHz"
[[schedule]]
stage = "heat"
drive = { supply_power = "10 kW" }
until = { mean = "300 °C" }
longest = "300 s"
[[schedule]]
stage = "hold"
at = { surface = "300 °C" }
duration = "120 s"
""",
        ".",
    )
    history = run(build(case))
    late = (history.stage == 1) & (history.time > history.time[-1] - 60.0)
    assert history.steps < 100
    assert np.all(history.absorbed_power[late] > 0.9 * history.loss_power[late])
    assert history.readings["surface"][late] == pytest.approx(573.15, abs=0.01)


def bare_bar(diameter, stages, tolerance="0.1 K"):
    return from_text(
        f"""
format = 1
[workpiece]
shape = "cylinder"
diameter = "{diameter} mm"
length = "200 mm"
material = "stainless-304"
emissivity = 0.8
[numerics]
tolerance = "{tolerance}"
{stages}
""",
        ".",
    )


def test_a_core_hold_never_asks_more_of_the_surface_than_it_has_had():
    stages = """
[[schedule]]
stage = "heat"
drive = { absorbed_power = "20 kW", frequency = "3 kHz" }
until = { surface = "950 °C" }
longest = "900 s"
[[schedule]]
stage = "hold"
at = { core = "945 °C" }
duration = "600 s"
"""
    history = run(build(bare_bar(80, stages)))
    holding = history.stage == 1
    assert history.readings["surface"][holding].max() < 950.0 + 273.15 + 1.0


def test_a_hold_far_below_the_hand_over_uses_the_energy_it_should():
    stages = """
[[schedule]]
stage = "heat"
drive = { absorbed_power = "20 kW", frequency = "3 kHz" }
until = { surface = "1000 °C" }
longest = "900 s"
[[schedule]]
stage = "hold"
at = { surface = "700 °C" }
duration = "300 s"
response = "0.1 s"
reset = "0.2 s"
"""
    # Coarse steps and a nervous controller: without it in the matrix while it is off, 1 % too much; at 3 K, 11 %.
    fine, coarse = (run(build(bare_bar(60, stages, tolerance))) for tolerance in ("0.1 K", "3 K"))

    def held(history):
        absorbed = history.energy["absorbed"]
        return absorbed[-1] - absorbed[np.flatnonzero(history.stage == 1)[0]]

    assert held(coarse) == pytest.approx(held(fine), rel=0.003)
