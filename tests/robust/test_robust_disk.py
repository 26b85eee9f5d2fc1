"""A disk that is full or may not be written to: one sentence, old results untouched, the answer still shown."""

import errno
import os
import subprocess
import sys
from pathlib import Path
from types import SimpleNamespace

import pytest

from thermal import loop
from thermal.case.starter import starter
from thermal.cli.progress import Progress
from thermal.report import files

resource = pytest.importorskip("resource", reason="needs limits on a process")
COMMAND = (sys.executable, "-W", "error", "-m", "thermal")
SHORT = ("--set", "schedule.0.until.surface=60 °C", "--quiet")


def _bytes(folder):
    return {path.name: path.read_bytes() for path in Path(folder).iterdir()}


def _limited(size, arguments, folder):
    """A process that may write no file larger than a size [bytes]."""
    return subprocess.run(
        [*COMMAND, *arguments],
        cwd=folder,
        capture_output=True,
        encoding="utf-8",
        preexec_fn=lambda: resource.setrlimit(resource.RLIMIT_FSIZE, (size, size)),
        timeout=60,
    )


@pytest.fixture
def case(command):
    Path("heater.toml").write_text(starter("heater"), encoding="utf-8")
    return command


def test_a_disk_that_gets_full_leaves_the_old_results_and_shows_the_answer(case):
    assert case.call("run", "heater.toml", *SHORT).exit_code == 0
    before = _bytes("results/heater")
    done = _limited(20_000, ("run", "heater.toml", "--force", *SHORT), ".")
    assert done.returncode == 2
    assert done.stdout.startswith("Reaches 60 °C")
    assert done.stderr == f"{Path.cwd()}/results/heater: cannot be written (File too large)\n"
    assert _bytes("results/heater") == before
    assert os.listdir("results") == ["heater"]


def test_a_starter_case_is_written_whole_or_not_at_all(tmp_path):
    done = _limited(100, ("new", "billet", "mine.toml"), tmp_path)
    assert (done.returncode, done.stdout) == (2, "")
    assert done.stderr == "mine.toml: cannot be written (File too large)\n"
    assert os.listdir(tmp_path) == []


@pytest.mark.parametrize("number", [errno.ENOSPC, errno.EROFS, errno.EDQUOT, errno.EIO, errno.EACCES])
def test_whatever_the_system_says_before_the_run_is_one_sentence(case, monkeypatch, number):
    def refuse(*_, **__):
        raise OSError(number, os.strerror(number))

    def never(*_):
        raise AssertionError("ran")

    monkeypatch.setattr(Path, "mkdir", refuse)
    monkeypatch.setattr(loop, "run", never)
    assert case.refused("run", "heater.toml") == [f"results/heater: cannot be written ({os.strerror(number)})"]


@pytest.mark.parametrize(
    "name", ["with_materials_beside", "summary_text", "curves_csv", "save_curves", "_put_in_place"]
)
def test_a_disk_that_gets_full_at_any_part_of_the_writing(case, monkeypatch, name):
    def full(*_):
        raise OSError(errno.ENOSPC, "No space left on device")

    monkeypatch.setattr(files, name, full)
    ended = case.call("run", "heater.toml", *SHORT)
    assert ended.exit_code == 2
    assert ended.stdout.startswith("Reaches 60 °C")
    assert ended.stderr == f"{Path.cwd()}/results/heater: cannot be written (No space left on device)\n"
    assert os.listdir("results") == []


@pytest.mark.parametrize(
    ("place", "words"),
    [
        ("/dev/full", "is a file, results go into a folder"),
        ("/proc/results", "cannot be written (No such file or directory)"),
        ("heater.toml", "is a file, results go into a folder"),
        ("heater.toml/x", "cannot be written (Not a directory)"),
        ("x" * 300, "cannot be written (File name too long)"),
        ("loop", "cannot be written ("),
        ("loop/x", "cannot be written ("),
    ],
)
def test_a_place_nobody_can_write_to_is_refused_before_the_run(case, monkeypatch, place, words):
    def never(*_):
        raise AssertionError("ran")

    os.symlink("loop", "loop")
    monkeypatch.setattr(loop, "run", never)
    (line,) = case.refused("run", "heater.toml", "--out", place)
    assert line.startswith(place[:200]) and words in line


@pytest.mark.skipif(os.geteuid() == 0, reason="the superuser may write anywhere")
def test_a_folder_that_may_only_be_read(case):
    os.mkdir("locked")
    os.chmod("locked", 0o500)
    (line,) = case.refused("run", "heater.toml", "--out", "locked/x")
    assert line == "locked/x: cannot be written (Permission denied)"


@pytest.mark.parametrize(
    "arguments", [("check", "no.toml"), ("material", "show", "no"), ("--nonsense",), ("run", "no.toml")]
)
def test_the_exit_code_stands_where_nothing_can_be_said(tmp_path, arguments):
    with open("/dev/full", "w") as full:
        done = subprocess.run([*COMMAND, *arguments], cwd=tmp_path, stdout=full, stderr=full, check=False)
    assert done.returncode == 2


@pytest.mark.parametrize(
    ("streams", "arguments", "code"),
    [((1,), ("material", "show", "c45"), 0), ((2,), ("check", "no.toml"), 2), ((1, 2), ("--version",), 0)],
)
def test_streams_that_are_closed_from_the_start_are_no_obstacle(tmp_path, streams, arguments, code):
    def close():
        for stream in streams:
            os.close(stream)

    done = subprocess.run([*COMMAND, *arguments], cwd=tmp_path, capture_output=True, preexec_fn=close)
    assert done.returncode == code
    assert b"Traceback" not in done.stderr and b"Warning" not in done.stderr


def test_a_terminal_that_has_gone_is_no_reason_to_lose_the_run(case, monkeypatch):
    class Gone:
        def isatty(self):
            return True

        def write(self, text):
            raise OSError(errno.EIO, "Input/output error")

        def flush(self):
            raise OSError(errno.EIO, "Input/output error")

    began = Progress.__init__

    def on_a_dead_terminal(self, names, quiet):
        monkeypatch.setattr("thermal.cli.progress.sys", SimpleNamespace(stderr=Gone()))
        began(self, names, quiet=False)

    monkeypatch.setattr(Progress, "__init__", on_a_dead_terminal)
    ended = case.call("run", "heater.toml", *SHORT)
    assert (ended.exit_code, ended.stderr) == (0, "")
    assert sorted(os.listdir("results/heater")) == sorted(files.FILES)
