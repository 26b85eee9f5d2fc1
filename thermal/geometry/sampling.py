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

    def at_depth(self, extended: Array, depth: float) -> Array:
        """Temperature (...,) [K] at a depth [m] under the outer surface, linear between the nodes (..., n + 2)."""
        place = self.nodes[-1] - depth
        left = min(max(int(np.searchsorted(self.nodes, place)) - 1, 0), self.nodes.size - 2)
        share = (place - self.nodes[left]) / (self.nodes[left + 1] - self.nodes[left])
        return np.asarray((1.0 - share) * extended[..., left] + share * extended[..., left + 1])

    def hottest_depth(self, extended: Array) -> float:
        """Depth [m] of the hottest point, the top of the parabola through the three hottest nodes (n + 2,)."""
        i = int(np.argmax(extended))
        if not 0 < i < extended.size - 1:
            return float(self.nodes[-1] - self.nodes[i])
        x0, x1, x2 = self.nodes[i - 1 : i + 2]
        left = (extended[i] - extended[i - 1]) / (x1 - x0)
        right = (extended[i + 1] - extended[i]) / (x2 - x1)
        top = 0.5 * (x0 + x1) + 0.5 * (x2 - x0) * left / (left - right) if left > right else x1
        return float(self.nodes[-1] - top)

    def readings(self, extended: Array, depths: dict[str, float]) -> dict[str, Array]:
        """Every reading (...,) [K] by name, from temperatures (..., n + 2) at the nodes and named depths [m].

        mean is over the volume, maximum over the whole section, spread is surface minus core.
        """
        surface, core = extended[..., -1], extended[..., 0]
        found = {
            "surface": surface,
            "core": core,
            "mean": extended[..., 1:-1] @ self.volume_share,
            "maximum": extended.max(axis=-1),
            "spread": surface - core,
        }
        for name, depth in depths.items():
            found[name] = self.at_depth(extended, depth)
        return found
