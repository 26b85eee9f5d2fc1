"""The field in the workpiece: skin depth, flat surface, plate, bar, tube, saturated steel (EM-01 to EM-09)."""

import math
from collections.abc import Iterator

import numpy as np

from materials.magnetics import Magnetics
from thermal.build import FIELD_PARTS
from thermal.crosscheck.checks.row import PUBLISHED_MU_0, Check, Row
from thermal.eddy.exact import skin_depth, tube_bore_field, wire_resistance_ratio
from thermal.eddy.finite_coil import SectionSource
from thermal.eddy.radial import Profile, RadialSolver
from thermal.geometry.grading import graded_edges
from thermal.geometry.mesh import Mesh
from thermal.geometry.shapes import cut, cylinder, plate

SOLVER = "thermal.eddy.radial.RadialSolver.profile"
RUN_GRID = "grid of a run: first cell a sixth of the skin depth, growth 1.15, at least 40 cells"
DAVIES = "E. J. Davies, Conduction and Induction Heating, 1990 (from memory); closed form evaluated"
LUPI = "S. Lupi, Fundamentals of Electroheat, 2017, ch. 6 (from memory); closed form evaluated"
LENGTH = 0.1

POWER = 5e-4
"""Allowed in the power of a uniform section."""

DEPTH = Check(
    "EM-01",
    "field",
    "Skin depth, which sets the grid and the frequency advice",
    "thermal.eddy.exact.skin_depth",
    "closed form, no grid",
    "E. J. Davies, Conduction and Induction Heating, 1990 (from memory); sqrt(rho/(pi f mu_0 mu_r)) evaluated with "
    "mu_0 of CODATA 2018",
)
FLAT = Check(
    "EM-01",
    "field",
    "Flat face of thick hot steel, 10 kHz, 100 kA/m peak: heat into it, share of it near the face",
    SOLVER,
    RUN_GRID + ", plate 40 skin depths thick",
    DAVIES,
)
PLATE = Check(
    "EM-02",
    "field",
    "Plate with the coil on both sides: power over that of a thick one",
    SOLVER,
    RUN_GRID,
    LUPI,
)
BAR = Check(
    "EM-03",
    "field",
    "Round bar: power over that of a flat surface of its circumference",
    SOLVER,
    RUN_GRID,
    "S. Lupi, Fundamentals of Electroheat, 2017, eqs 6.9-6.17 (cited after a public notebook); closed form evaluated",
)
BAR_WATTS = Check(
    "EM-03",
    "field",
    "Round bar: power per metre at 100 kA/m peak (half or double if peak and rms were mixed)",
    SOLVER,
    RUN_GRID,
    BAR.source,
)
INSIDE = Check(
    "EM-03",
    "field",
    "Round bar: field inside over field at the surface",
    SOLVER,
    RUN_GRID,
    BAR.source,
)
TUBE = Check(
    "EM-04",
    "field",
    "Tube of 60 mm in a coil, flux in its bore counted: power per metre at 100 kA/m peak, and field in the bore",
    SOLVER,
    RUN_GRID,
    "derived: modified Bessel functions matched to the flux of the bore; evaluated, checked by quadrature of the loss",
)
BORE_COIL = Check(
    "EM-05",
    "field",
    "Tube of 60 mm with the coil in its bore, 100 kA/m peak (no run has such a coil yet: the closed form alone)",
    "thermal.eddy.exact.tube_bore_field",
    "closed form, no grid",
    "derived: modified Bessel functions, H = 0 outside; evaluated",
    in_runs=False,
)
SATURATED = Check(
    "EM-08b",
    "field",
    "Deeply saturated steel, 1.8 T whatever the field; 0.2 µohm m, 1 kHz, 30 kA/m peak",
    "thermal.eddy.finite_coil.SectionSource.at",
    f"{RUN_GRID}, each cut into {FIELD_PARTS} for the field as for magnetic metals",
    "factors of L. R. Neiman (from memory), rederived: H = H0 (1 - x/L)^(2 + j sqrt 2); evaluated",
)
WIRE = Check(
    "EM-09",
    "field",
    "Round wire with current: resistance over that at direct current (no run calls it yet)",
    "thermal.eddy.exact.wire_resistance_ratio",
    "closed form, no grid",
    "internal impedance of a round wire, (kappa/2) I0/I1 (from memory); evaluated",
    in_runs=False,
)

