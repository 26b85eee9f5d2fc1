"""Which frequency: from where the field passes through the section to where more of it brings little."""

import math
from dataclasses import dataclass, replace

import numpy as np

from thermal.build import build, coil_of
from thermal.case import Case, with_changes
from thermal.case.schema import Heat, Hold, Plate, Tube
from thermal.circuit.supply import CoilSupply, DirectDrive
from thermal.constants import MU_0, ZERO_CELSIUS
from thermal.control import FixedDrive
from thermal.eddy.exact import skin_depth
from thermal.errors import CaseError
from thermal.interfaces import Array, Demand, EddyField
from thermal.questions.answer import Answer, Table, Value, kelvins, of_a_row
from thermal.results.verdict import celsius, hertz, power
from thermal.setup import Setup

SPAN = (0.06, 30.0)
"""Frequencies looked at, over the closed-form lower limit."""
BEYOND_OWN = 4.0
"""They go to this many times the frequency of the case at least."""
POINTS = 45
ALLOWED = (1.0, 1e8)
"""What a case may have [Hz]."""
TOLD_APART = 0.05
"""The table leaves out a frequency nearer to that of the case than this share."""
SOLID, HOLLOW = 4.0, 3.0
"""Upper end of the window over its lower end: in solid sections twice the section over skin depth, 7 for a bar (6 to 10
is common practice), in tubes three times the frequency (common practice)."""
WORTH, ENOUGH = 0.90, 0.98
"""With a coil the window also begins where the efficiency is at 90 % of the best it gets at any frequency looked at,
and does not end before it is at 98 % (a rule of this tool)."""
NEAR = 0.8
"""Down to this share of the lower end a frequency is close under it, and up to the upper end over it close above."""
BAR_LIMIT, PLATE_LIMIT = 3.5567, 2.2542
"""Diameter, and thickness, over skin depth at which the power per cycle in a given field peaks: the maxima of
Phi(xi)/xi at xi = D/(2 delta) and of F(nu)/nu, with the closed forms of eddy.exact (evaluated)."""
TOO_LOW, GOOD, HIGH = "too low", "good", "needlessly high"


@dataclass(frozen=True)
class FrequencyWindow:
    """The section at its target temperature throughout, over the frequency (p points).

    frequency : (p,) [Hz] ; size_over_depth : (p,) diameter, thickness or wall over skin depth ; per_cycle : (p,) [J]
    absorbed in a period at the surface field field_rms [A/m] ; efficiency : (p,) absorbed over power at the coil
    terminals, spread : (p,) [K] of the regular regime, voltage, current : (p,) rms at the coil, all for the absorbed
    power power [W]; NaN without a coil ; lower, upper : [Hz] of the window ; cancelling : [Hz] where
    the energy per cycle peaks ; closed_form : [Hz] lower limit for
    uniform properties ; own : [Hz] of the case ; T : [K].
    """

    frequency: Array
    size_over_depth: Array
    per_cycle: Array
    efficiency: Array
    spread: Array
    voltage: Array
    current: Array
    field_rms: float
    power: float
    lower: float
    upper: float
    cancelling: float
    closed_form: float
    own: float
    T: float

    def zone(self, frequency: float) -> str:
        """Too low, good or needlessly high."""
        return TOO_LOW if frequency < self.lower else HIGH if frequency > self.upper else GOOD


