"""Resistance of the coil copper: wall, usual wall, turns with gaps, leads."""

import math
from dataclasses import replace

import numpy as np
import pytest
from numpy.testing import assert_allclose

from thermal.circuit.winding import (
    Winding,
    coil_resistance,
    copper_depth,
    copper_resistivity,
    sheet_resistance,
    usual_wall,
    wall_factor,
)
from thermal.eddy.exact import tube_bore_field
from thermal.geometry.coil import Coil

COIL = Coil(turns=10.0, length=0.2, opening=(0.07, 0.07), round=True, tube=0.016, wall=0.02)


def test_copper():
    # IEC 60028 (from memory): 1.7241e-8 ohm m at 20 °C, 3.93e-3 1/K.
    assert copper_resistivity(293.15) == pytest.approx(1.7241e-8, rel=1e-12)
    assert copper_resistivity(353.15) == pytest.approx(1.7241e-8 * (1.0 + 60.0 * 3.93e-3), rel=1e-12)
    # HB-02 (computed from that resistivity): 2.0898, 0.66085, 0.098513 mm.
    for frequency, depth in ((1e3, 2.0898e-3), (1e4, 0.66085e-3), (450e3, 0.098513e-3)):
        assert copper_depth(1.7241e-8, frequency) == pytest.approx(depth, rel=2e-5)


@pytest.mark.parametrize(("frequency", "factor"), [(1e3, 2.14), (3e3, 1.28), (10e3, 0.92)])
def test_wall_of_one_millimetre(frequency, factor):
    # P. L. Dowell, Proc. IEE 113 (1966) 1387 (from memory), computed for copper of 1.8e-8 ohm m.
    depth = copper_depth(1.8e-8, frequency)
    assert wall_factor(1e-3, depth) == pytest.approx(factor, abs=0.006)


@pytest.mark.parametrize("v", [0.05, 0.3, 1.0, math.pi / 2.0, 3.0, 8.0, 19.9, 20.1, 2000.0])
def test_wall_factor_is_that_of_a_sheet(v):
    # Second route: Re (1 + j) coth((1 + j) v), written with exp(-2 (1 + j) v).
    e = np.exp(-2.0 * (1.0 + 1.0j) * v)
    assert wall_factor(v, 1.0) == pytest.approx(float(((1.0 + 1.0j) * (1.0 + e) / (1.0 - e)).real), rel=1e-12)


def test_thin_wall_carries_direct_current():
    # v much less than 1: resistance of the full wall, 1/v times that of one skin depth.
    assert wall_factor(0.01, 1.0) * 0.01 == pytest.approx(1.0, rel=1e-6)


@pytest.mark.parametrize("v", [0.3, 1.0, 1.6, 3.0])
def test_wall_factor_is_that_of_a_wide_tube_around_its_field(v):
    # Third route: the Bessel solution of a tube so wide that it is flat, field inside only.
    frequency, rho = 1e4, 2e-8
    delta = copper_depth(rho, frequency)
    inner = 2000.0 * delta
    H, E = tube_bore_field(np.array([inner]), inner, inner + v * delta, rho, frequency, 1.0)
    resistance = -(E[0] / H[0]).real
    assert wall_factor(v * delta, delta) == pytest.approx(resistance * delta / rho, rel=1e-3)


WALLS = [
    # Tube and skin depth [mm] -> wall [mm]: 1.5 skin depths, up to the next 0.5 mm, 1 mm to a quarter of the tube
    # (common practice).
    (20.0, 2.1, 3.5),
    (20.0, 1.0, 1.5),
    (20.0, 1.001, 2.0),
    (20.0, 2.0, 3.0),
    (20.0, 0.15, 1.0),
    (10.0, 2.1, 2.5),
    (10.0, 9.3, 2.5),
    (3.0, 0.15, 0.75),
    (3.0, 2.1, 0.75),
]


@pytest.mark.parametrize(("tube", "depth", "wall"), WALLS)
def test_usual_wall(tube, depth, wall):
    assert usual_wall(tube * 1e-3, depth * 1e-3) == pytest.approx(wall * 1e-3, rel=1e-12)


TURNS = [
    # Share of the length that is copper -> resistance over that of the full sheet: two-dimensional fields of eight
    # solid square turns, unloaded (computed, unpublished).
    (0.92, 1.05),
    (0.8, 0.99),
    (0.67, 1.01),
    (0.5, 1.15),
    (0.33, 1.46),
    (0.2, 2.12),
]


@pytest.mark.parametrize(("fill", "ratio"), TURNS)
def test_turns_with_gaps(fill, ratio):
    pitch = 0.02
    coil = Coil(8.0, 8.0 * pitch, (0.5, 0.5), True, fill * pitch, 0.25)
    frequency = 1e5
    rho = 1.8e-8
    sheet = sheet_resistance(rho, copper_depth(rho, frequency), 8.0, coil.bore_perimeter(), coil.length)
    assert coil_resistance(coil, rho, frequency) / sheet == pytest.approx(ratio, rel=0.14)


def test_thin_wall_multiplies_the_resistance():
    thick = coil_resistance(COIL, 1.8e-8, 1e3)
    thin = coil_resistance(replace(COIL, wall=1e-3), 1.8e-8, 1e3)
    depth = copper_depth(1.8e-8, 1e3)
    assert thin / thick == pytest.approx(wall_factor(1e-3, depth) / wall_factor(COIL.wall, depth), rel=1e-12)
    assert thin / thick == pytest.approx(2.14, abs=0.01)


@pytest.mark.parametrize("times", [4.0, 25.0])
def test_resistance_grows_as_the_root_of_frequency(times):
    # Thick wall: E. J. Davies 1990 (from memory).
    ratio = coil_resistance(COIL, 1.8e-8, times * 1e4) / coil_resistance(COIL, 1.8e-8, 1e4)
    assert ratio == pytest.approx(math.sqrt(times), rel=1e-9)


def test_turns_enter_squared_at_the_same_fill():
    fine = replace(COIL, turns=20.0, tube=0.008, opening=(0.078, 0.078))
    coarse = replace(COIL, opening=(0.07, 0.07))
    # Same middle line and fill; the bore, where the sheet flows, is wider by 8 mm.
    lone_fine = 20.0**2 * math.pi * 0.086 / (4.0 * 20.0 * 0.008)
    lone_coarse = 10.0**2 * math.pi * 0.086 / (4.0 * 10.0 * 0.016)
    assert lone_fine == pytest.approx(4.0 * lone_coarse)
    low, high = 4.0, 4.0 * 0.078 / 0.07
    assert low < coil_resistance(fine, 1.8e-8, 1e5) / coil_resistance(coarse, 1.8e-8, 1e5) < high


def test_leads_are_in_series():
    bare = Winding(COIL, 1.8e-8).impedance(1e4)
    with_leads = Winding(COIL, 1.8e-8, leads_resistance=3e-4, leads_inductance=2e-7).impedance(1e4)
    assert bare == complex(coil_resistance(COIL, 1.8e-8, 1e4), 0.0)
    assert_allclose(with_leads - bare, complex(3e-4, 2.0 * math.pi * 1e4 * 2e-7), rtol=1e-9)