DEPTHS = [
    # Resistivity [ohm m], mu_r, frequency [Hz] -> depth [mm].
    ("copper 20 °C, 50 Hz", 1.7241e-8, 1.0, 50.0, 9.345797253917365),
    ("steel 1200 °C, 10 kHz", 1.22e-6, 1.0, 1e4, 5.559043172533399),
    ("cold steel mu_r 100, 10 kHz", 1.8e-7, 100.0, 1e4, 0.2135287629670332),
    ("copper 20 °C, 200 kHz", 1.7241e-8, 1.0, 2e5, 0.14777002936262934),
    ("aluminium 20 °C, 50 Hz", 2.82e-8, 1.0, 50.0, 11.95252562674204),
    ("aluminium 500 °C, 50 Hz", 8.5e-8, 1.0, 50.0, 20.751265750443253),
    ("steel 1200 °C, 1 kHz", 1.22e-6, 1.0, 1e3, 17.579238036413923),
]
QUICK_DEPTHS = 3

PLATE_FACTOR = {
    0.2: 0.0013332469897990825,
    0.5: 0.02078076485634941,
    1.0: 0.16018668595147273,
    1.5: 0.4670721809310639,
    2.0: 0.8121707420191829,
    2.5: 1.022619240946066,
    3.141592653589793: 1.0903314107273683,
    4.0: 1.052228547438705,
    5.0: 1.0089742480707653,
    8.0: 0.9994335539098321,
    10.0: 1.0001255900632555,
    20.0: 0.9999999945543195,
}
QUICK_PLATES = (0.5, 2.0, 3.141592653589793, 10.0)

BAR_FACTOR = {
    0.25: 0.0039045024124752664,
    0.5: 0.031027862728122635,
    1.0: 0.22441026592098068,
    1.25: 0.3825180583173388,
    1.5: 0.5386583610770121,
    2.0: 0.7386167460867463,
    2.5: 0.8076907929238208,
    3.0: 0.8334669765116357,
    4.0: 0.8706775150027306,
    5.0: 0.8975861499535374,
    7.0: 0.9273218444555481,
    10.0: 0.9493810168595483,
    20.0: 0.9748440889263648,
    50.0: 0.9899750081458628,
    100.0: 0.9949937504985684,
}
QUICK_BARS = (0.5, 1.0, 2.0, 5.0, 20.0)

BARS = [
    # Radius [m], resistivity [ohm m], mu_r, frequency [Hz], peak field [A/m] -> power [W/m].
    ("hot steel 50 mm, 1 kHz", 0.025, 1.2e-6, 1.0, 1e3, 1e5, 27017.606961467573),
    ("cold 50 mm, mu_r 40, 1 kHz", 0.025, 2.5e-7, 40.0, 1e3, 1e5, 152100.50578474323),
    ("aluminium 100 mm, 50 Hz", 0.05, 3.5e-8, 1.0, 50.0, 1e5, 3559.876984198785),
    ("copper 60 mm, 500 Hz", 0.03, 2.5e-8, 1.0, 500.0, 1e5, 6222.291973294472),
    ("rod 8 mm, 200 kHz, 20 kA/m", 0.004, 2e-7, 50.0, 2e5, 2e4, 13998.284922312618),
    ("hot wire 2 mm, 1 kHz", 0.001, 1.2e-6, 1.0, 1e3, 1e5, 0.10200643509060942),
]
QUICK_WATTS = 2

FIELD_INSIDE = {
    # Radius over skin depth -> |H|/H0 over r/a, where it is sensitive to the skin depth.
    1.0: {0.0: 0.9425361039400946, 0.5: 0.9462119164802627, 0.75: 0.9610245180350389},
    2.0: {0.0: 0.5617315519368004, 0.5: 0.5959788167143809, 0.75: 0.7214645957134269, 0.9: 0.8674422859242404},
    3.0: {0.0: 0.2521833391350725, 0.5: 0.3238937712995283, 0.75: 0.5433052680628567, 0.9: 0.7802853900835017},
    5.0: {0.0: 0.044362726602886135, 0.5: 0.11663725391365494, 0.75: 0.3322886045335002, 0.9: 0.6402298252232921},
    10.0: {0.75: 0.09497857302540086, 0.9: 0.3880454305323661},
}

