import math
import sys

import pytest

from materials import get, names
from thermal.build import build
from thermal.case import from_text
from thermal.case.starter import KINDS, starter
from thermal.report.advice import cautions, expectation, remarks
from thermal.report.conditions import conditions
from thermal.report.materials import material_list_text, material_text
from thermal.report.plan import plan_text
from thermal.report.tables import energy_table, peak_table, result_text, stage_table
from thermal.report.text import WIDTH, columns, paragraph, width
from thermal.report.words import piece_in_words

READINGS = "[" + ", ".join(f'{{name = "thermocouple-number-{i}", depth = "{i} mm"}}' for i in range(5)) + "]"
STAGES = "[" + ", ".join(f'{{stage = "transfer", duration = "{i + 1} s"}}' for i in range(12)) + "]"


@pytest.mark.parametrize("kind", ["heater", "tube", "plate"])
def test_nothing_is_wider_than_the_page(run_of, kind, tmp_path):
    setup, case, history = run_of(kind)
    lines = result_text(setup, case, history, tmp_path).splitlines()
    assert max(len(line) for line in lines if not line.startswith("/")) <= WIDTH


def test_many_stages_and_readings_stay_on_the_page(run_of):
    setup, _, history = run_of("tube", schedule=STAGES, reading=READINGS)
    text = stage_table(setup, history)
    assert max(map(len, text.splitlines())) <= WIDTH
    assert "transfer 12" in text
    assert text.count("thermocouple-number-4, °C") == text.count("time, s") > 1


def test_the_state_at_the_end_of_each_stage(run_of):
    setup, _, history = run_of("heater")
    last = int((history.stage == 0).nonzero()[0][-1])
    surface, core = (history.readings[name] for name in ("surface", "core"))
    rows = stage_table(setup, history).splitlines()
    told = next(row for row in rows if row.startswith("  surface, °C"))
    assert told.split()[2:] == ["20", f"{surface[last] - 273.15:.0f}", f"{surface[-1] - 273.15:.0f}"]
    spread = next(row for row in rows if row.startswith("  spread"))
    assert spread.split()[-2:] == [f"{surface[i] - core[i]:+.0f}" for i in (last, -1)]
    assert spread.split()[-1].startswith("-")


def test_the_energy_chain_adds_up(run_of):
    setup, _, history = run_of("tube")
    percent = {}
    for line in energy_table(setup, history).splitlines()[1:]:
        label, *figures = line.strip().rsplit(maxsplit=3)
        if len(figures) == 3 and "-" not in label[:2]:
            percent[label.strip()] = float(figures[1])
    assert percent.pop("supply output, leads and coil") == 100.0
    absorbed = percent.pop("absorbed in the workpiece")
    assert absorbed + percent.pop("lost in coil copper and leads") == pytest.approx(100.0, abs=0.11)
    assert "lost out of the bore" in percent
    assert sum(percent.values()) == pytest.approx(absorbed, abs=0.3)


def test_without_a_coil_it_says_what_is_missing(run_of):
    text = result_text(*run_of("heater"), None)
    assert "No electrical answers: the case has no [coil] with a [supply]" in text
    assert "A rms" not in text
    assert "nan" not in text


def test_columns_that_do_not_fit_go_below():
    rows = [["", *("x" * 20 for _ in range(6))], ["label", *(str(i) for i in range(6))]]
    first, second = columns(rows).split("\n\n")
    assert first.split()[-4:] == ["0", "1", "2", "3"]
    assert second.split()[-3:] == ["label", "4", "5"]


def test_a_long_label_is_cut():
    assert columns([["a" * 60, "1"]]) == f"  {'a' * 47}…  1"


def test_data_held_beyond_their_range_are_noted(run_of):
    hot = '{surface = "1240 °C"}'
    setup, case, history = run_of("heater", schedule__0__until=hot)
    notes = remarks(setup, case, history)
    assert any("conductivity, resistivity and specific heat end at 1200 °C: the last value" in note for note in notes)
    assert any("emissivity (oxidised) end at 1227 °C" in note for note in notes)
    assert not any("bright" in note for note in notes)
    assert not any("end at" in note for note in remarks(*run_of("heater")))


