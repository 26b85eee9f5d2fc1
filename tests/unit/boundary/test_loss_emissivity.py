import numpy as np
import pytest
from numpy.testing import assert_allclose

from thermal.boundary.emissivity import emissivity_of

T_NODES = [300.0, 500.0, 700.0, 900.0, 1100.0, 1500.0]
VALUES = [0.5, 0.3, 0.6, 0.8, 0.4, 0.9]


@pytest.fixture
def rough(curve):
    return curve(T_NODES, VALUES)


def test_without_growth_the_curve_counts_whatever_the_peak(rough):
    T = np.linspace(310.0, 1490.0, 57)
    surface = emissivity_of(rough, grows=False, T_start=300.0)
    assert_allclose(surface.at(T, T + 500.0)[0], rough(T), rtol=1e-14)
    assert_allclose(surface.at(T, T + 500.0)[1], rough.slope(T), rtol=1e-12)


@pytest.mark.parametrize("T_start", [250.0, 300.0, 420.0, 700.0, 1000.0, 1600.0])
def test_growing_emissivity_is_the_running_maximum_from_the_start(rough, T_start):
    T = T_start + np.linspace(0.0, 1500.0, 150_001)
    value, _ = emissivity_of(rough, grows=True, T_start=T_start).at(T, T)
    assert_allclose(value, np.maximum.accumulate(rough(T)), atol=3e-5)


def test_growing_emissivity_does_not_fall_on_cooling(rough):
    surface = emissivity_of(rough, grows=True, T_start=300.0)
    peak = np.full(4, 900.0)
    value, slope = surface.at(np.array([899.0, 700.0, 500.0, 300.0]), peak)
    assert np.all(value == 0.8)
    assert np.all(slope == 0.0)


def test_slope_counts_only_where_the_envelope_rises(rough):
    surface = emissivity_of(rough, grows=True, T_start=300.0)
    assert surface.at(800.0, 800.0)[1] == pytest.approx(0.2 / 200.0)
    assert surface.at(800.0, 801.0)[1] == 0.0
    assert surface.at(1000.0, 900.0) == (0.8, 0.0)
    assert surface.at(550.0, 500.0)[1] == 0.0


def test_a_number_is_the_same_at_every_temperature():
    surface = emissivity_of(0.8, grows=True, T_start=293.15)
    assert surface.at(1200.0, 1300.0) == (0.8, 0.0)
