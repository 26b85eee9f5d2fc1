"""What the README shows is what happens."""

import re
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
README = (ROOT / "README.md").read_text(encoding="utf-8")


def thermal(*words: str, folder: Path) -> subprocess.CompletedProcess[str]:
    command = [sys.executable, "-m", "thermal", *words]
    return subprocess.run(command, cwd=folder, capture_output=True, text=True, encoding="utf-8", check=False)


def test_the_quoted_answer_is_the_answer_of_the_example(tmp_path):
    quoted = " ".join(line[2:] for line in README.splitlines() if line.startswith("> "))
    done = thermal("run", str(ROOT / "cases/billet_forging.toml"), "--quiet", folder=tmp_path)
    assert done.returncode == 0, done.stderr
    assert done.stdout.strip() == quoted
    listed = set(re.findall(r"`(\w+\.(?:json|csv|png|svg|toml))`", README.split("## Commands")[0])) - {"case.toml"}
    assert {path.name for path in (tmp_path / "results/billet_forging").iterdir()} == listed | {"case.toml"}


COMMANDS = re.findall(r"^\| `thermal (.*?)` \|", README, flags=re.MULTILINE)
LONG = {"verify my.toml"}


def test_the_commands_of_the_table_work(tmp_path):
    assert len(COMMANDS) == 8
    for command in COMMANDS:
        if command not in LONG:
            works(command, tmp_path)


@pytest.mark.slow
def test_the_long_commands_of_the_table_work(tmp_path):
    works("new billet my.toml", tmp_path)
    for command in LONG:
        assert command in COMMANDS
        works(command, tmp_path)


def works(command, folder):
    done = thermal(*command.split(), folder=folder)
    assert done.returncode == 0, f"{command}: {done.stderr}"
    assert done.stderr == ""


def test_the_python_lines_work(monkeypatch):
    lines = README.split("From Python:")[1].split("##")[0].strip()
    monkeypatch.chdir(ROOT)
    names: dict[str, object] = {}
    exec(re.sub(r"^    ", "", lines, flags=re.MULTILINE), names)
    assert names["history"].status == "target"


def test_two_lines_set_up_and_run_everything():
    setup = [line for line in README.splitlines() if line.strip().startswith("python3 -m venv .venv && ")]
    assert len(setup) == 2
    assert "thermal run cases/billet_forging.toml" in setup[0]
    assert "pytest" in setup[1]
