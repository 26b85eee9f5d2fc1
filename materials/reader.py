"""Checked access to a data file: every refusal names the file and the key."""

import difflib
import math
from collections.abc import Iterable
from typing import NoReturn

import numpy as np

from materials.curve import Array
from materials.errors import MaterialError, UnitError
from materials.units import accepted, display, is_unit_of, quantity


class Section:
    """One table of a TOML file. Values are taken out by key; what is left at the end is an unknown key."""

    def __init__(self, where: str, path: str, values: dict[str, object]) -> None:
        self._where = where
        self._path = path
        self._values = values
        self._asked: dict[str, None] = {}  # a set that keeps its order

    def refuse(self, key: str, problem: str) -> NoReturn:
        """Raise a MaterialError about a key of this table ("" for the table itself)."""
        path = ".".join(part for part in (self._path, key) if part)
        raise MaterialError(f"{self._where}: {path}: {problem}" if path else f"{self._where}: {problem}")

    def has(self, key: str) -> bool:
        """Whether the key is present."""
        self._asked[key] = None
        return key in self._values

    def text(self, key: str, default: str | None = None) -> str:
        """Text of a key; refused where it is missing without a default, or no text."""
        if not self.has(key) and default is not None:
            return default
        value = self._take(key, "missing")
        if not isinstance(value, str) or not (value.strip() or default is not None):
            self.refuse(key, "must be a text in quotes")
        return value.strip()

    def choice(self, key: str, allowed: Iterable[str], default: str | None = None) -> str:
        """Text of a key that must be one of a few words."""
        words = list(allowed)
        value = self.text(key, default)
        if value not in words:
            self.refuse(key, f"'{value}' is not one of {', '.join(words)}")
        return value

    def flag(self, key: str) -> bool:
        """Truth value of a key, False where it is missing."""
        value = self._take(key) if self.has(key) else False
        if not isinstance(value, bool):
            self.refuse(key, "must be true or false")
        return value

    def texts(self, key: str) -> tuple[str, ...]:
        """List of texts, empty where it is missing."""
        value = self._take(key) if self.has(key) else []
        if not isinstance(value, list) or not all(isinstance(item, str) for item in value):
            self.refuse(key, "must be a list of texts")
        return tuple(value)

    def quantity(self, key: str, dimension: str) -> float:
        """SI value of a key such as "1430 °C"; a ratio may be a bare number."""
        value = self._take(key, "missing")
        if isinstance(value, bool) or not isinstance(value, (str, int, float)):
            self.refuse(key, "must be a number with its unit, in quotes")
        try:
            return quantity(str(value), dimension)
        except UnitError as error:
            self.refuse(key, str(error))

    def array(self, key: str, dimension: str, unit_key: str) -> Array:
        """Array of numbers (k,) in SI; their unit stands under `unit_key`."""
        value = self._take(key, "missing")
        if (
            not isinstance(value, list)
            or not value
            or any(isinstance(item, bool) or not isinstance(item, (int, float)) for item in value)
        ):
            self.refuse(key, "must be a list of numbers, at least one")
        if not all(map(math.isfinite, value)):
            self.refuse(key, "every entry must be a finite number")
        unit = self.unit(unit_key, dimension)
        try:
            return np.array([quantity(f"{number!r} {unit}", dimension) for number in value])
        except UnitError as error:
            self.refuse(key, str(error))

    def unit(self, key: str, dimension: str) -> str:
        """Unit under a key, checked against the dimension."""
        if not self.has(key):
            self.refuse(key, f"missing, write the unit of the numbers ({accepted(dimension)})")
        unit = self.text(key)
        if not is_unit_of(unit, dimension):
            self.refuse(key, f"'{unit}' does not fit here (accepted: {accepted(dimension)})")
        return unit

    def rising(self, key: str, values: Array, unit: str) -> None:
        """Refuse values that do not rise from one to the next."""
        fall = np.flatnonzero(np.diff(values) <= 0.0)
        if fall.size:
            first, second = (display(float(values[fall[0] + k]), unit) for k in (0, 1))
            self.refuse(key, f"must rise from value to value, {second:.6g} {unit} follows {first:.6g} {unit}")

    def section(self, key: str) -> "Section":
        """Table under a key, refused where it is missing."""
        return self._section(key, self._take(key, "missing table"))

    def sections(self, key: str) -> list[tuple[str, "Section"]]:
        """Named tables under a key ([key.name]), empty where there are none."""
        if not self.has(key):
            return []
        outer = self._section(key, self._take(key))
        return [(name, outer._section(name, value)) for name, value in outer._values.items()]

    def done(self) -> None:
        """Refuse keys that nobody asked for."""
        for key in self._values:
            if key not in self._asked:
                near = difflib.get_close_matches(key, self._asked, n=1)
                hint = f", did you mean '{near[0]}'?" if near else f" (known: {', '.join(self._asked)})"
                self.refuse(key, f"unknown key{hint}")

    def _section(self, key: str, value: object) -> "Section":
        if not isinstance(value, dict):
            self.refuse(key, "must be a table")
        return Section(self._where, f"{self._path}.{key}" if self._path else key, value)

    def _take(self, key: str, problem: str = "") -> object:
        if not self.has(key):
            self.refuse(key, problem)
        return self._values[key]
