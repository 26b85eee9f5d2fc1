"""The time step: order conditions of ROS34PW2, order observed with a wrong matrix, conservation to round-off.

J. Rang, L. Angermann, BIT Numer. Math. 45 (2005) 761. Order conditions of W-methods: T. Steihaug, A. Wolfbrandt,
Math. Comp. 33 (1979) 521; also E. Hairer, G. Wanner, Solving Ordinary Differential Equations II, IV.7 (7.15).
"""

from collections.abc import Callable

import numpy as np
import pytest
from tools import observed_order

from thermal.conduction.step import (
    ALPHA,
    B_EMBEDDED,
    GAMMA,
    GAMMA_DIAGONAL,
    B,
    Feedback,
    Matrix,
    Rates,
    Step,
    rosenbrock_step,
)
from thermal.interfaces import Array


def square(rows: tuple[tuple[float, ...], ...], diagonal: float) -> Array:
    full = np.diag(np.full(4, diagonal))
    for i, row in enumerate(rows):
        full[i, : len(row)] = row
    return full


A = square(ALPHA, 0.0)
G = square(GAMMA, GAMMA_DIAGONAL)
ALPHA_SUM, GAMMA_SUM = A.sum(axis=1), G.sum(axis=1)


def conditions(b: Array, order: int) -> dict[str, float]:
    """Residuals of the W-method conditions up to an order: they hold whatever the matrix."""
    found = {
        "sum b": b.sum() - 1.0,
        "b alpha": b @ ALPHA_SUM - 0.5,
        "b gamma": b @ GAMMA_SUM,
    }
    if order == 3:
        found |= {
            "b alpha^2": b @ ALPHA_SUM**2 - 1.0 / 3.0,
            "b A alpha": b @ A @ ALPHA_SUM - 1.0 / 6.0,
            "b A gamma": b @ A @ GAMMA_SUM,
            "b G alpha": b @ G @ ALPHA_SUM,
            "b G gamma": b @ G @ GAMMA_SUM,
        }
    return found


def test_order_conditions_of_the_step() -> None:
    for name, residual in conditions(np.array(B), order=3).items():
        assert residual == pytest.approx(0.0, abs=1e-12), name


def test_order_conditions_of_the_embedded_step() -> None:
    for name, residual in conditions(np.array(B_EMBEDDED), order=2).items():
        assert residual == pytest.approx(0.0, abs=1e-12), name
    # It must differ from the step at order 3, else its distance would not be an error estimate.
    assert max(abs(r) for r in conditions(np.array(B_EMBEDDED), order=3).values()) > 1e-2


def test_l_stable() -> None:
    # Stiffly accurate: b is the last row of A + G, hence R(infinity) = 0; |R(iy)| <= 1 along the imaginary axis.
    beta = A + G
    assert beta[3] == pytest.approx(np.array(B), abs=1e-14)
    one = np.ones(4)
    for y in np.geomspace(1e-2, 1e6, 200):
        z = 1j * y
        growth = 1.0 + z * (np.array(B) @ np.linalg.solve(np.eye(4) - z * beta, one))
        assert abs(growth) <= 1.0 + 1e-12


CELLS = 6
RNG = np.random.default_rng(20250722)
VOLUME = RNG.uniform(0.5, 2.0, CELLS)
MIX = RNG.uniform(-1.0, 1.0, (CELLS, CELLS))
SLOPES = ((1, -1, 0.7), (1, slice(None), RNG.uniform(0.0, 0.5, CELLS)))
WRONG = Matrix(RNG.uniform(0.1, 2.0, CELLS - 1), RNG.uniform(0.1, 2.0, CELLS), SLOPES)
CONTROLLED = Matrix(
    WRONG.conductance,
    WRONG.dT_dH,
    SLOPES,
    Feedback(RNG.uniform(0.0, 1.0, CELLS), RNG.uniform(-0.3, 1.0, CELLS), RNG.uniform(-1.0, 1.0, 2), reset=0.7),
)
"""Neither has anything to do with the system below."""


def nonlinear(H: Array, extra: Array) -> Rates:
    """A coupled nonlinear system with one account and one further unknown, none of it tridiagonal."""
    flow = VOLUME * (np.sin(MIX @ H) + 0.3 * extra[0] * H - 0.1 * H**2)
    return Rates(flow, np.array([float(flow.sum()), float(H @ H)]), np.array([np.cos(extra[0]) + H[0] * H[1]]))


def advance(matrix: Matrix, steps: int, keep: Callable[[Step], Array]) -> tuple[Array, Array, Array]:
    """From 0 to 1 s."""
    H, extra, gained = np.linspace(0.2, 1.0, CELLS), np.array([0.1]), np.zeros(2)
    for _ in range(steps):
        step = rosenbrock_step(H, extra, nonlinear(H, extra), matrix, VOLUME, 1.0 / steps, nonlinear)
        H, extra, gained = keep(step), step.extra, gained + step.gained
    return H, extra, gained


