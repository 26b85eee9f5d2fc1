import json
import os
from pathlib import Path

import pytest
from quick_case import QUICK
from tiny_materials import constant_material

from thermal.errors import NoConvergence
from thermal.questions import answer, compare, frequency, peak_temperature, time_to_temperature
from thermal.report import answer_files

ASK = {
    "time": ("time", "pin.toml", "--to", "150 °C"),
    "peak": ("peak", "pin.toml", "--absorbed", "20 W"),
    "compare": ("compare", "pin.toml", "--materials", "copper, brass-cuzn37"),
    "frequency": ("frequency", "pin.toml"),
}
WORKS = {
    "time": (time_to_temperature, "time_to_temperature"),
    "peak": (peak_temperature, "peak_temperature"),
    "compare": (compare, "compare"),
    "frequency": (frequency, "frequency_window"),
}
WEAK = ("--set", "schedule.0.drive.absorbed_power=1 W")


@pytest.fixture(autouse=True)
def pin(call):
    Path("pin.toml").write_text(QUICK, encoding="utf-8")


def told_in(folder):
    return json.loads((Path(folder) / "answer.json").read_text(encoding="utf-8"))


@pytest.mark.parametrize("question", list(ASK))
def test_an_answer_ends_with_0_and_is_written_beside_the_caller(call, question):
    result = call(*ASK[question])
    assert (result.exit_code, result.stderr) == (0, "")
    assert result.stdout.startswith("Copper pin\n\n")
    assert f"Files: results/pin-{question}" in result.stdout
    wanted = {"answer.json", "case.toml", *answer_files.PICTURES[question]}
    assert set(os.listdir(f"results/pin-{question}")) == wanted
    assert told_in(f"results/pin-{question}")["question"] == question


@pytest.mark.parametrize("question", list(ASK))
def test_json_is_the_answer_and_nothing_else(call, question):
    result = call(*ASK[question], "--json", "--out", "a/b/c")
    assert result.exit_code == 0
    assert json.loads(result.stdout) == told_in("a/b/c")
    assert not Path("results").exists()


@pytest.mark.parametrize("question", ["time", "compare"])
def test_an_earlier_answer_is_replaced(call, question):
    for title in ("first", "second"):
        assert call(*ASK[question], "--out", "here", "--set", f"title={title}").exit_code == 0
    assert told_in("here")["title"] == "second"
    assert 'title = "second"' in Path("here/case.toml").read_text(encoding="utf-8")
    assert not [name for name in os.listdir() if name.startswith(".")]


def test_the_case_that_is_kept_asks_the_same_again(call):
    first = call("time", "pin.toml", "--to", "150 °C", "--set", "workpiece.diameter=5 mm", "--json")
    again = call("time", "results/pin-time/case.toml", "--to", "150 °C", "--json")
    assert told_in("results/pin-time")["time_s"] == json.loads(again.stdout)["time_s"]
    assert json.loads(first.stdout)["time_s"] == json.loads(again.stdout)["time_s"]


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        ((*ASK["time"], *WEAK), "150 °C in the core is never reached: it settles at"),
        (("peak", "pin.toml"), "so the piece melts unless the power is taken back"),
        ((*ASK["compare"], *WEAK), "copper never, brass-cuzn37 never"),
    ],
)
def test_what_cannot_be_reached_ends_with_3_and_is_written(call, arguments, words):
    result = call(*arguments)
    assert (result.exit_code, result.stderr) == (3, "")
    assert words in " ".join(result.stdout.split())
    assert told_in(f"results/pin-{arguments[0]}")["met"] is False


@pytest.mark.parametrize("question", list(ASK))
def test_no_solution_ends_with_4_and_writes_nothing(call, monkeypatch, question):
    def fail(*_, **__):
        raise NoConvergence("gave up")

    monkeypatch.setattr(*WORKS[question], fail)
    result = call(*ASK[question])
    assert (result.exit_code, result.stdout, result.stderr) == (4, "", "gave up\n")
    assert not Path("results").exists()


