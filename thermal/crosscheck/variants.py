"""P1 in other fields, at other frequencies and in other diameters: what the sweep of the benchmark runs.

Kept apart, because a worker process loads this to run one and is timed from its start.
"""

import math
from dataclasses import dataclass
from itertools import product

from thermal.circuit.supply import DirectDrive
from thermal.control import FixedDrive
from thermal.crosscheck.problem import Problem, heating
from thermal.crosscheck.reference_problems import LENGTH, LOSSES, RADIUS, STEEL, T_START, FieldOfTemperature, bar
from thermal.crosscheck.timing import CLOCK
from thermal.eddy.radial import RadialSolver
from thermal.geometry.shapes import cylinder
from thermal.interfaces import Array, Demand
from thermal.loop import run
from thermal.setup import Setup

DURATION = 600.0
FIELDS, FREQUENCIES, DIAMETERS = (80e3, 100e3), (2e3, 3e3, 5e3), (0.05, 0.06)


@dataclass(frozen=True)
class Variant:
    """field : surface field [A/m], peak ; frequency : [Hz] ; diameter : [m]."""

    field: float
    frequency: float
    diameter: float


VARIANTS = tuple(Variant(*each) for each in product(FIELDS, FREQUENCIES, DIAMETERS))


@dataclass(frozen=True)
class Trace:
    """What is left of a run.

    time : (s,) [s] ; surface, core : (s,) [K] ; steps, evaluations of the right-hand side : counts ; processor : [s].
    """

    time: Array
    surface: Array
    core: Array
    steps: int
    evaluations: int
    processor: float


def variant_problem(variant: Variant, tolerance: float) -> Setup:
    """A variant of P1 at a tolerance [K] per step; the cells of P1, all wider or narrower by the same factor."""
    mesh = cylinder(bar().edges * (0.5 * variant.diameter / RADIUS), LENGTH)
    drive = FixedDrive(Demand("surface_field", variant.field / math.sqrt(2.0)))
    return Problem(
        mesh,
        (heating(DURATION, control=drive),),
        T_initial=T_START,
        losses=LOSSES,
        source=FieldOfTemperature(mesh, RadialSolver(mesh)),
        supply=DirectDrive(variant.frequency),
        material=STEEL,
        tolerance=tolerance,
        frequency=variant.frequency,
    ).setup()


def run_variant(variant: Variant, tolerance: float) -> Trace:
    """One run by the own solver, from putting the problem together to its last step."""
    began = CLOCK()
    history = run(variant_problem(variant, tolerance))
    return Trace(
        history.time,
        history.readings["surface"],
        history.readings["core"],
        history.steps,
        history.field_solves,
        CLOCK() - began,
    )
