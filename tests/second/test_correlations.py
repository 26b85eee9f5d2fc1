"""Nusselt numbers and gas-side fluxes against the package ht and against published worked examples."""

import ht
import numpy as np
import pytest
from numpy.testing import assert_allclose

from materials import database
from thermal.boundary.convection import forced_coefficient, plate_convection
from thermal.boundary.correlations import (
    cylinder_in_cross_flow,
    horizontal_cylinder,
    plate_in_parallel_flow,
    vertical_plate,
)
from thermal.errors import OutOfRange

PRANDTL = np.array([0.3, 0.69, 0.71, 1.0, 6.0])


def test_free_convection_of_the_fire_screen():
    # Bergman et al., 7th ed., example 9.2 with Pr 0.69, Gr 2.63e9; digits as in the docstrings of ht 1.2.0
    Ra = np.array([0.69 * 2.63e9])
    assert_allclose(horizontal_cylinder(Ra, np.array([0.69])), 139.13493970073597, rtol=1e-13)
    assert_allclose(vertical_plate(Ra, np.array([0.69])), 147.16185223770603, rtol=1e-13)


@pytest.mark.parametrize("Ra", np.geomspace(1.01e-5, 0.99e12, 9))
def test_horizontal_cylinder_against_ht(Ra):
    expected = [ht.Nu_horizontal_cylinder_Churchill_Chu(Pr, Ra / Pr) for Pr in PRANDTL.tolist()]
    assert_allclose(horizontal_cylinder(np.full(5, Ra), PRANDTL), expected, rtol=1e-13)


@pytest.mark.parametrize("Ra", np.geomspace(0.101, 0.99e12, 9))
def test_vertical_plate_against_ht(Ra):
    expected = [ht.Nu_vertical_plate_Churchill(Pr, Ra / Pr) for Pr in PRANDTL.tolist()]
    assert_allclose(vertical_plate(np.full(5, Ra), PRANDTL), expected, rtol=1e-13)


@pytest.mark.parametrize("Re", np.geomspace(1.0, 0.99e7, 9))
def test_cross_flow_against_ht(Re):
    expected = [ht.Nu_cylinder_Churchill_Bernstein(Re, Pr) for Pr in PRANDTL.tolist()]
    assert_allclose(cylinder_in_cross_flow(np.full(5, Re), PRANDTL), expected, rtol=1e-13)


@pytest.mark.parametrize("Re", np.geomspace(10.1, 0.99e7, 9))
@pytest.mark.parametrize("Pr", [0.61, 0.7, 6.0])
def test_parallel_flow_against_the_laminar_and_turbulent_parts_of_ht(Re, Pr):
    laminar = ht.conv_external.Nu_horizontal_plate_laminar_Baehr(Re, Pr)
    turbulent = ht.conv_external.Nu_horizontal_plate_turbulent_Schlichting(Re, Pr)
    both = plate_in_parallel_flow(np.array([Re]), np.array([Pr]))
    assert_allclose(both, (laminar**2 + turbulent**2) ** 0.5, rtol=1e-13)


@pytest.mark.parametrize(
    ("correlation", "low", "high"),
    [
        (horizontal_cylinder, 1e-5, 1e12),
        (vertical_plate, 0.1, 1e12),
        (cylinder_in_cross_flow, 0.2 / 0.7, 1e7),
        (plate_in_parallel_flow, 10.0, 1e7),
    ],
)
def test_ranges_are_kept_and_nothing_jumps_inside(correlation, low, high):
    x = np.geomspace(low * 1.000001, high * 0.999999, 4001)
    Nu = correlation(x, np.full(x.shape, 0.7))
    exponent = np.diff(np.log(Nu)) / np.diff(np.log(x))
    assert np.all(exponent > 0)
    assert np.abs(np.diff(exponent)).max() < 0.002
    for outside in (low * 0.99, high * 1.01):
        with pytest.raises(OutOfRange, match="the correlation holds for"):
            correlation(np.array([x[0], outside]), np.array([0.7, 0.7]))


def test_parallel_flow_refuses_liquid_metals():
    with pytest.raises(OutOfRange, match=r"the Prandtl number is 0\.02, the correlation holds for 0\.6 to 2e\+03"):
        plate_in_parallel_flow(np.array([1e4]), np.array([0.02]))


def test_fire_screen_of_glass():
    # Bergman et al., 7th ed., example 9.2 (from memory): height 0.71 m, 232 °C, room 23 °C: h = 7.0 W/(m2 K)
    T = np.array([505.15])
    loss = plate_convection("convection", database.gas("air"), 296.15, 0.71)
    assert loss.flux(T, T)[0] / (505.15 - 296.15) == pytest.approx(7.0, rel=0.01)


def test_heated_rod_in_a_wind_tunnel():
    # Bergman et al., 7th ed., example 7.4 (from memory): 12.7 mm, 10 m/s, 128.4 °C in air of 26.2 °C: h = 96 by the
    # correlation, 102 measured
    h = forced_coefficient(database.gas("air"), 299.35, 0.0127, 10.0, cylinder_in_cross_flow)
    assert h(np.array([401.55])) == pytest.approx(96.0, rel=0.01)
