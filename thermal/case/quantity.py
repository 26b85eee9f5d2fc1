"""Field types of the case file: a text with a unit becomes an SI float, a bare number is refused."""

import re
from collections.abc import Callable
from typing import Annotated

from pydantic import BeforeValidator

from materials.units import accepted, display, quantity

LONGEST_TITLE = 500
"""Characters of a title."""

_SLACK = 1e-9
"""Relative rounding of a conversion of units."""


def shown(value: float, unit: str) -> str:
    """An SI value in words for a sentence, "25 mm" for 0.025 and "mm"."""
    return f"{display(value, unit):.6g} {unit}"


def read_value(value: object) -> str:
    """A value of the file in a sentence."""
    if isinstance(value, dict):
        return "a table"
    if isinstance(value, list):
        return "a list"
    return f"'{str(value).lower() if isinstance(value, bool) else value}'"


def _amount(value: object, dimension: str) -> float:
    """SI value of a text with a unit; a number without one is refused by the unit table itself."""
    if isinstance(value, str):
        return quantity(value, dimension)
    if isinstance(value, int | float) and not isinstance(value, bool):
        return quantity(repr(value), dimension)
    raise ValueError(
        f"{read_value(value)} is not a number with its unit, write both in quotes (units: {accepted(dimension)})"
    )


def _within(dimension: str, lowest: str, highest: str, *, zero: bool = False) -> Callable[[object], float]:
    """Reader of a value in a range, given in words; with zero=True the value may be zero as well."""
    low, high = quantity(lowest, dimension), quantity(highest, dimension)

    def read(value: object) -> float:
        amount = _amount(value, dimension)
        if amount < 0.0 and zero:
            raise ValueError(f"'{value}' must not be negative")
        if amount <= 0.0 and not zero and low > 0.0:
            raise ValueError(f"'{value}' must be above zero")
        if not low * (1.0 - _SLACK) <= amount <= high * (1.0 + _SLACK) and amount != 0.0:
            raise ValueError(f"'{value}' is out of range, {lowest} to {highest} can be computed")
        return amount

    return read


def _emissivity(value: object) -> float:
    amount = _amount(value, "ratio")
    if not 0.0 < amount <= 1.0:
        raise ValueError(f"'{value}' is not an emissivity, it lies above 0 and up to 1")
    return amount


def _turns(value: object) -> float:
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise ValueError(f"{read_value(value)} is not a number of turns, write a plain number like 18 (7.5 is fine)")
    if not 0.1 <= value <= 10_000:
        raise ValueError(f"{value} turns: the number of turns must be from 0.1 to 10000")
    return float(value)


def _title(value: object) -> object:
    if isinstance(value, str) and not (value.isprintable() and len(value) <= LONGEST_TITLE):
        raise ValueError(f"must be one line of at most {LONGEST_TITLE} characters that can be printed")
    return value


def _opening(value: object) -> tuple[float, float]:
    parts = re.split(r"\s*[x×]\s*", value.strip()) if isinstance(value, str) else []
    if len(parts) != 2:
        raise ValueError(f'{read_value(value)} is not an opening, write width x height like "120 x 40 mm"')
    width, height = parts
    if re.fullmatch(r"[0-9.eE+-]+", width):
        width += re.sub(r"^[0-9.eE+-]+", "", height)
    read = _LENGTH
    return read(width), read(height)


# The ranges keep out slips of the pen by many powers of ten, and what the equations are not made for: below a
# micrometre no metal is a continuum of known resistivity, above 100 MHz the coil is no lumped circuit, below 1 Hz the
# heat of one period does not average out, beyond 100 m/s gas is compressible (from memory).
_LENGTH = _within("length", "1 um", "100 m")

Length = Annotated[float, BeforeValidator(_LENGTH)]
"""[m], above zero."""
Depth = Annotated[float, BeforeValidator(_within("length", "0 mm", "100 m", zero=True))]
"""[m], zero allowed."""
Time = Annotated[float, BeforeValidator(_within("time", "1 us", "10000 h"))]
"""[s], above zero."""
ResponseTime = Annotated[float, BeforeValidator(_within("time", "1 ms", "10000 h"))]
"""[s] of a control, above zero."""
Moment = Annotated[float, BeforeValidator(_within("time", "0 s", "10000 h", zero=True))]
"""[s] since the start, zero allowed."""
Temperature = Annotated[float, BeforeValidator(_within("temperature", "0 K", "4000 K"))]
"""[K], absolute."""
TemperatureDifference = Annotated[float, BeforeValidator(_within("temperature_difference", "0.001 K", "4000 K"))]
"""[K], above zero."""
Tolerance = Annotated[float, BeforeValidator(_within("temperature_difference", "0.0001 K", "10 K"))]
"""[K] error allowed in a step, above zero."""
Power = Annotated[float, BeforeValidator(_within("power", "1 mW", "1000 MW"))]
"""[W], above zero."""
Frequency = Annotated[float, BeforeValidator(_within("frequency", "1 Hz", "100 MHz"))]
"""[Hz], above zero."""
Current = Annotated[float, BeforeValidator(_within("current", "1 mA", "1000 kA"))]
"""[A] rms, above zero."""
Voltage = Annotated[float, BeforeValidator(_within("voltage", "1 mV", "1000 kV"))]
"""[V] rms, above zero."""
Field = Annotated[float, BeforeValidator(_within("magnetic_field", "1 A/m", "10000 kA/m"))]
"""[A/m] rms, above zero."""
HeatTransfer = Annotated[float, BeforeValidator(_within("heat_transfer", "0 W/(m2 K)", "1000 kW/(m2 K)", zero=True))]
"""[W/(m2 K)], zero allowed."""
Speed = Annotated[float, BeforeValidator(_within("speed", "0 m/s", "100 m/s", zero=True))]
"""[m/s], zero allowed."""
Resistance = Annotated[float, BeforeValidator(_within("resistance", "0 ohm", "1 kohm", zero=True))]
"""[ohm], zero allowed."""
Inductance = Annotated[float, BeforeValidator(_within("inductance", "0 H", "1 H", zero=True))]
"""[H], zero allowed."""
Emissivity = Annotated[float, BeforeValidator(_emissivity)]
"""[-], above 0 and up to 1; a bare number or a percentage."""
Turns = Annotated[float, BeforeValidator(_turns)]
"""[-], a plain number above zero."""
Opening = Annotated[tuple[float, float], BeforeValidator(_opening)]
"""Width and height [m] of a rectangular coil opening."""
Title = Annotated[str, BeforeValidator(_title)]
"""One printable line."""
