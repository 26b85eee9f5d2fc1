"""Whether every number of a case ends up in the part of the run it is meant for.

Expected numbers are worked out here from the words of the case, the formula written out.
"""

from math import cos, cosh, log, pi, sin, sinh, sqrt

import numpy as np
import pytest
from cases_in_words import coil_case, drive_case
from scipy.special import ellipe, ellipk

import materials
from materials import database
from thermal.boundary.lining import LiningLoss
from thermal.build import build
from thermal.case import from_text
from thermal.circuit.supply import DirectDrive
from thermal.control import HoldTemperature
from thermal.eddy.finite_coil import FluxPath, SectionSource
from thermal.interfaces import BoundaryLoss, Demand
from thermal.setup import Setup

MU_0 = 1.25663706212e-6
SIGMA = 5.670374419e-8
C45 = 7845.0
"""Density of C45, of the material file [kg/m3]."""
T_ROOM = 293.15
T_COIL = 323.15
"""20 and 50 °C, defaults [K]."""

HEAT = '[[schedule]]\nstage = "heat"\ndrive = { coil_current = "800 A" }\nduration = "1 s"\n'
SECOND = 'duration = "1 s"'


def built(text: str, changes: dict[str, object] | None = None) -> Setup:
    return build(from_text(text, ".", changes or {}))


def in_coil(shape: str, neighbours: str = "none", length: str = "100 mm", lining: bool = True, **more: str) -> Setup:
    text = coil_case(shape, lining, neighbours, more.get("frequency", "3 kHz")) + HEAT
    changes: dict[str, object] = {"workpiece.length": length}
    if "wall" in more:
        changes["coil.wall"] = more["wall"]
    return built(text, changes)


def source_of(setup: Setup) -> SectionSource:
    assert isinstance(setup.source, SectionSource)
    return setup.source


def path_of(setup: Setup) -> FluxPath:
    path = source_of(setup).path
    assert path is not None
    return path


def demand_of(setup: Setup) -> Demand:
    return setup.stages[0].control.demand({}, 0.0, np.zeros(2))


def first_cell(setup: Setup) -> float:
    return float(np.diff(setup.section.mesh.edges)[-1])


# The coil as the field meets it -------------------------------------------------------------------------------------

COPPER = 1.7241e-8 * (1.0 + 3.93e-3 * 30.0)
"""Coil copper at 50 °C [ohm m]."""


def nagaoka(diameter: float, length: float) -> float:
    """H. Nagaoka 1909 in complete elliptic integrals of modulus k, k^2 = D^2/(D^2 + l^2)."""
    m = diameter**2 / (diameter**2 + length**2)
    k, other = sqrt(m), sqrt(1.0 - m)
    K, E = float(ellipk(m)), float(ellipe(m))
    return 4.0 / (3.0 * pi * other) * ((1.0 - m) / m * (K - E) + E - k)


@pytest.mark.parametrize(
    ("shape", "enclosed", "perimeter"),
    [
        ("cylinder", pi * 0.02**2, pi * 0.04),
        ("tube", pi * 0.02**2, pi * 0.04),  # the bore counts: its flux is in the surface impedance
        ("plate", 0.02 * 0.04, 2.0 * 0.04),  # both broad faces, not the edges
    ],
)
def test_area_and_perimeter_of_the_piece(shape: str, enclosed: float, perimeter: float) -> None:
    path = path_of(in_coil(shape))
    assert path.enclosed == pytest.approx(enclosed, rel=1e-12)
    assert path.perimeter == pytest.approx(perimeter, rel=1e-12)
    assert (path.turns, path.length) == pytest.approx((9.0, 0.12), rel=1e-12)


@pytest.mark.parametrize("wall", ["1 mm", "4 mm"])
@pytest.mark.parametrize("shape", ["cylinder", "plate"])
def test_the_current_sheet_lies_half_a_skin_or_half_a_wall_inside_the_copper(shape: str, wall: str) -> None:
    # 3 kHz: skin depth 1.276 mm, between the two walls.
    skin = sqrt(COPPER / (pi * 3e3 * MU_0))
    inset = 0.5e-3 if wall == "1 mm" else 0.5 * skin
    area = pi / 4.0 * (0.065 + 2.0 * inset) ** 2
    if shape == "plate":
        area = (0.07 + 2.0 * inset) * (0.05 + 2.0 * inset)
    path = path_of(in_coil(shape, wall=wall))
    assert path.bore_area == pytest.approx(area, rel=1e-9)
    assert path.nagaoka == pytest.approx(nagaoka(sqrt(4.0 * area / pi), 0.12), rel=1e-9)


