"""Time and peak temperature against closed solutions, asked as a user asks them."""

import math

import pytest
from tiny_materials import constant_material

from thermal.case import from_text
from thermal.questions.peak_temperature import peak_temperature
from thermal.questions.time_to_temperature import time_to_temperature

ZERO = 273.15
# A skin so thin that the heat enters at the surface, as the closed solutions have it.
SURFACE_HEAT = {"resistivity": 1e-8, "mu_r": 100.0}
LENGTH = 0.1


def bar(folder, material, radius, absorbed, emissivity, h):
    """A bar without ends at 20 °C that absorbs a power [W]."""
    (folder / "constant.toml").write_text(material, encoding="utf-8")
    text = f"""
format = 1
[workpiece]
shape = "cylinder"
diameter = "{2e3 * radius!r} mm"
length = "{1e3 * LENGTH!r} mm"
material = "constant.toml"
emissivity = {emissivity!r}
neighbours = "touching"
initial = "20 °C"
[surroundings]
temperature = "20 °C"
h = "{h!r} W/(m2 K)"
[[schedule]]
stage = "heat"
drive = {{ absorbed_power = "{absorbed!r} W", frequency = "400 kHz" }}
duration = "60 s"
"""
    return from_text(text, folder)


def side(radius):
    return 2.0 * math.pi * radius * LENGTH


@pytest.mark.parametrize(("at", "T"), [("surface", 597.525896), ("core", 389.2397616)])
def test_constant_flux_into_a_bar(tmp_path, at, T):
    # Carslaw & Jaeger, Conduction of Heat in Solids, 2nd ed., 7.8: R 25 mm, k 30 W/(m K), 7800 kg/m3, 650 J/(kg K),
    # 5e5 W/m2 from 20 °C: surface and centre after 60 s.
    material = constant_material(30.0, **SURFACE_HEAT)
    case = bar(tmp_path, material, 0.025, 5e5 * side(0.025), 1e-9, 0.0)
    answer = time_to_temperature(case, ZERO + T, at=at)
    assert answer.result.time == pytest.approx(60.0, rel=2e-3)
    assert answer.values["spread_K"] == pytest.approx(208.286, abs=1.0)


def test_lumped_radiation(tmp_path):
    # Bergman et al., Fundamentals of Heat and Mass Transfer, 7th ed., 5.3 (integral evaluated): rho c R/2 = 63375
    # J/(m2 K), emissivity 0.8, 1e5 W/m2: 293.15 to 873.15 K in 400.40853 s.
    case = bar(tmp_path, constant_material(500.0, **SURFACE_HEAT), 0.025, 1e5 * side(0.025), 0.8, 0.0)
    answer = time_to_temperature(case, 873.15, at="mean")
    assert answer.result.time == pytest.approx(400.40853, rel=2e-3)


@pytest.mark.parametrize(("h", "T"), [(0.0, 1219.516545), (15.0, 1177.062677)])
def test_balance_of_flux_radiation_and_convection(tmp_path, h, T):
    # The same: 1e5 W/m2 = 0.8 sigma (T^4 - 293.15^4) + h (T - 293.15).
    case = bar(tmp_path, constant_material(30.0, **SURFACE_HEAT), 0.025, 1e5 * side(0.025), 0.8, h)
    answer = peak_temperature(case)
    assert answer.values["peak_surface_C"] == pytest.approx(T - ZERO, rel=1e-4)
    assert [state.stable for state in answer.result.curve.states] == [True]
