"""Field and heat together: the heat of the field drives a run (CP-01 to CP-05)."""

import math
from collections.abc import Callable, Iterator

import numpy as np

from materials.magnetics import Magnetics
from thermal.build import FIELD_PARTS
from thermal.circuit.supply import DirectDrive
from thermal.control import FixedDrive
from thermal.crosscheck.checks.row import PUBLISHED_MU_0, Check, Row
from thermal.crosscheck.checks.sections import DEFAULT_TOLERANCE, DIFFUSIVITY, RUN, T_START, done, last
from thermal.crosscheck.problem import Problem, convection, heating
from thermal.eddy.finite_coil import SectionSource
from thermal.eddy.radial import RadialSolver
from thermal.geometry.grading import graded_edges
from thermal.geometry.mesh import Mesh
from thermal.geometry.shapes import cut, cylinder, plate
from thermal.interfaces import Array, Demand
from thermal.results.history import History

GRID = "grid of a run: first cell a sixth of the skin depth, growth 1.15, at least 40 cells; heat from RadialSolver"

SPREAD = Check(
    "CP-01",
    "coupled",
    "Bar of 50 mm heated by its skin currents with 50 W/cm2: surface minus core in the long run",
    RUN,
    f"{GRID}; 0.1 K per step, the default",
    "K q a/(2k), K = 1 - (1 - |H(0)/H0|^2)/(xi Phi(xi)) (derived, checked by quadrature; evaluated)",
)
FEEDBACK = Check(
    "CP-03",
    "coupled",
    "Resistivity that rises 0.4 % per kelvin, fixed field, 1 kW at first: rise of the mean",
    RUN,
    f"{GRID}; uniform temperature (1 MW/(m K)); 0.1 K per step, the default",
    "energy balance integrated: power as the root of the resistivity in a thick plate, as its inverse in a thin one",
)
CURIE = Check(
    "CP-04",
    "coupled",
    "Bar of 50 mm below and above its Curie point, 10 kHz, 50 kA/m peak: power per metre",
    "thermal.eddy.finite_coil.SectionSource.at",
    f"grid of a run, every cell cut into {FIELD_PARTS} for the field as for magnetic metals",
    "S. Lupi, Fundamentals of Electroheat, 2017, eqs 6.9-6.17 (cited after a public notebook); closed form evaluated",
)
EXCESS = Check(
    "CP-05",
    "coupled",
    "Hot steel bar of 50 mm, 100 kA/m peak, at rest: temperature inside over that of the surface",
    RUN,
    f"{GRID}; run to rest (20000 s), 0.05 K per step",
    "rho (H0^2 - |H|^2)/(4k) at every point of a section at rest (derived; evaluated)",
)

CORE_FACTOR = {
    # Radius over skin depth -> K and the power factor Phi of the bar.
    0.5: (0.5001626733388557, 0.031027862728122635),
    1.0: (0.5025820574147302, 0.22441026592098068),
    2.0: (0.5366625065130266, 0.7386167460867463),
    3.0: (0.6254986340783102, 0.8334669765116357),
    5.0: (0.7776186835012953, 0.8975861499535374),
    10.0: (0.8946682310515507, 0.9493810168595483),
    20.0: (0.9487097469554674, 0.9748440889263648),
    50.0: (0.9797974697993049, 0.9899750081458628),
}
QUICK_FACTORS = (1.0, 3.0, 10.0)

FEEDBACK_RISE = {
    # Time [s] -> rise [K] of a plate of many skin depths, and of one thin against the skin depth.
    10.0: (25.625, 23.861278752583036),
    50.0: (140.625, 103.55339059327379),
    100.0: (312.5, 183.0127018922193),
    200.0: (750.0, 309.01699437494744),
}
CORE_EXCESS = {
    # Frequency [Hz] -> excess [K] at r/a = 0, 0.5, 0.8.
    1e3: (37.576836969126234, 35.27591635200066, 22.382216309919393),
    1e4: (106.65893523242258, 104.83514745359433, 85.14623298738981),
}


