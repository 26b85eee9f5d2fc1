"""Every published correlation and formula inside and just outside its range: refused, held or joined, never a step."""

import math

import ht
import numpy as np
import pytest
from numpy.testing import assert_allclose

from materials import database
from materials.curve import Curve
from materials.errors import MaterialError
from materials.formulas import CarbonSteelHeat
from materials.magnetics import Magnetics
from materials.magnetisation import FroehlichKennelly, NormalCurve
from materials.property import Property
from materials.source import Source
from thermal.boundary.convection import cylinder_convection, forced_coefficient, free_coefficient, plate_convection
from thermal.boundary.correlations import (
    CYLINDER_RAYLEIGH,
    MOST_CURVED,
    PLATE_RAYLEIGH,
    cylinder_in_cross_flow,
    horizontal_cylinder,
    plate_in_parallel_flow,
    vertical_cylinder,
    vertical_plate,
)
from thermal.boundary.radiation import bore_radiation, exchange_factor
from thermal.boundary.table import law_of
from thermal.build import interpolated
from thermal.circuit.winding import coil_resistance, copper_resistivity, wall_factor
from thermal.constants import STEFAN_BOLTZMANN
from thermal.eddy.exact import cylinder_factor, plate_factor, skin_depth, surface_core_factor, wire_resistance_ratio
from thermal.errors import OutOfRange
from thermal.geometry.coil import Coil
from thermal.geometry.inductance import nagaoka

ZERO = 273.15
INSIDE, OUTSIDE = 1e-6, 1e-3
"""Distance to the end of a range."""


@pytest.fixture(scope="module")
def air():
    return database.gas("air")


def _one(value):
    return np.array([value])


CORRELATIONS = {
    "horizontal cylinder, Ra": (lambda Ra: horizontal_cylinder(Ra, _one(0.7)), 1e-5, 1e12),
    "vertical plate, Ra": (lambda Ra: vertical_plate(Ra, _one(0.7)), 0.1, 1e12),
    "vertical cylinder, Ra": (lambda Ra: vertical_cylinder(Ra, _one(0.7), 4.0), 0.1, 1e12),
    "vertical cylinder, Pr": (lambda Pr: vertical_cylinder(_one(1e6), Pr, 4.0), 0.01, 100.0),
    "cylinder in cross flow, Re Pr": (lambda product: cylinder_in_cross_flow(product / 0.7, _one(0.7)), 0.2, None),
    "cylinder in cross flow, Re": (lambda Re: cylinder_in_cross_flow(Re, _one(0.7)), None, 1e7),
    "plate in parallel flow, Re": (lambda Re: plate_in_parallel_flow(Re, _one(0.7)), 10.0, 1e7),
    "plate in parallel flow, Pr": (lambda Pr: plate_in_parallel_flow(_one(1e4), Pr), 0.6, 2000.0),
}


@pytest.mark.parametrize("name", CORRELATIONS)
def test_a_correlation_holds_inside_and_refuses_outside(name):
    correlation, low, high = CORRELATIONS[name]
    for end, sign in ((low, 1.0), (high, -1.0)):
        if end is not None:
            assert np.all(correlation(_one(end * (1.0 + sign * INSIDE))) > 0.0)
            with pytest.raises(OutOfRange, match="the correlation holds for"):
                correlation(_one(end * (1.0 - sign * OUTSIDE)))
    with pytest.raises(OutOfRange):
        correlation(_one(math.nan))


def test_a_vertical_cylinder_against_ht():
    for Gr, slenderness in ((1e4, 0.5), (1e6, 2.0), (1e8, 10.0), (1e10, 1.0), (1e7, 40.0)):
        expected = ht.conv_free_immersed.Nu_vertical_cylinder_Popiel_Churchill(0.7, Gr, slenderness, 1.0)
        assert_allclose(vertical_cylinder(_one(0.7 * Gr), _one(0.7), slenderness), expected, rtol=1e-13)


def test_a_vertical_cylinder_joins_the_plate_and_is_held_where_it_is_a_wire():
    Ra, Pr = _one(1e6), _one(0.7)
    assert_allclose(vertical_cylinder(Ra, Pr, 1e-6) / vertical_plate(Ra, Pr), 1.0, atol=1e-5)
    at_the_rule = (Ra / Pr)[0] ** 0.25 / 35.0
    assert_allclose(vertical_cylinder(Ra, Pr, at_the_rule) / vertical_plate(Ra, Pr), 1.055, atol=0.002)
    end = MOST_CURVED / 32**0.5 * (Ra / Pr)[0] ** 0.25
    below, at, above = (vertical_cylinder(Ra, Pr, end * factor) for factor in (1.0 - 1e-9, 1.0, 1.0 + 1e-3))
    assert_allclose(below, at, rtol=1e-8)
    assert above == pytest.approx(at, rel=1e-14)


