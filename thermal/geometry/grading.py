"""Cell sizes across the section: fine where the field is, coarse where it is not."""

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]

CELLS_PER_SKIN_DEPTH = 6.0
GROWTH = 1.15
CELLS_AT_LEAST = 40
FIRST_CELL_FRACTION = 1.0 / 60.0


def graded_edges(inner: float, outer: float, skin_depth: float, refinement: int = 1) -> Array:
    """Cell faces from inner to outer, graded towards the outer surface.

    The first cell is a sixth of the skin depth (or 1/60 of the section where that is smaller), each further cell up
    to 15 % larger, none larger than 1/40 of the section. Within these bounds the fitted two-port of the field
    solver is good to 0.01 % in power with uniform properties and to 0.3 % in saturating metals, and the surface
    temperature to a fraction of a kelvin (measured, see tests).

    Parameters
    ----------
    inner, outer : [m] bounds of the section; skin_depth : [m] the smallest of the run;
    refinement : every cell is cut into this many.

    Returns
    -------
    edges : (n + 1,) [m], rising.
    """
    section = outer - inner
    first = min(skin_depth / CELLS_PER_SKIN_DEPTH, section * FIRST_CELL_FRACTION)
    cap = section / CELLS_AT_LEAST
    sizes = [first]
    while sum(sizes) < section:
        sizes.append(min(sizes[-1] * GROWTH, cap))
    depth = np.concatenate([[0.0], np.cumsum(sizes)])
    depth *= section / depth[-1]
    edges = outer - depth[::-1]
    edges[0] = inner
    edges[-1] = outer
    return refine(edges, refinement)


def refine(edges: Array, times: int) -> Array:
    """Every cell cut into equal parts; (n * times + 1,) edges."""
    if times == 1:
        return edges
    parts = np.arange(times) / times
    inner = edges[:-1, None] + np.diff(edges)[:, None] * parts[None, :]
    return np.append(inner.ravel(), edges[-1])
