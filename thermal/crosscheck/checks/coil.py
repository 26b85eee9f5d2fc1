"""The coil: inductance, copper, and the workpiece seen from its terminals (CL-01 to CL-07, EM-10)."""

import math
from collections.abc import Iterator

from thermal.circuit.winding import copper_depth, sheet_resistance
from thermal.crosscheck.checks.field import uniform
from thermal.crosscheck.checks.row import PUBLISHED_MU_0, Check, Row
from thermal.eddy.finite_coil import FluxPath
from thermal.geometry.grading import graded_edges
from thermal.geometry.inductance import nagaoka
from thermal.geometry.shapes import cylinder

CLOSED = "closed form, no grid"
FLUX_PATH = "thermal.eddy.finite_coil.FluxPath.coil_impedance"

SHORT = Check(
    "CL-01",
    "coil",
    "Short coil: inductance over that of an equal length of an endless one (Nagaoka's factor)",
    "thermal.geometry.inductance.nagaoka",
    CLOSED,
    "H. Nagaoka, J. Coll. Sci. Tokyo 27 (1909) art. 6, p. 31 (read through two public programs), and Lorenz's form "
    "evaluated",
)
SIMPLE = Check(
    "CL-02",
    "coil",
    "Shop formula a2 N2/(9a + 10l), in inches and microhenry, over the inductance of a run",
    FLUX_PATH,
    CLOSED,
    "H. A. Wheeler, Proc. IRE 16 (1928) 1398 (from memory); both evaluated",
)
WORKED = Check(
    "CL-03",
    "coil",
    "Inductance of air coils, width by length; of one turn where no number is given",
    FLUX_PATH,
    CLOSED,
    "T. R. Lyle, Phil. Trans. 213A (1914) 421 as quoted in a public test set (where as printed), else Lorenz's form "
    "evaluated",
)
COPPER = Check(
    "CL-07",
    "coil",
    "Resistance of coil copper whose current hugs the bore, one skin depth deep",
    "thermal.circuit.winding.sheet_resistance",
    CLOSED,
    "rho times bore circumference times N2 over the copper length times the skin depth; evaluated",
)
AROUND = Check(
    "EM-10",
    "coil",
    "Long coil, 70 mm bore, 20 turns a metre, around a 50 mm bar: what its terminals see per metre",
    FLUX_PATH,
    "closed form; the surface impedance of the bar put in as a figure",
    "transformer of one secondary turn, gap between bar and bore counted (derived; evaluated)",
)
AROUND_SOLVED = Check(
    "EM-10",
    "coil",
    "The same with the bar computed as in a run",
    FLUX_PATH,
    "surface impedance from RadialSolver.profile; grid of a run: first cell a sixth of the skin depth, growth 1.15",
    AROUND.source,
)
EFFICIENCY = Check(
    "EM-10",
    "coil",
    "The same: coil copper per metre, and the share of the power that reaches the bar",
    FLUX_PATH,
    "closed form; with sheet_resistance for the copper",
    AROUND.source,
)

NAGAOKA = {
    # Diameter over length -> factor, and as printed in 1909 where that could be read.
    0.25: (0.9016493299774408, 0.901649),
    1.0: (0.6884226073203769, 0.688423),
    3.0: (0.4291986170341282, 0.429199),
    0.01: (0.9957683680264681, None),
    0.1: (0.9588071242037182, None),
    0.5: (0.8181357519347034, 0.818136),
    2.0: (0.5255100242519276, 0.525510),
    5.0: (0.31982546778185833, 0.319825),
    10.0: (0.20332351752191274, None),
    50.0: (0.06109760621391098, None),
}
QUICK_NAGAOKA = 3
WHEELER = {
    1.0: 0.9990412504007825,
    0.1: 0.9953114585252434,
    0.5: 0.9950504181302803,
    2.0: 0.9987848380756229,
    3.0: 0.9887360530958241,
    5.0: 0.9594230363085136,
}
SOLENOIDS = [
    # Turns, diameter [m], length [m] -> [uH] ; allowed: half of the last printed digit, or what the evaluation gives.
    ("2 m wide, 1 m long, printed", 1.0, 2.0, 1.0, 2.07463, 3e-6),
    ("10 turns, 18 x 20 mm", 10.0, 0.018, 0.02, 1.1367512569445957, 1e-8),
    ("2 m wide, 0.5 m long, printed", 1.0, 2.0, 0.5, 2.885335, 3e-6),
    ("2 m wide, 2 m long", 1.0, 2.0, 2.0, 1.3588917590037204, 1e-8),
    ("10 turns, 30 x 20 mm", 10.0, 0.03, 0.02, 2.6427903671812385, 1e-8),
    ("10 turns, 80 x 200 mm", 10.0, 0.08, 0.2, 2.68406950444773, 1e-8),
    ("100 turns, 40 x 40 mm", 100.0, 0.04, 0.04, 271.7783518007441, 1e-8),
]
QUICK_SOLENOIDS = 2
SHEETS = [
    # Bore radius [m], length [m], turns, share of copper, frequency [Hz] -> [mohm].
    ("70 x 200 mm, 10 turns, 1 kHz", 0.035, 0.2, 10.0, 0.85, 1e3, 1.0904734903275415),
    ("70 x 200 mm, 10 turns, 10 kHz", 0.035, 0.2, 10.0, 0.85, 1e4, 3.4483799574686227),
    ("30 x 50 mm, 8 turns, 200 kHz", 0.015, 0.05, 8.0, 0.64, 2e5, 22.471509248830355),
]
BARS = [
    # Resistivity [ohm m], mu_r, frequency [Hz], surface impedance [ohm] -> R', X' of the bar and X' of the gap, R' of
    # the copper [mohm/m], share.
    (
        "hot steel, 1 kHz",
        (1.2e-6, 1.0, 1e3),
        3.4399885587452526e-05 + 7.55197945161561e-05j,
        (2.161408556917406, 4.745048633051336, 5.953205122617565, 0.741521973422728),
        0.7445608960763369,
    ),
    (
        "hot steel, 10 kHz",
        (1.2e-6, 1.0, 1e4),
        0.00019296908048397493 + 0.00021850967831194655j,
        (12.124604912368667, 13.729368002461611, 59.53205122617566, 2.3448983710786637),
        0.8379420270935523,
    ),
    (
        "cold steel, 1 kHz",
        (2.5e-7, 40.0, 1e3),
        0.00019366037873935443 + 0.00019872486597165623j,
        (12.16804046277946, 12.486251580443437, 5.953205122617565, 0.741521973422728),
        0.9425602550754715,
    ),
]
QUICK_BARS = 1


