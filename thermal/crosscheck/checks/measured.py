"""Measured skin effect: the axial field inside a rod and two tubes of metal in a long coil.

Student laboratory work at FHNW, Switzerland, laboratory sheets of 21 October 2015 (github.com/alpenwasser/glaL3,
MIT licence): a Hall probe in a coil of 98 mm bore, 500 mm length and 574 turns. A few of its points stand here, at
about doubled frequencies within the range in which probe and meter hold. Alloys and sensitivity of the probe are not
recorded: conductivity and sensitivity are fitted to each run, so that only the shape of the curves is compared, and
an error of a few per cent cannot be seen. None of these metals is magnetic.
"""

import math
from collections.abc import Iterator
from dataclasses import dataclass, replace

import numpy as np

from thermal.crosscheck.checks.field import uniform
from thermal.crosscheck.checks.row import PUBLISHED_MU_0, Check, Row
from thermal.eddy.radial import ComplexArray
from thermal.geometry.grading import graded_edges
from thermal.geometry.shapes import cylinder
from thermal.interfaces import Array

SOURCE = "student laboratory work at FHNW, 2015, laboratory sheets, github.com/alpenwasser/glaL3 (MIT licence)"
GRID = "RadialSolver on the grid of a run at the highest frequency shown: first cell a sixth of the skin depth"
SOLVER = "thermal.eddy.radial.RadialSolver.profile"


@dataclass(frozen=True)
class Axis:
    """Field on the axis of one piece over frequency.

    id : of its rows ; name ; inner, outer : [m] ; conductivity : [S/m], fitted ; frequency : (k,) [Hz] ; reading : (k,)
    [mV] of the probe ; lag : (k,) [degrees] behind the current ; amplitude_allowed : [-] ; lag_allowed : [degrees].
    """

    id: str
    name: str
    inner: float
    outer: float
    conductivity: float
    frequency: tuple[float, ...]
    reading: tuple[float, ...]
    lag: tuple[float, ...]
    amplitude_allowed: float
    lag_allowed: float

    def check(self) -> Check:
        """What its rows share."""
        shape = "rod of " if self.inner == 0.0 else f"tube {2e3 * self.inner:g}/"
        return Check(
            self.id,
            "measured",
            f"{self.name} {shape}{2e3 * self.outer:g} mm: field on the axis over that outside "
            f"({1e-6 * self.conductivity:g} MS/m fitted)",
            SOLVER,
            GRID,
            SOURCE,
        )


AXES = [
    Axis(
        "ME-01",
        "Aluminium",
        0.0,
        0.045,
        22.7e6,
        (1.0, 10.0, 20.0, 40.0, 80.0, 120.0, 160.0),
        (69.0, 57.0, 40.0, 21.0, 8.0, 3.6, 1.9),
        (5.4, 50.0, 85.0, 132.0, 196.0, 243.0, 283.0),
        0.08,
        3.0,
    ),
    Axis(
        "ME-02",
        "Copper",
        0.03,
        0.035,
        52.8e6,
        (1.0, 10.0, 40.0, 120.0, 400.0, 800.0, 1000.0),
        (70.0, 66.0, 41.8, 16.9, 4.8, 1.9, 1.4),
        (2.0, 19.2, 56.7, 87.0, 121.0, 155.0, 170.0),
        0.06,
        3.0,
    ),
    Axis(
        "ME-03",
        "Stainless steel",
        0.03,
        0.035,
        1.18e6,
        (1.0, 80.0, 400.0, 800.0, 1200.0, 2000.0, 2500.0),
        (69.6, 69.2, 66.2, 59.0, 50.5, 37.2, 32.0),
        (0.0, 3.6, 17.5, 32.4, 43.5, 58.0, 64.0),
        0.05,
        3.0,
    ),
]
ACROSS = Check(
    "ME-04",
    "measured",
    "Aluminium rod of 90 mm at 30 Hz: field inside over that outside (22.5 MS/m and the zero of the phase fitted)",
    SOLVER,
    GRID,
    SOURCE,
)
RADII = (0.0, 10.0, 20.0, 30.0, 40.0, 45.0)
"""[mm]"""
ACROSS_READING = (28.6, 28.7, 30.0, 38.0, 54.0, 62.0)
ACROSS_LAG = (111.0, 104.0, 81.0, 48.5, 16.0, 2.7)


def rows(full: bool) -> Iterator[Row]:
    """Rows of the measured runs: of each the points that fit worst, or every point."""
    for run in AXES:
        places = tuple(f"{frequency:g} Hz" for frequency in run.frequency)
        field = np.array([_on_axis(run, frequency) for frequency in run.frequency])
        lag = -np.degrees(np.unwrap(np.angle(field)))
        allowed = (run.amplitude_allowed, run.lag_allowed)
        yield from _compared(run.check(), places, np.abs(field), run.reading, lag, run.lag, allowed, full)
    across = _across()
    places = tuple(f"r {radius:g} mm" for radius in RADII)
    # Counted from the surface inwards, where the phase starts at nothing.
    lag = -np.degrees(np.unwrap(np.angle(across[::-1]))[::-1])
    lag += np.mean(np.array(ACROSS_LAG) - lag)
    yield from _compared(ACROSS, places, np.abs(across), ACROSS_READING, lag, ACROSS_LAG, (0.05, 2.0), full)


def _compared(
    check: Check,
    places: tuple[str, ...],
    amplitude: Array,
    reading: tuple[float, ...],
    lag: Array,
    measured_lag: tuple[float, ...],
    allowed: tuple[float, float],
    full: bool,
) -> Iterator[Row]:
    """Amplitude (k,), computed over that outside and read in mV, and lag (k,) [degrees], computed and measured."""
    # The sensitivity that fits best on logarithms: the probe was not calibrated.
    sensitivity = math.exp(float(np.mean(np.log(np.array(reading) / amplitude))))
    amplitudes = [
        check.relative(f"field, {place}", read / sensitivity, computed, "-", allowed[0])
        for place, read, computed in zip(places, reading, amplitude, strict=True)
    ]
    lags = [
        check.absolute(f"phase lag, {place}", measured, computed, "°", allowed[1])
        for place, measured, computed in zip(places, measured_lag, lag, strict=True)
    ]
    if full:
        yield from amplitudes
        yield from lags
    else:
        yield _worst(amplitudes)
        yield _worst(lags)


def _worst(found: list[Row]) -> Row:
    worst = max(found, key=lambda row: row.error)
    return replace(worst, quantity=f"{worst.quantity} (worst of {len(found)})")


def _on_axis(run: Axis, frequency: float) -> complex:
    """Field on the axis over that outside: the innermost face, of a tube its bore."""
    edges = graded_edges(run.inner, run.outer, _depth(run.conductivity, run.frequency[-1]))
    return complex(uniform(cylinder(edges, 1.0), 1.0 / run.conductivity, 1.0, frequency).H[0])


def _across() -> ComplexArray:
    """Field at the radii over that outside."""
    conductivity, frequency, outer = 22.5e6, 30.0, 0.045
    mesh = cylinder(graded_edges(0.0, outer, _depth(conductivity, frequency)), 1.0)
    return np.interp(np.array(RADII) * 1e-3, mesh.edges, uniform(mesh, 1.0 / conductivity, 1.0, frequency).H)


def _depth(conductivity: float, frequency: float) -> float:
    return math.sqrt(1.0 / (conductivity * math.pi * frequency * PUBLISHED_MU_0))
