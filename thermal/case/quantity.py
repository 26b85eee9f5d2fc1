"""Field types of the case file: a text with a unit becomes an SI float, a bare number is refused."""

import math
import re
from collections.abc import Callable
from typing import Annotated

from pydantic import BeforeValidator

from materials.units import display, quantity


def shown(value: float, unit: str) -> str:
    """An SI value in words for a sentence, "25 mm" for 0.025 and "mm"."""
    return f"{display(value, unit):.6g} {unit}"


def _amount(value: object, dimension: str) -> float:
    """SI value of a text with a unit; a number without one is refused by the unit table itself."""
    if isinstance(value, str):
        return quantity(value, dimension)
    if isinstance(value, int | float) and not isinstance(value, bool):
        return quantity(repr(value), dimension)
    raise ValueError('write a number with its unit in quotes, like "50 mm"')


def _any(dimension: str) -> Callable[[object], float]:
    return lambda value: _amount(value, dimension)


def _positive(dimension: str) -> Callable[[object], float]:
    def read(value: object) -> float:
        amount = _amount(value, dimension)
        if amount <= 0.0:
            raise ValueError(f"'{value}' must be above zero")
        return amount

    return read


def _not_negative(dimension: str) -> Callable[[object], float]:
    def read(value: object) -> float:
        amount = _amount(value, dimension)
        if amount < 0.0:
            raise ValueError(f"'{value}' must not be negative")
        return amount

    return read


def _emissivity(value: object) -> float:
    amount = _amount(value, "ratio")
    if not 0.0 < amount <= 1.0:
        raise ValueError(f"'{value}' is not an emissivity, it lies above 0 and up to 1")
    return amount


def _turns(value: object) -> float:
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise ValueError(f"'{value}' is not a number of turns, write a plain number like 18 (7.5 is fine)")
    if not (value > 0 and math.isfinite(value)):
        raise ValueError(f"{value} turns: the number of turns must be finite and above zero")
    return float(value)


def _opening(value: object) -> tuple[float, float]:
    parts = re.split(r"\s*[x×]\s*", value.strip()) if isinstance(value, str) else []
    if len(parts) != 2:
        raise ValueError(f"'{value}' is not an opening, write width x height like \"120 x 40 mm\"")
    width, height = parts
    if re.fullmatch(r"[0-9.eE+-]+", width):
        width += re.sub(r"^[0-9.eE+-]+", "", height)
    read = _positive("length")
    return read(width), read(height)


Length = Annotated[float, BeforeValidator(_positive("length"))]
"""[m], above zero."""
Depth = Annotated[float, BeforeValidator(_not_negative("length"))]
"""[m], zero allowed."""
Time = Annotated[float, BeforeValidator(_positive("time"))]
"""[s], above zero."""
Moment = Annotated[float, BeforeValidator(_not_negative("time"))]
"""[s] since the start, zero allowed."""
Temperature = Annotated[float, BeforeValidator(_any("temperature"))]
"""[K], absolute."""
TemperatureDifference = Annotated[float, BeforeValidator(_positive("temperature_difference"))]
"""[K], above zero."""
Power = Annotated[float, BeforeValidator(_positive("power"))]
"""[W], above zero."""
Frequency = Annotated[float, BeforeValidator(_positive("frequency"))]
"""[Hz], above zero."""
Current = Annotated[float, BeforeValidator(_positive("current"))]
"""[A] rms, above zero."""
Voltage = Annotated[float, BeforeValidator(_positive("voltage"))]
"""[V] rms, above zero."""
Field = Annotated[float, BeforeValidator(_positive("magnetic_field"))]
"""[A/m] rms, above zero."""
HeatTransfer = Annotated[float, BeforeValidator(_not_negative("heat_transfer"))]
"""[W/(m2 K)], zero allowed."""
Speed = Annotated[float, BeforeValidator(_not_negative("speed"))]
"""[m/s], zero allowed."""
Resistance = Annotated[float, BeforeValidator(_not_negative("resistance"))]
"""[ohm], zero allowed."""
Inductance = Annotated[float, BeforeValidator(_not_negative("inductance"))]
"""[H], zero allowed."""
Emissivity = Annotated[float, BeforeValidator(_emissivity)]
"""[-], above 0 and up to 1; a bare number or a percentage."""
Turns = Annotated[float, BeforeValidator(_turns)]
"""[-], a plain number above zero."""
Opening = Annotated[tuple[float, float], BeforeValidator(_opening)]
"""Width and height [m] of a rectangular coil opening."""
