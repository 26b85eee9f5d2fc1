"""How hot: the highest temperature a drive can reach, and what stands in its way."""

import math
from dataclasses import dataclass, replace

from thermal.build import build
from thermal.case import Case, with_changes
from thermal.case.schema import Heat
from thermal.constants import ZERO_CELSIUS
from thermal.control import FixedDrive
from thermal.errors import CaseError
from thermal.interfaces import Demand
from thermal.questions.answer import Answer, Table, Value, burnt, full_run, kelvins, of_a_row, owned, power_row
from thermal.questions.rest import Curve, Driven, Equilibrium, Rest, curve_of
from thermal.results.history import History
from thermal.results.verdict import LIMIT_WORDS, celsius, power, seconds
from thermal.schedule import Stage, Stop
from thermal.setup import Setup

MARGIN = 1.0
"""The curve ends this many kelvin below the end of the material (liquidus, or end of the data)."""
SHARE_OF_RISE = 0.95
"""Part of the rise whose time is told; the rest takes for ever."""
COLD = 0.01
"""The curve begins this many kelvin above the coldest of workpiece and surroundings."""


@dataclass(frozen=True)
class PeakTemperature:
    """What a drive can reach.

    curve : drive against losses over the mean temperature ; reached : the state a workpiece comes to from its initial
    temperature, None where it heats on to the end of the material ; time : [s] to 95 % of the rise, None where it
    cools instead or nothing is reached ; passing : [W] absorbed that carries the workpiece past the state reached,
    None where nothing lies beyond ; rise : the run that gave the time, or None.
    """

    curve: Curve
    reached: Equilibrium | None
    time: float | None
    passing: float | None
    rise: History | None


def peak_temperature(
    case: Case, *, supply_power: float | None = None, absorbed_power: float | None = None
) -> Answer[PeakTemperature]:
    """The highest temperature the drive of the first heating stage can reach, kept on for ever.

    Parameters
    ----------
    case : Case
        The coil, the supply with its limits, the surroundings and the first heating stage of it are used.
    supply_power, absorbed_power : float
        [W] in place of the drive of that stage; at most one of them.

    Raises
    ------
    CaseError : the case has no heating stage, or no supply that could give supply_power.
    NoConvergence : no steady profile found.

    >>> from thermal import from_text
    >>> from thermal.case.starter import starter
    >>> peak = peak_temperature(from_text(starter("heater"), "."), absorbed_power=100.0)
    >>> round(peak.values["peak_surface_C"], -1)
    640.0
    """
    index = next((i for i, stage in enumerate(case.schedule) if isinstance(stage, Heat)), None)
    if index is None:
        raise CaseError("schedule    has no heat stage: nothing drives the workpiece")
    case = _driven_by(case, index, supply_power, absorbed_power)
    setup = build(case)
    stage = setup.stages[index]
    assert isinstance(stage.control, FixedDrive)
    driven = Driven(setup, stage.supply or setup.supply, stage.control.fixed)
    coldest = min(setup.T_initial, case.surroundings.temperature) + COLD
    curve = curve_of(driven, coldest, setup.T_end - MARGIN)
    reached = _from_initial(curve, setup.T_initial)
    rise = None if reached is None else _rise(setup, stage, reached.at)
    result = PeakTemperature(
        curve,
        reached,
        None if rise is None or not rise.stages[-1].met else float(rise.time[-1]),
        _passing(curve, reached),
        rise,
    )
    return _answer(case, setup, stage.control.fixed, result)


def _driven_by(case: Case, index: int, supply_power: float | None, absorbed_power: float | None) -> Case:
    """The case with another drive in its first heating stage."""
    given = {"supply_power": supply_power, "absorbed_power": absorbed_power}
    wanted = {name: value for name, value in given.items() if value is not None}
    if not wanted:
        return case
    if len(wanted) == 2:
        raise CaseError("give the power of the supply or the power absorbed, not both")
    if supply_power is not None and case.supply is None:
        raise CaseError("supply    is missing: without coil and supply only an absorbed power can be asked for")
    ((name, value),) = wanted.items()
    frequency = "" if case.supply is not None else f', frequency = "{case.frequency(index)!r} Hz"'
    return with_changes(case, {f"schedule.{index}.drive": f'{{ {name} = "{value!r} W"{frequency} }}'})


