"""One time step: the Rosenbrock W-method ROS34PW2 with energy accounts carried as quadratures.

J. Rang, L. Angermann, BIT Numer. Math. 45 (2005) 761: 4 stages, order 3(2), L-stable (coefficients from memory; a
test confirms order 3 with an arbitrary matrix). A W-method keeps its order whatever matrix is used, so the matrix
holds conduction and losses only, and the heat source is evaluated at every stage.
"""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from scipy.linalg.lapack import dgttrf, dgttrs

from thermal.errors import NoConvergence
from thermal.interfaces import Array

GAMMA_DIAGONAL = 0.43586652150845900
ALPHA = (
    (),
    (2.0 * GAMMA_DIAGONAL,),
    (0.84457060015369423, -0.11299064236484185),
    (0.0, 0.0, 1.0),
)
GAMMA = (
    (),
    (-2.0 * GAMMA_DIAGONAL,),
    (-0.90338057013044082, 0.054180672388095326),
    (0.24212380706095346, -1.2232505839045147, 0.54526025533510214),
)
B = (0.24212380706095346, -1.2232505839045147, 1.5452602553351020, GAMMA_DIAGONAL)
B_EMBEDDED = (0.37810903145819369, -0.096042292212423178, 0.5, 0.5 * GAMMA_DIAGONAL)
STAGES = 4
_ALPHA = [np.array(row) for row in ALPHA]
_CARRIED = [np.array(row) / GAMMA_DIAGONAL for row in GAMMA]
_WEIGHTS = np.array(B)
_DIFFERENCE = _WEIGHTS - np.array(B_EMBEDDED)


@dataclass(frozen=True, slots=True)
class Rates:
    """Right-hand side at one state.

    heat_flow : (n,) [W] net into each cell ; accounts : (p,) [W] what the energy accounts gain ;
    extra : (e,) rates of further unknowns that are not stiff (the memory of a controller).
    """

    heat_flow: Array
    accounts: Array
    extra: Array


@dataclass(frozen=True, slots=True)
class Feedback:
    """A controller that answers with power P; its memory J, part of P, is the last of the further unknowns.

    d(heat_flow) = share x dP, dP = dJ - pull dH and d(dJ/dt) = -pull dH/reset. share : (n,) of the power each cell
    gets, adding up to 1 ; pull : (n,) [W m3/J] ; accounts : (p,) what every account gains per watt ; reset : [s].
    """

    share: Array
    pull: Array
    accounts: Array
    reset: float


@dataclass(frozen=True, slots=True)
class Fading:
    """A source that fades where the workpiece warms: d(heat_flow)/dH = -fall in every cell.

    fall : (n,) [W m3/J] ; accounts : (p,) what every account gains per watt of it.
    """

    fall: Array
    accounts: Array


@dataclass(frozen=True, slots=True)
class Matrix:
    """The approximate Jacobian of heat_flow: V d/dt -> -(K dT/dH + slopes of losses and source), frozen at the start.

    conductance : (m,) [W/K] ; dT_dH : (n,) ; slopes : per account that depends on the state, its index, the cell
    (or all) and d(account)/dH [W m3/J] there ; feedback : of a controller, or None ; fading : of the source, or None.
    """

    conductance: Array
    dT_dH: Array
    slopes: tuple[tuple[int, int | slice, float | Array], ...]
    feedback: Feedback | None = None
    fading: Fading | None = None


@dataclass(frozen=True, slots=True)
class Step:
    """Outcome of one step: H (n,), gained accounts (p,) [J], extra (e,), embedded error of H (n,) [J/m3]."""

    H: Array
    gained: Array
    extra: Array
    error: Array


def rosenbrock_step(
    H: Array,
    extra: Array,
    first: Rates,
    matrix: Matrix,
    volume: Array,
    step: float,
    rates: Callable[[Array, Array], Rates],
) -> Step:
    """Advance H by one step.

    H : (n,) [J/m3] ; extra : (e,) ; first : rates at (H, extra) ; volume : (n,) [m3] ; step : [s] ;
    rates : (H, extra) -> Rates.

    The accounts are advanced with the same weights and the same linearised losses as the cells, so the sum over the
    cells of V dH equals the sum of the accounts to round-off.

    Raises
    ------
    NoConvergence : the matrix is singular (a property is not a number).
    """
    shift = step * GAMMA_DIAGONAL
    out = matrix.conductance * shift
    lower = -out * matrix.dT_dH[:-1]
    upper = -out * matrix.dT_dH[1:]
    diagonal = volume.copy()
    diagonal[:-1] -= lower
    diagonal[1:] -= upper
    for _, cells, slope in matrix.slopes:
        diagonal[cells] += shift * slope
    if matrix.fading is not None:
        diagonal += shift * matrix.fading.fall
    factors = dgttrf(lower, diagonal, upper)
    if factors[-1] != 0:
        raise NoConvergence("the heat equations of the section could not be solved (singular matrix)")
    *lu, _ = factors
    feedback = matrix.feedback
    if feedback is not None:
        # With J eliminated the controller adds a matrix of rank one (Sherman-Morrison).
        answer, _ = dgttrs(*lu, feedback.share)
        firmness = shift * (1.0 + shift / feedback.reset)
        yields = 1.0 + firmness * float(feedback.pull @ answer)

    n, p = H.size, first.accounts.size
    # Increments of cells, accounts and further unknowns, a row a stage.
    k = np.empty((STAGES, n + p + extra.size))
    nothing = np.zeros(k.shape[1])
    here = first
    for i in range(STAGES):
        if i == 0:
            carried = nothing
            right = step * here.heat_flow
        else:
            ahead = _ALPHA[i] @ k[:i]
            here = rates(H + ahead[:n], extra + ahead[n + p :])
            carried = _CARRIED[i] @ k[:i]
            right = step * here.heat_flow + volume * carried[:n]
        account = step * here.accounts
        # Further unknowns have no row in the matrix (treated explicitly), unless they are the memory of a feedback.
        k[i, n + p :] = step * here.extra
        if feedback is not None:
            memory = step * float(here.extra[-1]) + carried[-1]
            right += (shift * memory) * feedback.share
        solved, info = dgttrs(*lu, right)
        if info != 0:
            raise NoConvergence("the heat equations of the section could not be solved")
        if feedback is not None:
            fall = float(feedback.pull @ solved) / yields
            solved = solved - (firmness * fall) * answer
            after = memory - shift / feedback.reset * fall
            account += (shift * (after - fall)) * feedback.accounts
            k[i, -1] = after - carried[-1]
            right += (shift * (after - fall - memory)) * feedback.share
        # What each cell gains, from flows that leave one cell and enter the next: solved itself conserves only to
        # round-off times the diffusion number, which is large in thin walls of copper.
        warming = matrix.dT_dH * solved
        flow = out * (warming[:-1] - warming[1:])
        right[:-1] -= flow
        right[1:] += flow
        for index, cells, slope in matrix.slopes:
            loss = shift * (slope * solved[cells])
            right[cells] -= loss
            account[index] += loss.sum() if isinstance(cells, slice) else loss
        if matrix.fading is not None:
            faded = shift * (matrix.fading.fall * solved)
            right -= faded
            account -= float(faded.sum()) * matrix.fading.accounts
        k[i, :n] = right / volume - carried[:n]
        k[i, n : n + p] = account
    gain = _WEIGHTS @ k
    return Step(H + gain[:n], gain[n : n + p], extra + gain[n + p :], _DIFFERENCE @ k[:, :n])
