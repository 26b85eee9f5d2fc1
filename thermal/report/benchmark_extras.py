"""The sweep and the questions of the benchmark as text and JSON."""

from collections.abc import Sequence
from typing import Any

from thermal.crosscheck.bench_questions import METALS, QuestionTime
from thermal.crosscheck.bench_sweep import REFERENCE, LoopOf, OwnSweep, SweepBench
from thermal.crosscheck.variants import DIAMETERS, FIELDS, FREQUENCIES
from thermal.report.text import columns

SWEEP_HEAD = ["", "time, s", "cpu, s", "error, K", "ratio", "per core", "to own"]


def sweep_table(found: SweepBench) -> str:
    """The sweep beside the loops."""
    rows = [SWEEP_HEAD]
    rows += [[f"this solver, {each.tolerance:g} K", *_numbers(each), "", "", ""] for each in found.own]
    for rival in found.rivals:
        own = found.against(rival)
        ratios = [""] * 3
        if own is not None:
            ratios = [
                f"{rival.seconds / own.seconds:.3g}",
                f"{rival.processor / own.processor:.3g}",
                f"{own.tolerance:g} K",
            ]
        mark = " (extrapolated)" if rival.extrapolated else ""
        rows.append([f"{rival.solver}, {rival.setting}{mark}", *_numbers(rival), *ratios])
    return f"P1 in {found.runs} variants, {_at_a_time(found)}\n{columns(rows)}"


def start_lines(found: SweepBench) -> list[str]:
    """What a sweep as short as this one pays for its processes; nothing where it needs none."""
    rival = found.rivals[0]
    own = found.against(rival)
    if own is None or found.processes == 1:
        return []
    return [
        f"Sweep: the first time, with the start of its {found.processes} processes, the {found.runs} runs at "
        f"{own.tolerance:g} K take {own.with_start:.2f} s; against {rival.solver} with its {rival.setting} that is a "
        f"ratio of {rival.seconds / own.with_start:.3g}. A longer sweep pays for the start once too."
    ]


def about_sweep(found: SweepBench) -> str:
    """What the table of the sweep says."""
    ends = " or ".join
    text = (
        f"Sweep: P1 at {ends(f'{each / 1e3:g}' for each in FIELDS)} kA/m, {_listed([f / 1e3 for f in FREQUENCIES])} "
        f"kHz and {ends(f'{1e3 * each:g}' for each in DIAMETERS)} mm. The own runs take place in the worker processes "
        "of `thermal sweep`, one thread each; each is put together by hand there, where `thermal sweep` reads a case. "
        "The rivals run one after the other in a loop. Time: wall clock, the processes standing; cpu: processor time "
        f"of all runs together, which other work on the machine leaves alone. Error: the largest of all runs, from "
        f"runs at {REFERENCE:g} K. Ratio: of the times; per core: of the processor times. Defaults: solve_ivp told "
        "nothing of tolerances or Jacobian."
    )
    if any(rival.extrapolated for rival in found.rivals):
        text += " Extrapolated: the time of P1 times the number of variants, at the error of P1."
    return text


def question_lines(found: Sequence[QuestionTime]) -> list[str]:
    """A sentence on what the answers cost, and one for every question the case cannot stand."""
    names = {"compare": f"compare of {', '.join(METALS)}"}
    costs = [f"{names.get(each.question, each.question)} {each.runs:.2g}" for each in found if each.runs is not None]
    lines = [f"Questions, in runs of the case as it is: {'; '.join(costs)}."] if costs else []
    return lines + [f"Not timed: {each.question} ({each.refusal})." for each in found if each.refusal is not None]


def sweep_json(found: SweepBench) -> dict[str, Any]:
    """The sweep for scripts."""
    return {
        "runs": found.runs,
        "processes": found.processes,
        "own": [
            {
                "tolerance_K": each.tolerance,
                "time_s": each.seconds,
                "time_with_start_s": each.with_start,
                "processor_s": each.processor,
                "error_K": each.error,
                "steps": each.steps,
                "right_hand_sides": each.evaluations,
            }
            for each in found.own
        ],
        "rivals": [_rival(found, each) for each in found.rivals],
    }


def questions_json(found: Sequence[QuestionTime]) -> list[dict[str, Any]]:
    """The questions for scripts."""
    return [
        {
            "question": each.question,
            "time_s": None if each.timing is None else each.timing.seconds,
            "turns": None if each.timing is None else each.timing.turns,
            "runs_of_the_case": each.runs,
            "not_timed": each.refusal,
        }
        for each in found
    ]


def _rival(found: SweepBench, rival: LoopOf) -> dict[str, Any]:
    own = found.against(rival)
    return {
        "solver": rival.solver,
        "setting": rival.setting,
        "time_s": rival.seconds,
        "processor_s": rival.processor,
        "error_K": rival.error,
        "steps": rival.steps,
        "right_hand_sides": rival.evaluations,
        "extrapolated": rival.extrapolated,
        "compared_with_K": None if own is None else own.tolerance,
        "ratio": None if own is None else rival.seconds / own.seconds,
        "ratio_with_start": None if own is None else rival.seconds / own.with_start,
        "ratio_per_core": None if own is None else rival.processor / own.processor,
    }


def _numbers(row: OwnSweep | LoopOf) -> list[str]:
    return [f"{row.seconds:.3g}", f"{row.processor:.3g}", f"{row.error:.2g}"]


def _at_a_time(found: SweepBench) -> str:
    return "one at a time" if found.processes == 1 else f"own runs {found.processes} at a time"


def _listed(values: Sequence[float]) -> str:
    *first, last = (f"{value:g}" for value in values)
    return f"{', '.join(first)} or {last}"
