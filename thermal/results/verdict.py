"""The answer of a run in one sentence, words first."""

from thermal.constants import ZERO_CELSIUS
from thermal.results.history import History
from thermal.results.stages import Span, StageEnd, first_crossing, limit_spans, stage_ends
from thermal.schedule import Stop
from thermal.setup import Setup

LIMIT_WORDS = {
    "power": "power limit",
    "current": "current limit",
    "voltage": "voltage limit",
    "field": "field limit",
}
"""What a limit of the supply is called in a sentence."""

SPANS_AT_MOST = 2
AS_HOT = 0.5
NEAR_SOLIDUS = 50.0
"""Below this distance [K] of the hottest point to the solidus an uncalibrated result cannot tell good from burnt."""
HOLDS_WITHIN = 2e-3
"""A target counts as met within this many kelvin: twice what a run lands within."""


def sentence(setup: Setup, history: History) -> str:
    """The answer of a run: what was reached when or why not, what bound, the hottest point and the energy."""
    ends = stage_ends(setup, history)
    first = []
    if history.status == "interrupted":
        last = ends[-1]
        first.append(
            f"Interrupted at {seconds(last.record.end)} in the {last.name} stage, incomplete: "
            f"{_surface_and_core(history, last.last)}"
        )
    passed = _solidus_passed(setup, history)
    late = {} if passed is None else _met_after(setup, ends, passed)
    if (warning := _melting(setup, history, passed, late, ends[-1])) is not None:
        first.append(warning)
    in_time = [end for end in ends if end.number not in late]
    outcomes = [text for end in in_time if (text := _outcome(setup, history, end)) is not None]
    if not any(stage.stop for stage in setup.stages) and history.status != "interrupted":
        outcomes.append(f"runs to {seconds(ends[-1].record.end)}: {_surface_and_core(history, ends[-1].last)}")
    parts = [*outcomes, *limits_in_words(history), hottest_point(history)]
    if (energy := energy_words(setup, history)) is not None:
        parts.append(energy)
    told = "; ".join(parts)
    return ". ".join([*first, told[:1].upper() + told[1:]]) + "."


def specific_energy(setup: Setup, history: History) -> tuple[float, str]:
    """Energy per mass of the workpiece [J/kg] and where it is taken: "supply" (its share) or "absorbed"."""
    account = "supply" if setup.has_coil else "absorbed"
    return float(history.energy[account][-1]) / setup.mass, account


def energy_words(setup: Setup, history: History) -> str | None:
    """Energy per tonne in words, None where no power was used."""
    energy, account = specific_energy(setup, history)
    if energy <= 0.0:
        return None
    per_tonne = f"{energy / 3600.0:.0f} kWh/t"
    if account == "supply":
        return f"{per_tonne} at the supply output"
    return f"{per_tonne} absorbed (without a coil there is no figure at the supply)"


def hottest_point(history: History) -> str:
    """Highest temperature of the run and its depth, in words."""
    i = int(history.readings["maximum"].argmax())
    depth, section = depth_of_maximum(history, i), float(history.edges[-1] - history.edges[0])
    where = f"{depth * 1e3:.2g} mm under the surface"
    if depth <= 0.0:
        where = "at the surface"
    elif depth > 0.999 * section:
        where = "in the core"
    return f"hottest point {celsius(history.readings['maximum'][i])}, {where}"


def depth_of_maximum(history: History, i: int) -> float:
    """Depth [m] of the hottest point at step i; 0 where the surface is as hot within half a kelvin."""
    ahead = float(history.readings["maximum"][i] - history.readings["surface"][i])
    return float(history.maximum_depth[i]) if ahead >= AS_HOT else 0.0


def celsius(T: float) -> str:
    """A temperature [K] in whole °C."""
    return f"{round(float(T) - ZERO_CELSIUS)} °C"


def seconds(time: float) -> str:
    """A time [s] with about three figures; below one second in ms."""
    if 0.0 < time < 0.9995:
        return f"{time * 1e3:.3g} ms"
    digits = 0 if time >= 100.0 else 1 if time >= 10.0 else 2
    text = f"{time:.{digits}f}"
    return (text.rstrip("0").rstrip(".") if "." in text else text) + " s"


