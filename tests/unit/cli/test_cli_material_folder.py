"""--materials and files of one's own beside the case: looked up, kept by a case, named in results."""

import json
import re
import tomllib
from pathlib import Path

import pytest

import materials
from thermal.case import as_run, from_text, load_case, with_changes
from thermal.case.against_materials import lining_material, surroundings_gas, workpiece_material
from thermal.case.starter import starter
from thermal.errors import CaseError

DATA = Path(materials.__file__).parent / "data"
BILLET = starter("billet")
LINED = BILLET.replace("[lining]", '[lining]\nmaterial = "fibre"').replace(
    "[surroundings]", "[surroundings]\ngas = 'mix'"
)
OWN = LINED.replace('"steel-c45"', '"Heat-12"')


def copy(key: str, target: Path, new: str, aliases: str = "[]", density: str = "") -> None:
    (path,) = DATA.glob(f"*/{key}.toml")
    text = path.read_text(encoding="utf-8").replace(f'key = "{key}"', f'key = "{new}"')
    text = re.sub(r"aliases = .*", f"aliases = {aliases}", text)
    if density:
        text = re.sub(r'value = "\d+ kg/m3"', f'value = "{density}"', text)
    target.parent.mkdir(parents=True, exist_ok=True)
    target.write_text(text, encoding="utf-8")


@pytest.fixture
def mine(tmp_path):
    """A folder with one alloy, one lining and one gas."""
    copy("steel-c45", tmp_path / "mine" / "steel" / "batch.toml", "batch-7", '["Heat-12"]', density="7000 kg/m3")
    copy("castable-alumina", tmp_path / "mine" / "lining" / "fibre.toml", "fibre", density="128 kg/m3")
    copy("argon", tmp_path / "mine" / "gas" / "mix.toml", "mix")
    return tmp_path / "mine"


def used(case):
    return workpiece_material(case).key, lining_material(case).key, surroundings_gas(case).key


def test_a_case_finds_what_stands_in_the_folder(mine, tmp_path):
    case = from_text(OWN, tmp_path, materials=mine)
    assert used(case) == ("batch-7", "fibre", "mix")
    assert workpiece_material(case).density == 7000.0
    path = tmp_path / "own.toml"
    path.write_text(OWN, encoding="utf-8")
    assert used(load_case(path, materials=str(mine))) == used(case)
    assert case.materials == mine
    assert from_text(BILLET, tmp_path).materials is None


def test_the_shipped_ones_stay_beside_the_folder(mine, tmp_path):
    case = from_text(BILLET, tmp_path, materials=mine)
    assert used(case) == ("steel-c45", "castable-alumina", "air")
    assert as_run(case) == BILLET


def test_with_changes_keeps_the_folder(mine, tmp_path):
    case = from_text(BILLET, tmp_path, {"workpiece.diameter": "40 mm"}, materials=mine)
    changed = with_changes(case, {"workpiece.material": "batch-7", "lining.material": "fibre"})
    assert used(changed) == ("batch-7", "fibre", "air")
    assert changed.workpiece.outline[0] == pytest.approx(0.04)
    again = with_changes(changed, {"workpiece.material": "iron", "workpiece.surface": "oxidised"})
    assert used(again) == ("iron", "fibre", "air")


def test_a_table_set_later_replaces_the_keys_set_before(mine, tmp_path):
    case = from_text(OWN, tmp_path, materials=mine)
    table = '{material = "castable-alumina", thickness = "5 mm"}'
    changed = with_changes(case, {"lining": table})
    assert used(changed) == ("batch-7", "castable-alumina", "mix")
    back = with_changes(with_changes(changed, {"lining.material": "fibre"}), {"lining": table})
    assert used(back) == ("batch-7", "castable-alumina", "mix")


def test_the_case_as_run_names_the_files(mine, tmp_path):
    run = tomllib.loads(as_run(from_text(OWN, tmp_path, materials=mine)))
    assert run["workpiece"]["material"] == str(mine / "steel" / "batch.toml")
    assert run["lining"]["material"] == str(mine / "lining" / "fibre.toml")
    assert run["surroundings"]["gas"] == str(mine / "gas" / "mix.toml")
    assert used(from_text(as_run(from_text(OWN, tmp_path, materials=mine)), tmp_path)) == ("batch-7", "fibre", "mix")


