"""Values between the steps of a run.

Within one stage the enthalpy of every cell is a cubic in time through the step points, with slopes from the parabola
through three neighbouring points (one-sided at both ends of the stage); temperatures follow from the enthalpy table.
A switch of power happens between stages, so stages are never joined.
"""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from thermal.results.history import Array, History
from thermal.setup import Setup

Index = npt.NDArray[np.int64]

POWERS = (
    "absorbed_power",
    "supply_power",
    "loss_power",
    "frequency",
    "coil_current_rms",
    "coil_voltage_rms",
    "power_factor",
)
"""Series of a History that are taken linear between the steps."""


@dataclass(frozen=True)
class Sampled:
    """A run at k chosen moments.

    time, stage : (k,) [s], index ; extended : (k, n + 2) [K] core, cells, surface ; readings : name -> (k,) [K] ;
    series : name in POWERS -> (k,) SI ; energy : account -> (k,) [J] since the start.
    """

    time: Array
    stage: Index
    extended: Array
    readings: dict[str, Array]
    series: dict[str, Array]
    energy: dict[str, Array]


def sample(setup: Setup, history: History, stage: npt.ArrayLike, time: npt.ArrayLike) -> Sampled:
    """The run at given moments.

    Parameters
    ----------
    stage : (k,) stage each moment is counted to; a boundary belongs to the stage it ends or to the one it begins.
    time : (k,) [s] inside that stage.

    Raises
    ------
    ValueError : a moment outside its stage.
    """
    stages, times = np.asarray(stage, dtype=np.int64), np.asarray(time, dtype=float)
    offsets = np.stack(
        [history.readings["core"] - history.T[:, 0], history.readings["surface"] - history.T[:, -1]], axis=1
    )
    H = np.empty((times.size, history.enthalpy.shape[1]))
    offset = np.empty((times.size, 2))
    series = {name: np.empty(times.size) for name in POWERS}
    energy = {name: np.empty(times.size) for name in history.energy}
    for number in np.unique(stages):
        rows = np.flatnonzero(stages == number)
        steps = np.flatnonzero(history.stage == number)
        at, known = times[rows], history.time[steps]
        if steps.size == 0 or at.min() < known[0] or at.max() > known[-1]:
            raise ValueError(f"a moment lies outside stage {number}")
        H[rows] = cubic(known, history.enthalpy[steps], at)
        offset[rows] = cubic(known, offsets[steps], at)
        for name in POWERS:
            series[name][rows] = np.interp(at, known, getattr(history, name)[steps])
        for name, account in history.energy.items():
            energy[name][rows] = cubic(known, account[steps], at)
    T = setup.section.table.temperature(H)
    extended = np.array(
        [
            setup.sampler.extended(cells, float(cells[-1] + outer), float(cells[0] + inner))
            for cells, (inner, outer) in zip(T, offset, strict=True)
        ]
    )
    return Sampled(times, stages, extended, setup.sampler.readings(extended, setup.depths), series, energy)


def cubic(x: Array, y: Array, at: Array) -> Array:
    """Cubic through points with three-point slopes; linear in y, exact for a parabola.

    Parameters
    ----------
    x : (s,) rising ; y : (s,) or (s, n) ; at : (k,) inside x. One point: that value; two: the straight line.

    Returns
    -------
    (k,) or (k, n)
    """
    if x.size == 1:
        return np.repeat(y[:1], at.size, axis=0)
    slopes = _three_point_slopes(x, y)
    row = np.clip(np.searchsorted(x, at, side="right") - 1, 0, x.size - 2)
    shape = (-1, *(1,) * (y.ndim - 1))
    width = np.diff(x)[row].reshape(shape)
    u = ((at - x[row]) / np.diff(x)[row]).reshape(shape)
    v = 1.0 - u
    ends = v**2 * (1.0 + 2.0 * u) * y[row] + u**2 * (1.0 + 2.0 * v) * y[row + 1]
    return np.asarray(ends + width * u * v * (v * slopes[row] - u * slopes[row + 1]))


def _three_point_slopes(x: Array, y: Array) -> Array:
    """Slopes (s, ...) at the points, of the parabola through each point and its neighbours."""
    width = np.diff(x).reshape((-1, *(1,) * (y.ndim - 1)))
    chord = np.diff(y, axis=0) / width
    if x.size == 2:
        return np.concatenate([chord, chord])
    before, after = width[:-1], width[1:]
    inner = (after * chord[:-1] + before * chord[1:]) / (before + after)
    first = 2.0 * chord[:1] - inner[:1]
    last = 2.0 * chord[-1:] - inner[-1:]
    return np.concatenate([first, inner, last])
