"""A run that is killed, interrupted or out of space leaves the old results or the new ones, never half."""

import json
import os
import random
import re
import select
import signal
import subprocess
import sys
import time
from pathlib import Path

import faults
import pytest

from thermal.build import build
from thermal.case import from_text
from thermal.case.starter import starter
from thermal.loop import run
from thermal.report import files
from thermal.report.files import FILES, OutputError, demand_place, write_results

COMMAND = (sys.executable, "-m", "thermal")
POSIX = pytest.mark.skipif(os.name != "posix", reason="needs processes that can be forked and killed")
LEFT_OVER = re.compile(r"\.x\.\d+-[0-9a-f]{8}\.(new|old)")


def _bytes(folder):
    return {path.name: path.read_bytes() for path in folder.iterdir()}


@pytest.fixture(scope="module")
def runs():
    """Two short runs to write."""
    found = []
    for target in ("60 °C", "90 °C"):
        changes = {"schedule.0.until.surface": target, "numerics": '{ tolerance = "5 K" }'}
        case = from_text(starter("heater"), ".", changes)
        setup = build(case)
        found.append((setup, case, run(setup)))
    return found


@pytest.fixture
def place(tmp_path, runs, monkeypatch):
    """Folder x with the old results beside a folder with the new ones; pictures are left out for speed."""

    def no_pictures(setup, case, history, folder):
        for name in ("curves.png", "curves.svg"):
            (folder / name).write_text(f"{setup.title} {history.time[-1]}")

    monkeypatch.setattr(files, "save_curves", no_pictures)
    write_results(tmp_path / "inside" / "x", *runs[0])
    write_results(tmp_path / "x", *runs[1])
    return tmp_path / "inside" / "x"


@POSIX
@pytest.mark.filterwarnings("ignore:This process.*multi-threaded:DeprecationWarning")
@pytest.mark.parametrize("fault", faults.FAULTS)
@pytest.mark.parametrize("can_swap", [True, False], ids=["swapped", "renamed"])
def test_a_fault_at_any_moment_of_writing_leaves_old_or_new(place, runs, monkeypatch, fault, can_swap):
    if not can_swap:
        monkeypatch.setattr(files, "swapped", lambda one, other: False)
    old, new = _bytes(place), _bytes(place.parent.parent / "x")
    moment, ends, gone = 0, [], 0
    while not ends or ends[-1] != faults.FINISHED or len(ends) < 12:
        moment += 1
        assert moment < 300
        ends.append(
            faults.end_of(lambda: write_results(place, *runs[1], force=True), OutputError, place.parent, moment, fault)
        )
        beside = [name for name in os.listdir(place.parent) if name != "x"]
        assert all(LEFT_OVER.fullmatch(name) for name in beside)
        if fault == "disk full":  # nothing stays but a folder of which it was the deleting that failed
            assert all(ends[-1] == faults.FINISHED or not os.listdir(place.parent / name) for name in beside)
        if not place.exists():
            gone += 1
        else:
            assert _bytes(place) in (old, new)
        demand_place(place, force=True)
        assert os.listdir(place.parent) == ["x"]
        told = _bytes(place)
        assert told in (old, new)
        if told == new and ends[-1] != faults.FINISHED:
            write_results(place, *runs[0], force=True)
    expected = {"killed": faults.KILLED, "interrupted": faults.INTERRUPTED, "disk full": faults.REFUSED}[fault]
    assert ends.count(expected) >= 8
    # Where two folders cannot be swapped, a killed run may leave the old one aside; nothing else ever does.
    assert gone <= (1 if fault == "killed" and not can_swap else 0)


@POSIX
def test_what_a_killed_run_left_is_told_from_what_another_run_is_writing(tmp_path):
    ended = subprocess.Popen([sys.executable, "-c", ""])
    ended.wait()
    mine = f".x.{os.getpid()}-0123abcd.new"
    left = [f".x.{ended.pid}-0123abcd.new", f".x.{ended.pid}-0123abcd.old", f".x.{'9' * 30}-0123abcd.new"]
    others = [f".xx.{ended.pid}-0123abcd.new", ".x.new", f".x.{ended.pid}-0123abc.new", "notes.txt"]
    for name in (mine, *left, *others):
        (tmp_path / name).mkdir()
    (tmp_path / "x").mkdir()
    demand_place(tmp_path / "x", force=False)
    assert sorted(os.listdir(tmp_path)) == sorted(["x", mine, *others])


