"""The only unit table: text with a unit to SI, SI to a unit for display.

Temperatures (with a zero of their own) and temperature differences are different dimensions: "50 °C" is a
temperature, "50 K" may be either. Conversion factors that are not powers of ten are exact by definition:
inch, foot, pound and Btu (IT) as in NIST Special Publication 811, appendix B.8; oersted 1000/(4 pi) A/m.
"""

import difflib
import math
import re
from dataclasses import dataclass

from materials.errors import UnitError

_INCH = 0.0254
_POUND = 0.45359237
_BTU = 1055.05585262
_OERSTED = 1000.0 / (4.0 * math.pi)
_ZERO_CELSIUS = 273.15
_FAHRENHEIT = 5.0 / 9.0
_ZERO_FAHRENHEIT = _ZERO_CELSIUS - 32.0 * _FAHRENHEIT


@dataclass(frozen=True, slots=True)
class _Dimension:
    """Name in a sentence, unit used in the example, and spelling -> (factor, offset [SI]) with SI first."""

    words: str
    example: str
    shown: tuple[str, ...]
    units: dict[str, tuple[float, float]]


def _of(words: str, example: str, shown: str, units: dict[str, float]) -> _Dimension:
    return _Dimension(words, example, tuple(shown.split(", ")), {k: (v, 0.0) for k, v in units.items()})


_DIMENSIONS: dict[str, _Dimension] = {
    "length": _of(
        "a length",
        "mm",
        "m, mm, in",
        {"m": 1, "mm": 1e-3, "cm": 1e-2, "um": 1e-6, "in": _INCH, "inch": _INCH, "ft": 12 * _INCH},
    ),
    "area": _of("an area", "mm2", "m2, cm2, mm2, in2", {"m2": 1, "cm2": 1e-4, "mm2": 1e-6, "in2": _INCH**2}),
    "volume": _of(
        "a volume",
        "cm3",
        "m3, l, cm3, in3",
        {"m3": 1, "l": 1e-3, "L": 1e-3, "cm3": 1e-6, "mm3": 1e-9, "in3": _INCH**3},
    ),
    "time": _of("a time", "s", "s, min, h", {"s": 1, "ms": 1e-3, "us": 1e-6, "min": 60, "h": 3600}),
    "temperature": _Dimension(
        "a temperature",
        "°C",
        ("°C", "K", "°F"),
        {
            "K": (1.0, 0.0),
            **dict.fromkeys(("degC", "C"), (1.0, _ZERO_CELSIUS)),
            **dict.fromkeys(("degF", "F"), (_FAHRENHEIT, _ZERO_FAHRENHEIT)),
        },
    ),
    "temperature_difference": _of("a temperature difference", "K", "K", {"K": 1}),
    "power": _of("a power", "kW", "W, kW", {"W": 1, "mW": 1e-3, "kW": 1e3, "MW": 1e6}),
    "frequency": _of("a frequency", "Hz", "Hz, kHz, MHz", {"Hz": 1, "kHz": 1e3, "MHz": 1e6}),
    "current": _of("a current", "A", "A, kA", {"A": 1, "mA": 1e-3, "kA": 1e3}),
    "voltage": _of("a voltage", "V", "V, kV", {"V": 1, "mV": 1e-3, "kV": 1e3}),
    "resistance": _of("a resistance", "mohm", "ohm, mohm", {"ohm": 1, "mohm": 1e-3, "uohm": 1e-6, "kohm": 1e3}),
    "inductance": _of("an inductance", "uH", "H, mH, uH, nH", {"H": 1, "mH": 1e-3, "uH": 1e-6, "nH": 1e-9}),
    "capacitance": _of("a capacitance", "uF", "F, uF, nF", {"F": 1, "mF": 1e-3, "uF": 1e-6, "nF": 1e-9, "pF": 1e-12}),
    "magnetic_field": _of(
        "a magnetic field", "kA/m", "A/m, kA/m, Oe", {"A/m": 1, "kA/m": 1e3, "A/cm": 100, "Oe": _OERSTED}
    ),
    "flux_density": _of("a flux density", "T", "T, mT, G", {"T": 1, "mT": 1e-3, "G": 1e-4}),
    "resistivity": _of(
        "a resistivity",
        "uohm m",
        "ohm m, uohm m, uohm cm, nohm m",
        {"ohmm": 1, "uohmm": 1e-6, "uohmcm": 1e-8, "nohmm": 1e-9, "ohmmm2/m": 1e-6},
    ),
    "conductivity": _of(
        "a thermal conductivity",
        "W/(m K)",
        "W/(m K)",
        {"W/mK": 1, "W/m/K": 1, "W/cmK": 100, "Btu/hftdegF": _BTU / (3600 * 12 * _INCH * _FAHRENHEIT)},
    ),
    "heat_capacity": _of(
        "a specific heat",
        "J/(kg K)",
        "J/(kg K), kJ/(kg K)",
        {"J/kgK": 1, "J/kg/K": 1, "kJ/kgK": 1e3, "J/gK": 1e3, "Btu/lbdegF": _BTU / _POUND / _FAHRENHEIT},
    ),
    "specific_energy": _of(
        "an energy per mass",
        "kWh/t",
        "J/kg, kJ/kg, kWh/t",
        {"J/kg": 1, "kJ/kg": 1e3, "MJ/kg": 1e6, "kWh/t": 3600, "kWh/kg": 3.6e6, "Btu/lb": _BTU / _POUND},
    ),
    "density": _of(
        "a density",
        "kg/m3",
        "kg/m3, g/cm3, lb/in3",
        {"kg/m3": 1, "g/cm3": 1e3, "lb/in3": _POUND / _INCH**3},
    ),
    "heat_transfer": _of(
        "a heat transfer coefficient",
        "W/(m2 K)",
        "W/(m2 K), kW/(m2 K)",
        {"W/m2K": 1, "W/m2/K": 1, "kW/m2K": 1e3},
    ),
    "heat_flux": _of(
        "a heat flux",
        "kW/m2",
        "W/m2, kW/m2, W/cm2",
        {"W/m2": 1, "kW/m2": 1e3, "MW/m2": 1e6, "W/cm2": 1e4, "kW/cm2": 1e7, "W/in2": _INCH**-2},
    ),
    "speed": _of("a speed", "m/s", "m/s, mm/s, m/min", {"m/s": 1, "mm/s": 1e-3, "m/min": 1 / 60}),
    "mass": _of("a mass", "kg", "kg, g, t, lb", {"kg": 1, "g": 1e-3, "t": 1e3, "lb": _POUND}),
    "energy": _of(
        "an energy",
        "kJ",
        "J, kJ, MJ, kWh",
        {"J": 1, "kJ": 1e3, "MJ": 1e6, "Wh": 3600, "kWh": 3.6e6, "Btu": _BTU},
    ),
    "molar_mass": _of("a molar mass", "g/mol", "kg/mol, g/mol", {"kg/mol": 1, "g/mol": 1e-3}),
    "viscosity": _of("a viscosity", "Pa s", "Pa s, mPa s", {"Pas": 1, "mPas": 1e-3, "uPas": 1e-6}),
    "ratio": _of("a ratio", "%", "1, %", {"1": 1, "": 1, "%": 1e-2}),
}

