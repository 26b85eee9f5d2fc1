"""`thermal verify CASE` hands the case to the second engine and ends as that says."""

import sys
from types import ModuleType, SimpleNamespace

import pytest
from typer.testing import CliRunner

from thermal.case.starter import starter
from thermal.cli.main import app


@pytest.mark.parametrize(("agrees", "code"), [(True, 0), (False, 4)])
def test_a_case_goes_to_the_second_engine(tmp_path, monkeypatch, agrees, code):
    engine, text = ModuleType("engine"), ModuleType("text")
    engine.compare = lambda case, progress: SimpleNamespace(title=case.name, agrees=agrees)
    text.second_engine_text = lambda result: f"second engine on {result.title}\n"
    monkeypatch.setitem(sys.modules, "thermal.crosscheck.fipy_heat", engine)
    monkeypatch.setitem(sys.modules, "thermal.report.second_engine", text)
    (tmp_path / "heater.toml").write_text(starter("heater"), encoding="utf-8")
    done = CliRunner().invoke(app, ["verify", str(tmp_path / "heater.toml")])
    assert (done.exit_code, done.stdout, done.stderr) == (code, "second engine on heater\n", "")