def test_a_given_emissivity_has_no_range_to_exceed(run_of):
    setup, case, history = run_of(
        "heater",
        workpiece="""{shape = "cylinder", diameter = "12 mm", length = "60 mm", material = "steel-c45",
            emissivity = 0.8}""",
        schedule__0__until='{surface = "1240 °C"}',
    )
    notes = remarks(setup, case, history)
    assert notes
    assert not any("emissivity" in note for note in notes)


def test_a_hold_that_was_not_kept_is_noted(run_of):
    setup, case, history = run_of(
        "tube", supply__max_current="300 A", schedule__0__until='{core = "150 °C"}', schedule__1__duration="3 s"
    )
    (note,) = remarks(setup, case, history)
    assert note.startswith("The hold stage ends with surface ")
    assert "below its set point of 900 °C" in note


def test_profiles_after_the_end_are_noted(run_of):
    setup, case, history = run_of("heater", output='{profiles_at = ["10 s", "9000 s"]}')
    assert remarks(setup, case, history)[-1] == f"No profile at 9000 s: the run ends at {history.time[-1]:.0f} s."


def test_a_single_piece_is_told_to_be_an_average(run_of):
    single = " ".join(expectation(run_of("tube")[1]))
    assert "average over the length" in single
    assert "Estimate" in single
    row = " ".join(expectation(run_of("tube", workpiece__neighbours="touching")[1]))
    assert "average over the length" not in row
    assert "±10 %" in row


def test_cautions_follow_what_the_case_holds(run_of):
    heater = " ".join(each.full for each in cautions_of(*run_of("heater")[::2]))
    for word in ("Hot metal", "pacemakers", "prove dead", "Cooling water", "Fumes", "not an assessment"):
        assert word in heater
    assert "Near melting" not in heater
    assert "Holding" not in heater
    assert any(each.full.startswith("Holding") for each in cautions_of(*run_of("tube")[::2]))
    cold = cautions_of(*run_of("heater", schedule='[{stage = "transfer", duration = "5 s"}]')[::2])
    assert len(cold) == 1


def test_aluminium_near_melting_is_told(run_of):
    setup, _, history = run_of(
        "heater",
        workpiece__material="aluminium-6082",
        schedule__0__until='{surface = "500 °C"}',
    )
    told = " ".join(each.full for each in cautions_of(setup, history))
    assert "aluminium softens and runs without changing colour" in told
    assert "explodes with water" in told


@pytest.mark.parametrize("kind", KINDS)
def test_the_plan_of_every_starter(kind):
    case = from_text(starter(kind), ".")
    text = plan_text(build(case), case)
    assert max(map(len, text.splitlines())) <= WIDTH
    for line in case.defaults_used:
        # The wall of the coil is told as the value the rule gave.
        assert ("coil.wall = " if line.startswith("coil.wall") else line[:60]) in text
    assert "cells across the section" in text
    assert ("coil current" in text) == (case.coil is not None)


def test_skin_depths_of_the_plan():
    setup = build(from_text(starter("tube"), "."))
    cold, hot = conditions(setup)
    assert (cold.T, hot.T) == (pytest.approx(293.15), pytest.approx(1173.15))
    # 503.29 sqrt(rho/(mu_r f)), the form of the handbooks
    for each in (cold, hot):
        rho = float(setup.material.resistivity(each.T))
        assert each.skin_depth == pytest.approx(503.292 * (rho / (each.field.mu_r[-1] * 10e3)) ** 0.5, rel=1e-5)
    assert hot.field.mu_r[-1] == 1.0 < cold.field.mu_r[-1]


def test_a_section_that_lets_the_field_through_is_noted():
    thin = {"workpiece.diameter": "4 mm"}
    case = from_text(starter("heater"), ".", {**thin, "schedule.0.drive.frequency": "30 kHz"})
    assert "below about 3.5 the field passes through" in plan_text(build(case), case)


def test_every_material_can_be_shown():
    materials = [get(name) for name in names()]
    listed = material_list_text(materials)
    for material in materials:
        assert material.key in listed
        text = material_text(material)
        for datum in material.data:
            assert datum.name in text
        assert max(map(len, text.splitlines())) <= WIDTH


HOT = {"workpiece__material": "aluminium-6082", "schedule__0__until": '{surface = "500 °C"}'}


def test_notes_stand_under_the_verdict_and_cautions_last(run_of):
    setup, case, history = run_of("heater", schedule__0__until='{surface = "1240 °C"}')
    heads = [part.split("\n")[0] for part in result_text(setup, case, history, None).rstrip().split("\n\n")]
    assert heads[2] == "Notes"
    assert heads[3] == "At the end of each stage"
    assert heads[-1].startswith("Cautions")


