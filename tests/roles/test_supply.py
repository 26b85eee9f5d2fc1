"""What every supply must do: meet a demand, stop at its lowest limit and say which it was."""

import math
from dataclasses import replace

import numpy as np
import pytest
from numpy.testing import assert_allclose

from materials import get
from thermal.circuit.supply import CoilSupply, DirectDrive
from thermal.circuit.winding import Winding, copper_resistivity
from thermal.eddy.finite_coil import FluxPath, SectionSource
from thermal.eddy.radial import RadialSolver
from thermal.errors import NoConvergence
from thermal.geometry.coil import Coil
from thermal.geometry.grading import graded_edges
from thermal.geometry.shapes import cylinder
from thermal.interfaces import Demand, EddyField

FREQUENCY, RADIUS, LENGTH = 10e3, 0.02, 0.1
COIL = Coil(turns=10.0, length=0.12, opening=(0.06, 0.06), round=True, tube=0.008, wall=0.0015)
WINDING = Winding(COIL, copper_resistivity(323.15), leads_resistance=2e-4, leads_inductance=1e-7)
MEETS = 1e-5
"""Relative; how well a demand or a limit is met."""

METALS = {"steel": get("steel-c45"), "aluminium": get("aluminium-6082")}
BY_COIL = {
    "absorbed_power": [200.0, 3e4],
    "supply_power": [500.0, 4e4],
    "coil_current": [50.0, 2000.0],
    "coil_voltage": [5.0, 150.0],
    "surface_field": [2e3, 1e5],
}
DIRECT = {"absorbed_power": [200.0, 3e4], "surface_field": [2e3, 1e5]}


def field_of(metal, with_coil):
    mesh = cylinder(graded_edges(0.0, RADIUS, 3e-4), LENGTH)
    path = None
    if with_coil:
        area = math.pi * RADIUS**2
        path = FluxPath(10.0, COIL.length, COIL.bore_area(), COIL.nagaoka(), LENGTH, area, mesh.perimeter)
    material = METALS[metal]
    source = SectionSource(mesh, RadialSolver(mesh), material.resistivity, material.magnetics, path)
    return source.at(np.full(mesh.r.shape, 293.15))


FIELDS = {(metal, coil): field_of(metal, coil) for metal in METALS for coil in (True, False)}


def supply_of(with_coil, **limits):
    return CoilSupply(FREQUENCY, WINDING, **limits) if with_coil else DirectDrive(FREQUENCY, **limits)


def reached(kind, point, field):
    return {
        "absorbed_power": field.power,
        "supply_power": point.supply_power,
        "coil_current": point.coil_current_rms,
        "coil_voltage": point.coil_voltage_rms,
        "surface_field": field.H_surface_rms,
    }[kind]


CASES = [
    pytest.param(metal, coil, kind, value, id=f"{'coil' if coil else 'direct'}-{metal}-{kind}-{value:g}")
    for metal in METALS
    for coil, kinds in ((True, BY_COIL), (False, DIRECT))
    for kind, values in kinds.items()
    for value in values
]
LIMITS = {
    # Limit of the supply, what it holds down, and the name it is reported by.
    True: [
        ("max_power", "supply_power", "power"),
        ("max_current", "coil_current", "current"),
        ("max_voltage", "coil_voltage", "voltage"),
    ],
    False: [("max_power", "absorbed_power", "power"), ("max_field", "surface_field", "field")],
}


@pytest.mark.parametrize(("metal", "coil", "kind", "value"), CASES)
def test_meets_the_demand(metal, coil, kind, value):
    point, field = supply_of(coil).operate(FIELDS[metal, coil], Demand(kind, value), None)
    assert_allclose(reached(kind, point, field), value, rtol=MEETS)
    assert point.limit is None
    assert point.frequency == FREQUENCY


@pytest.mark.parametrize(("metal", "coil", "kind", "value"), CASES)
def test_far_limits_change_nothing(metal, coil, kind, value):
    far = {name: 1e9 for name, _, _ in LIMITS[coil]}
    point, field = supply_of(coil, **far).operate(FIELDS[metal, coil], Demand(kind, value), None)
    assert_allclose(reached(kind, point, field), value, rtol=MEETS)
    assert point.limit is None


@pytest.mark.parametrize("share", [0.97, 0.5, 0.1])
@pytest.mark.parametrize(("metal", "coil", "kind", "value"), CASES)
def test_every_limit_binds_and_is_named(metal, coil, kind, value, share):
    demand = Demand(kind, value)
    free = supply_of(coil).operate(FIELDS[metal, coil], demand, None)
    for name, held, reported in LIMITS[coil]:
        limit = share * reached(held, *free)
        point, field = supply_of(coil, **{name: limit}).operate(FIELDS[metal, coil], demand, None)
        assert_allclose(reached(held, point, field), limit, rtol=MEETS)
        assert point.limit == reported
        assert reached(kind, point, field) < value


@pytest.mark.parametrize(("metal", "coil", "kind", "value"), CASES)
def test_limit_just_above_what_is_needed_does_not_bind(metal, coil, kind, value):
    demand = Demand(kind, value)
    free = supply_of(coil).operate(FIELDS[metal, coil], demand, None)
    for name, held, _ in LIMITS[coil]:
        limit = 1.001 * reached(held, *free)
        point, field = supply_of(coil, **{name: limit}).operate(FIELDS[metal, coil], demand, None)
        assert_allclose(reached(kind, point, field), value, rtol=MEETS)
        assert point.limit is None


