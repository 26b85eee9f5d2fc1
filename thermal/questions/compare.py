"""Which metal: the same coil, supply and piece in different metals."""

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from materials.material import Material
from thermal.build import build
from thermal.case import Case, with_changes
from thermal.case.against_materials import workpiece_material
from thermal.case.schema import Heat
from thermal.circuit.supply import CoilSupply
from thermal.constants import ZERO_CELSIUS
from thermal.control import FixedDrive
from thermal.eddy.exact import skin_depth
from thermal.errors import CaseError
from thermal.interfaces import EddyField
from thermal.questions.answer import Answer, Table, Value, burnt, kelvins, of_a_row
from thermal.questions.time_to_temperature import PLACES, TimeToTemperature, time_to_temperature
from thermal.results.stages import limit_spans
from thermal.results.verdict import LIMIT_WORDS, celsius, power_unit, seconds, specific_energy
from thermal.setup import Setup

BELOW_SOLIDUS, ROUND = 50.0, 10.0
"""Where the case gives no target every metal can stand, the common temperature lies this far below the lowest solidus,
rounded down to tens [K]."""


@dataclass(frozen=True)
class Response:
    """A metal at one temperature throughout, at the common excitation.

    T : [K] ; absorbed : [W] in the piece ; efficiency : absorbed over the power at the coil terminals, None without a
    coil ; skin_depth : [m] at the surface.
    """

    T: float
    absorbed: float
    efficiency: float | None
    skin_depth: float


@dataclass(frozen=True)
class Metal:
    """One metal in the comparison.

    key ; cold, hot : at the start and at the common temperature ; common, own : answers for the common temperature and
    for its own target, own None where it has none.
    """

    key: str
    cold: Response
    hot: Response
    common: Answer[TimeToTemperature]
    own: Answer[TimeToTemperature] | None


@dataclass(frozen=True)
class Comparison:
    """Metals beside each other.

    excitation : coil current [A], without a coil surface field [A/m], rms, the same for all ; T_common : [K] of the
    reading at ; metals : in the order asked, the first one the measure of the others.
    """

    excitation: float
    T_common: float
    at: str
    metals: tuple[Metal, ...]


def compare(
    case: Case,
    materials: Sequence[str],
    *,
    to: float | None = None,
    at: str | None = None,
    targets: Mapping[str, float] | None = None,
) -> Answer[Comparison]:
    """The same coil and supply on different metals.

    Every metal is driven like the first heating stage of the case. A surface state it does not have is replaced by its
    first one. Absorbed powers are compared at the current (without a coil: the field) that this drive takes on the
    first metal at the start.

    Parameters
    ----------
    case : Case
    materials : keys, aliases or files; the first one is the measure of the others.
    to : float
        Common temperature [K]; the target of the case where every metal can stand it, else by a rule (a note says so).
    at : str
        Reading it is asked of; that of the case's target, else the core.
    targets : key as in materials -> [K], a target of its own for a metal.

    Raises
    ------
    CaseError : no metal or no heating stage, or a temperature a metal cannot stand.
    NoConvergence : no solution.

    >>> from thermal import from_text
    >>> from thermal.case.starter import starter
    >>> answer = compare(from_text(starter("billet"), "."), ["steel-c45", "copper"], to=273.15 + 500.0)
    >>> steel, copper = answer.result.metals
    >>> steel.cold.absorbed > 10.0 * copper.cold.absorbed
    True
    """
    if not materials:
        raise CaseError("--materials    name at least one material")
    index = next((i for i, stage in enumerate(case.schedule) if isinstance(stage, Heat)), None)
    if index is None:
        raise CaseError("schedule    has no heat stage: nothing drives the workpiece")
    if strange := [key for key in targets or {} if key not in materials]:
        raise CaseError(f"--target    '{strange[0]}' is not among the materials ({', '.join(materials)})")
    if twice := [key for i, key in enumerate(materials) if key in materials[:i]]:
        raise CaseError(f"--materials    '{twice[0]}' is named twice")
    notes: list[str] = []
    cases = {key: _of(case, key, index, notes) for key in materials}
    setups = {key: build(each) for key, each in cases.items()}
    asked_at, asked_to = _target(case, index)
    reading = at or asked_at
    common = to if to is not None else _common(asked_to, [each.material for each in setups.values()], notes)
    excitation = _excitation(setups[materials[0]])
    metals = []
    for key in materials:
        own = (targets or {}).get(key)
        metals.append(
            Metal(
                setups[key].material.key,
                _response(setups[key], excitation, setups[key].T_initial),
                _response(setups[key], excitation, common),
                time_to_temperature(cases[key], common, at=reading),
                None if own is None else time_to_temperature(cases[key], own, at=reading),
            )
        )
    first = setups[materials[0]]
    result = Comparison(excitation, common, reading, tuple(metals))
    return _answer(first, result, (*notes, *of_a_row(first), *first.notes))


