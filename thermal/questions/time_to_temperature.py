"""How long: the time until a reading is at a temperature, or where it stops short of it."""

from dataclasses import dataclass, replace

from thermal.build import build
from thermal.case import Case
from thermal.constants import ZERO_CELSIUS
from thermal.errors import CaseError
from thermal.questions.answer import Answer, Table, Value, burnt, full_run, kelvins, of_a_row, owned, power_row
from thermal.results.history import History
from thermal.results.stages import limit_spans, stage_ends
from thermal.results.verdict import (
    celsius,
    energy_words,
    hottest_point,
    limits_in_words,
    seconds,
    settling,
    specific_energy,
)
from thermal.schedule import Stop
from thermal.setup import Setup

PLACES = {"surface": "at the surface", "core": "in the core", "mean": "in the mean", "maximum": "at the hottest point"}
"""Where a reading is, in words; readings of the case are told by their name."""


@dataclass(frozen=True)
class TimeToTemperature:
    """time : [s], None where the reading never gets there ; setup, history : of the run that ended with it."""

    time: float | None
    setup: Setup
    history: History


def time_to_temperature(case: Case, to: float, *, at: str = "core") -> Answer[TimeToTemperature]:
    """How long until a reading is at a temperature.

    The schedule runs as it is, but its last heating stage goes on until the reading is there or nothing more happens;
    where the reading is there in an earlier stage, that is the answer.

    Parameters
    ----------
    case : Case
    to : float
        Temperature [K].
    at : str
        surface, core, mean, maximum or the name of a reading of the case.

    Raises
    ------
    CaseError : no heating stage, an unknown reading, or a temperature that is not below the solidus.
    NoConvergence : no solution.

    >>> from thermal import from_text
    >>> from thermal.case.starter import starter
    >>> answer = time_to_temperature(from_text(starter("heater"), "."), 273.15 + 600.0, at="surface")
    >>> answer.met, round(answer.result.time)
    (True, 23)
    """
    setup = build(case)
    _check(setup, to, at)
    heating = [number for number, stage in enumerate(setup.stages) if stage.kind == "heat"]
    history, asked = _until(setup, heating[-1], to, at)
    earlier = [number for number in range(heating[-1]) if _passed(history, number, at, to)]
    if earlier:
        history, asked = _until(setup, earlier[0], to, at)
    there = len(history.stages) == len(asked.stages) and history.stages[-1].met
    hottest = float(history.readings["maximum"].max())
    result = TimeToTemperature(float(history.time[-1]) if there else None, asked, history)
    return Answer(
        question="time",
        sentence=_sentence(result, to, at),
        tables=(Table("At the start and at the end", _rows(asked, history)),),
        values=_values(result, to, at),
        met=there and burnt(asked, hottest) is None,
        notes=(*of_a_row(setup), *setup.notes),
        setup=asked,
        pieces=((asked, hottest),),
        result=result,
    )


def _check(setup: Setup, to: float, at: str) -> None:
    known = [*PLACES, *setup.depths]
    if at not in known:
        wrong = f"there is no reading '{at}'" if at != "spread" else "the spread is a difference, not a temperature"
        raise CaseError(f"--at    {wrong} (the case has: {', '.join(known)})")
    if not any(stage.kind == "heat" for stage in setup.stages):
        raise CaseError("schedule    has no heat stage: nothing drives the workpiece")
    solidus = setup.material.solidus
    if solidus is not None and to >= solidus:
        raise CaseError(f"--to    {celsius(to)} is not below the solidus of {setup.material.key} ({celsius(solidus)})")
    if to <= setup.T_initial:
        raise CaseError(f"--to    {celsius(to)} is no rise: the workpiece begins at {celsius(setup.T_initial)}")


def _until(setup: Setup, number: int, to: float, at: str) -> tuple[History, Setup]:
    """The run up to a stage that ends with the target alone, and its setup."""
    stage = setup.stages[number]
    last = replace(stage, stop=Stop({at: to}), longest=None if stage.kind == "heat" else stage.longest)
    asked = replace(setup, stages=(*setup.stages[:number], last))
    return full_run(asked), asked


def _passed(history: History, number: int, at: str, to: float) -> bool:
    return bool((history.readings[at][history.stage == number] >= to).any())


def _sentence(result: TimeToTemperature, to: float, at: str) -> str:
    setup, history = result.setup, result.history
    goal = f"{celsius(to)} {PLACES.get(at, f'at {at}')}"
    last = stage_ends(setup, history)[-1]
    if result.time is None:
        if last.record.reason == "too hot":
            return (
                f"Not without melting: after {seconds(last.record.end)} the hottest point is at "
                f"{celsius(setup.T_end)}, with {celsius(history.readings[at][-1])} {PLACES.get(at, f'at {at}')}."
            )
        return f"{goal} is never reached: {settling(history, last, celsius(history.readings[at][-1]))}."
    begun = "" if last.record.kind == "heat" else f", in the {last.name} stage"
    told = [
        f"{goal} after {seconds(result.time)}{begun}",
        f"spread (surface - core) then {kelvins(history.readings['spread'][-1])} K",
        *(limits_in_words(history) or (["no limit of the supply bound"] if setup.has_coil else [])),
        hottest_point(history),
    ]
    if (energy := energy_words(setup, history)) is not None:
        told.append(energy)
    melts = burnt(setup, float(history.readings["maximum"].max()))
    return f"{'; '.join(told)}.{f' Before that {melts}.' if melts else ''}"


def _rows(setup: Setup, history: History) -> tuple[tuple[str, ...], ...]:
    rows: list[tuple[str, ...]] = [("", "start", "end"), ("time, s", "0", f"{history.time[-1]:.4g}")]
    for name in ("surface", "core", "mean", "maximum", *setup.depths):
        ends = (history.readings[name][i] - ZERO_CELSIUS for i in (0, -1))
        rows.append((f"{name}, °C", *(f"{T:.0f}" for T in ends)))
    rows.append(("spread (surface - core), K", *(kelvins(history.readings["spread"][i]) for i in (0, -1))))
    absorbed, lost, supply = (
        [float(series[i]) for i in (0, -1)]
        for series in (history.absorbed_power, history.loss_power, history.supply_power)
    )
    rows.append(power_row(owned("absorbed power", setup, coil=False), absorbed, max(absorbed)))
    rows.append(power_row(owned("lost", setup, coil=False), lost, max(absorbed)))
    if setup.has_coil:
        rows.append(power_row(owned("supply power", setup, coil=True), supply, max(supply)))
        rows.append(("coil current, A rms", *(f"{history.coil_current_rms[i]:.4g}" for i in (0, -1))))
        rows.append(("coil voltage, V rms", *(f"{history.coil_voltage_rms[i]:.4g}" for i in (0, -1))))
    return tuple(rows)


def _values(result: TimeToTemperature, to: float, at: str) -> dict[str, Value]:
    setup, history = result.setup, result.history
    energy, account = specific_energy(setup, history)
    values: dict[str, Value] = {
        "target_C": to - ZERO_CELSIUS,
        "reading": at,
        "time_s": result.time,
        "end_s": float(history.time[-1]),
        "spread_K": float(history.readings["spread"][-1]),
        "specific_energy_kWh_per_t": energy / 3600.0,
        "specific_energy_from": account,
        "limits": [
            {"limit": name, "from_s": start, "to_s": end}
            for name, spans in limit_spans(history).items()
            for start, end in spans
        ],
    }
    for name in ("surface", "core", "mean", "maximum", *setup.depths):
        values[f"{name}_C"] = float(history.readings[name][-1]) - ZERO_CELSIUS
    return values