def power(value: float) -> str:
    """A power [W] with three figures behind the unit that fits."""
    if abs(value) >= 999.5e3:
        return f"{value / 1e6:.3g} MW"
    return f"{value / 1e3:.3g} kW" if abs(value) >= 999.5 else f"{value:.3g} W"


def power_unit(largest: float) -> tuple[str, float]:
    """Unit in which powers up to a largest [W] read well, and its size [W]."""
    return ("W", 1.0) if largest < 1e3 else ("kW", 1e3)


def hertz(frequency: float) -> str:
    """A frequency [Hz] behind the unit that fits."""
    return f"{frequency / 1e3:.6g} kHz" if frequency >= 1e3 else f"{frequency:.6g} Hz"


def spans_in_words(spans: list[Span]) -> str:
    """When something held: every span, or for many the time in all."""
    if len(spans) <= SPANS_AT_MOST:
        return " and ".join(_span(*span) for span in spans)
    total = sum(end - start for start, end in spans)
    return f"for {seconds(total)} in all between {seconds(spans[0][0])} and {seconds(spans[-1][1])}"


def _span(start: float, end: float) -> str:
    first, last = seconds(start), seconds(end)
    return f"from {first} to {last}" if first != last else f"for a moment at {first}"


def _surface_and_core(history: History, i: int) -> str:
    return f"surface {celsius(history.readings['surface'][i])}, core {celsius(history.readings['core'][i])}"


def _solidus_passed(setup: Setup, history: History) -> float | None:
    """First moment [s] the hottest point lies above the solidus."""
    if setup.material.solidus is None:
        return None
    return first_crossing(history.time, history.readings["maximum"], setup.material.solidus)


def _met_after(setup: Setup, ends: tuple[StageEnd, ...], passed: float) -> dict[int, str]:
    """Number of a stage -> heating targets it met only after the solidus was passed [s]: no success."""
    found = {}
    for end in ends:
        stop = setup.stages[end.number].stop
        if stop is not None and not stop.falling and end.record.reason == "target" and end.record.end > passed:
            found[end.number] = f"{_events(stop)} ({seconds(end.record.end)})"
    return found


def margin_to_solidus(setup: Setup, history: History) -> float | None:
    """How far the hottest point stays below the solidus [K], below zero where it passes it; None without a solidus."""
    solidus = setup.material.solidus
    return None if solidus is None else solidus - float(history.readings["maximum"].max())


def _melting(setup: Setup, history: History, passed: float | None, late: dict[int, str], last: StageEnd) -> str | None:
    """Sentence about the solidus, with the targets that were met too late, or the end of the run at the liquidus."""
    solidus = setup.material.solidus
    told = []
    if passed is not None and solidus is not None:
        before = f", before {' and '.join(late.values())}" if late else ""
        told.append(
            f"The hottest point passes the solidus {celsius(solidus)} at {seconds(passed)}{before}: "
            "the piece burns or melts there"
        )
    margin = margin_to_solidus(setup, history)
    if margin is not None and solidus is not None and 0.0 <= margin < NEAR_SOLIDUS:
        told.append(
            f"The hottest point comes within {margin:.0f} K of the solidus {celsius(solidus)}, which is less than the "
            "error of this calculation: take it as burnt or melting"
        )
    if last.record.reason == "too hot":
        bound = "liquidus" if setup.material.liquidus is not None else "end of the material data"
        told.append(
            f"The run stops at {seconds(last.record.end)}, where the hottest point reaches the {bound} "
            f"{celsius(setup.T_end)}"
        )
    return ". ".join(told) if told else None


