"""Test doubles and small measures shared by the tests."""

from dataclasses import dataclass

import numpy as np

from thermal.interfaces import Array, Demand
from thermal.results.history import History

ZERO = 273.15
"""0 °C [K]."""


@dataclass(frozen=True)
class Clock:
    """Demands the time since the start of the stage, so that a source may depend on it (plays Control).

    The first memory of the control is the clock: its rate is 1.
    """

    needs_readings: bool = False
    gain: tuple[str, float, float] = ("surface", 0.0, 1.0)

    def demand(self, readings: dict[str, float], loss: float, memory: Array) -> Demand:
        return Demand("surface_field", float(memory[0]))

    def memory_rates(self, readings: dict[str, float], memory: Array, clipped: int) -> Array:
        return np.array([1.0, 0.0])


def uniform_edges(inner: float, outer: float, cells: int) -> Array:
    """Cell faces of equal spacing (cells + 1,) [m]."""
    return np.linspace(inner, outer, cells + 1)


def observed_order(sizes: list[float], errors: list[float]) -> float:
    """Slope of log(error) over log(size), by least squares."""
    return float(np.polyfit(np.log(sizes), np.log(errors), 1)[0])


def account_gap(energy: dict[str, Array]) -> float:
    """|stored + lost - absorbed| over the largest of the three, at every moment of the history."""
    lost = np.sum([series for name, series in energy.items() if name.startswith("loss: ")], axis=0)
    stored, absorbed = energy["stored"], energy["absorbed"]
    size = max(np.abs(stored).max(), np.abs(lost).max(), np.abs(absorbed).max())
    return float(np.abs(stored + lost - absorbed).max() / size)


def last_of(history: History, reading: str) -> float:
    """Value of a reading [K] at the end."""
    return float(history.readings[reading][-1])
