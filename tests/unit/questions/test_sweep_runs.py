import json
import os
import signal
import time
from concurrent.futures import BrokenExecutor, Executor, Future, ThreadPoolExecutor
from dataclasses import replace

import pytest
from quick_case import QUICK, UNDRIVEN

from thermal import loop
from thermal.build import build
from thermal.case import from_text, with_changes
from thermal.case.starter import starter
from thermal.errors import CaseError, NoConvergence
from thermal.questions import sweep as question
from thermal.questions.sweep import FIGURES, WorkerLost, figures_of, sweep, workers
from thermal.questions.sweep_plan import axis_of
from thermal.questions.sweep_store import RUNS, SweepError
from thermal.results.verdict import sentence

POWERS = axis_of("schedule.0.drive.absorbed_power=200 W:500 W:3")
LENGTHS = axis_of("workpiece.length=60 mm,80 mm")
GRID = (POWERS, LENGTHS)


class Here(Executor):
    """Runs what it is given at once, as the simplest executor there can be."""

    def submit(self, work, /, *arguments):
        future = Future()
        try:
            future.set_result(work(*arguments))
        except BaseException as error:
            future.set_exception(error)
        return future


@pytest.fixture
def case():
    return from_text(QUICK, ".", name="pin")


def told(found):
    """Everything but the wall time."""
    return [replace(row, wall_s=0.0) for row in found.rows]


@pytest.fixture(scope="module")
def plain():
    return sweep(from_text(QUICK, ".", name="pin"), GRID)


def test_every_point_is_the_run_of_the_changed_case(case, plain):
    assert [row.run for row in plain.rows] == [1, 2, 3, 4, 5, 6]
    assert not plain.interrupted
    for row in plain.rows:
        changes = dict(zip([axis.path for axis in GRID], row.values, strict=True))
        setup = build(with_changes(case, changes))
        history = loop.run(setup)
        assert row.status == history.status == "target"
        assert row.sentence == sentence(setup, history)
        assert (row.met, row.figures) == figures_of(setup, history)
        assert row.figures["time_s"] == history.time[-1]
        assert row.wall_s > 0.0
    assert plain.rows[0].figures["time_s"] > plain.rows[2].figures["time_s"]


@pytest.mark.parametrize("make", [Here, lambda: ThreadPoolExecutor(3)])
def test_any_executor_gives_the_same_rows(case, plain, make):
    with make() as executor:
        assert told(sweep(case, GRID, executor=executor)) == told(plain)


def test_one_worker_is_this_process():
    with workers(1) as executor:
        assert executor is None


def test_a_run_that_fails_has_its_row_and_the_others_go_on(case):
    found = sweep(
        case, [axis_of("workpiece.material=copper,copprr,steel-c45"), axis_of("workpiece.diameter=6 mm,0 mm")]
    )
    assert [row.status for row in found.rows] == ["target", "failed", "failed", "failed", "target", "failed"]
    assert found.rows[1].sentence == "workpiece.diameter: '0 mm' must be above zero"
    assert found.rows[2].sentence.startswith("workpiece.material: unknown material 'copprr', did you mean 'copper'?")
    failed = found.rows[3]
    assert (failed.met, failed.figures, failed.limits) == (None, {}, ())


@pytest.mark.parametrize(
    ("error", "words"),
    [
        (NoConvergence("gave up at 3 s"), "gave up at 3 s"),
        (ZeroDivisionError("division by zero"), "unexpected ZeroDivisionError: division by zero"),
    ],
)
def test_what_goes_wrong_in_a_run_is_told(case, monkeypatch, error, words):
    whole = question.run

    def run(setup, on_state):
        if setup.mass > 0.018:
            raise error
        return whole(setup, on_state)

    monkeypatch.setattr(question, "run", run)
    found = sweep(case, GRID)
    assert [row.status for row in found.rows] == ["target", "failed"] * 3
    assert {row.sentence for row in found.rows if row.status == "failed"} == {words}


