"""Temperatures at the core, at a depth and on average."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from thermal.geometry.grading import graded_edges
from thermal.geometry.sampling import Sampler
from thermal.geometry.shapes import cylinder, plate

OUTER = 0.03
MESHES = {
    "bar": cylinder(graded_edges(0.0, OUTER, 1e-3), 0.1),
    "plate": plate(graded_edges(0.0, OUTER, 1e-3), 0.2, 0.1),
    "tube": cylinder(graded_edges(0.01, OUTER, 1e-3), 0.1),
}


@settings(deadline=None, max_examples=60)
@given(shape=st.sampled_from(["bar", "plate"]), axis=st.floats(300.0, 1500.0), rise=st.floats(-500.0, 500.0))
def test_core_of_a_parabola_is_exact(shape, axis, rise):
    mesh = MESHES[shape]
    T = axis + rise * (mesh.r / OUTER) ** 2
    extended = Sampler.of(mesh).extended(T, axis + rise, None)
    assert_allclose(extended[0], axis, rtol=1e-12)
    assert_allclose(extended[1:-1], T, rtol=0.0)
    assert extended[-1] == axis + rise


@pytest.mark.parametrize("shape", ["bar", "plate"])
def test_core_does_not_hang_on_the_grid(shape):
    # A quarter of a cosine: the error of the parabola through two cells is of fourth order.
    errors = []
    for cells in (10, 20):
        edges = np.linspace(0.0, OUTER, cells + 1)
        mesh = cylinder(edges, 0.1) if shape == "bar" else plate(edges, 0.2, 0.1)
        T = 800.0 + 300.0 * np.cos(np.pi / 2.0 * mesh.r / OUTER)
        errors.append(abs(Sampler.of(mesh).extended(T, 800.0, None)[0] - 1100.0))
    assert 13.0 < errors[0] / errors[1] < 19.0


def test_core_of_a_tube_is_its_bore():
    mesh = MESHES["tube"]
    T = 500.0 + 1e4 * mesh.r
    sampler = Sampler.of(mesh)
    assert sampler.extended(T, 900.0, 612.0)[0] == 612.0
    assert sampler.extended(T, 900.0, None)[0] == T[0]
    assert sampler.nodes[0] == 0.01


@pytest.mark.parametrize("shape", MESHES)
def test_depth_of_a_straight_profile_is_exact(shape):
    mesh = MESHES[shape]
    sampler = Sampler.of(mesh)
    extended = 400.0 + 2e4 * sampler.nodes
    for depth in (0.0, 1e-4, 3.3e-3, 0.015, OUTER - float(mesh.edges[0])):
        assert_allclose(sampler.at_depth(extended, depth), 400.0 + 2e4 * (OUTER - depth), rtol=1e-12)


@pytest.mark.parametrize("shape", MESHES)
def test_depth_zero_is_the_surface_and_full_depth_the_core(shape):
    mesh = MESHES[shape]
    sampler = Sampler.of(mesh)
    extended = sampler.extended(700.0 + 1e5 * mesh.r**2, 900.0, 650.0 if shape == "tube" else None)
    assert sampler.at_depth(extended, 0.0) == 900.0
    assert_allclose(sampler.at_depth(extended, OUTER - float(mesh.edges[0])), extended[0], rtol=1e-12)


MEANS = {
    # Volume mean of (r/R)^2 over the section: closed forms.
    "bar": 0.5,
    "plate": 1.0 / 3.0,
    "tube": (1.0 + (0.01 / OUTER) ** 2) / 2.0,
}


@pytest.mark.parametrize("shape", MESHES)
def test_mean(shape):
    mesh = MESHES[shape]
    sampler = Sampler.of(mesh)
    assert_allclose(sampler.volume_share.sum(), 1.0, rtol=1e-13)

    def mean(T):
        return sampler.readings(sampler.extended(T, float(T[-1]), float(T[0])), {})["mean"]

    assert_allclose(mean(np.full(mesh.r.shape, 812.0)), 812.0, rtol=1e-13)
    assert_allclose(mean((mesh.r / OUTER) ** 2), MEANS[shape], rtol=1e-3)


def test_the_hottest_point_is_found_between_the_nodes():
    sampler = Sampler.of(MESHES["bar"])
    top = 0.8 * OUTER
    profile = 1000.0 - 1e6 * (sampler.nodes - top) ** 2
    assert_allclose(sampler.hottest_depth(profile), OUTER - top, rtol=1e-9)
    assert sampler.hottest_depth(sampler.nodes) == 0.0
    assert_allclose(sampler.hottest_depth(-sampler.nodes), OUTER, rtol=1e-12)
