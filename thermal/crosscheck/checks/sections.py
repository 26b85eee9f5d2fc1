"""Sections and readings shared by the heat rows of the verification table."""

import numpy as np

from thermal.crosscheck.problem import Problem
from thermal.geometry.grading import graded_edges
from thermal.geometry.mesh import Mesh
from thermal.geometry.shapes import cylinder, plate
from thermal.interfaces import Array
from thermal.loop import run
from thermal.results.history import History

RUN = "thermal.loop.run"
RUN_GRID = "grid of a run: first cell 1/60 of the section, at least 40 cells; 0.1 K per step, the default"
CARSLAW = "H. S. Carslaw, J. C. Jaeger, Conduction of Heat in Solids, 2nd ed. 1959"
INCROPERA = "F. P. Incropera et al., Fundamentals of Heat and Mass Transfer"
DEFAULT_TOLERANCE = 0.1
"""[K] per step, the default of a case file."""
T_START = 293.15
DIFFUSIVITY = 30.0 / (7800.0 * 650.0)
"""Of the steel-like metal of most closed solutions [m2/s]: 30 W/(m K), 7800 kg/m3, 650 J/(kg K)."""


def bar(radius: float, refinement: int = 1) -> Mesh:
    """Round bar [m] on the grid a run takes where no field is finer."""
    return cylinder(graded_edges(0.0, radius, radius, refinement), 0.1)


def slab(half: float) -> Mesh:
    """Plate of a half thickness [m] on that grid."""
    return plate(graded_edges(0.0, half, half), 0.2, 0.3)


def even(inner: float, outer: float, cells: int) -> Array:
    """Faces of equal cells (cells + 1,) [m]."""
    return np.linspace(inner, outer, cells + 1)


def done(problem: Problem) -> History:
    """The problem, run."""
    return run(problem.setup())


def last(history: History, reading: str) -> float:
    """A reading [K] at the end."""
    return float(history.readings[reading][-1])
