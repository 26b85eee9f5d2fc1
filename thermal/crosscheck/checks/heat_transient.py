"""Heating, cooling and melting in time, each a run put together by hand (TH-01 to TH-06, TH-10, TH-15)."""

import math
from collections.abc import Iterator

import numpy as np

from materials.magnetics import Magnetics
from thermal.circuit.supply import DirectDrive
from thermal.conduction.assemble import EnthalpyTable
from thermal.constants import ZERO_CELSIUS
from thermal.control import FixedDrive
from thermal.crosscheck.checks.row import PUBLISHED_MU_0, Check, Row
from thermal.crosscheck.checks.sections import (
    CARSLAW,
    DEFAULT_TOLERANCE,
    DIFFUSIVITY,
    INCROPERA,
    RUN,
    RUN_GRID,
    T_START,
    bar,
    done,
    last,
    slab,
)
from thermal.crosscheck.problem import (
    Problem,
    by_hand,
    constant_flux,
    convection,
    heating,
    left_alone,
    plain_material,
    uniform_source,
)
from thermal.eddy.finite_coil import SectionSource
from thermal.eddy.radial import RadialSolver
from thermal.geometry.grading import graded_edges
from thermal.geometry.mesh import Mesh
from thermal.geometry.shapes import plate
from thermal.interfaces import BoundaryLoss, Demand

BAR_FLUX = Check(
    "TH-01",
    "heat",
    "Round bar of 50 mm, heated at its surface with 50 W/cm2 from 20 °C",
    RUN,
    RUN_GRID,
    f"{CARSLAW}, 7.8 (closed form evaluated)",
)
BAR_EARLY = Check(
    "TH-01",
    "heat",
    "The same in the first seconds, when only a thin layer is warm",
    RUN,
    "grid of a run, every cell cut into three; 0.1 K per step, the default",
    BAR_FLUX.source,
)
PLATE_FLUX = Check(
    "TH-02",
    "heat",
    "Plate of 20 mm, heated on both faces with 20 W/cm2 from 20 °C",
    RUN,
    RUN_GRID,
    f"{CARSLAW}, 3.8 (closed form evaluated)",
)
COOLING = Check(
    "TH-04",
    "heat",
    "Bar and plate cooling in a gas, share of the excess left (Bi = h R/k, Fo = diffusivity times time over R2)",
    RUN,
    RUN_GRID,
    f"{CARSLAW}, 3.11 and 7.7; {INCROPERA}, table 5.1 (eigenfunction series evaluated)",
)
SKIN = Check(
    "TH-05",
    "heat",
    "Thick steel heated by its own skin currents, 1 mm skin depth: temperature rise",
    RUN,
    "plate of 120 mm, grid of a run with every cell cut into two; heat from RadialSolver.profile; 0.1 K per step",
    f"{CARSLAW}, 2.11 (closed form evaluated for a source of 2 GW/m3 at the surface that falls with 0.5 mm)",
)
FACE = Check(
    "TH-06",
    "heat",
    "Thick steel heated at its face with 100 W/cm2: temperature rise",
    RUN,
    "plate of 120 mm, grid of a run at 1 mm skin depth with every cell cut into two; 0.1 K per step",
    f"{CARSLAW}, 2.9 (closed form evaluated)",
)
FREEZING = Check(
    "TH-10",
    "heat",
    "Latent heat: a melt like aluminium 10 s after its face went 100 K below freezing (a run stops at the liquidus)",
    RUN,
    f"plate of 80 mm; {RUN_GRID}; melting within 0.1 K",
    f"{CARSLAW}, 11.2, Stefan's solution (evaluated)",
)
FREEZING_HOTTER = Check(
    "TH-10",
    "heat",
    "The same, the melt 50 K hotter and a poorer conductor than the solid",
    RUN,
    "plate of 320 mm, cells of 0.2 mm to 25 mm under the wall, then growing; 0.1 K per step; melting within 0.1 K",
    f"{CARSLAW}, 11.2, Neumann's solution (evaluated)",
)
SWITCHED_ON = Check(
    "TH-15",
    "heat",
    "Bar of 40 mm with 10 MW/m3 switched on, cooled at 250 W/(m2 K): rise over the surroundings",
    RUN,
    RUN_GRID,
    f"{CARSLAW}, 7.9 (eigenfunction series evaluated; section number from memory)",
)

