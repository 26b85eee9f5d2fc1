import json
import os
from pathlib import Path

import pytest

from thermal import loop
from thermal.cli.progress import Progress
from thermal.errors import BalanceError, NoConvergence, OutOfRange
from thermal.report import files

RESULTS = ["case.toml", "curves.csv", "curves.png", "curves.svg", "profiles.csv", "summary.json"]


def summary_of(folder):
    return json.loads((Path(folder) / "summary.json").read_text(encoding="utf-8"))


def test_a_run_ends_with_0_and_writes_beside_the_caller(call):
    result = call("run", "heater.toml")
    assert (result.exit_code, result.stderr) == (0, "")
    assert "Reaches 850 °C at the surface after" in result.stdout
    assert "Files: results/heater" in result.stdout
    assert sorted(os.listdir("results/heater")) == RESULTS


def test_the_folder_can_be_named(call):
    assert call("run", "heater.toml", "--out", "a/b/c", "--quiet").exit_code == 0
    assert summary_of("a/b/c")["status"] == "target"
    assert not Path("results").exists()


def test_json_is_the_summary_and_nothing_else(call):
    result = call("run", "plate.toml", "--json")
    assert result.exit_code == 0
    assert json.loads(result.stdout) == summary_of("results/plate")


def test_quiet_prints_the_verdict_only(call):
    result = call("run", "plate.toml", "--quiet")
    assert result.stdout.startswith("Reaches 250 °C in the mean after")
    assert result.stdout.count("\n") == 1


def test_set_changes_the_run_and_the_case_that_is_kept(call):
    result = call("run", "heater.toml", "--set", "schedule.0.until.surface=400 °C", "--set", 'title="Other"', "--quiet")
    assert result.stdout.startswith("Reaches 400 °C")
    assert 'title = "Other"' in Path("results/heater/case.toml").read_text(encoding="utf-8")
    again = call("run", "results/heater/case.toml", "--quiet")
    assert again.stdout == result.stdout


def test_a_target_out_of_reach_ends_with_3_and_is_written(call):
    result = call("run", "heater.toml", "--set", "schedule.0.longest=5 s")
    assert (result.exit_code, result.stderr) == (3, "")
    assert "Not reached within 5 s" in result.stdout
    assert summary_of("results/heater")["status"] == "cannot_reach"


def test_a_piece_that_melts_ends_with_3(call):
    changes = ("workpiece.material=aluminium-6082", 'schedule.0.until={mean = "574 °C", spread = "0.01 K"}')
    result = call("run", "heater.toml", "--set", changes[0], "--set", changes[1], "--quiet")
    assert result.exit_code == 3
    assert summary_of("results/heater")["status"] == "limit"


@pytest.mark.parametrize("error", [NoConvergence("gave up"), BalanceError("not closed"), OutOfRange("too far")])
def test_no_result_ends_with_4_and_writes_nothing(call, monkeypatch, error):
    def fail(*_):
        raise error

    monkeypatch.setattr(loop, "run", fail)
    result = call("run", "heater.toml")
    assert (result.exit_code, result.stdout, result.stderr) == (4, "", f"{error}\n")
    assert not Path("results").exists()


def interrupt_after(monkeypatch, time):
    def see(self, state):
        if state.time > time:
            raise KeyboardInterrupt

    monkeypatch.setattr(Progress, "see", see)


def test_an_interrupted_run_ends_with_130_and_keeps_what_there_was(call, monkeypatch):
    interrupt_after(monkeypatch, 10.0)
    result = call("run", "heater.toml")
    assert result.exit_code == 130
    assert result.stderr == "interrupted: writing what there is, marked incomplete\n"
    assert result.stdout.splitlines()[2].startswith("Interrupted at 1")
    told = summary_of("results/heater")
    assert told["status"] == "interrupted"
    assert told["stages"][-1]["reason"] == "interrupted"
    assert "incomplete" in told["sentence"]


def test_an_interrupt_outside_the_march_ends_with_130(call, monkeypatch):
    def stop(*_):
        raise KeyboardInterrupt

    monkeypatch.setattr(loop, "run", stop)
    result = call("run", "heater.toml")
    assert (result.exit_code, result.stdout) == (130, "")
    assert result.stderr == "interrupted, nothing was written\n"


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (("run", "missing.toml"), "there is no such case file"),
        (("run", "heater.toml", "--set", "workpiece.diameter=50"), 'workpiece.diameter: write the unit: "50 mm"'),
        (("run", "heater.toml", "--set", "workpiece.material=stel"), "unknown material 'stel'"),
        (("run", "heater.toml", "--set", "nonsense"), "'nonsense' is not path=value"),
        (("run", "heater.toml", "--set", "schedul=1"), "unknown key, did you mean 'schedule'"),
        (("run", "heater.toml", "--out", "heater.toml"), "is a file, results go into a folder"),
        (("run", "heater.toml", "--outt", "x"), "No such option"),
        (("run",), "Missing argument"),
        (("heat", "heater.toml"), "No such command"),
        (("check", "missing.toml"), "there is no such case file"),
        (("new", "bilet"), "did you mean 'billet'?"),
        (("new", "billet", "heater.toml"), "is there already"),
        (("new", "billet", "no/such/folder/x.toml"), "cannot be written"),
        (("material", "show", "stel"), "unknown material 'stel'"),
        (("material", "show", "mine.toml"), "mine.toml: cannot be read"),
    ],
)
def test_bad_input_ends_with_2_and_a_clean_message(call, arguments, words):
    result = call(*arguments)
    assert (result.exit_code, result.stdout) == (2, "")
    assert words in result.stderr
    assert "Traceback" not in result.stderr
    assert not Path("results").exists()


def test_every_mistake_of_a_case_is_told_with_its_line(call):
    text = Path("plate.toml").read_text(encoding="utf-8")
    text = text.replace('thickness = "25 mm"', "thickness = 25").replace('power = "50 kW"', 'power = "60 kHz"')
    Path("plate.toml").write_text(text, encoding="utf-8")
    result = call("run", "plate.toml")
    first, second = result.stderr.splitlines()
    assert first.startswith("line 6 ")
    assert "workpiece.thickness" in first
    assert "'60 kHz' is a frequency" in second


def test_results_are_not_overwritten(call):
    assert call("run", "heater.toml", "--quiet").exit_code == 0
    before = Path("results/heater/summary.json").read_bytes()
    refused = call("run", "heater.toml")
    assert (refused.exit_code, refused.stdout) == (2, "")
    assert "add --force to replace the results" in refused.stderr
    assert Path("results/heater/summary.json").read_bytes() == before
    forced = call("run", "heater.toml", "--force", "--quiet", "--set", "title=new")
    assert forced.exit_code == 0
    assert summary_of("results/heater")["title"] == "new"


def test_the_refusal_comes_before_the_run(call, monkeypatch):
    Path("results/heater").mkdir(parents=True)
    Path("results/heater/notes.txt").write_text("keep")

    def never(*_):
        raise AssertionError("ran")

    monkeypatch.setattr(loop, "run", never)
    assert call("run", "heater.toml").exit_code == 2
    assert "holds 'notes.txt'" in call("run", "heater.toml", "--force").stderr


def test_an_answer_that_cannot_be_written_is_still_shown(call, monkeypatch):
    def full(*_):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(files, "save_curves", full)
    result = call("run", "heater.toml", "--quiet")
    assert result.exit_code == 2
    assert result.stdout.startswith("Reaches 850 °C")
    assert result.stderr == f"{Path.cwd() / 'results' / 'heater'}: cannot be written (No space left on device)\n"
    assert os.listdir("results") == []
