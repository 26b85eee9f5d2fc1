import math

import pytest
from quick_case import QUICK

from thermal.case import from_text
from thermal.errors import CaseError
from thermal.questions.sweep_plan import (
    Axis,
    axis_of,
    changes_of,
    demand_axes,
    demand_some_valid,
    grid_size,
    values_of,
)


def test_even_steps_in_the_unit_that_was_written():
    axis = axis_of("supply.power = 40 kW : 120 kW : 9")
    assert axis.path == "supply.power"
    assert axis.values == tuple(f"{10 * n} kW" for n in range(4, 13))
    assert (axis.numbers, axis.unit, axis.logarithmic) == (tuple(map(float, range(40, 121, 10))), "kW", False)


def test_ends_in_two_units_are_taken_in_the_first():
    assert axis_of("supply.power=500 W:2 kW:4").values == ("500 W", "1000 W", "1500 W", "2000 W")
    assert axis_of("workpiece.initial=32 °F:20 °C:3").values == ("32 °F", "50 °F", "68 °F")
    assert axis_of("lining.thickness=1 in:50.8 mm:2").values == ("1 in", "2 in")


def test_downwards_and_without_a_unit():
    assert axis_of("coil.turns=20:8:5").values == ("20", "17", "14", "11", "8")
    assert axis_of("workpiece.emissivity=0.2:0.9:8").numbers == pytest.approx([0.1 * n for n in range(2, 10)])


def test_even_ratios_end_where_they_should():
    axis = axis_of("supply.frequency=1 kHz:30 kHz:4:log")
    ratios = [b / a for a, b in zip(axis.numbers[:-1], axis.numbers[1:], strict=True)]
    assert ratios == pytest.approx([30.0 ** (1 / 3)] * 3, rel=1e-9)
    assert axis.logarithmic
    assert (axis.values[0], axis.values[-1]) == ("1 kHz", "30 kHz")
    assert axis_of("workpiece.initial=100 K:400 K:3:log").values == ("100 K", "200 K", "400 K")


def test_values_one_by_one():
    assert axis_of("workpiece.material=steel-c45, copper") == Axis(
        "workpiece.material", ("steel-c45", "copper"), None, ""
    )
    assert axis_of("supply.frequency=500 Hz,1 kHz,3 kHz").numbers == (500.0, 1000.0, 3000.0)
    assert axis_of('workpiece.material="304","316l"').numbers is None
    assert axis_of("coil.opening=120 x 40 mm,150 x 40 mm").numbers is None
    assert axis_of("supply.max_current=2 kA").values == ("2 kA",)


def test_brackets_and_quotes_keep_their_commas_and_colons():
    drives = axis_of('schedule.0.drive={ a = "1, 2", b = 1 },{ c = "x:y" }')
    assert drives.values == ('{ a = "1, 2", b = 1 }', '{ c = "x:y" }')


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("supply.power", "is not path=values, write for example"),
        ("=1,2", "is not path=values"),
        ("supply.power=", "is not path=values"),
        ("supply.power=40 kW:120 kW", "is not a range, write from:to:n"),
        ("supply.power=40 kW:120 kW:9:lin", "is not a range"),
        ("supply.power=40 kW:120 kW:nine", "'nine' is not a number of values"),
        ("supply.power=40 kW:120 kW:1", "'1' is not a number of values"),
        ("supply.power=40 kW:120 kW:1000001", "is not a number of values"),
        ("supply.power=low:120 kW:3", "'low' is not a number with a unit, write the values one by one"),
        ("supply.power=40:120 kW:3", "write the unit at every value"),
        ("supply.power=40 kW:120:3", "write the unit at every value, '120' has another"),
        ("supply.power=40 kW:120 mm:3", "mm and kW are units of different things"),
        ("supply.power=40 kW:120 kX:3", "unknown unit 'kX'"),
        ("supply.power=40 kW:40 kW:3", "a value is there twice"),
        ("supply.power=40 kW,40000 W", "a value is there twice"),
        ("workpiece.material=copper,copper", "a value is there twice"),
        ("workpiece.material=copper,,iron", "a value is empty"),
        ("supply.power=0 kW:40 kW:3:log", "needs two ends above zero"),
        ("workpiece.initial=20 °C:400 °C:3:log", "has no meaning"),
    ],
)
def test_bad_axes_are_refused_in_one_sentence(text, words):
    with pytest.raises(CaseError) as caught:
        axis_of(text)
    (told,) = caught.value.problems
    assert told.startswith("--over   ")
    assert words in told


def test_the_last_axis_changes_from_run_to_run():
    axes = [axis_of("a=1,2"), axis_of("b=x,y,z")]
    assert grid_size(axes) == 6
    assert [values_of(axes, run) for run in range(1, 7)] == [(a, b) for a in "12" for b in "xyz"]
    assert changes_of(axes, 4) == {"a": "2", "b": "x"}


@pytest.mark.parametrize(
    ("texts", "words"),
    [
        ([], "is missing, write for example"),
        (["a.b=1,2", "a.b=3,4"], "a.b: there are two axes on it"),
        (["a.b=1,2", "a={},{ b = 1 }"], "a.b lies inside a"),
        (["a=1:2:1000", "b=1:2:1000"], "the axes make 1000000 runs, at most 100000"),
    ],
)
def test_axes_that_do_not_go_together(texts, words):
    with pytest.raises(CaseError, match=words):
        demand_axes([axis_of(text) for text in texts])


def test_names_that_begin_alike_are_not_inside_each_other():
    demand_axes([axis_of("a.bc=1,2"), axis_of("a.b=1,2")])


@pytest.mark.parametrize(
    ("axis", "words"),
    [
        ("suply.power=1 kW:2 kW:300", "suply: unknown key, did you mean 'supply'?"),
        ("workpiece.diameter=1 kW:2 kW:2", "'1 kW' is a power, a length is wanted"),
        ("schedule.3.duration=1 s,2 s", "schedule is a list without '3'"),
        ("workpiece.material=steal,coper", "unknown material 'steal'"),
    ],
)
def test_a_sweep_without_any_valid_case_is_refused(axis, words):
    with pytest.raises(CaseError) as caught:
        demand_some_valid(from_text(QUICK, "."), [axis_of(axis)])
    told = caught.value.problems[0]
    assert told.startswith("--over   ")
    assert words in told


def test_one_valid_case_is_enough():
    demand_some_valid(from_text(QUICK, "."), [axis_of("workpiece.material=steal,coper,copper")])


def test_every_value_is_read_back_as_the_number_it_stands_for():
    axis = axis_of("numerics.tolerance=0.1 K:7.3 K:41")
    for text, number in zip(axis.values, axis.numbers, strict=True):
        assert math.isclose(float(text.removesuffix(" K")), number, rel_tol=1e-15)
    assert axis.numbers[1] - axis.numbers[0] == pytest.approx(7.2 / 40)
