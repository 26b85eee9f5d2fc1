"""The reference problems on which accuracy and speed of the heat solver are stated: P1s and P1.

Both: a round steel bar R 30 mm, 100 cells graded from 0.05 mm at the surface to 0.92 mm at the axis; k and cp of
EN 1993-1-2:2005, 3.4.1.3 and 3.4.1.2 (peak of 5000 J/(kg K) at 735 °C); density 7850 kg/m3; loss by emissivity 0.8 and
10 W/(m2 K) to 20 °C; start at 20 °C.
P1s: fixed source q0 exp(-(R - r)/3 mm), q0 such that it brings 300 kW per m2 of surface, until the surface is at
1200 °C. P1: field of 100 kA/m peak at 3 kHz, held; resistivity straight from 0.2 to 1.15 µohm m between 20 and 900 °C,
mu_r from 40 to 1 by 3x^2 - 2x^3 between 745 and 775 °C; the field is solved anew as the bar heats; 600 s. It ends above
melting and without latent heat: a measuring rod, not a forecast.
"""

import math
from dataclasses import dataclass

import numpy as np

from materials.property import Property
from materials.source import Source
from thermal.circuit.supply import DirectDrive
from thermal.constants import ZERO_CELSIUS
from thermal.control import FixedDrive
from thermal.crosscheck.problem import PrescribedSource, Problem, convection, heating, plain_material, radiation
from thermal.eddy.radial import RadialSolver
from thermal.geometry.mesh import Mesh
from thermal.geometry.shapes import cylinder
from thermal.interfaces import Array, BoundaryLoss, Demand, EddyField, FieldOf
from thermal.results.dense import sample
from thermal.results.history import History
from thermal.schedule import Stop
from thermal.setup import Setup

RADIUS, LENGTH = 0.03, 0.1
T_START = ZERO_CELSIUS + 20.0
LOSSES: dict[str, tuple[BoundaryLoss, ...]] = {"outer": (radiation(0.8, T_START), convection(10.0, T_START))}

_STANDARD = Source("en-1993-1-2", "3.4.1.2 and 3.4.1.3", "recommended")
STEEL = plain_material(
    7850.0,
    Property("specific heat", np.empty(0), np.empty(0), "EN 1993-1-2 3.4.1.2", "hold", 0.0, "J/(kg K)", _STANDARD),
    Property(
        "conductivity",
        ZERO_CELSIUS + np.array([20.0, 800.0, 1200.0]),
        np.array([54.0 - 0.0333 * 20.0, 27.3, 27.3]),
        "linear",
        "hold",
        0.0,
        "W/(m K)",
        _STANDARD,
    ),
)


def bar() -> Mesh:
    """100 cells in geometric progression: 0.05 mm at the surface, 0.92 mm at the axis."""
    cells, first = 100, 0.05e-3
    low, high = 1.0, 1.1
    for _ in range(80):
        ratio = 0.5 * (low + high)
        low, high = (low, ratio) if first * np.sum(ratio ** np.arange(cells)) > RADIUS else (ratio, high)
    depth = np.concatenate([[0.0], np.cumsum(first * ratio ** np.arange(cells))])
    edges = RADIUS - depth[::-1]
    edges[0] = 0.0
    return cylinder(edges, LENGTH)


def p1s(tolerance: float) -> Setup:
    """P1s at a tolerance [K] per step."""
    mesh = bar()
    shape = np.exp(-(RADIUS - mesh.r) / 3e-3)
    heat = shape * (300e3 * mesh.faces["outer"].area[0] / (shape @ mesh.volume))
    return Problem(
        mesh,
        (heating(None, Stop({"surface": ZERO_CELSIUS + 1200.0})),),
        T_initial=T_START,
        losses=LOSSES,
        source=PrescribedSource(mesh, lambda T, excitation: heat),
        material=STEEL,
        tolerance=tolerance,
    ).setup()


@dataclass(frozen=True)
class FieldOfTemperature:
    """The field of a bar whose mu_r is a law of temperature alone (plays HeatSource): one solve for each state."""

    mesh: Mesh
    solver: RadialSolver

    def at(self, T: Array) -> FieldOf:
        """Field as a function of the surface field [A/m], rms, at T (n,) [K]."""
        t = T - ZERO_CELSIUS
        resistivity = np.interp(t, [20.0, 900.0], [0.2e-6, 1.15e-6])
        x = np.clip((t - 745.0) / 30.0, 0.0, 1.0)
        mu_r = 40.0 - 39.0 * x * x * (3.0 - 2.0 * x)

        def field_of(excitation: float, frequency: float, guess: EddyField | None) -> EddyField:
            heat = self.solver.profile(resistivity, mu_r, frequency).heat * excitation**2
            return EddyField(heat, float(heat @ self.mesh.volume), 0j, excitation, mu_r, 1)

        return field_of


def p1(tolerance: float) -> Setup:
    """P1 at a tolerance [K] per step."""
    mesh = bar()
    drive = FixedDrive(Demand("surface_field", 100e3 / math.sqrt(2.0)))
    return Problem(
        mesh,
        (heating(600.0, control=drive),),
        T_initial=T_START,
        losses=LOSSES,
        source=FieldOfTemperature(mesh, RadialSolver(mesh)),
        supply=DirectDrive(3e3),
        material=STEEL,
        tolerance=tolerance,
        frequency=3e3,
    ).setup()


def largest_error(history: History, setup: Setup, exact: History) -> float:
    """[K] ; setup : of the exact run."""
    # A run may pass the end of the exact one by milliseconds where both end on a temperature.
    inside = history.time <= exact.time[-1]
    at = sample(setup, exact, np.zeros(int(inside.sum()), dtype=int), history.time[inside])
    gaps = [np.abs(history.readings[name][inside] - at.readings[name]).max() for name in ("surface", "core")]
    return float(max(gaps))