_QUANTITY = re.compile(r"\s*([+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)\s*(1|[^\d\s.,+-].*?)?\s*")
_DROPPED = str.maketrans({" ": None, "·": None, "*": None, "(": None, ")": None, "^": None})
# Micro sign and Greek mu, ohm sign and Greek omega look alike and are both in use.
# The masculine ordinal º stands beside the degree sign on some keyboards.
_SAME = str.maketrans(
    {
        "°": "deg",
        "\u00ba": "deg",
        "\u00b5": "u",
        "\u03bc": "u",
        "\u2126": "ohm",
        "\u03a9": "ohm",
        "²": "2",
        "³": "3",
    }
)


def quantity(text: str, dimension: str) -> float:
    """Read a text such as "40 mm" as a value in SI.

    Parameters
    ----------
    text : str
        A number, a space (may be left out) and a unit. Only a ratio may be a bare number.
    dimension : str
        A name of the table: "length", "temperature", "temperature_difference", ...

    Raises
    ------
    UnitError
        No number, no unit, unknown unit, unit of another dimension, below absolute zero.
    """
    wanted = _DIMENSIONS[dimension]
    offer = accepted(dimension)
    match = _QUANTITY.fullmatch(text)
    if match is None:
        example = f"50 {wanted.example}"
        raise UnitError(f"'{text}' is not a number with a unit, write it like \"{example}\" (units: {offer})")
    number, unit = match.group(1), match.group(2) or ""
    key = _normal(unit)
    if key in wanted.units:
        factor, offset = wanted.units[key]
        value = float(number) * factor + offset
        if not math.isfinite(value):
            raise UnitError(f"'{text}' is too large a number")
        if dimension == "temperature" and value < 0.0:
            raise UnitError(f"'{text}' is below absolute zero (-273.15 °C)")
        return value
    if unit == "":
        raise UnitError(f'write the unit: "{number} {wanted.example}" (accepted: {offer})')
    found = _dimension_of_key(key)
    if found is None:
        near = _near(key, wanted)
        hint = f", did you mean '{near}'?" if near else ""
        raise UnitError(f"unknown unit '{unit}' in '{text}'{hint} (accepted: {offer})")
    if dimension == "temperature_difference" and found == "temperature":
        kelvin = float(number) * _DIMENSIONS[found].units[key][0]
        raise UnitError(f"'{text}' is a temperature, a temperature difference is wanted: write \"{kelvin:.6g} K\"")
    raise UnitError(f"'{text}' is {_DIMENSIONS[found].words}, {wanted.words} is wanted ({offer})")


def display(value: float, unit: str) -> float:
    """Convert a value in SI to `unit`; 0.04 in "mm" is 40.

    "F" and "K" are read as temperatures; for a capacitance write "uF".

    Raises
    ------
    UnitError
        Unknown unit.
    """
    factor, offset = _DIMENSIONS[dimension_of(unit)].units[_normal(unit)]
    return (value - offset) / factor


def dimension_of(unit: str) -> str:
    """Name of the dimension a unit belongs to; "F" and "K" count as temperatures.

    Raises
    ------
    UnitError
        Unknown unit.
    """
    found = _dimension_of_key(_normal(unit))
    if found is None:
        raise UnitError(f"unknown unit '{unit}'")
    return found


def is_unit_of(unit: str, dimension: str) -> bool:
    """Whether a unit belongs to the dimension."""
    return _normal(unit) in _DIMENSIONS[dimension].units


def accepted(dimension: str) -> str:
    """Units to offer for a dimension, as printed in refusals."""
    return ", ".join(_DIMENSIONS[dimension].shown)


def _normal(unit: str) -> str:
    """One spelling for "W/(m² K)", "W/m2K" and the like."""
    return unit.translate(_SAME).translate(_DROPPED)


def _dimension_of_key(key: str) -> str | None:
    return next((name for name, entry in _DIMENSIONS.items() if key in entry.units), None)


def _near(key: str, wanted: _Dimension) -> str | None:
    """Closest spelling of the wanted dimension; the case of the letters alone counts as near."""
    folded = {known.casefold(): known for known in wanted.units if known}
    hits = difflib.get_close_matches(key.casefold(), list(folded), n=1, cutoff=0.5)
    return folded[hits[0]] if hits else None