@pytest.mark.parametrize("metal", METALS)
@pytest.mark.parametrize("coil", [True, False])
def test_the_lowest_limit_wins(metal, coil):
    # Every limit takes its turn to be the lowest, whatever the order they are written in.
    demand = Demand("absorbed_power", 2e4)
    free = supply_of(coil).operate(FIELDS[metal, coil], demand, None)
    for lowest, held, reported in LIMITS[coil]:
        limits = {name: 0.9 * reached(quantity, *free) for name, quantity, _ in LIMITS[coil]}
        limits[lowest] = 0.3 * reached(held, *free)
        point, field = supply_of(coil, **limits).operate(FIELDS[metal, coil], demand, None)
        assert point.limit == reported
        assert_allclose(reached(held, point, field), limits[lowest], rtol=MEETS)
        for name, quantity, _ in LIMITS[coil]:
            assert reached(quantity, point, field) <= limits[name] * (1.0 + MEETS)


SAME_QUANTITY = [
    pytest.param(metal, coil, kind, name, value, id=f"{'coil' if coil else 'direct'}-{metal}-{kind}")
    for metal in METALS
    for coil in (True, False)
    for name, kind, _ in LIMITS[coil]
    for value in (BY_COIL if coil else DIRECT)[kind]
]


@pytest.mark.parametrize(("metal", "coil", "kind", "name", "value"), SAME_QUANTITY)
def test_demand_at_the_limit_is_met_and_not_limited(metal, coil, kind, name, value):
    point, field = supply_of(coil, **{name: value}).operate(FIELDS[metal, coil], Demand(kind, value), None)
    assert_allclose(reached(kind, point, field), value, rtol=MEETS)
    assert point.limit is None


@pytest.mark.parametrize(("metal", "coil", "kind", "value"), CASES)
def test_any_first_guess_leads_to_the_same_point(metal, coil, kind, value):
    demand = Demand(kind, value)
    point, field = supply_of(coil).operate(FIELDS[metal, coil], demand, None)
    for times in (0.01, 0.9, 30.0):
        H = times * field.H_surface_rms
        guess = (
            replace(point, coil_current_rms=times * point.coil_current_rms),
            replace(field, H_surface_rms=H, mu_r=np.ones_like(field.mu_r)),
        )
        again, other = supply_of(coil).operate(FIELDS[metal, coil], demand, guess)
        assert_allclose(reached(kind, again, other), value, rtol=MEETS)
        assert_allclose(other.power, field.power, rtol=1e-4)


@pytest.mark.parametrize("metal", METALS)
def test_figures_at_the_terminals_agree(metal):
    point, field = supply_of(True).operate(FIELDS[metal, True], Demand("supply_power", 2e4), None)
    total = field.impedance + WINDING.impedance(FREQUENCY)
    current = point.coil_current_rms
    assert_allclose(point.supply_power, point.coil_loss + field.power, rtol=1e-9)
    assert_allclose(point.coil_loss, WINDING.impedance(FREQUENCY).real * current**2, rtol=1e-12)
    assert_allclose(point.coil_voltage_rms, abs(total) * current, rtol=1e-12)
    assert_allclose(point.power_factor, point.supply_power / (point.coil_voltage_rms * current), rtol=1e-12)
    assert point.tank_loss == 0.0
    assert point.capacitor_voltage_rms is None


def test_direct_drive_has_no_electrical_figures():
    point, _ = supply_of(False).operate(FIELDS["steel", False], Demand("absorbed_power", 1e3), None)
    figures = [point.coil_current_rms, point.coil_voltage_rms, point.supply_power, point.coil_loss, point.power_factor]
    assert all(math.isnan(figure) for figure in figures)


@pytest.mark.parametrize("coil", [True, False])
def test_field_that_has_none_is_passed_on(coil):
    def broken(excitation, frequency, guess):
        raise NoConvergence("the field in the workpiece is not a number")

    with pytest.raises(NoConvergence, match="not a number"):
        supply_of(coil).operate(broken, Demand("absorbed_power", 1e3), None)


@pytest.mark.parametrize("coil", [True, False])
@pytest.mark.parametrize("power", [0.0, math.nan, math.inf])
def test_field_that_never_reaches_the_demand(coil, power):
    def dead(excitation, frequency, guess):
        return EddyField(np.zeros(3), power, 1e-3 + 1e-2j, excitation, np.ones(3), 1)

    with pytest.raises(NoConvergence, match="no operating point"):
        supply_of(coil).operate(dead, Demand("absorbed_power", 1e3), None)


@pytest.mark.parametrize("coil", [True, False])
def test_power_that_does_not_rise_with_the_field(coil):
    def flat(excitation, frequency, guess):
        return EddyField(np.zeros(3), 500.0, 1e-3 + 1e-2j, excitation, np.ones(3), 1)

    with pytest.raises(NoConvergence, match="no operating point"):
        supply_of(coil).operate(flat, Demand("absorbed_power", 1e3), None)


UNKNOWN = [(True, "off"), (False, "off"), (False, "coil_current"), (False, "coil_voltage"), (False, "supply_power")]


@pytest.mark.parametrize(("coil", "kind"), UNKNOWN)
def test_demand_it_cannot_know_is_refused(coil, kind):
    # Taking amperes for watts would be silent.
    with pytest.raises(ValueError):
        supply_of(coil).operate(FIELDS["aluminium", coil], Demand(kind, 0.0 if kind == "off" else 300.0), None)
