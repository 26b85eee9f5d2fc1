"""Peak and rms: each test is off by a factor of two (or of 1.2 to 1.4 in mu_r) where they are mixed."""

import math

import numpy as np
import pytest
from numpy.testing import assert_allclose

from materials import get
from thermal.eddy.finite_coil import FluxPath, SectionSource
from thermal.eddy.radial import RadialSolver
from thermal.geometry.grading import graded_edges
from thermal.geometry.shapes import cylinder

LENGTH = 0.2


class Noting:
    """A permeability that notes the amplitudes it is asked for."""

    linear = False
    curie_temperature = None

    def __init__(self):
        self.asked = []

    def factor(self, T):
        return np.ones_like(T)

    def effective_susceptibility(self, H_peak):
        self.asked.append(np.array(H_peak))
        return np.full_like(H_peak, 9.0)


class Constant:
    linear = True
    curie_temperature = None

    def __init__(self, mu_r=1.0):
        self.mu_r = mu_r

    def factor(self, T):
        return np.ones_like(T)

    def effective_susceptibility(self, H_peak):
        return np.full_like(H_peak, self.mu_r - 1.0)


def source(rho, magnetics, delta, turns=None, radius=0.025):
    mesh = cylinder(graded_edges(0.0, radius, delta), LENGTH)
    path = None
    if turns is not None:
        # A sheet right on the surface of a piece of its length, K = 1: H = N I/l exactly.
        area = math.pi * radius**2
        path = FluxPath(turns, LENGTH, area, 1.0, LENGTH, area, mesh.perimeter)
    return SectionSource(mesh, RadialSolver(mesh), lambda T: np.full(T.shape, rho), magnetics, path)


CASES = [
    # EM-03; Lupi 2017 eqs 6.9-6.17, Davies 1990 eq. 9.10 (cited after a public notebook): P' [W/m] at 1e5 A/m PEAK,
    # a 25 mm, 1 kHz.
    pytest.param(1.2e-6, 1.0, 0.01743454986, 27017.60696, id="hot"),
    pytest.param(2.5e-7, 40.0, 0.00125822983, 152100.5058, id="cold"),
]


@pytest.mark.parametrize(("rho", "mu_r", "delta", "power"), CASES)
def test_surface_field_is_rms(rho, mu_r, delta, power):
    part = source(rho, Constant(mu_r), delta)
    T = np.full(part.mesh.r.shape, 300.0)
    field = part.at(T)(1e5 / math.sqrt(2.0), 1e3, None)
    assert field.H_surface_rms == 1e5 / math.sqrt(2.0)
    assert_allclose(field.power, power * LENGTH, rtol=2e-3)
    assert_allclose(field.heat @ part.mesh.volume, power * LENGTH, rtol=2e-3)


@pytest.mark.parametrize(("rho", "mu_r", "delta", "power"), CASES)
def test_coil_current_is_rms(rho, mu_r, delta, power):
    turns = 12
    part = source(rho, Constant(mu_r), delta, turns)
    T = np.full(part.mesh.r.shape, 300.0)
    current = 1e5 / math.sqrt(2.0) * LENGTH / turns
    field = part.at(T)(current, 1e3, None)
    assert_allclose(field.H_surface_rms, 1e5 / math.sqrt(2.0), rtol=1e-12)
    assert_allclose(field.power, power * LENGTH, rtol=2e-3)
    assert_allclose(field.impedance.real * current**2, power * LENGTH, rtol=2e-3)


@pytest.mark.parametrize("turns", [None, 12])
def test_permeability_is_looked_up_at_the_peak(turns):
    # a/delta is 0.02: the field is the same everywhere, so every cell must be asked at sqrt(2) times the rms field.
    magnetics = Noting()
    part = source(1e-4, magnetics, 1.0, turns)
    T = np.full(part.mesh.r.shape, 300.0)
    excitation = 3e4 if turns is None else 3e4 * LENGTH / turns
    field = part.at(T)(excitation, 10.0, None)
    for asked in magnetics.asked:
        assert_allclose(asked, 3e4 * math.sqrt(2.0), rtol=1e-4)
    assert field.mu_r == pytest.approx(np.full(T.shape, 10.0))


@pytest.mark.parametrize("key", ["steel-c45", "iron"])
def test_permeability_of_steel_in_a_uniform_field(key):
    steel = get(key)
    part = source(1e-3, steel.magnetics, 1.0)
    T = np.full(part.mesh.r.shape, 293.15)
    field = part.at(T)(2e4, 10.0, None)
    at_peak = float(steel.magnetics.mu_r(2e4 * math.sqrt(2.0), 293.15))
    at_rms = float(steel.magnetics.mu_r(2e4, 293.15))
    assert at_rms > 1.3 * at_peak
    assert_allclose(field.mu_r, at_peak, rtol=1e-3)
