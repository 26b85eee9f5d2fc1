"""Whole cases at random, as someone would write them: every shape, drive, alloy, surface, lining and schedule.

A case is drawn from the inside out: alloy and field at the surface first, then frequency and size so that the section
over the skin depth covers its range, then coil and supply around it, then a schedule that the power can carry out.
"""

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from hypothesis import note, settings
from hypothesis import strategies as st

from materials import database
from materials.material import Material
from thermal.build import build
from thermal.case import Case, from_text
from thermal.case.write import to_toml
from thermal.constants import MU_0
from thermal.eddy.exact import plate_impedance, skin_depth
from thermal.setup import Setup

Draw = Callable[[st.SearchStrategy[Any]], Any]
Document = dict[str, Any]

FREQUENCY = (50.0, 500e3)
"""[Hz]."""
ACROSS = (5.0, 300.0)
"""Outside of the section [mm]: diameter, outer diameter or width."""
RATIO = (0.3, 500.0)
"""Thickness of metal (diameter, wall, thickness) over the smallest skin depth at the start."""
FIELD = (1e3, 3e5)
"""[A/m] rms at the surface."""
FLUX = (3e3, 2e7)
"""[W/m2] into the surface."""
MOST_AMPERE = 1e5
"""[A] rms in the coil."""
VOLTAGE = (0.01, 10e3)
"""[V] rms at the coil."""

ALLOYS = tuple(database.names())
GASES = tuple(database.gas_names())
LININGS = tuple(database.lining_names())
SHAPES = ("cylinder", "tube", "plate")
BY_COIL = ("supply_power", "absorbed_power", "coil_current", "coil_voltage", "surface_field")
DIRECT = ("absorbed_power", "surface_field")

PLANS = (
    ("heat",),
    ("heat", "transfer"),
    ("heat", "hold"),
    ("heat", "hold", "transfer"),
    ("heat", "heat"),
    ("heat", "transfer", "heat", "hold"),
    ("transfer", "heat", "transfer"),
)
"""Orders of stages."""

FEW = settings(max_examples=12, deadline=None, derandomize=True, database=None)
"""Of the fast tests: the same examples every time."""
MANY = settings(FEW, max_examples=80)
"""Of the slow ones."""


@dataclass(frozen=True)
class Drawn:
    """A case: its document, and the thickness of metal over the skin depth at the start that was aimed at."""

    document: Document
    ratio: float


@dataclass(frozen=True)
class Aim:
    """What the parts of a case are sized by.

    frequency [Hz] ; across, thickness, length [m] of the piece ; field [A/m] ; flux [W/m2] it makes, estimated ;
    power [W] wanted ; depth : [m] volume over surface ; lowest, highest : [°C] temperatures to ask for.
    """

    shape: str
    frequency: float
    across: float
    thickness: float
    length: float
    field: float
    flux: float
    power: float
    depth: float
    lowest: float
    highest: float


def between(low: float, high: float) -> st.SearchStrategy[float]:
    """Evenly on a logarithmic scale, each end one time in ten."""
    return st.integers(-50, 450).map(lambda step: low * (high / low) ** (min(max(step, 0), 400) / 400))


def share(low: float, high: float) -> st.SearchStrategy[float]:
    """Evenly, both ends included."""
    return st.integers(0, 100).map(lambda step: low + (high - low) * step / 100)


def written(value: float, unit: str) -> str:
    """Four figures and a unit."""
    return f"{value:.4g} {unit}"


def millimetres(value: float) -> str:
    """A length [m], to the nearest micrometre, so that what fits still fits."""
    return f"{1e3 * value:.3f} mm"