BAR_TIMES: dict[float, tuple[float, float | None]] = {
    # Time [s] -> surface and centre [°C]; the centre is left out while hardly any heat has come there.
    5.0: (133.57896471567437, None),
    10.0: (188.76423445869563, 29.29705946413863),
    20.0: (278.43489840440895, 82.36183410862286),
    60.0: (597.5258959989873, 389.2397616153066),
    1.0: (67.8350319522693, None),
    2.0: (88.97825953864077, None),
}
PLATE_TIMES: dict[float, tuple[float, float | None]] = {
    1.0: (38.29870892930431, None),
    5.0: (61.21744380022555, 29.34134191223665),
    20.0: (121.11757142492439, 87.78446670788294),
}
LEFT: list[tuple[str, float, float, float | None, float | None]] = [
    # Shape, Bi, Fo -> share of the excess left at the centre and at the surface; none where a per cent in any property
    # would move it by less than is allowed.
    ("bar", 0.1, 1.0, 0.8429895947390081, 0.802374989855282),
    ("bar", 1.0, 0.2, 0.8701742439333948, 0.5702277441995398),
    ("bar", 10.0, 0.2, 0.6002323368522292, 0.07484386211284397),
    ("plate", 0.1, 1.0, 0.9223885716001344, 0.8781264876091333),
    ("plate", 1.0, 0.2, 0.9506417785054656, 0.6433907844774378),
    ("plate", 10.0, 0.2, 0.8292547308230171, 0.12248223808889631),
    ("bar", 0.1, 0.2, 0.9836738903773631, 0.9385838591786987),
    ("bar", 1.0, 0.05, None, 0.7696407410089304),
    ("bar", 1.0, 1.0, 0.24937971354617972, 0.1603384124997299),
    ("bar", 10.0, 0.05, None, 0.2009299972684938),
    ("bar", 10.0, 1.0, 0.013560406182956964, None),
    ("plate", 0.1, 0.2, None, 0.9514198548688662),
    ("plate", 1.0, 0.05, None, 0.7903767636492262),
    ("plate", 1.0, 1.0, 0.5338594014085679, 0.34817685166166945),
    ("plate", 10.0, 0.05, None, 0.23232629426455034),
    ("plate", 10.0, 1.0, 0.16381764169302915, 0.023172060216342893),
]
QUICK_LEFT = 6
SKIN_RISE = {
    # Time [s] -> rise [K] at the surface and 2 mm under it.
    0.01: (2.8606121247564857, 0.08151793237068757),
    0.1: (17.522849689552146, 2.121192001949545),
    1.0: (76.72119690651239, 41.17299612898671),
    5.0: (188.77988645024004, 145.32255767708403),
}
FACE_RISE = {
    # Time [s] -> rise [K] at the face and 1 mm under it.
    0.1: (28.932799156295196, 7.030381767407265),
    1.0: (91.49354441809083, 61.99882134127299),
    10.0: (289.3279915629519, 257.21620893987034),
}
SOURCE_RISE = {
    # Time [s] -> rise [K] at the surface and the centre.
    5.0: (9.502586153010668, 9.859573594189783),
    30.0: (53.12099172111948, 56.95769862310408),
    120.0: (173.40338268569081, 187.46763706045272),
    600.0: (376.6121346521394, 407.9566359385202),
}


