import sys
from dataclasses import replace

import numpy as np
import pytest
from cases_in_words import coil_case, workpiece

from thermal.build import build
from thermal.case import from_text
from thermal.crosscheck import fipy_heat
from thermal.crosscheck.fipy_bar import CELLS, CELLS_IN_HEAT, FipyBar, import_fipy, own_edges
from thermal.crosscheck.fipy_heat import AtEnd, Largest, Pass, SecondEngine, compare, compare_run, places_of, step_times
from thermal.crosscheck.recorded_heat import RecordedHeat, heat_depth, recorded_heat
from thermal.errors import ThermalError
from thermal.geometry.grading import refine
from thermal.loop import march, run
from thermal.report.second_engine import second_engine_text
from thermal.report.text import WIDTH

COOLING = '[[schedule]]\nstage = "transfer"\nduration = "30 s"\n'
STEPS = 20
HEATING = '[[schedule]]\nstage = "heat"\ndrive = { supply_power = "20 kW" }\nduration = "8 s"\n'


@pytest.fixture(scope="module")
def heated():
    """A bar of a touching row: heated in a lined coil, then left in the open."""
    setup = build(from_text(coil_case("cylinder", True, "touching") + HEATING + COOLING, "."))
    return setup, run(setup)


def test_heat_keeps_its_energy_in_time_and_place(heated):
    setup, history = heated
    mesh = setup.section.mesh
    heat = recorded_heat(history, mesh, 0, refine(mesh.edges, 3))
    rows = np.flatnonzero(history.stage == 0)
    booked = history.energy["absorbed"][rows]
    for i in (1, 5, rows.size - 1):
        assert heat.until(history.time[rows[i]]).sum() == pytest.approx(booked[i], rel=1e-12)
    # Cells cut in three hold together what their cell had.
    per_cell = heat.start[3].reshape(-1, 3).sum(axis=1)
    recorded = history.heat[rows[3]] * mesh.volume
    assert per_cell / per_cell.sum() == pytest.approx(recorded / recorded.sum(), rel=1e-9)
    assert heat.start.min() >= 0.0


def test_heat_between_two_records(heated):
    setup, history = heated
    heat = recorded_heat(history, setup.section.mesh, 0, setup.section.mesh.edges)
    i = 8
    middle = 0.5 * (heat.time[i] + heat.time[i + 1])
    width = heat.time[i + 1] - heat.time[i]
    expected = heat.brought[i] + 0.125 * width * (3.0 * heat.start[i] + heat.end[i])
    assert heat.until(float(middle)) == pytest.approx(expected, rel=1e-12)


def test_an_interval_between_records_without_power_keeps_its_energy(heated):
    setup, history = heated
    silent = history.heat.copy()
    silent[4:6] = 0.0
    heat = recorded_heat(replace(history, heat=silent), setup.section.mesh, 0, setup.section.mesh.edges)
    booked = np.diff(history.energy["absorbed"][:7])
    assert np.diff(heat.brought.sum(axis=1))[:6] == pytest.approx(booked, rel=1e-12)
    nearest = silent[3] * setup.section.mesh.volume
    assert heat.start[4] / heat.start[4].sum() == pytest.approx(nearest / nearest.sum(), rel=1e-9)


def test_depth_of_the_heat_is_that_of_a_decaying_source(heated):
    setup, history = heated
    mesh = setup.section.mesh
    decaying = np.exp(-(mesh.edges[-1] - mesh.r) / 1e-3) / mesh.r
    powered = replace(history, heat=np.tile(decaying, (history.time.size, 1)))
    assert heat_depth(powered, mesh) == pytest.approx(1e-3, rel=0.02)
    off = replace(history, absorbed_power=np.zeros(history.time.size))
    assert heat_depth(off, mesh) == pytest.approx(mesh.edges[-1] - mesh.edges[0])


def test_own_cells():
    edges = own_edges(0.01, 0.04, 1e-3)
    width = np.diff(edges)
    assert edges[[0, -1]].tolist() == [0.01, 0.04]
    assert width.size == CELLS
    assert width[-1] == pytest.approx(1e-3 / CELLS_IN_HEAT, rel=1e-6)
    assert np.all(width[:-1] > width[1:])
    assert np.diff(own_edges(0.0, 0.02, 0.02)) == pytest.approx(0.02 / CELLS, rel=1e-4)


