"""Reading files, overrides, defaults, and the case as it was run."""

import pickle
import tomllib
from dataclasses import FrozenInstanceError
from pathlib import Path

import pytest
from pydantic import ValidationError

from thermal.case import Case, as_run, from_text, load_case, with_changes
from thermal.case.starter import KINDS, starter
from thermal.case.write import to_toml
from thermal.errors import CaseError

CASES = sorted((Path(__file__).parents[3] / "cases").glob("*.toml"))


def _billet(**overrides: object) -> Case:
    return from_text(starter("billet"), ".", {key.replace("__", "."): v for key, v in overrides.items()})


@pytest.mark.parametrize("kind", KINDS)
def test_every_starter_loads(kind: str) -> None:
    case = from_text(starter(kind), ".")
    assert case.schedule
    assert case.title


def test_unknown_starter() -> None:
    with pytest.raises(CaseError, match=r"^'bilet' is not a kind of case, did you mean 'billet'\? \(kinds: "):
        starter("bilet")


@pytest.mark.parametrize("path", CASES, ids=lambda path: path.stem)
def test_every_case_loads(path: Path) -> None:
    case = load_case(path)
    assert (case.name, case.folder) == (path.stem, path.parent)
    assert as_run(case) == path.read_text(encoding="utf-8")


def test_every_case_is_in_the_readme() -> None:
    assert CASES
    readme = (CASES[0].parent / "README.md").read_text(encoding="utf-8")
    assert [path.name for path in CASES if f"({path.name})" not in readme] == []


def test_values_are_si() -> None:
    case = _billet()
    assert case.workpiece.outline == pytest.approx((0.05, 0.05))
    assert case.workpiece.initial == pytest.approx(293.15)
    assert case.coil is not None and case.coil.bore == pytest.approx((0.08, 0.08))
    assert case.coil.temperature == pytest.approx(323.15)
    assert case.supply is not None and case.supply.max_current == pytest.approx(3000.0)
    heat, transfer = case.schedule
    assert heat.stage == "heat"
    assert (heat.drive.kind, heat.drive.value) == ("supply_power", pytest.approx(25e3))
    assert heat.until is not None
    assert heat.until.targets == pytest.approx({"core": 1423.15, "spread": 100.0})
    assert (transfer.stage, transfer.duration) == ("transfer", pytest.approx(6.0))
    assert case.readings[0].depth == pytest.approx(0.005)


def test_targets_may_be_readings_of_the_user() -> None:
    case = _billet(schedule__0__until='{ TC1 = "1100 °C" }')
    heat = case.schedule[0]
    assert heat.stage == "heat" and heat.until is not None
    assert heat.until.targets == pytest.approx({"TC1": 1373.15})
    tube = from_text(starter("tube"), ".")
    hold = tube.schedule[1]
    assert hold.stage == "hold"
    assert (hold.at.reading, hold.at.temperature) == ("surface", pytest.approx(1173.15))


def test_frequency_of_a_stage() -> None:
    assert _billet().frequency(1) == pytest.approx(2e3)
    text = starter("heater") + (
        '[[schedule]]\nstage = "heat"\nduration = "5 s"\n'
        'drive = { surface_field = "20 kA/m", frequency = "50 kHz" }\n'
        '[[schedule]]\nstage = "hold"\nduration = "5 s"\nat = { core = "800 °C" }\n'
    )
    case = from_text(text, ".")
    assert [case.frequency(stage) for stage in (0, 1, 2, 3)] == pytest.approx([100e3, 100e3, 50e3, 50e3])


def test_a_transfer_may_stand_alone() -> None:
    head = starter("heater").split("[[schedule]]")[0]
    tail = '[[schedule]]\nstage = "transfer"\nduration = "60 s"\nuntil = { surface = "400 °C" }\n'
    case = from_text(head + tail, ".", {"workpiece.initial": "800 °C"})
    assert case.schedule[0].stage == "transfer"


# -- defaults ----------------------------------------------------------------------------------------------


def test_defaults_are_listed_with_their_reason() -> None:
    used = _billet().defaults_used
    assert "lining.material = castable-alumina (common practice: cast-in coil lining)" in used
    assert "coil.temperature = 50 °C (common practice: water-cooled bore as the workpiece sees it)" in used
    assert "supply.max_voltage = none (assumption: no limit on the coil voltage)" in used
    assert not any(line.startswith(("supply.max_current", "workpiece.initial")) for line in used)


def test_a_default_that_is_written_is_no_default() -> None:
    written = _billet(coil__temperature="50 °C")
    assert set(_billet().defaults_used) - set(written.defaults_used) == {
        "coil.temperature = 50 °C (common practice: water-cooled bore as the workpiece sees it)"
    }


def test_constant_coefficient_needs_no_speed() -> None:
    case = _billet(surroundings__h="15 W/(m2 K)")
    assert (case.surroundings.h, case.surroundings.speed) == (pytest.approx(15.0), None)
    assert not any("surroundings.speed" in line for line in case.defaults_used)


def test_defaults_of_a_hold_carry_its_index() -> None:
    case = from_text(starter("tube"), ".", {"schedule.1.reset": "3 s"})
    lines = [line for line in case.defaults_used if line.startswith("schedule")]
    assert lines == ["schedule.1 (hold): response = 0.5 s (assumption: reaction time of the temperature control)"]


def test_no_defaults_for_absent_sections() -> None:
    case = from_text(starter("heater"), ".")
    assert (case.coil, case.lining, case.supply) == (None, None, None)
    assert {line.split(".")[0] for line in case.defaults_used} == {"workpiece", "surroundings", "numerics"}


# -- overrides ---------------------------------------------------------------------------------------------