@pytest.mark.parametrize(("kind", "changes"), [("tube", {}), ("heater", HOT), ("heater", {})])
def test_every_caution_is_one_line(run_of, kind, changes):
    setup, case, history = run_of(kind, **changes)
    lines = result_text(setup, case, history, None).rstrip().split("\n\n")[-1].splitlines()[1:]
    told = cautions_of(setup, history)
    assert lines == [f"  - {each.short}" for each in told]
    assert all(each.short.split()[0].rstrip(":,") == each.full.split()[0].rstrip(":,") for each in told[1:])


def test_a_shielding_gas_suffocates(run_of):
    in_argon = cautions_of(*run_of("heater", surroundings__gas="argon")[::2])
    in_air = cautions_of(*run_of("heater")[::2])
    assert next(each.full for each in in_argon if each not in in_air).startswith("Shielding gas")


def cautions_of(setup, history):
    return cautions(setup, float(history.readings["maximum"].max()))


def rows_of(table):
    return {line.strip().split("  ")[0]: line.split() for line in table.splitlines()}


def test_small_energies_are_in_watt_hours(run_of):
    setup, _, history = run_of("heater")
    absorbed = history.energy["absorbed"][-1]
    assert absorbed < 0.1 * 3.6e6
    rows = rows_of(energy_table(setup, history))
    assert rows["Wh"] == ["Wh", "%", "kWh/t"]
    assert float(rows["absorbed in the workpiece"][-3]) == pytest.approx(absorbed / 3600.0, abs=0.006)
    assert rows_of(energy_table(*run_of("tube")[::2]))["kWh"][0] == "kWh"


def test_rows_without_energy_are_left_out(run_of):
    setup, _, history = run_of("heater", schedule='[{stage = "transfer", duration = "5 s"}]')
    assert "absorbed" not in energy_table(setup, history)
    assert "lost in the tank" not in energy_table(*run_of("tube")[::2])


def test_a_row_loses_at_its_end_faces_in_the_open_only(run_of):
    row = energy_table(*run_of("tube", workpiece__neighbours="touching")[::2])
    assert "lost at the end faces, in the open (transfer)" in row
    assert "in the open" not in energy_table(*run_of("tube")[::2])


def test_peak_values_say_whose_they_are(run_of):
    setup, _, history = run_of("tube", workpiece__neighbours="touching")
    rows = rows_of(peak_table(setup, history))
    on = history.absorbed_power > 0.0
    efficiency = 100.0 * history.absorbed_power[on] / (setup.share * history.supply_power[on])
    told = rows["electrical efficiency (absorbed/supply), %"]
    assert told[-4:-2] == ["whole", "coil"]
    assert [float(each) for each in told[-2:]] == pytest.approx([efficiency.max(), efficiency.min()], abs=0.051)
    assert setup.share < 1.0
    assert "this piece" in " ".join(rows["absorbed power, kW"])
    area = math.pi * 6.0 * setup.mass / setup.material.density / (math.pi / 4.0 * (0.06**2 - 0.05**2)) * 100.0
    assert float(rows["absorbed per surface, W/cm2"][-2]) == pytest.approx(history.absorbed_power.max() / area, abs=0.1)


def test_low_frequencies_are_in_hertz(run_of):
    setup, case, history = run_of("tube", supply__frequency="800 Hz", schedule__0__until='{core = "60 °C"}')
    assert rows_of(peak_table(setup, history))["frequency, Hz"][-1] == "800"
    assert "; 800 Hz; coil" in piece_in_words(setup, case)
    assert "; 10 kHz; coil" in piece_in_words(*run_of("tube")[:2])


@pytest.mark.parametrize(("terminal", "expected"), [(40, 60), (72, 72), (200, 100)])
def test_the_width_follows_a_terminal(monkeypatch, terminal, expected):
    monkeypatch.setattr(sys.stdout, "isatty", lambda: True, raising=False)
    monkeypatch.setenv("COLUMNS", str(terminal))
    assert width() == expected
    assert max(map(len, paragraph("word " * 100).splitlines())) <= expected


def test_elsewhere_the_width_is_always_the_same(monkeypatch):
    monkeypatch.setenv("COLUMNS", "72")
    assert width() == WIDTH
