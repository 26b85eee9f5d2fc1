import json
import math
import re

import pytest

from thermal import loop
from thermal.case import from_text, with_changes
from thermal.case.starter import starter
from thermal.errors import CaseError
from thermal.questions import answer as answer_module
from thermal.questions.frequency import frequency_window
from thermal.questions.peak_temperature import peak_temperature
from thermal.questions.time_to_temperature import time_to_temperature
from thermal.report.advice import ALWAYS, FORCE, MELTING, MELTING_ALUMINIUM, cautions
from thermal.report.answers import answer_json, answer_text
from thermal.report.text import WIDTH
from thermal.results.verdict import power

ZERO = 273.15
UNITS = ("C", "K", "W", "s", "Hz", "mm", "J", "A_rms", "V_rms", "A_per_m_rms", "kWh_per_t")
PURE = {"electrical_efficiency", "size_over_skin_depth"}
"""Ratios: no unit to end in."""


def quantities(told, name=""):
    """Name of every number in a JSON document, lists and tables under the name that holds them."""
    match told:
        case dict():
            for key, value in told.items():
                yield from quantities(value, key)
        case list():
            for value in told:
                yield from quantities(value, name)
        case bool() | str() | None:
            pass
        case _:
            yield name


def row(answer, label):
    (found,) = (row[1:] for table in answer.tables for row in table.rows if row[0].strip() == label)
    return found


def test_the_sentence_comes_first_and_nothing_is_wider_than_the_page(asked):
    answer, case = asked
    text = answer_text(answer, case, None)
    assert max(len(line) for line in text.splitlines()) <= WIDTH
    title, sentence, *rest = text.split("\n\n")
    assert " ".join(title.split()) == case.title.strip()
    assert " ".join(sentence.split()) == answer.sentence
    headings = [part.splitlines()[0] for part in rest]
    assert "What to expect" in headings
    assert headings[-1].startswith("Cautions")
    # Peaks without a state of rest have no table; everything else has one.
    assert bool(answer.tables) == (not answer.sentence.startswith("No state of rest"))


def test_every_cell_of_every_table_is_shown(asked):
    answer, case = asked
    text = answer_text(answer, case, None)
    for table in answer.tables:
        assert len({len(cells) for cells in table.rows}) == 1
        assert all(cell in text for cells in table.rows for cell in cells)
        assert "nan" not in str(table.rows)
    assert "-0 " not in text.replace("\n", " ")


def test_the_notes_are_shown(asked):
    answer, case = asked
    text = " ".join(answer_text(answer, case, None).split())
    assert all(note in text for note in answer.notes)


def test_json_is_valid_and_every_number_is_named_with_its_unit(asked):
    answer, case = asked

    def refuse(constant):
        raise AssertionError(f"{constant} is no JSON")

    told = json.loads(answer_json(answer, case), parse_constant=refuse)
    assert told["sentence"] == answer.sentence
    assert told["met"] is answer.met
    names = set(quantities({key: told[key] for key in answer.values})) - PURE
    assert len(names) >= 3
    assert {name for name in names if not name.endswith(tuple(f"_{unit}" for unit in UNITS))} == set()


def test_figures_that_do_not_exist_are_null(answer_of):
    answer, case = answer_of("frequency without a coil")
    told = json.loads(answer_json(answer, case))
    assert set(told["coil_voltage_V_rms"]) == {None}
    assert math.isnan(answer.result.voltage[0])


@pytest.mark.parametrize("name", ["peak", "peak, melts", "peak, stalls"])
def test_what_scripts_rely_on_is_there(answer_of, name):
    told = json.loads(answer_json(*answer_of(name)))
    reached = [state for state in told["equilibria"] if state["reached"]]
    assert [told["peak_surface_C"], told["peak_core_C"]] == (
        [None, None] if not reached else [reached[0]["surface_C"], reached[0]["core_C"]]
    )


