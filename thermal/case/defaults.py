"""Everything a case file may leave out, the value that is then taken, and why."""

from dataclasses import dataclass
from typing import Any

from thermal.case.naming import stages_in_words

COMMON_PRACTICE = "common practice"
ASSUMPTION = "assumption"


@dataclass(frozen=True, slots=True)
class Default:
    """One key that may be missing.

    value : as it would stand in the file; None where no value is filled in and `words` says what happens.
    kind, reason : common practice or assumption, and what it means.
    unless : keys of the same table that make this one pointless.
    """

    table: str
    key: str
    value: str | int | None
    kind: str
    reason: str
    words: str = ""
    unless: tuple[str, ...] = ()

    def line(self, path: str) -> str:
        """The sentence for the list of assumptions; path: "lining." or "schedule.1 (hold): "."""
        return f"{path}{self.key} = {self.words or self.value} ({self.kind}: {self.reason})"


DEFAULTS = (
    Default("workpiece", "initial", "20 °C", COMMON_PRACTICE, "stock at room temperature"),
    Default("workpiece", "neighbours", "none", ASSUMPTION, "alone in the coil, the end faces lose heat as well"),
    Default("workpiece", "axis", "horizontal", ASSUMPTION, "direction of natural convection"),
    Default(
        "coil",
        "wall",
        None,
        COMMON_PRACTICE,
        "1.5 skin depths of copper, rounded up to 0.5 mm, from 1 mm to a quarter of the tube",
        words="by rule",
    ),
    Default("coil", "temperature", "50 °C", COMMON_PRACTICE, "water-cooled bore as the workpiece sees it"),
    Default("coil", "leads_resistance", "0 ohm", ASSUMPTION, "leads are left out"),
    Default("coil", "leads_inductance", "0 H", ASSUMPTION, "leads are left out"),
    Default("lining", "material", "castable-alumina", COMMON_PRACTICE, "cast-in coil lining"),
    Default("lining", "emissivity", None, COMMON_PRACTICE, "as published with the material", words="by material"),
    Default("supply", "max_current", None, ASSUMPTION, "no limit on the coil current", words="none"),
    Default("supply", "max_voltage", None, ASSUMPTION, "no limit on the coil voltage", words="none"),
    Default("surroundings", "temperature", "20 °C", COMMON_PRACTICE, "shop at room temperature"),
    Default("surroundings", "gas", "air", COMMON_PRACTICE, "no protective gas"),
    Default("surroundings", "speed", "0 m/s", ASSUMPTION, "still gas, natural convection", unless=("h",)),
    Default("numerics", "dimensions", 1, ASSUMPTION, "heat flows through the section, not along the length"),
    Default("numerics", "tolerance", "0.1 K", COMMON_PRACTICE, "error allowed in one time step"),
    Default("numerics", "refinement", 1, COMMON_PRACTICE, "cells as planned from the skin depth"),
)
"""Defaults of the tables that stand once."""

HOLD_DEFAULTS = (
    Default("hold", "response", "0.5 s", ASSUMPTION, "reaction time of the temperature control"),
    Default("hold", "reset", "2 s", ASSUMPTION, "integral time of the temperature control"),
)
"""Defaults of every hold stage."""

_ALWAYS = ("surroundings", "numerics")
"""Tables that exist even when the file leaves them out."""


def filled(document: dict[str, Any]) -> tuple[dict[str, Any], tuple[str, ...]]:
    """A copy of the document with every default filled in, and one line for each that was taken.

    Parameters
    ----------
    document : dict
        As read from TOML; what should be a table and is not is left for the schema to refuse.
    """
    full = {"output": {}, **{name: {} for name in _ALWAYS}, **document}
    lines: list[str] = []
    for name in dict.fromkeys(default.table for default in DEFAULTS):
        if isinstance(full.get(name), dict):
            full[name] = _completed(
                full[name], f"{name}.", tuple(default for default in DEFAULTS if default.table == name), lines
            )
    stages = full.get("schedule")
    if isinstance(stages, list):
        full["schedule"] = [
            _completed(stage, f"schedule.{index} ({name}): ", HOLD_DEFAULTS, lines)
            if isinstance(stage, dict) and stage.get("stage") == "hold"
            else stage
            for index, (stage, name) in enumerate(zip(stages, stages_in_words(full), strict=True))
        ]
    return full, tuple(lines)


def _completed(table: dict[str, Any], path: str, defaults: tuple[Default, ...], lines: list[str]) -> dict[str, Any]:
    done = dict(table)
    for default in defaults:
        if default.key in table or any(key in table for key in default.unless):
            continue
        if default.value is not None:
            done[default.key] = default.value
        lines.append(default.line(path))
    return done
