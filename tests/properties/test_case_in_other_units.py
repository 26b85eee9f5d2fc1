"""A case says the same in any units: every amount of a case at random written anew in units drawn at random.

That every unit comes back from `display` as it was read is shown with the unit table itself.
"""

from collections.abc import Iterator
from typing import Any

import pytest
from hypothesis import given, note, settings
from hypothesis import strategies as st
from whole_cases import FEW, Document, Draw, whole_cases

from materials.units import _DIMENSIONS, dimension_of, display, quantity
from thermal.case import Case, from_text
from thermal.case.write import to_toml

NUMBERS = ("turns", "format", "refinement")
NAMES = ("title", "shape", "material", "surface", "neighbours", "axis", "gas", "stage", "name")
DIFFERENCES = ("tolerance", "spread")
"""In kelvin only, as K is the one unit that is no temperature with a zero of its own."""


@st.composite
def in_other_units(draw: Draw, document: Document) -> Document:
    """The same document, every amount in a unit of its kind drawn at random."""
    return {key: draw(_anew(key, value)) for key, value in document.items()}


@st.composite
def _anew(draw: Draw, key: str, value: Any) -> Any:
    if isinstance(value, dict):
        return draw(in_other_units(value))
    if isinstance(value, list):
        return [draw(in_other_units(entry)) for entry in value]
    if key == "opening":
        unit = draw(st.sampled_from(sorted(_DIMENSIONS["length"].units)))
        width, height = value.removesuffix(" mm").split(" x ")
        return " x ".join(_in(f"{side} mm", "length", unit) for side in (width, height))
    if key == "emissivity":
        return draw(st.sampled_from((value, f"{value!r}", f"{100.0 * value!r} %")))
    if key in NUMBERS or key in NAMES or key in DIFFERENCES:
        return value
    dimension = dimension_of(value.split(" ", 1)[1])
    return _in(value, dimension, draw(st.sampled_from(sorted(_DIMENSIONS[dimension].units))))


def _in(text: str, dimension: str, unit: str) -> str:
    return f"{display(quantity(text, dimension), unit)!r} {unit}"


@st.composite
def pairs(draw: Draw) -> tuple[Document, Document]:
    document = draw(whole_cases()).document
    return document, draw(in_other_units(document))


def values(case: Case) -> Iterator[tuple[str, Any]]:
    """Every value of a case with its path."""
    parts = ("workpiece", "coil", "lining", "supply", "surroundings", "schedule", "readings", "numerics", "output")
    for name in parts:
        part = getattr(case, name)
        for index, record in enumerate(part if isinstance(part, tuple) else (part,)):
            if record is not None:
                yield from _flat(f"{name}.{index}", record.model_dump())


def _flat(path: str, value: Any) -> Iterator[tuple[str, Any]]:
    if isinstance(value, dict):
        for key, entry in value.items():
            yield from _flat(f"{path}.{key}", entry)
    elif isinstance(value, tuple):
        for index, entry in enumerate(value):
            yield from _flat(f"{path}.{index}", entry)
    else:
        yield path, value


@given(pair=pairs())
@settings(FEW, max_examples=60)
def test_the_same_case_in_other_units(pair: tuple[Document, Document]) -> None:
    texts = [to_toml(document) for document in pair]
    note("\n".join(texts))
    plain, other = (dict(values(from_text(text, "."))) for text in texts)
    assert plain.keys() == other.keys()
    for path, value in plain.items():
        same = pytest.approx(value, rel=1e-12) if isinstance(value, float) else value
        assert other[path] == same, path
