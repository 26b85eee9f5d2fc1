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


@pytest.mark.skipif(not os.path.exists("/dev/full"), reason="needs a full device")
@pytest.mark.parametrize("arguments", [("material", "show", "c45"), ("run", "heater.toml", "--quiet"), ("--help",)])
def test_an_answer_that_cannot_be_printed_is_one_sentence(tmp_path, arguments):
    (tmp_path / "heater.toml").write_text(starter("heater"), encoding="utf-8")
    with open("/dev/full", "w") as full:
        done = subprocess.run(
            [*COMMAND, *arguments], cwd=tmp_path, stdout=full, stderr=subprocess.PIPE, text=True, check=False
        )
    assert done.returncode == 2
    assert done.stderr == "the answer cannot be printed (No space left on device)\n"


def test_a_reader_that_has_enough_is_no_error(tmp_path):
    process = subprocess.Popen(
        [*COMMAND, "material", "show", "c45", "--json"], stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True
    )
    assert process.stdout is not None and process.stderr is not None
    process.stdout.close()
    assert process.stderr.read() == ""
    process.stderr.close()
    assert process.wait(60) == 0


def test_an_interrupt_while_starting_ends_with_130():
    code = """
import sys
class Stop:
    def find_spec(self, name, *_):
        if name == "typer":
            raise KeyboardInterrupt
sys.meta_path.insert(0, Stop())
from thermal.__main__ import main
main()
"""
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)
    assert (done.returncode, done.stdout, done.stderr) == (130, "", "interrupted, nothing was written\n")