def frequency_window(case: Case, *, T: float | None = None) -> Answer[FrequencyWindow]:
    """The frequencies that suit the section at its target temperature.

    The window begins where the power absorbed per cycle in a given field peaks: below, currents on opposite sides
    cancel. It ends at four times that (three times for tubes). Where the coil would lose too much it begins and ends
    higher, by its efficiency.

    Parameters
    ----------
    case : Case
        Its first heating stage gives the field and the absorbed power compared.
    T : float
        Target [K] if not the highest temperature the schedule asks for.

    Raises
    ------
    CaseError : no heating stage, no target, or one that is not below the solidus.
    NoConvergence : no operating point.

    >>> from thermal import from_text
    >>> from thermal.case.starter import starter
    >>> window = frequency_window(from_text(starter("billet"), ".")).result
    >>> window.lower < window.upper
    True
    """
    index = next((i for i, stage in enumerate(case.schedule) if isinstance(stage, Heat)), None)
    if index is None:
        raise CaseError("schedule    has no heat stage: nothing drives the workpiece")
    target = T if T is not None else _highest_asked(case)
    if target is None:
        raise CaseError("schedule    asks for no temperature: name one with --to")
    setup = build(case)
    solidus = setup.material.solidus
    if solidus is not None and target >= solidus:
        raise CaseError(
            f"--to    {celsius(target)} is not below the solidus of {setup.material.key} ({celsius(solidus)})"
        )
    own = case.frequency(index)
    field = _driven(setup, index, target)
    closed_form = _closed_form(case, setup, target, float(field.mu_r[-1]))
    low = max(min(SPAN[0] * closed_form, own / BEYOND_OWN), ALLOWED[0])
    high = min(max(SPAN[1] * closed_form, BEYOND_OWN * own), ALLOWED[1])
    frequencies = np.geomspace(low, high, POINTS)
    states = [_state(_same_coil(case, own), index, float(each), target, field) for each in frequencies]
    per_cycle = np.array([state[0] for state in states])
    efficiency, spread, voltage, current = np.array([state[1:] for state in states]).T
    cancelling = _top(frequencies, per_cycle)
    multiple = HOLLOW if isinstance(case.workpiece, Tube) else SOLID
    depth = np.array([_depth(setup, target, float(each), float(field.mu_r[-1])) for each in frequencies])
    result = FrequencyWindow(
        frequencies,
        _size(case)[1] / depth,
        per_cycle,
        efficiency,
        spread,
        voltage,
        current,
        field.H_surface_rms,
        field.power,
        max(cancelling, _first(frequencies, efficiency, WORTH)),
        max(multiple * cancelling, _first(frequencies, efficiency, ENOUGH)),
        cancelling,
        closed_form,
        own,
        target,
    )
    return _answer(case, setup, result)


def _same_coil(case: Case, frequency: float) -> Case:
    """The case with the wall of its coil as it is at its own frequency: where left out, it follows from that."""
    coil = coil_of(case, frequency)
    return case if coil is None else with_changes(case, {"coil.wall": f"{1e3 * coil.wall!r} mm"})


def _highest_asked(case: Case) -> float | None:
    asked = [
        T
        for stage in case.schedule
        if isinstance(stage, Heat) and stage.until is not None
        for name, T in stage.until.targets.items()
        if name != "spread"
    ]
    asked += [stage.at.temperature for stage in case.schedule if isinstance(stage, Hold)]
    return max(asked, default=None)


def _size(case: Case) -> tuple[str, float]:
    """Name and size [m] of the section that is compared with the skin depth."""
    match case.workpiece:
        case Plate():
            return "thickness", case.workpiece.thickness
        case Tube():
            return "wall", case.workpiece.wall
        case _:
            return "diameter", case.workpiece.diameter


def _driven(setup: Setup, index: int, T: float) -> EddyField:
    """The piece at the target throughout, under the drive of the case within its limits."""
    stage = setup.stages[index]
    assert isinstance(stage.control, FixedDrive)
    everywhere = np.full(setup.section.mesh.volume.size, T)
    return (stage.supply or setup.supply).operate(setup.source.at(everywhere), stage.control.fixed, None)[1]


def _depth(setup: Setup, T: float, frequency: float, mu_r: float) -> float:
    return float(skin_depth(setup.material.resistivity(np.array([T])), frequency, mu_r)[0])


def _closed_form(case: Case, setup: Setup, T: float, mu_r: float) -> float:
    """Lower limit [Hz] for uniform properties.

    A tube: rho/(pi mu_0 r t), where the power in a thin shell is half of what it is at high frequency.
    """
    piece = case.workpiece
    resistivity = float(setup.material.resistivity(np.array([T]))[0])
    if isinstance(piece, Tube):
        radius = 0.5 * (piece.outer_diameter - piece.wall)
        return resistivity / (math.pi * MU_0 * radius * piece.wall)
    limit = PLATE_LIMIT if isinstance(piece, Plate) else BAR_LIMIT
    return resistivity / (math.pi * MU_0 * mu_r * (_size(case)[1] / limit) ** 2)


