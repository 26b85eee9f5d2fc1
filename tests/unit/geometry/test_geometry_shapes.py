"""Volumes, areas and links of bar, tube and plate against closed forms for the whole workpiece."""

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from thermal.geometry.shapes import cylinder, plate

SIZES = st.lists(st.floats(0.01, 1.0), min_size=2, max_size=40)
LENGTHS = st.floats(1e-3, 3.0)


def edges_of(sizes, inner, outer):
    depth = np.concatenate([[0.0], np.cumsum(sizes)])
    edges = inner + (outer - inner) * depth / depth[-1]
    edges[-1] = outer
    return edges


def sound(mesh):
    """What holds for every shape."""
    n = mesh.volume.size
    assert mesh.edges.size == n + 1
    assert mesh.r.size == n
    assert np.all(np.diff(mesh.r) > 0.0)
    assert np.all(mesh.volume > 0.0)
    np.testing.assert_array_equal(mesh.left, np.arange(n - 1))
    np.testing.assert_array_equal(mesh.right, mesh.left + 1)
    # From a cell centre to the shared face and on to the next centre.
    assert_allclose(mesh.r[mesh.left] + mesh.gap_left, mesh.edges[1:-1], rtol=1e-12)
    assert_allclose(mesh.r[mesh.right] - mesh.gap_right, mesh.edges[1:-1], rtol=1e-9, atol=1e-15)
    outer = mesh.faces["outer"]
    np.testing.assert_array_equal(outer.cells, [n - 1])
    assert_allclose(outer.gap, mesh.edges[-1] - mesh.r[-1], rtol=1e-9)
    np.testing.assert_array_equal(mesh.faces["ends"].cells, np.arange(n))
    assert np.all(mesh.faces["ends"].gap == 0.0)


@settings(deadline=None, max_examples=60)
@given(sizes=SIZES, radius=st.floats(1e-3, 0.5), length=LENGTHS)
def test_bar(sizes, radius, length):
    mesh = cylinder(edges_of(sizes, 0.0, radius), length)
    sound(mesh)
    section = math.pi * radius**2
    assert mesh.kind == "cylindrical"
    assert_allclose(mesh.volume.sum(), section * length, rtol=1e-12)
    assert_allclose(mesh.volume.sum() / mesh.length, section, rtol=1e-12)
    assert_allclose(mesh.perimeter, 2.0 * math.pi * radius, rtol=1e-12)
    assert_allclose(mesh.faces["outer"].area, 2.0 * math.pi * radius * length, rtol=1e-12)
    assert_allclose(mesh.faces["ends"].area.sum(), 2.0 * section, rtol=1e-12)
    assert_allclose(mesh.area, 2.0 * math.pi * mesh.edges[1:-1] * length, rtol=1e-12)
    assert set(mesh.faces) == {"outer", "ends"}


@settings(deadline=None, max_examples=60)
@given(sizes=SIZES, radius=st.floats(1e-3, 0.5), bore=st.floats(0.01, 0.95), length=LENGTHS)
def test_tube(sizes, radius, bore, length):
    inner = bore * radius
    mesh = cylinder(edges_of(sizes, inner, radius), length)
    sound(mesh)
    section = math.pi * (radius**2 - inner**2)
    assert_allclose(mesh.volume.sum(), section * length, rtol=1e-11)
    assert_allclose(mesh.volume.sum() / mesh.length, section, rtol=1e-11)
    assert_allclose(mesh.perimeter, 2.0 * math.pi * radius, rtol=1e-12)
    assert_allclose(mesh.faces["ends"].area.sum(), 2.0 * section, rtol=1e-11)
    face = mesh.faces["bore"]
    np.testing.assert_array_equal(face.cells, [0])
    assert_allclose(face.area, 2.0 * math.pi * inner * length, rtol=1e-12)
    assert_allclose(face.gap, mesh.r[0] - inner, rtol=1e-9)


@settings(deadline=None, max_examples=60)
@given(sizes=SIZES, thickness=st.floats(1e-3, 0.2), width=st.floats(0.01, 2.0), length=LENGTHS)
def test_plate(sizes, thickness, width, length):
    mesh = plate(edges_of(sizes, 0.0, thickness / 2.0), width, length)
    sound(mesh)
    assert mesh.kind == "planar"
    assert mesh.width == width
    assert_allclose(mesh.volume.sum(), thickness * width * length, rtol=1e-12)
    assert_allclose(mesh.volume.sum() / mesh.length, thickness * width, rtol=1e-12)
    assert_allclose(mesh.perimeter, 2.0 * width, rtol=1e-12)
    assert_allclose(mesh.faces["outer"].area, 2.0 * width * length, rtol=1e-12)
    # Two end faces and two narrow edges.
    assert_allclose(mesh.faces["ends"].area.sum(), 2.0 * thickness * width, rtol=1e-12)
    assert_allclose(mesh.faces["edges"].area.sum(), 2.0 * thickness * length, rtol=1e-12)
    assert_allclose(mesh.area, 2.0 * width * length, rtol=1e-12)


def test_whole_surface_of_a_plate():
    mesh = plate(np.linspace(0.0, 0.01, 5), 0.3, 0.5)
    surface = sum(face.area.sum() for face in mesh.faces.values())
    assert_allclose(surface, 2.0 * (0.02 * 0.3 + 0.3 * 0.5 + 0.5 * 0.02), rtol=1e-12)


@pytest.mark.parametrize("inner", [0.0, 0.004])
def test_steady_conduction_through_the_links(inner):
    # Conductance area/(gap_left + gap_right) of every link in series against the closed form ln(r2/r1)/(2 pi L): the
    # areas belong to the faces between the centres (H. S. Carslaw, J. C. Jaeger, Conduction of Heat in Solids, 2nd ed.,
    # 7.2).
    mesh = cylinder(np.linspace(inner, 0.02, 401), 0.3)
    first = 100
    resistance = ((mesh.gap_left + mesh.gap_right) / mesh.area)[first:].sum()
    exact = math.log(mesh.r[-1] / mesh.r[first]) / (2.0 * math.pi * 0.3)
    assert_allclose(resistance, exact, rtol=1e-4)