@pytest.mark.parametrize(
    ("neighbours", "length", "filled"),
    [("none", "100 mm", 0.1), ("touching", "100 mm", 0.12), ("none", "150 mm", 0.12), ("touching", "150 mm", 0.12)],
)
def test_metal_in_the_bore(neighbours: str, length: str, filled: float) -> None:
    assert path_of(in_coil("cylinder", neighbours, length)).filled == pytest.approx(filled, rel=1e-12)


@pytest.mark.parametrize("shape", ["cylinder", "tube", "plate"])
@pytest.mark.parametrize(
    ("neighbours", "length", "share"),
    [("none", "100 mm", 1.0), ("touching", "100 mm", 100.0 / 120.0), ("none", "150 mm", 1.0), ("touching", "1 m", 1.0)],
)
def test_what_the_terminals_feel_is_what_the_pieces_absorb(
    shape: str, neighbours: str, length: str, share: float
) -> None:
    # Re(Z) I^2 is the power into all metal in the coil; the field solver integrates it over one piece, in its cells.
    setup = in_coil(shape, neighbours, length)
    found = setup.source.at(np.full(setup.section.mesh.r.size, 500.0))(800.0, 3e3, None)
    assert setup.share == pytest.approx(share, rel=1e-12)
    assert found.power == pytest.approx(share * found.impedance.real * 800.0**2, rel=1e-9)


def test_coil_copper_at_its_temperature() -> None:
    # Sheet on the bore blended with a lone turn, times Dowell's factor of a wall of 1 mm.
    setup = in_coil("cylinder", wall="1 mm")
    point, _ = setup.supply.operate(setup.source.at(np.full(setup.section.mesh.r.size, 500.0)), demand_of(setup), None)
    skin = sqrt(COPPER / (pi * 3e3 * MU_0))
    sheet = COPPER * pi * 0.065 * 81.0 / (0.12 * skin)
    lone = COPPER * 9.0 * pi * 0.075 / (4.0 * 0.01 * skin)
    v = 2.0 * 1e-3 / skin
    thin = (sinh(v) + sin(v)) / (cosh(v) - cos(v))
    R = sheet * (1.0 + (1.4 * lone / sheet) ** 3) ** (1.0 / 3.0) * thin
    assert point.coil_loss == pytest.approx(R * 800.0**2, rel=1e-6)


# A piece longer than the coil ---------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("shape", "area"),
    [("cylinder", pi * 0.02**2), ("tube", pi * (0.02**2 - 0.014**2)), ("plate", 0.02 * 0.04)],
)
def test_of_a_piece_longer_than_the_coil_the_covered_part_is_computed(shape: str, area: float) -> None:
    setup = in_coil(shape, length="150 mm")
    assert setup.section.mesh.length == pytest.approx(0.12, rel=1e-12)
    assert setup.mass == pytest.approx(C45 * area * 0.12, rel=1e-12)
    assert setup.losses["coil"]["ends"] == setup.losses["open"]["ends"] == ()
    assert any("longer than the coil" in note and "120 mm" in note for note in setup.notes)
    whole = in_coil(shape, length="100 mm")
    assert whole.section.mesh.length == pytest.approx(0.1, rel=1e-12)
    assert whole.mass == pytest.approx(C45 * area * 0.1, rel=1e-12)
    assert whole.losses["coil"]["ends"] and whole.losses["open"]["ends"]
    assert not any("longer than the coil" in note for note in whole.notes)


# Losses -------------------------------------------------------------------------------------------------------------


def flux(loss: BoundaryLoss, T: float) -> float:
    return float(loss.flux(T, T)[0])


def names(losses: tuple[BoundaryLoss, ...]) -> list[str]:
    return [loss.name for loss in losses]


def lining_of(shape: str) -> LiningLoss:
    (loss,) = in_coil(shape).losses["coil"]["outer"]
    assert isinstance(loss, LiningLoss)
    return loss


