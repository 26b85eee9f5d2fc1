"""Reading a case file: TOML, overrides, defaults, schema, checks; every mistake with its line."""

import copy
import re
import tomllib
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from pydantic import ValidationError

from thermal.case.against_materials import check_against_materials
from thermal.case.case import Case
from thermal.case.checks import check_sections
from thermal.case.defaults import filled
from thermal.case.locate import Path as Where
from thermal.case.locate import lines_of
from thermal.case.naming import stages_in_words
from thermal.case.problems import Places, brackets, problems_of
from thermal.case.schema import CaseFile
from thermal.case.write import to_toml
from thermal.errors import CaseError

LISTS = ("schedule", "reading")
"""Tables there may be several of."""
QUOTES = "\"'"

_NOTHING: Mapping[str, object] = {}


def load_case(path: str | Path, overrides: Mapping[str, object] = _NOTHING) -> Case:
    """The case in a TOML file.

    Parameters
    ----------
    path : path
        The file; materials it names are looked for beside it.
    overrides : mapping
        Dotted path -> value, set before anything is checked: {"supply.power": "80 kW",
        "schedule.0.longest": "60 s"}. Texts that are a TOML number, list or table are taken as such.

    Raises
    ------
    CaseError
        The file cannot be read, or there are mistakes in it; all of them at once.
    """
    path = Path(path)
    try:
        raw = path.read_bytes()
    except FileNotFoundError:
        raise CaseError(f"{path}: there is no such case file") from None
    except OSError as error:
        raise CaseError(f"{path}: cannot be read ({error.strerror})") from None
    try:
        text = raw.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = raw.count(b"\n", 0, error.start) + 1
        raise CaseError(f"{f'line {line}':<9}{path}: is not UTF-8 text, save it as UTF-8") from None
    return from_text(text, path.parent, overrides, name=path.stem)


def from_text(text: str, folder: str | Path, overrides: Mapping[str, object] = _NOTHING, *, name: str = "case") -> Case:
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

    Raises
    ------
    CaseError
        There are mistakes in it; all of them at once.
    """
    document, paths = _with_overrides(_parsed(text), overrides)
    full, taken = filled(document)
    places = Places(lines_of(text), paths, stages_in_words(full))
    try:
        sections = CaseFile.model_validate(full)
    except ValidationError as error:
        raise CaseError(*places.finished(problems_of(error, full), _mistakes_of_file(text, folder, paths))) from None
    case = Case(
        name=name,
        folder=Path(folder),
        text=text,
        overrides=tuple(overrides.items()),
        defaults_used=taken,
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
        raise CaseError(*places.finished(problems, _mistakes_of_file(text, folder, paths)))
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
    return from_text(case.text, case.folder, {**dict(case.overrides), **changes}, name=case.name)


def as_run(case: Case) -> str:
    """TOML text of the case with its overrides in place: the file itself where nothing was overridden."""
    if not case.overrides:
        return case.text
    document, _ = _with_overrides(_parsed(case.text), dict(case.overrides))
    return to_toml(document)


def _mistakes_of_file(text: str, folder: str | Path, paths: tuple[Where, ...]) -> tuple[str, ...]:
    """Mistakes there are without the overrides; none are looked for where nothing was overridden."""
    if paths:
        try:
            from_text(text, folder)
        except CaseError as error:
            return error.problems
    return ()


def _parsed(text: str) -> dict[str, Any]:
    try:
        return tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise CaseError(_broken(text, str(error))) from None


def _broken(text: str, message: str) -> str:
    """What is wrong with a text that is no TOML, in the words of someone who edits a case."""
    found = re.fullmatch(r"(.*) \(at line (\d+), column \d+\)", message)
    lines = text.split("\n")
    number = int(found.group(2)) if found else len(lines)
    reason = found.group(1) if found else message.removesuffix(" (at end of document)")
    second = re.fullmatch(r"Cannot declare \('(\w+)',\) twice", reason)
    open_quotes = [n for n, line in enumerate(lines, 1) if _has_open_quote(line)]
    unquoted = re.match(r"\s*([\w.-]+)\s*=\s*([^\s\"'\[{#][^#]*?)\s*(#.*)?$", lines[number - 1])
    where = f"{f'line {number}':<9}"
    if second:
        name = second.group(1)
        return where + (brackets(name) if name in LISTS else f"the table [{name}] is given a second time")
    if reason == "Cannot overwrite a value" and lines[number - 1].lstrip().startswith("[["):
        return f"{where}write every one of them with two brackets: {lines[number - 1].strip()}"
    if unquoted and reason != "Cannot overwrite a value":
        return f'{where}{unquoted.group(1)}: put the value in quotes: "{unquoted.group(2).rstrip(QUOTES)}"'
    if number in open_quotes or (open_quotes and "at end of document" in message):
        number = number if number in open_quotes else open_quotes[0]
        return f"{f'line {number}':<9}a closing quote is missing: {lines[number - 1].strip()}"
    if reason == "Cannot overwrite a value":
        return f"{where}this key is given a second time: {lines[number - 1].strip()}"
    return f"{where}this is not TOML: {reason[:1].lower()}{reason[1:]}"


def _has_open_quote(line: str) -> bool:
    return line.count('"') % 2 == 1 or ('"' not in line and line.count("'") % 2 == 1)


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
    if problems:
        raise CaseError(*problems)
    return document, tuple(paths)


def _set(document: dict[str, Any], dotted: str, value: object) -> Where:
    """Set one value; tables on the way are made, list entries must exist."""
    path: Where = ()
    here: Any = document
    keys = dotted.split(".")
    if "" in keys:
        raise CaseError(f"{'--set':<9}'{dotted}' is not the path of a key, write it like supply.power")
    for key in keys:
        last = len(path) == len(keys) - 1
        outer = ".".join(str(part) for part in path)
        if isinstance(here, list):
            if not key.isdecimal() or int(key) >= len(here):
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
        return tomllib.loads(f"value = {value}")["value"]
    except (tomllib.TOMLDecodeError, KeyError):
        return value