TUBES = [
    # Inner radius [m], resistivity [ohm m], mu_r, frequency [Hz], peak field [A/m] -> power [W/m], |H| in the bore over
    # that outside; outer radius 30 mm.
    ("10 mm hot steel, 10 kHz", 0.02, 1.2e-6, 1.0, 1e4, 1e5, 179974.15841266667, 0.11730104924894105),
    ("2 mm stainless, 3 kHz", 0.028, 7.2e-7, 1.0, 3e3, 1e5, 159926.9019378358, 0.7312809083071963),
    ("10 mm hot steel, 1 kHz", 0.02, 1.2e-6, 1.0, 1e3, 1e5, 43732.964923115214, 0.808415096624403),
]
QUICK_TUBES = 2

WIRE_RATIO = {
    0.5: 1.0013007285557947,
    1.0: 1.0204923888556223,
    2.0: 1.2646429062732134,
    3.0: 1.7681316525097364,
    5.0: 2.768107600734291,
    10.0: 5.259301857510798,
    20.0: 10.254679114660357,
}
QUICK_WIRES = (1.0, 5.0)


def rows(full: bool) -> Iterator[Row]:
    """Rows of the field, the quick choice or all."""
    for name, rho, mu_r, frequency, depth in DEPTHS if full else DEPTHS[:QUICK_DEPTHS]:
        yield DEPTH.relative(name, depth, 1e3 * float(skin_depth(rho, frequency, mu_r)), "mm", 1e-12)
    yield from _flat(full)
    for nu in PLATE_FACTOR if full else QUICK_PLATES:
        yield PLATE.relative(f"thickness / skin depth {nu:.4g}", PLATE_FACTOR[nu], _plate_factor(nu), "-", POWER)
    for xi in BAR_FACTOR if full else QUICK_BARS:
        yield BAR.relative(f"radius / skin depth {xi:g}", BAR_FACTOR[xi], _bar_factor(xi), "-", POWER)
    for name, a, rho, mu_r, frequency, peak, power in BARS if full else BARS[:QUICK_WATTS]:
        mesh = cylinder(graded_edges(0.0, a, _depth(rho, mu_r, frequency)), LENGTH)
        yield BAR_WATTS.relative(name, power, _per_metre(mesh, rho, mu_r, frequency, peak), "W/m", POWER)
    yield from _inside(full)
    yield from _tubes(full)
    yield from _bore_coil()
    yield from _saturated(full)
    for xi in WIRE_RATIO if full else QUICK_WIRES:
        depth = float(skin_depth(2e-8, _frequency(2e-8, 1e-3 / xi)))
        ratio = float(wire_resistance_ratio(1e-3 / depth))
        yield WIRE.relative(f"radius / skin depth {xi:g}", WIRE_RATIO[xi], ratio, "-", 1e-9)


def uniform(mesh: Mesh, rho: float, mu_r: float, frequency: float) -> Profile:
    """Field for the same resistivity [ohm m] and permeability everywhere."""
    return RadialSolver(mesh).profile(np.full(mesh.r.shape, rho), np.full(mesh.r.shape, mu_r), frequency)


def _depth(rho: float, mu_r: float, frequency: float) -> float:
    return math.sqrt(rho / (math.pi * frequency * PUBLISHED_MU_0 * mu_r))


def _frequency(rho: float, depth: float) -> float:
    return rho / (math.pi * PUBLISHED_MU_0 * depth**2)


def _per_metre(mesh: Mesh, rho: float, mu_r: float, frequency: float, peak: float) -> float:
    return float(uniform(mesh, rho, mu_r, frequency).heat @ mesh.volume) * peak**2 / 2.0 / mesh.length


def _bar_of(xi: float) -> tuple[Mesh, Profile]:
    a, rho = 0.025, 1e-6
    mesh = cylinder(graded_edges(0.0, a, a / xi), LENGTH)
    return mesh, uniform(mesh, rho, 1.0, _frequency(rho, a / xi))


def _bar_factor(xi: float) -> float:
    mesh, profile = _bar_of(xi)
    return float(profile.heat @ mesh.volume) / LENGTH / (2.0 * math.pi * 1e-6 * xi)


def _plate_factor(nu: float) -> float:
    half, rho = 0.005, 5e-7
    depth = 2.0 * half / nu
    mesh = plate(graded_edges(0.0, half, depth), 1.0, 1.0)
    profile = uniform(mesh, rho, 1.0, _frequency(rho, depth))
    return float(profile.heat @ mesh.volume) * depth / (2.0 * rho)