def test_lining_of_a_plate() -> None:
    # Opening 70 x 50 mm round a plate 20 mm thick with 6 mm of lining: (50 - 20)/2 - 6 = 9 mm of gas.
    lining = lining_of("plate")
    assert (lining.gap, lining.wall, lining.area_ratio) == pytest.approx((0.009, 0.006, 1.0), rel=1e-9)
    assert lining.T_coil == pytest.approx(T_COIL)


@pytest.mark.parametrize("shape", ["cylinder", "tube"])
def test_lining_of_a_round_coil(shape: str) -> None:
    # Radii 20, 65/2 - 6 = 26.5 and 32.5 mm; paths R1 ln(R2/R1) and R1 ln(R3/R2) per area of the workpiece.
    lining = lining_of(shape)
    paths = (0.02 * log(26.5 / 20.0), 0.02 * log(32.5 / 26.5), 20.0 / 26.5)
    assert (lining.gap, lining.wall, lining.area_ratio) == pytest.approx(paths, rel=1e-9)
    assert lining.T_coil == pytest.approx(T_COIL)


@pytest.mark.parametrize(("shape", "ratio"), [("cylinder", 40.0 / 65.0), ("tube", 40.0 / 65.0), ("plate", 1.0)])
def test_a_bare_coil_is_a_grey_wall_at_its_water_temperature(shape: str, ratio: float) -> None:
    radiation, convection = in_coil(shape, lining=False).losses["coil"]["outer"]
    T = 1200.0
    between = 1.0 / (1.0 / 0.8 + ratio * (1.0 / 0.6 - 1.0))
    assert flux(radiation, T) == pytest.approx(between * SIGMA * (T**4 - T_COIL**4), rel=1e-12)
    assert (radiation.name, convection.name) == ("radiation", "convection")
    # In the open large surroundings take its place.
    outside = in_coil(shape, lining=False).losses["open"]["outer"]
    assert flux(outside[0], T) == pytest.approx(0.8 * SIGMA * (T**4 - T_ROOM**4), rel=1e-12)


def test_faces_of_a_touching_tube() -> None:
    row, alone = in_coil("tube", "touching").losses, in_coil("tube").losses
    assert row["coil"]["bore"] == row["coil"]["ends"] == ()
    assert names(row["open"]["bore"]) == names(alone["open"]["bore"]) == names(alone["coil"]["bore"]) == ["radiation"]
    assert names(row["open"]["ends"]) == names(alone["coil"]["ends"]) == ["radiation", "convection"]


def test_radiation_out_of_a_bore() -> None:
    # Black openings: 2 pi r^2 (1 - F) over a bore of 2 pi r l; F between coaxial disks, r 14 mm, l 100 mm.
    T, X = 1200.0, 2.0 + (100.0 / 14.0) ** 2
    F = (X - sqrt(X * X - 4.0)) / 2.0
    (bore,) = in_coil("tube").losses["coil"]["bore"]
    assert flux(bore, T) == pytest.approx(14.0 / 100.0 * (1.0 - F) * SIGMA * (T**4 - T_ROOM**4), rel=1e-9)


def test_faces_of_a_touching_plate() -> None:
    row = in_coil("plate", "touching").losses
    assert row["coil"]["ends"] == ()
    assert names(row["coil"]["edges"]) == names(row["open"]["edges"]) == ["radiation", "convection"]
    assert names(row["open"]["ends"]) == ["radiation", "convection"]


def free_convection(T: float, size: float, constants: tuple[float, float], slenderness: float = 0.0) -> float:
    """[W/m2]; Churchill & Chu 1975, (0.825, 0.492) along a vertical plate, (0.60, 0.559) round a cylinder.

    slenderness : height over diameter of a vertical cylinder; Popiel, Wojtkowiak & Bober 2007.
    """
    air, film = database.gas("air"), np.array([(T + T_ROOM) / 2.0])
    nu, Pr, k = (float(law(film)[0]) for law in (air.kinematic_viscosity, air.prandtl, air.conductivity))
    Ra = 9.80665 / film[0] * (T - T_ROOM) * size**3 / nu**2 * Pr
    still, prandtl = constants
    Nu = (still + 0.387 * Ra ** (1 / 6) / (1.0 + (prandtl / Pr) ** (9 / 16)) ** (8 / 27)) ** 2
    curved = np.sqrt(32.0) * (Ra / Pr) ** -0.25 * slenderness
    C = 0.9165 - 0.0043 * np.sqrt(Pr) + 0.01333 * np.log(Pr) + 0.0004809 / Pr
    Nu *= 1.0 + (0.0571322 + 0.20305 * Pr**-0.43) * curved**C
    return float(Nu * k / size * (T - T_ROOM))