def _state(
    case: Case, index: int, frequency: float, T: float, field: EddyField
) -> tuple[float, float, float, float, float]:
    """Energy per cycle [J] at the field of another, and efficiency, spread [K], volts and amps at its power."""
    text = f"{frequency!r} Hz"
    path = "supply.frequency" if case.supply is not None else f"schedule.{index}.drive.frequency"
    setup = build(with_changes(case, {path: text}))
    supply: CoilSupply | DirectDrive
    if isinstance(setup.supply, CoilSupply):
        supply = replace(setup.supply, max_power=None, max_current=None, max_voltage=None)
    else:
        supply = DirectDrive(frequency)
    response = setup.source.at(np.full(setup.section.mesh.volume.size, T))
    _, same_field = supply.operate(response, Demand("surface_field", field.H_surface_rms), None)
    point, same_power = supply.operate(response, Demand("absorbed_power", field.power), None)
    efficiency = same_power.power / (setup.share * point.supply_power) if setup.has_coil else math.nan
    spread = _spread(setup, same_power.heat, T)
    return same_field.power / frequency, efficiency, spread, point.coil_voltage_rms, point.coil_current_rms


def _spread(setup: Setup, heat: Array, T: float) -> float:
    """Surface minus core [K] once the profile rises evenly: all cells gain alike, the outer surface loses heat.

    The regular regime of Carslaw & Jaeger, Conduction of Heat in Solids, 2nd ed., 7.8, with the heat where the field
    puts it and the losses of the coil at that temperature.
    """
    section = setup.section
    volume = section.mesh.volume
    everywhere = np.full(volume.size, T)
    lost = sum(loss.flux(T, T)[0] for loss in setup.losses["coil"].get("outer", ()))
    lost *= float(section.mesh.faces["outer"].area[0])
    gain = heat * volume - volume / volume.sum() * (float(heat @ volume) - lost)
    k = section.conductivity(everywhere)
    outward = np.cumsum(gain)[:-1]
    steps = outward / section.conductances(k)
    profile = everywhere - np.concatenate([[0.0], np.cumsum(steps)])
    gap = float(section.mesh.faces["outer"].gap[0])
    inwards = float(outward[-1]) / float(section.mesh.area[-1])
    through = lost / float(section.mesh.faces["outer"].area[0])
    surface = float(profile[-1]) - gap / float(k[-1]) * (3.0 * through + inwards) / 4.0
    extended = setup.sampler.extended(profile, surface, float(profile[0]))
    return float(setup.sampler.readings(extended, {})["spread"])


def _top(frequency: Array, values: Array) -> float:
    """Where the values peak, by the parabola through the largest and its neighbours, in the logarithm."""
    i = min(max(int(np.argmax(values)), 1), values.size - 2)
    x, y = np.log(frequency[i - 1 : i + 2]), values[i - 1 : i + 2]
    a, b, _ = np.polyfit(x - x[1], y, 2)
    return float(np.exp(x[1] + np.clip(-b / (2.0 * a), x[0] - x[1], x[2] - x[1])))


def _first(frequency: Array, efficiency: Array, share: float) -> float:
    """Lowest frequency [Hz] from which the efficiency has a share of its best; 0 without a coil."""
    if np.isnan(efficiency).any():
        return 0.0
    wanted = share * float(efficiency.max())
    i = int(np.argmax(efficiency >= wanted))
    if i == 0:
        return float(frequency[0])
    return float(np.exp(np.interp(wanted, efficiency[i - 1 : i + 1], np.log(frequency[i - 1 : i + 1]))))


def _answer(case: Case, setup: Setup, window: FrequencyWindow) -> Answer[FrequencyWindow]:
    return Answer(
        question="frequency",
        sentence=_sentence(window),
        tables=(Table(_heading(setup, window), _rows(case, setup, window)),),
        values=_values(window),
        met=True,
        notes=(*_notes(case, window), *of_a_row(setup), *setup.notes),
        setup=setup,
        pieces=((setup, window.T),),
        result=window,
    )


def _sentence(window: FrequencyWindow) -> str:
    where = "good"
    if window.own > window.upper:
        where = "close above that" if window.own < window.upper / NEAR else "needlessly high"
        where += ": it adds spread and coil voltage for little efficiency"
    elif window.own < window.lower:
        where = "close under that" if window.own > NEAR * window.lower else "too low"
        cancels = window.own < window.cancelling
        where += ": currents on opposite sides begin to cancel" if cancels else ": the coil loses more than it need"
    return (
        f"At {celsius(window.T)} this section wants {hertz(_three(window.lower))} to {hertz(_three(window.upper))}; "
        f"the {hertz(window.own)} of the case is {where}."
    )


