"""Sweeps as a user makes them: from the command line, in processes, interrupted, and long."""

import json
import os
import signal
import subprocess
import sys
import time
from dataclasses import replace
from pathlib import Path

import pytest
from quick_case import QUICK, UNDRIVEN
from typer.testing import CliRunner

from thermal.case import from_text
from thermal.cli.main import app
from thermal.questions import sweep as question
from thermal.questions.sweep import sweep, workers
from thermal.questions.sweep_plan import axis_of
from thermal.report import sweep as report

COMMAND = (sys.executable, "-W", "error", "-m", "thermal", "sweep")
DIAMETERS = "workpiece.diameter=6 mm,8 mm"


@pytest.fixture
def call(tmp_path, monkeypatch):
    """Calls the command in a folder that holds pin.toml."""
    monkeypatch.chdir(tmp_path)
    Path("pin.toml").write_text(QUICK, encoding="utf-8")

    def wanted(*words: str):
        return CliRunner().invoke(app, ["sweep", "pin.toml", *words])

    return wanted


def test_any_number_of_workers_gives_the_same_files(call):
    grid = ("--over", "schedule.0.drive.absorbed_power=200 W:500 W:3", "--over", "workpiece.diameter=6 mm:12 mm:4")
    alone = call(*grid, "--workers", "1", "--out", "alone")
    three = call(*grid, "--workers", "3", "--out", "three", "--quiet")
    assert (alone.exit_code, alone.stderr) == (0, "12 runs (3 x 4)\n")
    assert (three.exit_code, three.stderr) == (0, "")
    assert three.stdout.startswith("12 runs: targets met in ")
    assert three.stdout.count("\n") == 1
    for name in ("sweep.csv", "sweep.svg", "sweep.png"):
        assert Path("alone", name).read_bytes() == Path("three", name).read_bytes()
    assert len(Path("alone/sweep.csv").read_text(encoding="utf-8").splitlines()) == 13


def test_a_finished_sweep_is_shown_again_without_a_run(call):
    first = call("--over", DIAMETERS, "--workers", "1")
    again = call("--over", DIAMETERS, "--workers", "1", "--json")
    assert again.stderr == "2 runs, 2 of them are there already\n"
    assert len(json.loads(again.stdout)["runs"]) == 2
    assert (first.exit_code, again.exit_code) == (0, 0)
    assert Path("results/pin-sweep/sweep.csv").exists()


def test_another_sweep_is_not_mixed_in(call):
    call("--over", DIAMETERS, "--workers", "1")
    other = call("--over", "workpiece.diameter=6 mm,9 mm", "--workers", "1")
    assert (other.exit_code, other.stdout) == (2, "")
    assert "results/pin-sweep: holds another sweep (its axes are others)" in other.stderr
    assert call("--over", "workpiece.diameter=6 mm,9 mm", "--workers", "1", "--force", "--quiet").exit_code == 0


@pytest.mark.parametrize(
    ("words", "told"),
    [
        (("--over", "workpiece.diameter"), "is not path=values"),
        (("--over", "workpiece.diamter=1 mm,2 mm"), "workpiece.diamter: unknown key, did you mean 'diameter'?"),
        (("--over", DIAMETERS, "--set", "workpiece.length=2 kW"), "--set    workpiece.length: '2 kW' is a power"),
        (("--over", DIAMETERS, "--workers", "0"), "--workers"),
        (("--over", DIAMETERS, "--out", "pin.toml"), "pin.toml: is a file"),
        ((), "--over"),
    ],
)
def test_bad_input_ends_with_2_and_leaves_nothing(call, words, told):
    done = call(*words)
    assert (done.exit_code, done.stdout) == (2, "")
    assert told in done.stderr
    assert not Path("results").exists()


def test_a_sweep_without_any_result_ends_with_4_and_tells_why(call):
    limit = ("--set", "surroundings={}", "--set", "workpiece.initial=300 K")
    done = call("--over", "surroundings.temperature=100 K,110 K", *limit, "--workers", "1")
    assert done.exit_code == 4
    assert "2 runs: no result in 2." in done.stdout
    assert "No picture: no run met its target." in done.stdout
    assert os.listdir("results/pin-sweep") and not Path("results/pin-sweep/sweep.png").exists()
    assert len(Path("results/pin-sweep/sweep.csv").read_text(encoding="utf-8").splitlines()) == 3


def test_a_missed_target_is_a_result(call):
    done = call("--over", DIAMETERS, "--set", "schedule.0.longest=1 s", "--workers", "1", "--quiet")
    assert (done.exit_code, done.stdout) == (0, "2 runs: a target missed in 2.\n")


def test_a_lost_worker_ends_with_4_and_says_how_to_go_on(call, monkeypatch):
    def lost(*_, **__):
        raise question.WorkerLost("a worker process ended on its own")

    monkeypatch.setattr(question, "sweep", lost)
    done = call("--over", DIAMETERS, "--workers", "1")
    assert (done.exit_code, done.stdout) == (4, "")
    assert "what ended is kept in results/pin-sweep, the same command goes on from there" in done.stderr


def test_an_answer_that_cannot_be_written_is_still_shown(call, monkeypatch):
    def full(*_):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(report, "save_figure", full)
    done = call("--over", DIAMETERS, "--workers", "1", "--quiet")
    assert done.exit_code == 2
    assert done.stdout.startswith("2 runs: targets met in 2.")
    assert done.stderr == "results/pin-sweep: cannot be written (No space left on device)\n"