UPRIGHT, ROUND = (0.825, 0.492), (0.60, 0.559)


@pytest.mark.parametrize(
    ("shape", "axis", "size", "law"),
    [
        ("plate", "horizontal", 0.04, UPRIGHT),  # on its edge, as high as it is wide
        ("plate", "vertical", 0.1, UPRIGHT),
        ("cylinder", "horizontal", 0.04, ROUND),
        ("tube", "horizontal", 0.04, ROUND),
        ("cylinder", "vertical", 0.1, UPRIGHT),
        ("tube", "vertical", 0.1, UPRIGHT),
    ],
)
def test_height_of_free_convection(shape: str, axis: str, size: float, law: tuple[float, float]) -> None:
    text = drive_case(shape, 'absorbed_power = "5 kW"', "3 kHz", SECOND)
    faces = built(text, {"workpiece.axis": axis}).losses["open"]
    T = 700.0
    slenderness = 2.5 if axis == "vertical" and shape != "plate" else 0.0
    assert flux(faces["outer"][1], T) == pytest.approx(free_convection(T, size, law, slenderness), rel=1e-5)
    # Ends of a round piece are as high as its diameter, ends and edges of a plate as its thickness.
    end = 0.02 if shape == "plate" else 0.04
    for face in ("ends", "edges") if shape == "plate" else ("ends",):
        assert flux(faces[face][1], T) == pytest.approx(free_convection(T, end, UPRIGHT), rel=1e-5)


def test_a_constant_coefficient_and_the_room_reach_every_face() -> None:
    text = drive_case("plate", 'absorbed_power = "5 kW"', "3 kHz", SECOND)
    around: dict[str, object] = {"surroundings.h": "25 W/(m2 K)", "surroundings.temperature": "60 °C"}
    for losses in built(text, around).losses["open"].values():
        assert flux(losses[0], 700.0) == pytest.approx(0.8 * SIGMA * (700.0**4 - 333.15**4), rel=1e-12)
        assert flux(losses[1], 700.0) == pytest.approx(25.0 * (700.0 - 333.15), rel=1e-12)


# Stages -------------------------------------------------------------------------------------------------------------

HOLD = (
    '[[schedule]]\nstage = "hold"\nat = {{ surface = "{at} °C" }}\nduration = "9 s"\nresponse = "0.7 s"\nreset = "3 s"'
)


@pytest.mark.parametrize(
    ("at", "cp", "k"),
    [
        # EN 1993-1-2 3.4.1.2: 545 + 17820/(t - 731) up to 900 °C, 650 beyond; mean within 50 K either side.
        # k of C45 straight between its values at 800, 1000 and 1200 °C.
        (850.0, 545.0 + 17820.0 / 100.0 * log(169.0 / 69.0), 0.75 * 24.7 + 0.25 * 26.8),
        (1100.0, 650.0, 0.5 * 26.8 + 0.5 * 29.7),
    ],
)
@pytest.mark.parametrize(
    ("shape", "section", "area"),
    [("cylinder", 0.02, pi * 0.02**2), ("tube", 0.006, pi * (0.02**2 - 0.014**2)), ("plate", 0.01, 0.02 * 0.04)],
)
def test_what_a_hold_knows_of_the_piece(
    shape: str, section: float, area: float, at: float, cp: float, k: float
) -> None:
    stage = built(coil_case(shape, True, "none") + HEAT + HOLD.format(at=at)).stages[1]
    control = stage.control
    assert isinstance(control, HoldTemperature)
    assert control.capacity == pytest.approx(C45 * area * 0.1 * cp, rel=5e-4)
    assert control.lag == pytest.approx(section**2 * C45 * cp / (2.5 * k), rel=5e-4)
    assert (control.reading, control.response, control.reset) == ("surface", 0.7, 3.0)
    assert control.set_point == control.ceiling == pytest.approx(at + 273.15)
    assert (stage.longest, stage.supply) == (9.0, None)


def drives(*stages: tuple[str, str]) -> str:
    return "".join(
        f'[[schedule]]\nstage = "heat"\ndrive = {{ {drive}, frequency = "{frequency}" }}\nduration = "1 s"\n'
        for drive, frequency in stages
    )