def test_overrides_by_dotted_path() -> None:
    case = from_text(
        starter("billet"),
        ".",
        {
            "supply.power": "100 kW",
            "schedule.0.longest": "60 s",
            "coil.turns": "15",
            "workpiece.material": "copper",
            "workpiece.surface": "oxidised",
            "schedule.0.until": '{ mean = "700 °C" }',
            "output.profiles_at": '["1 s", "2 s"]',
        },
    )
    assert case.supply is not None and case.supply.power == pytest.approx(100e3)
    assert case.coil is not None and case.coil.turns == 15.0
    assert case.workpiece.material == "copper"
    assert case.output.profiles_at == pytest.approx((1.0, 2.0))
    heat = case.schedule[0]
    assert heat.stage == "heat" and heat.until is not None
    assert (heat.longest, heat.until.targets) == (pytest.approx(60.0), pytest.approx({"mean": 973.15}))


@pytest.mark.parametrize(
    ("path", "value", "line"),
    [
        (
            "supply.power",
            "60 kHz",
            "--set    supply.power: '60 kHz' is a frequency, a power is wanted (W, kW)",
        ),
        ("supply.powr", "60 kW", "--set    supply.powr: unknown key, did you mean 'power'?"),
        ("coil.turns", "0", "--set    coil.turns: 0 turns: the number of turns must be from 0.1 to 10000"),
        ("supply..power", "1 W", "--set    'supply..power' is not the path of a key, write it like supply.power"),
        ("coil.turns.x", "1", "--set    coil.turns.x: coil.turns is a value, not a table with keys"),
        (
            "schedule.2.longest",
            "60 s",
            "--set    schedule.2.longest: schedule is a list without '2', write a number from 0 to 1",
        ),
        (
            "schedule.heat.longest",
            "60 s",
            "--set    schedule.heat.longest: schedule is a list without 'heat', write a number from 0 to 1",
        ),
    ],
)
def test_refused_override(path: str, value: str, line: str) -> None:
    with pytest.raises(CaseError) as caught:
        from_text(starter("billet"), ".", {path: value})
    assert caught.value.problems == (line,)


def test_a_mistake_made_by_an_override_is_no_mistake_of_the_file() -> None:
    def problems(text: str, path: str, value: str) -> list[str]:
        with pytest.raises(CaseError) as caught:
            from_text(text, ".", {path: value})
        return [problem.split(": ")[0] for problem in caught.value.problems]

    sound = starter("heater")
    assert problems(sound, "workpiece.emissivity", "0.8") == ["--set    workpiece.emissivity"]
    assert problems(sound, "schedule.0.drive.surface_field", "1 kA/m") == ["--set    schedule.0.drive (heat)"]
    spoilt = sound.replace('surface = "oxidised"', "")
    assert problems(spoilt, "workpiece.initial", "30 °C") == ["line 4   workpiece"]


def test_changes_come_after_overrides_and_keep_the_original() -> None:
    case = _billet(supply__power="100 kW", coil__turns="14")
    changed = with_changes(case, {"supply.power": "90 kW"})
    assert changed.supply is not None and changed.supply.power == pytest.approx(90e3)
    assert changed.coil is not None and changed.coil.turns == 14.0
    assert case.supply is not None and case.supply.power == pytest.approx(100e3)


def test_case_as_run_has_the_overrides_in_place() -> None:
    case = _billet(supply__power="100 kW", schedule__0__longest="60 s", output__interval="1 s")
    again = from_text(as_run(case), ".")
    assert again.overrides == ()
    for part in ("workpiece", "coil", "lining", "supply", "schedule", "readings", "output", "defaults_used"):
        assert getattr(again, part) == getattr(case, part)


def test_written_toml_reads_back() -> None:
    document = {
        "format": 1,
        "title": 'a "quoted" \\ title\nwith \x07 and °',
        "flag": True,
        "none": [],
        "table": {"x y": 1.5, "list": ["1 s", "2 s"], "inner": {"a": 1, "b": {"c": "d"}}},
        "tables": [{"a": 1}, {"b": [{"c": 2}]}],
    }
    assert tomllib.loads(to_toml(document)) == document


# -- files -------------------------------------------------------------------------------------------------


def test_file_with_byte_order_mark_and_carriage_returns(tmp_path: Path) -> None:
    path = tmp_path / "bar.toml"
    path.write_bytes(b"\xef\xbb\xbf" + starter("billet").replace("\n", "\r\n").encode())
    assert load_case(path).workpiece == _billet().workpiece


def test_missing_file(tmp_path: Path) -> None:
    path = tmp_path / "bar.toml"
    with pytest.raises(CaseError) as caught:
        load_case(path)
    assert caught.value.problems == (f"{path}: there is no such case file",)


def test_folder_instead_of_a_file(tmp_path: Path) -> None:
    with pytest.raises(CaseError) as caught:
        load_case(tmp_path)
    assert caught.value.problems[0].startswith(f"{tmp_path}: cannot be read (")


def test_file_that_is_not_utf8(tmp_path: Path) -> None:
    path = tmp_path / "bar.toml"
    path.write_bytes(b'format = 1\ntitle = "20 \xb0C"\n')
    with pytest.raises(CaseError) as caught:
        load_case(path)
    assert caught.value.problems == (f"line 2   {path}: is not UTF-8 text, save it as UTF-8",)


# -- the record --------------------------------------------------------------------------------------------


def test_a_case_is_frozen_and_travels_to_other_processes() -> None:
    case = _billet()
    with pytest.raises(FrozenInstanceError):
        case.title = "other"
    with pytest.raises(ValidationError, match="frozen"):
        case.workpiece.length = 1.0
    assert pickle.loads(pickle.dumps(case)) == case