@pytest.mark.skipif(os.name != "posix", reason="sends a signal")
@pytest.mark.parametrize("count", ["1", "2"])
def test_interrupted_and_gone_on_with_equals_uninterrupted(call, tmp_path, count):
    axis = "workpiece.diameter=6 mm:12 mm:80"
    words = ("--over", axis, "--workers", count, "--out", "cut")
    process = subprocess.Popen(
        [*COMMAND, "pin.toml", *words],
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        encoding="utf-8",
        start_new_session=True,
    )
    runs = tmp_path / "cut" / "runs.jsonl"
    until = time.monotonic() + 120.0
    while not (runs.exists() and runs.read_bytes().count(b"\n") >= 5) and time.monotonic() < until:
        time.sleep(0.02)
    # As a terminal does: to the whole group, so that the workers must not mind it.
    os.killpg(process.pid, signal.SIGINT)
    stdout, stderr = process.communicate(timeout=120)
    kept = runs.read_bytes().count(b"\n")
    assert (process.returncode, stdout) == (130, "")
    assert f"interrupted: {kept} of 80 runs are kept in cut, the same command goes on from there" in stderr
    assert "Traceback" not in stderr
    assert 5 <= kept < 80
    assert not (tmp_path / "cut" / "sweep.csv").exists()
    on = call(*words)
    assert on.exit_code == 0
    assert f"80 runs, {kept} of them are there already" in on.stderr
    whole = sweep(from_text(QUICK, ".", name="pin"), [axis_of(axis)])
    assert (tmp_path / "cut" / "sweep.csv").read_text(encoding="utf-8") == report.sweep_csv(whole)


@pytest.mark.skipif(os.name != "posix", reason="needs a pseudo-terminal")
def test_progress_on_a_terminal(call):
    master, slave = os.openpty()
    done = subprocess.run(
        [*COMMAND, "pin.toml", "--over", "workpiece.diameter=6 mm:12 mm:40", "--workers", "1"],
        stdout=subprocess.PIPE,
        stderr=slave,
        check=True,
    )
    os.close(slave)
    seen = os.read(master, 100_000).decode()
    os.close(master)
    assert done.stdout
    assert seen.startswith("40 runs\r\n")
    assert "40 of 40 runs" in seen
    assert " runs/s   " in seen
    assert " left" in seen
    assert "\x1b" not in seen


def resident(process: int) -> float:
    """Memory of a process [MB]."""
    pages = int(Path(f"/proc/{process}/statm").read_text().split()[1])
    return pages * os.sysconf("SC_PAGE_SIZE") / 1e6


@pytest.mark.slow
@pytest.mark.skipif(not Path("/proc/self/statm").exists(), reason="reads /proc")
def test_many_runs_need_no_more_memory_than_a_few(tmp_path):
    """This process grows by the rows it returns, 1.8 kB each, a worker by half a megabyte (measured to 10,000 runs)."""
    case = from_text(UNDRIVEN, ".", name="pin")
    axes = (axis_of("workpiece.diameter=6 mm:12 mm:100"), axis_of("schedule.0.drive.absorbed_power=100 W:500 W:20"))
    memory: dict[int, tuple[float, ...]] = {}

    def watch(done, _):
        if (done >= 200 and 200 not in memory) or done == 2000:
            memory[200 if 200 not in memory else done] = tuple(map(resident, (os.getpid(), *processes)))

    with workers(2) as executor:
        processes = sorted(dict(executor.map(_clock, [0.5] * 4)))
        assert len(processes) == 2
        found = sweep(case, axes, executor=executor, folder=tmp_path / "s", progress=watch)
    assert len(found.rows) == 2000
    assert {row.status for row in found.rows} == {"finished"}
    growth = [after - before for before, after in zip(memory[200], memory[2000], strict=True)]
    print(f"memory [MB] at 200 runs: {memory[200]}, growth to 2000: {growth}")
    assert growth[0] < 40.0
    assert max(growth[1:]) < 10.0


def _clock(delay: float) -> tuple[int, float]:
    """Process and its processor time [s]."""
    time.sleep(delay)
    return os.getpid(), time.process_time()


@pytest.mark.slow
@pytest.mark.skipif("TIMING" not in os.environ, reason="judges time: set TIMING on a machine with two idle cores")
def test_two_workers_halve_the_time():
    """Judged by processor time and by how busy the workers are kept: the clock on the wall tells who else is working.

    With both cores to itself a sweep takes the processor time of all its processes, halved.
    """
    case = from_text(QUICK, ".", name="pin")
    axes = (axis_of("workpiece.diameter=6 mm:12 mm:300"),)
    began = time.process_time()
    alone = sweep(case, axes)
    one = time.process_time() - began
    with workers(2) as executor:
        before = dict(executor.map(_clock, [0.5] * 4))
        here, began = time.process_time(), time.perf_counter()
        shared = sweep(case, axes, executor=executor)
        elapsed, here = time.perf_counter() - began, time.process_time() - here
        after = dict(executor.map(_clock, [0.5] * 4))
    assert [replace(row, wall_s=0.0) for row in shared.rows] == [replace(row, wall_s=0.0) for row in alone.rows]
    there = sum(after[process] - before[process] for process in before)
    busy = sum(row.wall_s for row in shared.rows) / elapsed
    faster = 2.0 * one / (here + there)
    print(f"{one:.2f} s alone; {there:.2f} s in two workers, {here:.2f} s to serve them; busy {busy:.2f} of 2")
    print(f"with both cores free {faster:.2f} times as fast")
    assert len(before) == 2
    assert busy > 1.6
    assert faster > 1.6
