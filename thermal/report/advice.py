"""What to expect of a result, what limits it, and what to be careful with."""

from typing import NamedTuple

from thermal.case import Case
from thermal.constants import ZERO_CELSIUS
from thermal.control import HoldTemperature
from thermal.errors import NoConvergence
from thermal.report.conditions import conditions, thin_notes
from thermal.results.history import History
from thermal.results.stages import stage_ends, time_above
from thermal.results.verdict import celsius, seconds
from thermal.setup import Setup

HELD_WITHIN = 5.0
"""A hold that ends farther than this [K] from its set point is worth a note."""

WARM, FUMES, NEAR_MELTING = 60.0 + ZERO_CELSIUS, 200.0 + ZERO_CELSIUS, 100.0
"""Warm enough to burn skin, hot enough for oil and coatings to smoke [K]; margin to the solidus that is close [K]."""


class Caution(NamedTuple):
    """One thing that can hurt people: in one line for the console, and in full."""

    short: str
    full: str


ALWAYS = Caution(
    "A calculation, no assessment of safety or compliance: local codes and licensed people decide.",
    "This is a calculation, not an assessment of safety or compliance; local codes and the people licensed for the "
    "work decide.",
)
HOT_METAL = Caution(
    "Hot metal looks cold below about 500 °C; glowing, it harms the eyes: shields, filter glasses.",
    "Hot metal: it burns long after it stops glowing, and below about 500 °C it looks cold. Glowing metal gives off "
    "infrared light that harms the eyes: shields, clothing and filter glasses as local rules ask.",
)
COIL_FIELD = Caution(
    "Coil field: keep pacemakers, insulin pumps, rings, watches away; have the exposure assessed.",
    "Coil field: keep pacemakers, insulin pumps and other implants, rings and watches out of reach of the field. "
    "Exposure is for a competent person to assess (guidelines of ICNIRP; in the European Union Directive 2013/35/EU).",
)
VOLTAGE = Caution(
    "Voltage kills, capacitors stay charged: isolate, discharge, prove dead; licensed electricians.",
    "Voltage: supply, coil, leads and capacitors can kill, and capacitors keep their charge after switching off: "
    "isolate, discharge, prove dead. Work for licensed electricians under local codes (IEC 60519-1 covers the safety "
    "of electroheating installations).",
)
COOLING_WATER = Caution(
    "Cooling water: a leak onto hot metal flashes to steam; interlock flow and temperature.",
    "Cooling water: a leak onto hot metal flashes to steam, and water under a melt explodes. Interlock flow and "
    "temperature as the maker of the equipment and local codes ask.",
)
SMOKE = Caution(
    "Fumes: oil, paint, scale, coatings smoke; zinc, cadmium, lead are poisonous: clean and extract.",
    "Fumes: oil, paint, scale and coatings smoke; zinc, cadmium and lead are poisonous. Clean the piece, extract the "
    "fumes, keep to local workplace limits.",
)
FORCE = Caution(
    "Force: the field pushes light non-magnetic pieces out of the coil: hold them.",
    "Force: the field pushes light non-magnetic pieces out of the coil; hold them as the maker of the equipment "
    "prescribes.",
)
_MELT = (
    "Molten metal explodes with water and damp: keep everything under and around the coil dry, and leave melting to a "
    "plant and people licensed for it."
)
MELTING = Caution(
    "Near melting: the piece can drop, and melt explodes with water and damp; keep everything dry.",
    f"Near melting: the piece loses its strength and can drop. {_MELT}",
)
MELTING_ALUMINIUM = Caution(
    "Near melting: aluminium runs without changing colour, and melt explodes with water and damp.",
    f"Near melting: aluminium softens and runs without changing colour. {_MELT}",
)
SUFFOCATION = Caution(
    "Shielding gas displaces the air and suffocates without warning: ventilate, measure oxygen.",
    "Shielding gas: nitrogen, argon and helium displace the air and suffocate without warning, in pits, hoods and "
    "closed rooms first: ventilate, measure oxygen, as local rules ask.",
)
TITANIUM = Caution(
    "Titanium: above about 700 °C it takes up oxygen and nitrogen; chips and fines burn, no water.",
    "Titanium: above about 700 °C it takes up oxygen and nitrogen and turns brittle at the skin (from memory); hot "
    "nitrogen does not protect it. Chips, dust and fines burn fiercely and water feeds the fire; keep them away and "
    "have the extinguisher your local rules ask for.",
)
HOLDING = Caution(
    "Holding: a control that reads wrong heats on: have an independent over-temperature cut-out.",
    "Holding: a control that reads the wrong temperature heats on without end; have an independent over-temperature "
    "cut-out as local codes ask.",
)


