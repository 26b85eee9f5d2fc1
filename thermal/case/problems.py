"""Mistakes in a case file as finished lines: where, what was read, what is allowed, what is near."""

import difflib
import sys
from typing import Any

from pydantic import BaseModel, ValidationError
from pydantic_core import ErrorDetails

from materials.toml_text import brackets
from thermal.case import schema
from thermal.case.locate import Path, line_of
from thermal.case.quantity import read_value

_STAGES: dict[str, type[BaseModel]] = {
    "heat": schema.Heat,
    "hold": schema.Hold,
    "transfer": schema.Transfer,
}
_SHAPES: dict[str, type[BaseModel]] = {
    "cylinder": schema.Cylinder,
    "tube": schema.Tube,
    "plate": schema.Plate,
}
_TABLES: dict[str, type[BaseModel]] = {
    "coil": schema.CoilSection,
    "lining": schema.LiningSection,
    "supply": schema.SupplySection,
    "surroundings": schema.SurroundingsSection,
    "numerics": schema.NumericsSection,
    "output": schema.OutputSection,
}
_OTHER_WORDS = {"soak": "hold", "dwell": "hold"}
"""What others call a stage."""
_EXAMPLES = {
    "format": "format = 1",
    "workpiece": "a [workpiece] table",
    "schedule": "a [[schedule]] table",
    "shape": 'shape = "cylinder"',
    "stage": 'stage = "heat"',
    "material": 'material = "steel-c45"',
    "drive": 'drive = { supply_power = "60 kW" }',
    "at": 'at = { surface = "1150 °C" }',
    "turns": "turns = 18",
    "tube": 'tube = "10 mm"',
    "wall": 'wall = "5 mm"',
    "thickness": 'thickness = "20 mm"',
    "depth": 'depth = "5 mm"',
    "name": 'name = "TC1"',
    "duration": 'duration = "10 s"',
    "power": 'power = "60 kW"',
    "frequency": 'frequency = "3 kHz"',
}


Problem = tuple[Path, str]
"""Path of the key and what is wrong with it."""

MOST = 50
"""Mistakes that are told; a file with more is not what somebody meant to write."""

_LAST = sys.maxsize
"""Stands for the line of what is nowhere in the file."""


class Places:
    """Where a path was written: its line in the file, or the override that set it.

    Parameters
    ----------
    lines : path -> line of the file.
    overridden : paths that were set from outside the file.
    stages : what the stages are called.
    """

    def __init__(self, lines: dict[Path, int], overridden: tuple[Path, ...], stages: tuple[str, ...]) -> None:
        self._lines = lines
        self._overridden = overridden
        self._stages = stages

    def finished(self, problems: list[Problem], of_file: tuple[str, ...]) -> list[str]:
        """Lines like "line 7   workpiece.diameter: ...", overrides first, then in the order of the file; 50 at most.

        of_file : lines of the mistakes there are without the overrides.
        """
        found = [self._finished(problem, of_file) for problem in problems[:MOST]]
        told = [line for _, line in sorted(found, key=lambda entry: entry[0])]
        return (
            told if len(problems) <= MOST else [*told, "there are more mistakes, they are told once these are mended"]
        )

    def _finished(self, problem: Problem, of_file: tuple[str, ...]) -> tuple[int, str]:
        path, sentence = problem
        text = f"{'.'.join(str(part) for part in path)}{self._stage(path)}: {sentence}"
        line = line_of(path, self._lines)
        told = text if line is None else f"{f'line {line}':<9}{text}"
        # A table with a value set in it may be wrong because of that value, or have been wrong before.
        inside = told not in of_file and any(over[: len(path)] == path for over in self._overridden)
        if inside or any(path[: len(over)] == over for over in self._overridden):
            return 0, f"{'--set':<9}{text}"
        return (_LAST if line is None else line), told

    def _stage(self, path: Path) -> str:
        """Name of the stage a path leads into, in brackets."""
        match path:
            case ("schedule", int(index), *_) if self._stages[index]:
                return f" ({self._stages[index]})"
            case _:
                return ""


