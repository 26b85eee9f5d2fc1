"""What only shows in a process of its own: imports, streams, signals."""

import json
import os
import select
import signal
import subprocess
import sys
import time

import pytest

from thermal.case.starter import starter

HEAVY = ("numpy", "scipy", "matplotlib", "materials", "thermal.case")
COMMAND = (sys.executable, "-W", "error", "-m", "thermal")


@pytest.mark.parametrize(
    ("arguments", "heavy"),
    [
        (["--help"], (*HEAVY, "pydantic")),
        (["--version"], (*HEAVY, "pydantic")),
        # The command-line library itself loads pydantic to read the arguments of a command.
        (["run", "--help"], HEAVY),
        (["material", "--help"], HEAVY),
    ],
)
def test_help_loads_nothing_heavy(arguments, heavy):
    code = f"""
import sys
sys.argv = ["thermal", *{arguments!r}]
from thermal.__main__ import main
try:
    main()
except SystemExit as end:
    assert not end.code, end.code
loaded = [name for name in {heavy!r} if name in sys.modules]
print(loaded, file=sys.stderr)
"""
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stderr == "[]\n"
    assert done.stdout


def test_streams_are_kept_apart_and_progress_is_for_terminals(tmp_path):
    (tmp_path / "heater.toml").write_text(starter("heater"), encoding="utf-8")
    done = subprocess.run(
        [*COMMAND, "run", "heater.toml", "--json"], cwd=tmp_path, capture_output=True, encoding="utf-8", check=True
    )
    assert done.stderr == ""
    assert json.loads(done.stdout)["status"] == "target"


def test_a_terminal_without_the_signs_is_no_obstacle(tmp_path):
    (tmp_path / "heater.toml").write_text(starter("heater"), encoding="utf-8")
    done = subprocess.run(
        [*COMMAND, "run", "heater.toml", "--quiet"],
        cwd=tmp_path,
        capture_output=True,
        encoding="ascii",
        env={**os.environ, "PYTHONIOENCODING": "ascii"},
        check=True,
    )
    assert done.stdout.startswith("Reaches 850 ?C at the surface")


@pytest.mark.skipif(os.name != "posix", reason="needs a pseudo-terminal")
def test_progress_on_a_terminal_and_an_interrupt_from_it(tmp_path):
    (tmp_path / "tube.toml").write_text(starter("tube"), encoding="utf-8")
    master, slave = os.openpty()
    changes = ("--set", "numerics.tolerance=0.0001 K", "--set", "numerics.refinement=4")
    process = subprocess.Popen(
        [*COMMAND, "run", "tube.toml", *changes],
        cwd=tmp_path,
        stdout=subprocess.PIPE,
        stderr=slave,
        encoding="utf-8",
    )
    os.close(slave)
    seen = ""
    until = time.monotonic() + 60.0
    while " s   surface " not in seen and time.monotonic() < until:
        if select.select([master], [], [], 1.0)[0]:
            seen += os.read(master, 4096).decode()
    process.send_signal(signal.SIGINT)
    stdout, _ = process.communicate(timeout=60)
    while select.select([master], [], [], 0.0)[0]:
        try:
            seen += os.read(master, 4096).decode()
        except OSError:
            break
    os.close(master)
    assert "heat" in seen
    assert "\x1b" not in seen
    assert "interrupted: writing what there is" in seen
    assert process.returncode == 130
    assert "Interrupted at" in stdout
    assert json.loads((tmp_path / "results/tube/summary.json").read_text())["status"] == "interrupted"
