"""The only place where the words of a case become the parts of a run."""

import math
from collections.abc import Callable
from dataclasses import replace

import numpy as np

from materials.material import Material
from materials.property import Property
from thermal.case import Case
from thermal.case.against_materials import workpiece_material
from thermal.case.schema import Heat, Hold, Plate, Tube
from thermal.case.schema import Stage as StageWords
from thermal.circuit.supply import CoilSupply, DirectDrive
from thermal.circuit.winding import Winding, copper_depth, copper_resistivity, usual_wall, wall_factor
from thermal.conduction.assemble import EnthalpyTable, Section
from thermal.constants import ZERO_CELSIUS
from thermal.control import Control, FixedDrive, HoldTemperature
from thermal.eddy.cell_mean import NARROWEST
from thermal.eddy.exact import skin_depth
from thermal.eddy.finite_coil import FluxPath, SectionSource
from thermal.eddy.radial import RadialSolver
from thermal.errors import OutOfRange
from thermal.geometry.coil import Coil
from thermal.geometry.grading import graded_edges
from thermal.geometry.mesh import Mesh
from thermal.geometry.sampling import Sampler
from thermal.geometry.shapes import cut, cylinder, plate
from thermal.interfaces import Array, Demand, PropertyOf, Supply
from thermal.losses import losses_of
from thermal.remarks import coil_remarks, material_remarks
from thermal.schedule import Stage, Stop
from thermal.setup import Setup

FIELD_PARTS = 3
"""Field cells in each cell of a magnetic workpiece."""

WALL_FACTOR_WARNING = 1.2
"""Rise of the coil resistance from a thin wall that is worth a note (common practice)."""

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
    assumptions = [*case.defaults_used, *_model_choices(case, material, coil)]
    notes = material_remarks(case, material, frequency)

    covered = _covered(case, coil)
    row = coil is not None and case.workpiece.neighbours == "touching"
    filled = coil.length if coil is not None and row else covered
    supply = _supply(case, frequency, coil, assumptions, notes)
    if coil is not None:
        notes += coil_remarks(case, coil, _covered(case, coil), material)

    def source_on(mesh: Mesh) -> SectionSource:
        path = None if coil is None else _path(case, coil, mesh, frequency, filled)
        law = interpolated(material.resistivity)
        # Where the Curie front passes, the field needs finer cells than the heat.
        parts = 1 if material.magnetics.linear else FIELD_PARTS
        solver = RadialSolver(cut(mesh, parts))
        return SectionSource(mesh, solver, law, material.magnetics, path)

    depth = _smallest_depth(case, material, supply, covered, source_on)
    mesh = _mesh(case, depth, case.numerics.refinement, covered)
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
        share=covered / coil.length if coil is not None and row else 1.0,
        losses=losses_of(case, material, coil, _covered(case, coil), assumptions),
        stages=tuple(
            replace(_stage(words, material, mass, case.workpiece.section), supply=_direct(case, index))
            for index, words in enumerate(case.schedule)
        ),
        depths={reading.name: min(reading.depth, case.workpiece.section) for reading in case.readings},
        T_initial=case.workpiece.initial,
        T_end=T_end,
        gas=case.surroundings.gas,
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
    """A property as one table look-up, held or refused (OutOfRange) beyond its data; a curve is sampled finely."""
    T, value = curve.T, curve.value
    if curve.rule != "linear" and T.size > 1:
        T = np.unique(np.concatenate([T, np.arange(T[0], T[-1], 0.5)]))
        value = curve(T)

    def look_up(at: Array) -> Array:
        if curve.beyond == "refuse" and (at.min() < T[0] or at.max() > T[-1]):
            low, high, *asked = (f"{each - ZERO_CELSIUS:.0f}" for each in (T[0], T[-1], at.min(), at.max()))
            raise OutOfRange(f"{curve.name} is known from {low} to {high} °C, asked from {' to '.join(asked)} °C")
        return np.interp(at, T, value)

    return look_up


def _covered(case: Case, coil: Coil | None) -> float:
    """Length of the workpiece that is computed [m]: all of it, or what the coil covers of a longer one."""
    return case.workpiece.length if coil is None else min(case.workpiece.length, coil.length)


