"""Areas and lengths of a coil, round and rectangular."""

import math

import pytest
from numpy.testing import assert_allclose

from thermal.geometry.coil import Coil
from thermal.geometry.inductance import nagaoka

ROUND = Coil(turns=10.0, length=0.2, opening=(0.07, 0.07), round=True, tube=0.01, wall=0.0015)
FLAT = Coil(turns=6.0, length=0.15, opening=(0.24, 0.04), round=False, tube=0.012, wall=0.002)


def test_round_bore():
    assert_allclose(ROUND.bore_area(), math.pi * 0.035**2, rtol=1e-14)
    assert_allclose(ROUND.bore_area(5e-4), math.pi * 0.0355**2, rtol=1e-14)
    assert_allclose(ROUND.bore_perimeter(), math.pi * 0.07, rtol=1e-14)
    assert_allclose(ROUND.turn_length(), math.pi * 0.08, rtol=1e-14)


def test_rectangular_bore():
    assert_allclose(FLAT.bore_area(), 0.24 * 0.04, rtol=1e-14)
    assert_allclose(FLAT.bore_area(1e-3), 0.242 * 0.042, rtol=1e-14)
    assert_allclose(FLAT.bore_perimeter(), 0.56, rtol=1e-14)
    assert_allclose(FLAT.turn_length(), 2.0 * (0.252 + 0.052), rtol=1e-14)


def test_nagaoka_factor():
    assert_allclose(ROUND.nagaoka(), nagaoka(0.07 / 0.2), rtol=1e-14)
    assert_allclose(ROUND.nagaoka(1e-3), nagaoka(0.072 / 0.2), rtol=1e-14)


@pytest.mark.parametrize("depth", [0.0, 1e-3])
def test_square_bore_counts_as_the_circle_of_its_area(depth):
    square = Coil(6.0, 0.15, (0.05, 0.05), False, 0.01, 0.001)
    diameter = (0.05 + 2.0 * depth) * 2.0 / math.sqrt(math.pi)
    assert_allclose(square.nagaoka(depth), nagaoka(diameter / 0.15), rtol=1e-14)
