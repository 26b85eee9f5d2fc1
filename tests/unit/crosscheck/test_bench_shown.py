"""The benchmark as the user sees it."""

import json
import math
import os
import subprocess
import sys
from dataclasses import replace
from pathlib import Path

import pytest
from typer.testing import CliRunner

from thermal.case import load_case
from thermal.cli.bench import THREADS
from thermal.cli.main import app
from thermal.crosscheck import bench
from thermal.crosscheck.bench import OWN, Benchmark, CaseTime, ColdStart, Measured, with_fipy
from thermal.crosscheck.bench_questions import QuestionTime
from thermal.crosscheck.bench_sweep import LoopOf, OwnSweep, SweepBench
from thermal.crosscheck.timing import Effort, Timing
from thermal.report.benchmark import benchmark_json, benchmark_text, missing_text

ROD = """
format = 1
workpiece = { shape = "cylinder", diameter = "20 mm", length = "100 mm", material = "copper", emissivity = 0.1 }
[[schedule]]
stage = "heat"
drive = { absorbed_power = "1 kW", frequency = "10 kHz" }
duration = "10 s"
"""
ROWS = (
    Measured("P1s", OWN, "0.1 K", Timing(0.004, 7), 0.053, 66, 325),
    Measured("P1", OWN, "0.1 K", Timing(0.02, 7), 0.08, 184, 841),
    Measured("P1", OWN, "1 K", Timing(0.01, 7), 0.9, 86, 405),
    Measured("P1", "SciPy BDF", "rtol 1e-4", Timing(0.2, 5), 1.0, 163, 8314),
    Measured("P1", "SciPy BDF", "rtol 1e-2", Timing(0.1, 5), 24.0, 60, 3000),
)
SWEEP = SweepBench(
    12,
    4,
    (OwnSweep(1.0, 0.25, 1.25, 0.8, 1.5, 900, 4000), OwnSweep(3.0, 0.2, 1.2, 0.6, 5.5, 600, 2800)),
    (
        LoopOf("SciPy BDF", "defaults", 6.0, 5.9, 8.0, 1200, 55000),
        LoopOf("SciPy LSODA", "rtol 1e-4", 8.0, 7.6, 11.1, 3000, 99000),
    ),
)
QUESTIONS = (
    QuestionTime("time", None, None, "schedule asks for no temperature"),
    QuestionTime("peak", Timing(0.02, 7), 0.5, None),
    QuestionTime("compare", Timing(0.1, 7), 2.5, None),
)
FOUND = Benchmark(
    ROWS,
    SWEEP,
    CaseTime("heater", Timing(0.04, 7), 100, 500, 2.0),
    QUESTIONS,
    ColdStart(Timing(0.6, 7), Timing(0.2, 7)),
    (),
    "Mill 3",
)
ABSENT = Benchmark(ROWS, SWEEP, None, (), FOUND.cold, ("FiPy", "scikit-sundae"), "Mill 3")


@pytest.fixture
def call(tmp_path, monkeypatch):
    """Calls the command in an empty folder with what it would measure put in its place."""
    asked = []
    monkeypatch.chdir(tmp_path)
    for name in THREADS:
        monkeypatch.setenv(name, "2")

    def measure(case, quick, announce):
        asked.append((case, quick))
        return FOUND

    monkeypatch.setattr(bench, "measure", measure)

    def wanted(*words):
        return CliRunner().invoke(app, ["bench", *words])

    wanted.asked = asked
    return wanted


def lines_with(text, words):
    return [line.split() for line in text.splitlines() if words in line]


def test_ratios_stand_only_where_errors_compare():
    text = benchmark_text(FOUND, None)
    (close,) = lines_with(text, "BDF, rtol 1e-4")
    (far,) = lines_with(text, "BDF, rtol 1e-2")
    assert close[4:] == ["200.0", "1", "163", "8314", "20", "1", "K"]
    assert far[4:] == ["100.0", "24", "60", "3000"]
    assert "3.0 times as long as one that only imports NumPy" in " ".join(text.split())
    assert "heater: 40.0 ms, 100 steps, 500 field solves; 2.0 times as long as P1 at 0.1 K." in text
    assert "Mill 3" in text
    assert "thermal bench --show-fipy" in text
    assert "not installed" not in text


