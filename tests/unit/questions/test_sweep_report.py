import csv
import io
import json

import numpy as np
import pytest
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.collections import QuadMesh
from matplotlib.contour import ContourSet
from matplotlib.figure import Figure
from quick_case import QUICK, UNDRIVEN

from thermal.build import build
from thermal.case import from_text
from thermal.case.starter import starter
from thermal.questions.sweep import FIGURES, Sweep, sweep
from thermal.questions.sweep_plan import axis_of, grid_size, values_of
from thermal.questions.sweep_store import Row
from thermal.report.style import DPI, SIZE, styled
from thermal.report.sweep import sweep_csv, sweep_json, sweep_sentence, sweep_text, write_sweep
from thermal.report.sweep_map import Scale, draw_sweep

POWERS = axis_of("schedule.0.drive.absorbed_power=200 W:500 W:4")
DIAMETERS = axis_of("workpiece.diameter=6 mm:10 mm:3")


def made_up(axes, figures_of, fate_of=lambda *_: "target", kind="heater", overrides=None) -> Sweep:
    """A sweep that was not computed: figures and status are functions of the numbers of the axes."""
    rows = []
    for run in range(1, grid_size(axes) + 1):
        values = values_of(axes, run)
        at = [
            axis.values.index(value) if axis.numbers is None else axis.numbers[axis.values.index(value)]
            for axis, value in zip(axes, values, strict=True)
        ]
        status = fate_of(*at)
        figures = {} if status == "failed" else figures_of(*at)
        met = None if status == "failed" else status != "cannot_reach"
        rows.append(Row(run, values, status, met, "Told.", figures, (), 0.0))
    return Sweep(from_text(starter(kind), ".", overrides or {}), tuple(axes), tuple(rows), False)


def simple(x, y=1.0):
    return {"time_s": 100.0 + x * y, "spread_K": x - y, "absorbed_energy_kWh_per_t": 200.0 + y, "hottest_C": 900.0}


@pytest.fixture(scope="module")
def real():
    return sweep(from_text(QUICK, ".", name="pin"), (POWERS, DIAMETERS))


def setup_of(found):
    return build(found.case)


def test_the_table_has_every_run_in_the_order_of_the_grid(real):
    head, *rows = csv.reader(io.StringIO(sweep_csv(real)))
    assert head[:5] == ["run", "schedule.0.drive.absorbed_power_W", "workpiece.diameter_mm", "status", "met"]
    assert tuple(head[5:-2]) == FIGURES
    assert [row[:3] for row in rows[:4]] == [
        ["1", "200", "6"],
        ["2", "200", "8"],
        ["3", "200", "10"],
        ["4", "300", "6"],
    ]
    assert len(rows) == 12
    for row, made in zip(rows, real.rows, strict=True):
        told = dict(zip(head, row, strict=True))
        assert float(told["time_s"]) == pytest.approx(made.figures["time_s"], rel=1e-6)
        assert told["supply_energy_kWh_per_t"] == ""
        assert (told["met"], told["sentence"]) == ("true" if made.met else "false", made.sentence)
    assert "wall" not in "".join(head)


def test_words_keep_their_column_and_temperatures_their_unit():
    axes = (axis_of('workpiece.material="steel-c45",copper'), axis_of("workpiece.initial=20 °C,300 °C"))
    found = made_up(axes, lambda *_: simple(1.0))
    head, first, *_ = csv.reader(io.StringIO(sweep_csv(found)))
    assert head[1:3] == ["workpiece.material", "workpiece.initial_C"]
    assert first[1:3] == ["steel-c45", "20"]


def test_the_sentence_counts_and_names_the_best():
    fates = {1.0: "failed", 2.0: "limit", 3.0: "cannot_reach"}
    axis = axis_of("workpiece.diameter=1 mm:6 mm:6")
    found = made_up((axis,), lambda x: simple(x - 5.5), lambda x: fates.get(x, "target"))
    assert sweep_sentence(found) == (
        "6 runs: targets met in 3, a target missed in 1, hotter than the solidus in 1, no result in 1. "
        "Shortest time 98.5 s at diameter 4 mm; smallest spread -0.5 K at diameter 6 mm; "
        "least energy 201 kWh/t absorbed at diameter 4 mm."
    )