@st.composite
def whole_cases(
    draw: Draw,
    alloys: Sequence[str] = ALLOYS,
    drives: Sequence[str] = BY_COIL,
    tolerances: Sequence[str] = ("3 K", "1 K", "0.3 K"),
    refinements: Sequence[int] = (1, 1, 2),
    plans: Sequence[Sequence[str]] = PLANS,
    free: bool = True,
    own: tuple[str, Material] | None = None,
) -> Drawn:
    """Any case of these alloys and drives; without a coil where the first drive allows.

    free : heat stages may end on targets, the supply may have limits; otherwise they take their time at the drive.
    own : name of a material file and what is in it, in place of an alloy.
    """
    if own is None:
        alloy = draw(st.sampled_from(alloys))
        material = database.get(alloy)
    else:
        alloy, material = own
    drive = draw(st.sampled_from(drives))
    with_coil = drive not in DIRECT or draw(st.booleans())
    aim, ratio, piece = draw(_piece(alloy, material))
    document: Document = {"format": 1, "title": draw(st.sampled_from(("", "a case at random"))), "workpiece": piece}
    room = 0.0
    if with_coil:
        if draw(st.booleans()):
            document["lining"] = draw(_lining(aim))
            room = float(document["lining"]["thickness"].split()[0]) / 1e3
        document["coil"] = draw(_coil(aim, room))
        document["supply"] = draw(_supply(aim, document["coil"], free))
    document["surroundings"] = draw(_surroundings(aim))
    plan = draw(st.sampled_from(plans))
    coil = document.get("coil")
    later = [each for each in drives if coil is not None or each in DIRECT]
    asked = [drive] + [draw(st.sampled_from(later)) for _ in range(plan.count("heat") - 1)]
    document["schedule"], document["reading"] = draw(_schedule(aim, asked, coil, plan, free))
    document["numerics"] = {
        "tolerance": draw(st.sampled_from(tolerances)),
        "refinement": draw(st.sampled_from(refinements)),
    }
    return Drawn({name: value for name, value in document.items() if value not in ("", [])}, ratio)


@st.composite
def _piece(draw: Draw, alloy: str, material: Material) -> tuple[Aim, float, Document]:
    """Size and frequency that give a thickness over skin depth somewhere in its range, and the [workpiece]."""
    shape = draw(st.sampled_from(SHAPES))
    part = {"cylinder": 1.0, "tube": draw(share(0.03, 0.45)), "plate": draw(share(0.05, 1.0))}[shape]
    field = draw(between(*FIELD))
    ceiling = material.solidus or material.caloric.T_max
    hottest = min(ceiling - 273.15, 1400.0)
    initial = draw(st.sampled_from((20.0, 20.0, 20.0, 0.6 * hottest)))
    T = [initial + 273.15]
    resistivity = float(material.resistivity(T)[0])
    mu_r = float(material.magnetics.mu_r([math.sqrt(2.0) * field], T)[0])
    depth_1Hz = float(skin_depth(resistivity, 1.0, mu_r))
    smallest, largest = (1e-3 * across * part for across in ACROSS)
    # The skin depth is depth_1Hz/sqrt(f): frequencies at which some allowed size gives the ratio wanted, or nearly.
    wanted = draw(between(*RATIO))
    slowest, fastest = (
        min(max((wanted * depth_1Hz / size) ** 2, FREQUENCY[0]), FREQUENCY[1]) for size in (largest, smallest)
    )
    frequency = draw(between(slowest, fastest))
    delta = depth_1Hz / math.sqrt(frequency)
    ratio = min(max(wanted, smallest / delta), largest / delta)
    thickness = ratio * delta
    across = thickness / part
    length = across * draw(between(0.5, 8.0))
    depth = thickness / {"cylinder": 4.0, "tube": 1.0, "plate": 2.0}[shape]
    faces = 2.0 * (across + thickness) if shape == "plate" else math.pi * across
    flux = field**2 * plate_impedance(resistivity, frequency, mu_r, thickness).real
    aim = Aim(
        shape,
        frequency,
        across,
        thickness,
        length,
        field,
        min(max(flux, FLUX[0]), FLUX[1]),
        draw(between(*FLUX)) * faces * length,
        depth,
        initial + 15.0,
        hottest - 20.0,
    )
    radiates = draw(st.sampled_from(("emissivity", *material.surfaces)))
    piece: Document = {
        "shape": shape,
        **_outside(shape, across, thickness),
        "length": millimetres(length),
        "material": alloy,
        **({"emissivity": draw(share(0.02, 1.0))} if radiates == "emissivity" else {"surface": radiates}),
        "initial": written(initial, "°C"),
        "neighbours": draw(st.sampled_from(("none", "touching"))),
        "axis": draw(st.sampled_from(("horizontal", "vertical"))),
    }
    return aim, ratio, piece


