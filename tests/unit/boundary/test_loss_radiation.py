from math import pi

import numpy as np
import pytest
from numpy.testing import assert_allclose

from thermal.boundary.emissivity import emissivity_of
from thermal.boundary.radiation import Radiation, bare_coil_radiation, bore_radiation, exchange_factor
from thermal.constants import STEFAN_BOLTZMANN

GREY = emissivity_of(0.8, grows=False, T_start=293.15)
HOT = np.array([1473.15])


def test_oxidised_steel_at_1200_degrees():
    # by hand: 0.8 x 5.670374419e-8 x (1473.15^4 - 293.15^4)
    q, slope = Radiation("radiation", GREY, 293.15).flux(HOT, HOT)
    assert q == pytest.approx(213308.4478, rel=1e-9)
    assert slope == pytest.approx(4 * 0.8 * 5.670374419e-8 * 1473.15**3, rel=1e-14)


def test_exchange_with_a_black_wall_or_a_far_one_is_the_emissivity():
    assert exchange_factor(0.7, 1.0, 0.9)[0] == pytest.approx(0.7, rel=1e-15)
    assert exchange_factor(0.7, 0.3, 1e-12)[0] == pytest.approx(0.7, rel=1e-11)


def test_exchange_between_equal_planes():
    # parallel planes, Bergman et al., 7th ed., eq. 13.19 with e1 = e2 = e: e / (2 - e)
    assert exchange_factor(0.4, 0.4, 1.0)[0] == pytest.approx(0.4 / 1.6, rel=1e-15)


def test_exchange_slopes_against_differences():
    e1, e2, ratio, d = 0.6, 0.45, 0.8, 1e-6
    _, with_e1, with_e2 = exchange_factor(e1, e2, ratio)
    difference_1 = exchange_factor(e1 + d, e2, ratio)[0] - exchange_factor(e1 - d, e2, ratio)[0]
    difference_2 = exchange_factor(e1, e2 + d, ratio)[0] - exchange_factor(e1, e2 - d, ratio)[0]
    assert with_e1 == pytest.approx(difference_1 / (2 * d), rel=1e-8)
    assert with_e2 == pytest.approx(difference_2 / (2 * d), rel=1e-8)


def test_a_bare_copper_coil_halves_the_radiation_of_a_close_workpiece():
    q, _ = bare_coil_radiation("radiation", GREY, 323.15, 25 / 40, 0.6).flux(HOT, HOT)
    by_resistances = 1 / (1 / 0.8 + 25 / 40 * (1 / 0.6 - 1))
    assert q == pytest.approx(by_resistances * STEFAN_BOLTZMANN * (1473.15**4 - 323.15**4), rel=1e-14)


def test_radiation_keeps_the_emissivity_of_the_peak(curve):
    scale = emissivity_of(curve([300.0, 1300.0], [0.3, 0.8]), grows=True, T_start=293.15)
    loss = Radiation("radiation", scale, 293.15)
    T = np.array([900.0])
    heating, cooled = loss.flux(T, T)[0], loss.flux(T, np.array([1300.0]))[0]
    assert_allclose(heating, 0.6 * STEFAN_BOLTZMANN * (900.0**4 - 293.15**4))
    assert_allclose(cooled, 0.8 * STEFAN_BOLTZMANN * (900.0**4 - 293.15**4))


def test_a_long_bore_loses_through_two_black_openings():
    radius, length = 0.02, 4.0
    q, _ = bore_radiation("bore", radius, length, 293.15).flux(HOT, HOT)
    black = STEFAN_BOLTZMANN * (1473.15**4 - 293.15**4)
    assert q * 2 * pi * radius * length == pytest.approx(2 * pi * radius**2 * black, rel=1e-4)


def test_a_short_bore_loses_less_than_a_black_surface_of_its_area():
    black = STEFAN_BOLTZMANN * (1473.15**4 - 293.15**4)
    shares = [bore_radiation("bore", 1.0, L, 293.15).flux(HOT, HOT)[0] / black for L in (1e-3, 0.1, 0.5, 1, 5)]
    assert shares[0] == pytest.approx(1.0, abs=1e-3)
    assert np.all(np.diff(np.ravel(shares)) < 0)


def test_opening_to_opening_view_factor_of_coaxial_disks():
    # length = radius: F = (3 - sqrt 5) / 2, Bergman et al., 7th ed., Table 13.2
    q, _ = bore_radiation("bore", 0.05, 0.05, 0.0).flux(HOT, HOT)
    assert q == pytest.approx((1 - (3 - 5**0.5) / 2) * STEFAN_BOLTZMANN * 1473.15**4, rel=1e-14)