def rows(full: bool) -> Iterator[Row]:
    """Rows of the coil, the quick choice or all."""
    for index, (ratio, (factor, printed)) in enumerate(NAGAOKA.items()):
        if full or index < QUICK_NAGAOKA:
            yield SHORT.relative(f"diameter / length {ratio:g}", factor, nagaoka(ratio), "-", 1e-10)
            if printed is not None:
                yield SHORT.absolute(f"diameter / length {ratio:g}, printed", printed, nagaoka(ratio), "-", 1e-6)
    for ratio in WHEELER if full else (1.0,):
        yield SIMPLE.relative(f"diameter / length {ratio:g}", WHEELER[ratio], _wheeler_over_tool(ratio), "-", 1e-8)
    for name, turns, diameter, length, L, allowed in SOLENOIDS if full else SOLENOIDS[:QUICK_SOLENOIDS]:
        got = 1e6 * _air_coil(turns, diameter, length)
        yield WORKED.relative(name, L, got, "µH", allowed)
    for name, radius, length, turns, fill, frequency, R in SHEETS if full else SHEETS[:1]:
        depth = copper_depth(1.8e-8, frequency)
        got = 1e3 * sheet_resistance(1.8e-8, depth, turns, 2.0 * math.pi * radius, length, fill)
        yield COPPER.relative(name, R, got, "mohm", 1e-8)
    yield from _around(full)


def _wheeler_over_tool(ratio: float) -> float:
    turns, diameter, inch = 12.0, 0.08, 0.0254
    a, length = diameter / 2.0 / inch, diameter / ratio / inch
    wheeler = 1e-6 * a**2 * turns**2 / (9.0 * a + 10.0 * length)
    return wheeler / _air_coil(turns, diameter, diameter / ratio)


def _air_coil(turns: float, diameter: float, length: float) -> float:
    """Inductance [H] a run gives a coil without a workpiece, its current on the bore."""
    bore = math.pi * diameter**2 / 4.0
    path = FluxPath(turns, length, bore, nagaoka(diameter / length), 0.0, 0.0, 0.0)
    return path.coil_impedance(0j, 1.0).imag / (2.0 * math.pi)


def _around(full: bool) -> Iterator[Row]:
    bore, a, length, turns = 0.035, 0.025, 3.0, 60.0
    # Nagaoka's factor of 1: an endless coil.
    path = FluxPath(turns, length, math.pi * bore**2, 1.0, length, math.pi * a**2, 2.0 * math.pi * a)
    for name, (rho, mu_r, frequency), Z_s, (R, X, X_gap, R_copper), share in BARS if full else BARS[:QUICK_BARS]:
        Z = 1e3 * path.coil_impedance(Z_s, frequency) / length
        yield AROUND.relative(f"{name}: X", X + X_gap, Z.imag, "mohm/m", 1e-8)
        mesh = cylinder(graded_edges(0.0, a, math.sqrt(rho / (math.pi * frequency * PUBLISHED_MU_0 * mu_r))), length)
        solved = 1e3 * path.coil_impedance(uniform(mesh, rho, mu_r, frequency).impedance, frequency) / length
        yield AROUND_SOLVED.relative(f"{name}: resistance", R, solved.real, "mohm/m", 5e-4)
        yield AROUND_SOLVED.relative(f"{name}: reactance", X + X_gap, solved.imag, "mohm/m", 5e-4)
        depth = copper_depth(1.8e-8, frequency)
        copper = 1e3 * sheet_resistance(1.8e-8, depth, turns, 2.0 * math.pi * bore, length) / length
        yield EFFICIENCY.relative(f"{name}: copper", R_copper, copper, "mohm/m", 1e-8)
        yield EFFICIENCY.relative(f"{name}: share", share, Z.real / (Z.real + copper), "-", 1e-8)
