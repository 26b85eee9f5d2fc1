"""`thermal material` over everything that is shipped."""

import json
from pathlib import Path

import pytest

import materials

DATA = Path(materials.__file__).parent / "data"


@pytest.fixture
def doctored():
    """Writes a copy of shipped copper with one text replaced."""

    def write(name: str, old: str, new: str) -> None:
        text = (DATA / "copper" / "copper.toml").read_text(encoding="utf-8")
        assert old in text
        Path(name).write_text(text.replace(old, new, 1), encoding="utf-8")

    return write


def test_list_has_sections_for_materials_linings_and_gases(call):
    told = call("material", "list").stdout
    heads = [line for line in told.splitlines() if line in ("materials", "linings", "gases")]
    assert heads == ["materials", "linings", "gases"]
    places = [told.index(f"\n{key} ") for key in ("titanium-grade2", "castable-alumina", "nitrogen")]
    assert places == sorted(places)


def test_list_as_json_says_what_each_is(call):
    kinds = {each["key"]: each["kind"] for each in json.loads(call("material", "list", "--json").stdout)}
    assert (kinds["nickel"], kinds["castable-alumina"], kinds["argon"]) == ("material", "lining", "gas")
    assert list(kinds.values()) == sorted(kinds.values(), key=["material", "lining", "gas"].index)


@pytest.mark.parametrize(
    ("name", "words"),
    [
        ("argon", ["argon: Argon at 101325 Pa", "viscosity of argon: ", "A New Equation of State for Argon"]),
        ("castable-alumina", ["density: 2700 kg/m3, ±20 %", "emissivity: 0.4 to 0.85", "Recalled handbook value"]),
        ("R50400", ["titanium-grade2: Titanium grade 2", "transformation (alpha-beta): 87 kJ/kg at 885 °C over 10 K"]),
    ],
)
def test_show_of_a_gas_a_lining_and_an_alloy(call, name, words):
    result = call("material", "show", name)
    assert (result.exit_code, result.stderr) == (0, "")
    told = " ".join(result.stdout.split())
    assert all(" ".join(each.split()) in told for each in words)


def test_show_as_json_of_a_gas_and_a_lining(call):
    gas = json.loads(call("material", "show", "helium", "--json").stdout)
    assert (gas["key"], gas["from_C"], gas["to_C"]) == ("helium", -153.15, 1726.85)
    lining = json.loads(call("material", "show", "castable-alumina", "--json").stdout)
    assert [each["name"] for each in lining["data"]] == ["conductivity", "density", "emissivity"]


def test_show_of_an_unknown_name(call):
    result = call("material", "show", "argn")
    assert (result.exit_code, result.stdout) == (2, "")
    assert result.stderr.startswith("unknown material 'argn', did you mean 'argon'? (known: air, ")


def test_audit_of_everything_shipped(call):
    result = call("material", "audit")
    assert (result.exit_code, result.stderr) == (0, "")
    lines = result.stdout.splitlines()
    heads = [line.split(":")[0] for line in lines if line.endswith("nothing fails")]
    listed = [each["key"] for each in json.loads(call("material", "list", "--json").stdout)]
    assert heads == [*listed, f"{len(listed)} files"]
    assert max(map(len, lines)) <= 100


def test_audit_of_some(call):
    told = call("material", "audit", "3.7035", "air").stdout
    assert told.startswith("titanium-grade2: ")
    assert "remark: resistivity rises: falls by 7 % from 880 °C to 890 °C; alpha turns into beta" in told
    assert "\nair: 11 checks, 0 remarks, nothing fails\n" in told
    assert told.splitlines()[-1].startswith("2 files: ")


def test_audit_as_json(call):
    found = json.loads(call("material", "audit", "nickel", "--json").stdout)
    assert {each["material"] for each in found} == {"nickel"}
    (lorenz,) = [each for each in found if each["check"] == "Wiedemann-Franz"]
    assert lorenz["verdict"] == "ok"
    assert lorenz["found"] == "k rho/T from 2.16e-08 to 3e-08 V2/K2"
    assert set(lorenz) == {"material", "check", "found", "allowed", "verdict"}


def test_audit_that_fails_ends_with_2(call, doctored):
    doctored("slip.toml", "393, 386", "193, 386")
    result = call("material", "audit", "slip.toml", "copper")
    assert result.exit_code == 0
    assert "remark: Wiedemann-Franz: k rho/T is 1.16e-08 V2/K2 at 126.9 °C" in " ".join(result.stdout.split())
    doctored("fall.toml", "2.402, 3.09", "3.402, 3.09")
    result = call("material", "audit", "fall.toml", "copper")
    assert result.exit_code == 2
    assert "fails: resistivity rises: falls by 9.2 % from 126.9 °C to 226.9 °C" in " ".join(result.stdout.split())
    assert result.stdout.splitlines()[-1].endswith("1 FAIL")
    assert json.loads(call("material", "audit", "fall.toml", "--json").stdout)


def test_a_file_that_is_refused_is_a_failure_beside_the_others(call, doctored):
    doctored("bad.toml", '"8940 kg/m3"', '"8.94 kg/m3"')
    result = call("material", "audit", "bad.toml", "gone.toml", "copper")
    assert (result.exit_code, result.stderr) == (2, "")
    told = " ".join(result.stdout.split())
    assert "bad.toml: 1 check, 0 remarks, 1 FAIL - fails: reading: bad.toml: density.value: must be 400 to" in told
    assert "gone.toml: cannot be read (No such file or directory)" in told
    assert " copper: " in told


def test_audit_of_an_unknown_name(call):
    result = call("material", "audit", "coper")
    assert (result.exit_code, result.stdout) == (2, "")
    assert "did you mean 'copper'?" in result.stderr
