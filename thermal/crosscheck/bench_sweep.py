"""Speed of a sweep: variants of P1 in the worker processes of `thermal sweep`, beside a loop over solve_ivp."""

import time
from collections.abc import Callable, Iterable, Sequence
from concurrent.futures import Executor
from dataclasses import dataclass
from itertools import repeat
from typing import TypeVar

from thermal.crosscheck.rivals import Outcome, PlainBar, by_scipy, deviation, rtol_in_words
from thermal.crosscheck.timing import CLOCK, Announce, nearest_in_error
from thermal.crosscheck.variants import DURATION, VARIANTS, Trace, Variant, run_variant, variant_problem
from thermal.loop import run
from thermal.questions.sweep import usable_cores, workers

TOLERANCES = (0.3, 1.0, 3.0)
REFERENCE = 0.01
"""Tolerance [K] of the runs errors are measured from: far below the errors compared, a quarter of the time of 1 mK."""
DEFAULTS, FINER = None, 1e-4
"""Relative tolerances of solve_ivp: what it takes when told nothing, and one that is worth its time."""

Item = TypeVar("Item")
Found = TypeVar("Found")


@dataclass(frozen=True)
class OwnSweep:
    """All variants by the own solver at one tolerance [K].

    seconds : wall clock in processes that stand ; with_start : the first time, from starting the processes ;
    processor : of all runs together ; error : the largest of all runs [K] ; steps, evaluations : of all runs.
    """

    tolerance: float
    seconds: float
    with_start: float
    processor: float
    error: float
    steps: int
    evaluations: int


@dataclass(frozen=True)
class LoopOf:
    """All variants one after the other by a general library.

    seconds : wall clock ; processor : [s] ; error : the largest of all runs [K] ; steps, evaluations : of all runs,
    None where extrapolated from P1 alone.
    """

    solver: str
    setting: str
    seconds: float
    processor: float
    error: float
    steps: int | None
    evaluations: int | None

    @property
    def extrapolated(self) -> bool:
        """Whether only P1 was measured."""
        return self.steps is None


@dataclass(frozen=True)
class SweepBench:
    """runs : number of variants ; processes : of the own sweep."""

    runs: int
    processes: int
    own: tuple[OwnSweep, ...]
    rivals: tuple[LoopOf, ...]

    def against(self, rival: LoopOf) -> OwnSweep | None:
        """The own sweep whose error is nearest, None where times say nothing."""
        place = nearest_in_error(rival.error, [each.error for each in self.own])
        return None if place is None else self.own[place]


@dataclass(frozen=True)
class _Loop:
    """Traces of all variants, and the time they took."""

    traces: list[Trace]
    seconds: float
    with_start: float


def measure_sweep(rounds: int, quick: bool, announce: Announce, variants: Sequence[Variant] = VARIANTS) -> SweepBench:
    """The own sweep and the loops; quick : only the defaults of solve_ivp."""
    processes = min(usable_cores(), len(variants))
    own = []
    for tolerance in TOLERANCES:
        announce(f"sweep: {tolerance:g} K")
        own.append(_own(variants, tolerance, processes, rounds))
    settings = (DEFAULTS,) if quick else (DEFAULTS, FINER)
    asked = [(method, rtol) for method in ("BDF", "LSODA") for rtol in settings]
    loops = []
    for method, rtol in asked:
        announce(f"sweep: SciPy {method}, {rtol_in_words(rtol)}")
        loops.append(_loop_over_scipy(variants, method, rtol))
    announce("sweep: reference")
    errors = _errors(variants, [*own, *loops], processes)
    return SweepBench(
        len(variants),
        processes,
        tuple(
            OwnSweep(tolerance, each.seconds, each.with_start, _processor(each), error, *_counts(each))
            for tolerance, each, error in zip(TOLERANCES, own, errors[: len(own)], strict=True)
        ),
        tuple(
            LoopOf(f"SciPy {method}", rtol_in_words(rtol), each.seconds, _processor(each), error, *_counts(each))
            for (method, rtol), each, error in zip(asked, loops, errors[len(own) :], strict=True)
        ),
    )


def extrapolated(solver: str, setting: str, seconds: float, error: float, runs: int) -> LoopOf:
    """A loop of which only P1 was measured: so many times as long, at the same error."""
    return LoopOf(solver, setting, runs * seconds, runs * seconds, error, None, None)


def _own(variants: Sequence[Variant], tolerance: float, processes: int, rounds: int) -> _Loop:
    began = time.perf_counter()
    with workers(processes) as executor:
        traces = _each(executor, run_variant, variants, repeat(tolerance))
        with_start = time.perf_counter() - began
        taken = []
        for _ in range(rounds):
            began = time.perf_counter()
            traces = _each(executor, run_variant, variants, repeat(tolerance))
            taken.append(time.perf_counter() - began)
    return _Loop(traces, min(taken), with_start)


def _loop_over_scipy(variants: Sequence[Variant], method: str, rtol: float | None) -> _Loop:
    began = time.perf_counter()
    traces = []
    for variant in variants:
        started = CLOCK()
        bar = PlainBar(variant_problem(variant, REFERENCE), steady=False)
        found = by_scipy(bar, DURATION, method, rtol)
        took = CLOCK() - started
        traces.append(Trace(found.time, *found.readings(), found.steps, found.evaluations, took))
    taken = time.perf_counter() - began
    return _Loop(traces, taken, taken)


def _errors(variants: Sequence[Variant], loops: Sequence[_Loop], processes: int) -> list[float]:
    """Largest error [K] of every loop."""
    by_variant = list(zip(*(loop.traces for loop in loops), strict=True))
    with workers(processes) as executor:
        found = _each(executor, errors_of, variants, by_variant)
    return [max(errors) for errors in zip(*found, strict=True)]


def errors_of(variant: Variant, traces: Sequence[Trace]) -> list[float]:
    """Largest deviations [K] of runs of a variant from one at the tolerance of reference."""
    setup = variant_problem(variant, REFERENCE)
    exact = run(setup)
    return [deviation(_outcome(trace), setup, exact) for trace in traces]


def _outcome(trace: Trace) -> Outcome:
    return Outcome(trace.time, trace.steps, trace.evaluations, lambda: (trace.surface, trace.core))


def _each(
    executor: Executor | None,
    work: Callable[[Variant, Item], Found],
    variants: Sequence[Variant],
    items: Iterable[Item],
) -> list[Found]:
    """Work done for every variant, here or in processes."""
    return list((map if executor is None else executor.map)(work, variants, items))


def _processor(loop: _Loop) -> float:
    return sum(trace.processor for trace in loop.traces)


def _counts(loop: _Loop) -> tuple[int, int]:
    return sum(trace.steps for trace in loop.traces), sum(trace.evaluations for trace in loop.traces)