def _of(case: Case, key: str, index: int, notes: list[str]) -> Case:
    """The case in another metal, with nothing but the first heating stage."""
    stage = case.schedule[index]
    assert isinstance(stage, Heat)
    unit = {"supply_power": "W", "absorbed_power": "W", "coil_current": "A", "coil_voltage": "V"}
    drive = f'{stage.drive.kind} = "{stage.drive.value!r} {unit.get(stage.drive.kind, "A/m")}"'
    if case.supply is None:
        drive += f', frequency = "{case.frequency(index)!r} Hz"'
    changes: dict[str, object] = {
        "workpiece.material": key,
        "schedule": f'[{{ stage = "heat", drive = {{ {drive} }}, duration = "1 s" }}]',
    }
    state = case.workpiece.surface
    if state is not None and key != case.workpiece.material:
        piece = case.workpiece.model_copy(update={"material": key})
        surfaces = workpiece_material(replace(case, workpiece=piece)).surfaces
        if state not in surfaces:
            changes["workpiece.surface"] = next(iter(surfaces))
            notes.append(f"{key} has no surface state '{state}': '{next(iter(surfaces))}' was taken.")
    return with_changes(case, changes)


def _target(case: Case, index: int) -> tuple[str, float | None]:
    """Reading and temperature [K] the case itself asks for in that stage; the core and None where it asks for none."""
    stage = case.schedule[index]
    assert isinstance(stage, Heat)
    targets = {} if stage.until is None else {k: T for k, T in stage.until.targets.items() if k != "spread"}
    return next(iter(targets.items()), ("core", None))


def _common(asked: float | None, materials: list[Material], notes: list[str]) -> float:
    """A temperature every metal can stand [K]."""
    lowest = min((each.solidus for each in materials if each.solidus is not None), default=None)
    if asked is not None and (lowest is None or asked < lowest):
        return asked
    if lowest is None:
        raise CaseError("--to    is missing: the case asks for no temperature")
    rounded = math.floor((lowest - BELOW_SOLIDUS - ZERO_CELSIUS) / ROUND) * ROUND + ZERO_CELSIUS
    notes.append(
        f"Common temperature {celsius(rounded)}: {BELOW_SOLIDUS:.0f} K under the lowest solidus, rounded down (a rule "
        "of this tool; --to names another)."
    )
    return rounded


def _excitation(setup: Setup) -> float:
    """Coil current [A] or surface field [A/m] the drive takes on a cold piece, within the limits of the supply."""
    stage = setup.stages[0]
    assert isinstance(stage.control, FixedDrive)
    supply = stage.supply or setup.supply
    T = np.full(setup.section.mesh.volume.size, setup.T_initial)
    point, field = supply.operate(setup.source.at(T), stage.control.fixed, None)
    return point.coil_current_rms if setup.has_coil else field.H_surface_rms


def _response(setup: Setup, excitation: float, T: float) -> Response:
    everywhere = np.full(setup.section.mesh.volume.size, T)
    frequency = setup.frequency
    field = setup.source.at(everywhere)(excitation, frequency, None)
    depth = skin_depth(setup.material.resistivity(everywhere[-1:]), frequency, field.mu_r[-1:])
    return Response(T, field.power, _efficiency(setup, field, excitation), float(depth[0]))


def _efficiency(setup: Setup, field: EddyField, current: float) -> float | None:
    if not isinstance(setup.supply, CoilSupply):
        return None
    resistance = (setup.supply.winding.impedance(setup.frequency) + field.impedance).real
    return field.power / (setup.share * resistance * current**2)


def _answer(setup: Setup, result: Comparison, notes: tuple[str, ...]) -> Answer[Comparison]:
    answers = [each for metal in result.metals for each in (metal.common, metal.own) if each is not None]
    return Answer(
        question="compare",
        sentence=_sentence(setup, result),
        tables=(Table(_heading(setup, result), _rows(setup, result)),),
        values=_values(setup, result),
        met=all(each.met for each in answers),
        notes=notes,
        setup=setup,
        pieces=tuple(piece for each in answers for piece in each.pieces),
        result=result,
    )


def _heading(setup: Setup, result: Comparison) -> str:
    if setup.has_coil:
        return f"The same piece in the same coil; absorbed powers at {result.excitation:.4g} A rms"
    return f"The same piece in the same field; absorbed powers at {result.excitation / 1e3:.4g} kA/m rms"