def test_a_sweep_is_compared_where_errors_compare_by_the_clock_and_by_the_core():
    text = benchmark_text(FOUND, None)
    (close,) = lines_with(text, "BDF, defaults")
    (far,) = lines_with(text, "LSODA, rtol 1e-4")
    assert close[3:] == ["6", "5.9", "8", "30", "9.83", "3", "K"]
    assert far[4:] == ["8", "7.6", "11"]
    words = " ".join(text.split())
    assert "with the start of its 4 processes, the 12 runs at 3 K take 1.20 s" in words
    assert "against SciPy BDF with its defaults that is a ratio of 5." in words
    assert "80 or 100 kA/m, 2, 3 or 5 kHz and 50 or 60 mm" in words
    assert "xtrapolated" not in text
    alone = benchmark_text(replace(FOUND, sweep=replace(SWEEP, processes=1)), None)
    assert "one at a time" in alone
    assert "with the start" not in alone


def test_fipy_is_extrapolated_from_its_run_of_p1_and_marked():
    p1 = Measured("P1", "FiPy script", "1.5 K a step", Timing(20.0, 1), 4.0, 900, 2000)
    swept = with_fipy(SWEEP, [*ROWS, Measured("P1s", "FiPy script", "x", Timing(3.0, 1), 4.0, 1, 2), p1])
    assert swept.rivals[:-1] == SWEEP.rivals
    text = benchmark_text(replace(FOUND, sweep=swept), None)
    (line,) = lines_with(text, "FiPy script, 1.5 K a step (extrapolated)")
    assert line[-7:] == ["240", "240", "4", "1.2e+03", "400", "3", "K"]
    assert "the time of P1 times the number of variants" in " ".join(text.split())
    entry = benchmark_json(replace(FOUND, sweep=swept), None)["sweep"]["rivals"][-1]
    assert (entry["extrapolated"], entry["steps"]) == (True, None)
    assert with_fipy(SWEEP, ROWS) == SWEEP


def test_questions_cost_runs_and_those_not_asked_say_why():
    words = " ".join(benchmark_text(FOUND, None).split())
    assert (
        "Questions, in runs of the case as it is: peak 0.5; compare of steel-c45, aluminium-6082, copper 2.5." in words
    )
    assert "Not timed: time (schedule asks for no temperature)." in words
    assert "Questions, in runs" not in benchmark_text(ABSENT, None)


def test_what_is_missing_is_one_sentence():
    text = " ".join(benchmark_text(ABSENT, "cases/x.toml").split())
    assert missing_text(ABSENT.missing) in text
    assert "FiPy and scikit-sundae are not installed" in text
    assert "cases/x.toml is not here" in text
    assert missing_text(("FiPy",)).startswith("FiPy is not installed")


def test_json_has_every_field_of_every_row():
    found = json.loads(json.dumps(benchmark_json(FOUND, None), allow_nan=False))
    assert len(found["rows"]) == len(ROWS)
    assert found["rows"][3] == {
        "problem": "P1",
        "solver": "SciPy BDF",
        "setting": "rtol 1e-4",
        "time_s": 0.2,
        "turns": 5,
        "error_K": 1.0,
        "steps": 163,
        "right_hand_sides": 8314,
        "compared_with": "1 K",
        "ratio": pytest.approx(20.0),
    }
    assert found["rows"][4]["ratio"] is None
    assert found["rows"][0]["compared_with"] is None
    assert found["case"]["times_P1_at_0.1_K"] == 2.0
    assert (found["sweep"]["runs"], found["sweep"]["processes"]) == (12, 4)
    assert found["sweep"]["own"][1]["error_K"] == 5.5
    close, far = found["sweep"]["rivals"]
    assert close["compared_with_K"] == 3.0
    assert close["ratio"] == pytest.approx(30.0)
    assert close["ratio_with_start"] == pytest.approx(5.0)
    assert close["ratio_per_core"] == pytest.approx(5.9 / 0.6)
    assert far["ratio"] is far["ratio_with_start"] is far["ratio_per_core"] is None
    assert [each["runs_of_the_case"] for each in found["questions"]] == [None, 0.5, 2.5]
    assert found["questions"][0]["not_timed"] == "schedule asks for no temperature"
    assert found["cold_start"]["ratio"] == pytest.approx(3.0)
    assert {"thermal", "numpy", "scipy"} <= set(found["versions"])
    assert benchmark_json(ABSENT, "x.toml")["not_installed"] == ["FiPy", "scikit-sundae"]


