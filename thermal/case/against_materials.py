"""The materials a case names, and whether the case fits them."""

import difflib
from collections.abc import Iterator

from materials import database
from materials.errors import MaterialError
from materials.gas import Gas
from materials.library import Library
from materials.material import Lining, Material
from thermal.case.case import Case
from thermal.case.problems import Problem
from thermal.case.quantity import shown
from thermal.case.schema import CaseFile, Heat, Hold


def workpiece_material(case: Case) -> Material:
    """Material of the workpiece, from the library or from a file beside the case.

    Raises
    ------
    MaterialError
        Unknown name (with the nearest one), or a file that is missing or wrong.
    """
    name = case.workpiece.material
    return database.load_file(case.folder / name) if _is_file(name) else Library.of(case.materials).material(name)


def lining_material(case: Case) -> Lining | None:
    """Lining of the coil, from the library or from a file beside the case; None without a lining.

    Raises
    ------
    MaterialError
        As for workpiece_material.
    """
    if case.lining is None:
        return None
    name = case.lining.material
    return database.load_lining(case.folder / name) if _is_file(name) else Library.of(case.materials).lining(name)


def surroundings_gas(case: Case) -> Gas:
    """Gas around the workpiece, from the library or from a file beside the case.

    Raises
    ------
    MaterialError
        As for workpiece_material.
    """
    name = case.surroundings.gas
    return database.load_gas(case.folder / name) if _is_file(name) else Library.of(case.materials).gas(name)


def check_against_materials(case: Case) -> list[Problem]:
    """Path and sentence of everything the material data do not allow."""
    problems: list[Problem] = []
    try:
        problems.extend(_workpiece(case, workpiece_material(case)))
    except MaterialError as error:
        problems.append((("workpiece", "material"), str(error)))
    try:
        lining_material(case)
    except MaterialError as error:
        problems.append((("lining", "material"), str(error)))
    try:
        surroundings_gas(case)
    except MaterialError as error:
        problems.append((("surroundings", "gas"), str(error)))
    return problems


def own_files(sections: CaseFile, library: Library) -> dict[str, str]:
    """Dotted path -> absolute path of the file, for everything a case names that stands in the user's own folder."""
    found = {
        "workpiece.material": library.file("material", sections.workpiece.material),
        "surroundings.gas": library.file("gas", sections.surroundings.gas),
    }
    if sections.lining is not None:
        found["lining.material"] = library.file("lining", sections.lining.material)
    return {dotted: str(path.resolve()) for dotted, path in found.items() if path is not None}


def _is_file(name: str) -> bool:
    return name.endswith(".toml")


def _workpiece(case: Case, material: Material) -> Iterator[Problem]:
    state = case.workpiece.surface
    if state is not None and state not in material.surfaces:
        known = ", ".join(material.surfaces)
        hits = difflib.get_close_matches(state, list(material.surfaces), n=1)
        hint = f", did you mean '{hits[0]}'?" if hits else ""
        yield (
            ("workpiece", "surface"),
            f"{material.key} has no surface state '{state}'{hint} (it has: {known}; or give emissivity)",
        )
    initial = case.workpiece.initial
    lowest = float(material.caloric.T_nodes[0])
    if initial < lowest:
        yield (
            ("workpiece", "initial"),
            f"{shown(initial, '°C')} is below the data of {material.key} ({shown(lowest, '°C')})",
        )
    if material.solidus is not None:
        yield from _solidus(case, material.key, material.solidus)


def _solidus(case: Case, key: str, solidus: float) -> Iterator[Problem]:
    """Nothing may be asked for at or above the solidus [K]: melting is not part of the tool."""
    limit = f"is not below the solidus of {key} ({shown(solidus, '°C')})"
    if case.workpiece.initial >= solidus:
        yield ("workpiece", "initial"), f"{shown(case.workpiece.initial, '°C')} {limit}"
    for index, stage in enumerate(case.schedule):
        if isinstance(stage, Heat) and stage.until is not None:
            for name, target in stage.until.targets.items():
                if name != "spread" and target >= solidus:
                    yield ("schedule", index, "until", name), f"{shown(target, '°C')} {limit}"
        if isinstance(stage, Hold) and stage.at.temperature >= solidus:
            yield ("schedule", index, "at", stage.at.reading), f"{shown(stage.at.temperature, '°C')} {limit}"