@pytest.mark.parametrize(
    ("nusselt", "lowest"), [(horizontal_cylinder, CYLINDER_RAYLEIGH[0]), (vertical_plate, PLATE_RAYLEIGH[0])]
)
def test_free_convection_is_held_below_the_lowest_rayleigh_number(air, nusselt, lowest):
    h = free_coefficient(air, 293.15, 0.01, nusselt, (lowest, 1e12))
    T = 293.15 + np.geomspace(1e-9, 1.0, 400)
    coefficient = h(T)
    assert np.abs(np.diff(np.log(coefficient))).max() < 0.02
    assert_allclose(coefficient[:50], coefficient[0], rtol=1e-3)


def test_a_flow_too_slow_or_too_fast_for_its_correlation_is_refused_before_a_run(air):
    for speed in (1e-4, 2e4):
        with pytest.raises(OutOfRange, match="forced flow across a cylinder"):
            cylinder_convection("convection", air, 293.15, 0.02, 0.2, "horizontal", speed)
    with pytest.raises(OutOfRange, match="forced flow along a plate"):
        plate_convection("convection", air, 293.15, 0.02, 2e4)


def test_a_slow_flow_along_the_ends_is_held_at_the_lowest_reynolds_number(air):
    # An upper estimate: a slow draught does not end a run that still gas would not.
    h = [plate_convection("c", air, 293.15, 0.01, speed).flux(600.0, 600.0)[0] for speed in (1e-4, 1e-3, 0.02, 1.0)]
    assert h[0] == h[1] == h[2] < h[3]


def test_free_and_forced_convection_blend_without_a_step(air):
    T = _one(600.0)
    speeds = np.geomspace(0.03, 30.0, 200)
    free = free_coefficient(air, 293.15, 0.05, horizontal_cylinder, CYLINDER_RAYLEIGH)(T)
    both = []
    for speed in speeds:
        forced = forced_coefficient(air, 293.15, 0.05, float(speed), cylinder_in_cross_flow)(T)
        both.append(float(np.cbrt(free**3 + forced**3)[0]))
    assert np.all(np.diff(both) > 0.0)
    assert np.diff(np.log(both)).max() < 0.05


@pytest.mark.parametrize("name", database.gas_names())
def test_a_gas_is_known_inside_its_tables_only(name):
    gas = database.gas(name)
    for of in (gas.density, gas.viscosity, gas.conductivity, gas.heat_capacity, gas.expansion):
        assert of(gas.T_min + INSIDE) > 0.0 and of(gas.T_max - INSIDE) > 0.0
        for T in (gas.T_min - OUTSIDE, gas.T_max + OUTSIDE):
            with pytest.raises(MaterialError):
                of(T)
    law = law_of(gas.conductivity, "gas")
    law.at(gas.T_max - INSIDE)
    with pytest.raises(OutOfRange, match="gas is known from"):
        law.at(gas.T_max + OUTSIDE)


@pytest.mark.parametrize("name", database.lining_names())
def test_a_lining_is_known_as_its_file_says(name):
    conductivity = database.lining(name).conductivity
    law = law_of(conductivity, "lining")
    inside, _ = law.at(conductivity.T_max - INSIDE)
    if conductivity.beyond == "refuse":
        with pytest.raises(OutOfRange, match="lining is known from"):
            law.at(conductivity.T_max + OUTSIDE)
    else:
        assert law.at(conductivity.T_max + OUTSIDE)[0] == pytest.approx(inside, rel=1e-6)