def test_two_axes_on_keys_of_one_name_are_told_apart():
    found = made_up((axis_of("workpiece.length=60 mm,70 mm"), axis_of("coil.length=1 m,2 m")), simple)
    assert "at workpiece.length 60 mm, coil.length 1 m" in sweep_sentence(found)


def test_the_text_tells_why_runs_failed(real):
    told = sweep_text(real, setup_of(real), "there")
    assert told.splitlines()[0] == "Copper pin"
    assert "200 W, 6 mm" in told
    assert "Failed" not in told
    assert "Files: there" in told
    assert "Force: the field pushes" in told
    half = made_up((DIAMETERS,), simple, lambda x: "failed" if x < 9.0 else "target")
    assert "Failed\n  - 2 runs: Told." in sweep_text(half, setup_of(half), "there")


def test_long_tables_stay_in_the_file():
    long = made_up((axis_of("workpiece.diameter=1 mm:6 mm:61"),), simple)
    assert "\nRuns\n" not in sweep_text(long, setup_of(long), "there")


def test_json_has_every_row_and_numbers_for_the_axes(real):
    told = json.loads(sweep_json(real, setup_of(real)))
    assert told["axes"][1] == {"path": "workpiece.diameter", "unit": "mm", "values": [6.0, 8.0, 10.0]}
    assert len(told["runs"]) == 12
    assert told["runs"][0]["time_s"] == real.rows[0].figures["time_s"]
    assert told["runs"][0]["coil_current_A_rms"] is None
    assert told["sentence"] == sweep_sentence(real)


def drawn(found):
    with styled():
        picture = Figure(figsize=SIZE, dpi=DPI)
        FigureCanvasAgg(picture)
        draw_sweep(picture, found, "Title", sweep_sentence(found))
        picture.canvas.draw()
    return picture


def meshes(axes):
    return [each for each in axes.collections if isinstance(each, QuadMesh)]


def hatches(axes):
    return {each.get_hatch() for each in [*axes.collections, *axes.patches]} - {None}


def test_one_axis_gives_curves_of_time_spread_and_energy():
    axis = axis_of("supply.frequency=8 kHz:500 Hz:5:log")
    picture = drawn(made_up((axis,), simple, lambda x: "cannot_reach" if x > 7.0 else "target"))
    time, spread, energy = picture.axes
    assert [axes.get_title(loc="left") for axes in picture.axes] == [
        "time to the target, s",
        "spread (surface - core) then, K",
        "energy absorbed, kWh/t",
    ]
    assert time.get_xscale() == "log"
    x, y = time.lines[0].get_data()
    assert list(x) == sorted(axis.numbers)
    assert np.isnan(y[-1])
    assert list(y[:-1]) == [100.0 + each for each in x[:-1]]
    assert all(hatches(axes) == {"..."} for axes in (time, spread, energy))
    assert [text.get_text() for text in picture.legends[0].get_texts()] == ["target not met"]


def test_words_on_an_axis_are_not_joined_by_a_line():
    picture = drawn(made_up((axis_of("workpiece.material=steel-c45,copper"),), simple))
    assert picture.axes[0].lines[0].get_linestyle() == "None"
    assert [label.get_text() for label in picture.axes[-1].get_xticklabels()] == ["steel-c45", "copper"]


