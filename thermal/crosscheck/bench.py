"""Speed of the own solver beside general libraries on the reference problems, at errors that can be compared.

Error: largest deviation of surface and core, at the steps taken, from one run at 1 mK, over the whole history. Times
are of one thread, best of several rounds.
"""

import platform
import subprocess
import sys
import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from functools import partial
from pathlib import Path

from thermal.build import build
from thermal.case import Case, load_case
from thermal.crosscheck.bench_questions import QuestionTime, time_questions
from thermal.crosscheck.bench_sweep import SweepBench, extrapolated, measure_sweep
from thermal.crosscheck.reference_problems import p1, p1s
from thermal.crosscheck.rivals import FIPY, Outcome, PlainBar, deviation, missing_libraries, rivals
from thermal.crosscheck.timing import Announce, Effort, Entrant, Timing, nearest_in_error, time_all
from thermal.loop import run
from thermal.setup import Setup

TOLERANCES = (0.03, 0.1, 0.3, 1.0)
TIGHT = 1e-3
OWN = "this solver"
USUAL = 0.1
"""Tolerance [K] of a case that says nothing else."""

COLD_RUN = (
    "from thermal.crosscheck.reference_problems import p1\n"
    "from thermal.loop import run\n"
    f"history = run(p1({USUAL}))\n"
    "print(history.time[-1], history.readings['surface'][-1], history.readings['core'][-1])\n"
)
COLD_NUMPY = "import numpy\n"

THOROUGH, QUICK = Effort(7, 2.0), Effort(2, 0.5)


@dataclass(frozen=True)
class ReferenceProblem:
    """name ; problem : tolerance [K] -> Setup ; steady : its heat does not depend on the temperature."""

    name: str
    problem: Callable[[float], Setup]
    steady: bool


PROBLEMS = (ReferenceProblem("P1s", p1s, True), ReferenceProblem("P1", p1, False))


@dataclass(frozen=True)
class Measured:
    """One way to compute one problem: time, largest error [K], steps, evaluations of the right-hand side."""

    problem: str
    solver: str
    setting: str
    timing: Timing
    error: float
    steps: int
    evaluations: int

    @property
    def own(self) -> bool:
        """Whether it is the solver of this package."""
        return self.solver == OWN


@dataclass(frozen=True)
class CaseTime:
    """A case of the user, and how many times as long as P1 at 0.1 K it takes."""

    name: str
    timing: Timing
    steps: int
    evaluations: int
    times_p1: float


@dataclass(frozen=True)
class ColdStart:
    """Wall-clock times of fresh interpreters: P1 printed, and an import of NumPy alone."""

    p1: Timing
    numpy: Timing

    @property
    def ratio(self) -> float:
        """P1 over the import of NumPy."""
        return self.p1.seconds / self.numpy.seconds


@dataclass(frozen=True)
class Benchmark:
    """Everything measured; questions : put to the case ; missing : libraries that are not installed."""

    rows: tuple[Measured, ...]
    sweep: SweepBench
    case: CaseTime | None
    questions: tuple[QuestionTime, ...]
    cold: ColdStart
    missing: tuple[str, ...]
    processor: str


def measure(case: Path | None, quick: bool, announce: Announce) -> Benchmark:
    """Measure everything.

    case : file of a case to time besides ; quick : only solve_ivp with BDF and LSODA, fewer rounds ; announce : told
    what comes next.

    Raises
    ------
    CaseError, MaterialError, NoConvergence, BalanceError : of the case.
    """
    effort = QUICK if quick else THOROUGH
    timed, questions = None, tuple[QuestionTime, ...]()
    if case is not None:
        loaded = load_case(case)
        timed = time_case(loaded, effort, announce)
        questions = time_questions(loaded, effort, announce)
    rows: list[Measured] = []
    for each in PROBLEMS:
        rows += measure_problem(each, effort, quick, announce)
    missing = () if quick else missing_libraries()
    swept = with_fipy(measure_sweep(effort.rounds, quick, announce), rows)
    return Benchmark(tuple(rows), swept, timed, questions, cold_start(effort, announce), missing, processor())


