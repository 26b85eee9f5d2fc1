import numpy as np
import pytest
from numpy.testing import assert_allclose

from thermal.boundary.table import Law, constant_law, law_of
from thermal.errors import OutOfRange

T_NODES = np.array([300.0, 500.0, 900.0, 1500.0])
VALUES = np.array([0.3, 0.9, 0.5, 0.7])
T_ASKED = np.array([200.0, 300.0, 333.0, 500.0, 899.0, 1200.0, 1500.0, 2000.0])


def test_value_is_linear_between_nodes_and_held_beyond():
    value, _ = Law(T_NODES, VALUES).at(T_ASKED)
    assert_allclose(value, np.interp(T_ASKED, T_NODES, VALUES), rtol=1e-14)


def test_slope_is_that_of_the_piece_to_the_right_and_zero_beyond():
    _, slope = Law(T_NODES, VALUES).at(T_ASKED)
    rise = np.diff(VALUES) / np.diff(T_NODES)
    assert_allclose(slope, [0, rise[0], rise[0], rise[1], rise[1], rise[2], 0, 0], atol=1e-18)


def test_integral_is_exact_also_beyond_the_nodes():
    grid = np.union1d(np.linspace(200.0, 2000.0, 181), T_NODES)
    held = np.interp(grid, T_NODES, VALUES)
    running = np.concatenate([[0.0], np.cumsum(np.diff(grid) * (held[1:] + held[:-1]) / 2)])
    integral, value = Law(T_NODES, VALUES).integral(grid)
    assert_allclose(integral - integral[0], running, atol=1e-10)
    assert_allclose(value, held, rtol=1e-13)


def test_one_number_gives_what_an_array_gives():
    law = Law(T_NODES, VALUES)
    for method in (law.at, law.held, law.integral):
        together = np.array(method(T_ASKED))
        one_by_one = np.array([method(T) for T in T_ASKED.tolist()]).T
        assert_allclose(one_by_one, together, rtol=1e-15)


@pytest.mark.parametrize("wrap", [float, np.atleast_1d])
def test_an_end_with_a_sentence_refuses(wrap):
    law = Law(T_NODES, VALUES, "too cold", "too hot")
    with pytest.raises(OutOfRange, match=r"^too cold, asked at 26\.8 °C$"):
        law.at(wrap(299.95))
    with pytest.raises(OutOfRange, match=r"^too hot, asked at 1226\.9 °C$"):
        law.at(wrap(1500.05))
    assert_allclose(law.at(wrap(300.0))[0], 0.3)
    assert_allclose(law.at(wrap(1500.0))[0], 0.7)


def test_a_constant_has_no_slope():
    value, slope = constant_law(0.8).at(T_ASKED)
    assert np.all(value == 0.8)
    assert np.all(slope == 0.0)


def test_a_linear_curve_is_taken_over_exactly(curve):
    prop = curve(T_NODES, VALUES)
    assert_allclose(law_of(prop, "it").at(T_ASKED)[0], prop(T_ASKED), rtol=1e-14)


def test_a_monotone_curve_is_met_within_its_chords(curve):
    prop = curve(T_NODES, VALUES, rule="monotone")
    T = np.linspace(250.0, 1600.0, 5000)
    assert np.abs(law_of(prop, "it").at(T)[0] - prop(T)).max() < 5e-4


def test_a_curve_that_refuses_keeps_refusing(curve):
    law = law_of(curve(T_NODES, VALUES, beyond="refuse"), "emissivity of the workpiece")
    with pytest.raises(OutOfRange, match=r"^emissivity of the workpiece is known from 27 to 1227 °C, asked at 1726"):
        law.at(2000.0)


def test_a_curve_in_steps_is_refused(curve):
    with pytest.raises(OutOfRange, match="needs a continuous curve"):
        law_of(curve(T_NODES, VALUES, rule="step"), "emissivity of the workpiece")
