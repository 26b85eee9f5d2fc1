"""Power balance of the field: what flows in through the surface is what the cells turn into heat."""

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose
from scipy.integrate import trapezoid

from materials import get
from thermal.constants import MU_0
from thermal.eddy import exact
from thermal.eddy.radial import RadialSolver
from thermal.geometry.grading import graded_edges
from thermal.geometry.shapes import cylinder, plate

A, LENGTH, RHO = 0.025, 0.1, 5e-7
SHAPES = ["bar", "tube", "thin tube", "plate"]
BALANCE = 1e-12
"""Rounding only."""


def mesh_of(shape, delta, refinement=1):
    inner = {"bar": 0.0, "tube": 0.6 * A, "thin tube": 0.97 * A, "plate": 0.0}[shape]
    edges = graded_edges(inner, A, delta, refinement)
    return plate(edges, 0.08, LENGTH) if shape == "plate" else cylinder(edges, LENGTH)


def inflow(mesh, profile):
    """Poynting flux through the outer surface [W] at 1 A/m rms."""
    return profile.impedance.real * float(mesh.faces["outer"].area[0])


@pytest.mark.parametrize("shape", SHAPES)
@pytest.mark.parametrize("xi", [0.05, 0.2, 1.0, 2.0, 5.0, 30.0, 300.0, 2000.0])
def test_uniform_section(shape, xi):
    delta = A / xi
    frequency = RHO / (math.pi * MU_0 * delta**2)
    mesh = mesh_of(shape, delta)
    n = mesh.r.size
    profile = RadialSolver(mesh).profile(np.full(n, RHO), np.ones(n), frequency)
    assert np.all(profile.heat >= 0.0)
    assert_allclose(profile.heat @ mesh.volume, inflow(mesh, profile), rtol=BALANCE)


@settings(deadline=None, max_examples=80)
@given(
    shape=st.sampled_from(SHAPES),
    xi=st.floats(0.05, 2000.0),
    seed=st.integers(0, 2**32 - 1),
)
def test_any_properties_in_any_cell(shape, xi, seed):
    delta = A / xi
    frequency = RHO / (math.pi * MU_0 * delta**2)
    mesh = mesh_of(shape, delta)
    rng = np.random.default_rng(seed)
    rho = RHO * np.exp(rng.uniform(-1.0, 1.0, mesh.r.size))
    mu_r = np.exp(rng.uniform(0.0, 6.0, mesh.r.size))
    profile = RadialSolver(mesh).profile(rho, mu_r, frequency)
    assert np.all(profile.heat >= 0.0)
    assert_allclose(profile.heat @ mesh.volume, inflow(mesh, profile), rtol=BALANCE)


@pytest.mark.parametrize("shape", SHAPES)
@pytest.mark.parametrize("key", ["steel-c45", "iron"])
@pytest.mark.parametrize("T", [293.15, 1000.0])
def test_saturating_section(shape, key, T):
    metal = get(key)
    for frequency in (50.0, 3e3, 2e5):
        for H in (1e3, 2e4, 3e5):
            rho = float(metal.resistivity(T))
            mu_r = float(metal.magnetics.mu_r(math.sqrt(2.0) * H, T))
            mesh = mesh_of(shape, float(exact.skin_depth(rho, frequency, mu_r)))
            n = mesh.r.size
            factor = metal.magnetics.factor(np.full(n, T))
            profile, _, _ = RadialSolver(mesh).settled(
                np.full(n, rho), metal.magnetics, factor, frequency, lambda Z, H=H: H, np.full(n, mu_r)
            )
            assert np.all(profile.heat >= 0.0)
            assert_allclose(profile.heat @ mesh.volume, inflow(mesh, profile), rtol=BALANCE)


def test_one_cell_left_out_shows():
    delta = A / 10.0
    mesh = mesh_of("bar", delta)
    n = mesh.r.size
    profile = RadialSolver(mesh).profile(np.full(n, RHO), np.ones(n), RHO / (math.pi * MU_0 * delta**2))
    parts = profile.heat * mesh.volume
    # All but the core, where less than the rounding error is lost.
    for cell in np.flatnonzero(mesh.r > 0.2 * A):
        off = (parts.sum() - parts[cell]) / inflow(mesh, profile) - 1.0
        assert abs(off) > 1e3 * BALANCE


@pytest.mark.parametrize("shape", ["tube", "thin tube"])
@pytest.mark.parametrize("xi", [0.5, 2.0, 5.0])
def test_flux_of_the_bore_left_out_shows(shape, xi):
    # E at the outer surface is the voltage of all the flux inside over the circumference. Without the share of the
    # bore, j w mu0 pi b^2 H(b), the flux of power no longer fits the heat.
    delta = A / xi
    frequency = RHO / (math.pi * MU_0 * delta**2)
    mesh = mesh_of(shape, delta)
    n = mesh.r.size
    profile = RadialSolver(mesh).profile(np.full(n, RHO), np.ones(n), frequency)
    bore = 2j * math.pi * frequency * MU_0 * mesh.edges[0] ** 2 / 2.0 * profile.H[0] / A
    short = (profile.impedance - bore).real * float(mesh.faces["outer"].area[0])
    power = float(profile.heat @ mesh.volume)
    assert abs(inflow(mesh, profile) / power - 1.0) < BALANCE
    assert abs(short / power - 1.0) > 0.01


@pytest.mark.parametrize("shape", SHAPES)
def test_flux_inside_is_the_voltage_around(shape):
    # Faraday over the whole section by another rule than the solver's: the trapezoid over H on the faces of a fine
    # grid.
    delta = A / 4.0
    frequency = RHO / (math.pi * MU_0 * delta**2)
    mesh = mesh_of(shape, delta, refinement=8)
    n = mesh.r.size
    profile = RadialSolver(mesh).profile(np.full(n, RHO), np.ones(n), frequency)
    weight = np.ones_like(mesh.edges) if shape == "plate" else mesh.edges
    metal = trapezoid(profile.H * weight, mesh.edges)
    bore = 0.0 if shape == "plate" else profile.H[0] * mesh.edges[0] ** 2 / 2.0
    voltage = 2j * math.pi * frequency * MU_0 * (metal + bore) / (1.0 if shape == "plate" else A)
    assert_allclose(profile.impedance, voltage, rtol=1e-4)
