"""The heat problem of a case solved a second time, on FiPy, an unrelated finite-volume library.

The run of the tool gives the heat per volume over place and time; from there on everything is done again: grid, table
of the enthalpy, time steps, surface temperatures, energy accounts. Implicit Euler at two step sizes, one half of the
other everywhere, is extrapolated to none, as its error is of first order in the step. Compared are surface, core and
mean at every recorded step: between two records the heat is not known better than by a straight line.

Not checked by it: the heat itself (the field), the formulas of the losses and the material data, which are shared.
"""

import time
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from thermal.build import build
from thermal.case import Case
from thermal.crosscheck.fipy_bar import CELLS, FipyBar, March, import_fipy
from thermal.crosscheck.recorded_heat import heat_depth, recorded_heat
from thermal.interfaces import Array
from thermal.loop import run
from thermal.results.history import History
from thermal.results.stages import stage_names
from thermal.setup import Setup

READINGS = ("surface", "core", "mean")
STEPS, STAGE_SHARE = 200, 0.3
"""Steps of the coarser pass, shared out by how far the surface temperature travels, and the least share of a stage."""
EARLY = 0.2
"""Share of a stage over which its steps grow, from the square of their number to even ones."""
ALLOWED, ALLOWED_SHARE = 2.0, 2e-3
"""Largest difference that counts as agreement: in kelvin, and with it a share of the rise of temperature."""
TELL_EVERY = 20
"""Steps between two lines of progress."""
SAME_LOSS = 0.02
"""The heat lost in all may differ by this share."""
FIRST_ORDER = (1.7, 2.3)
"""Fall of the raw difference at half the step, where the error is of first order in it."""


@dataclass(frozen=True)
class Largest:
    """Largest difference of a reading, tool minus second engine [K], when [s], in which stage, at what reading [K]."""

    reading: str
    difference: float
    time: float
    stage: str
    T: float


@dataclass(frozen=True)
class AtEnd:
    """End of a stage [s] and the differences there, reading -> tool minus second engine [K]."""

    stage: str
    time: float
    difference: dict[str, float]


@dataclass(frozen=True)
class Pass:
    """One pass of the second engine.

    steps ; sweeps in all, most_sweeps in one step ; raw : largest difference from the tool of any reading before
    extrapolation [K] ; closure : what its own energy accounts leave open, relative ; wall_s : [s] it took.
    """

    steps: int
    sweeps: int
    most_sweeps: int
    raw: float
    closure: float
    wall_s: float


@dataclass(frozen=True)
class SecondEngine:
    """What the second engine says to a run.

    title : of the case ; version : of FiPy ; cells : of the tool and of the second engine ; rise : largest rise of
    temperature of the run [K] ; largest : per reading ; ends : per stage ; passes : at a step size and at half of it ;
    ratio : raw difference of the first over that of the second ; first_order : it is about 2, as where the step size
    rules it ; lost : [J] by the tool and by the second engine, extrapolated ; allowed : [K] ; agrees : every largest
    difference is within that, and the heat lost is the same within 2 %.
    """

    title: str
    version: str
    cells: tuple[int, int]
    rise: float
    largest: tuple[Largest, ...]
    ends: tuple[AtEnd, ...]
    passes: tuple[Pass, Pass]
    ratio: float
    first_order: bool
    lost: tuple[float, float]
    allowed: float
    agrees: bool

    @property
    def worst(self) -> Largest:
        """The largest difference of all readings."""
        return max(self.largest, key=lambda each: abs(each.difference))


def compare(case: Case, progress: Callable[[str], None] | None = None, steps: int = STEPS) -> SecondEngine:
    """Run a case and solve its heat problem again on FiPy.

    progress : told in a few words how far it is ; steps : of the coarser pass.

    Raises
    ------
    ThermalError : FiPy is not installed.
    CaseError, MaterialError, NoConvergence, BalanceError : see build, run and FipyBar.
    """
    import_fipy()
    setup = build(case)
    if progress is not None:
        progress("the run itself")
    history = run(setup)
    if history.status == "interrupted":
        raise KeyboardInterrupt
    return compare_run(setup, history, progress, steps)