def _outcome(setup: Setup, history: History, end: StageEnd) -> str | None:
    """What became of the targets of a stage, None where it had none or was cut short."""
    stage, record = setup.stages[end.number], end.record
    if stage.stop is None:
        return None
    readings = {name: float(series[end.last]) for name, series in history.readings.items()}
    goal = " and ".join(_goals(stage.stop, list(stage.stop.temperatures), stage.stop.spread is not None))
    verb = "cools to" if stage.stop.falling and stage.stop.temperatures else "reaches"
    match record.reason:
        case "target":
            return f"{verb} {goal} after {seconds(record.end)}"
        case "already there":
            return f"{goal} holds already when the {end.name} stage begins"
        case "settled":
            return _settled(history, end, stage.stop, readings)
        case "time" if stage.kind == "heat":
            longest = seconds(record.end - record.start)
            return f"not reached within {longest} (longest): {_missing(stage.stop, readings)}"
        case "time":
            return f"the {end.name} ends after {seconds(record.end - record.start)}: {_missing(stage.stop, readings)}"
        case "too hot":
            return f"{goal} is not reached by then: {_missing(stage.stop, readings)}"
        case _:
            return None


def _settled(history: History, end: StageEnd, stop: Stop, readings: dict[str, float]) -> str:
    names, spread = _far(stop, readings)
    goal = " and ".join(_goals(stop, names, spread))
    rest = celsius(readings[names[0]]) if names else f"{abs(readings['spread']):.0f} K"
    return f"cannot reach {goal}: {settling(history, end, rest)}"


def settling(history: History, end: StageEnd, rest: str) -> str:
    """Where a stage came to rest and what held it there, in words."""
    limit = history.limit[end.last]
    giver = "the drive" if limit is None else f"the {LIMIT_WORDS[limit]}"
    # Over the last step: of a piece that rests on its Curie point, the power at an instant swings with a millikelvin.
    i = end.last
    step = float(history.time[i] - history.time[i - 1])
    given = float(history.energy["absorbed"][i] - history.energy["absorbed"][i - 1]) / step
    losses = (account for name, account in history.energy.items() if name.startswith("loss: "))
    lost = sum(float(account[i] - account[i - 1]) for account in losses) / step
    return f"it settles at {rest}, where {giver} leaves {power(given)} against {power(lost)} of loss"


def _goals(stop: Stop, names: list[str], spread: bool) -> list[str]:
    """Targets in words: the temperatures named, and the spread where wanted."""
    words = {"core": "in the core", "surface": "at the surface", "mean": "in the mean"}
    words["maximum"] = "at the hottest point"
    goals = [f"{celsius(stop.temperatures[name])} {words.get(name, f'at {name}')}" for name in names]
    if spread and stop.spread is not None:
        goals.append(f"a spread within {stop.spread:.4g} K")
    return goals


def _events(stop: Stop) -> str:
    """Targets as what happens: the core reaches 1180 °C."""
    words = {"maximum": "the hottest point", "core": "the core", "surface": "the surface", "mean": "the mean"}
    told = [f"{words.get(name, name)} reaches {celsius(T)}" for name, T in stop.temperatures.items()]
    if stop.spread is not None:
        told.append(f"the spread is within {stop.spread:.4g} K")
    return " and ".join(told)


def _far(stop: Stop, readings: dict[str, float]) -> tuple[list[str], bool]:
    """Names of the temperatures that do not hold, and whether the spread does not."""
    sign = -1.0 if stop.falling else 1.0
    names = [name for name, T in stop.temperatures.items() if sign * (T - readings[name]) > HOLDS_WITHIN]
    spread = stop.spread is not None and abs(readings["spread"]) > stop.spread + HOLDS_WITHIN
    return names, spread


def _missing(stop: Stop, readings: dict[str, float]) -> str:
    names, spread = _far(stop, readings)
    told = [f"{name} at {celsius(readings[name])} ({celsius(stop.temperatures[name])} wanted)" for name in names]
    if spread and stop.spread is not None:
        told.append(f"spread {readings['spread']:+.0f} K (within {stop.spread:.4g} K wanted)")
    return ", ".join(told)


def limits_in_words(history: History) -> list[str]:
    """Which limit of the supply bound when, in words."""
    return [f"the {LIMIT_WORDS[name]} bound {spans_in_words(spans)}" for name, spans in limit_spans(history).items()]
