"""A hot, non-magnetic skin over a magnetic core: the state of a bar whose surface has passed the Curie point."""

import math

import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy.special import ive, kve

from thermal.eddy.exact import cylinder_field, skin_depth
from thermal.eddy.radial import RadialSolver
from thermal.geometry.grading import graded_edges
from thermal.geometry.shapes import cylinder

A, LENGTH, FREQUENCY = 0.025, 0.1, 10e3
HOT, COLD = (1.1e-6, 1.0), (7e-7, 25.0)
"""Resistivity [ohm m] and mu_r outside and inside; of the size found in steel near 750 °C (common practice)."""


def exact_field(r, interface, cold=COLD):
    """H and E = rho dH/dr at radii r for H(A) = 1: Bessel functions matched at the interface."""
    (rho1, mu1), (rho2, mu2) = cold, HOT
    g1 = (1.0 + 1.0j) / float(skin_depth(rho1, FREQUENCY, mu1))
    g2 = (1.0 + 1.0j) / float(skin_depth(rho2, FREQUENCY, mu2))

    # Core: H = c I0(g1 r)/I0(g1 interface). Layer: both kinds, scaled at its outer and inner edge.
    def core(order, at):
        z = g1 * at
        return ive(order, z) / ive(0, g1 * interface) * np.exp((z - g1 * interface).real)

    def first(order, at):
        z = g2 * at
        return ive(order, z) * np.exp((z - g2 * A).real)

    def second(order, at):
        return kve(order, g2 * at) * np.exp(-(g2 * at - g2 * interface))

    rows = np.array(
        [
            [1.0, -first(0, interface), -second(0, interface)],
            [rho1 * g1 * core(1, interface), -rho2 * g2 * first(1, interface), rho2 * g2 * second(1, interface)],
            [0.0, first(0, A), second(0, A)],
        ]
    )
    c, p, q = np.linalg.solve(rows, np.array([0.0, 0.0, 1.0]))
    inside = r < interface
    H = np.where(inside, c * core(0, r), p * first(0, r) + q * second(0, np.maximum(r, interface)))
    E_layer = rho2 * g2 * (p * first(1, r) - q * second(1, np.maximum(r, interface)))
    return H, np.where(inside, rho1 * g1 * c * core(1, r), E_layer)


def layered(layer):
    """Mesh and field of a bar with a hot layer of about that thickness [m], ended on a cell face."""
    cold_depth = float(skin_depth(COLD[0], FREQUENCY, COLD[1]))
    edges = graded_edges(0.0, A, cold_depth)
    face = int(np.argmin(np.abs(edges - (A - layer))))
    mesh = cylinder(edges, LENGTH)
    core = np.arange(mesh.r.size) < face
    rho, mu_r = np.where(core, COLD[0], HOT[0]), np.where(core, COLD[1], HOT[1])
    return mesh, core, float(edges[face]), RadialSolver(mesh).profile(rho, mu_r, FREQUENCY)


THICKNESSES = [0.1, 0.25, 0.5, 0.75, 1.0, 1.5, 2.0]


@pytest.mark.parametrize("share", THICKNESSES)
def test_hot_skin_over_magnetic_core(share):
    mesh, core, interface, profile = layered(share * float(skin_depth(HOT[0], FREQUENCY)))
    H, E = exact_field(mesh.edges, interface)
    assert_allclose(profile.impedance, E[-1], rtol=1e-3)
    assert_allclose(profile.H, H, atol=1e-3)
    inflow = 2.0 * math.pi * mesh.edges * LENGTH * (E * H.conjugate()).real
    heat = np.diff(inflow)
    found = profile.heat * mesh.volume
    assert_allclose(found.sum(), heat.sum(), rtol=1e-3)
    assert_allclose(found[core].sum(), heat[core].sum(), rtol=5e-3)
    density = heat / mesh.volume
    assert_allclose(profile.heat, density, atol=5e-3 * density.max())


def test_power_follows_the_layer_and_not_the_surface():
    # With the surface already non-magnetic the power falls on as the layer grows, from near the cold bar's to below
    # the hot bar's; a surface-property shortcut would give the hot bar's power throughout.
    depth = float(skin_depth(HOT[0], FREQUENCY))
    power = [float(p.heat @ m.volume) for m, _, _, p in (layered(x * depth) for x in THICKNESSES)]
    assert np.all(np.diff(power[:6]) < 0.0)
    mesh, *_ = layered(0.5 * depth)
    n = mesh.r.size
    hot = float(RadialSolver(mesh).profile(np.full(n, HOT[0]), np.full(n, HOT[1]), FREQUENCY).heat @ mesh.volume)
    assert power[0] > 2.0 * hot
    assert power[5] < hot


def test_matching_reduces_to_a_uniform_bar():
    r = np.linspace(0.001, A, 20)
    H, _ = exact_field(r, 0.4 * A, cold=HOT)
    assert_allclose(H, cylinder_field(r / A, A / float(skin_depth(HOT[0], FREQUENCY))), rtol=1e-10)