POWER, FIELD = ('absorbed_power = "20 kW"', "3 kHz"), ('surface_field = "5 kA/m"', "40 kHz")


def test_a_hold_without_a_coil_uses_no_more_than_the_heating_before_it() -> None:
    later = drives(('absorbed_power = "90 kW"', "1 kHz"))
    weak = drives(('absorbed_power = "7 kW"', "3 kHz"), FIELD, ('surface_field = "2 kA/m"', "40 kHz"))
    setup = built(drive_case("cylinder", *POWER, SECOND, further=weak + HOLD.format(at=900) + "\n" + later))
    assert [stage.supply for stage in setup.stages] == [
        DirectDrive(3e3),
        DirectDrive(3e3),
        DirectDrive(40e3),
        DirectDrive(40e3),
        DirectDrive(40e3, 20e3, 5e3),
        DirectDrive(1e3),
    ]


# First cell ---------------------------------------------------------------------------------------------------------


def graded(section: float, depth: float) -> float:
    """Outermost cell [m]: a sixth of the skin depth or 1/60 of the section, growing by 15 % up to 1/40, made to fit."""
    sizes = [min(depth / 6.0, section / 60.0)]
    while sum(sizes) < section:
        sizes.append(min(sizes[-1] * 1.15, section / 40.0))
    return sizes[0] * section / sum(sizes)


@pytest.mark.parametrize(("shape", "section"), [("cylinder", 0.02), ("tube", 0.006), ("plate", 0.01)])
@pytest.mark.parametrize(("initial", "resistivity"), [("20 °C", 17.1e-8), ("500 °C", 62.95e-8), ("900 °C", 114.9e-8)])
def test_first_cell_at_a_given_field(shape: str, section: float, initial: str, resistivity: float) -> None:
    # 30 kA/m rms at 200 kHz; mu_r at the amplitude, the resistivity as tabulated (500 °C: between 400 and 600).
    T = np.array([float(initial.split()[0]) + 273.15])
    mu_r = float(materials.get("steel-c45").magnetics.mu_r(np.array([sqrt(2.0) * 30e3]), T)[0])
    assert mu_r == 1.0 if initial == "900 °C" else mu_r > 10.0
    depth = sqrt(resistivity / (pi * 200e3 * MU_0 * mu_r))
    text = drive_case(shape, 'surface_field = "30 kA/m"', "200 kHz", SECOND, initial=initial)
    assert first_cell(built(text)) == pytest.approx(graded(section, depth), rel=1e-9)


@pytest.mark.parametrize("turned", [False, True])
def test_the_first_cell_suits_the_smallest_skin_depth_of_all_drives(turned: bool) -> None:
    rho = float(materials.get("aluminium-6082").resistivity(np.array([T_ROOM]))[0])
    stages = [POWER, FIELD][:: -1 if turned else 1]
    text = drive_case("cylinder", *stages[0], SECOND, material="aluminium-6082", further=drives(stages[1]))
    expected = graded(0.02, sqrt(rho / (pi * 40e3 * MU_0)))
    assert first_cell(built(text)) == pytest.approx(expected, rel=1e-9)


def test_the_first_cell_in_a_coil_follows_the_field_it_makes() -> None:
    # The same field by two ways of asking for it: as such, and as the coil current that makes it.
    as_field = HEAT.replace("coil_current", "surface_field").replace("800 A", "40 kA/m")
    by_field = built(coil_case("cylinder", True, "none", "100 kHz") + as_field)
    T = np.full(by_field.section.mesh.r.size, T_ROOM)
    point, _ = by_field.supply.operate(by_field.source.at(T), demand_of(by_field), None)
    amps = f"{point.coil_current_rms!r} A"
    by_current = built(coil_case("cylinder", True, "none", "100 kHz") + HEAT.replace("800 A", amps))
    mu_r = float(materials.get("steel-c45").magnetics.mu_r(np.array([sqrt(2.0) * 40e3]), T[:1])[0])
    depth = sqrt(17.1e-8 / (pi * 100e3 * MU_0 * mu_r))
    assert first_cell(by_field) == pytest.approx(graded(0.02, depth), rel=1e-5)
    assert first_cell(by_current) == pytest.approx(graded(0.02, depth), rel=1e-3)