@pytest.mark.parametrize("question", ["time", "peak", "compare"])
def test_interrupted_ends_with_130_and_writes_nothing(call, monkeypatch, question):
    whole = answer.run

    def stopped(setup, on_state=None):
        def stop(state):
            if state.time > 0.1:
                raise KeyboardInterrupt

        return whole(setup, stop)

    monkeypatch.setattr(answer, "run", stopped)
    result = call(*ASK[question])
    assert (result.exit_code, result.stdout) == (130, "")
    assert result.stderr == "interrupted, nothing was written\n"
    assert not Path("results").exists()


@pytest.mark.parametrize("question", list(ASK))
def test_a_folder_with_something_else_is_refused_before_time_is_spent(call, monkeypatch, question):
    def never(*_, **__):
        raise AssertionError("asked")

    monkeypatch.setattr(*WORKS[question], never)
    Path("here").mkdir()
    Path("here/notes.txt").write_text("keep")
    result = call(*ASK[question], "--out", "here")
    assert (result.exit_code, result.stdout) == (2, "")
    assert result.stderr == "here: holds 'notes.txt', which is not of those results; name another with --out\n"
    assert os.listdir("here") == ["notes.txt"]
    assert "is a file" in call(*ASK[question], "--out", "pin.toml").stderr


def test_the_answer_to_another_question_is_not_replaced(call):
    assert call(*ASK["peak"], "--out", "here").exit_code == 0
    result = call(*ASK["frequency"], "--out", "here")
    assert result.exit_code == 2
    assert "holds 'peak.png'" in result.stderr


@pytest.mark.parametrize("question", list(ASK))
@pytest.mark.parametrize("as_json", [True, False])
def test_an_answer_that_cannot_be_written_is_still_shown(call, monkeypatch, question, as_json):
    def full(*_):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(answer_files, "_picture", full)
    result = call(*ASK[question], *(["--json"] if as_json else []))
    assert result.exit_code == 2
    assert result.stderr == f"{Path.cwd() / 'results'}/pin-{question}: cannot be written (No space left on device)\n"
    if as_json:
        assert json.loads(result.stdout)["met"] is True
    else:
        assert result.stdout.startswith("Copper pin\n\n")
        assert "Files:" not in result.stdout
    assert os.listdir("results") == []