@pytest.mark.parametrize("beyond", ["hold", "refuse"])
def test_a_property_of_the_workpiece_is_held_or_refused_as_its_file_says(beyond):
    T, value = np.array([300.0, 900.0]), np.array([10.0, 20.0])
    curve = Property("conductivity", T, value, "linear", beyond, 0.0, "W/(m K)", Source("x", "y", "assumed"))
    look_up = interpolated(curve)
    assert_allclose(look_up(np.array([300.0, 600.0, 900.0])), [10.0, 15.0, 20.0])
    for outside in (299.9, 900.1):
        if beyond == "refuse":
            with pytest.raises(OutOfRange, match=r"^conductivity is known from 27 to 627 °C"):
                look_up(np.array([600.0, outside]))
        else:
            assert look_up(_one(outside))[0] in (10.0, 20.0)
    if beyond == "refuse":
        with pytest.raises(MaterialError, match="is outside"):
            Curve(T, value, "linear", beyond)(900.1)


def test_specific_heat_of_carbon_steel_is_held_beyond_20_and_1200_degrees():
    heat = CarbonSteelHeat()
    for end, beyond in ((20.0, -100.0), (1200.0, 1700.0)):
        assert heat(beyond + ZERO) == heat(end + ZERO)
    # 425 + 0.773 t ... meets 666 + 13002/(738 - t) within 0.3 J/(kg K), and so on: the steps the standard itself has.
    for joint in (20.0, 600.0, 735.0, 900.0, 1200.0):
        below, above = heat(joint + ZERO - INSIDE), heat(joint + ZERO + INSIDE)
        assert above == pytest.approx(below, rel=1e-3)
    T = np.array([-50.0, 20.0, 1200.0, 1500.0]) + ZERO
    assert_allclose(heat.integral(T[:-1], T[1:])[[0, 2]], [70.0 * heat(T[1]), 300.0 * 650.0], rtol=1e-12)


def test_a_magnetisation_law_goes_on_beyond_the_table_of_its_first_harmonic():
    magnetics = Magnetics.from_law("froehlich-kennelly", FroehlichKennelly(2.0, 1000.0), 1043.0, 3.0)
    for end in (1.0, 1e7):
        below, above = magnetics.effective_susceptibility(np.array([end * (1.0 - INSIDE), end * (1.0 + INSIDE)]))
        assert above == pytest.approx(below, rel=1e-5)
    assert magnetics.effective_susceptibility(_one(0.0))[0] == pytest.approx(
        FroehlichKennelly(2.0, 1000.0).initial_susceptibility
    )
    low, high = magnetics.effective_susceptibility(np.array([1e7, 1e9]))
    assert high == pytest.approx(low / 100.0, rel=1e-6)


def test_a_normal_curve_joins_its_ends():
    curve = NormalCurve(np.array([200.0, 1000.0, 1e5]), np.array([0.3, 1.0, 2.1]), 600.0)
    for end in (200.0, 1e5):
        below, above = curve(np.array([end * (1.0 - INSIDE), end * (1.0 + INSIDE)]))
        assert above == pytest.approx(below, rel=1e-5)
    assert curve(1e9) == curve(1e5)


@pytest.mark.parametrize("exponent", [1.0, 2.7, 3.0, 10.0])
def test_saturation_ends_at_the_curie_point_without_a_step(exponent):
    magnetics = Magnetics.from_law("froehlich-kennelly", FroehlichKennelly(2.0, 1000.0), 1043.0, exponent)
    before, at, after = magnetics.factor(np.array([1043.0 * (1.0 - 1e-12), 1043.0, 1043.0 + OUTSIDE]))
    assert (at, after) == (0.0, 0.0)
    assert 0.0 <= before < 0.1
    T = np.linspace(0.0, 1100.0, 20001)
    assert np.all(np.diff(magnetics.factor(T)) <= 0.0)
    assert magnetics.factor(293.15) == pytest.approx(1.0)


def test_exchange_of_radiation_between_its_bounds():
    assert exchange_factor(0.8, 1.0, 1.0)[0] == pytest.approx(0.8)
    assert exchange_factor(0.8, 0.3, 0.0)[0] == pytest.approx(0.8)
    assert exchange_factor(1.0, 0.3, 1.0)[0] == pytest.approx(0.3)
    assert exchange_factor(1e-12, 1e-12, 1.0)[0] == pytest.approx(0.5e-12)


@pytest.mark.parametrize("y", np.geomspace(1e-9, 1e9, 19))
def test_the_bore_of_a_tube_of_any_proportion(y):
    share = bore_radiation("bore", 1.0, float(y), 0.0).flux(_one(1000.0), _one(1000.0))[0][0] / (
        STEFAN_BOLTZMANN * 1e12
    )
    if 1e-3 < y < 1e3:  # Bergman et al., Table 13.2, as printed
        X = 2.0 + y * y
        assert share == pytest.approx((1.0 - (X - math.sqrt(X * X - 4.0)) / 2.0) / y, rel=1e-6)
    else:  # a ring is a black opening, a long tube loses through two black ends
        assert share == pytest.approx(1.0 if y < 1.0 else 1.0 / y, rel=2e-3)


