"""Curves and profiles of a run as CSV text."""

import csv
import io
import math
from collections.abc import Iterable

import numpy as np

from thermal.case import Case
from thermal.case.checks import MOST_ROWS
from thermal.constants import ZERO_CELSIUS
from thermal.results.dense import Sampled, sample
from thermal.results.history import History
from thermal.results.stages import StageEnd, stage_ends
from thermal.setup import Setup

ROWS = 400
"""Rows of the curves, about, where the case names no interval."""

TEMPERATURES = ("surface", "core", "mean", "maximum")
SERIES = {
    "absorbed_power_W": "absorbed_power",
    "supply_power_W": "supply_power",
    "frequency_Hz": "frequency",
    "coil_current_A_rms": "coil_current_rms",
    "coil_voltage_V_rms": "coil_voltage_rms",
    "loss_W": "loss_power",
}


def curves_csv(setup: Setup, case: Case, history: History) -> str:
    """Rows at a round interval and at the end of every stage; a figure that does not exist is left empty."""
    ends = stage_ends(setup, history)
    fine = _at_interval(setup, case, history, ends)
    header = [
        "time_s",
        *(f"{name}_C" for name in TEMPERATURES),
        *SERIES,
        "stage",
        *(f"{name}_C" for name in setup.depths),
    ]
    rows = []
    for i, time in enumerate(fine.time):
        row = [_text(time, 9)]
        row += [_text(fine.readings[name][i] - ZERO_CELSIUS, 7) for name in TEMPERATURES]
        row += [_text(fine.series[name][i], 6) for name in SERIES.values()]
        row.append(ends[fine.stage[i]].name)
        row += [_text(fine.readings[name][i] - ZERO_CELSIUS, 7) for name in setup.depths]
        rows.append(row)
    return _csv([header, *rows])


def profiles_csv(setup: Setup, case: Case, history: History) -> str:
    """Temperature over the section at the end of every stage and at the moments the case names, core to surface."""
    ends = stage_ends(setup, history)
    moments = {end.record.end: end.number for end in reversed(ends)}
    for time in case.output.profiles_at:
        if time <= history.time[-1]:
            moments.setdefault(time, _stage_of(ends, time))
    times = sorted(moments)
    fine = sample(setup, history, [moments[time] for time in times], times)
    nodes = setup.sampler.nodes
    rows = [["time_s", "stage", "r_mm", "depth_mm", "T_C"]]
    for time, stage, T in zip(fine.time, fine.stage, fine.extended, strict=True):
        for r, each in zip(nodes, T, strict=True):
            place = [_text(r * 1e3, 7), _text((nodes[-1] - r) * 1e3, 7)]
            rows.append([_text(time, 9), ends[stage].name, *place, _text(each - ZERO_CELSIUS, 7)])
    return _csv(rows)


def round_interval(duration: float) -> float:
    """Interval [s] of 1, 2 or 5 times a power of ten that divides a duration [s] into about 400."""
    wanted = duration / ROWS
    power = 10.0 ** math.floor(math.log10(wanted))
    return float(min((step * power for step in (1.0, 2.0, 5.0, 10.0)), key=lambda s: abs(math.log(s / wanted))))


def _at_interval(setup: Setup, case: Case, history: History, ends: tuple[StageEnd, ...]) -> Sampled:
    last = float(history.time[-1])
    moments = {end.record.end: end.number for end in reversed(ends)}
    moments.setdefault(0.0, 0)
    if last > 0.0:
        # A stage without a longest time may take longer than the case file lets expect.
        interval = max(case.output.interval or round_interval(last), last / MOST_ROWS)
        for i in range(int(last / interval) + 1):
            time = float(f"{i * interval:.12g}")
            if time <= last:
                moments.setdefault(time, _stage_of(ends, time))
    times = sorted(moments)
    return sample(setup, history, np.array([moments[time] for time in times]), np.array(times))


def _stage_of(ends: tuple[StageEnd, ...], time: float) -> int:
    """First stage that has not ended before a moment."""
    return next(end.number for end in ends if time <= end.record.end)


def _text(value: float, figures: int) -> str:
    return f"{value:.{figures}g}" if math.isfinite(value) else ""


def _csv(rows: Iterable[Iterable[str]]) -> str:
    text = io.StringIO()
    csv.writer(text, lineterminator="\n").writerows(rows)
    return text.getvalue()
