import numpy as np
import pytest

from thermal.results.stages import first_crossing, limit_spans, off_spans, stage_ends, stage_names, time_above

TIME = np.array([0.0, 1.0, 3.0, 4.0])
VALUES = np.array([0.0, 2.0, 2.0, -2.0])


@pytest.mark.parametrize(("level", "expected"), [(1.0, 0.5 + 2.0 + 0.25), (0.0, 3.5), (2.0, 0.0), (-3.0, 4.0)])
def test_time_above_a_level(level, expected):
    assert time_above(TIME, VALUES, level) == pytest.approx(expected)


@pytest.mark.parametrize(("level", "expected"), [(1.0, 0.5), (2.0, None), (-1.0, 0.0)])
def test_first_crossing(level, expected):
    assert first_crossing(TIME, VALUES, level) == expected


def test_kinds_that_occur_twice_are_numbered(run_of):
    twice = """[{stage = "heat", drive = {supply_power = "20 kW"}, duration = "2 s"}, {stage = "transfer",
        duration = "1 s"}, {stage = "heat", drive = {supply_power = "20 kW"}, duration = "2 s"}]"""
    setup, _, history = run_of("plate", schedule=twice)
    assert stage_names(setup) == ("heat 1", "transfer", "heat 2")
    assert [end.last for end in stage_ends(setup, history)] == [
        int(np.flatnonzero(history.stage == number)[-1]) for number in range(3)
    ]
    assert off_spans(history) == [(pytest.approx(2.0), pytest.approx(3.0))]


def test_spans_of_a_limit_agree_with_the_records(run_of):
    _, _, history = run_of("tube", supply__max_current="400 A", schedule__0__until='{core = "600 °C"}')
    recorded = history.stages[0].limits["current"]
    assert recorded
    found = limit_spans(history)["current"]
    assert found[: len(recorded)] == [pytest.approx(span) for span in recorded]


def test_an_interrupted_stage_is_told(run_of):
    setup, _, history = run_of("tube", stop_after=5.0)
    (end,) = stage_ends(setup, history)
    assert (end.record.reason, end.record.met) == ("interrupted", False)
    assert end.record.end == history.time[-1] > 5.0