def test_nagaokas_factor_of_any_proportion():
    for joint in (1e-3, 1e3):
        below, above = nagaoka(joint * (1.0 - 1e-12)), nagaoka(joint * (1.0 + 1e-12))
        assert above == pytest.approx(below, rel=1e-10)
    d = np.geomspace(1e-9, 1e9, 400)
    K = np.array([nagaoka(float(each)) for each in d])
    assert np.all((K > 0.0) & (K <= 1.0)) and np.all(np.diff(K) < 1e-15)
    with pytest.raises(ValueError, match="must be positive"):
        nagaoka(0.0)


def test_copper_of_the_coil_between_0_and_200_degrees():
    assert copper_resistivity(ZERO) == pytest.approx(1.7241e-8 * (1.0 - 20.0 * 3.93e-3))
    assert copper_resistivity(ZERO + 200.0) == pytest.approx(1.7241e-8 * (1.0 + 180.0 * 3.93e-3))
    for T in (ZERO - OUTSIDE, ZERO + 200.0 + OUTSIDE, math.nan):
        with pytest.raises(OutOfRange, match="known from 0 to 200 °C"):
            copper_resistivity(T)
    measured = database.get("copper").resistivity(np.array([293.15, 373.15, 473.15]))
    line = np.array([copper_resistivity(T) for T in (293.15, 373.15, 473.15)])
    assert_allclose(measured / line / (measured[0] / line[0]), 1.0, atol=0.014)


def test_the_factor_of_a_coil_wall_of_any_thickness():
    for v in np.geomspace(1e-9, 1e-2, 8):
        assert wall_factor(float(v), 1.0) * v == pytest.approx(1.0, rel=1e-7)
    below, above = wall_factor(20.0 * (1.0 - 1e-12), 1.0), wall_factor(20.0 * (1.0 + 1e-12), 1.0)
    assert above == pytest.approx(below, rel=1e-15)
    v = np.geomspace(1e-6, 100.0, 2000)
    factors = np.array([wall_factor(float(each), 1.0) for each in v])
    assert np.abs(np.diff(np.log(factors))).max() < 0.02


def test_resistance_of_a_coil_blends_from_close_to_lone_turns():
    def resistance(length):
        return coil_resistance(Coil(10.0, length, (0.08, 0.08), True, 0.01, 0.0025), 1.8e-8, 1e4)

    lengths = np.geomspace(0.1, 100.0, 400)  # turns side by side, to one in ten metres
    values = np.array([resistance(float(length)) for length in lengths])
    assert np.all(np.diff(values) < 0.0)
    slopes = np.diff(np.log(values)) / np.diff(np.log(lengths))
    assert np.abs(np.diff(slopes)).max() < 0.02
    assert values[-1] == pytest.approx(resistance(1e6), rel=1e-3)


def test_closed_forms_of_the_field_of_any_thickness():
    thin, thick = np.geomspace(1e-4, 1e-2, 7), np.geomspace(1e3, 1e8, 7)
    assert_allclose(plate_factor(thin), thin**3 / 6.0, rtol=1e-4)
    assert_allclose(plate_factor(thick), 1.0, rtol=1e-12)
    assert_allclose(cylinder_factor(thin).real, thin**3 / 4.0, rtol=1e-4)
    assert_allclose(cylinder_factor(thick).real, 1.0 - 0.5 / thick, rtol=1e-6)
    assert_allclose(wire_resistance_ratio(thin), 1.0, rtol=1e-9)
    assert_allclose(wire_resistance_ratio(thick), thick / 2.0 + 0.25, rtol=1e-6)
    assert_allclose(surface_core_factor(thin), 0.5, rtol=1e-9)
    assert_allclose(surface_core_factor(thick), 1.0 - 1.0 / thick, rtol=1e-6)
    below, above = surface_core_factor(np.array([0.1 * (1.0 - 1e-12), 0.1]))
    assert above == pytest.approx(below, abs=1e-8)
    assert_allclose(skin_depth(1e-6, 1.0), 1e4 * skin_depth(1e-6, 1e8), rtol=1e-12)
