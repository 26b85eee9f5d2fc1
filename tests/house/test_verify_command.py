"""`thermal verify` as a user calls it."""

import json
import re
import subprocess
import sys

import pytest

COMMAND = (sys.executable, "-W", "error", "-m", "thermal", "verify")

KINDS = r" \(\d+ solved on a grid, \d+ formulas evaluated, \d+ against measurements\)"


def called(*arguments, folder):
    return subprocess.run([*COMMAND, *arguments], cwd=folder, capture_output=True, encoding="utf-8", check=False)


def test_the_table_on_the_screen(tmp_path):
    done = called(folder=tmp_path)
    assert (done.returncode, done.stderr) == (0, "")
    lines = done.stdout.splitlines()
    assert re.fullmatch(rf"All \d+ rows agree{KINDS}; \d+\.\d s\.", lines[-1])
    assert max(map(len, lines)) <= 100
    assert "Not verified" in lines
    assert not list(tmp_path.iterdir())


def test_the_table_as_json(tmp_path):
    done = called("--json", folder=tmp_path)
    assert (done.returncode, done.stderr) == (0, "")
    told = json.loads(done.stdout)
    assert told["failed"] == 0
    assert told["passed"] == len(told["rows"]) > 90
    for row in told["rows"]:
        assert row["passed"] == (row["error"] <= row["allowed"])
        assert all(row[name] for name in ("id", "meaning", "quantity", "function", "grid", "source"))
    assert any("saturation" in sentence for sentence in told["not_verified"])


@pytest.mark.slow
def test_the_full_table(tmp_path):
    done = called("--full", "--json", folder=tmp_path)
    assert (done.returncode, done.stderr) == (0, "")
    assert json.loads(done.stdout)["full"] is True


def test_a_failing_row_ends_with_code_4(tmp_path):
    code = """
import sys
import thermal.constants
thermal.constants.STEFAN_BOLTZMANN *= 1.01
sys.argv = ["thermal", "verify"]
from thermal.__main__ import main
main()
"""
    command = [sys.executable, "-c", code]
    done = subprocess.run(command, cwd=tmp_path, capture_output=True, encoding="utf-8", check=False)
    assert (done.returncode, done.stderr) == (4, "")
    assert re.search(r"1200 to 800 °C, room 20 °C, s .* FAILS$", done.stdout, flags=re.MULTILINE)
    assert re.fullmatch(rf"\d+ of \d+ rows FAIL{KINDS}; \d+\.\d s\.", done.stdout.splitlines()[-1])


@pytest.mark.parametrize("option", ["--full", "--json"])
def test_options_of_the_table_are_refused_with_a_case(tmp_path, option):
    done = called("my.toml", option, folder=tmp_path)
    assert (done.returncode, done.stdout) == (2, "")
    assert done.stderr == "verify    --full and --json belong to the table, not to a case; leave one of them out\n"
