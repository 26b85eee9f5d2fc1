"""Specific heat, transformation heats and latent heat as one monotone enthalpy curve."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from materials.curve import Array
from materials.errors import MaterialError
from materials.property import Property

T_REFERENCE = 293.15
"""Temperature of zero enthalpy, 20 °C [K]."""

_T_LOWEST = 173.15
_HEADROOM = 1000.0
_NARROWEST = 1.0
_TOLERANCE = 5e-3
"""Largest error of T(h) between nodes [K] as sampled; half of the promised 0.01 K."""


@dataclass(frozen=True, slots=True)
class Transition:
    """Heat [J/kg] taken up evenly between two temperatures [K] (a solid transformation or melting)."""

    name: str
    start: float
    end: float
    heat: float

    @classmethod
    def around(cls, name: str, start: float, end: float, heat: float) -> "Transition":
        """Transition from start to end, widened about its middle to 1 K where it is narrower.

        A sharp melting point has an enthalpy jump, which no T(h) with a finite heat capacity can carry back.
        """
        widen = max(0.0, _NARROWEST - (end - start)) / 2.0
        return cls(name, start - widen, end + widen, heat)

    def done(self, T: npt.ArrayLike) -> Array:
        """Share of the heat taken up on the way to T [K], 0 to 1."""
        return np.clip((np.asarray(T, dtype=np.float64) - self.start) / (self.end - self.start), 0.0, 1.0)


@dataclass(frozen=True, eq=False)
class Caloric:
    """Enthalpy of one material, zero at 20 °C.

    T_nodes : (q,) [K] ; h_nodes : (q,) [J/kg] ; both strictly rising, T(h) linear between them, within
    0.01 K of the exact curve; from 173 K to 1000 K above the last datum or the liquidus ;
    T_max : [K] where the data of the specific heat end; it is held from there on.
    """

    T_nodes: Array
    h_nodes: Array
    transitions: tuple[Transition, ...]
    T_max: float

    @classmethod
    def build(cls, specific_heat: Property, transitions: Sequence[Transition] = ()) -> "Caloric":
        """Tabulate the enthalpy, with as many nodes as 0.01 K needs.

        Parameters
        ----------
        specific_heat : Property
            Without the heats of `transitions`; all values above zero.
        transitions : sequence of Transition
            Each at least 1 K wide.

        Raises
        ------
        MaterialError
            A specific heat that is not above zero, or a transition narrower than 1 K.
        """
        for each in transitions:
            if each.end - each.start < _NARROWEST * (1.0 - 1e-9):
                raise MaterialError(f"{each.name}: spread the heat over at least {_NARROWEST:g} K")
        edges = [edge for each in transitions for edge in (each.start, each.end)]
        top = max([specific_heat.T_max, *edges]) + _HEADROOM
        # numpy.unique would do, but loads numpy.ma, a tenth of the import time of numpy.
        wanted = {_T_LOWEST, T_REFERENCE, top, *map(float, specific_heat.T), *edges}
        T = np.array(sorted(each for each in wanted if each >= _T_LOWEST))

        def exact(at: Array) -> Array:
            h = specific_heat.law.integral(T_REFERENCE, at)
            for each in transitions:
                h = h + each.heat * (each.done(at) - each.done(T_REFERENCE))
            return h

        inside = np.arange(1, 8) / 8.0
        h = exact(T)
        while True:
            if not np.all(np.diff(h) > 0.0):
                raise MaterialError("the specific heat must be above zero everywhere")
            sample = T[:-1, None] + np.diff(T)[:, None] * inside
            fraction = (exact(sample) - h[:-1, None]) / np.diff(h)[:, None]
            error = np.abs(T[:-1, None] + np.diff(T)[:, None] * fraction - sample).max(axis=1)
            coarse = error > _TOLERANCE
            if not coarse.any():
                break
            T = np.sort(np.concatenate((T, 0.5 * (T[:-1] + T[1:])[coarse])))
            h = exact(T)
        T.flags.writeable = False
        h.flags.writeable = False
        return cls(T, h, tuple(transitions), specific_heat.T_max)

    def enthalpy(self, T: npt.ArrayLike) -> Array:
        """Enthalpy [J/kg] at T [K]."""
        return _look_up(T, self.T_nodes, self.h_nodes, "temperature", "K")

    def temperature(self, h: npt.ArrayLike) -> Array:
        """Temperature [K] at an enthalpy h [J/kg]."""
        return _look_up(h, self.h_nodes, self.T_nodes, "enthalpy", "J/kg")

    def heat_capacity(self, T: npt.ArrayLike) -> Array:
        """Apparent specific heat dh/dT [J/(kg K)] of the table at T [K], transition heats included."""
        i = np.clip(np.searchsorted(self.T_nodes, T, side="right") - 1, 0, self.T_nodes.size - 2)
        return np.asarray((np.diff(self.h_nodes) / np.diff(self.T_nodes))[i])


def _look_up(x: npt.ArrayLike, nodes: Array, values: Array, name: str, unit: str) -> Array:
    q = np.asarray(x, dtype=np.float64)
    outside = q[(q < nodes[0]) | (q > nodes[-1])]
    if outside.size:
        raise MaterialError(f"{name} {outside[0]:g} {unit} is outside {nodes[0]:g} to {nodes[-1]:g} {unit}")
    return np.asarray(np.interp(q, nodes, values))
