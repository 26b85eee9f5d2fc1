"""The heat a run recorded, on the cells and at the times of another engine."""

from dataclasses import dataclass

import numpy as np

from thermal.geometry.mesh import Mesh
from thermal.interfaces import Array
from thermal.results.history import History

TOO_LITTLE = 0.1
"""Where the straight line between two records has less than this share of the energy booked, it has no shape."""
DEPTH_SHARE = 1.0 - np.exp(-1.0)
"""Share of the heat that falls within the depth by which the heat is known: that of one skin of a decaying source."""


@dataclass(frozen=True)
class RecordedHeat:
    """Heat brought to c cells in one stage.

    time : (s,) [s] of the records ; start, end : (s - 1, c) [W] at both ends of each interval, straight in between ;
    brought : (s, c) [J] since the stage began.
    """

    time: Array
    start: Array
    end: Array
    brought: Array

    def until(self, time: float) -> Array:
        """Heat (c,) [J] brought from the beginning of the stage to a time [s] in it."""
        i = int(np.clip(np.searchsorted(self.time, time, side="right") - 1, 0, self.time.size - 2))
        since, width = time - self.time[i], self.time[i + 1] - self.time[i]
        rise = (self.end[i] - self.start[i]) * (0.5 * since / width)
        return np.asarray(self.brought[i] + since * (self.start[i] + rise))


def recorded_heat(history: History, mesh: Mesh, stage: int, edges: Array) -> RecordedHeat:
    """The heat of one stage of a run.

    In space the heat summed from the core outwards is a monotone cubic through its values at the cell faces of the
    run: nothing is lost or added. In time it is straight between two records, each interval scaled to the energy the
    run booked for it as absorbed; where both records are without power, the interval has the shape of the nearest
    record that has some.

    Parameters
    ----------
    mesh : of the run ; stage : its number, of two records at least ; edges : (c + 1,) [m] the other cells.
    """
    from scipy.interpolate import PchipInterpolator

    rows = np.flatnonzero(history.stage == stage)
    time, booked = history.time[rows], np.diff(history.energy["absorbed"][rows])
    # In the area inside a radius the sum is straight where the heat is uniform.
    power = 2 if mesh.kind == "cylindrical" else 1
    inside = np.pad(np.cumsum(history.heat[rows] * mesh.volume, axis=1), ((0, 0), (1, 0)))
    watts = np.diff(PchipInterpolator(mesh.edges**power, inside, axis=1)(edges**power), axis=1)
    total = watts.sum(axis=1)
    width = np.diff(time)
    straight = 0.5 * (total[:-1] + total[1:]) * width
    shapeless = straight < TOO_LITTLE * np.abs(booked)
    scale = np.divide(booked, straight, out=np.zeros_like(booked), where=~shapeless & (straight > 0.0))
    start, end = scale[:, None] * watts[:-1], scale[:, None] * watts[1:]
    powered = np.flatnonzero(total > 0.0)
    for i in np.flatnonzero(shapeless) if powered.size else ():
        nearest = powered[np.abs(powered - i).argmin()]
        start[i] = end[i] = watts[nearest] * (booked[i] / (width[i] * total[nearest]))
    gained = np.cumsum(0.5 * (start + end) * width[:, None], axis=0)
    return RecordedHeat(time, start, end, np.pad(gained, ((1, 0), (0, 0))))


def heat_depth(history: History, mesh: Mesh) -> float:
    """Smallest depth [m] that took 63 % of the heat at any record; the whole section where there never was power."""
    watts = history.heat[history.absorbed_power > 0.0] * mesh.volume
    if watts.size == 0:
        return float(mesh.edges[-1] - mesh.edges[0])
    inwards = np.cumsum(watts[:, ::-1], axis=1)
    depth = mesh.edges[-1] - mesh.edges[-2::-1]
    return min(float(np.interp(DEPTH_SHARE, row / row[-1], depth)) for row in inwards)
