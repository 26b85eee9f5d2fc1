"""The finite-volume mesh: cells, the links between them and the named faces to the outside."""

from dataclasses import dataclass
from typing import Literal

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]
Index = npt.NDArray[np.intp]


@dataclass(frozen=True)
class Face:
    """A named part of the surface.

    cells : (s,) cell behind each face ; area : (s,) [m2] ; gap : (s,) [m] from cell centre to surface, 0 where
    the cell is taken to be at surface temperature.
    """

    cells: Index
    area: Array
    gap: Array


@dataclass(frozen=True)
class Mesh:
    """Cells of a whole workpiece: n cells, m links. One dimension is one cell along the length.

    Parameters
    ----------
    kind : "cylindrical" (r is the radius) or "planar" (r is the distance from the mid-plane, both halves counted).
    r : (n,) [m] cell centres, rising towards the outer surface.
    edges : (n + 1,) [m] cell faces in r; edges[0] is 0, or the bore radius of a tube.
    length : [m] along the coil axis; width : [m] of a plate, 0 for cylinders.
    volume : (n,) [m3] of the whole workpiece.
    left, right : (m,) cells on either side of a link; area : (m,) [m2]; gap_left, gap_right : (m,) [m] from the
        cell centres to the shared face.
    faces : "outer", "ends"; for a tube "bore", for a plate "edges".
    """

    kind: Literal["cylindrical", "planar"]
    r: Array
    edges: Array
    length: float
    width: float
    volume: Array
    left: Index
    right: Index
    area: Array
    gap_left: Array
    gap_right: Array
    faces: dict[str, Face]

    @property
    def perimeter(self) -> float:
        """Length of the line along which the section faces the coil [m]."""
        return float(self.faces["outer"].area[0]) / self.length
