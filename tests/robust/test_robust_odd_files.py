"""What is no ordinary file, or too large a one, is refused before it is read; also by whole processes."""

import os
import subprocess
import sys
import tracemalloc
from pathlib import Path

import broken_cases
import pytest

from materials import toml_text
from thermal.case import load_case
from thermal.errors import CaseError

COMMANDS = {"check": ("check",), "run": ("run",), "material": ("material", "show")}
POSIX = pytest.mark.skipif(os.name != "posix", reason="needs pipes and links")
MEGABYTE = 1_000_000


def _folder(path):
    path.mkdir()


def _pipe(path):
    os.mkfifo(path)


def _loop(path):
    path.symlink_to(path.name)


def _dangling(path):
    path.symlink_to("nowhere.toml")


def _null(path):
    path.symlink_to("/dev/null")


def _endless(path):
    path.symlink_to("/dev/zero")


def _large(path):
    with path.open("wb") as file:
        for _ in range(50):
            file.write(b"a = 1 # \n" * (MEGABYTE // 9))


ODD = {
    "a folder": (_folder, "Is a directory"),
    "a pipe nobody writes to": (_pipe, "is a pipe or a device, not a file"),
    "a link to itself": (_loop, "Too many levels of symbolic links"),
    "a link to nowhere": (_dangling, ""),
    "nothing for ever": (_null, "is a pipe or a device, not a file"),
    "zeros for ever": (_endless, "is a pipe or a device, not a file"),
    "50 MB": (_large, "is larger than 250 kB"),
}


@POSIX
@pytest.mark.parametrize("name", ODD)
@pytest.mark.parametrize("kind", COMMANDS)
def test_an_odd_file_is_refused(command, name, kind):
    make, words = ODD[name]
    make(Path("odd.toml"))
    (line,) = command.refused(*COMMANDS[kind], "odd.toml")
    assert "odd.toml" in line and words in line


@POSIX
def test_an_odd_file_as_material_is_refused_at_its_line(command):
    Path("case.toml").write_text(broken_cases.SOUND.replace("steel-c45", "odd.toml"), encoding="utf-8")
    for name, (make, words) in ODD.items():
        make(Path("odd.toml"))
        (line,) = command.refused("check", "case.toml")
        assert line.startswith("line 9   workpiece.material: odd.toml: ") and words in line, name
        if name == "a folder":
            os.rmdir("odd.toml")
        else:
            os.unlink("odd.toml")


@pytest.mark.parametrize(
    "name", ["", ".", "x" * 300 + ".toml", "no/such/folder/x.toml", "case.toml/x.toml", "\x1b[2J.toml"]
)
@pytest.mark.parametrize("kind", ["check", "run"])
def test_a_name_of_no_file_is_refused(command, name, kind):
    Path("case.toml").write_text(broken_cases.SOUND, encoding="utf-8")
    command.refused(*COMMANDS[kind], name)


def test_a_name_with_a_zero_in_it_is_refused():
    with pytest.raises(CaseError, match=r"cannot be the name of a file"):
        load_case("a\0b.toml")


@pytest.mark.skipif(os.name != "posix" or os.geteuid() == 0, reason="the superuser may read everything")
@pytest.mark.parametrize("kind", COMMANDS)
def test_a_file_without_permission_is_refused(command, kind):
    Path("odd.toml").write_text(broken_cases.SOUND, encoding="utf-8")
    Path("odd.toml").chmod(0)
    (line,) = command.refused(*COMMANDS[kind], "odd.toml")
    assert "Permission denied" in line


def test_of_a_large_file_no_more_is_read_than_allowed(tmp_path):
    _large(tmp_path / "large.toml")
    tracemalloc.start()
    with pytest.raises(toml_text.TextError, match="is larger than 250 kB"):
        toml_text.read(tmp_path / "large.toml")
    peak = tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()
    assert peak < 3 * toml_text.LARGEST


def test_a_file_of_the_largest_size_is_read(tmp_path):
    text = broken_cases.SOUND.encode()
    path = tmp_path / "full.toml"
    path.write_bytes(text + b"#" * (toml_text.LARGEST - len(text)))
    assert load_case(path).title == "all of it"
    path.write_bytes(text + b"#" * (toml_text.LARGEST - len(text) + 1))
    with pytest.raises(CaseError, match="is larger than 250 kB"):
        load_case(path)


@POSIX
@pytest.mark.parametrize(
    ("arguments", "raw", "words"),
    [
        (("check", "bad.toml"), b"a = " + b"[" * 100_000, b"more than 20 deep"),
        (("run", "bad.toml", "--quiet"), b"a." * 120_000 + b"a = 1", b"more than 20 deep"),
        (("material", "show", "bad.toml"), bytes(range(256)), b"save it as UTF-8"),
        (("run", "pipe.toml"), b"", b"is a pipe or a device"),
        ((b"check", b"\xff.toml"), b"", b"there is no such case file"),
    ],
)
def test_a_process_ends_with_2_and_one_sentence(tmp_path, arguments, raw, words):
    (tmp_path / "bad.toml").write_bytes(raw)
    os.mkfifo(tmp_path / "pipe.toml")
    done = subprocess.run(
        [sys.executable, "-W", "error", "-m", "thermal", *arguments], cwd=tmp_path, capture_output=True, timeout=60
    )
    assert (done.returncode, done.stdout) == (2, b"")
    assert words in done.stderr
    assert done.stderr.count(b"\n") == 1
    assert sorted(os.listdir(tmp_path)) == ["bad.toml", "pipe.toml"]