def rows(full: bool) -> Iterator[Row]:
    """Rows of field and heat together, the quick choice or all."""
    for xi in CORE_FACTOR if full else QUICK_FACTORS:
        K, phi = CORE_FACTOR[xi]
        # K q a/(2k) with q 5e5 W/m2, a 25 mm, k 30 W/(m K).
        yield SPREAD.relative(f"radius / skin depth {xi:g}", K * 208.33333333333334, _spread(xi, phi), "K", 1e-3)
    for time, rises in FEEDBACK_RISE.items():
        if full or time == 100.0:
            for name, nu, rise in zip(("thick plate", "thin plate"), (60.0, 0.05), rises, strict=True):
                yield FEEDBACK.relative(f"{name}, after {time:g} s", rise, _mean_rise(nu, time), "K", 1e-3)
    for name, T, power in (("below it, mu_r 16", 293.15, 136418.0444264881), ("above it", 1100.0, 31685.69531775995)):
        yield CURIE.relative(name, power, _power_around_curie(T), "W/m", 1e-3)
    for frequency, excess in CORE_EXCESS.items():
        history = _at_rest(frequency)
        for reading, place, expected in zip(("core", "half", "outer"), (0.0, 0.5, 0.8), excess, strict=True):
            if full or reading == "core":
                got = last(history, reading) - last(history, "surface")
                yield EXCESS.relative(f"{frequency / 1e3:g} kHz, at r/a {place:g}", expected, got, "K", 2e-3)


def _source(mesh: Mesh, resistivity: Callable[[Array], Array]) -> SectionSource:
    return SectionSource(mesh, RadialSolver(mesh), resistivity, Magnetics.constant(1.0), None)


def _field_drive(H_rms: float) -> FixedDrive:
    return FixedDrive(Demand("surface_field", H_rms))


def _spread(xi: float, phi: float) -> float:
    a, rho, q = 0.025, 1e-6, 5e5
    depth = a / xi
    mesh = cylinder(graded_edges(0.0, a, depth), 0.1)
    frequency = rho / (math.pi * PUBLISHED_MU_0 * depth**2)
    # The slowest mode has died out to exp(-14.7) of its size.
    stage = heating(a**2 / DIFFUSIVITY, control=_field_drive(math.sqrt(q * depth / (rho * phi))))
    problem = Problem(
        mesh,
        (stage,),
        source=_source(mesh, lambda T: np.full_like(T, rho)),
        supply=DirectDrive(frequency),
        frequency=frequency,
        tolerance=DEFAULT_TOLERANCE,
    )
    return last(done(problem), "spread")


def _mean_rise(nu: float, time: float) -> float:
    """Rise [K] of a plate nu skin depths thick at the start that takes up 400 J/K."""
    half, width, length, rho = 0.005, 0.1, 400.0 / (7800.0 * 650.0) / (0.01 * 0.1), 2e-7
    depth = 2.0 * half / nu
    mesh = plate(graded_edges(0.0, half, depth), width, length)
    frequency = rho / (math.pi * PUBLISHED_MU_0 * depth**2)
    # Both faces of a plate: 2 H_rms^2 rho/depth F, F = 1 if thick and nu^3/6 if thin.
    per_square = 2.0 * width * length * rho / depth * (1.0 if nu > 1.0 else nu**3 / 6.0)
    problem = Problem(
        mesh,
        (heating(time, control=_field_drive(math.sqrt(1000.0 / per_square))),),
        source=_source(mesh, lambda T: rho * (1.0 + 4e-3 * (T - T_START))),
        supply=DirectDrive(frequency),
        frequency=frequency,
        conductivity=lambda T: np.full_like(T, 1e6),
        tolerance=DEFAULT_TOLERANCE,
    )
    return last(done(problem), "mean") - T_START


def _power_around_curie(T: float) -> float:
    """Power [W/m] of a metal of mu_r 16 at any field up to its Curie point of 770 °C."""
    a, rho, frequency, peak = 0.025, 8e-7, 1e4, 5e4
    metal = Magnetics.from_effective(np.array([1.0, 1e7]), np.array([16.0, 16.0]), 1043.15, 3.0)
    depth = math.sqrt(rho / (math.pi * frequency * PUBLISHED_MU_0 * 16.0))
    mesh = cylinder(graded_edges(0.0, a, depth), 1.0)
    source = SectionSource(mesh, RadialSolver(cut(mesh, FIELD_PARTS)), lambda T: np.full_like(T, rho), metal, None)
    return source.at(np.full(mesh.r.shape, T))(peak / math.sqrt(2.0), frequency, None).power


def _at_rest(frequency: float) -> History:
    a, rho, T_around = 0.025, 1.2e-6, 300.0
    mesh = cylinder(graded_edges(0.0, a, math.sqrt(rho / (math.pi * frequency * PUBLISHED_MU_0))), 0.1)
    problem = Problem(
        mesh,
        (heating(20_000.0, control=_field_drive(1e5 / math.sqrt(2.0))),),
        T_initial=T_around,
        source=_source(mesh, lambda T: np.full_like(T, rho)),
        supply=DirectDrive(frequency),
        losses={"outer": (convection(3e3, T_around),)},
        conductivity=lambda T: np.full_like(T, 28.0),
        depths={"half": 0.5 * a, "outer": 0.2 * a},
        frequency=frequency,
        tolerance=0.05,
    )
    return done(problem)