def test_two_axes_give_maps_with_contours_and_hatched_failures():
    axes = (axis_of("supply.power=40 kW:120 kW:5"), axis_of("workpiece.diameter=60 mm:20 mm:4"))
    fates = {(40.0, 60.0): "failed", (120.0, 20.0): "limit", (60.0, 60.0): "cannot_reach"}
    found = made_up(axes, lambda x, y: simple(x, y / 100.0), lambda x, y: fates.get((x, y), "target"))
    picture = drawn(found)
    large = picture.axes[0]
    shown = meshes(large)[0].get_array()
    assert shown.shape == (4, 5)
    expected = np.array([[100.0 + x * (y / 100.0) for x in axes[0].numbers] for y in sorted(axes[1].numbers)])
    assert np.array_equal(shown[~np.ma.getmaskarray(shown)], expected[~np.ma.getmaskarray(shown)])
    assert np.argwhere(np.ma.getmaskarray(shown)).tolist() == [[0, 4], [3, 0], [3, 1]]
    assert hatches(large) == {"////", "xxx", "..."}
    assert any(isinstance(each, ContourSet) for each in large.collections)
    assert large.texts
    assert len(picture.axes) == 6


def test_a_map_over_words_has_numbers_instead_of_contours():
    axes = (axis_of("workpiece.material=steel-c45,copper"), axis_of("workpiece.diameter=20 mm:60 mm:4"))
    large = drawn(made_up(axes, simple)).axes[0]
    assert not any(isinstance(each, ContourSet) for each in large.collections)
    assert [text.get_text() for text in large.texts][:2] == ["100", "120"]


def test_a_map_without_any_change_can_be_drawn():
    drawn(made_up((POWERS, DIAMETERS), lambda *_: simple(1.0)))


@pytest.mark.parametrize(
    ("text", "edges", "logarithmic"),
    [
        ("a=1:5:3", [0.0, 2.0, 4.0, 6.0], False),
        ("a=5,1,3", [0.0, 2.0, 4.0, 6.0], False),
        ("a=1,2,4", [2**-0.5, 2**0.5, 2**1.5, 2**2.5], True),
        ("a=x,y", [-0.5, 0.5, 1.5], False),
        ("a=7", [6.5, 7.5], False),
        ("a=-1:1:3", [-1.5, -0.5, 0.5, 1.5], False),
    ],
)
def test_every_value_has_a_cell_around_it(text, edges, logarithmic):
    scale = Scale.of(axis_of(text))
    assert list(scale.edges) == pytest.approx(edges)
    assert scale.logarithmic is logarithmic
    for i, centre in enumerate(scale.centres):
        low, high = scale.cell(i)
        assert low < centre < high


def test_files_are_written_and_the_same_every_time(real, tmp_path):
    for folder in (tmp_path / "a", tmp_path / "b"):
        folder.mkdir()
        write_sweep(folder, real, setup_of(real))
        assert sorted(path.name for path in folder.iterdir()) == ["sweep.csv", "sweep.png", "sweep.svg"]
    for name in ("sweep.csv", "sweep.svg", "sweep.png"):
        assert (tmp_path / "a" / name).read_bytes() == (tmp_path / "b" / name).read_bytes()


@pytest.mark.parametrize(
    ("axes", "status", "words"),
    [
        ([POWERS, DIAMETERS, axis_of("workpiece.length=1 m,2 m")], "target", "No picture: 3 axes do not fit one"),
        ([POWERS], "cannot_reach", "No picture: no run met its target."),
        ([POWERS], "failed", "No picture: no run met its target."),
    ],
)
def test_where_there_is_no_picture_it_is_said(axes, status, words, tmp_path):
    found = made_up(axes, lambda x, *_: simple(x), lambda *_: status)
    write_sweep(tmp_path, found, setup_of(found))
    assert [path.name for path in tmp_path.iterdir()] == ["sweep.csv"]
    assert words in sweep_text(found, setup_of(found), tmp_path)


def test_without_targets_the_time_is_that_of_heating():
    found = sweep(from_text(UNDRIVEN, "."), (DIAMETERS,))
    assert "no target asked in 3" in sweep_sentence(found)
    assert drawn(found).axes[0].get_title(loc="left") == "heating time, s"


def test_long_times_are_in_minutes():
    picture = drawn(made_up((DIAMETERS,), lambda x: {**simple(x), "time_s": 600.0 * x}))
    assert picture.axes[0].get_title(loc="left") == "time to the target, min"
    assert list(picture.axes[0].lines[0].get_ydata()) == [60.0, 80.0, 100.0]