@POSIX
def test_results_left_aside_go_back_to_their_place(tmp_path, runs):
    ended = subprocess.Popen([sys.executable, "-c", ""])
    ended.wait()
    write_results(tmp_path / "x", *runs[0])
    before = _bytes(tmp_path / "x")
    (tmp_path / "x").rename(tmp_path / f".x.{ended.pid}-0123abcd.old")
    with pytest.raises(OutputError, match="is not empty, add --force"):
        demand_place(tmp_path / "x", force=False)
    assert os.listdir(tmp_path) == ["x"]
    assert _bytes(tmp_path / "x") == before


def test_an_interrupt_while_writing_still_shows_the_answer(command, monkeypatch):
    def stop(*_):
        raise KeyboardInterrupt

    monkeypatch.setattr(files, "_write", stop)
    Path("heater.toml").write_text(starter("heater"), encoding="utf-8")
    ended = command.call("run", "heater.toml", "--quiet", "--set", "schedule.0.until.surface=60 °C")
    assert ended.exit_code == 130
    assert ended.stdout.startswith("Reaches 60 °C")
    assert os.listdir("results") == []


def _begun(folder, *changes):
    """A process that computes for a long time, once it has told on a terminal that it is on its way."""
    (folder / "tube.toml").write_text(starter("tube"), encoding="utf-8")
    master, slave = os.openpty()
    process = subprocess.Popen(
        [*COMMAND, "run", "tube.toml", "--force", *changes],
        cwd=folder,
        stdout=subprocess.PIPE,
        stderr=slave,
        encoding="utf-8",
    )
    os.close(slave)
    seen, until = "", time.monotonic() + 60.0
    while " s   surface " not in seen and time.monotonic() < until:
        if select.select([master], [], [], 1.0)[0]:
            seen += os.read(master, 4096).decode()
    assert " s   surface " in seen
    return process, master


@POSIX
def test_a_run_told_to_end_keeps_what_there_was(tmp_path):
    changes = ("--set", "numerics.tolerance=0.0001 K", "--set", "numerics.refinement=4")
    process, master = _begun(tmp_path, *changes)
    process.send_signal(signal.SIGTERM)
    stdout, _ = process.communicate(timeout=60)
    os.close(master)
    assert process.returncode == 130
    assert "Interrupted at" in stdout
    told = json.loads((tmp_path / "results/tube/summary.json").read_text(encoding="utf-8"))
    assert told["status"] == "interrupted"
    assert "incomplete" in told["sentence"]


@POSIX
@pytest.mark.slow
def test_killed_at_ten_random_moments(tmp_path):
    draw = random.Random(7)
    (tmp_path / "heater.toml").write_text(starter("heater"), encoding="utf-8")
    command = [*COMMAND, "run", "heater.toml", "--quiet", "--force"]
    began = time.monotonic()
    subprocess.run(command, cwd=tmp_path, check=True, capture_output=True)
    whole = time.monotonic() - began
    folder = tmp_path / "results" / "heater"
    kept = _bytes(folder)
    kills = 0
    for number in range(10):
        # Half of them while it computes, half of them around the writing at the end.
        wait = whole * (draw.uniform(0.2, 0.8) if number % 2 else draw.uniform(0.75, 1.1))
        process = subprocess.Popen([*command, "--set", f"title=run {number}"], cwd=tmp_path, stdout=subprocess.DEVNULL)
        time.sleep(wait)
        process.kill()
        kills += process.wait() == -signal.SIGKILL
        now = _bytes(folder)
        if now != kept:
            assert sorted(now) == sorted(FILES)
            assert f'title = "run {number}"' in now["case.toml"].decode()
            assert json.loads(now["summary.json"])["title"] == f"run {number}"
            assert now["curves.svg"].rstrip().endswith(b"</svg>")
            kept = now
    assert kills >= 5
    subprocess.run(command, cwd=tmp_path, check=True, capture_output=True)
    assert os.listdir(tmp_path / "results") == ["heater"]
