"""Whether the sections of a case fit each other; no material data needed."""

import re
from collections.abc import Iterator

from thermal.case.locate import Path
from thermal.case.problems import Problem, near
from thermal.case.quantity import shown
from thermal.case.schema import (
    TEMPERATURES,
    At,
    CaseFile,
    CoilSection,
    Heat,
    Hold,
    Plate,
    Transfer,
    Tube,
    Until,
)
from thermal.constants import COPPER_TEMPERATURES

RESERVED = (*TEMPERATURES, "spread", "time", "stage")
"""Names a reading of the user must not take: columns and targets that exist already."""

MOST = {"schedule": 1000, "reading": 100}
"""Tables of a kind a run is made for."""

LONGEST_NAME = 40
"""Characters of the name of a reading."""

MOST_ROWS = 100_000
"""Rows of the curves, a hundred times what a plot can show."""

MOST_RESPONSES = 100_000
"""Response times in a hold; a step ends at twenty of them."""

_NEEDS_COIL_AND_SUPPLY = ("supply_power", "coil_current", "coil_voltage")
_SLACK = 1e-9
"""Relative rounding of the conversion from inch or mm."""


def check_sections(case: CaseFile) -> list[Problem]:
    """Path and sentence of everything that does not fit."""
    sizes = list(_sizes(case))
    return sizes or [
        *_shape(case), *_coil(case), *_lining(case), *_readings(case), *_schedule(case), *_output(case),
    ]  # fmt: skip


def _sizes(case: CaseFile) -> Iterator[Problem]:
    for name, entries in (("schedule", case.schedule), ("reading", case.reading)):
        if len(entries) > MOST[name]:
            yield (name,), f"there are {len(entries)} of them, a case has at most {MOST[name]}"
    if len(case.output.profiles_at) > 1000:
        yield ("output", "profiles_at"), f"there are {len(case.output.profiles_at)} moments, a case has at most 1000"


def _output(case: CaseFile) -> Iterator[Problem]:
    """An interval must leave a number of rows that can be kept."""
    interval = case.output.interval
    lengths = [
        stage.longest or stage.duration if isinstance(stage, Heat) else stage.duration for stage in case.schedule
    ]
    known = sum(length for length in lengths if length is not None)
    if interval is not None and known > MOST_ROWS * interval:
        yield (
            ("output", "interval"),
            f"{shown(interval, 's')} would write {known / interval:.0f} rows over {shown(known, 's')}, "
            f"at most {MOST_ROWS} are kept ({shown(known / MOST_ROWS, 's')} or more)",
        )


def _shape(case: CaseFile) -> Iterator[Problem]:
    workpiece = case.workpiece
    if isinstance(workpiece, Tube) and workpiece.wall >= workpiece.outer_diameter / 2 * (1 - _SLACK):
        yield (
            ("workpiece", "wall"),
            f"{shown(workpiece.wall, 'mm')} leaves no bore, it must be below half of the outer diameter "
            f'({shown(workpiece.outer_diameter / 2, "mm")}); a full bar is shape = "cylinder"',
        )
    if isinstance(workpiece, Plate) and workpiece.thickness > workpiece.width:
        yield (
            ("workpiece", "thickness"),
            f"{shown(workpiece.thickness, 'mm')} is more than the width, it is the smaller of the two",
        )


def _coil(case: CaseFile) -> Iterator[Problem]:
    coil = case.coil
    if coil is None:
        if case.supply is not None:
            yield (
                ("supply",),
                "a supply feeds a coil, add a [coil] or leave it out and put the frequency in the drive",
            )
        return
    low, high = COPPER_TEMPERATURES
    if not low <= coil.temperature <= high:
        yield (
            ("coil", "temperature"),
            f"{shown(coil.temperature, '°C')} is no temperature of a water-cooled coil "
            f"({shown(low, '°C')} to {shown(high, '°C')})",
        )
    plate = isinstance(case.workpiece, Plate)
    if coil.opening is not None and not plate:
        yield ("coil", "opening"), f"is for a plate, a {case.workpiece.shape} takes inner_diameter"
    elif coil.inner_diameter is not None and plate:
        yield ("coil", "inner_diameter"), 'a plate takes opening = "120 x 40 mm" (width x height)'
    else:
        yield from _fit(case, coil)
    needed = coil.turns * coil.tube
    if needed > coil.length * (1 + _SLACK):
        yield (
            ("coil", "length"),
            f"{coil.turns:g} turns of {shown(coil.tube, 'mm')} tube need {shown(needed, 'mm')}, "
            f"the coil is {shown(coil.length, 'mm')} long",
        )
    if coil.wall is not None and coil.wall > coil.tube / 2 * (1 + _SLACK):
        yield (
            ("coil", "wall"),
            f"{shown(coil.wall, 'mm')} is more than half of the {shown(coil.tube, 'mm')} tube",
        )