def compare_run(
    setup: Setup, history: History, progress: Callable[[str], None] | None = None, steps: int = STEPS
) -> SecondEngine:
    """The second engine on a run that is there; progress, steps as for compare."""
    shares = _shares(history, steps)
    passes = []
    for number in (1, 2):
        told = f"second engine, pass {number} of 2"
        halved = {stage: number * share for stage, share in shares.items()}
        passes.append(_solve(setup, history, halved, told, progress))
    coarse, fine = passes
    rows = np.flatnonzero(np.isin(history.stage, list(shares)))
    tool = np.stack([history.readings[name][rows] for name in READINGS], axis=1)
    difference = tool - (2.0 * fine.readings - coarse.readings)
    raw = [float(np.abs(tool - each.readings).max()) for each in passes]
    rise = float(history.readings["maximum"].max()) - setup.T_initial
    names = stage_names(setup)
    largest = []
    for column, reading in enumerate(READINGS):
        i = int(np.abs(difference[:, column]).argmax())
        at = int(rows[i])
        stage = names[int(history.stage[at])]
        largest.append(
            Largest(reading, float(difference[i, column]), float(history.time[at]), stage, float(tool[i, column]))
        )
    ends = []
    for number in shares:
        last = int(np.flatnonzero(history.stage[rows] == number)[-1])
        at_end = dict(zip(READINGS, difference[last].tolist(), strict=True))
        ends.append(AtEnd(names[number], float(history.time[rows[last]]), at_end))
    lost = float(sum(account[-1] for name, account in history.energy.items() if name.startswith("loss: ")))
    other = 2.0 * fine.bar.lost - coarse.bar.lost
    allowed = ALLOWED + ALLOWED_SHARE * max(rise, 0.0)
    ratio = raw[0] / raw[1] if raw[1] > 0.0 else float("nan")
    return SecondEngine(
        title=setup.title,
        version=import_fipy().__version__,
        cells=(setup.section.mesh.r.size, CELLS),
        rise=rise,
        largest=tuple(largest),
        ends=tuple(ends),
        passes=(coarse.told(raw[0]), fine.told(raw[1])),
        ratio=ratio,
        first_order=FIRST_ORDER[0] <= ratio <= FIRST_ORDER[1],
        lost=(lost, other),
        allowed=allowed,
        agrees=all(abs(each.difference) <= allowed for each in largest)
        and abs(other - lost) <= SAME_LOSS * max(abs(lost), abs(other)),
    )


@dataclass(frozen=True)
class _Solved:
    """readings : (records, 3) [K] at the recorded steps ; bar : as it was left ; marches : one a stage."""

    readings: Array
    bar: FipyBar
    marches: tuple[March, ...]
    wall_s: float

    def told(self, raw: float) -> Pass:
        """What the report keeps."""
        steps = sum(each.time.size - 1 for each in self.marches)
        sweeps = sum(each.sweeps for each in self.marches)
        most = max(each.most_sweeps for each in self.marches)
        return Pass(steps, sweeps, most, raw, self.bar.closure, self.wall_s)


def _solve(
    setup: Setup, history: History, steps: dict[int, int], told: str, progress: Callable[[str], None] | None
) -> _Solved:
    """All stages with so many steps each (stage -> steps)."""
    from scipy.interpolate import CubicSpline

    began = time.perf_counter()
    mesh, names = setup.section.mesh, stage_names(setup)
    bar = FipyBar(mesh, setup.material, setup.T_initial, heat_depth(history, mesh))
    marches: list[March] = []
    readings: list[Array] = []
    for stage, count in steps.items():

        def on_step(number: int, stage: int = stage, count: int = count) -> None:
            if progress is not None and number % TELL_EVERY == 0:
                progress(f"{told}, {names[stage]}: step {number} of {count}")

        known = history.time[history.stage == stage]
        times = step_times(float(known[0]), float(known[-1]), count)
        heat = recorded_heat(history, mesh, stage, bar.edges)
        march = bar.march(setup.losses[setup.stages[stage].place], heat, times, on_step, untouched=not marches)
        marches.append(march)
        # Against the number of the step the readings are smooth even where they start like the root of the time.
        place = np.arange(count + 1) / count
        readings.append(CubicSpline(place, march.readings)(places_of(known)))
    return _Solved(np.concatenate(readings), bar, tuple(marches), time.perf_counter() - began)


def _shares(history: History, steps: int) -> dict[int, int]:
    """Stage -> its part of the steps; a stage that was over at once has none."""
    travel = {}
    for stage in np.unique(history.stage).tolist():
        surface = history.readings["surface"][history.stage == stage]
        if surface.size > 1:
            travel[stage] = float(np.abs(np.diff(surface)).sum())
    whole = max(sum(travel.values()), np.finfo(float).tiny)
    return {stage: round(steps * max(STAGE_SHARE, part / whole)) for stage, part in travel.items()}


def step_times(start: float, end: float, count: int) -> Array:
    """Times (count + 1,) [s] from start to end: steps that grow from very short to even ones; smooth."""
    x = np.arange(count + 1) / count
    times = start + (end - start) * (1.0 + EARLY) * x**2 / (x + EARLY)
    times[-1] = end
    return np.asarray(times)


def places_of(times: Array) -> Array:
    """Share of the steps made at times (s,) [s] of a stage, first and last at its ends; the inverse of step_times."""
    t = (times - times[0]) / ((times[-1] - times[0]) * (1.0 + EARLY))
    return np.asarray(0.5 * t + np.sqrt(0.25 * t**2 + EARLY * t))