def _outside(shape: str, across: float, thickness: float) -> dict[str, str]:
    match shape:
        case "cylinder":
            return {"diameter": millimetres(across)}
        case "tube":
            return {"outer_diameter": millimetres(across), "wall": millimetres(thickness)}
        case _:
            return {"thickness": millimetres(thickness), "width": millimetres(across)}


@st.composite
def _lining(draw: Draw, aim: Aim) -> Document:
    lining: Document = {
        "material": draw(st.sampled_from(LININGS)),
        "thickness": millimetres(max(aim.across * draw(share(0.02, 0.3)), 1e-4)),
    }
    return lining | ({"emissivity": 0.6} if draw(st.booleans()) else {})


@st.composite
def _coil(draw: Draw, aim: Aim, room: float) -> Document:
    gap = max(aim.across * draw(share(0.03, 0.5)), 2e-4)
    width = aim.across + 2.0 * (gap + room)
    height = aim.thickness + 2.0 * (gap + room)
    length = aim.length * draw(between(0.6, 2.5))
    turns = draw(st.integers(1, 30))
    tube = min(length / turns * draw(share(0.5, 1.0)), 0.03)
    coil: Document = {
        "turns": turns,
        **(
            {"opening": f"{1e3 * width:.3f} x {1e3 * height:.3f} mm"}
            if aim.shape == "plate"
            else {"inner_diameter": millimetres(width)}
        ),
        "length": f"{1e3 * length:.6f} mm",
        "tube": f"{1e3 * 0.999 * tube:.6f} mm",
    }
    if draw(st.booleans()):
        coil |= {"leads_resistance": written(draw(between(1e-5, 1e-2)), "ohm")}
        coil |= {"leads_inductance": written(draw(between(1e-8, 1e-6)), "H")}
    if draw(st.booleans()):
        coil |= {"temperature": written(draw(share(20.0, 90.0)), "°C")}
        coil |= {"wall": f"{1e3 * tube * draw(share(0.05, 0.45)):.6f} mm"}
    return coil


def _ampere(aim: Aim, coil: Document) -> float:
    return min(aim.field * float(coil["length"].split()[0]) / 1e3 / float(coil["turns"]), MOST_AMPERE)


def _volt(aim: Aim, coil: Document) -> float:
    """Of the flux through the section at the field aimed at, in air."""
    volt = 2.0 * math.pi * aim.frequency * MU_0 * aim.field * aim.across**2 * float(coil["turns"])
    return min(max(volt, VOLTAGE[0]), VOLTAGE[1])


@st.composite
def _supply(draw: Draw, aim: Aim, coil: Document, limited: bool) -> Document:
    if not limited:
        return {"power": "1000 MW", "frequency": written(aim.frequency, "Hz")}
    supply: Document = {
        "power": written(aim.power * draw(between(0.5, 10.0)), "W"),
        "frequency": written(aim.frequency, "Hz"),
    }
    if draw(st.booleans()):
        supply["max_current"] = written(_ampere(aim, coil) * draw(between(0.3, 10.0)), "A")
    if draw(st.booleans()):
        supply["max_voltage"] = written(_volt(aim, coil) * draw(between(0.3, 10.0)), "V")
    return supply


