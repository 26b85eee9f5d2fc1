"""Means over cells of a law that drops within a cell, and profiles read between the cells."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from materials import get
from thermal.eddy.cell_mean import CellMean
from thermal.eddy.finite_coil import straight
from thermal.geometry.grading import graded_edges
from thermal.geometry.shapes import cut, cylinder, plate

MAGNETICS = get("steel-c45").magnetics
CURIE = MAGNETICS.curie_temperature
MESH = cylinder(graded_edges(0.0, 0.03, 0.5e-3), 0.2)


@pytest.mark.parametrize("gradient", [-3e4, -2e3, 0.0, 8e3])
def test_mean_equals_a_fine_average_over_each_cell(gradient):
    T = CURIE - 8.0 + gradient * (MESH.r - 0.028)
    found = CellMean(MESH, MAGNETICS.factor, CURIE)(T)
    for cell in (1, 5, MESH.r.size // 2, MESH.r.size - 1):
        inside = np.linspace(MESH.edges[cell], MESH.edges[cell + 1], 20001)
        at = CURIE - 8.0 + gradient * (inside - 0.028)
        if abs(at[-1] - at[0]) < 0.1:
            expected = float(MAGNETICS.factor(T[cell]))
            assert found[cell] == pytest.approx(expected, abs=2e-3)
        else:
            expected = np.trapezoid(MAGNETICS.factor(at), inside) / (inside[-1] - inside[0])
            assert found[cell] == pytest.approx(expected, abs=5e-4)


def test_mean_of_a_gradual_law_is_the_law():
    T = np.linspace(300.0, 900.0, MESH.r.size)
    found = CellMean(MESH, MAGNETICS.factor, CURIE)(T)
    assert_allclose(found, MAGNETICS.factor(T), atol=1e-3)


def test_nothing_is_left_above_the_end():
    assert not CellMean(MESH, MAGNETICS.factor, CURIE)(np.full(MESH.r.size, CURIE + 1.0)).any()


def test_straight_profiles_are_read_exactly():
    fine = cut(MESH, 3)
    found = straight(fine.r, MESH.r, 300.0 + 2e4 * MESH.r)
    assert_allclose(found[2:], 300.0 + 2e4 * fine.r[2:], rtol=1e-12)
    assert found[0] == 300.0 + 2e4 * MESH.r[0]


@pytest.mark.parametrize("mesh", [MESH, plate(graded_edges(0.0, 0.01, 1e-3), 0.1, 0.2)])
def test_cut_cells_are_the_same_workpiece(mesh):
    fine = cut(mesh, 3)
    assert_allclose(fine.volume.reshape(-1, 3).sum(axis=1), mesh.volume, rtol=1e-12)
    assert fine.kind == mesh.kind and fine.length == mesh.length and fine.width == mesh.width
