"""The frequency window against closed forms."""

import numpy as np
import pytest
from tiny_materials import constant_material

from thermal.case import from_text, load_case
from thermal.case.starter import starter
from thermal.eddy.exact import surface_core_factor
from thermal.errors import CaseError
from thermal.questions.frequency import GOOD, HIGH, TOO_LOW, frequency_window

ZERO = 273.15
HOT_STEEL = 1.22e-6


def section(folder, shape, frequency, resistivity=HOT_STEEL, conductivity=30.0):
    (folder / "constant.toml").write_text(constant_material(conductivity, resistivity), encoding="utf-8")
    return from_text(
        f"""
format = 1
[workpiece]
{shape}
length = "100 mm"
material = "constant.toml"
emissivity = 1e-9
neighbours = "touching"
initial = "20 °C"
[surroundings]
temperature = "20 °C"
h = "0 W/(m2 K)"
[[schedule]]
stage = "heat"
drive = {{ absorbed_power = "10 kW", frequency = "{frequency} Hz" }}
until = {{ mean = "1200 °C" }}
""",
        folder,
    )


def bar(diameter):
    return f'shape = "cylinder"\ndiameter = "{diameter} mm"'


# D/delta 3.5567 = 2 x 1.778372774, the maximum of Phi(xi)/xi (Davies, Conduction and induction heating, 1990, ch. 9,
# evaluated): 1.22 uohm m 9773, 1564 and 391 Hz for 20, 50 and 100 mm; 0.085 uohm m and 100 mm 27.2 Hz.
@pytest.mark.parametrize(
    ("diameter", "resistivity", "limit"),
    [(20, HOT_STEEL, 9773.0), (50, HOT_STEEL, 1564.0), (100, HOT_STEEL, 391.0), (100, 8.5e-8, 27.2)],
)
def test_energy_per_cycle_peaks_where_the_closed_form_says(tmp_path, diameter, resistivity, limit):
    window = frequency_window(section(tmp_path, bar(diameter), 1000, resistivity)).result
    assert window.cancelling == pytest.approx(limit, rel=0.01)
    assert window.closed_form == pytest.approx(limit, rel=2e-3)


def test_energy_per_cycle_of_a_plate(tmp_path):
    # thickness/delta 2.254172516, the maximum of F(nu)/nu, F = (sinh nu - sin nu)/(cosh nu + cos nu) (Lupi,
    # Fundamentals of electroheat, 2017, ch. 6, evaluated).
    case = section(tmp_path, 'shape = "plate"\nthickness = "20 mm"\nwidth = "2000 mm"', 1000)
    window = frequency_window(case).result
    depth = 0.020 / 2.254172516
    assert window.cancelling == pytest.approx(HOT_STEEL / (np.pi * 4e-7 * np.pi * depth**2), rel=0.01)


def test_spread_of_even_heating_is_that_of_the_regular_regime(tmp_path):
    # T_surface - T_core = K q a/(2 k), K of the tables of exact.surface_core_factor (CP-01: 0.5366625065 at a/delta 2).
    case = section(tmp_path, bar(50), 1000)
    window = frequency_window(case).result
    q = 10e3 / (np.pi * 0.05 * 0.1)
    expected = surface_core_factor(window.size_over_depth / 2.0) * q * 0.025 / (2.0 * 30.0)
    assert window.spread == pytest.approx(expected, rel=5e-3)
    at_two = float(np.interp(4.0, window.size_over_depth, window.spread))
    assert at_two == pytest.approx(0.5366625065 * q * 0.025 / 60.0, rel=5e-3)


def test_efficiency_spread_and_voltage_rise_with_frequency():
    window = frequency_window(load_case("cases/billet_forging.toml")).result
    assert np.all(np.diff(window.spread) > -0.02)
    inside = window.frequency < window.upper
    assert np.all(np.diff(window.efficiency[inside]) > -2e-3)
    assert window.efficiency[-1] > window.efficiency[0] + 0.5
    above = window.frequency > window.lower
    assert np.all(np.diff(window.voltage[above]) > 0.0)


def test_zones_in_order():
    window = frequency_window(load_case("cases/billet_forging.toml")).result
    assert [window.zone(f) for f in (0.5 * window.lower, 1.5 * window.lower, 2.0 * window.upper)] == [
        TOO_LOW,
        GOOD,
        HIGH,
    ]
    # 6 to 10 skin depths are the usual upper end for a bar (common practice).
    end = np.interp(np.log(window.upper), np.log(window.frequency), window.size_over_depth)
    assert 6.0 < end < 10.0


@pytest.mark.parametrize("kind", ["tube", "plate", "heater"])
def test_every_starter_has_a_window(kind):
    answer = frequency_window(from_text(starter(kind), "."))
    assert 0.0 < answer.result.lower < answer.result.upper
    assert np.isfinite(answer.result.spread).all()


def test_a_target_of_its_own():
    case = from_text(starter("heater"), ".")
    # Below the Curie point the skin is thin and a much lower frequency does.
    assert frequency_window(case, T=ZERO + 300.0).result.lower < 0.2 * frequency_window(case).result.lower


def test_without_a_target_it_asks_for_one(tmp_path):
    text = starter("heater").replace('until = { surface = "850 °C" }', "").replace("longest", "duration")
    with pytest.raises(CaseError, match="--to"):
        frequency_window(from_text(text, tmp_path))
