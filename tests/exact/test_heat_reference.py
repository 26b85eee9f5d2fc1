"""Global error of a run against the tolerance it was asked for, on the reference problems P1s and P1.

Error: largest deviation of surface and core from a run with a tolerance of 1e-4 K, at the steps of the run, over its
whole history. Measured ratios error/tolerance for 0.03, 0.1, 0.3, 1 K: P1s 0.5, 0.5, 0.3, 0.9; P1 1.2, 0.7, 0.6, 0.9.
Runs at 3e-4 and 1e-4 K differ by 5e-4 K.
"""

from collections.abc import Callable

import pytest

from thermal.crosscheck.reference_problems import largest_error, p1, p1s
from thermal.loop import run
from thermal.setup import Setup

TOLERANCES = (0.03, 0.1, 0.3, 1.0)


def test_p1s_within_four_tolerances() -> None:
    exact = run(p1s(1e-3))
    for tolerance in (0.1, 1.0):
        assert largest_error(run(p1s(tolerance)), p1s(1e-3), exact) <= 4.0 * tolerance


@pytest.mark.slow
@pytest.mark.parametrize("problem", [p1s, p1])
def test_error_within_four_tolerances(problem: Callable[[float], Setup]) -> None:
    setup = problem(1e-4)
    exact = run(setup)
    for tolerance in TOLERANCES:
        assert largest_error(run(problem(tolerance)), setup, exact) <= 4.0 * tolerance, tolerance


@pytest.mark.parametrize("tolerance", [0.03, 0.1, 0.3])
def test_p1s_reaches_1200_in_time(tolerance: float) -> None:
    # 465.53 s was computed by another code when the problem was stated (same grid). A plain finite-volume code written
    # for this check, in enthalpy form and integrated by LSODA at rtol 1e-6, gives 465.629 s on this grid and 465.626 s
    # on one twice as fine.
    time = run(p1s(tolerance)).time[-1]
    assert time == pytest.approx(465.53, rel=5e-4)
    assert time == pytest.approx(465.629, abs=0.02 + tolerance)  # the surface rises by 1 K/s there
