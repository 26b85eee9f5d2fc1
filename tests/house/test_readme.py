"""What the README shows is what happens."""

import json
import re
import shlex
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
    quoted = quote(README.split("## Three questions")[0])
    done = thermal("run", str(ROOT / "cases/billet_forging.toml"), "--quiet", folder=tmp_path)
    assert done.returncode == 0, done.stderr
    assert done.stdout.strip() == quoted
    listed = set(re.findall(r"`(\w+\.(?:json|csv|png|svg|toml))`", README.split("## Commands")[0])) - {"case.toml"}
    assert {path.name for path in (tmp_path / "results/billet_forging").iterdir()} == listed | {"case.toml"}


def quote(text):
    return " ".join(line[2:] for line in text.splitlines() if line.startswith("> "))


def test_the_three_questions_answer_what_is_quoted(tmp_path):
    asked = README.split("## Three questions")[1].split("## Commands")[0]
    parts = re.split(r"^    thermal ", asked, flags=re.MULTILINE)[1:]
    assert len(parts) == 3
    for part in parts:
        words = shlex.split(part.splitlines()[0].replace("cases/", f"{ROOT}/cases/"))
        done = thermal(*words, "--json", folder=tmp_path)
        assert done.returncode == 0, done.stderr
        assert json.loads(done.stdout)["sentence"] == quote(part)


COMMANDS = re.findall(r"^\| `thermal (.*?)` \|", README, flags=re.MULTILINE)
LONG = {"verify my.toml"}


def test_the_commands_of_the_table_work(tmp_path):
    assert len(COMMANDS) == 13
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
    # A sweep announces how many runs it will make.
    assert done.stderr == "" or command.startswith("sweep")


def test_the_python_lines_work(monkeypatch):
    text = README.split("From Python:")[1].split("##")[0]
    lines = "\n".join(line for line in text.splitlines() if line.startswith("    "))
    monkeypatch.chdir(ROOT)
    names: dict[str, object] = {}
    exec(re.sub(r"^    ", "", lines, flags=re.MULTILINE), names)
    assert names["history"].status == "target"


def test_two_lines_set_up_and_run_everything():
    setup = [line for line in README.splitlines() if line.strip().startswith("python3 -m venv .venv && ")]
    assert len(setup) == 2
    assert "thermal run cases/billet_forging.toml" in setup[0]
    assert "pytest" in setup[1]
