"""How the answer moves: a case run over a grid of its values, on as many cores as there are."""

import os
import signal
import threading
import time
from collections.abc import Callable, Generator, Iterable, Iterator, Sequence
from concurrent.futures import BrokenExecutor, Executor, Future, ProcessPoolExecutor
from contextlib import closing, contextmanager, nullcontext
from ctypes import c_bool
from dataclasses import dataclass
from multiprocessing import get_context
from pathlib import Path
from queue import Empty, SimpleQueue

import numpy as np

from materials.errors import MaterialError
from thermal.build import build
from thermal.case import Case, from_text
from thermal.constants import ZERO_CELSIUS
from thermal.errors import CaseError, ThermalError
from thermal.loop import run
from thermal.questions.sweep_plan import (
    Axis,
    changes_of,
    demand_axes,
    demand_some_valid,
    grid_size,
    without_place,
)
from thermal.questions.sweep_store import Records, Row
from thermal.results.history import History
from thermal.results.recorder import State
from thermal.results.stages import limit_spans, stage_ends
from thermal.results.verdict import depth_of_maximum, sentence
from thermal.setup import Setup

AHEAD = 500
"""Runs handed to an executor before their results are waited for: enough for any machine, nothing for the memory."""
THREADS = ("OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS", "BLIS_NUM_THREADS", "VECLIB_MAXIMUM_THREADS")
"""What tells the libraries of linear algebra how many threads to use."""
TICK = 0.5
"""Longest wait [s] during which an interrupt may go unnoticed (on systems where it cannot end a wait)."""

FIGURES = (
    "time_s",
    "surface_C",
    "core_C",
    "mean_C",
    "maximum_C",
    "spread_K",
    "hottest_C",
    "hottest_depth_mm",
    "absorbed_energy_kWh_per_t",
    "supply_energy_kWh_per_t",
    "coil_current_A_rms",
    "coil_voltage_V_rms",
)
"""Figures of a row. Up to spread_K: at the end of the first heating stage with targets (of the first heating stage
where none has any, of the run where there is none). The others: of the whole run, current and voltage their peaks."""


class WorkerLost(ThermalError):
    """A worker process ended on its own."""


@dataclass(frozen=True)
class Sweep:
    """A case over a grid.

    rows : of the runs that have ended, in the order of the grid ; interrupted : some are missing for that reason.
    """

    case: Case
    axes: tuple[Axis, ...]
    rows: tuple[Row, ...]
    interrupted: bool


@dataclass(frozen=True, slots=True)
class Task:
    """One run, in a form that travels to any process."""

    text: str
    folder: str
    materials: str | None
    name: str
    run: int
    overrides: tuple[tuple[str, object], ...]
    values: tuple[str, ...]


def sweep(
    case: Case,
    axes: Sequence[Axis],
    *,
    executor: Executor | None = None,
    folder: Path | None = None,
    force: bool = False,
    progress: Callable[[int, int], None] | None = None,
) -> Sweep:
    """Run a case for every combination of the values of some axes.

    Parameters
    ----------
    case : Case
        Valid as it is.
    axes : sequence of Axis
        From axis_of; the last one changes from run to run.
    executor : Executor
        Where the runs take place, see workers; None: here, one after the other.
    folder : path
        Every run is recorded in it as it ends, and those that are there already are not made again.
    force : bool
        Throw away what is in the folder.
    progress : callable
        Given the number of runs that are there and of all, at the start and whenever some have ended.

    Returns
    -------
    Sweep
        A run that fails has its row, with the reason. An interrupt ends the sweep and keeps what there is.

    Raises
    ------
    CaseError : axes that make no valid case.
    SweepError : the folder holds another sweep, or cannot be written.
    WorkerLost : a worker process ended on its own.

    >>> from thermal import from_text
    >>> from thermal.case.starter import starter
    >>> from thermal.questions.sweep_plan import axis_of
    >>> bar = from_text(starter("heater"), ".", {"schedule.0.until.surface": "300 °C"})
    >>> found = sweep(bar, [axis_of("schedule.0.drive.absorbed_power=800 W:1200 W:2")])
    >>> [round(row.figures["time_s"], 1) for row in found.rows]
    [9.2, 6.0]
    """
    axes = tuple(axes)
    demand_axes(axes)
    demand_some_valid(case, axes)
    total = grid_size(axes)
    with nullcontext() if folder is None else Records(folder, case, axes, force=force) as records:
        rows = {row.run: row for row in records.rows} if records is not None else {}
        tasks = (_task(case, axes, number) for number in range(1, total + 1) if number not in rows)
        interrupted = False
        if progress is not None:
            progress(len(rows), total)
        try:
            with closing(_ended(executor, tasks)) as batches:
                for batch in batches:
                    # A run that an interrupt cut short is made again when the sweep goes on.
                    whole = [row for row in batch if row.status != "interrupted"]
                    if records is not None:
                        records.add(whole)
                    rows.update((row.run, row) for row in whole)
                    if progress is not None:
                        progress(len(rows), total)
                    if len(whole) < len(batch):
                        interrupted = True
                        break
        except KeyboardInterrupt:
            interrupted = True
            if records is not None:
                # It may have come between the disk and the list of rows.
                rows = {row.run: row for row in records.rows}
        except BrokenExecutor:
            raise WorkerLost(
                f"a worker process ended on its own (out of memory?) after {len(rows)} of {total} runs"
            ) from None
    return Sweep(case, axes, tuple(rows[number] for number in sorted(rows)), interrupted)


