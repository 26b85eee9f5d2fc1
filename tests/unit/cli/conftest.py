from pathlib import Path

import pytest
from typer.testing import CliRunner

from thermal.case.starter import starter
from thermal.cli.main import app


@pytest.fixture
def call(tmp_path, monkeypatch):
    """Calls the command line in an empty folder that holds heater.toml and plate.toml."""
    monkeypatch.chdir(tmp_path)
    for kind in ("heater", "plate"):
        Path(f"{kind}.toml").write_text(starter(kind), encoding="utf-8")

    def wanted(*arguments: str):
        return CliRunner().invoke(app, list(arguments))

    return wanted