def test_a_folder_named_from_elsewhere(mine, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    case = from_text(OWN, tmp_path / "cases", materials="mine")
    monkeypatch.chdir(mine)
    assert used(with_changes(case, {"supply.power": "90 kW"})) == ("batch-7", "fibre", "mix")


def test_mistakes_keep_their_lines(mine, tmp_path):
    with pytest.raises(CaseError) as caught:
        from_text(OWN.replace('"Heat-12"', '"heat-13"'), tmp_path, materials=mine)
    (problem,) = caught.value.problems
    assert problem.startswith(
        "line 8   workpiece.material: unknown material 'heat-13', did you mean 'heat-12'? (known: "
    )
    assert "batch-7" in problem
    with pytest.raises(CaseError) as caught:
        from_text(OWN.replace('"oxidised"', '"rusty"', 1), tmp_path, {"supply.power": "90 kW"}, materials=mine)
    (problem,) = caught.value.problems
    assert problem.startswith("line 9   workpiece.surface: batch-7 has no surface state 'rusty'")
    lining = mine / "lining" / "fibre.toml"
    lining.write_text(lining.read_text(encoding="utf-8").replace("128 kg/m3", "0 kg/m3"), encoding="utf-8")
    with pytest.raises(CaseError) as caught:
        from_text(OWN, tmp_path, materials=mine)
    (problem,) = caught.value.problems
    assert problem.endswith(f"lining.material: {lining}: density.value: must be above zero")


def test_an_override_that_is_no_better_than_the_file_is_told_once(mine, tmp_path):
    with pytest.raises(CaseError) as caught:
        from_text(OWN, tmp_path, {"workpiece.length": "5"}, materials=mine)
    (problem,) = caught.value.problems
    assert problem.startswith("--set    workpiece.length: ")


def test_a_lining_and_a_gas_beside_the_case(mine, tmp_path):
    for name in ("lining/fibre.toml", "gas/mix.toml"):
        (mine / name).rename(tmp_path / Path(name).name)
    text = LINED.replace('"fibre"', '"fibre.toml"').replace("'mix'", '"mix.toml"')
    case = from_text(text, tmp_path)
    assert used(case) == ("steel-c45", "fibre", "mix")
    assert lining_material(case).density == 128.0
    assert as_run(case) == text
    with pytest.raises(CaseError, match=r"lining\.material: .*gone\.toml: cannot be read"):
        from_text(text.replace("fibre.toml", "gone.toml"), tmp_path)


def test_check_and_run_with_a_folder(mine, tmp_path, call):
    heater = (
        starter("heater").replace('"steel-c45"', '"batch-7"').replace("[surroundings]", '[surroundings]\ngas = "mix"')
    )
    Path("own.toml").write_text(heater, encoding="utf-8")
    refused = call("check", "own.toml")
    assert (refused.exit_code, refused.stdout) == (2, "")
    assert "unknown material 'batch-7'" in refused.stderr
    assert call("check", "own.toml", "--materials", "mine").exit_code == 0
    result = call("run", "own.toml", "--materials", "mine", "--set", "schedule.0.until.surface=100 °C", "--quiet")
    assert (result.exit_code, result.stderr) == (0, "")
    summary = json.loads(Path("results/own/summary.json").read_text(encoding="utf-8"))
    assert summary["sources"][0]["quantity"] == "batch-7: density"
    kept = tomllib.loads(Path("results/own/case.toml").read_text(encoding="utf-8"))
    assert kept["workpiece"]["material"] == "batch.toml"
    assert Path("results/own/batch.toml").read_bytes() == (mine / "steel" / "batch.toml").read_bytes()
    assert call("run", "results/own/case.toml", "--out", "again", "--quiet").stdout == result.stdout
    assert Path(kept["surroundings"]["gas"]).name == "mix.toml"


@pytest.mark.parametrize("gas", ["argon", "nitrogen", "helium"])
def test_shipped_gases_as_surroundings(call, gas):
    changes = ["--set", f"surroundings.gas={gas}", "--set", "schedule.0.until.surface=150 °C"]
    result = call("run", "heater.toml", *changes, "--quiet")
    assert (result.exit_code, result.stderr) == (0, "")
    assert result.stdout.startswith("Reaches 150 °C at the surface after ")


@pytest.mark.parametrize("command", [("check", "heater.toml"), ("run", "heater.toml"), ("material", "list"),
                                     ("material", "show", "copper"), ("material", "audit")])  # fmt: skip
@pytest.mark.parametrize(
    ("folder", "sentence"),
    [
        ("gone", "gone: there is no such folder of materials\n"),
        ("heater.toml", "heater.toml: is a file, materials of your own stand in a folder\n"),
        ("empty", "empty: holds no TOML file, neither itself nor a folder in it\n"),
    ],
)
def test_folders_that_cannot_be_used(call, command, folder, sentence):
    Path("empty").mkdir()
    result = call(*command, "--materials", folder)
    assert (result.exit_code, result.stdout, result.stderr) == (2, "", sentence)


def test_a_name_that_is_taken(call, mine):
    copy("copper", mine / "copper.toml", "C45")
    result = call("check", "heater.toml", "--materials", "mine")
    assert result.exit_code == 2
    path = Path("mine/copper.toml")
    assert result.stderr == f"{path}: the name 'C45' is taken by the shipped steel-c45.toml, give it another\n"


def test_material_commands_know_the_folder(call, mine):
    listed = json.loads(call("material", "list", "--json", "--materials", "mine").stdout)
    files = {each["key"]: each["file"] for each in listed}
    assert files["batch-7"] == str(Path("mine/steel/batch.toml"))
    assert files["mix"] == str(Path("mine/gas/mix.toml"))
    assert files["copper"] is None
    told = call("material", "list", "--materials", "mine").stdout
    assert all(f"\n{key} " in told for key in ("batch-7", "fibre", "mix"))
    assert call("material", "show", "heat-12", "--materials", "mine").stdout.startswith("batch-7: ")
    audited = call("material", "audit", "--materials", "mine").stdout
    assert all(f"\n{key}: " in audited for key in ("batch-7", "fibre", "mix", "steel-c45"))


def test_one_bad_file_in_the_folder_fails_the_audit_of_everything(call, mine):
    path = mine / "steel" / "batch.toml"
    path.write_text(path.read_text(encoding="utf-8").replace('"7000 kg/m3"', '"7 kg/m3"'), encoding="utf-8")
    result = call("material", "audit", "--materials", "mine")
    assert (result.exit_code, result.stderr) == (2, "")
    assert "batch-7: 1 check, 0 remarks, 1 FAIL" in result.stdout
    assert "\nsteel-c45: " in result.stdout