def test_progress_begins_with_what_is_there_and_ends_with_all(case, tmp_path):
    seen = []
    sweep(case, [POWERS], folder=tmp_path / "s", progress=lambda done, total: seen.append((done, total)))
    assert seen == [(0, 3), (1, 3), (2, 3), (3, 3)]
    seen.clear()
    sweep(case, [POWERS], folder=tmp_path / "s", progress=lambda done, total: seen.append((done, total)))
    assert seen == [(3, 3)]


def stop_after(count):
    def progress(done, _):
        if done >= count:
            raise KeyboardInterrupt

    return progress


@pytest.mark.parametrize("make", [lambda: None, Here, lambda: ThreadPoolExecutor(2)])
def test_interrupted_and_gone_on_with_is_the_same_as_uninterrupted(case, plain, tmp_path, make):
    executor = make()
    cut = sweep(case, GRID, executor=executor, folder=tmp_path / "s", progress=stop_after(2))
    assert cut.interrupted
    assert 2 <= len(cut.rows) < 6
    kept = (tmp_path / "s" / RUNS).read_bytes()
    assert kept.count(b"\n") == len(cut.rows)
    done = []
    whole = sweep(case, GRID, executor=executor, folder=tmp_path / "s", progress=lambda n, _: done.append(n))
    assert done[0] == len(cut.rows)
    assert told(whole) == told(plain)
    assert (tmp_path / "s" / RUNS).read_bytes().startswith(kept)
    if executor is not None:
        executor.shutdown()


def test_an_interrupt_inside_a_run_leaves_no_half_row(case, tmp_path, monkeypatch):
    calls = []

    def watch(_):
        calls.append(1)
        if len(calls) > 12:
            raise KeyboardInterrupt

    monkeypatch.setattr(question, "_watch", watch)
    cut = sweep(case, GRID, folder=tmp_path / "s")
    assert cut.interrupted
    rows = [json.loads(line) for line in (tmp_path / "s" / RUNS).read_bytes().splitlines()]
    assert 1 <= len(rows) == len(cut.rows) < 6
    assert {row["status"] for row in rows} == {"target"}


def test_other_powers_are_another_sweep(case, tmp_path):
    sweep(case, [LENGTHS], folder=tmp_path / "s")
    with pytest.raises(SweepError, match="holds another sweep"):
        sweep(case, [POWERS], folder=tmp_path / "s")
    assert len(sweep(case, [POWERS], folder=tmp_path / "s", force=True).rows) == 3


class Counting(Executor):
    """Counts how many runs are out; makes them only when as many are out as a sweep hands in."""

    def __init__(self):
        self.out = []
        self.most = 0

    def submit(self, work, /, *arguments):
        future = Future()
        self.out.append((future, work, arguments))
        self.most = max(self.most, len(self.out))
        if len(self.out) == question.AHEAD:
            for waiting, do, given in self.out:
                waiting.set_result(do(*given))
            self.out = []
        return future


def test_only_so_many_runs_are_out_at_a_time(case, monkeypatch):
    monkeypatch.setattr(question, "AHEAD", 4)
    counting = Counting()
    found = sweep(case, [axis_of("workpiece.length=60 mm:90 mm:12")], executor=counting)
    assert len(found.rows) == 12
    assert counting.most == 4


class Broken(Executor):
    """Loses its workers after two runs."""

    def __init__(self):
        self.count = 0

    def submit(self, work, /, *arguments):
        self.count += 1
        future = Future()
        if self.count > 2:
            future.set_exception(BrokenExecutor("gone"))
        else:
            future.set_result(work(*arguments))
        return future


def test_a_lost_worker_ends_the_sweep_and_keeps_what_ended(case, plain, tmp_path):
    with pytest.raises(WorkerLost, match="after 2 of 6 runs"):
        sweep(case, GRID, executor=Broken(), folder=tmp_path / "s")
    assert told(sweep(case, GRID, folder=tmp_path / "s")) == told(plain)


def test_nothing_is_computed_for_bad_axes(case, tmp_path):
    with pytest.raises(CaseError, match=r"--over   workpiece.lenght: unknown key"):
        sweep(case, [axis_of("workpiece.lenght=1 mm,2 mm")], folder=tmp_path / "s")
    assert not (tmp_path / "s").exists()


