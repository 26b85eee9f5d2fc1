"""Rules of thumb of the trade (common practice, no one source), through cases as a user would write them.

Each names the computed support of its figure: a closed form or a balance evaluated here, next to the run.
"""

from math import pi, sqrt

import numpy as np
import pytest
from scipy.integrate import quad

import materials
from thermal.build import build
from thermal.case import from_text
from thermal.eddy.exact import cylinder_factor, skin_depth
from thermal.loop import run
from thermal.results.history import History
from thermal.setup import Setup

SIGMA = 5.670374419e-8
COPPER_20C = 1.7241e-8
"""Resistivity of annealed copper at 20 °C [ohm m], IEC 60028 (from memory)."""


def result(text: str) -> tuple[Setup, History]:
    setup = build(from_text("format = 1\n" + text, "."))
    return setup, run(setup)


def bar(diameter: float, length: float, alloy: str, initial: float = 20.0, emissivity: str = "0.8") -> str:
    """[workpiece] of a bar of a row; diameter, length [mm] ; initial [°C]."""
    return f"""
[workpiece]
shape = "cylinder"
diameter = "{diameter} mm"
length = "{length} mm"
material = "{alloy}"
emissivity = {emissivity}
initial = "{initial} °C"
neighbours = "touching"
"""


def in_a_long_coil(diameter: float, alloy: str, initial: float, ratio: float, frequency: float) -> str:
    """A row in a coil twenty bores long, its copper at 20 °C and thick against the skin depth; a moment of current."""
    bore = ratio * diameter
    return (
        bar(diameter, 4.0 * bore, alloy, initial)
        + f"""
[coil]
turns = {20.0 * bore / 8.0}
inner_diameter = "{bore} mm"
length = "{20.0 * bore} mm"
tube = "8 mm"
wall = "4 mm"
temperature = "20 °C"
[supply]
power = "1000 kW"
frequency = "{frequency!r} Hz"
[[schedule]]
stage = "heat"
drive = {{ coil_current = "50 A" }}
duration = "1 ms"
"""
    )


def efficiency(history: History) -> float:
    """Of the coil, at the start."""
    return float(1.0 - history.coil_loss[0] / history.supply_power[0])


def resistivity(alloy: str, celsius: float) -> float:
    return float(materials.get(alloy).resistivity(np.array([celsius + 273.15]))[0])


@pytest.mark.parametrize("ratio", [1.2, 1.5, 2.0])
@pytest.mark.parametrize(
    ("alloy", "initial", "at_ratio_1_5"),
    [("steel-c45", 1100.0, 0.85), ("aluminium-1050", 20.0, 0.455), ("copper", 20.0, 0.395)],
)
def test_thin_skin_bounds_the_efficiency(alloy: str, initial: float, at_ratio_1_5: float, ratio: float) -> None:
    # Coil and bar carry the same ampere-turns in a skin each: 1/(1 + (Dc/Dw) sqrt(rho_c/(rho mu_r))), common practice.
    # Support: that formula, with the resistivities of the run. A real coil of the length of this one comes close.
    bound = 1.0 / (1.0 + ratio * sqrt(COPPER_20C / resistivity(alloy, initial)))
    if ratio == 1.5:
        assert bound == pytest.approx(at_ratio_1_5, rel=0.02)
    _, history = result(in_a_long_coil(100.0, alloy, initial, ratio, 10e3 if initial > 20.0 else 3e3))
    assert 0.9 * bound < efficiency(history) < bound


def heat_content(celsius: float) -> float:
    """Specific heat of carbon steel [J/(kg K)] below 600 °C, EN 1993-1-2 3.4.1.2."""
    return 425.0 + 0.773 * celsius - 1.69e-3 * celsius**2 + 2.22e-6 * celsius**3


@pytest.mark.parametrize(
    ("diameter", "length", "holds", "takes"),
    [(6.0, 50.0, 6.2, 13.8), (12.0, 50.0, 13.1, 56.9), (25.0, 80.0, 45.0, 478.0)],
)
def test_a_bench_heater_of_200_w(diameter: float, length: float, holds: float, takes: float) -> None:
    # A self-resonant heater of this class brings a small steel piece to 260 °C in seconds to minutes (common practice).
    # Support: the piece as one lump, eps 0.8 and h 12 W/(m2 K) all round, 100 W absorbed.
    area = pi * diameter * (length + diameter / 2.0) * 1e-6

    def loss(celsius: float) -> float:
        T = celsius + 273.15
        return area * (0.8 * SIGMA * (T**4 - 293.15**4) + 12.0 * (celsius - 20.0))

    setup, history = result(
        bar(diameter, length, "steel-c45").replace('"touching"', '"none"')
        + """
[surroundings]
h = "12 W/(m2 K)"
[[schedule]]
stage = "heat"
drive = { absorbed_power = "100 W", frequency = "200 kHz" }
until = { mean = "260 °C" }
longest = "1000 s"
[[schedule]]
stage = "hold"
at = { mean = "260 °C" }
duration = "60 s"
"""
    )
    lump, _ = quad(lambda celsius: setup.mass * heat_content(celsius) / (100.0 - loss(celsius)), 20.0, 260.0)
    assert (loss(260.0), lump) == pytest.approx((holds, takes), rel=0.01)
    assert history.stages[0].end == pytest.approx(lump, rel=0.01)
    assert history.absorbed_power[-1] == pytest.approx(loss(260.0), rel=0.01)
    assert 10.0 < history.stages[0].end < 600.0


