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
    """One face at one moment: surface temperature [K], flux [W] and its slope [W m3/J] with H, per loss.

    Numbers for a face of one cell, (s,) for the end faces.
    """

    T_surface: float | Array
    loss: tuple[float | Array, ...]
    slope: tuple[float | Array, ...]


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
        # Surfaces with a half cell in front: the cell, the link on its inner side and the sign towards the surface.
        places = {"outer": (-1, -1, 1.0), "bore": (0, 0, -1.0)}
        self._surfaces = {
            name: (
                *place,
                float(mesh.faces[name].area[0]),
                float(mesh.faces[name].gap[0]),
                float(mesh.area[place[1]]),
            )
            for name, place in places.items()
            if name in mesh.faces
        }

    def conductances(self, k: Array) -> Array:
        """Conductance of the links (m,) [W/K]."""
        return np.asarray(1.0 / (self._over_left / k[:-1] + self._over_right / k[1:]))

    def surface_state(
        self,
        name: str,
        losses: tuple[BoundaryLoss, ...],
        T: Array,
        k: Array,
        flow: Array,
        dT_dH: Array | None,
        T_peak: float,
    ) -> FaceState:
        """Surface temperature and losses of the outer surface or the bore.

        With q_s the loss and q_in the flux through the inner side of the surface cell, the parabola through that
        cell gives T_s = T_1 - (gap/k)(3 q_s + q_in)/4; one Newton step from q_s = q_in solves it to well below a
        millikelvin, as the gap is thin.

        flow : (m,) [W] through the links, towards the outer surface ; dT_dH : (n,) where the slopes are wanted ;
        T_peak : [K] hottest so far.
        """
        cell, link, sign, area, gap, link_area = self._surfaces[name]
        stiffness = 0.75 * gap / float(k[cell])
        q_in = sign * float(flow[link]) / link_area
        surface = float(T[cell]) - stiffness * (4.0 / 3.0) * q_in
        excess, steepness = stiffness * q_in, 1.0
        for loss in losses:
            q, dq = loss.flux(surface, T_peak)
            excess -= stiffness * q
            steepness += stiffness * dq
        surface += excess / steepness
        fluxes = [loss.flux(surface, T_peak) for loss in losses]
        watts = tuple(q * area for q, _ in fluxes)
        if dT_dH is None:
            return FaceState(surface, watts, ())
        # dT_s/dT_1 with all losses of the face acting together.
        per_enthalpy = area * float(dT_dH[cell]) / (1.0 + stiffness * sum(dq for _, dq in fluxes))
        return FaceState(surface, watts, tuple(dq * per_enthalpy for _, dq in fluxes))

    def ends_state(
        self, name: str, losses: tuple[BoundaryLoss, ...], T: Array, dT_dH: Array | None, T_peak: Array
    ) -> FaceState:
        """Losses of the end faces or edges, every cell showing its own temperature."""
        area = self.mesh.faces[name].area
        fluxes = [loss.flux(T, T_peak) for loss in losses]
        slope = () if dT_dH is None else tuple(dq * (area * dT_dH) for _, dq in fluxes)
        return FaceState(T, tuple(q * area for q, _ in fluxes), slope)
