"""Reading a case file: TOML, overrides, defaults, schema, checks; every mistake with its line."""

import copy
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from pydantic import ValidationError

from materials import toml_text
from materials.errors import MaterialError, one_line
from materials.library import Library
from thermal.case.against_materials import check_against_materials, own_files
from thermal.case.case import Case
from thermal.case.checks import check_sections
from thermal.case.defaults import filled
from thermal.case.locate import Path as Where
from thermal.case.locate import lines_of
from thermal.case.naming import stages_in_words
from thermal.case.problems import Places, Problem, problems_of
from thermal.case.schema import CaseFile
from thermal.case.write import to_toml
from thermal.errors import CaseError

LISTS = ("schedule", "reading")
"""Tables there may be several of."""

_NOTHING: Mapping[str, object] = {}


def load_case(
    path: str | Path, overrides: Mapping[str, object] = _NOTHING, *, materials: str | Path | None = None
) -> Case:
    """The case in a TOML file.

    Parameters
    ----------
    path : path
        The file; materials it names are looked for beside it.
    overrides : mapping
        Dotted path -> value, set before anything is checked: {"supply.power": "80 kW",
        "schedule.0.longest": "60 s"}. Texts that are a TOML number, list or table are taken as such.
    materials : path or None
        Folder of your own materials, linings and gases, beside the shipped ones; see materials/data/README.md.

    Raises
    ------
    CaseError
        The folder cannot be used, the file cannot be read, or there are mistakes in it; all of them at once.
    """
    path = Path(path)
    try:
        text = toml_text.read(path)
    except FileNotFoundError:
        raise CaseError(f"{path}: there is no such case file") from None
    except OSError as error:
        raise CaseError(f"{path}: cannot be read ({error.strerror})") from None
    except toml_text.TextError as error:
        raise CaseError(_at_line(error.line, f"{path}: {error}")) from None
    return from_text(text, path.parent, overrides, name=one_line(path.stem), materials=materials)


def from_text(
    text: str,
    folder: str | Path,
    overrides: Mapping[str, object] = _NOTHING,
    *,
    name: str = "case",
    materials: str | Path | None = None,
) -> Case:
    """The case in a TOML text.

    Parameters
    ----------
    text : str
        The TOML text.
    folder : path
        Where materials named in the case are looked for.
    overrides : mapping
        As for load_case.
    name : str
        What the results are named after.
    materials : path or None
        As for load_case.

    Raises
    ------
    CaseError
        The folder of materials cannot be used, or there are mistakes in it; all of them at once.
    """
    try:
        library = Library.of(materials)
    except MaterialError as error:
        raise CaseError(str(error)) from None
    document, paths = _with_overrides(_parsed(text), overrides)
    full, taken = filled(document)

    def refusal(problems: list[Problem]) -> CaseError:
        places = Places(lines_of(text), paths, stages_in_words(full))
        return CaseError(*places.finished(problems, _mistakes_of_file(text, folder, paths, materials)))

    try:
        sections = CaseFile.model_validate(full)
    except ValidationError as error:
        raise refusal(problems_of(error, full)) from None
    own = own_files(sections, library)
    if own:
        for dotted, file in own.items():
            _set(full, dotted, file)
        sections = CaseFile.model_validate(full)
    case = Case(
        name=name,
        folder=Path(folder),
        text=text,
        overrides=tuple({**overrides, **own}.items()),
        defaults_used=taken,
        materials=None if materials is None else Path(materials).absolute(),
        format=sections.format,
        title=sections.title,
        workpiece=sections.workpiece,
        coil=sections.coil,
        lining=sections.lining,
        supply=sections.supply,
        surroundings=sections.surroundings,
        schedule=sections.schedule,
        readings=sections.reading,
        numerics=sections.numerics,
        output=sections.output,
    )
    problems = [*check_sections(sections), *check_against_materials(case)]
    if problems:
        raise refusal(problems)
    return case


def with_changes(case: Case, changes: Mapping[str, object]) -> Case:
    """The same case with some values changed, checked again.

    Parameters
    ----------
    case : Case
        Left as it is.
    changes : mapping
        Dotted path -> value, as the overrides of load_case; they come after those the case has.

    Raises
    ------
    CaseError
        The changed case has mistakes.
    """
    kept = {path: value for path, value in case.overrides if path not in changes}
    return from_text(case.text, case.folder, {**kept, **changes}, name=case.name, materials=case.materials)


def as_run(case: Case) -> str:
    """TOML text of the case with its overrides in place: the file itself where nothing was overridden."""
    if not case.overrides:
        return case.text
    document, _ = _with_overrides(_parsed(case.text), dict(case.overrides))
    return to_toml(document)


def _mistakes_of_file(
    text: str, folder: str | Path, paths: tuple[Where, ...], materials: str | Path | None
) -> tuple[str, ...]:
    """Mistakes there are without the overrides; none are looked for where nothing was overridden."""
    if paths:
        try:
            from_text(text, folder, materials=materials)
        except CaseError as error:
            return error.problems
    return ()


def _parsed(text: str) -> dict[str, Any]:
    try:
        return toml_text.parsed(text, LISTS)
    except toml_text.TextError as error:
        raise CaseError(_at_line(error.line, str(error))) from None


def _at_line(line: int | None, sentence: str) -> str:
    return sentence if line is None else f"{f'line {line}':<9}{sentence}"


def _with_overrides(
    document: dict[str, Any], overrides: Mapping[str, object]
) -> tuple[dict[str, Any], tuple[Where, ...]]:
    """A copy of the document with values set by dotted path, and those paths."""
    document = copy.deepcopy(document)
    paths: list[Where] = []
    problems: list[str] = []
    for dotted, value in overrides.items():
        try:
            paths.append(_set(document, dotted, _value(value)))
        except CaseError as error:
            problems.extend(error.problems)
        except toml_text.TextError as error:
            problems.append(f"{'--set':<9}{dotted}: {error}")
    if problems:
        raise CaseError(*problems)
    return document, tuple(paths)


def _set(document: dict[str, Any], dotted: str, value: object) -> Where:
    """Set one value; tables on the way are made, list entries must exist."""
    path: Where = ()
    here: Any = document
    keys = dotted.split(".")
    if "" in keys or len(keys) > toml_text.DEEPEST:
        raise CaseError(f"{'--set':<9}'{dotted}' is not the path of a key, write it like supply.power")
    for key in keys:
        last = len(path) == len(keys) - 1
        outer = ".".join(str(part) for part in path)
        if isinstance(here, list):
            if not (key.isdecimal() and len(key) < 10 and int(key) < len(here)):
                known = f"write a number from 0 to {len(here) - 1}" if here else "it is empty"
                raise CaseError(f"{'--set':<9}{dotted}: {outer} is a list without '{key}', {known}")
            index = int(key)
            path = (*path, index)
            if last:
                here[index] = value
            else:
                here = here[index]
        elif isinstance(here, dict):
            path = (*path, key)
            if last:
                here[key] = value
            else:
                here = here.setdefault(key, {})
        else:
            raise CaseError(f"{'--set':<9}{dotted}: {outer} is a value, not a table with keys")
    return path


def _value(value: object) -> object:
    """A text that is a TOML number, list or table as that; any other text as it is."""
    if not isinstance(value, str):
        return value
    try:
        document = toml_text.parsed(f"value = {value}")
    except toml_text.NotToml:
        return value
    return document["value"] if list(document) == ["value"] else value
