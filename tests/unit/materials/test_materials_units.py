"""Text to SI and back, and the sentences of the refusals."""

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from materials.errors import MaterialError, UnitError
from materials.units import _DIMENSIONS, accepted, dimension_of, display, is_unit_of, quantity

# Factors written out by hand, exact by definition (inch, pound, Btu IT, oersted), not taken from the table.
VALUES = [
    ("40 mm", "length", 0.04),
    ("3 in", "length", 0.0762),
    ("2 ft", "length", 0.6096),
    ("12 µm", "length", 12e-6),
    ("12 μm", "length", 12e-6),
    ("25 mm²", "area", 25e-6),
    ("2 l", "volume", 2e-3),
    ("2 min", "time", 120.0),
    ("20 °C", "temperature", 293.15),
    ("20 degC", "temperature", 293.15),
    ("20C", "temperature", 293.15),
    ("1 K", "temperature", 1.0),
    ("2200 °F", "temperature", (2200 - 32) / 1.8 + 273.15),
    ("-40 F", "temperature", 233.15),
    ("50 K", "temperature_difference", 50.0),
    ("60 kW", "power", 6e4),
    ("3 kHz", "frequency", 3e3),
    ("2 kA", "current", 2e3),
    ("0.5 kV", "voltage", 500.0),
    ("4 mΩ", "resistance", 4e-3),
    ("2.5 µH", "inductance", 2.5e-6),
    ("0.66 uF", "capacitance", 0.66e-6),
    ("1 F", "capacitance", 1.0),
    ("1 Oe", "magnetic_field", 79.57747154594767),
    ("100 kA/m", "magnetic_field", 1e5),
    ("20000 G", "flux_density", 2.0),
    ("17 µΩ cm", "resistivity", 17e-8),
    ("0.2 uohm m", "resistivity", 2e-7),
    ("50 W/(m K)", "conductivity", 50.0),
    ("50 W/m/K", "conductivity", 50.0),
    ("0.5 kJ/(kg·K)", "heat_capacity", 500.0),
    ("1 Btu/(lb °F)", "heat_capacity", 4186.8),
    ("240 kWh/t", "specific_energy", 864e3),
    ("7.85 g/cm3", "density", 7850.0),
    ("15 W/(m^2 K)", "heat_transfer", 15.0),
    ("24 W/cm2", "heat_flux", 24e4),
    ("6 m/min", "speed", 0.1),
    ("1 lb", "mass", 0.45359237),
    ("1 kWh", "energy", 3.6e6),
    ("18 uPa s", "viscosity", 18e-6),
    ("80 %", "ratio", 0.8),
    ("0.8", "ratio", 0.8),
    ("1e3 mm", "length", 1.0),
]

REFUSALS = [
    ("50", "length", 'write the unit: "50 mm" (accepted: m, mm, in)'),
    ("60 kHz", "power", "'60 kHz' is a frequency, a power is wanted (W, kW)"),
    (
        "50 °C",
        "temperature_difference",
        "'50 °C' is a temperature, a temperature difference is wanted: write \"50 K\"",
    ),
    (
        "90 °F",
        "temperature_difference",
        "'90 °F' is a temperature, a temperature difference is wanted: write \"50 K\"",
    ),
    ("12 KW", "power", "unknown unit 'KW' in '12 KW', did you mean 'kW'? (accepted: W, kW)"),
    ("12 xyz", "power", "unknown unit 'xyz' in '12 xyz' (accepted: W, kW)"),
    ("kW", "power", "'kW' is not a number with a unit, write it like \"50 kW\" (units: W, kW)"),
    ("1,5 mm", "length", "'1,5 mm' is not a number with a unit, write it like \"50 mm\" (units: m, mm, in)"),
    ("-300 °C", "temperature", "'-300 °C' is below absolute zero (-273.15 °C)"),
    ("1e999 m", "length", "'1e999 m' is too large a number"),
    ("20 mm", "temperature", "'20 mm' is a length, a temperature is wanted (°C, K, °F)"),
    ("2 h", "inductance", "'2 h' is a time, an inductance is wanted (H, mH, uH, nH)"),
    ("20 K", "power", "'20 K' is a temperature, a power is wanted (W, kW)"),
]


@pytest.mark.parametrize(("text", "dimension", "expected"), VALUES)
def test_value(text: str, dimension: str, expected: float) -> None:
    assert quantity(text, dimension) == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize(("text", "dimension", "message"), REFUSALS)
def test_refusal(text: str, dimension: str, message: str) -> None:
    with pytest.raises(UnitError) as refusal:
        quantity(text, dimension)
    assert str(refusal.value) == message


def test_unit_error_is_a_material_error_and_a_value_error() -> None:
    assert issubclass(UnitError, MaterialError)
    assert issubclass(MaterialError, ValueError)


UNITS = [(name, unit) for name, entry in _DIMENSIONS.items() for unit in entry.units if unit]


@pytest.mark.parametrize(("dimension", "unit"), UNITS)
@settings(max_examples=20)
@given(number=st.floats(min_value=0.001, max_value=1e6))
def test_round_trip(dimension: str, unit: str, number: float) -> None:
    value = quantity(f"{number!r} {unit}", dimension)
    if (dimension, unit) == ("capacitance", "F"):  # for display "F" is Fahrenheit, the farad has its prefixes
        assert display(value, "uF") == pytest.approx(1e6 * number, rel=1e-12)
    else:
        # The zero of the Celsius and Fahrenheit scales costs the last digits of a small temperature.
        assert display(value, unit) == pytest.approx(number, rel=1e-12, abs=5e-13)


def test_every_unit_named_in_a_refusal_is_understood() -> None:
    for name, entry in _DIMENSIONS.items():
        for unit in (*entry.shown, entry.example):
            assert is_unit_of(unit, name)
            assert math.isfinite(quantity(f"2 {unit}", name))


def test_temperatures_and_differences_stay_apart() -> None:
    assert quantity("50 K", "temperature") == quantity("50 K", "temperature_difference")
    assert quantity("0 °C", "temperature") == 273.15
    assert not is_unit_of("°C", "temperature_difference")
    assert dimension_of("F") == "temperature"
    assert dimension_of("uF") == "capacitance"
    assert display(1477.594444444444, "°F") == pytest.approx(2200.0)


def test_unknown_unit_for_display() -> None:
    with pytest.raises(UnitError, match="unknown unit 'furlong'"):
        display(1.0, "furlong")
    assert accepted("heat_transfer") == "W/(m2 K), kW/(m2 K)"


def test_the_ordinal_sign_is_read_as_a_degree_sign() -> None:
    assert quantity("20 \u00baC", "temperature") == quantity("20 °C", "temperature")