def test_worker_processes_have_one_thread_each_ignore_the_terminal_and_end_with_the_sweep(monkeypatch):
    monkeypatch.setenv("OMP_NUM_THREADS", "7")
    heating = '{ stage = "heat", drive = { absorbed_power = "100 W", frequency = "20 kHz" }, duration = "1 s" }'
    holding = '{ stage = "hold", at = { surface = "300 °C" }, duration = "3 h", response = "0.11 s" }'
    endless = {"schedule": f"[{heating}, {holding}]"}
    case = from_text(QUICK, ".", endless)
    with workers(2) as executor:
        seen = set(executor.map(_what_a_worker_sees, [0.2] * 4))
        futures = [executor.submit(question.run_task, question._task(case, (LENGTHS,), run)) for run in (1, 2)]
        time.sleep(1.0)
        assert not any(future.done() for future in futures)
        left = time.monotonic()
    assert time.monotonic() - left < 30.0
    assert [future.result().status for future in futures] == ["interrupted"] * 2
    assert len({process for process, *_ in seen}) == 2
    assert {tuple(rest) for _, *rest in seen} == {("1", "1", True)}
    assert os.environ["OMP_NUM_THREADS"] == "7"


def _what_a_worker_sees(delay):
    time.sleep(delay)
    ignored = signal.getsignal(signal.SIGINT) is signal.SIG_IGN
    return os.getpid(), os.environ["OMP_NUM_THREADS"], os.environ["OPENBLAS_NUM_THREADS"], ignored


def figures(text, **changes):
    setup = build(from_text(text, ".", {path.replace("__", "."): value for path, value in changes.items()}))
    history = loop.run(setup)
    return setup, history, *figures_of(setup, history)


def test_figures_are_those_of_the_first_heating_stage_with_targets():
    follow = """
[[schedule]]
stage = "transfer"
duration = "5 s"
"""
    setup, history, met, found = figures(f"{QUICK}{follow}")
    end = history.stages[0].end
    assert (met, found["time_s"]) == (True, end)
    assert history.time[-1] == end + 5.0
    i = int((history.stage == 0).sum()) - 1
    assert found["core_C"] == history.readings["core"][i] - 273.15
    assert found["core_C"] == pytest.approx(200.0, abs=2e-3)
    assert found["spread_K"] == pytest.approx(found["surface_C"] - found["core_C"], abs=1e-9)
    assert found["absorbed_energy_kWh_per_t"] * setup.mass * 3600.0 == pytest.approx(500.0 * end, rel=1e-9)
    assert not [name for name in found if name.startswith(("supply", "coil"))]


def test_a_target_that_is_missed_is_told_and_a_stage_without_one_has_none():
    _, _, met, found = figures(QUICK, schedule__0__longest="1 s")
    assert (met, found["time_s"]) == (False, 1.0)
    _, _, met, found = figures(UNDRIVEN)
    assert (met, found["time_s"]) == (None, 1.0)
    before = (
        '[[schedule]]\nstage = "heat"\ndrive = { absorbed_power = "100 W", frequency = "10 kHz" }\nduration = "1 s"\n'
    )
    text = QUICK.replace("[[schedule]]\n", f"{before}[[schedule]]\n")
    _, history, met, found = figures(text)
    assert (met, found["time_s"]) == (True, history.stages[1].end)


def test_with_a_coil_every_figure_is_there():
    quick = {"schedule__0__until": '{ core = "60 °C" }', "schedule__1__duration": "1 s"}
    setup, history, met, found = figures(starter("billet"), **quick)
    assert met
    assert tuple(found) == FIGURES
    assert found["supply_energy_kWh_per_t"] == pytest.approx(history.energy["supply"][-1] / setup.mass / 3600.0)
    assert found["coil_current_A_rms"] == history.coil_current_rms.max()
    assert found["supply_energy_kWh_per_t"] > found["absorbed_energy_kWh_per_t"] > 0.0
