"""Every number of the shipped files is cited, and the bibliography has neither gaps nor leftovers."""

import re
import tomllib
from pathlib import Path

import pytest

import materials
from materials import database
from materials.source import KINDS

ROOT = Path(materials.__file__).parent
FILES = sorted(path for path in (ROOT / "data").rglob("*.toml") if path.name != "sources.toml")
CODE = sorted([*ROOT.rglob("*.py"), *(ROOT.parent / "thermal").rglob("*.py")])


def tables(values: dict[str, object]) -> list[dict[str, object]]:
    inner = [each for each in values.values() if isinstance(each, dict)]
    return [*inner, *(table for each in inner for table in tables(each))]


@pytest.mark.parametrize("path", FILES, ids=lambda path: path.stem)
def test_every_table_of_numbers_is_cited(path: Path) -> None:
    cited = [
        t for t in tables(tomllib.loads(path.read_text("utf-8"))) if not all(isinstance(v, dict) for v in t.values())
    ]
    assert len(cited) >= 3
    for table in cited:
        assert table["source"] in database.sources()
        assert table["kind"] in KINDS
        assert table["locator"]
        assert ("uncertainty" in table) != ("reason" in table)


def test_every_source_is_used() -> None:
    text = "\n".join(path.read_text("utf-8") for path in [*FILES, *CODE])
    assert [key for key in database.sources() if not re.search(rf"(?<![\w-]){re.escape(key)}(?![\w-])", text)] == []


def test_citations_name_publications_and_not_addresses() -> None:
    for path in [*FILES, ROOT / "data" / "sources.toml"]:
        assert not re.search(r"https?:|www\.|\.com\b|\.org\b|github|pypi", path.read_text("utf-8"), re.IGNORECASE)


@pytest.mark.parametrize("key", materials.names())
def test_material_reports_its_sources(key: str) -> None:
    material = materials.get(key)
    names = [name for name, _ in material.sources()]
    assert len(names) == len(set(names))
    assert {"density", "conductivity", "resistivity", "specific_heat", "magnetics"} <= set(names)
    for _, source in material.sources():
        assert material.references[source.key].title
    assert set(material.references) == {source.key for _, source in material.sources()}
