"""Finite-volume conduction with volumetric enthalpy as the state.

V dH/dt = sum of link fluxes + source - losses, T from H by a table. Links between neighbours only (one dimension).
"""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

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

    def enthalpy(self, T: npt.ArrayLike) -> Array:
        """H [J/m3]."""
        return np.asarray(np.interp(T, self.T, self.H))

    def slope(self, H: Array) -> Array:
        """dT/dH (n,) [K m3/J]."""
        row = np.clip(np.searchsorted(self.H, H) - 1, 0, self.H.size - 2)
        return np.asarray(self._slopes[row])

    def __post_init__(self) -> None:
        object.__setattr__(self, "_slopes", np.diff(self.T) / np.diff(self.H))

    _slopes: Array = None  # type: ignore[assignment]  # set once in __post_init__


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
        cell gives T_s = T_1 - (gap/k)(3 q_s + q_in)/4; one Newton step from q_s = q_in solves it to
        well below a millikelvin, as the gap is thin.

        flow : (m,) [W] through the links, towards the outer surface ; dT_dH : (n,) where the slopes are wanted ;
        T_peak : (s,) [K] hottest so far.
        """
        face = self.mesh.faces[name]
        cells = face.cells
        T_cell = T[cells]
        if face.gap[0] == 0.0:
            surface, stiffness = T_cell, None
        else:
            stiffness = 0.75 * face.gap / k[cells]
            q_in = self._flux_to(name, flow)
            base = T_cell - stiffness * (q_in / 3.0)
            surface = base - stiffness * q_in
            q, dq = total_flux(losses, surface, T_peak)
            surface = surface - (surface - base + stiffness * q) / (1.0 + stiffness * dq)
        loss, slope = [], []
        for each in losses:
            q, dq = each.flux(surface, T_peak)
            loss.append(q * face.area)
            if dT_dH is not None:
                slope.append((dq, face.area * dT_dH[cells]))
        if dT_dH is None:
            return FaceState(surface, tuple(loss), ())
        # dT_s/dT_1 with all losses of the face acting together.
        share = 1.0 if stiffness is None else 1.0 / (1.0 + stiffness * sum(dq for dq, _ in slope))
        return FaceState(surface, tuple(loss), tuple(dq * area * share for dq, area in slope))

    def _flux_to(self, name: str, flow: Array) -> Array:
        """Flux [W/m2] through the inner side of the surface cell, towards the surface."""
        if flow.size == 0:
            return np.zeros(1)
        if name == "outer":
            return flow[-1:] / self.mesh.area[-1]
        return -flow[:1] / self.mesh.area[0]


def total_flux(losses: tuple[BoundaryLoss, ...], T_surface: Array, T_peak: Array) -> tuple[Array, Array]:
    """Sum of the fluxes (s,) [W/m2] out of a face and its slope [W/(m2 K)]."""
    q, dq = np.zeros_like(T_surface), np.zeros_like(T_surface)
    for each in losses:
        part, slope = each.flux(T_surface, T_peak)
        q = q + part
        dq = dq + slope
    return q, dq
