"""The mean of a law of temperature over each cell, for a law that drops within a cell.

The Curie front is a few kelvin wide, a fraction of a millimetre where the gradient is steep. Read at the cell centre,
the permeability of a cell would switch off at once as the front passes its middle, and the power would ripple by some
per cent.
"""

import numpy as np

from thermal.geometry.mesh import Mesh
from thermal.interfaces import Array, PropertyOf

NARROWEST = 1.0
"""Half of the smallest span of temperature averaged over [K]: composition and grain round the Curie point off by about
that much (assumption). A sharp drop would also make a piece that rests on it answer the last millikelvin with half of
its power."""


class CellMean:
    """Mean of a law over the span of temperature of each cell, the profile taken as straight within it.

    Parameters
    ----------
    mesh : cells in a row.
    law : T -> value, zero above its end.
    end : [K] where the law drops to zero, perhaps with a vertical tangent.
    """

    def __init__(self, mesh: Mesh, law: PropertyOf, end: float) -> None:
        near = end - np.geomspace(1e-4, 50.0, 400)[::-1]
        self._T = np.concatenate([np.arange(50.0, near[0], 0.5), near, [end]])
        value = law(self._T)
        steps = 0.5 * (value[1:] + value[:-1]) * np.diff(self._T)
        self._integral = np.concatenate([[0.0], np.cumsum(steps)])
        half = 0.5 * np.diff(mesh.edges)
        # Temperature on the faces: straight between the centres, on from there to the outer surface, level to the axis,
        # mid-plane or bore, where next to no heat flows.
        self._weight = half[:-1] / (half[:-1] + half[1:])

    def slope(self, T: Array) -> Array:
        """Slope (n,) of the mean with all temperatures [1/K], a difference over the narrowest span."""
        return (self(T + NARROWEST) - self(T - NARROWEST)) / (2.0 * NARROWEST)

    def __call__(self, T: Array) -> Array:
        """Mean (n,) at cell temperatures T (n,) [K]."""
        rise = np.diff(T)
        # Half spans to the inner and the outer face of every cell.
        outer = np.empty_like(T)
        np.multiply(rise, self._weight, out=outer[:-1])
        inner = np.empty_like(T)
        np.subtract(rise, outer[:-1], out=inner[1:])
        inner[0], outer[-1] = 0.0, inner[-1]
        span = np.maximum(0.5 * np.abs(inner + outer), NARROWEST)
        middle = T + 0.5 * (outer - inner)
        above = np.interp(middle + span, self._T, self._integral)
        below = np.interp(middle - span, self._T, self._integral)
        return np.asarray((above - below) / (2.0 * span))
