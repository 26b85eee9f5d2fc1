"""What every heat source must do, whatever the shape and with or without a coil."""

import math
from dataclasses import dataclass

import numpy as np
import pytest
from numpy.testing import assert_allclose

from materials import get
from materials.magnetics import Magnetics
from thermal.eddy.finite_coil import FluxPath, SectionSource
from thermal.eddy.radial import RadialSolver
from thermal.errors import NoConvergence
from thermal.geometry.grading import graded_edges
from thermal.geometry.inductance import nagaoka
from thermal.geometry.shapes import cylinder, plate

LENGTH, OUTER = 0.1, 0.02
TURNS, COIL_LENGTH, BORE = 9.0, 0.12, 0.032
STEEL = get("steel-c45")
CURIE = STEEL.magnetics.curie_temperature
assert CURIE is not None


def mesh_of(shape):
    match shape:
        case "bar":
            return cylinder(graded_edges(0.0, OUTER, 5e-4), LENGTH)
        case "tube":
            return cylinder(graded_edges(0.6 * OUTER, OUTER, 5e-4), LENGTH)
        case _:
            return plate(graded_edges(0.0, 0.3 * OUTER, 5e-4), OUTER, LENGTH)


def path_of(mesh, shape):
    area = math.pi * BORE**2
    enclosed = 0.6 * OUTER * OUTER if shape == "plate" else math.pi * OUTER**2
    return FluxPath(TURNS, COIL_LENGTH, area, nagaoka(2.0 * BORE / COIL_LENGTH), LENGTH, enclosed, mesh.perimeter)


@dataclass(frozen=True)
class Subject:
    shape: str
    coil: bool

    def source(self, resistivity, magnetics):
        mesh = mesh_of(self.shape)
        path = path_of(mesh, self.shape) if self.coil else None
        return SectionSource(mesh, RadialSolver(mesh), resistivity, magnetics, path)

    def excitation(self, H):
        """What brings about a surface field of the order of H [A/m]."""
        return H * COIL_LENGTH / TURNS if self.coil else H


SUBJECTS = {
    "bar": Subject("bar", False),
    "tube": Subject("tube", False),
    "plate": Subject("plate", False),
    "bar in a coil": Subject("bar", True),
    "tube in a coil": Subject("tube", True),
    "plate in a coil": Subject("plate", True),
}
SUBJECT = pytest.mark.parametrize("subject", SUBJECTS.values(), ids=SUBJECTS)
STATES = {
    # Resistivity law, permeability and temperature at the axis and at the surface [K].
    "aluminium": (get("aluminium-6082").resistivity, get("aluminium-6082").magnetics, 400.0, 500.0),
    "constant mu_r": (STEEL.resistivity, Magnetics.constant(30.0), 300.0, 900.0),
    "steel, cold": (STEEL.resistivity, STEEL.magnetics, 293.15, 293.15),
    "steel, surface past Curie": (STEEL.resistivity, STEEL.magnetics, CURIE - 200.0, CURIE + 40.0),
    "steel, all past Curie": (STEEL.resistivity, STEEL.magnetics, CURIE + 5.0, CURIE + 60.0),
}
LINEAR = ["aluminium", "constant mu_r", "steel, all past Curie"]
MAGNETIC = ["steel, cold", "steel, surface past Curie"]
FREQUENCY = 8e3


def at(subject, state):
    resistivity, magnetics, T_inside, T_outside = STATES[state]
    source = subject.source(resistivity, magnetics)
    T = np.linspace(T_inside, T_outside, source.mesh.r.size)
    return source, T


@SUBJECT
@pytest.mark.parametrize("state", STATES)
@pytest.mark.parametrize("H", [500.0, 2e4, 3e5])
def test_heat_adds_up_to_the_power(subject, state, H):
    source, T = at(subject, state)
    field = source.at(T)(subject.excitation(H), FREQUENCY, None)
    assert field.heat.shape == field.mu_r.shape == T.shape
    assert np.all(field.heat >= 0.0)
    assert field.power > 0.0
    assert_allclose(field.heat @ source.mesh.volume, field.power, rtol=1e-12)
    assert field.solves >= 1


@SUBJECT
@pytest.mark.parametrize("state", STATES)
def test_power_is_what_the_terminals_see(subject, state):
    source, T = at(subject, state)
    current = subject.excitation(3e4)
    field = source.at(T)(current, FREQUENCY, None)
    if subject.coil:
        assert_allclose(field.power, field.impedance.real * current**2, rtol=1e-10)
        assert field.impedance.imag > 0.0
    else:
        assert field.impedance == 0
        assert field.H_surface_rms == current


