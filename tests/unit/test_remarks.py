"""Notes on what data and models leave open, made before a run, and the margin to melting told after it."""

import re
from pathlib import Path

import pytest

import materials
from thermal.build import build
from thermal.case import from_text
from thermal.case.starter import starter
from thermal.loop import run
from thermal.results.verdict import margin_to_solidus, sentence

STAINLESS = (Path(materials.__file__).parent / "data/stainless/stainless-304.toml").read_text(encoding="utf-8")


def notes(kind, folder=".", **changes):
    paths = {path.replace("__", "."): value for path, value in changes.items()}
    return " ".join(build(from_text(starter(kind), folder, paths)).notes)


@pytest.mark.parametrize(("resistivity", "told"), [("72, 77.6", False), ("7.2, 7.76", True)])
def test_own_data_that_fail_the_audit_are_told(tmp_path, resistivity, told):
    # A slip of the decimal point in all resistivities: the Wiedemann-Franz band sees it.
    text = STAINLESS.replace('key = "stainless-304"', 'key = "mine"')
    if told:
        values = re.search(r"\[resistivity\].*?value = \[(.*?)\]", text, flags=re.DOTALL).group(1)
        tenth = ", ".join(f"{float(value) / 10.0:g}" for value in values.split(","))
        text = text.replace(values, tenth)
    (tmp_path / "mine.toml").write_text(text, encoding="utf-8")
    found = notes("heater", tmp_path, workpiece__material="mine.toml")
    assert ("mine fail the audit, Wiedemann-Franz" in found) == told


def test_a_material_without_a_solidus_is_told(tmp_path):
    text = re.sub(r"\[(solidus|liquidus|latent_heat)\].*?(?=\n\[)", "", STAINLESS, flags=re.DOTALL)
    (tmp_path / "mine.toml").write_text(text.replace('key = "stainless-304"', 'key = "mine"'), encoding="utf-8")
    assert "mine has no solidus" in notes("heater", tmp_path, workpiece__material="mine.toml")


def test_magnetic_pieces_at_high_frequency_are_told():
    assert "real permeability is lower" in notes("heater")
    assert "real permeability" not in notes("heater", schedule__0__drive__frequency="10 kHz")
    assert "real permeability" not in notes("heater", workpiece__material="stainless-304")


def test_a_bright_surface_says_where_it_stays_bright():
    assert "Surface bright: only where nothing oxidises" in notes("heater", workpiece__surface="bright")
    assert "Surface" not in notes("heater")


@pytest.mark.parametrize(("target", "near"), [("1375 °C", False), ("1405 °C", True)])
def test_a_result_that_cannot_tell_good_from_burnt_says_so(target, near):
    hot = {"schedule.0.until": f'{{ surface = "{target}" }}', "schedule.0.drive.absorbed_power": "2 kW"}
    case = from_text(starter("heater"), ".", {**hot, "schedule.1.duration": "1 s"})
    setup = build(case)
    history = run(setup)
    assert 0.0 < margin_to_solidus(setup, history) < 60.0
    assert ("take it as burnt or melting" in sentence(setup, history)) == near
