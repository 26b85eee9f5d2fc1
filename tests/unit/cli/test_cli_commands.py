import json
from pathlib import Path

import pytest

from thermal.case import load_case
from thermal.case.starter import KINDS, starter
from thermal.report.versions import own_version


def test_version(call):
    result = call("--version")
    assert (result.exit_code, result.stdout) == (0, f"thermal {own_version()}\n")


def test_help_names_every_command(call):
    told = call("--help").stdout
    assert all(f"\n  {name} " in told for name in ("new", "check", "run", "material"))


@pytest.mark.parametrize("kind", KINDS)
def test_new_prints_or_writes_a_case_that_is_valid(call, kind):
    assert call("new", kind).stdout == starter(kind)
    result = call("new", kind, "mine.toml")
    assert (result.exit_code, result.stdout) == (0, "")
    assert load_case("mine.toml").title


def test_check_tells_the_plan_and_writes_nothing(call, tmp_path):
    before = sorted(tmp_path.iterdir())
    result = call("check", "plate.toml")
    assert (result.exit_code, result.stderr) == (0, "")
    for words in ("The case is valid", "thickness / skin depth", "cells across the section", "Assumed", "hot, 250 °C"):
        assert words in result.stdout
    assert sorted(tmp_path.iterdir()) == before


def test_materials_as_json(call):
    listed = json.loads(call("material", "list", "--json").stdout)
    keys = [entry["key"] for entry in listed]
    assert "steel-c45" in keys
    told = json.loads(call("material", "show", "C45", "--json").stdout)
    assert told["key"] == "steel-c45"
    assert told["curie_C"] == 768.0
    assert all(datum["source"] and datum["kind"] for datum in told["data"])


def test_materials_as_text(call):
    assert "steel-c45" in call("material", "list").stdout
    assert "resistivity: 17.1 to 123 uohm cm" in call("material", "show", "steel-c45").stdout


def test_a_material_of_ones_own_can_be_shown(call):
    import materials

    shipped = Path(materials.__file__).parent / "data" / "copper" / "copper.toml"
    Path("mine.toml").write_text(shipped.read_text(encoding="utf-8"), encoding="utf-8")
    result = call("material", "show", "mine.toml")
    assert result.exit_code == 0
    assert "conductivity" in result.stdout


def test_check_takes_changes(call):
    result = call("check", "plate.toml", "--set", "schedule.0.until.mean=200 °C")
    assert "hot, 200 °C" in result.stdout
    refused = call("check", "plate.toml", "--set", "workpiece.thickness=25")
    assert (refused.exit_code, refused.stdout) == (2, "")
    assert refused.stderr.startswith("--set    workpiece.thickness: ")
