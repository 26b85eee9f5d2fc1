"""Finite-volume conduction with volumetric enthalpy as the state.

V dH/dt = sum of link fluxes + source - losses, T from H by a table. Links between neighbours only (one dimension).
"""

from dataclasses import dataclass, field

import numpy as np

from thermal.geometry.mesh import Mesh
from thermal.interfaces import Array, BoundaryLoss, PropertyOf


@dataclass(frozen=True)
class EnthalpyTable:
    """Volumetric enthalpy against temperature, both strictly rising, straight between the nodes.

    H : (q,) [J/m3] ; T : (q,) [K].
    """

    H: Array
    T: Array

    def temperature(self, H: Array) -> Array:
        """T (n,) [K]; beyond the table the end value (runs stop before)."""
        return np.interp(H, self.H, self.T)

    def enthalpy(self, T: Array) -> Array:
        """H [J/m3]."""
        return np.interp(T, self.T, self.H)

    def slope(self, H: Array) -> Array:
        """dT/dH (n,) [K m3/J]."""
        return self._slopes[self._inside.searchsorted(H)]

    def __post_init__(self) -> None:
        object.__setattr__(self, "_slopes", np.diff(self.T) / np.diff(self.H))
        object.__setattr__(self, "_inside", self.H[1:-1])

    _slopes: Array = field(init=False, repr=False)
    _inside: Array = field(init=False, repr=False)


@dataclass(frozen=True, slots=True)
class FaceState:
    """One face at one moment: surface temperature (s,) [K], flux (s,) [W] and its slope dW/dH (s,) per loss."""

    T_surface: Array
    loss: tuple[Array, ...]
    slope: tuple[Array, ...]


class Section:
    """Conduction and losses of one workpiece.

    Parameters
    ----------
    mesh : links in a row, cell i to i + 1.
    table : enthalpy of its material.
    conductivity : T (n,) -> k (n,) [W/(m K)].
    """

    def __init__(self, mesh: Mesh, table: EnthalpyTable, conductivity: PropertyOf) -> None:
        self.mesh = mesh
        self.table = table
        self.conductivity = conductivity
        self._over_left = mesh.gap_left / mesh.area
        self._over_right = mesh.gap_right / mesh.area
        # Faces with a half cell in front: the link on the inner side of that cell, and its sign towards the face.
        self._inner_side = {"outer": (slice(-1, None), 1.0)}
        if "bore" in mesh.faces:
            self._inner_side["bore"] = (slice(0, 1), -1.0)

    def conductances(self, k: Array) -> Array:
        """Conductance of the links (m,) [W/K]."""
        return np.asarray(1.0 / (self._over_left / k[:-1] + self._over_right / k[1:]))

    def face_state(
        self,
        name: str,
        losses: tuple[BoundaryLoss, ...],
        T: Array,
        k: Array,
        flow: Array,
        dT_dH: Array | None,
        T_peak: Array,
    ) -> FaceState:
        """Surface temperature and losses of a face.

        With q_s the loss and q_in the flux through the inner side of the surface cell, the parabola through that
        cell gives T_s = T_1 - (gap/k)(3 q_s + q_in)/4; one Newton step from q_s = q_in solves it to well below a
        millikelvin, as the gap is thin.

        flow : (m,) [W] through the links, towards the outer surface ; dT_dH : (n,) where the slopes are wanted ;
        T_peak : (s,) [K] hottest so far.
        """
        face = self.mesh.faces[name]
        surface = T[face.cells]
        stiffness: Array | None = None
        if name in self._inner_side:
            link, sign = self._inner_side[name]
            stiffness = 0.75 * face.gap / k[face.cells]
            q_in = sign * flow[link] / self.mesh.area[link]
            base = surface - stiffness * (q_in / 3.0)
            surface = base - stiffness * q_in
            excess, slope = stiffness * q_in, np.ones(1)
            for loss in losses:
                q, dq = loss.flux(surface, T_peak)
                excess = excess - stiffness * q
                slope = slope + stiffness * dq
            surface = surface + excess / slope
        fluxes = [loss.flux(surface, T_peak) for loss in losses]
        watts = tuple(q * face.area for q, _ in fluxes)
        if dT_dH is None:
            return FaceState(surface, watts, ())
        per_enthalpy = face.area * dT_dH[face.cells]
        if stiffness is not None:
            # dT_s/dT_1 with all losses of the face acting together.
            slope = np.ones(1)
            for _, dq in fluxes:
                slope = slope + stiffness * dq
            per_enthalpy = per_enthalpy / slope
        return FaceState(surface, watts, tuple(dq * per_enthalpy for _, dq in fluxes))