def expectation(case: Case) -> tuple[str, ...]:
    """How far the answer can be trusted without a measurement to adjust it."""
    told = [
        "Not calibrated: power within about ±10 %, temperature within about ±30 to 50 K (common practice), where no "
        "note says more; a measured heating and cooling curve of your own piece narrows this."
    ]
    if case.workpiece.neighbours == "none":
        told.append("Heat flows through the section only: the answer is an average over the length of the piece.")
        if case.coil is not None:
            told.append(
                "Estimate: where piece and coil are equally long, the middle of a single piece takes about 11 to "
                "16 % more power than the average, and the ends less; an overhanging coil changes that."
            )
    return tuple(told)


def remarks(setup: Setup, case: Case, history: History) -> tuple[str, ...]:
    """Notes of the setup, data held beyond their range, holds that were not kept and moments not covered."""
    return (
        *setup.notes,
        *_thin(setup, case),
        *_beyond_data(setup, case, history),
        *_not_held(setup, history),
        *(
            f"No profile at {seconds(time)}: the run ends at {seconds(float(history.time[-1]))}."
            for time in case.output.profiles_at
            if time > history.time[-1]
        ),
    )


def _thin(setup: Setup, case: Case) -> list[str]:
    try:
        return thin_notes(case, conditions(setup))
    except NoConvergence:
        # Of one uniform temperature that the run itself never met.
        return []


def _beyond_data(setup: Setup, case: Case, history: History) -> list[str]:
    """One note for every group of properties whose data end at the same temperature and were exceeded."""
    groups: dict[tuple[float, str], list[str]] = {}
    for name, T_max in setup.material.data_limit().items():
        emissivity = name.startswith("emissivity")
        if emissivity and name != f"emissivity ({case.workpiece.surface})":
            continue
        groups.setdefault((T_max, "surface" if emissivity else "maximum"), []).append(name.replace("_", " "))
    told = []
    for (T_max, reading), names in groups.items():
        series = history.readings[reading]
        held = time_above(history.time, series, T_max)
        if held > 0.0:
            listed = names[0] if len(names) == 1 else f"{', '.join(names[:-1])} and {names[-1]}"
            told.append(
                f"Data of {setup.material.key} for {listed} end at {celsius(T_max)}: the last value was used for "
                f"{seconds(held)}, up to {celsius(float(series.max()))}."
            )
    return told


def _not_held(setup: Setup, history: History) -> list[str]:
    told = []
    for end in stage_ends(setup, history):
        control = setup.stages[end.number].control
        if not isinstance(control, HoldTemperature) or end.record.reason != "time":
            continue
        off = float(history.readings[control.reading][end.last]) - control.set_point
        if abs(off) > HELD_WITHIN:
            told.append(
                f"The {end.name} stage ends with {control.reading} {abs(off):.0f} K "
                f"{'above' if off > 0.0 else 'below'} its set point of {celsius(control.set_point)}."
            )
    return told


def cautions(setup: Setup, hottest: float) -> tuple[Caution, ...]:
    """What can hurt people in what the case describes; no compliance assessment.

    hottest : [K] anywhere in the workpiece at any time.
    """
    powered = any(stage.place == "coil" for stage in setup.stages)
    told = [ALWAYS]
    if hottest > WARM:
        told.append(HOT_METAL)
    if powered:
        told += [COIL_FIELD, VOLTAGE, COOLING_WATER]
    if hottest > FUMES:
        told.append(SMOKE)
    if setup.material.group == "titanium" and hottest > FUMES:
        told.append(TITANIUM)
    if setup.gas != "air":
        told.append(SUFFOCATION)
    if powered and setup.material.curie_temperature is None:
        told.append(FORCE)
    solidus = setup.material.solidus
    if solidus is not None and hottest >= solidus - NEAR_MELTING:
        told.append(MELTING_ALUMINIUM if setup.material.group == "aluminium" else MELTING)
    if any(isinstance(stage.control, HoldTemperature) for stage in setup.stages):
        told.append(HOLDING)
    return tuple(told)