@pytest.mark.parametrize(
    ("arguments", "sentence"),
    [
        (("time", "pin.toml", "--to", "150"), '--to    write the unit: "150 °C" (accepted: °C, K, °F)'),
        (("time", "pin.toml", "--to", "warm"), "--to    "),
        (("time", "pin.toml", "--to", "3 kW"), "--to    "),
        (("time", "pin.toml", "--to", "-300 °C"), "--to    '-300 °C' is below absolute zero (-273.15 °C)"),
        (("time", "pin.toml", "--to", "10 °C"), "--to    10 °C is no rise: the workpiece begins at 20 °C"),
        (("time", "pin.toml", "--to", "1085 °C"), "--to    1085 °C is not below the solidus of copper (1085 °C)"),
        (
            ("time", "pin.toml", "--to", "90 °C", "--at", "here"),
            "--at    there is no reading 'here' (the case has: surface, core, mean, maximum)",
        ),
        (
            ("time", "pin.toml", "--to", "90 °C", "--at", "spread"),
            "--at    the spread is a difference, not a temperature (the case has: surface, core, mean, maximum)",
        ),
        (
            ("time", "pin.toml", "--to", "90 °C", "--set", 'schedule=[{stage = "transfer", duration = "1 s"}]'),
            "schedule    has no heat stage: nothing drives the workpiece",
        ),
        (("peak", "pin.toml", "--power", "100 W"), "supply    is missing: without coil and supply only an absorbed"),
        (("peak", "pin.toml", "--absorbed", "100"), '--absorbed    write the unit: "100 kW" (accepted: W, kW)'),
        (("peak", "pin.toml", "--power", "9 A", "--absorbed", "1 W"), "--power    "),
        (("peak", "pin.toml", "--power", "9 W", "--absorbed", "1 W"), "give the power of the supply or the power abs"),
        (("compare", "pin.toml", "--materials", ""), "--materials    name at least one material"),
        (("compare", "pin.toml", "--materials", "coper"), "unknown material 'coper', did you mean 'copper'?"),
        (("compare", "pin.toml", "--materials", "copper,copper"), "--materials    'copper' is named twice"),
        (("compare", "pin.toml", "--materials", "mine.toml"), "mine.toml: cannot be read"),
        (
            ("compare", "pin.toml", "--materials", "copper", "--target", "copper"),
            "--target    'copper' is not key=temperature, write for example copper=\"800 °C\"",
        ),
        (("compare", "pin.toml", "--materials", "copper", "--target", "copper=90"), '--target    write the unit: "90'),
        (
            ("compare", "pin.toml", "--materials", "copper", "--target", "brass=90 °C"),
            "--target    'brass' is not among the materials (copper)",
        ),
        (("compare", "pin.toml", "--materials", "copper", "--to", "2000 °C"), "not below the solidus of copper"),
        (("compare", "pin.toml", "--materials", "copper", "--at", "here"), "--at    there is no reading 'here'"),
        (("frequency", "pin.toml", "--to", "2000 °C"), "--to    2000 °C is not below the solidus of copper (1085 °C)"),
        (
            (
                "frequency",
                "pin.toml",
                "--set",
                'schedule.0={stage = "heat", drive = {absorbed_power = "9 W", frequency = "1 kHz"}, duration = "1 s"}',
            ),
            "schedule    asks for no temperature: name one with --to",
        ),
        (("peak", "missing.toml"), "there is no such case file"),
        (("frequency", "pin.toml", "--set", "workpiece.diameter=50"), 'workpiece.diameter: write the unit: "50 mm"'),
        (("time", "pin.toml"), "Missing option '--to'"),
        (("compare", "pin.toml"), "Missing option '--materials'"),
    ],
)
def test_bad_input_ends_with_2_and_one_sentence(call, arguments, sentence):
    result = call(*arguments)
    assert (result.exit_code, result.stdout) == (2, "")
    assert sentence in result.stderr
    assert "Traceback" not in result.stderr
    assert "Missing" in sentence or result.stderr.count("\n") == 1
    assert not Path("results").exists()


def test_the_unit_may_be_another(call):
    told = [json.loads(call("time", "pin.toml", "--to", T, "--json").stdout) for T in ("150 °C", "302 °F", "423.15 K")]
    assert told[1]["time_s"] == pytest.approx(told[0]["time_s"], rel=1e-9)
    assert told[2]["time_s"] == pytest.approx(told[0]["time_s"], rel=1e-9)


@pytest.mark.parametrize("question", ["time", "peak", "frequency"])
def test_materials_of_ones_own_folder(call, question):
    Path("own").mkdir()
    text = constant_material(60.0, 5e-8).replace('key = "constant"', 'key = "my-alloy"')
    Path("own/my-alloy.toml").write_text(text, encoding="utf-8")
    changes = ("--set", "workpiece.material=my-alloy")
    assert "unknown material 'my-alloy'" in call(*ASK[question], *changes).stderr
    result = call(*ASK[question], *changes, "--materials", "own")
    assert (result.exit_code, result.stderr) == (0, "")
    # The answer stands on its own: the material is kept beside the case.
    assert call(*ASK[question][:1], f"results/pin-{question}/case.toml", *ASK[question][2:]).exit_code == 0


def test_metals_of_ones_own_are_compared_by_file(call):
    Path("mine.toml").write_text(constant_material(60.0, 5e-8), encoding="utf-8")
    result = call("compare", "pin.toml", "--materials", "copper,mine.toml", "--target", "mine.toml=300 °C", "--json")
    assert result.exit_code == 0
    copper, mine = json.loads(result.stdout)["materials"]
    assert (copper["key"], mine["key"]) == ("copper", "constant")
    assert mine["to_own_target"]["target_C"] == pytest.approx(300.0)
    assert copper["to_own_target"] is None