def rows(full: bool) -> Iterator[Row]:
    """Rows of the transients, the quick choice or all."""
    yield from _flux(full)
    yield from _cooling(full)
    yield from _half_space(full)
    yield from _freezing(full)
    yield from _switched_on(full)


def _flux(full: bool) -> Iterator[Row]:
    for time, (surface, centre) in BAR_TIMES.items():
        if full or time in (10.0, 60.0):
            check, refinement = (BAR_EARLY, 3) if time < 5.0 else (BAR_FLUX, 1)
            yield from _heated(check, bar(0.025, refinement), 5e5, time, surface, centre)
    for time, (surface, centre) in PLATE_TIMES.items():
        if full or time == 20.0:
            yield from _heated(PLATE_FLUX, slab(0.01), 2e5, time, surface, centre)


def _heated(check: Check, mesh: Mesh, flux: float, time: float, surface: float, centre: float | None) -> Iterator[Row]:
    """Surface and centre [°C] after a time under a flux; each may be off by 0.1 % of the rise of the surface."""
    losses: dict[str, tuple[BoundaryLoss, ...]] = {"outer": (constant_flux(flux),)}
    history = done(Problem(mesh, (left_alone(time),), losses=losses, tolerance=DEFAULT_TOLERANCE))
    allowed = 1e-3 * (surface - 20.0)
    found = last(history, "surface") - ZERO_CELSIUS
    yield check.absolute(f"surface after {time:g} s", surface, found, "°C", allowed)
    if centre is None:
        return
    found = last(history, "core") - ZERO_CELSIUS
    yield check.absolute(f"centre after {time:g} s", centre, found, "°C", allowed)
    if time >= 20.0:
        # Late, the difference tends to q R/2k; it sees the conductivity alone.
        yield check.relative(f"difference after {time:g} s", surface - centre, last(history, "spread"), "K", 1e-3)


def _cooling(full: bool) -> Iterator[Row]:
    R, excess = 0.02, 500.0
    for shape, Bi, Fo, centre, surface in LEFT if full else LEFT[:QUICK_LEFT]:
        problem = Problem(
            bar(R) if shape == "bar" else slab(R),
            (left_alone(Fo * R**2 / DIFFUSIVITY),),
            T_initial=T_START + excess,
            losses={"outer": (convection(Bi * 30.0 / R, T_START),)},
            tolerance=DEFAULT_TOLERANCE,
        )
        history = done(problem)
        for place, reading, expected in (("centre", "core", centre), ("surface", "surface", surface)):
            if expected is not None:
                left = (last(history, reading) - T_START) / excess
                yield COOLING.absolute(f"{shape}, Bi {Bi:g}, Fo {Fo:g}: {place}", expected, left, "-", 3e-4)


def _half_space(full: bool) -> Iterator[Row]:
    depth, rho = 1e-3, 1e-6
    mesh = plate(graded_edges(0.0, 0.06, depth, 2), 0.2, 0.3)
    frequency = rho / (math.pi * PUBLISHED_MU_0 * depth**2)
    source = SectionSource(mesh, RadialSolver(mesh), lambda T: np.full_like(T, rho), Magnetics.constant(1.0), None)
    # rho J^2 at the surface is 2 rho H_rms^2/depth^2.
    drive = FixedDrive(Demand("surface_field", math.sqrt(2e9 * depth**2 / (2.0 * rho))))
    for time, rises in SKIN_RISE.items():
        if full or time in (0.1, 1.0):
            problem = Problem(
                mesh,
                (heating(time, control=drive),),
                source=source,
                supply=DirectDrive(frequency),
                frequency=frequency,
                depths={"2 mm": 2e-3},
                tolerance=DEFAULT_TOLERANCE,
            )
            yield from _rises(SKIN, problem, time, rises, ("surface", "2 mm") if time >= 1.0 else ("surface",))
    for time, rises in FACE_RISE.items():
        if full or time in (1.0, 10.0):
            problem = Problem(
                mesh,
                (left_alone(time),),
                losses={"outer": (constant_flux(1e6),)},
                depths={"1 mm": 1e-3},
                tolerance=DEFAULT_TOLERANCE,
            )
            yield from _rises(FACE, problem, time, rises, ("surface", "1 mm") if time >= 1.0 else ("surface",))