def test_the_cautions_of_all_pieces_are_given_once(answer_of):
    answer, case = answer_of("compare")
    full = json.loads(answer_json(answer, case))["cautions"]
    wanted = {each.full for setup, hottest in answer.pieces for each in cautions(setup, hottest)}
    assert set(full) == wanted
    assert len(full) == len(wanted)
    # Steel has neither of these; the metals beside it do.
    assert FORCE.full in full
    assert MELTING_ALUMINIUM.full in full
    assert FORCE.full not in {each.full for each in cautions(*answer.pieces[0])}
    assert FORCE.short in answer_text(answer, case, None)


def test_cautions_of_what_melts(answer_of):
    answer, case = answer_of("peak, melts")
    assert MELTING.short in answer_text(answer, case, None)
    mild, mild_case = answer_of("frequency without a coil")
    assert MELTING.short not in answer_text(mild, mild_case, None)
    assert ALWAYS.short in answer_text(mild, mild_case, None)


def test_the_folder_is_named_only_where_there_are_files(answer_of, tmp_path):
    answer, case = answer_of("time")
    assert "Files:" not in answer_text(answer, case, None)
    assert f"Files: {tmp_path}" in answer_text(answer, case, tmp_path).replace("\n", " ").replace("  ", " ")


@pytest.mark.parametrize("name", ["time in a row", "peak in a row"])
def test_of_a_row_it_is_said_what_is_of_the_whole_coil(answer_of, name):
    answer, _ = answer_of(name)
    labels = [cells[0] for table in answer.tables for cells in table.rows]
    assert any(label.startswith("supply power (whole coil)") for label in labels)
    assert any("(this piece), " in label for label in labels)
    assert any("of which this piece takes 25.0 %" in note for note in answer.notes)
    alone, _ = answer_of(name.removesuffix(" in a row"))
    assert not any("(whole coil)" in cells[0] for table in alone.tables for cells in table.rows)
    assert not any("One piece of a row" in note for note in alone.notes)


@pytest.mark.parametrize("name", ["compare in a row", "frequency in a row"])
def test_of_a_row_a_note_says_so(answer_of, name):
    assert any(note.startswith("One piece of a row") for note in answer_of(name)[0].notes)


def test_energy_and_power_of_a_row_are_of_one_piece(answer_of):
    answer, _ = answer_of("peak in a row")
    (absorbed,), (given,) = row(answer, "absorbed = lost (this piece), W"), row(answer, "supply power (whole coil), kW")
    share = answer.setup.share
    # Next to all the power of this coil goes into magnetic steel.
    assert 0.9 * share < float(absorbed) / (1e3 * float(given)) < share


def test_never_reached_says_where_it_settles(answer_of):
    answer, _ = answer_of("time never")
    assert answer.sentence.startswith("1100 °C in the core is never reached: it settles at 512 °C, where the drive")
    assert "current limit" in answer_of("time, limited")[0].sentence
    assert answer.values["time_s"] is None


def test_what_a_metal_needs_that_never_gets_there_is_left_out(answer_of):
    answer, _ = answer_of("compare never")
    energy, time = row(answer, "kWh/t from the supply"), row(answer, "time, s")
    assert [text.startswith("never") for text in time] == [text == "-" for text in energy] == [False, True, True]
    assert not answer.met


def test_a_piece_that_burns_on_the_way_is_no_success(answer_of):
    answer, _ = answer_of("time, burnt")
    assert answer.sentence.endswith("passes the solidus 1400 °C: the piece burns or melts there.")
    assert answer.result.time is not None
    assert not answer.met


@pytest.mark.slow
def test_a_state_of_rest_above_the_solidus_is_no_success():
    case = from_text(starter("heater"), ".")
    cool, hot = (peak_temperature(case, absorbed_power=watts) for watts in (1000.0, 1150.0))
    assert cool.met
    solidus = hot.setup.material.solidus
    assert hot.result.reached.at.readings["maximum"] > solidus > cool.result.reached.at.readings["maximum"]
    assert not hot.met
    assert hot.sentence.endswith("There the hottest point passes the solidus 1430 °C: the piece burns or melts there.")


