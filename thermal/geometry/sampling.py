"""Temperatures at named places of a section, from cell and surface temperatures."""

from dataclasses import dataclass

import numpy as np

from thermal.geometry.mesh import Array, Mesh


@dataclass(frozen=True)
class Sampler:
    """Reads a one-dimensional section at any depth.

    nodes : (n + 2,) [m] core (axis, mid-plane or bore), cell centres, outer surface.
    core_weights : of the two innermost cells; the parabola with zero slope at the axis or mid-plane.
    volume_share : (n,) [-] of each cell.
    """

    nodes: Array
    core_weights: tuple[float, float] | None
    volume_share: Array

    @staticmethod
    def of(mesh: Mesh) -> "Sampler":
        """Sampler of a mesh; a tube's core is its bore surface."""
        weights = None
        if "bore" not in mesh.faces:
            a, b = mesh.r[0] ** 2, mesh.r[1] ** 2
            weights = (float(b / (b - a)), float(-a / (b - a)))
        nodes = np.concatenate([mesh.edges[:1], mesh.r, mesh.edges[-1:]])
        return Sampler(nodes, weights, mesh.volume / mesh.volume.sum())

    def extended(self, T: Array, T_outer: float, T_bore: float | None) -> Array:
        """Temperatures (n + 2,) [K] at the nodes."""
        if self.core_weights is not None:
            core = self.core_weights[0] * T[0] + self.core_weights[1] * T[1]
        else:
            core = T_bore if T_bore is not None else T[0]
        return np.concatenate([[core], T, [T_outer]])

    def at_depth(self, extended: Array, depth: float) -> float:
        """Temperature [K] at a depth [m] under the outer surface, linear between the nodes."""
        return float(np.interp(self.nodes[-1] - depth, self.nodes, extended))

    def mean(self, T: Array) -> float:
        """Volume mean [K]."""
        return float(self.volume_share @ T)