def _three(value: float) -> float:
    return float(f"{value:.3g}")


def _heading(setup: Setup, window: FrequencyWindow) -> str:
    return (
        f"The piece at {celsius(window.T)} throughout; energy per cycle for the same field at the surface "
        f"({window.field_rms / 1e3:.3g} kA/m rms), all below it for the same power absorbed ({power(window.power)})"
    )


def _rows(case: Case, setup: Setup, window: FrequencyWindow) -> tuple[tuple[str, ...], ...]:
    middle = math.sqrt(window.lower * window.upper)
    wanted = {0.5 * window.lower, window.lower, middle, window.upper, 2.0 * window.upper, window.own}
    shown = [
        f
        for f in sorted(wanted)
        if window.frequency[0] <= f <= window.frequency[-1]
        and (f == window.own or abs(math.log(f / window.own)) > TOLD_APART)
    ]

    def at(values: Array) -> list[float]:
        return [float(np.interp(math.log(f), np.log(window.frequency), values)) for f in shown]

    peak = float(window.per_cycle.max())
    rows: list[tuple[str, ...]] = [
        ("", *(f"{hertz(_three(f))}{' (case)' if f == window.own else ''}" for f in shown)),
        ("", *("high" if window.zone(f) == HIGH else window.zone(f) for f in shown)),
        (f"{_size(case)[0]} / skin depth", *(f"{value:.2f}" for value in at(window.size_over_depth))),
        ("energy per cycle, % of peak", *(f"{100.0 * v / peak:.0f}" for v in at(window.per_cycle))),
        ("spread of even heating, K", *(kelvins(value) for value in at(window.spread))),
    ]
    if setup.has_coil:
        rows += [
            ("electrical efficiency, %", *(f"{100.0 * value:.1f}" for value in at(window.efficiency))),
            ("coil voltage, V rms", *(f"{value:.3g}" for value in at(window.voltage))),
            ("coil current, A rms", *(f"{value:.4g}" for value in at(window.current))),
        ]
    return tuple(rows)


def _notes(case: Case, window: FrequencyWindow) -> tuple[str, ...]:
    multiple = HOLLOW if isinstance(case.workpiece, Tube) else SOLID
    match case.workpiece:
        case Tube():
            rule = "resistivity/(pi mu0 radius wall), a thin shell; 1 to 3 times that is common practice"
        case Plate():
            rule = f"thickness over skin depth {PLATE_LIMIT:.2f}; 3 is common practice"
        case _:
            rule = f"diameter over skin depth {BAR_LIMIT:.2f}; 3.5 to 4 is common practice, 6 to 10 the upper end"
    told = [f"Closed form for uniform properties: {hertz(_three(window.closed_form))} ({rule})."]
    begins, ends = "The window begins at the peak of the energy per cycle", f"it ends at {multiple:.0f} times that peak"
    if np.isnan(window.efficiency).any():
        told.append(f"{begins}; {ends} (a rule of this tool).")
    else:
        told.append(
            f"{begins}, and not before the efficiency has {100 * WORTH:.0f} % of its best; {ends}, and not before "
            f"{100 * ENOUGH:.0f} % of the best efficiency (a rule of this tool). The efficiency is that of the coil "
            "with this piece; the supply has its own."
        )
    return tuple(told)


def _values(window: FrequencyWindow) -> dict[str, Value]:
    def numbers(values: Array) -> list[Value]:
        return [float(value) for value in values]

    return {
        "temperature_C": window.T - ZERO_CELSIUS,
        "lower_Hz": window.lower,
        "upper_Hz": window.upper,
        "cancelling_Hz": window.cancelling,
        "closed_form_Hz": window.closed_form,
        "case_Hz": window.own,
        "case_zone": window.zone(window.own),
        "surface_field_A_per_m_rms": window.field_rms,
        "absorbed_power_W": window.power,
        "frequency_Hz": numbers(window.frequency),
        "size_over_skin_depth": numbers(window.size_over_depth),
        "energy_per_cycle_J": numbers(window.per_cycle),
        "electrical_efficiency": numbers(window.efficiency),
        "spread_K": numbers(window.spread),
        "coil_voltage_V_rms": numbers(window.voltage),
        "coil_current_A_rms": numbers(window.current),
    }
