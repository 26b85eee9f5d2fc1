import itertools

import numpy as np
import pytest
from matplotlib.text import Text

from thermal.report.figures import curves_figure
from thermal.report.labels import cost_of_place, spread_out
from thermal.report.style import STYLES, styled

LONG = "A long title about the bar, the coil and the press that goes on " * 4
READINGS = "[" + ", ".join(f'{{name = "thermocouple-number-{i}", depth = "{i} mm"}}' for i in range(6)) + "]"
SHORT_STAGES = """[{stage = "heat", drive = {supply_power = "25 kW"}, until = {core = "880 °C"}},
    {stage = "transfer", duration = "0.3 s"}, {stage = "hold", at = {surface = "900 °C"}, duration = "0.5 s"},
    {stage = "transfer", duration = "0.3 s"}, {stage = "hold", at = {surface = "895 °C"}, duration = "0.5 s"},
    {stage = "transfer", duration = "40 s"}]"""
CASES = {
    "usual": ("tube", {}),
    "no coil": ("heater", {}),
    "long title": ("tube", {"title": LONG}),
    "one long word": ("plate", {"title": "x" * 400}),
    "title with signs": ("plate", {"title": "cost $5 & $x^2_{, 100 % <b>"}),
    "other script": ("plate", {"title": "钢管"}),
    "many readings": ("tube", {"reading": READINGS}),
    "short stages": ("tube", {"schedule": SHORT_STAGES}),
    "limits": (
        "tube",
        {"supply__max_current": "300 A", "supply__max_voltage": "100 V", "schedule__0__longest": "40 s"},
    ),
    "minutes": ("plate", {"schedule__1__duration": "2000 s"}),
    "no power": ("tube", {"schedule": '[{stage = "transfer", duration = "5 s"}]'}),
}


def labels_of(figure):
    """Text and box of everything that is drawn; ticks beyond the end of an axis are not."""
    figure.canvas.draw()
    beyond = {
        tick.label1
        for axes in figure.axes
        for axis in (axes.xaxis, axes.yaxis)
        for tick in axis.get_major_ticks()
        if not min(axis.get_view_interval()) <= tick.get_loc() <= max(axis.get_view_interval())
    }
    found = [text for text in figure.findobj(Text) if text.get_visible() and text.get_text().strip()]
    return [(text.get_text(), text.get_window_extent()) for text in found if text not in beyond]


@pytest.fixture(params=CASES)
def figure(request, run_of):
    kind, changes = CASES[request.param]
    with styled():
        yield curves_figure(*run_of(kind, **changes))


@pytest.mark.filterwarnings("ignore:Glyph .* missing from")
def test_no_two_labels_overlap_and_all_are_inside(figure):
    labels = labels_of(figure)
    assert len(labels) > 12
    hit = [
        (a, b)
        for (a, one), (b, other) in itertools.combinations(labels, 2)
        if one.x0 < other.x1 - 0.5 and other.x0 < one.x1 - 0.5 and one.y0 < other.y1 - 0.5 and other.y0 < one.y1 - 0.5
    ]
    assert hit == []
    outside = [
        text
        for text, box in labels
        if box.x0 < 0 or box.x1 > figure.bbox.width or box.y0 < 0 or box.y1 > figure.bbox.height
    ]
    assert outside == []


def texts(run, **_):
    with styled():
        return [text for text, _ in labels_of(curves_figure(*run))]


def test_targets_stages_and_curves_are_named(run_of):
    found = texts(run_of("tube"))
    for words in ("target core, hold surface 900 °C", "Curie point 768 °C", "heat", "hold", "transfer"):
        assert words in found
    assert {name for name in STYLES if any(text.startswith(f"{name} ") for text in found)} == set(STYLES)
    assert not any("solidus" in text for text in found)
    assert "grey: power off" in found
    assert any(text.startswith("tube 60 mm outside") for text in found)


def test_the_solidus_is_shown_near_it(run_of):
    run = run_of("heater", workpiece__material="aluminium-6082", schedule__0__until='{surface = "500 °C"}')
    assert "solidus 575 °C" in texts(run)


def test_a_limit_is_named(run_of):
    found = texts(run_of("tube", supply__max_current="400 A", schedule__0__until='{core = "600 °C"}'))
    assert "current limit bound" in found