@pytest.fixture(scope="module")
def exact() -> tuple[Array, Array, Array]:
    """The end of the nonlinear system by the classical Runge-Kutta rule in 4000 steps: good to 1e-13."""
    state = np.concatenate([np.linspace(0.2, 1.0, CELLS), [0.1], np.zeros(2)])

    def rate(y: Array) -> Array:
        found = nonlinear(y[:CELLS], y[CELLS : CELLS + 1])
        return np.concatenate([found.heat_flow / VOLUME, found.extra, found.accounts])

    h = 1.0 / 4000
    for _ in range(4000):
        k1 = rate(state)
        k2 = rate(state + 0.5 * h * k1)
        k3 = rate(state + 0.5 * h * k2)
        k4 = rate(state + h * k3)
        state = state + h / 6.0 * (k1 + 2.0 * k2 + 2.0 * k3 + k4)
    return state[:CELLS], state[CELLS : CELLS + 1], state[CELLS + 1 :]


STEPS = [16, 32, 64, 128]
either_matrix = pytest.mark.parametrize("matrix", [WRONG, CONTROLLED], ids=["losses", "feedback"])


@either_matrix
def test_order_three_with_a_wrong_matrix(matrix: Matrix, exact: tuple[Array, Array, Array]) -> None:
    # Cells, the further unknown and the accounts, of which the second is a quadrature with a wrong slope of its own.
    ends = [advance(matrix, n, lambda step: step.H) for n in STEPS]
    sizes = [1.0 / n for n in STEPS]
    for part, name in enumerate(("H", "extra", "accounts")):
        errors = [float(np.max(np.abs(end[part] - exact[part]))) for end in ends]
        assert 2.8 < observed_order(sizes, errors) < 3.3, name


@either_matrix
def test_embedded_order_two_with_a_wrong_matrix(matrix: Matrix, exact: tuple[Array, Array, Array]) -> None:
    ends = [advance(matrix, n, lambda step: step.H - step.error)[0] for n in STEPS]
    errors = [float(np.max(np.abs(end - exact[0]))) for end in ends]
    assert 1.8 < observed_order([1.0 / n for n in STEPS], errors) < 2.3


def test_error_estimate_falls_with_the_third_power() -> None:
    # One step from the same state: the estimate is the local error of the embedded step of order 2.
    H, extra = np.linspace(0.2, 1.0, CELLS), np.array([0.1])
    sizes = [0.1, 0.05, 0.025, 0.0125]
    errors = []
    for h in sizes:
        step = rosenbrock_step(H, extra, nonlinear(H, extra), WRONG, VOLUME, h, nonlinear)
        errors.append(float(np.max(np.abs(step.error))))
    assert 2.7 < observed_order(sizes, errors) < 3.3


@pytest.mark.parametrize("controlled", [False, True], ids=["losses", "feedback"])
@pytest.mark.parametrize("seed", range(5))
def test_conserves_with_any_matrix_and_nonlinear_losses(seed: int, controlled: bool) -> None:
    # Conduction, source and losses as in a section, all nonlinear; the matrix is made up, its accounts are not.
    rng = np.random.default_rng(seed)
    n = 12
    volume = rng.uniform(1e-6, 1e-3, n)
    share = rng.uniform(0.0, 1.0, n)
    feedback = Feedback(share / share.sum(), rng.uniform(0.0, 1e-5, n), np.array([1.0, 0.0, 0.0]), reset=2.0)
    matrix = Matrix(
        rng.uniform(0.0, 50.0, n - 1),
        rng.uniform(0.0, 1e-6, n),
        ((1, -1, float(rng.uniform(0.0, 1e-5))), (2, slice(None), rng.uniform(0.0, 1e-6, n))),
        feedback if controlled else None,
    )

    def rates(H: Array, extra: Array) -> Rates:
        T = 300.0 + 1e-7 * H + 3e-17 * H**2
        flow = (5.0 + 0.01 * T[:-1]) * (T[:-1] - T[1:])
        net = np.zeros(n)
        net[:-1] -= flow
        net[1:] += flow
        source = 1e3 * np.exp(-np.arange(n) / 3.0) * (1.0 + 1e-3 * T) * volume / volume.max()
        end, sides = 1e-11 * T[-1:] ** 4, 1e-3 * (T - 290.0) ** 1.25
        net += source - sides
        net[-1:] -= end
        return Rates(net, np.array([source.sum(), end.sum(), sides.sum()]), np.array([1e-3 * (T[0] - 500.0)]))

    H, extra = 1e9 * rng.uniform(1.0, 2.0, n), np.array([50.0])
    start, gained = H, np.zeros(3)
    for h in (1e-3, 0.1, 2.0, 30.0):
        step = rosenbrock_step(H, extra, rates(H, extra), matrix, volume, h, rates)
        H, extra, gained = step.H, step.extra, gained + step.gained
    stored = float(volume @ (H - start))
    size = max(abs(stored), float(np.abs(gained).max()))
    assert abs(stored - (gained[0] - gained[1] - gained[2])) < 1e-13 * size + 1e-13 * float(volume @ start)
