"""Radiating and resting sections, each a run put together by hand (TH-07, TH-09, TH-14)."""

import math
from collections.abc import Callable, Iterator

import numpy as np

from thermal.boundary.emissivity import Emissivity
from thermal.boundary.radiation import Radiation
from thermal.boundary.table import constant_law
from thermal.crosscheck.checks.row import Check, Row
from thermal.crosscheck.checks.sections import CARSLAW, INCROPERA, RUN, done, even, last
from thermal.crosscheck.problem import (
    PrescribedSource,
    Problem,
    constant_flux,
    convection,
    heating,
    left_alone,
    radiation,
    uniform_source,
)
from thermal.geometry.mesh import Mesh
from thermal.geometry.shapes import cylinder, plate
from thermal.interfaces import Array, BoundaryLoss
from thermal.results.history import History
from thermal.schedule import Stage, Stop

EVEN_GRID = "100 equal cells; run to rest (20000 s), 0.05 K per step"
T_AROUND = 300.0
LONG = 20_000.0
"""A hundred time constants of the largest problem at rest here [s]."""

AT_REST = Check(
    "TH-07",
    "heat",
    "Bar of 40 mm with 10 MW/m3 inside, cooled at 250 W/(m2 K), at rest",
    RUN,
    EVEN_GRID,
    f"{INCROPERA}, 3.5 (closed form evaluated)",
)
TUBE_AT_REST = Check(
    "TH-07",
    "heat",
    "Tube 20/40 mm with 10 MW/m3 in its wall, bore insulated, at rest",
    RUN,
    EVEN_GRID,
    f"{INCROPERA}, 3.5 (closed form evaluated)",
)
TUBE_SPREAD = 13.44754699066758
"""Bore minus outside [K]."""
ORDER = Check(
    "TH-07",
    "heat",
    "The same tube: error of the section against the size of its cells",
    RUN,
    "50 and 200 equal cells; run to rest (20000 s), 0.05 K per step",
    "second order by construction of the finite volumes (S. V. Patankar, Numerical Heat Transfer and Fluid Flow, 1980; "
    "from memory)",
)
COMPOSITE = Check(
    "TH-07",
    "heat",
    "Bar of 40 mm, its inner half heated and a poorer conductor than the rest, at rest",
    RUN,
    EVEN_GRID,
    f"{INCROPERA}, 3.5 (closed form evaluated)",
)
RADIATED = Check(
    "TH-09",
    "heat",
    "Radiation of a surface of emissivity 0.8 at 1200 °C to a room of 20 °C",
    "thermal.boundary.radiation.Radiation.flux",
    "no grid",
    f"{INCROPERA}, 5.3 (sigma 5.670374419e-8 W/(m2 K4), evaluated)",
)
GLOWING = Check(
    "TH-09",
    "heat",
    "Glowing bar of 50 mm of one temperature, emissivity 0.8: time to cool or heat",
    RUN,
    "10 equal cells of 1 MW/(m K); 0.005 K per step",
    f"{INCROPERA}, 5.3, eqs 5.18-5.19 (closed form evaluated)",
)
BALANCE = Check(
    "TH-09",
    "heat",
    "The same bar heated with 10 W/cm2: temperature at which it rests",
    RUN,
    "10 equal cells of 1 MW/(m K); run for 100000 s, 0.005 K per step",
    f"{INCROPERA}, 5.3 (balance of fluxes, evaluated)",
)
VARYING = Check(
    "TH-14",
    "heat",
    "Conductivity that falls with temperature, 20 MW/m3 inside, at rest: middle minus surface",
    RUN,
    EVEN_GRID,
    f"{CARSLAW}, 1.6 and 2.16 (Kirchhoff's transformation, evaluated)",
)

COOLING_TIMES = [
    # Room [K], from 1473.15 K to [K] -> [s].
    ("1200 to 800 °C, room 20 °C", 293.15, 1073.15, 231.9422229624815),
    ("1200 to 300 °C, room 20 °C", 293.15, 573.15, 2403.483812799423),
    ("1200 to 1000 °C, room 20 °C", 293.15, 1273.15, 80.1705971328513),
    ("1200 to 1000 °C, room at 0 K", 0.0, 1273.15, 79.9962554298608),
    ("1200 to 800 °C, room at 0 K", 0.0, 1073.15, 231.13781697859918),
    ("1200 to 500 °C, room 20 °C", 293.15, 773.15, 870.918156618856),
]
QUICK_COOLING = 2
HEATING_TIMES = [
    # Flux [W/m2], from 293.15 K to [K] -> [s].
    ("20 to 600 °C with 10 W/cm2", 1e5, 873.15, 400.4085300066544),
    ("20 to 600 °C with 20 W/cm2", 2e5, 873.15, 191.3054100757195),
    ("20 to 934.2 °C with 10 W/cm2", 1e5, 0.99 * 1219.516544807047, 1134.6110160173118),
]
QUICK_HEATING = 1
RESTS = [
    # Flux [W/m2], convection [W/(m2 K)] -> [K].
    ("radiation alone", 1e5, 0.0, 1219.516544807047),
    ("radiation and 15 W/(m2 K)", 1e5, 15.0, 1177.062676831502),
    ("radiation alone, 5 W/cm2", 5e4, 0.0, 1026.3420314869254),
]
QUICK_RESTS = 2