def test_a_long_run_is_in_minutes(run_of):
    assert "time, min" in texts(run_of("plate", schedule__1__duration="2000 s"))
    assert "time, s" in texts(run_of("plate"))


def test_every_standard_curve_has_its_own_dashes_or_width():
    looks = [(str(dashes), width) for _, dashes, width in STYLES.values()]
    assert len(set(looks)) == len(looks)


def test_intervals_that_have_room_stay_where_they_are():
    assert spread_out([1.0, 5.0, 9.0], [1.0, 1.0, 1.0], 0.0, 10.0) == [1.0, 5.0, 9.0]


def test_intervals_in_one_place_lie_side_by_side_around_it():
    assert spread_out([5.0, 5.0], [2.0, 2.0], 0.0, 10.0) == [4.0, 6.0]


def test_intervals_stay_inside_and_apart():
    sizes = [1.0, 2.0, 1.5, 1.0, 3.0]
    centres = spread_out([9.9, 9.8, 0.0, 9.7, 5.0], sizes, 0.0, 10.0)
    spans = sorted((c - s / 2, c + s / 2) for c, s in zip(centres, sizes, strict=True))
    assert spans[0][0] >= 0.0
    assert spans[-1][1] <= 10.0 + 1e-12
    assert all(a[1] <= b[0] + 1e-12 for a, b in itertools.pairwise(spans))


def test_what_cannot_fit_is_none():
    assert spread_out([1.0, 2.0], [6.0, 6.0], 0.0, 10.0) is None


def test_a_run_without_power_has_no_panel_for_it(run_of):
    run = run_of("tube", schedule='[{stage = "transfer", duration = "5 s"}]')
    found = texts(run)
    assert "power, kW" not in found
    assert "grey: power off" not in found
    assert "time, s" in found
    assert "power, kW" in texts(run_of("tube"))


def test_an_interrupted_run_is_marked_in_the_title(run_of):
    assert any(text.startswith("Interrupted, incomplete: ") for text in texts(run_of("tube", stop_after=5.0)))


BOX = (10.0, 10.0, 30.0, 20.0)
FAR = 1000.0


@pytest.mark.parametrize(
    ("curve", "struck"),
    [
        ([(0.0, 15.0), (100.0, 15.0)], 1),
        ([(0.0, 0.0), (19.0, 0.0), (21.0, FAR), (100.0, FAR)], 1),
        ([(0.0, 5.0), (100.0, 5.0)], 0),
        ([(0.0, 0.0), (9.0, 0.0), (9.5, 40.0), (100.0, 40.0)], 0),
    ],
)
def test_a_curve_through_a_label_is_noticed(curve, struck):
    assert cost_of_place(BOX, [np.array(curve)], [], [], [])[:3] == (0, struck, 0)


def test_other_lines_and_labels_are_noticed():
    assert cost_of_place(BOX, [], [15.0, 40.0], [5.0, 20.0], [(25.0, 15.0, 60.0, 25.0)])[:3] == (1, 1, 1)


def test_more_room_is_better():
    near, far = ([np.array([(0.0, y), (100.0, y)])] for y in (22.0, 30.0))
    assert cost_of_place(BOX, far, [], [], []) < cost_of_place(BOX, near, [], [], [])


@pytest.mark.parametrize(
    ("kind", "changes"),
    [
        ("heater", {"schedule__0__until": '{surface = "300 °C", core = "290 °C"}'}),
        ("tube", {"schedule__0__until": '{core = "765 °C"}', "schedule__1__at": '{surface = "765 °C"}'}),
    ],
)
def test_no_curve_strikes_through_a_level_label(run_of, kind, changes):
    with styled():
        figure = curves_figure(*run_of(kind, **changes))
        figure.canvas.draw()
        axes = figure.axes[0]
        labels = [text for text in axes.texts if text.get_text().startswith(("target", "hold", "Curie", "solidus"))]
        assert len(labels) >= 2
        curves = [axes.transData.transform(line.get_xydata()) for line in axes.lines[:4]]
        for label in labels:
            box = label.get_window_extent()
            assert cost_of_place((box.x0, box.y0, box.x1, box.y1), curves, [], [], [])[1] == 0
