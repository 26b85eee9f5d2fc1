"""States of rest: where a drive brings just what the workpiece loses.

Every state is a full steady profile with the conduction, field, supply and losses of a run. They are followed over
the mean temperature of the section: at each mean there is one profile whose heat has the distribution of the field
and is scaled by one unknown share so that the profile rests; where that share passes 1 the drive itself does it. Over
the mean the curve has no folds, so states that a march in time from cold cannot show are found as well.
"""

import math
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from thermal.conduction.steady import SteadyProfile, steady_profile
from thermal.errors import NoConvergence
from thermal.interfaces import Array, Demand, EddyField, OperatingPoint, Supply
from thermal.setup import Setup

WIDEST, NARROWEST = 15.0, 0.25
"""Largest distance of two mean temperatures on the curve, and the smallest it is cut down to where it is steep [K]."""
STEEP = 0.1
"""Change of the logarithm of the share from which an interval is halved."""
SETTLED = 1e-3
"""Last change [K] of a profile whose heat follows its own temperatures."""
TRIES_AT_MOST = 80
MEMORY = 5
"""Iterates looked back on (D. G. Anderson, J. ACM 12 (1965) 547)."""
EXACT = 1e-4
"""States of rest are found within this many kelvin of their mean temperature."""


@dataclass(frozen=True)
class Rest:
    """The drive and the losses at one mean temperature.

    mean : [K] ; T : (n,) [K] ; readings : name -> [K] ; field, point : at these temperatures ; losses : (face, loss) ->
    [W] ; lost : [W] in all ; share : lost over what the drive brings, 1 in a state of rest.
    """

    mean: float
    T: Array
    readings: dict[str, float]
    field: EddyField
    point: OperatingPoint
    losses: dict[tuple[str, str], float]
    lost: float
    share: float

    @property
    def excess(self) -> float:
        """ln(1/share): above zero where the workpiece gains heat."""
        return -math.log(self.share) if self.share > 0.0 else math.inf


@dataclass(frozen=True)
class Equilibrium:
    """A state of rest; stable: the workpiece comes back to it when it is pushed off."""

    at: Rest
    stable: bool


@dataclass(frozen=True)
class Curve:
    """Drive against losses from cold to the end of the material: points rising in the mean, and the states of rest."""

    points: tuple[Rest, ...]
    states: tuple[Equilibrium, ...]


class Driven:
    """A workpiece in the coil under one demand.

    setup ; supply : what drives it ; demand.
    """

    def __init__(self, setup: Setup, supply: Supply, demand: Demand) -> None:
        self.setup = setup
        self._supply = supply
        self._demand = demand
        self._losses = setup.losses["coil"]
        self._volume = setup.section.mesh.volume

    def at(self, mean: float, near: Rest | None = None) -> Rest:
        """The workpiece at a mean temperature [K]; near : a neighbour on the curve to start from.

        The heat follows the temperatures and they the heat: fixed point, accelerated by Anderson's rule.

        Raises
        ------
        NoConvergence : no profile found.
        """
        T = np.full(self._volume.size, mean) if near is None else near.T + (mean - near.mean)
        guess = None if near is None else (near.point, near.field)
        iterates: list[tuple[Array, Array]] = []
        for _ in range(TRIES_AT_MOST):
            point, field = self._supply.operate(self.setup.source.at(T), self._demand, guess)
            guess = (point, field)
            profile = steady_profile(self.setup.section, self._losses, field.heat, mean, T, T_seen=self.setup.T_initial)
            change = profile.T - T
            if float(np.max(np.abs(change))) < SETTLED:
                return self._rest(mean, profile, field, point)
            iterates = [*iterates[-MEMORY:], (profile.T, change)]
            T = _blended(iterates)
        raise NoConvergence(f"no steady profile found at a mean of {mean - 273.15:.0f} °C")

    def _rest(self, mean: float, profile: SteadyProfile, field: EddyField, point: OperatingPoint) -> Rest:
        sampler = self.setup.sampler
        extended = sampler.extended(profile.T, profile.surfaces["outer"], profile.surfaces.get("bore"))
        found = sampler.readings(extended, self.setup.depths)
        readings = {name: float(value) for name, value in found.items()}
        lost = sum(profile.losses.values())
        return Rest(mean, profile.T, readings, field, point, profile.losses, lost, profile.share)


def _blended(iterates: list[tuple[Array, Array]]) -> Array:
    """The next trial from the last profiles (n,) and their changes (n,)."""
    newest, change = iterates[-1]
    if len(iterates) == 1:
        return newest
    changes = np.stack([later[1] - earlier[1] for earlier, later in pairwise(iterates)], axis=1)
    profiles = np.stack([later[0] - earlier[0] for earlier, later in pairwise(iterates)], axis=1)
    weights = np.linalg.lstsq(changes, change, rcond=1e-10)[0]
    return np.asarray(newest - profiles @ weights)


def curve_of(driven: Driven, coldest: float, hottest: float) -> Curve:
    """Drive against losses, and every state of rest in between.

    coldest : [K] of the mean to begin with ; hottest : [K] of the hottest point, where the curve ends.

    Raises
    ------
    NoConvergence : no profile found.
    """
    points = _points(driven, coldest, hottest)
    states = []
    for before, after in pairwise(points):
        if (before.excess > 0.0) != (after.excess > 0.0):
            states.append(Equilibrium(_crossing(driven, before, after), stable=before.excess > 0.0))
    return Curve(tuple(points), tuple(states))


def _points(driven: Driven, coldest: float, hottest: float) -> list[Rest]:
    first = driven.at(coldest)
    points = [first]
    while points[-1].readings["maximum"] < hottest:
        room = hottest - points[-1].readings["maximum"]
        if room < NARROWEST:
            break
        trial = driven.at(points[-1].mean + min(WIDEST, max(room, NARROWEST)), points[-1])
        while trial.readings["maximum"] > hottest + NARROWEST:
            # The hottest point leads the mean by ever more: close in on the end from below.
            ahead = trial.readings["maximum"] - hottest
            trial = driven.at(max(trial.mean - ahead, points[-1].mean + 0.1 * NARROWEST), points[-1])
        points += _between(driven, points[-1], trial)
        points.append(trial)
    return points


def _between(driven: Driven, low: Rest, high: Rest) -> list[Rest]:
    """Points between two, closer together where the balance is steep."""
    steep = abs(high.excess - low.excess) > STEEP if low.share > 0.01 or high.share > 0.01 else False
    if high.mean - low.mean <= 2.0 * NARROWEST or not steep:
        return []
    middle = driven.at(0.5 * (low.mean + high.mean), low)
    return [*_between(driven, low, middle), middle, *_between(driven, middle, high)]


def _crossing(driven: Driven, low: Rest, high: Rest) -> Rest:
    """The state of rest between two points, by bisection and the secant."""
    from scipy.optimize import brentq

    known = {low.mean: low, high.mean: high}

    def excess(mean: float) -> float:
        if mean not in known:
            near = min(known.values(), key=lambda rest: abs(rest.mean - mean))
            known[mean] = driven.at(mean, near)
        return max(min(known[mean].excess, 10.0), -10.0)

    root = float(brentq(excess, low.mean, high.mean, xtol=EXACT))
    excess(root)
    return known[root]