def with_fipy(swept: SweepBench, rows: Sequence[Measured]) -> SweepBench:
    """The sweep with the FiPy script beside it, where that has run P1."""
    loops = [
        extrapolated(row.solver, row.setting, row.timing.seconds, row.error, swept.runs)
        for row in rows
        if row.solver == FIPY and row.problem == "P1"
    ]
    return replace(swept, rivals=(*swept.rivals, *loops))


def measure_problem(each: ReferenceProblem, effort: Effort, quick: bool, announce: Announce) -> list[Measured]:
    """The own solver and all rivals on one problem."""
    announce(f"{each.name}: reference")
    setup = each.problem(TIGHT)
    exact = run(setup)
    entrants = [Entrant(OWN, f"{tolerance:g} K", partial(own_run, each.problem(tolerance))) for tolerance in TOLERANCES]
    entrants += rivals(PlainBar(setup, each.steady), float(exact.time[-1]), quick)
    timed = time_all(entrants, effort, lambda entrant: announce(f"{each.name}: {entrant}"))
    return [
        Measured(
            each.name,
            entrant.solver,
            entrant.setting,
            timing,
            deviation(outcome, setup, exact),
            outcome.steps,
            outcome.evaluations,
        )
        for entrant, (timing, outcome) in zip(entrants, timed, strict=True)
    ]


def own_run(setup: Setup) -> Outcome:
    """The solver of this package."""
    history = run(setup)
    return Outcome(
        history.time,
        history.steps,
        history.field_solves,
        lambda: (history.readings["surface"], history.readings["core"]),
    )


def comparison(rival: Measured, rows: Sequence[Measured]) -> tuple[Measured, float] | None:
    """The own run whose error is nearest to a rival's, and how many times as long the rival takes.

    None where even that error differs by more than a factor of two: then times say nothing.
    """
    own = [row for row in rows if row.own and row.problem == rival.problem]
    place = nearest_in_error(rival.error, [row.error for row in own])
    return None if place is None else (own[place], rival.timing.seconds / own[place].timing.seconds)


def time_case(case: Case, effort: Effort, announce: Announce) -> CaseTime:
    """A case of the user beside P1 at 0.1 K.

    Raises
    ------
    CaseError, MaterialError, NoConvergence, BalanceError : of the case.
    """
    entrants = [
        Entrant(case.name, "as written", partial(own_run, build(case))),
        Entrant("P1", f"{USUAL:g} K", partial(own_run, p1(USUAL))),
    ]
    (timing, outcome), (beside, _) = time_all(entrants, effort, announce)
    return CaseTime(case.name, timing, outcome.steps, outcome.evaluations, timing.seconds / beside.seconds)


def cold_start(effort: Effort, announce: Announce) -> ColdStart:
    """Fresh interpreters that print a result of P1, in turns with some that only import NumPy."""
    announce("cold start")
    times: dict[str, list[float]] = {COLD_RUN: [], COLD_NUMPY: []}
    for _ in range(effort.rounds):
        for code, taken in times.items():
            began = time.perf_counter()
            subprocess.run([sys.executable, "-c", code], check=True, capture_output=True)
            taken.append(time.perf_counter() - began)
    p1_run, numpy_alone = (Timing(min(taken), len(taken)) for taken in times.values())
    return ColdStart(p1_run, numpy_alone)


def processor() -> str:
    """Name of the processor, as far as the system tells it."""
    listing = Path("/proc/cpuinfo")
    if listing.exists():
        for line in listing.read_text(encoding="utf-8").splitlines():
            if line.startswith("model name"):
                return line.partition(":")[2].strip()
    return platform.processor() or platform.machine()