def _rises(
    check: Check, problem: Problem, time: float, rises: tuple[float, float], readings: tuple[str, ...]
) -> Iterator[Row]:
    history = done(problem)
    for reading, rise in zip(readings, rises, strict=False):
        place = reading if reading == "surface" else f"{reading} under it"
        yield check.relative(f"{place}, after {time:g} s", rise, last(history, reading) - T_START, "K", 2e-3)


def _freezing(full: bool) -> Iterator[Row]:
    depth, heat = _frozen(slab(0.04), 0.0, 200.0)
    yield FREEZING.relative("front under the wall", 19.46494083022646, depth, "mm", 2e-3)
    yield FREEZING.relative("heat drawn", 21.36380978153528, 1e-6 * heat, "MJ/m2", 2e-3)
    if full:
        fine = np.full(125, 0.2e-3)
        coarse = np.geomspace(0.25e-3, 15e-3, 33)
        sizes = np.concatenate([fine, coarse * (0.135 / coarse.sum())])
        depth, _ = _frozen(plate(np.concatenate([[0.0], np.cumsum(sizes[::-1])]), 0.2, 0.3), 50.0, 90.0)
        yield FREEZING_HOTTER.relative("front under the wall, from hotter", 17.567976610195107, depth, "mm", 5e-3)


def _frozen(mesh: Mesh, superheat: float, liquid: float) -> tuple[float, float]:
    """Depth of the front [mm] and heat through the wall [J/m2] after 10 s; conductivity of the liquid [W/(m K)]."""
    T_melt, latent, half_span = 933.0, 3.9e5, 0.05
    T = np.array([500.0, T_melt - half_span, T_melt + half_span, 1500.0])
    below, above = 1000.0 * (T[1] - T[0]), 1000.0 * (T[3] - T[2])
    H = 2500.0 * np.array([0.0, below, below + latent, below + latent + above])
    problem = Problem(
        mesh,
        (left_alone(10.0),),
        T_initial=T_melt + half_span + superheat,
        losses={"outer": (convection(1e7, T_melt - 100.0),)},
        material=plain_material(2500.0, by_hand("specific heat", 1000.0), by_hand("conductivity", 200.0)),
        conductivity=lambda at: np.interp(at, T[1:3], [200.0, liquid]),
        table=EnthalpyTable(H, T),
        tolerance=DEFAULT_TOLERANCE,
    )
    history = done(problem)
    molten = np.clip((history.enthalpy[-1] - H[1]) / (H[2] - H[1]), 0.0, 1.0)
    outer = mesh.faces["outer"]
    return 1e3 * float((1.0 - molten) @ np.diff(mesh.edges)), float(
        history.energy["loss: convection"][-1] / outer.area[0]
    )


def _switched_on(full: bool) -> Iterator[Row]:
    mesh = bar(0.02)
    for time, (surface, centre) in SOURCE_RISE.items():
        if full or time in (120.0, 600.0):
            problem = Problem(
                mesh,
                (heating(time),),
                source=uniform_source(mesh, 1e7),
                losses={"outer": (convection(250.0, T_START),)},
                tolerance=DEFAULT_TOLERANCE,
            )
            history = done(problem)
            rise, core = last(history, "surface") - T_START, last(history, "core") - T_START
            yield SWITCHED_ON.relative(f"surface after {time:g} s", surface, rise, "K", 1e-3)
            yield SWITCHED_ON.relative(f"centre after {time:g} s", centre, core, "K", 1e-3)
    yield SWITCHED_ON.relative("centre minus surface after 600 s", 31.3445013, -last(history, "spread"), "K", 1e-3)