def test_half_the_step_everywhere():
    coarse, fine = step_times(3.0, 10.0, 40), step_times(3.0, 10.0, 80)
    assert fine[::2] == pytest.approx(coarse, rel=1e-14)
    assert np.all(np.diff(coarse) > 0.0)
    assert places_of(coarse) == pytest.approx(np.arange(41) / 40.0, abs=1e-12)


@pytest.mark.parametrize("shape", ["cylinder", "tube", "plate"])
def test_every_face_loses_what_it_loses_in_the_run(shape):
    case = from_text(workpiece(shape, "none", initial="900 °C") + COOLING, ".")
    setup = build(case)
    mesh, losses = setup.section.mesh, setup.losses["open"]
    first = next(march(setup)).losses
    assert set(losses) == set(mesh.faces)
    for face, of_face in losses.items():
        bar = FipyBar(mesh, setup.material, setup.T_initial, 1e-3)
        nothing = np.zeros((2, CELLS))
        heat = RecordedHeat(np.array([0.0, 1.0]), nothing[:1], nothing[:1], nothing)
        bar.march({face: of_face}, heat, np.array([0.0, 1e-5]), lambda number: None, untouched=True)
        accounts = {loss.name for loss in of_face} if face == "outer" else {face}
        expected = sum(first[f"loss: {account}"] for account in accounts)
        assert 1e5 * bar.lost == pytest.approx(expected, rel=2e-3), face
        assert bar.closure < 1e-6
        assert bar.volume.sum() == pytest.approx(mesh.volume.sum(), rel=1e-12)


def test_a_case_and_the_same_with_a_wrong_conductivity():
    case, lines = from_text(workpiece("cylinder", "none", initial="900 °C") + COOLING, "."), []
    second = compare(case, lines.append, steps=STEPS)
    assert lines[0] == "the run itself"
    assert lines[-1] == f"second engine, pass 2 of 2, transfer: step {2 * STEPS} of {2 * STEPS}"
    assert second.agrees and second.first_order
    assert max(abs(each.difference) for each in second.largest) < 0.3
    assert second.lost[1] == pytest.approx(second.lost[0], rel=1e-3)
    setup = build(case)
    curve = setup.material.conductivity
    halved = replace(setup.material, conductivity=replace(curve, value=0.5 * curve.value))
    wrong = compare_run(replace(setup, material=halved), run(setup), steps=STEPS)
    assert not wrong.agrees
    assert abs(wrong.worst.difference) > wrong.allowed
    assert "DOES NOT AGREE" in second_engine_text(wrong)


def test_an_interrupted_run_is_not_compared(heated, monkeypatch):
    _, history = heated
    monkeypatch.setattr(fipy_heat, "run", lambda setup: replace(history, status="interrupted"))
    with pytest.raises(KeyboardInterrupt):
        compare(from_text(coil_case("cylinder", True, "touching") + HEATING, "."))


def test_without_fipy(monkeypatch):
    monkeypatch.setitem(sys.modules, "fipy", None)
    with pytest.raises(ThermalError, match="which is not installed here: pip install fipy"):
        compare(from_text(workpiece("cylinder", "none") + COOLING, "."))
    monkeypatch.undo()
    assert import_fipy().__name__ == "fipy"


def made_up(ratio):
    worst = Largest("core", -0.46, 86.1, "heat", 1014.15)
    return SecondEngine(
        title="A bar",
        version="4.0.3",
        cells=(44, 200),
        rise=1210.0,
        largest=(worst, Largest("mean", 0.06, 56.0, "heat", 992.0)),
        ends=(AtEnd("heat", 145.48, {"surface": -0.05, "core": 0.02, "mean": 0.01}),),
        passes=(Pass(310, 776, 4, 3.92, 1e-13, 14.0), Pass(620, 1412, 4, 1.97, 5e-14, 26.0)),
        ratio=ratio,
        first_order=1.7 <= ratio <= 2.3,
        lost=(1286778.0, 1286872.0),
        allowed=4.42,
        agrees=True,
    )


def test_text():
    text = second_engine_text(made_up(1.99))
    assert max(map(len, text.splitlines())) <= WIDTH
    words = " ".join(text.split())
    assert "agrees with the temperatures of the run within 0.46 K (core at 86.1 s, heat, at 741 °C)" in words
    assert "4.4 K are allowed (2 K and 0.2 % of the rise of 1210 K)" in words
    assert "1.99 times, about 2 as it must" in words
    assert "Not checked by it: the heat in the section" in words
    assert "Take the differences above as good to 1.97 K" in " ".join(second_engine_text(made_up(1.4)).split())