def rows(full: bool) -> Iterator[Row]:
    """Rows of radiation and rest, the quick choice or all."""
    yield from _resting(full)
    yield from _radiating(full)
    yield from _kirchhoff(full)


def _at_rest(
    mesh: Mesh, source: PrescribedSource, h: float, conductivity: Callable[[Array], Array] | None = None
) -> History:
    return done(
        Problem(
            mesh,
            (heating(LONG),),
            T_initial=T_AROUND,
            source=source,
            losses={"outer": (convection(h, T_AROUND),)},
            conductivity=conductivity,
            depths={"half": 0.5 * float(mesh.edges[-1])},
            tolerance=0.05,
        )
    )


def _resting(full: bool) -> Iterator[Row]:
    mesh = cylinder(even(0.0, 0.02, 100), 0.1)
    history = _at_rest(mesh, uniform_source(mesh, 1e7), 250.0)
    yield AT_REST.relative("centre minus surface", 33.333333333333336, -last(history, "spread"), "K", 1e-4)
    yield AT_REST.relative("surface over the room", 400.0, last(history, "surface") - T_AROUND, "K", 1e-6)
    tube = _tube_at_rest(100)
    yield TUBE_AT_REST.relative("bore minus outside", TUBE_SPREAD, -last(tube, "spread"), "K", 1e-4)
    if full:
        yield TUBE_AT_REST.relative("outside over the room", 300.0, last(tube, "surface") - T_AROUND, "K", 1e-6)
        coarse, fine = (abs(last(_tube_at_rest(cells), "spread") + TUBE_SPREAD) for cells in (50, 200))
        yield ORDER.absolute("order from 50 to 200 cells", 2.0, 0.5 * math.log2(coarse / fine), "-", 0.1)
    inside = mesh.r < 0.01
    core = PrescribedSource(mesh, lambda T, excitation: np.where(inside, 1e7, 0.0))
    history = _at_rest(mesh, core, 250.0, lambda T: np.where(inside, 15.0, 45.0))
    yield COMPOSITE.relative(
        "centre minus surface, of two parts", 24.368302006221615, -last(history, "spread"), "K", 1e-4
    )


def _tube_at_rest(cells: int) -> History:
    mesh = cylinder(even(0.01, 0.02, cells), 0.1)
    return _at_rest(mesh, uniform_source(mesh, 1e7), 250.0)


def _lumped(stage: Stage, T_initial: float, *losses: BoundaryLoss) -> History:
    return done(
        Problem(
            cylinder(even(0.0, 0.025, 10), 0.1),
            (stage,),
            T_initial=T_initial,
            losses={"outer": losses},
            conductivity=lambda T: np.full_like(T, 1e6),
            tolerance=0.005,
        )
    )


def _radiating(full: bool) -> Iterator[Row]:
    loss = Radiation("radiation", Emissivity(constant_law(0.8), False), 293.15)
    flux = float(loss.flux(1473.15, 1473.15)[0])
    yield RADIATED.relative("flux", 213308.44783781114, flux, "W/m2", 1e-6)
    for name, room, target, time in COOLING_TIMES if full else COOLING_TIMES[:QUICK_COOLING]:
        stop = Stop({"surface": target}, falling=True)
        history = _lumped(left_alone(1e5, stop), 1473.15, radiation(0.8, room))
        yield GLOWING.relative(name, time, history.time[-1], "s", 1e-4)
    for name, q, target, time in HEATING_TIMES if full else HEATING_TIMES[:QUICK_HEATING]:
        stage = left_alone(1e5, Stop({"surface": target}))
        history = _lumped(stage, 293.15, constant_flux(q), radiation(0.8, 293.15))
        yield GLOWING.relative(name, time, history.time[-1], "s", 1e-4)
    for name, q, h, T in RESTS if full else RESTS[:QUICK_RESTS]:
        losses = (constant_flux(q), radiation(0.8, 293.15), convection(h, 293.15))
        history = _lumped(heating(1e5), 293.15, *losses)
        yield BALANCE.relative(name, T, last(history, "surface"), "K", 1e-6)


def _kirchhoff(full: bool) -> Iterator[Row]:
    R, Q, h = 0.02, 2e7, 2e4
    for shape, middle, half in (("bar", 40.4082057734576, 30.228439640779037), ("plate", 81.66739067491213, None)):
        edges = even(0.0, R, 100)
        mesh = cylinder(edges, 0.1) if shape == "bar" else plate(edges, 0.2, 0.3)
        T_surface = T_AROUND + Q * R / (h * (2.0 if shape == "bar" else 1.0))

        def falling(T: Array, T_surface: float = T_surface) -> Array:
            return 50.0 * (1.0 - 5e-4 * (T - T_surface))

        history = _at_rest(mesh, uniform_source(mesh, Q), h, falling)
        yield VARYING.relative(f"{shape} of 40 mm", middle, -last(history, "spread"), "K", 5e-4)
        if full and half is not None:
            at_half = last(history, "half") - last(history, "surface")
            yield VARYING.relative(f"{shape} of 40 mm, at half the radius", half, at_half, "K", 5e-4)