@st.composite
def _surroundings(draw: Draw, aim: Aim) -> Document:
    gas = draw(st.sampled_from(GASES))
    around: Document = {"temperature": written(draw(share(0.0, 60.0)), "°C"), "gas": gas}
    match draw(st.sampled_from(("still", "speed", "h"))):
        case "speed":
            # Below a Reynolds number of 10 there is no correlation for an end face, and a run ends there.
            film = np.array([0.5 * aim.highest + 313.15])
            least = 12.0 * float(database.gas(gas).kinematic_viscosity(film)[0]) / min(aim.across, aim.thickness)
            around["speed"] = written(draw(between(max(0.1, least), max(30.0, least))), "m/s")
        case "h":
            around["h"] = written(draw(share(0.0, 300.0)), "W/(m2 K)")
    return around


@st.composite
def _schedule(
    draw: Draw, aim: Aim, drives: list[str], coil: Document | None, plan: Sequence[str], free: bool
) -> tuple[list[Document], list[Document]]:
    names = [f"TC{number + 1}" for number in range(draw(st.integers(0, 2)))]
    section = aim.thickness if aim.shape == "tube" else 0.5 * aim.thickness
    readings: list[Document] = [
        {"name": name, "depth": f"{1e3 * 0.999 * section * draw(share(0.0, 1.0)):.6f} mm"} for name in names
    ]
    stages: list[Document] = []
    for number, kind in enumerate(plan):
        match kind:
            case "heat":
                stages.append(draw(_heat(aim, drives[plan[:number].count("heat")], coil, names, free)))
            case "hold":
                target = written(draw(share(aim.lowest, aim.highest)), "°C")
                reading = draw(st.sampled_from(("surface", "core", "mean", *names)))
                stages.append(
                    {"stage": "hold", "at": {reading: target}, "duration": _seconds(draw(between(1.0, 60.0)))}
                )
                if draw(st.booleans()):
                    stages[-1] |= {"response": _seconds(draw(between(0.1, 3.0))), "reset": _seconds(2.0)}
            case _:
                stages.append({"stage": "transfer", "duration": _seconds(draw(between(0.5, 600.0)))})
                if draw(st.booleans()):
                    stages[-1]["until"] = {"surface": written(draw(share(aim.lowest, aim.highest)), "°C")}
    return stages, readings


@st.composite
def _heat(draw: Draw, aim: Aim, drive: str, coil: Document | None, names: list[str], free: bool) -> Document:
    stage: Document = {"stage": "heat", "drive": {}}
    match drive:
        case "supply_power" | "absorbed_power":
            asked, flux = written(aim.power, "W"), aim.power * aim.depth / (aim.across**2 * aim.length)
        case "coil_current" | "coil_voltage":
            assert coil is not None
            by_current = drive == "coil_current"
            asked = written(_ampere(aim, coil), "A") if by_current else written(_volt(aim, coil), "V")
            flux = aim.flux
        case _:
            asked, flux = written(aim.field, "A/m"), aim.flux
    stage["drive"][drive] = asked
    if coil is None:
        stage["drive"]["frequency"] = written(aim.frequency, "Hz")
    # 4 MJ/(m3 K) over the whole range of temperature, and more or less than that.
    scale = 4e6 * aim.depth * (aim.highest - aim.lowest) / max(flux, FLUX[0])
    if not free or draw(st.booleans()):
        stage["duration"] = _seconds(scale * draw(between(0.02, 2.0)))
        return stage
    reading = draw(st.sampled_from(("surface", "core", "mean", "maximum", *names)))
    stage["until"] = {reading: written(draw(share(aim.lowest, aim.highest)), "°C")}
    if draw(st.integers(0, 3)) == 0:
        stage["until"]["spread"] = written(draw(between(5.0, 300.0)), "K")
    stage["longest"] = _seconds(scale * draw(between(1.0, 10.0)))
    return stage


def _seconds(value: float) -> str:
    return written(max(value, 1e-3), "s")


def case_of(document: Document, folder: str = ".") -> Case:
    """The case of a document; shown where the example fails."""
    text = to_toml(document)
    note(text)
    return from_text(text, folder)


def setup_of(document: Document, folder: str = ".") -> Setup:
    """The parts of a run of a document."""
    return build(case_of(document, folder))