@pytest.mark.parametrize(("diameter", "flux", "minutes"), [(50.0, 24.0, 5.6), (100.0, 12.0, 22.4)])
def test_flux_that_keeps_surface_and_core_100_k_apart(diameter: float, flux: float, minutes: float) -> None:
    # q = 4 k dT/D once the section heats evenly: 24 W/cm2 into 50 mm of hot steel, and time goes with the square of the
    # diameter (common practice). Support: quasi-steady bar, qD/4k (1 - delta/a) with k and delta at the end;
    # 230 kWh/t at that flux.
    watts = flux * 1e4 * pi * diameter * 200.0 * 1e-6
    setup, history = result(
        bar(diameter, 200.0, "steel-c45", emissivity="1e-6")
        + f"""
[surroundings]
h = "0 W/(m2 K)"
[[schedule]]
stage = "heat"
drive = {{ absorbed_power = "{watts!r} W", frequency = "500 kHz" }}
until = {{ mean = "1200 °C" }}
"""
    )
    assert history.status == "target"
    skin = float(skin_depth(resistivity("steel-c45", 1200.0), 500e3))
    k = float(setup.material.conductivity(np.array([1473.15]))[0])
    expected = flux * 1e4 * diameter / 1e3 / (4.0 * k) * (1.0 - skin / (diameter / 2e3))
    assert history.readings["spread"][-1] == pytest.approx(expected, rel=0.03)
    assert 90.0 < history.readings["spread"][-1] < 110.0
    assert history.time[-1] / 60.0 == pytest.approx(minutes, rel=0.05)
    assert history.energy["stored"][-1] / setup.mass / 3600.0 == pytest.approx(230.0, rel=0.05)


@pytest.mark.parametrize(("celsius", "band"), [(1000.0, 12.0), (1200.0, 21.0)])
def test_what_hot_steel_radiates(celsius: float, band: float) -> None:
    # 12 W/cm2 at 1000 °C and 21 W/cm2 at 1200 °C with an emissivity of 0.8 (common practice).
    # Support: 0.8 sigma (T^4 - Ta^4).
    _, history = result(
        bar(60.0, 300.0, "steel-c45", celsius) + '\n[[schedule]]\nstage = "transfer"\nduration = "10 ms"\n'
    )
    area = pi * 0.06 * 0.3
    flux = history.energy["loss: radiation"][-1] / 10e-3 / area
    assert flux == pytest.approx(0.8 * SIGMA * ((celsius + 273.15) ** 4 - 293.15**4), rel=0.01)
    assert flux / 1e4 == pytest.approx(band, rel=0.02)


def test_below_three_skin_depths_heating_collapses() -> None:
    # A hot bar of less than about three skin depths lets the field through (common practice).
    # Support: Phi(a/delta) of the long cylinder, 0.95 at D/delta 20 and 0.54 at 3; efficiency 1/(1 + c/Phi).
    ratios = [1.0, 2.0, 3.0, 6.0, 20.0]
    rho = resistivity("steel-c45", 1100.0)
    shares, efficiencies = [], []
    for ratio in ratios:
        frequency = float(skin_depth(rho, 1.0)) ** 2 / (0.06 / ratio) ** 2
        _, history = result(in_a_long_coil(60.0, "steel-c45", 1100.0, 1.5, frequency))
        thin = history.H_surface_rms[0] ** 2 * rho / float(skin_depth(rho, frequency)) * pi * 0.06 * 0.36
        shares.append(history.absorbed_power[0] / thin)
        efficiencies.append(efficiency(history))
    assert shares == pytest.approx([float(cylinder_factor(ratio / 2.0).real) for ratio in ratios], rel=2e-3)
    at = dict(zip(ratios, efficiencies, strict=True))
    assert at[20.0] - at[6.0] < 0.05
    assert at[3.0] < at[6.0] - 0.05
    assert at[2.0] < 0.75 * at[6.0]
    assert at[1.0] < 0.25 * at[6.0]