@SUBJECT
@pytest.mark.parametrize("state", LINEAR)
def test_linear_workpiece_responds_in_proportion(subject, state):
    source, T = at(subject, state)
    field_of = source.at(T)
    excitation = subject.excitation(1e4)
    one = field_of(excitation, FREQUENCY, None)
    for times in (0.01, 3.0, 50.0):
        for field in (field_of(times * excitation, FREQUENCY, one), source.at(T)(times * excitation, FREQUENCY, None)):
            assert_allclose(field.heat, one.heat * times**2, rtol=1e-12)
            assert_allclose(field.power, one.power * times**2, rtol=1e-12)
            assert_allclose(field.H_surface_rms, one.H_surface_rms * times, rtol=1e-12)
            assert_allclose(field.impedance, one.impedance, rtol=1e-12)


@SUBJECT
@pytest.mark.parametrize("state", MAGNETIC)
def test_magnetic_workpiece_saturates(subject, state):
    source, T = at(subject, state)
    field_of = source.at(T)
    low, high = (field_of(subject.excitation(H), FREQUENCY, None) for H in (2e4, 4e4))
    assert 2.0 < high.power / low.power < 4.0
    assert low.mu_r[0] > 1.0
    assert high.mu_r[-1] <= low.mu_r[-1]


@SUBJECT
@pytest.mark.parametrize("state", STATES)
def test_two_frequencies_do_not_mix(subject, state):
    source, T = at(subject, state)
    field_of = source.at(T)
    excitation = subject.excitation(1e4)
    field_of(excitation, 500.0, None)
    second = field_of(excitation, 50e3, None)
    fresh = source.at(T)(excitation, 50e3, None)
    assert_allclose(second.heat, fresh.heat, rtol=1e-12)


@SUBJECT
@pytest.mark.parametrize("state", STATES)
def test_guess_does_not_change_the_field(subject, state):
    source, T = at(subject, state)
    excitation = subject.excitation(5e4)
    cold = source.at(T)(excitation, FREQUENCY, None)
    far = source.at(T)(subject.excitation(1e3), FREQUENCY, None)
    again = source.at(T)(excitation, FREQUENCY, far)
    assert_allclose(again.power, cold.power, rtol=1e-4)
    assert_allclose(again.heat, cold.heat, atol=1e-3 * cold.heat.max())


@SUBJECT
def test_settled_guess_costs_one_solve(subject):
    source, T = at(subject, "steel, cold")
    excitation = subject.excitation(5e4)
    first = source.at(T)(excitation, FREQUENCY, None)
    again = source.at(T)(excitation, FREQUENCY, first)
    assert again.solves == 1 < first.solves
    assert_allclose(again.heat, first.heat, rtol=1e-12)


@SUBJECT
@pytest.mark.parametrize("H", [500.0, 2e4, 3e5])
def test_no_permeability_above_curie(subject, H):
    source, T = at(subject, "steel, surface past Curie")
    field = source.at(T)(subject.excitation(H), FREQUENCY, None)
    # A cell the Curie temperature passes through keeps the mean of both sides.
    within = np.diff(T).max()
    assert np.all(field.mu_r[CURIE + within <= T] == 1.0)
    assert np.all(field.mu_r[CURIE - within > T] > 1.0)
    source, T = at(subject, "steel, all past Curie")
    field = source.at(T)(subject.excitation(H), FREQUENCY, None)
    assert np.all(field.mu_r == 1.0)


@SUBJECT
def test_permeability_goes_to_one_smoothly(subject):
    # Towards the Curie point from below, the power approaches that of the same piece just above it, over the 0.05 K on
    # either side that the smallest mean spans.
    resistivity, magnetics, *_ = STATES["steel, cold"]
    source = subject.source(resistivity, magnetics)
    n = source.mesh.r.size
    excitation = subject.excitation(5e4)

    def power(T):
        return source.at(np.full(n, T))(excitation, FREQUENCY, None).power

    above = power(CURIE + 0.06)
    gaps = [abs(power(CURIE - below) / above - 1.0) for below in (100.0, 10.0, 1.0, 0.0, -0.03, -0.0499)]
    assert np.all(np.diff(gaps) < 0.0)
    assert gaps[-1] < 0.02


@pytest.mark.parametrize("state", ["aluminium", "steel, cold"])
def test_no_field_where_the_resistivity_is_not_a_number(state):
    subject = SUBJECTS["bar in a coil"]
    _, magnetics, T, _ = STATES[state]
    source = subject.source(lambda T: np.full(T.shape, np.nan), magnetics)
    with pytest.raises(NoConvergence):
        source.at(np.full(source.mesh.r.shape, T))(subject.excitation(1e4), FREQUENCY, None)