def _sentence(setup: Setup, result: Comparison) -> str:
    goal = f"{celsius(result.T_common)} {PLACES.get(result.at, f'at {result.at}')}"
    told = []
    for metal in result.metals:
        time = metal.common.result.time
        ((piece, hottest),) = metal.common.pieces
        melts = "" if time is None or burnt(piece, hottest) is None else " (past its solidus)"
        told.append(f"{metal.key} {'never' if time is None else f'in {seconds(time)}{melts}'}")
    first, *others = result.metals
    shares = [f"{each.key} {each.cold.absorbed / first.cold.absorbed:.2g}" for each in others]
    same = f"the same {'coil current' if setup.has_coil else 'field'} and {celsius(first.cold.T)}"
    against = f" At {same}, of the power {first.key} absorbs: {', '.join(shares)}." if shares else ""
    return f"To {goal}: {', '.join(told)}.{against}"


def _rows(setup: Setup, result: Comparison) -> tuple[tuple[str, ...], ...]:
    metals = result.metals
    rows: list[tuple[str, ...]] = [("", *(metal.key for metal in metals))]

    def add(label: str, *values: str) -> None:
        rows.append((label, *values))

    nothing = [""] * len(metals)
    for responses in ([metal.cold for metal in metals], [metal.hot for metal in metals]):
        base = responses[0].absorbed
        add(f"at {celsius(responses[0].T)} throughout", *nothing)
        add("  skin depth, mm", *(f"{1e3 * each.skin_depth:.3g}" for each in responses))
        unit, watts = power_unit(max(each.absorbed for each in responses))
        add(f"  absorbed, {unit}", *(f"{each.absorbed / watts:.3g}" for each in responses))
        add("  absorbed, the first being 1", *(f"{each.absorbed / base:.3g}" for each in responses))
        if setup.has_coil:
            add(
                "  electrical efficiency, %",
                *("-" if each.efficiency is None else f"{100.0 * each.efficiency:.1f}" for each in responses),
            )
    add(f"to {celsius(result.T_common)} {PLACES.get(result.at, f'at {result.at}')}", *nothing)
    _run_rows(add, setup, [metal.common for metal in metals])
    if any(metal.own is not None for metal in metals):
        own = [metal.own for metal in metals]
        add("to its own target, °C", *("-" if each is None else f"{each.values['target_C']:.0f}" for each in own))
        _run_rows(add, setup, own)
    return tuple(rows)


def _run_rows(add: Callable[..., None], setup: Setup, answers: Sequence[Answer[TimeToTemperature] | None]) -> None:
    def each(text: Callable[[Answer[TimeToTemperature]], str]) -> list[str]:
        return ["-" if answer is None else text(answer) for answer in answers]

    def time(answer: Answer[TimeToTemperature]) -> str:
        if answer.result.time is not None:
            return f"{answer.result.time:.4g}"
        return f"never ({answer.result.history.readings[str(answer.values['reading'])][-1] - ZERO_CELSIUS:.0f} °C)"

    def limits(answer: Answer[TimeToTemperature]) -> str:
        found = [LIMIT_WORDS[name].removesuffix(" limit") for name in limit_spans(answer.result.history)]
        return ", ".join(found) or "none"

    def spread(answer: Answer[TimeToTemperature]) -> str:
        return "-" if answer.result.time is None else kelvins(answer.result.history.readings["spread"][-1])

    def energy(answer: Answer[TimeToTemperature]) -> str:
        if answer.result.time is None:
            return "-"
        return f"{specific_energy(answer.result.setup, answer.result.history)[0] / 3600.0:.0f}"

    add("  time, s", *each(time))
    add("  spread then, K", *each(spread))
    add(f"  kWh/t {'from the supply' if setup.has_coil else 'absorbed'}", *each(energy))
    if setup.has_coil:
        add("  limits that bound", *each(limits))


def _values(setup: Setup, result: Comparison) -> dict[str, Value]:
    def response(each: Response) -> Value:
        return {
            "temperature_C": each.T - ZERO_CELSIUS,
            "absorbed_power_W": each.absorbed,
            "electrical_efficiency": each.efficiency,
            "skin_depth_mm": 1e3 * each.skin_depth,
        }

    return {
        "coil_current_A_rms" if setup.has_coil else "surface_field_A_per_m_rms": result.excitation,
        "common_temperature_C": result.T_common - ZERO_CELSIUS,
        "reading": result.at,
        "materials": [
            {
                "key": metal.key,
                "cold": response(metal.cold),
                "hot": response(metal.hot),
                "to_common": dict(metal.common.values),
                "to_own_target": None if metal.own is None else dict(metal.own.values),
            }
            for metal in result.metals
        ],
    }
