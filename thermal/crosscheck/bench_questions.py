"""Speed of the questions: how many runs of a case an answer about it costs."""

from collections.abc import Callable
from dataclasses import dataclass

from materials.errors import MaterialError
from thermal.case import Case
from thermal.case.schema import Heat
from thermal.crosscheck.timing import Announce, Effort, Entrant, Timing, time_all
from thermal.errors import CaseError, ThermalError
from thermal.loop import run_case
from thermal.questions.compare import compare
from thermal.questions.frequency import frequency_window
from thermal.questions.peak_temperature import peak_temperature
from thermal.questions.time_to_temperature import time_to_temperature

METALS = ("steel-c45", "aluminium-6082", "copper")


@dataclass(frozen=True)
class QuestionTime:
    """An answer, and how many runs of the case take as long; timing and runs None where it has none: why."""

    question: str
    timing: Timing | None
    runs: float | None
    refusal: str | None


def time_questions(case: Case, effort: Effort, announce: Announce) -> tuple[QuestionTime, ...]:
    """The questions put to a case beside one run of it, both from the case as it was read.

    Raises
    ------
    CaseError, MaterialError, NoConvergence, BalanceError : of the run.
    """
    asks: dict[str, Callable[[], object]] = {
        "time": lambda: _time(case),
        "peak": lambda: peak_temperature(case),
        "compare": lambda: compare(case, METALS),
        "frequency": lambda: frequency_window(case),
    }
    refused = {name: told for name, ask in asks.items() if (told := _refusal(ask)) is not None}
    entrants: list[Entrant[object]] = [Entrant("one run", case.name, lambda: run_case(case))]
    entrants += [Entrant(name, case.name, ask) for name, ask in asks.items() if name not in refused]
    (one_run, _), *timed = time_all(entrants, effort, announce)
    timings = dict(zip((each.solver for each in entrants[1:]), (timing for timing, _ in timed), strict=True))
    return tuple(
        QuestionTime(name, None, None, refused[name])
        if name in refused
        else QuestionTime(name, timings[name], timings[name].seconds / one_run.seconds, None)
        for name in asks
    )


def _time(case: Case) -> object:
    """How long until the first target of the schedule."""
    for stage in case.schedule:
        if isinstance(stage, Heat) and stage.until is not None:
            for reading, T in stage.until.targets.items():
                if reading != "spread":
                    return time_to_temperature(case, T, at=reading)
    raise CaseError("schedule    asks for no temperature")


def _refusal(ask: Callable[[], object]) -> str | None:
    """Why a case cannot stand a question; None where it can."""
    try:
        ask()
    except (ThermalError, MaterialError) as error:
        return " ".join(str(error).split())
    return None
