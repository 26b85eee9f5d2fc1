"""The only place where the words of a case become the parts of a run."""

import math
from collections.abc import Callable

import numpy as np

from materials.material import Material
from materials.property import Property
from thermal.boundary.convection import constant_convection, cylinder_convection, plate_convection
from thermal.boundary.emissivity import Emissivity, emissivity_of
from thermal.boundary.lining import flat_lining, round_lining
from thermal.boundary.radiation import Radiation, bare_coil_radiation, bore_radiation
from thermal.case import Case
from thermal.case.against_materials import lining_material, surroundings_gas, workpiece_material
from thermal.case.schema import Heat, Hold, Plate, Tube
from thermal.case.schema import Stage as StageWords
from thermal.circuit.supply import CoilSupply, DirectDrive
from thermal.circuit.winding import Winding, copper_depth, copper_resistivity, usual_wall, wall_factor
from thermal.conduction.assemble import EnthalpyTable, Section
from thermal.control import Control, FixedDrive, HoldTemperature
from thermal.eddy.exact import skin_depth
from thermal.eddy.finite_coil import FluxPath, SectionSource
from thermal.eddy.radial import RadialSolver
from thermal.geometry.coil import Coil
from thermal.geometry.grading import graded_edges
from thermal.geometry.mesh import Mesh
from thermal.geometry.sampling import Sampler
from thermal.geometry.shapes import cut, cylinder, plate
from thermal.interfaces import Array, BoundaryLoss, Demand, PropertyOf, Supply
from thermal.schedule import Stage, Stop
from thermal.setup import Losses, Setup

COPPER_EMISSIVITY = 0.6
"""Emissivity of the bore of a bare copper coil, tarnished: 0.5-0.7 (common practice)."""

FIELD_PARTS = 3
"""Field cells in each cell of a magnetic workpiece."""

WALL_FACTOR_WARNING = 1.2

PERMEABILITY = {
    "constant": "one value at every field and temperature",
    "normal": "from a normal B-H curve, turned into the effective value for a sinusoidal field",
    "froehlich-kennelly": "from the Froehlich-Kennelly law, turned into the effective value for a sinusoidal field",
    "effective": "from a table already given as effective, used as it is",
}
"""How the permeability data of a material are used, for the reader of a result."""

_SourceOn = Callable[[Mesh], SectionSource]


def build(case: Case) -> Setup:
    """All parts of a run.

    Raises
    ------
    CaseError, MaterialError : what the case names does not exist or does not fit.
    NoConvergence : no operating point at the start.
    """
    material = workpiece_material(case)
    frequency = frequency_of(case)
    coil = coil_of(case, frequency)
    assumptions = [
        *case.defaults_used,
        f"permeability of {material.key}: {PERMEABILITY[material.magnetics.definition]}",
    ]
    notes: list[str] = []

    share, heated_share, filled = _lengths(case, coil)
    supply = _supply(case, frequency, coil, assumptions, notes)

    def source_on(mesh: Mesh) -> SectionSource:
        path = None if coil is None else _path(case, coil, mesh, frequency, filled)
        law = interpolated(material.resistivity)
        # Where the Curie front passes, the field needs finer cells than the heat.
        parts = 1 if material.magnetics.linear else FIELD_PARTS
        solver = RadialSolver(cut(mesh, parts))
        return SectionSource(mesh, solver, law, material.magnetics, path, heated_share)

    depth = _smallest_depth(case, material, frequency, supply, source_on)
    mesh = _mesh(case, depth, case.numerics.refinement)
    table = EnthalpyTable(material.density * material.caloric.h_nodes, material.caloric.T_nodes)
    section = Section(mesh, table, interpolated(material.conductivity))
    mass = material.density * float(mesh.volume.sum())
    T_end = next(T for T in (material.liquidus, material.solidus, material.caloric.T_max) if T is not None)
    return Setup(
        title=case.title or case.name,
        material=material,
        section=section,
        sampler=Sampler.of(mesh),
        source=source_on(mesh),
        supply=supply,
        has_coil=coil is not None,
        share=share,
        losses=_losses(case, material, coil, assumptions),
        stages=tuple(_stage(stage, material, mass) for stage in case.schedule),
        depths={reading.name: min(reading.depth, case.workpiece.section) for reading in case.readings},
        T_initial=case.workpiece.initial,
        T_end=T_end,
        mass=mass,
        frequency=frequency,
        tolerance=case.numerics.tolerance,
        assumptions=tuple(assumptions),
        notes=tuple(notes),
    )


def frequency_of(case: Case) -> float:
    """The frequency of the run [Hz]: of the supply, or of the first drive where there is none; 0 for no drive."""
    if case.supply is not None:
        return case.supply.frequency
    for stage in case.schedule:
        if isinstance(stage, Heat) and stage.drive.frequency is not None:
            return stage.drive.frequency
    return 0.0


