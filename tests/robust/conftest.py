import os
import time
from pathlib import Path

import pytest
from typer.testing import CliRunner, Result

from thermal.cli.main import app

LONGEST_LINE = 2000
SLOWEST = 20.0
"""Seconds of a processor that the reading of a bad file may take."""


def told(result: Result) -> list[str]:
    """The sentences of a refusal, after making sure that it is one: code 2, nothing on stdout, no traceback."""
    assert result.exit_code == 2, (result.exit_code, result.exception, result.stdout)
    assert isinstance(result.exception, SystemExit), result.exception
    assert result.stdout == ""
    lines = result.stderr.splitlines()
    assert lines
    for line in lines:
        assert line.strip() and line.isprintable() and len(line) <= LONGEST_LINE
    assert "Traceback" not in result.stderr
    return lines


class Command:
    """The command line in an empty folder, in this process."""

    def call(self, *arguments: str) -> Result:
        return CliRunner().invoke(app, list(arguments))

    def refused(self, *arguments: str) -> list[str]:
        """Sentences of a call that must be refused within bounded time and leave no file behind."""
        before, began = sorted(os.listdir()), time.process_time()
        lines = told(self.call(*arguments))
        assert time.process_time() - began < SLOWEST
        assert sorted(os.listdir()) == before
        return lines

    def refused_text(self, raw: bytes, *arguments: str, command: tuple[str, ...] = ("check",)) -> list[str]:
        """Sentences of a file that must be refused."""
        Path("bad.toml").write_bytes(raw)
        return self.refused(*command, "bad.toml", *arguments)


@pytest.fixture
def command(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    return Command()