def test_a_piece_that_begins_beyond_the_curve_stays_an_answer():
    # Where such a thick piece begins to melt at its hottest point, its mean is still far below.
    text = """
format = 1
[workpiece]
shape = "cylinder"
diameter = "300 mm"
length = "300 mm"
material = "stainless-304"
emissivity = 0.9
initial = "{initial}"
[[schedule]]
stage = "heat"
drive = {{ absorbed_power = "400 kW", frequency = "10 kHz" }}
duration = "10 s"
"""
    cold, hot = (peak_temperature(from_text(text.format(initial=T), ".")) for T in ("20 °C", "1395 °C"))
    assert hot.result.curve.points[-1].mean < ZERO + 1395.0
    assert hot.sentence == cold.sentence


THROUGH_A_HOLD = """[{stage = "heat", drive = {supply_power = "25 kW"}, until = {surface = "600 °C"}},
    {stage = "hold", at = {surface = "600 °C"}, duration = "20 s"},
    {stage = "transfer", duration = "2 s"},
    {stage = "heat", drive = {supply_power = "25 kW"}, until = {core = "900 °C"}}]"""


@pytest.mark.parametrize(("T", "stage"), [(500.0, "heat"), (590.0, "hold"), (800.0, "heat")])
def test_the_first_time_counts_whatever_the_stage(T, stage):
    case = from_text(starter("tube"), ".", {"schedule": " ".join(THROUGH_A_HOLD.split())})
    answer = time_to_temperature(case, ZERO + T)
    history = answer.result.history
    assert answer.met
    assert history.stages[-1].kind == stage
    assert history.readings["core"][-1] == pytest.approx(ZERO + T, abs=2e-3)
    assert (history.readings["core"][:-1] < ZERO + T).all()
    assert (", in the hold stage;" in answer.sentence) == (stage == "hold")


@pytest.mark.parametrize(
    ("to", "at", "sentence"),
    [
        (15.0, "core", "--to    15 °C is no rise: the workpiece begins at 20 °C"),
        (300.0, "spread", "--at    the spread is a difference, not a temperature (the case has: surface, core, mean,"),
        (300.0, "middle", "--at    there is no reading 'middle' (the case has: surface, core, mean, maximum)"),
        (1430.0, "core", "--to    1430 °C is not below the solidus of steel-c45 (1430 °C)"),
    ],
)
def test_what_cannot_be_asked(to, at, sentence):
    with pytest.raises(CaseError, match=re.escape(sentence)):
        time_to_temperature(from_text(starter("heater"), "."), ZERO + to, at=at)


def test_frequencies_are_asked_below_the_solidus_and_within_what_can_be_computed():
    plate = from_text(starter("plate"), ".")
    with pytest.raises(CaseError, match="not below the solidus"):
        frequency_window(plate, T=ZERO + 1500.0)
    # Magnetic and thick: the closed form lies near 1 Hz, the least a case may have.
    thick = with_changes(plate, {"workpiece.thickness": "80 mm", "coil.opening": "180 x 120 mm"})
    window = frequency_window(thick).result
    assert window.frequency[0] == pytest.approx(1.0)
    assert window.closed_form * 0.06 < 1.0


def test_an_interrupted_question_has_no_answer(monkeypatch):
    def stopped(setup, on_state=None):
        def stop(state):
            if state.time > 2.0:
                raise KeyboardInterrupt

        return loop.run(setup, stop)

    monkeypatch.setattr(answer_module, "run", stopped)
    with pytest.raises(KeyboardInterrupt):
        time_to_temperature(from_text(starter("heater"), "."), ZERO + 600.0)


@pytest.mark.parametrize(
    ("watts", "text"),
    [(0.0, "0 W"), (999.4, "999 W"), (999.6, "1 kW"), (21340.0, "21.3 kW"), (999.6e3, "1 MW"), (4e7, "40 MW")],
)
def test_powers_in_words(watts, text):
    assert power(watts) == text