def _model_choices(case: Case, material: Material, coil: Coil | None) -> list[str]:
    """What the model takes for granted beyond the defaults of the case."""
    piece = case.workpiece
    choices = [f"permeability of {material.key}: {PERMEABILITY[material.magnetics.definition]}"]
    if material.curie_temperature is not None:
        choices.append(f"Curie point of {material.key}: rounded off by {NARROWEST:g} K on either side (assumption)")
    if coil is not None and not coil.round:
        choices.append("coil.opening: end effect of the coil that of a round one of the same area (estimate)")
    if case.lining is not None and isinstance(piece, Plate):
        choices.append("narrow edges of the plate: lose heat as in the open, the lining left out there (assumption)")
    if piece.axis == "vertical" and case.surroundings.h is None:
        choices.append("end faces: convection of an upright plate, though one looks up and one down (estimate)")
    if isinstance(piece, Tube):
        choices.append(
            "bore: loses by radiation through its two ends only; the gas that moves through it is left out, once or "
            "twice as much again at 300 °C, a third at 900 °C (estimate; more with the axis vertical)"
        )
    for index, stage in enumerate(case.schedule):
        if isinstance(stage, Hold) and _direct(case, index) is not None:
            choices.append(f"schedule.{index} (hold): at most what the heating before it used (assumption)")
    return choices


def _mesh(case: Case, depth: float, refinement: int, length: float) -> Mesh:
    piece = case.workpiece
    match piece:
        case Plate():
            return plate(graded_edges(0.0, piece.thickness / 2.0, depth, refinement), piece.width, length)
        case Tube():
            outer = piece.outer_diameter / 2.0
            return cylinder(graded_edges(outer - piece.wall, outer, depth, refinement), length)
        case _:
            return cylinder(graded_edges(0.0, piece.diameter / 2.0, depth, refinement), length)


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
        return DirectDrive(frequency)
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


def _smallest_depth(case: Case, material: Material, supply: Supply, length: float, source_on: _SourceOn) -> float:
    """Smallest skin depth of the run [m]: at the initial temperature, at the fields the heating stages begin with."""
    depths = [case.workpiece.section]
    probe = _mesh(case, case.workpiece.section / 300.0, 1, length)
    T = np.full(probe.volume.size, case.workpiece.initial)
    for index, stage in enumerate(case.schedule):
        if not isinstance(stage, Heat):
            continue
        frequency = case.frequency(index)
        driven = _direct(case, index) or supply
        _, field = driven.operate(source_on(probe).at(T), _demand(stage.drive.kind, stage.drive.value), None)
        H_peak = np.array([math.sqrt(2.0) * field.H_surface_rms])
        mu_r = material.magnetics.mu_r(H_peak, T[:1])
        depths.append(float(skin_depth(material.resistivity(T[:1]), frequency, mu_r)[0]))
    return min(depths)


def _direct(case: Case, index: int) -> DirectDrive | None:
    """What drives a stage without coil and supply; a hold may use what the heating before it did. None with a coil."""
    words = case.schedule[index]
    if (case.coil is not None and case.supply is not None) or not isinstance(words, Heat | Hold):
        return None
    if isinstance(words, Heat):
        return DirectDrive(case.frequency(index))
    before = [stage.drive for stage in case.schedule[:index] if isinstance(stage, Heat)]
    powers = [drive.absorbed_power for drive in before if drive.absorbed_power is not None]
    fields = [drive.surface_field for drive in before if drive.surface_field is not None]
    return DirectDrive(case.frequency(index), max(powers, default=None), max(fields, default=None))


def _demand(kind: str, value: float) -> Demand:
    match kind:
        case "absorbed_power" | "supply_power" | "coil_current" | "coil_voltage" | "surface_field":
            return Demand(kind, value)
    raise ValueError(f"unknown drive {kind}")


def _stage(words: StageWords, material: Material, mass: float, section: float) -> Stage:
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
            k = float(material.conductivity(np.array([set_point]))[0])
            # Slowest mode of a section heated from one side, the core insulated: 4 L^2/(pi^2 a).
            lag = section**2 * material.density * float(h[1] - h[0]) / 100.0 / (2.5 * k)
            control = HoldTemperature(
                words.at.reading, set_point, capacity, words.response, words.reset, lag, ceiling=set_point
            )
            return Stage("hold", control, "coil", None, words.duration)
        case _:
            stop = None if words.until is None else _stop(words.until.targets, falling=True)
            return Stage("transfer", FixedDrive(Demand("off", 0.0)), "open", stop, words.duration)


def _stop(targets: dict[str, float], falling: bool) -> Stop:
    temperatures = {name: T for name, T in targets.items() if name != "spread"}
    return Stop(temperatures, targets.get("spread"), falling)
