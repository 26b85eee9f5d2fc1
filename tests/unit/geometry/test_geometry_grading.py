"""The cell sizes of the default grid and their refinement."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose, assert_array_equal

from thermal.geometry.grading import (
    CELLS_AT_LEAST,
    CELLS_PER_SKIN_DEPTH,
    FIRST_CELL_FRACTION,
    GROWTH,
    graded_edges,
    refine,
)

SECTIONS = {
    "inner": st.floats(0.0, 0.2),
    "section": st.floats(1e-3, 0.3),
    "depth_over_section": st.floats(1e-4, 30.0),
}
ROUNDING = 1e-9


@settings(deadline=None, max_examples=200)
@given(**SECTIONS)
def test_sizes(inner, section, depth_over_section):
    depth = section * depth_over_section
    outer = inner + section
    edges = graded_edges(inner, outer, depth)
    sizes = np.diff(edges)[::-1]
    assert edges[0] == inner
    assert edges[-1] == outer
    assert np.all(sizes > 0.0)
    # The first cell under the surface, the growth inwards and the cap.
    assert sizes[0] <= min(depth / CELLS_PER_SKIN_DEPTH, section * FIRST_CELL_FRACTION) * (1.0 + ROUNDING)
    ratio = sizes[1:] / sizes[:-1]
    assert np.all(ratio >= 1.0 - 1e-6)
    assert np.all(ratio <= GROWTH + 1e-6)
    assert sizes.max() <= section / CELLS_AT_LEAST * (1.0 + ROUNDING)
    assert sizes.size >= CELLS_AT_LEAST


def test_bounds_are_the_ones_the_field_was_tested_with():
    assert GROWTH <= 1.15
    assert CELLS_PER_SKIN_DEPTH >= 5.0
    assert CELLS_AT_LEAST >= 20


@settings(deadline=None, max_examples=100)
@given(**SECTIONS)
def test_no_cells_wasted(inner, section, depth_over_section):
    # Fitting the last cell in shrinks all by one cell in the whole at most.
    edges = graded_edges(inner, inner + section, section * depth_over_section)
    sizes = np.diff(edges)[::-1]
    wanted = min(section * depth_over_section / CELLS_PER_SKIN_DEPTH, section * FIRST_CELL_FRACTION)
    assert sizes[0] >= wanted * (1.0 - 1.0 / CELLS_AT_LEAST) * (1.0 - 1e-6)


@pytest.mark.parametrize(("depth_over_section", "cells"), [(1.0, 45), (0.1, 50), (0.01, 70), (0.002, 80)])
def test_number_of_cells_stays_small(depth_over_section, cells):
    assert graded_edges(0.0, 0.025, 0.025 * depth_over_section).size - 1 <= cells


@settings(deadline=None, max_examples=60)
@given(times=st.integers(1, 6), **SECTIONS)
def test_refinement_cuts_every_cell(times, inner, section, depth_over_section):
    outer, depth = inner + section, section * depth_over_section
    coarse = graded_edges(inner, outer, depth)
    fine = graded_edges(inner, outer, depth, times)
    assert fine.size - 1 == times * (coarse.size - 1)
    assert_array_equal(fine[::times], coarse)
    assert_allclose(np.diff(fine).reshape(-1, times), np.diff(coarse)[:, None] / times * np.ones(times), rtol=1e-5)


def test_refine_any_edges():
    assert_allclose(refine(np.array([0.0, 1.0, 4.0]), 3), [0.0, 1 / 3, 2 / 3, 1.0, 2.0, 3.0, 4.0], rtol=1e-15)