@contextmanager
def workers(count: int) -> Iterator[Executor | None]:
    """Processes for a sweep, one thread each; None, for this process, where one is enough.

    A sweep in them can be interrupted within a step of its runs. They are new processes: a script that uses them
    keeps its own work under ``if __name__ == "__main__"``.
    """
    if count == 1:
        yield None
        return
    context = get_context("spawn")
    stop = context.RawValue(c_bool, False)
    pool = ProcessPoolExecutor(count, context, _begin_worker, (stop,))
    try:
        with _one_thread_each():
            with _deaf():
                for _ in range(count):
                    pool.submit(os.getpid)  # a task for each process starts them
            yield pool
    finally:
        stop.value = True
        pool.shutdown(cancel_futures=True)


def usable_cores() -> int:
    """Cores this process may use."""
    if hasattr(os, "sched_getaffinity"):
        return len(os.sched_getaffinity(0))
    return os.cpu_count() or 1


def run_task(task: Task) -> Row:
    """The row of one run; what goes wrong in it is told in the row."""
    began = time.perf_counter()
    status, met, limits = "failed", None, tuple[str, ...]()
    figures: dict[str, float] = {}
    try:
        overrides = dict(task.overrides)
        setup = build(from_text(task.text, task.folder, overrides, name=task.name, materials=task.materials))
        history = run(setup, _watch)
        told = sentence(setup, history)
        status, limits = history.status, tuple(limit_spans(history))
        met, figures = figures_of(setup, history)
    except CaseError as error:
        told = "; ".join(without_place(problem) for problem in error.problems)
    except (ThermalError, MaterialError) as error:
        told = str(error)
    except Exception as error:
        # A defect in one run of thousands must be told, not end the others.
        told = f"unexpected {type(error).__name__}: {error}"
    return Row(task.run, task.values, status, met, told, figures, limits, time.perf_counter() - began)


def figures_of(setup: Setup, history: History) -> tuple[bool | None, dict[str, float]]:
    """Whether the first heating stage with targets met them, and the figures that exist, see FIGURES."""
    ends = stage_ends(setup, history)
    heating = [end for end in ends if end.record.kind == "heat"]
    aimed = [end for end in heating if setup.stages[end.number].stop is not None]
    end = next(iter((*aimed, *heating, ends[-1])))
    hottest = int(history.readings["maximum"].argmax())
    temperatures = ("surface", "core", "mean", "maximum")
    values = {
        "time_s": end.record.end,
        **{f"{name}_C": history.readings[name][end.last] - ZERO_CELSIUS for name in temperatures},
        "spread_K": history.readings["spread"][end.last],
        "hottest_C": history.readings["maximum"][hottest] - ZERO_CELSIUS,
        "hottest_depth_mm": 1e3 * depth_of_maximum(history, hottest),
        "absorbed_energy_kWh_per_t": history.energy["absorbed"][-1] / setup.mass / 3600.0,
    }
    if setup.has_coil:
        values["supply_energy_kWh_per_t"] = history.energy["supply"][-1] / setup.mass / 3600.0
        values["coil_current_A_rms"] = history.coil_current_rms.max()
        values["coil_voltage_V_rms"] = history.coil_voltage_rms.max()
    figures = {name: float(value) for name, value in values.items() if np.isfinite(value)}
    return (aimed[0].record.met if aimed else None), figures


def _task(case: Case, axes: tuple[Axis, ...], number: int) -> Task:
    changes = changes_of(axes, number)
    overrides = tuple({**dict(case.overrides), **changes}.items())
    materials = None if case.materials is None else str(case.materials)
    return Task(case.text, str(case.folder), materials, case.name, number, overrides, tuple(changes.values()))


def _ended(executor: Executor | None, tasks: Iterable[Task]) -> Generator[list[Row], None, None]:
    """Rows as their runs end, in any order; what is still waiting when this is closed is cancelled."""
    if executor is None:
        yield from ([run_task(task)] for task in tasks)
        return
    ready: SimpleQueue[Future[Row]] = SimpleQueue()
    waiting: set[Future[Row]] = set()

    def ended() -> list[Row]:
        """Every row there is, at least one."""
        found: list[Future[Row]] = []
        while not found or not ready.empty():
            try:
                found.append(ready.get(timeout=TICK))
            except Empty:
                continue
        waiting.difference_update(found)
        return [future.result() for future in found]

    try:
        for task in tasks:
            future = executor.submit(run_task, task)
            waiting.add(future)
            future.add_done_callback(ready.put)
            if len(waiting) >= AHEAD or not ready.empty():
                yield ended()
        while waiting:
            yield ended()
    finally:
        for future in waiting:
            future.cancel()


_stop: "c_bool | None" = None
"""In a worker process: set from outside when its run is not wanted any more."""


def _begin_worker(stop: "c_bool") -> None:
    global _stop
    _stop = stop
    # A terminal sends an interrupt to all processes; the one that hands out the runs decides.
    signal.signal(signal.SIGINT, signal.SIG_IGN)


def _watch(_: State) -> None:
    if _stop is not None and _stop.value:
        raise KeyboardInterrupt


@contextmanager
def _one_thread_each() -> Iterator[None]:
    """Processes started inside use one thread for linear algebra; the libraries look once, as they are loaded."""
    before = {name: os.environ.get(name) for name in THREADS}
    os.environ.update(dict.fromkeys(THREADS, "1"))
    try:
        yield
    finally:
        for name, value in before.items():
            if value is None:
                del os.environ[name]
            else:
                os.environ[name] = value


@contextmanager
def _deaf() -> Iterator[None]:
    """Processes started inside ignore interrupts from the first moment, where the system hands that down."""
    if threading.current_thread() is not threading.main_thread():
        yield
        return
    handler = signal.signal(signal.SIGINT, signal.SIG_IGN)
    try:
        yield
    finally:
        signal.signal(signal.SIGINT, handler)
