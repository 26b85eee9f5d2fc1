"""Emissivity of a surface, which may grow with the oxide on it and then does not fall on cooling."""

from dataclasses import dataclass

import numpy as np

from materials.property import Property
from thermal.boundary.table import Law, law_of, pick
from thermal.interfaces import Real


@dataclass(frozen=True, eq=False)
class Emissivity:
    """Total hemispherical emissivity [-] of one surface, ready for use in a loss.

    Parameters
    ----------
    law : emissivity against temperature; for a surface that grows, the running maximum of it.
    grows : whether the surface keeps the emissivity of the hottest temperature it has seen.
    """

    law: Law
    grows: bool

    def at(self, T: Real, T_peak: Real) -> tuple[Real, Real]:
        """Emissivity and its slope [1/K] at T [K], on a surface that has been as hot as T_peak [K].

        A surface that grows has no slope while it is colder than T_peak: nothing changes on it.
        """
        if not self.grows:
            return self.law.at(T)
        value, slope = self.law.at(pick(T > T_peak, T, T_peak))
        return value, slope * (T >= T_peak)


def emissivity_of(curve: Property | float, grows: bool, T_start: float) -> Emissivity:
    """Emissivity of a surface from a material's curve or a constant.

    curve : [-] against [K]. grows : keep the highest value reached. T_start : [K] temperature at which the
    workpiece enters with this surface; what the curve does below it has not happened.
    """
    law = law_of(curve, "emissivity of the workpiece")
    return Emissivity(_running_maximum(law, T_start) if grows else law, grows)


def _running_maximum(law: Law, T_start: float) -> Law:
    """Highest value of a law between T_start and T, for every T; exact. Below T_start nothing has grown yet."""
    start, _ = law.at(T_start)
    later = law.T > T_start
    nodes = [(T_start, start)]
    before, top = nodes[0], start
    for T, value in zip(law.T[later].tolist(), law.value[later].tolist(), strict=True):
        if value > top:
            if before[1] < top:
                crossing = before[0] + (T - before[0]) * (top - before[1]) / (value - before[1])
                nodes.append((crossing, top))
            top = value
        nodes.append((T, top))
        before = (T, value)
    T_nodes, values = np.array(nodes).T
    return Law(T_nodes, values, None, law.above)