def coil_of(case: Case, frequency: float) -> Coil | None:
    """The coil, its wall by the usual rule where the case does not give it; None without a supply to drive it."""
    words = case.coil
    if words is None or case.supply is None:
        return None
    depth = copper_depth(copper_resistivity(words.temperature), frequency)
    wall = words.wall if words.wall is not None else usual_wall(words.tube, depth)
    return Coil(words.turns, words.length, words.bore, words.opening is None, words.tube, wall)


def interpolated(curve: Property) -> PropertyOf:
    """A property as one table look-up, held at both ends; curves that are not straight are sampled finely."""
    T, value = curve.T, curve.value
    if curve.rule != "linear" and T.size > 1:
        T = np.unique(np.concatenate([T, np.arange(T[0], T[-1], 0.5)]))
        value = curve(T)

    def look_up(at: Array) -> Array:
        return np.interp(at, T, value)

    return look_up


def _lengths(case: Case, coil: Coil | None) -> tuple[float, float, float]:
    """Share of coil quantities, heated share of the length, and length of bore filled with metal [m]."""
    piece = case.workpiece
    if coil is None:
        return 1.0, 1.0, 0.0
    inside = min(piece.length, coil.length)
    if piece.neighbours == "touching":
        return inside / coil.length, inside / piece.length, coil.length
    return 1.0, inside / piece.length, inside


def _mesh(case: Case, depth: float, refinement: int) -> Mesh:
    piece = case.workpiece
    match piece:
        case Plate():
            return plate(graded_edges(0.0, piece.thickness / 2.0, depth, refinement), piece.width, piece.length)
        case Tube():
            outer = piece.outer_diameter / 2.0
            return cylinder(graded_edges(outer - piece.wall, outer, depth, refinement), piece.length)
        case _:
            return cylinder(graded_edges(0.0, piece.diameter / 2.0, depth, refinement), piece.length)


def _path(case: Case, coil: Coil, mesh: Mesh, frequency: float, filled: float) -> FluxPath:
    assert case.coil is not None
    # The coil current hugs the bore: its sheet lies half a skin depth (or half a thin wall) inside the copper.
    copper = copper_depth(copper_resistivity(case.coil.temperature), frequency)
    inset = 0.5 * min(copper, coil.wall)
    outer = float(mesh.edges[-1])
    enclosed = 2.0 * outer * mesh.width if mesh.kind == "planar" else math.pi * outer**2
    return FluxPath(
        coil.turns,
        coil.length,
        coil.bore_area(inset),
        coil.nagaoka(inset),
        filled,
        enclosed,
        mesh.perimeter,
    )


def _supply(case: Case, frequency: float, coil: Coil | None, assumptions: list[str], notes: list[str]) -> Supply:
    if coil is None or case.coil is None or case.supply is None:
        drives = [stage.drive for stage in case.schedule if isinstance(stage, Heat)]
        powers = [d.absorbed_power for d in drives if d.absorbed_power is not None]
        fields = [d.surface_field for d in drives if d.surface_field is not None]
        return DirectDrive(frequency, max(powers, default=None), max(fields, default=None))
    resistivity = copper_resistivity(case.coil.temperature)
    depth = copper_depth(resistivity, frequency)
    if case.coil.wall is None:
        assumptions[:] = [line for line in assumptions if not line.startswith("coil.wall")]
        assumptions.append(
            f"coil.wall = {coil.wall * 1e3:.3g} mm (1.5 skin depths in the copper up to the next 0.5 mm, "
            "1 mm to a quarter of the tube; common practice)"
        )
    if (factor := wall_factor(coil.wall, depth)) > WALL_FACTOR_WARNING:
        notes.append(
            f"The coil wall of {coil.wall * 1e3:.3g} mm is thin against {depth * 1e3:.2g} mm of skin depth at "
            f"{frequency:.4g} Hz: coil loss is {factor:.2f} times that of a thick wall."
        )
    winding = Winding(coil, resistivity, case.coil.leads_resistance, case.coil.leads_inductance)
    words = case.supply
    return CoilSupply(frequency, winding, words.power, words.max_current, words.max_voltage)


def _smallest_depth(case: Case, material: Material, frequency: float, supply: Supply, source_on: _SourceOn) -> float:
    """Smallest skin depth of the run [m]: at the start, at the field the first heating stage begins with."""
    heats = [stage for stage in case.schedule if isinstance(stage, Heat)]
    if not heats:
        return case.workpiece.section
    drive = heats[0].drive
    probe = _mesh(case, case.workpiece.section / 300.0, 1)
    T = np.full(probe.volume.size, case.workpiece.initial)
    _, field = supply.operate(source_on(probe).at(T), _demand(drive.kind, drive.value), None)
    H_peak = np.array([math.sqrt(2.0) * field.H_surface_rms])
    mu_r = material.magnetics.mu_r(H_peak, T[:1])
    return float(skin_depth(material.resistivity(T[:1]), frequency, mu_r)[0])