def _fit(case: CaseFile, coil: CoilSection) -> Iterator[Problem]:
    """The workpiece, and the lining between, must fit the bore of the coil."""
    lining = case.lining.thickness if case.lining is not None else 0.0
    key = "opening" if coil.opening is not None else "inner_diameter"
    names = ("wide", "high") if coil.opening is not None else ("across",)
    for name, bore, outline in zip(names, coil.bore, case.workpiece.outline, strict=False):
        if bore <= outline:
            yield (
                ("coil", key),
                f"the coil is {shown(bore, 'mm')} {name} inside, the workpiece {shown(outline, 'mm')} does not fit",
            )
        elif bore - 2 * lining <= outline:
            yield (
                ("lining", "thickness"),
                f"leaves {shown(bore - 2 * lining, 'mm')} {name}, the workpiece {shown(outline, 'mm')} "
                f"does not fit (below {shown((bore - outline) / 2, 'mm')})",
            )


def _lining(case: CaseFile) -> Iterator[Problem]:
    if case.lining is not None and case.coil is None:
        yield ("lining",), "a lining lies against the coil bore, add a [coil]"


def _readings(case: CaseFile) -> Iterator[Problem]:
    section = case.workpiece.section
    seen: set[str] = set()
    for index, reading in enumerate(case.reading):
        path: Path = ("reading", index)
        if not re.fullmatch(r"[A-Za-z][A-Za-z0-9_-]*", reading.name):
            yield (
                (*path, "name"),
                f"'{reading.name}' is not a name, it starts with a letter and has letters, digits, - and _",
            )
        elif len(reading.name) > LONGEST_NAME:
            yield (*path, "name"), f"is longer than {LONGEST_NAME} characters"
        elif reading.name in RESERVED:
            yield (
                (*path, "name"),
                f"'{reading.name}' is taken, choose another than {', '.join(RESERVED)}",
            )
        elif reading.name in seen:
            yield (*path, "name"), f"'{reading.name}' is there twice"
        seen.add(reading.name)
        if reading.depth > section * (1 + _SLACK):
            yield (
                (*path, "depth"),
                f"{shown(reading.depth, 'mm')} is deeper than the core ({shown(section, 'mm')})",
            )


def _schedule(case: CaseFile) -> Iterator[Problem]:
    if not case.schedule:
        yield ("schedule",), "is empty, add a [[schedule]] table"
    driven = case.supply is not None
    for index, stage in enumerate(case.schedule):
        path: Path = ("schedule", index)
        match stage:
            case Heat():
                yield from _drive(case, stage, path)
                driven = True
                if stage.until is not None:
                    yield from _names(case, stage.until, (*path, "until"))
                    if index == 0:
                        yield from _start(case, stage.until, (*path, "until"))
            case Hold():
                yield from _names(case, stage.at, (*path, "at"))
                if stage.duration > MOST_RESPONSES * stage.response:
                    yield (
                        (*path, "response"),
                        f"{shown(stage.response, 's')} is too short for a hold of {shown(stage.duration, 's')} "
                        f"({shown(stage.duration / MOST_RESPONSES, 's')} or more)",
                    )
                if not driven:
                    yield (
                        path,
                        "a hold needs a frequency before it, put a heat stage first or add a [supply]",
                    )
            case Transfer():
                if stage.until is not None:
                    yield from _names(case, stage.until, (*path, "until"))


def _drive(case: CaseFile, stage: Heat, path: Path) -> Iterator[Problem]:
    drive = stage.drive
    missing = [name for name, part in (("[coil]", case.coil), ("[supply]", case.supply)) if part is None]
    if drive.kind in _NEEDS_COIL_AND_SUPPLY and missing:
        yield (
            (*path, "drive", drive.kind),
            f"needs {' and '.join(missing)}; without them drive with absorbed_power or surface_field",
        )
    elif case.supply is None and drive.frequency is None:
        yield (
            (*path, "drive"),
            'without a [supply] the frequency stands in the drive, add frequency = "3 kHz"',
        )
    if case.supply is not None and drive.frequency is not None:
        yield (*path, "drive", "frequency"), "the supply sets the frequency, leave it out here"


def _names(case: CaseFile, targets: Until | At, path: Path) -> Iterator[Problem]:
    """Names in a table of targets must be readings."""
    own = [reading.name for reading in case.reading]
    for name in targets.model_extra or {}:
        if name in own:
            continue
        if isinstance(targets, At) and name in ("maximum", "spread"):
            yield (*path, name), "cannot be held, name surface, core, mean or a reading"
        else:
            yield (*path, name), f"no such reading, {near(name, [*type(targets).model_fields, *own])}"


def _start(case: CaseFile, until: Until, path: Path) -> Iterator[Problem]:
    """The first heat stage must have something to heat; later ones may reheat a piece that has cooled."""
    initial = case.workpiece.initial
    known = (*TEMPERATURES, *(reading.name for reading in case.reading))
    for name, target in until.targets.items():
        if name in known and target <= initial:
            yield (
                (*path, name),
                f"{shown(target, '°C')} is not above the initial temperature ({shown(initial, '°C')})",
            )
    if list(until.targets) == ["spread"]:
        yield (
            (*path, "spread"),
            'holds before heating starts, add a temperature, for example core = "1150 °C"',
        )
