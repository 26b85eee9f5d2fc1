"""Interpolation, slope, integral and inverse against closed forms and SciPy."""

from itertools import pairwise

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.interpolate import PchipInterpolator

from materials.curve import Curve, EndRule, Rule
from materials.errors import MaterialError

X = np.array([0.0, 1.0, 2.5, 3.0, 5.0, 5.5])
Y = np.array([1.0, 1.2, 3.0, 3.1, 7.0, 7.05])


def curve(rule: Rule, end: EndRule = "hold") -> Curve:
    return Curve(X, Y, rule, end)


def test_linear_is_straight_between_points() -> None:
    c = curve("linear")
    assert c(1.75) == pytest.approx(2.1)
    assert c.slope(1.75) == pytest.approx(1.2)
    assert c.slope(1.0) == pytest.approx(1.2)  # the piece to the right
    assert np.array_equal(c(X), Y)


def test_step_holds_to_the_next_point() -> None:
    c = curve("step")
    assert np.array_equal(c([0.0, 0.999, 1.0, 5.49, 5.5, 9.0]), [1.0, 1.0, 1.2, 7.0, 7.05, 7.05])
    assert np.all(c.slope(X) == 0.0)
    assert c.integral(0.5, 2.0) == pytest.approx(0.5 * 1.0 + 1.0 * 1.2)


def test_monotone_is_the_fritsch_butland_cubic_of_scipy() -> None:
    c, reference = curve("monotone"), PchipInterpolator(X, Y)
    x = np.linspace(0.0, 5.5, 501)
    assert c(x) == pytest.approx(reference(x), rel=1e-13)
    assert c.slope(x[:-1]) == pytest.approx(reference(x[:-1], 1), rel=1e-11, abs=1e-13)
    assert np.all(np.diff(c(x)) > 0.0)
    humped = np.array([0.0, 1.0, 0.5, 0.5, 4.0, 3.0])
    assert Curve(X, humped, "monotone")(x) == pytest.approx(PchipInterpolator(X, humped)(x), abs=1e-13)


def test_monotone_of_two_points_is_the_line() -> None:
    assert Curve(np.array([0.0, 2.0]), np.array([1.0, 5.0]), "monotone")(0.5) == pytest.approx(2.0)


@pytest.mark.parametrize("rule", ["linear", "monotone", "step"])
@pytest.mark.parametrize(("a", "b"), [(0.3, 4.7), (4.7, 0.3), (-2.0, 1.0), (5.0, 8.0), (-1.0, 9.0), (1.0, 1.0)])
def test_integral_against_quadrature(rule: Rule, a: float, b: float) -> None:
    c = curve(rule)
    low, high = sorted((a, b))
    points = [low, *X[(X > low) & (X < high)], high]
    pieces = sum(quad(c, p, q, epsabs=1e-13)[0] for p, q in pairwise(points))
    assert c.integral(a, b) == pytest.approx(np.sign(b - a) * pieces, abs=1e-11)


@pytest.mark.parametrize("rule", ["linear", "monotone"])
def test_inverse_returns(rule: Rule) -> None:
    x = np.linspace(0.0, 5.5, 101)
    for c in (curve(rule), Curve(X, Y[::-1], rule)):
        found = c.inverse(c(x))
        assert c(found) == pytest.approx(c(x), rel=1e-14)
        steep = np.abs(c.slope(x)) > 1e-3  # where the curve is flat, rounding of y alone moves x
        assert steep.sum() > 90
        assert found[steep] == pytest.approx(x[steep], abs=1e-11)


def test_ends() -> None:
    held = curve("linear")
    assert np.array_equal(held([-5.0, 50.0]), [1.0, 7.05])
    assert np.array_equal(held.slope([-5.0, 5.5, 50.0]), [0.0, 0.0, 0.0])
    refusing = curve("linear", "refuse")
    assert refusing(5.5) == pytest.approx(7.05)
    with pytest.raises(MaterialError, match=r"^6 is outside 0 to 5\.5$"):
        refusing([1.0, 6.0])


def test_single_point_is_a_constant() -> None:
    c = Curve(np.array([3.0]), np.array([0.8]))
    assert np.array_equal(c([0.0, 3.0, 9.0]), [0.8, 0.8, 0.8])
    assert c.integral(0.0, 10.0) == pytest.approx(8.0)


@pytest.mark.parametrize("x", [[0.0, 0.0], [1.0, 0.0], [0.0, np.nan]])
def test_points_must_rise(x: list[float]) -> None:
    with pytest.raises(MaterialError, match="must rise"):
        Curve(np.array(x), np.array([1.0, 2.0]))


def test_no_points_are_refused() -> None:
    with pytest.raises(MaterialError, match="at least one"):
        Curve(np.array([]), np.array([]))


def test_inverse_refuses_what_it_cannot_invert() -> None:
    with pytest.raises(MaterialError, match="strictly rising or falling"):
        Curve(X, np.array([0.0, 1.0, 1.0, 2.0, 3.0, 4.0])).inverse(1.0)
    with pytest.raises(MaterialError, match="strictly rising or falling"):
        curve("step").inverse(1.0)
    with pytest.raises(MaterialError, match=r"from 1 to 7\.05"):
        curve("linear").inverse(8.0)


def test_curves_cannot_be_changed() -> None:
    c = curve("linear")
    with pytest.raises(ValueError, match="read-only"):
        c.y[0] = 9.0