def _from_initial(curve: Curve, T_initial: float) -> Equilibrium | None:
    """The state a workpiece comes to that starts at one temperature throughout, None where it heats to the end."""
    warmer = next((each for each in curve.points if each.mean >= T_initial), curve.points[-1])
    if warmer.excess > 0.0:
        return next((state for state in curve.states if state.at.mean >= warmer.mean), None)
    return next((state for state in reversed(curve.states) if state.stable and state.at.mean <= warmer.mean), None)


def _passing(curve: Curve, reached: Equilibrium | None) -> float | None:
    """Absorbed power [W] that carries past the state reached: the loss where the drive takes over again."""
    if reached is None:
        return None
    return next((each.at.lost for each in curve.states if not each.stable and each.at.mean > reached.at.mean), None)


def _rise(setup: Setup, stage: Stage, rest: Rest) -> History | None:
    """The run from cold until the mean has made 95 % of its rise; None where there is no rise."""
    if rest.mean <= setup.T_initial:
        return None
    target = setup.T_initial + SHARE_OF_RISE * (rest.mean - setup.T_initial)
    alone = replace(stage, stop=Stop({"mean": target}), longest=None)
    return full_run(replace(setup, stages=(alone,)))


def _answer(case: Case, setup: Setup, demand: Demand, result: PeakTemperature) -> Answer[PeakTemperature]:
    states = result.curve.states
    hottest = result.curve.points[-1] if result.reached is None else result.reached.at
    return Answer(
        question="peak",
        sentence=_sentence(setup, result),
        tables=(Table("States of rest", _rows(setup, result)),) if states else (),
        values=_values(result),
        met=result.reached is not None and burnt(setup, hottest.readings["maximum"]) is None,
        notes=_notes(setup, demand),
        setup=setup,
        pieces=((setup, hottest.readings["maximum"]),),
        result=result,
    )


def _sentence(setup: Setup, result: PeakTemperature) -> str:
    reached = result.reached
    if reached is None:
        last = result.curve.points[-1]
        end, then = _end(setup)
        return (
            f"No state of rest below the {end} {celsius(setup.T_end)}: with the hottest point there, "
            f"{power(last.field.power)} are absorbed against {power(last.lost)} of loss, so the piece {then} unless "
            "the power is taken back."
        )
    told = (
        f"{'Reaches' if result.time is not None else 'Comes to'} {celsius(reached.at.readings['surface'])} at the "
        f"surface, {celsius(reached.at.readings['core'])} in the core, where the losses take all of the "
        f"{power(reached.at.lost)} {_absorbed(reached.at)}"
    )
    if result.time is not None:
        told += f"; 95 % of the rise takes {seconds(result.time)}"
    melts = burnt(setup, reached.at.readings["maximum"])
    further = [each for each in result.curve.states if each.at.mean > reached.at.mean]
    if result.passing is None:
        return f"{told}.{f' There {melts}.' if melts else ''}"
    stable = next((each for each in further if each.stable), None)
    onward = (
        f"from there the same drive goes on to {celsius(stable.at.readings['surface'])}"
        if stable is not None
        else f"from there the same drive heats on to the {_end(setup)[0]}"
    )
    return (
        f"{told}. This is a stall: {power(result.passing)} absorbed carry the piece past it, to "
        f"{celsius(further[0].at.readings['surface'])} at the surface; {onward}."
    )


def _end(setup: Setup) -> tuple[str, str]:
    """What the curve ends at, and what becomes of a piece there."""
    if setup.material.liquidus is not None:
        return "liquidus", "melts"
    return ("solidus", "melts") if setup.material.solidus is not None else ("end of the material data", "heats on")