def test_the_usual_case_is_timed_where_it_is_and_said_to_be_missing_where_not(call):
    assert "cases/billet_forging.toml is not here" in " ".join(call().stdout.split())
    Path("cases").mkdir()
    Path("cases/billet_forging.toml").touch()
    assert "is not here" not in call("--quick").stdout
    assert json.loads(call("mine.toml", "--json").stdout)["case_not_found"] is None
    assert call.asked == [(None, False), (Path("cases/billet_forging.toml"), True), (Path("mine.toml"), False)]


def test_one_thread_for_all(call):
    call()
    assert [os.environ[name] for name in THREADS] == ["1"] * len(THREADS)


def test_the_fipy_script_is_printed_whole(call):
    done = call("--show-fipy")
    assert call.asked == []
    script = Path(bench.__file__).with_name("fipy_script.py").read_text(encoding="utf-8")
    assert done.stdout == script
    assert "fipy.TransientTerm" in script


def test_a_case_that_is_not_there_is_one_sentence(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    for name in THREADS:
        monkeypatch.setenv(name, "1")
    done = CliRunner().invoke(app, ["bench", "nowhere.toml"])
    assert done.exit_code == 2
    assert "nowhere.toml" in done.stderr
    assert done.stderr.count("\n") == 1


def test_a_case_is_timed_beside_p1(tmp_path):
    path = tmp_path / "rod.toml"
    path.write_text(ROD, encoding="utf-8")
    told = []
    found = bench.time_case(load_case(path), Effort(1, 1.0), told.append)
    assert (found.name, found.timing.turns) == ("rod", 1)
    assert found.evaluations > 3 * found.steps > 0
    assert 0.0 < found.times_p1 < math.inf
    assert told == ["rod, as written", "P1, 0.1 K"]


@pytest.mark.slow
def test_quick_from_the_command_line(tmp_path):
    command = [sys.executable, "-W", "error", "-m", "thermal", "bench", "--quick", "--json"]
    done = subprocess.run(command, cwd=tmp_path, capture_output=True, encoding="utf-8", check=True)
    assert done.stderr == ""
    found = json.loads(done.stdout)
    rows = found["rows"]
    assert {row["problem"] for row in rows} == {"P1s", "P1"}
    assert {row["solver"] for row in rows} == {
        OWN,
        "SciPy BDF",
        "SciPy LSODA",
        "SciPy LSODA banded",
    }
    own = [row for row in rows if row["solver"] == OWN]
    assert len(own) == 8
    for row in own:
        assert row["error_K"] <= 4.0 * float(row["setting"].removesuffix(" K"))
    for row in rows:
        assert row["time_s"] > 0.0
        assert row["right_hand_sides"] >= row["steps"] > 0
    assert any(row["ratio"] is not None for row in rows)
    sweep = found["sweep"]
    assert [row["solver"] for row in sweep["rivals"]] == ["SciPy BDF", "SciPy LSODA"]
    assert not any(row["extrapolated"] for row in sweep["rivals"])
    bdf = sweep["rivals"][0]
    assert bdf["ratio_per_core"] > 4.0  # 10 when it was written; by the processor, so a busy machine does not matter
    assert found["questions"] == []
    assert found["cold_start"]["P1_s"] > 0.0