def _flat(full: bool) -> Iterator[Row]:
    depth = 5.559043174046503e-3
    mesh = plate(graded_edges(0.0, 20.0 * depth, depth), 1.0, 1.0)
    profile = uniform(mesh, 1.22e-6, 1.0, 1e4)
    heat = profile.heat * mesh.volume / 2.0 * 1e5**2 / 2.0
    yield FLAT.relative("heat into the face", 109.73111395283025, 1e-4 * heat.sum(), "W/cm2", POWER)
    # Within a cell the heat that is left falls exponentially: straight in its logarithm between the faces.
    left = np.log(np.cumsum(heat)[::-1] / heat.sum())
    under = (mesh.edges[-1] - mesh.edges)[:0:-1]
    for name, depths, expected in (("one skin depth", 1.0, 0.8646647167633873), ("two", 2.0, 0.9816843611112658)):
        if full or depths == 1.0:
            share = 1.0 - math.exp(float(np.interp(depths * depth, under, left)))
            yield FLAT.relative(f"share within {name}", expected, share, "-", 2e-4)
    if full:
        yield FLAT.relative("surface resistance", 0.21946222790566048, 1e3 * profile.impedance.real, "mohm", POWER)
        yield FLAT.relative("surface reactance", 0.21946222790566048, 1e3 * profile.impedance.imag, "mohm", POWER)


def _inside(full: bool) -> Iterator[Row]:
    for xi in FIELD_INSIDE if full else (3.0,):
        mesh, profile = _bar_of(xi)
        for place, expected in FIELD_INSIDE[xi].items():
            if full or place <= 0.5:
                got = abs(np.interp(place * mesh.edges[-1], mesh.edges, profile.H))
                yield INSIDE.absolute(f"radius / skin depth {xi:g}, at r/a {place:g}", expected, got, "-", 5e-4)


def _tubes(full: bool) -> Iterator[Row]:
    for name, inner, rho, mu_r, frequency, peak, power, bore in TUBES if full else TUBES[:QUICK_TUBES]:
        mesh = cylinder(graded_edges(inner, 0.03, _depth(rho, mu_r, frequency)), LENGTH)
        got = _per_metre(mesh, rho, mu_r, frequency, peak)
        yield TUBE.relative(f"{name}: power", power, got, "W/m", POWER)
        in_bore = abs(uniform(mesh, rho, mu_r, frequency).H[0])
        yield TUBE.relative(f"{name}: bore", bore, in_bore, "-", POWER)


def _bore_coil() -> Iterator[Row]:
    inner, outer, rho, peak = 0.02, 0.03, 1.2e-6, 1e5
    H, E = tube_bore_field(np.array([inner, outer]), inner, outer, rho, 1e4, 1.0)
    # E runs against the circulation that carries power outwards at the bore.
    power = -2.0 * math.pi * inner * float((E[0] * H[0].conjugate()).real) * peak**2 / 2.0
    yield BORE_COIL.relative("10 mm hot steel, 10 kHz: power", 145291.4517490176, power, "W/m", 1e-8)
    yield BORE_COIL.relative("current outside over that inside", 0.2557364482535664, abs(E[1] / E[0]), "-", 1e-8)


def _saturated(full: bool) -> Iterator[Row]:
    flux_density, rho, frequency, peak = 1.8, 2e-7, 1e3, 3e4
    H = np.geomspace(1.0, 1e7, 4000)
    # The Curie point plays no part at 20 °C; a magnetic metal must have one.
    steel = Magnetics.from_effective(H, flux_density / (PUBLISHED_MU_0 * H), 1043.15, 3.0)
    depth = _depth(rho, flux_density / (PUBLISHED_MU_0 * peak), frequency)
    mesh = plate(graded_edges(0.0, 6e-3, depth), 1.0, 1.0)
    source = SectionSource(mesh, RadialSolver(cut(mesh, FIELD_PARTS)), lambda T: np.full_like(T, rho), steel, None)
    field = source.at(np.full(mesh.r.shape, 293.15))(peak / math.sqrt(2.0), frequency, None)
    yield SATURATED.relative("heat into the face", 11.997891781322712, 1e-4 * field.power / 2.0, "W/cm2", 1e-3)
    if full:
        solver = source.solver
        impedance = solver.profile(np.full(solver.mesh.r.shape, rho), field.mu_r, frequency).impedance * depth / rho
        yield SATURATED.relative("resistance over that of linear metal", 1.3731780959, impedance.real, "-", 1e-3)
        yield SATURATED.relative("reactance over that of linear metal", 0.9709835434, impedance.imag, "-", 1e-3)
