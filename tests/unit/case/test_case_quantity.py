"""Field types: texts with a unit become SI, everything else is refused in one sentence."""

from typing import Any

import pytest
from pydantic import TypeAdapter, ValidationError

from thermal.case import quantity


def _read(kind: Any, value: object) -> Any:
    return TypeAdapter(kind).validate_python(value)


@pytest.mark.parametrize(
    ("kind", "text", "si"),
    [
        (quantity.Length, "50 mm", 0.05),
        (quantity.Length, "2 in", 0.0508),
        (quantity.Depth, "0 mm", 0.0),
        (quantity.Time, "2 min", 120.0),
        (quantity.Moment, "0 s", 0.0),
        (quantity.Temperature, "20 °C", 293.15),
        (quantity.Temperature, "2200 °F", 1477.594),
        (quantity.TemperatureDifference, "50 K", 50.0),
        (quantity.Power, "60 kW", 60e3),
        (quantity.Frequency, "3 kHz", 3e3),
        (quantity.Current, "2 kA", 2e3),
        (quantity.Voltage, "600 V", 600.0),
        (quantity.Field, "100 kA/m", 1e5),
        (quantity.HeatTransfer, "15 W/(m2 K)", 15.0),
        (quantity.Speed, "0 m/s", 0.0),
        (quantity.Resistance, "2 mohm", 2e-3),
        (quantity.Inductance, "1 uH", 1e-6),
        (quantity.Emissivity, 0.8, 0.8),
        (quantity.Emissivity, "80 %", 0.8),
        (quantity.Emissivity, 1, 1.0),
        (quantity.Turns, 18, 18.0),
        (quantity.Turns, 7.5, 7.5),
    ],
)
def test_text_becomes_si(kind: Any, text: object, si: float) -> None:
    value = _read(kind, text)
    assert value == pytest.approx(si, rel=1e-6)
    assert isinstance(value, float)


@pytest.mark.parametrize("text", ["120 x 40 mm", "120 mm x 40 mm", "120x40mm", "12 cm × 40 mm"])
def test_opening(text: str) -> None:
    assert _read(quantity.Opening, text) == pytest.approx((0.12, 0.04))


@pytest.mark.parametrize(
    ("kind", "value", "sentence"),
    [
        (quantity.Length, 50, 'write the unit: "50 mm" (accepted: m, mm, in)'),
        (quantity.Length, "50", 'write the unit: "50 mm" (accepted: m, mm, in)'),
        (quantity.Length, True, "'true' is not a number with its unit, write both in quotes (units: m, mm, in)"),
        (quantity.Length, ["50 mm"], "a list is not a number with its unit, write both in quotes (units: m, mm, in)"),
        (quantity.Length, "0 mm", "'0 mm' must be above zero"),
        (quantity.Length, "-5 mm", "'-5 mm' must be above zero"),
        (quantity.Depth, "-5 mm", "'-5 mm' must not be negative"),
        (quantity.Power, "60 kHz", "'60 kHz' is a frequency, a power is wanted (W, kW)"),
        (quantity.Temperature, "-300 °C", "'-300 °C' is below absolute zero (-273.15 °C)"),
        (quantity.Emissivity, 1.2, "'1.2' is not an emissivity, it lies above 0 and up to 1"),
        (quantity.Emissivity, 0.0, "'0.0' is not an emissivity, it lies above 0 and up to 1"),
        (quantity.Turns, 0, "0 turns: the number of turns must be from 0.1 to 10000"),
        (quantity.Turns, float("nan"), "nan turns: the number of turns must be from 0.1 to 10000"),
        (
            quantity.Turns,
            "18",
            "'18' is not a number of turns, write a plain number like 18 (7.5 is fine)",
        ),
        (quantity.Opening, "120 mm", "'120 mm' is not an opening, write width x height like \"120 x 40 mm\""),
        (quantity.Opening, "120 x 0 mm", "'0 mm' must be above zero"),
        (quantity.Opening, "120 x 40", 'write the unit: "120 mm" (accepted: m, mm, in)'),
    ],
)
def test_refusal(kind: Any, value: object, sentence: str) -> None:
    with pytest.raises(ValidationError) as caught:
        _read(kind, value)
    (problem,) = caught.value.errors()
    assert problem["msg"] == f"Value error, {sentence}"


def test_difference_is_not_a_temperature() -> None:
    with pytest.raises(ValidationError, match="a temperature difference is wanted"):
        _read(quantity.TemperatureDifference, "50 °C")


def test_shown() -> None:
    assert quantity.shown(0.025, "mm") == "25 mm"
    assert quantity.shown(1423.15, "°C") == "1150 °C"