def near(word: str, known: list[str]) -> str:
    """The end of a refusal: the nearest known word, or all of them."""
    nearest = _nearest(word, known)
    return f"did you mean '{nearest}'?" if nearest else f"known here: {', '.join(known)}"


def _nearest(word: str, known: list[str]) -> str | None:
    """Known word that looks like it; upper and lower case count as the same."""
    folded = {name.casefold(): name for name in known}
    hits = difflib.get_close_matches(word.casefold(), list(folded), n=1)
    return folded[hits[0]] if hits else None


def problems_of(error: ValidationError, document: dict[str, Any]) -> list[Problem]:
    """Path and sentence of every mistake the schema found, of the first fifty or so if there are many.

    Parameters
    ----------
    error : ValidationError
        What the schema raised.
    document : dict
        What was validated, to name the keys a table of that kind may have.
    """
    found = error.errors(include_url=False)[: 2 * MOST]
    misspelt = {
        (*path[:-1], _nearest(str(path[-1]), _allowed(path[:-1], document)))
        for path in (_without_tags(one["loc"]) for one in found if one["type"] == "extra_forbidden")
    }
    return [
        _translated(one, document)
        for one in found
        if not (one["type"] == "missing" and _without_tags(one["loc"]) in misspelt)
    ]


def _translated(details: ErrorDetails, document: dict[str, Any]) -> Problem:
    path = _without_tags(details["loc"])
    context = details.get("ctx", {})
    value = details["input"]
    match details["type"]:
        case "case":
            key = context["key"]
            return (path if key is None else (*path, key)), context["sentence"]
        case "value_error":
            return path, str(context["error"])
        case "missing":
            return path, _missing(path)
        case "extra_forbidden":
            return path, f"unknown key, {near(str(path[-1]), _allowed(path[:-1], document))}"
        case "union_tag_invalid" | "union_tag_not_found":
            tag = context["discriminator"].strip("'")
            known = list(_SHAPES if tag == "shape" else _STAGES)
            if not isinstance(value, dict):
                return path, f"{read_value(value)} is not a table of keys"
            if tag not in value:
                return (*path, tag), _missing((*path, tag))
            word = str(value[tag]).casefold()
            return (*path, tag), f"{read_value(value[tag])} is not a {tag}, {near(_OTHER_WORDS.get(word, word), known)}"
        case "literal_error":
            accepted = context["expected"].replace("'", "").replace(" or ", ", ")
            return path, f"{read_value(value)} is not accepted (accepted: {accepted})"
        case "model_type" | "model_attributes_type" | "dict_type":
            return path, f"{read_value(value)} is not a table of keys"
        case "tuple_type":
            if len(path) == 1 and isinstance(value, dict):
                return path, brackets(str(path[0]))
            return path, f"{read_value(value)} is not a list" + (
                f", {brackets(str(path[0]))}" if len(path) == 1 else ""
            )
        case "string_type":
            return path, f"{read_value(value)} is not a text, put it in quotes"
        case _:
            return path, details["msg"]


def _without_tags(loc: tuple[int | str, ...]) -> Path:
    """Path as written in the file: without the tag of a shape or stage that the schema puts in."""
    if loc[0] == "workpiece" and len(loc) > 1:
        return (loc[0], *loc[2:])
    if loc[0] == "schedule" and len(loc) > 2:
        return (*loc[:2], *loc[3:])
    return loc


def _missing(path: Path) -> str:
    key = str(path[-1])
    example = _EXAMPLES.get(key, f'{key} = "50 mm"')
    return f"missing, write for example {example}"


def _allowed(path: Path, document: dict[str, Any]) -> list[str]:
    """Keys the table at a path may have."""
    model: type[BaseModel]
    match path:
        case ():
            model = schema.CaseFile
        case ("workpiece",):
            model = _SHAPES[document["workpiece"]["shape"]]
        case ("schedule", int(index)):
            model = _STAGES[document["schedule"][index]["stage"]]
        case ("reading", int()):
            model = schema.Reading
        case ("schedule", int(), "drive"):
            model = schema.Drive
        case _:
            model = _TABLES[str(path[0])]
    return list(model.model_fields)