def _absorbed(rest: Rest) -> str:
    return "absorbed" if rest.point.limit is None else f"that the {LIMIT_WORDS[rest.point.limit]} lets it absorb"


def _rows(setup: Setup, result: PeakTemperature) -> tuple[tuple[str, ...], ...]:
    states = result.curve.states
    heads = ["", *(_kind(each, result, setup) for each in states)]
    rows: list[list[str]] = [heads]

    def add(label: str, *values: str) -> None:
        rows.append([label, *values])

    for name in ("surface", "core", "mean", "maximum", *setup.depths):
        add(f"{name}, °C", *(f"{each.at.readings[name] - ZERO_CELSIUS:.0f}" for each in states))
    add("spread (surface - core), K", *(kelvins(each.at.readings["spread"]) for each in states))
    lost = [each.at.lost for each in states]
    rows.append([*power_row(owned("absorbed = lost", setup, coil=False), lost, max(lost))])
    if setup.has_coil:
        given = [each.at.point.supply_power for each in states]
        rows.append([*power_row(owned("supply power", setup, coil=True), given, max(given))])
        add("coil current, A rms", *(f"{each.at.point.coil_current_rms:.4g}" for each in states))
        add("coil voltage, V rms", *(f"{each.at.point.coil_voltage_rms:.4g}" for each in states))
    add("set by", *("drive" if each.at.point.limit is None else LIMIT_WORDS[each.at.point.limit] for each in states))
    return tuple(tuple(row) for row in rows)


def _kind(state: Equilibrium, result: PeakTemperature, setup: Setup) -> str:
    if state is result.reached:
        return f"reached from {celsius(setup.T_initial)}"
    return "stable" if state.stable else "unstable"


def _values(result: PeakTemperature) -> dict[str, Value]:
    reached = None if result.reached is None else result.reached.at
    end = result.curve.points[-1]
    return {
        "peak_surface_C": None if reached is None else _celsius(reached, "surface"),
        "peak_core_C": None if reached is None else _celsius(reached, "core"),
        "peak_mean_C": None if reached is None else _celsius(reached, "mean"),
        "time_to_95_percent_s": result.time,
        "passing_absorbed_power_W": result.passing,
        "end_maximum_C": _celsius(end, "maximum"),
        "end_absorbed_power_W": end.field.power,
        "end_loss_W": end.lost,
        "equilibria": [
            {
                "stable": each.stable,
                "reached": each is result.reached,
                "surface_C": _celsius(each.at, "surface"),
                "core_C": _celsius(each.at, "core"),
                "mean_C": _celsius(each.at, "mean"),
                "spread_K": each.at.readings["spread"],
                "absorbed_power_W": each.at.field.power,
                "loss_W": each.at.lost,
                "supply_power_W": _number(each.at.point.supply_power),
                "coil_current_A_rms": _number(each.at.point.coil_current_rms),
                "coil_voltage_V_rms": _number(each.at.point.coil_voltage_rms),
                "limit": each.at.point.limit,
            }
            for each in result.curve.states
        ],
    }


def _celsius(rest: Rest, reading: str) -> float:
    return rest.readings[reading] - ZERO_CELSIUS


def _number(value: float) -> float | None:
    return value if math.isfinite(value) else None


def _notes(setup: Setup, demand: Demand) -> tuple[str, ...]:
    match demand.kind:
        case "supply_power" | "absorbed_power":
            value = power(demand.value)
        case "coil_voltage":
            value = f"{demand.value:.4g} V rms"
        case "coil_current":
            value = f"{demand.value:.4g} A rms"
        case _:
            value = f"{demand.value / 1e3:.4g} kA/m rms"
    within = ", within the limits of the supply" if setup.has_coil else ""
    told = f"Driven without end by {value} of {demand.kind.replace('_', ' ')}{within}."
    return (told, *of_a_row(setup), *setup.notes)
