import itertools
from dataclasses import replace

import pytest
from matplotlib.text import Text

from thermal.questions.rest import Curve, Equilibrium
from thermal.report.answer_files import PICTURES, write_answer
from thermal.report.compare_figure import LOOKS, draw_compare
from thermal.report.frame import frame
from thermal.report.frequency_figure import draw_frequency
from thermal.report.peak_figure import draw_peak
from thermal.report.style import DPI, SIZE, styled

DRAW = {"peak": draw_peak, "compare": draw_compare, "frequency": draw_frequency}
SETTLED = "peak, stalls"


def drawn(answer, title=None, sentence=None):
    """The picture of an answer; inside styled()."""
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    figure = Figure(figsize=SIZE, dpi=DPI)
    FigureCanvasAgg(figure)
    DRAW[answer.question](figure, answer.setup, answer.result)
    frame(figure, title or answer.setup.title, sentence or answer.sentence, "cylinder 20 mm, 100 mm long, steel-c45")
    return figure


def labels_of(figure):
    """Text and box of everything that is drawn; ticks beyond the end of an axis are not."""
    figure.canvas.draw()
    beyond = {
        tick.label1
        for axes in figure.axes
        for axis in (axes.xaxis, axes.yaxis)
        for tick in (*axis.get_major_ticks(), *axis.get_minor_ticks())
        if not min(axis.get_view_interval()) <= tick.get_loc() <= max(axis.get_view_interval())
    }
    found = [text for text in figure.findobj(Text) if text.get_visible() and text.get_text().strip()]
    return [(text.get_text(), text.get_window_extent()) for text in found if text not in beyond]


def demand_clear(figure):
    """No two texts overlap and none leaves the picture."""
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


def with_states(answer, states, reached=0):
    """The answer with other states of rest."""
    curve = Curve(answer.result.curve.points, tuple(states))
    return replace(answer, result=replace(answer.result, curve=curve, reached=states[reached]))


def five_states(answer, means):
    """States alternately stable and unstable at the points of the curve nearest to some means [°C]."""
    points = answer.result.curve.points
    near = [min(points, key=lambda point: abs(point.mean - 273.15 - mean)) for mean in means]
    return with_states(answer, [Equilibrium(point, stable=i % 2 == 0) for i, point in enumerate(near)])


def test_no_two_texts_overlap_and_all_are_inside(asked_drawn):
    with styled():
        demand_clear(drawn(asked_drawn[0]))


@pytest.mark.parametrize("name", ["peak", "compare", "frequency"])
def test_a_title_and_an_answer_of_any_length_stay_clear(answer_of, name):
    answer, _ = answer_of(name)
    with styled():
        demand_clear(drawn(answer, title="x" * 400, sentence=f"{answer.sentence} " * 5))


@pytest.mark.parametrize(
    "means",
    [(200.0, 400.0, 600.0, 800.0, 1000.0), (30.0, 45.0, 60.0, 90.0, 1400.0), (760.0, 768.0, 770.0, 772.0, 790.0)],
)
def test_five_states_of_rest_are_named_apart(answer_of, means):
    answer = five_states(answer_of(SETTLED)[0], means)
    with styled():
        figure = drawn(answer)
        demand_clear(figure)
        found = [text.split("\n")[0] for text, _ in labels_of(figure)]
    assert (found.count("reached"), found.count("stable"), found.count("unstable")) == (1, 2, 2)


def test_states_are_marked_on_both_curves(answer_of):
    answer, _ = answer_of(SETTLED)
    with styled():
        axes = drawn(answer).axes[0]
    marks = [line for line in axes.lines if line.get_marker() == "o"]
    states = answer.result.curve.states
    assert [line.get_xdata()[0] for line in marks] == [state.at.mean - 273.15 for state in states]
    assert [line.get_markerfacecolor() == "white" for line in marks] == [not state.stable for state in states]
    (brought, lost) = (line.get_xydata() for line in axes.lines if line.get_label()[0] != "_")
    assert len(brought) == len(lost) == len(answer.result.curve.points)
    low, high = axes.get_ylim()
    assert all(low < line.get_ydata()[0] < high for line in marks)


@pytest.mark.parametrize("name", ["peak", "peak of a plate", SETTLED, "peak without a coil", "peak, melts"])
def test_what_the_drive_brings_can_be_seen(answer_of, name):
    with styled():
        axes = drawn(answer_of(name)[0]).axes[0]
    brought = next(line for line in axes.lines if line.get_label().startswith("absorbed")).get_ydata()
    # Neither along the bottom nor off the top: somewhere it is in the upper four fifths.
    top = axes.get_ylim()[1]
    assert ((0.2 * top < brought) & (brought < top)).any()


def test_every_metal_has_dashes_of_its_own():
    assert len({str(dashes) for _, dashes in LOOKS}) == len({colour for colour, _ in LOOKS}) == len(LOOKS)


def test_eleven_metals_with_long_names_stay_clear(answer_of):
    answer, _ = answer_of("compare")
    metals = answer.result.metals
    many = [
        replace(metals[i % len(metals)], key=f"an-alloy-of-my-own-{i}-in-a-file-with-a-very-long-name.toml")
        for i in range(11)
    ]
    with styled():
        demand_clear(drawn(replace(answer, result=replace(answer.result, metals=tuple(many)))))


def test_a_metal_that_never_gets_there_is_said_to(answer_of):
    with styled():
        found = [text for text, _ in labels_of(drawn(answer_of("compare never")[0]))]
    assert "copper\nnever, 181 °C" in found
    assert any(text.startswith("steel-c45\n") and text.endswith(" s") for text in found)


def test_without_a_coil_nothing_of_a_coil_is_drawn(answer_of):
    with styled():
        for name in ("compare", "frequency"):
            found = {
                kind: " ".join(text for text, _ in labels_of(drawn(answer_of(f"{name}{kind}")[0])))
                for kind in ("", " without a coil")
            }
            assert "efficiency" in found[""]
            assert "efficiency" not in found[" without a coil"]
            assert "coil voltage" not in found[" without a coil"]


@pytest.mark.parametrize(("lower", "upper"), [(1e3, 1.05e3), (60.0, 61.0), (2e5, 3e5), (1e2, 5e5)])
def test_narrow_and_wide_windows_stay_clear(answer_of, lower, upper):
    answer, _ = answer_of("frequency")
    window = replace(answer.result, lower=lower, upper=upper)
    with styled():
        demand_clear(drawn(replace(answer, result=window)))


@pytest.mark.parametrize("name", [SETTLED, "compare two", "frequency without a coil"])
def test_the_same_answer_gives_the_same_pictures(answer_of, name, tmp_path):
    answer, case = answer_of(name)
    for folder in ("first", "second"):
        write_answer(tmp_path / folder, answer, case)
    for file in PICTURES[answer.question]:
        first, second = ((tmp_path / folder / file).read_bytes() for folder in ("first", "second"))
        assert first == second
        assert len(first) > 1000


@pytest.mark.filterwarnings("error")
def test_a_title_with_signs_and_letters_the_font_lacks_does_no_harm(answer_of, tmp_path):
    answer, case = answer_of("frequency without a coil")
    named = replace(answer, setup=replace(answer.setup, title="cost $5 & $x^2_{, 100 % <b> 钢管"))
    write_answer(tmp_path / "out", named, case)
    assert (tmp_path / "out" / "frequency.svg").stat().st_size > 1000