def _demand(kind: str, value: float) -> Demand:
    match kind:
        case "absorbed_power" | "supply_power" | "coil_current" | "coil_voltage" | "surface_field":
            return Demand(kind, value)
    raise ValueError(f"unknown drive {kind}")


def _stage(words: StageWords, material: Material, mass: float) -> Stage:
    match words:
        case Heat():
            control: Control = FixedDrive(_demand(words.drive.kind, words.drive.value))
            stop = None if words.until is None else _stop(words.until.targets, falling=False)
            longest = words.longest if words.until is not None else words.duration
            return Stage("heat", control, "coil", stop, longest)
        case Hold():
            set_point = words.at.temperature
            around = np.array([set_point - 50.0, set_point + 50.0])
            h = material.caloric.enthalpy(around)
            capacity = mass * float(h[1] - h[0]) / 100.0
            control = HoldTemperature(
                words.at.reading, set_point, capacity, words.response, words.reset, ceiling=set_point
            )
            return Stage("hold", control, "coil", None, words.duration)
        case _:
            stop = None if words.until is None else _stop(words.until.targets, falling=True)
            return Stage("transfer", FixedDrive(Demand("off", 0.0)), "open", stop, words.duration)


def _stop(targets: dict[str, float], falling: bool) -> Stop:
    temperatures = {name: T for name, T in targets.items() if name != "spread"}
    return Stop(temperatures, targets.get("spread"), falling)


def _losses(case: Case, material: Material, coil: Coil | None, assumptions: list[str]) -> Losses:
    piece, around = case.workpiece, case.surroundings
    if piece.emissivity is not None:
        skin = emissivity_of(piece.emissivity, False, piece.initial)
    else:
        assert piece.surface is not None
        surface = material.surfaces[piece.surface]
        skin = emissivity_of(surface.emissivity, surface.grows, piece.initial)
    T_out = around.temperature
    open_air: tuple[BoundaryLoss, ...] = (Radiation("radiation", skin, T_out), _side_convection(case))
    ends: tuple[BoundaryLoss, ...] = (Radiation("radiation", skin, T_out), _end_convection(case))
    alone: dict[str, tuple[BoundaryLoss, ...]] = {"outer": open_air, "ends": ends}
    in_coil = dict(alone)
    if case.coil is not None:
        in_coil["outer"] = _facing_coil(case, skin, assumptions)
    if piece.neighbours == "touching":
        in_coil["ends"] = ()
    if isinstance(piece, Tube):
        bore = piece.outer_diameter / 2.0 - piece.wall
        out_of_bore = (bore_radiation("radiation", bore, piece.length, T_out),)
        alone["bore"] = out_of_bore
        in_coil["bore"] = () if piece.neighbours == "touching" else out_of_bore
    return {"coil": in_coil, "open": alone}


def _facing_coil(case: Case, skin: Emissivity, assumptions: list[str]) -> tuple[BoundaryLoss, ...]:
    piece, words = case.workpiece, case.coil
    assert words is not None
    width, height = words.bore
    flat = isinstance(piece, Plate)
    room = (height - piece.outline[1]) / 2.0
    if case.lining is None:
        ratio = 1.0 if flat else piece.outline[0] / width
        assumptions.append(
            f"coil bore emissivity = {COPPER_EMISSIVITY:g} (tarnished copper, common practice); the bare coil is taken "
            "as a closed wall for radiation, with the gas of the room around the workpiece"
        )
        seen = bare_coil_radiation("radiation", skin, words.temperature, ratio, COPPER_EMISSIVITY)
        return (seen, _side_convection(case))
    stuff = lining_material(case)
    assert stuff is not None
    emissivity = case.lining.emissivity if case.lining.emissivity is not None else stuff.emissivity
    still_gas = surroundings_gas(case)
    thickness = case.lining.thickness
    if flat:
        gap = room - thickness
        return (
            flat_lining("lining", skin, still_gas, stuff.conductivity, emissivity, gap, thickness, words.temperature),
        )
    radii = (piece.outline[0] / 2.0, width / 2.0 - thickness, width / 2.0)
    return (round_lining("lining", skin, still_gas, stuff.conductivity, emissivity, radii, words.temperature),)


def _side_convection(case: Case) -> BoundaryLoss:
    piece, around = case.workpiece, case.surroundings
    if around.h is not None:
        return constant_convection("convection", around.h, around.temperature)
    gas, speed = surroundings_gas(case), around.speed or 0.0
    if isinstance(piece, Plate):
        height = piece.width if piece.axis == "horizontal" else piece.length
        return plate_convection("convection", gas, around.temperature, height, speed)
    return cylinder_convection("convection", gas, around.temperature, piece.outline[0], piece.length, piece.axis, speed)


def _end_convection(case: Case) -> BoundaryLoss:
    piece, around = case.workpiece, case.surroundings
    if around.h is not None:
        return constant_convection("convection", around.h, around.temperature)
    gas, speed = surroundings_gas(case), around.speed or 0.0
    return plate_convection("convection", gas, around.temperature, piece.outline[1], speed)
