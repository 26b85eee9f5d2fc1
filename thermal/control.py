"""What a stage asks of the supply, as a pure function of the state and one memory."""

import math
from dataclasses import dataclass
from typing import Protocol

import numpy as np

from thermal.interfaces import Array, Demand

RESPONSES_A_STEP = 20.0


class Control(Protocol):
    """Turns the state of the workpiece into a demand."""

    @property
    def needs_readings(self) -> bool:
        """Whether readings must be passed (they cost time at every stage of a step)."""
        ...

    @property
    def gain(self) -> tuple[str, float, float]:
        """Reading (surface or mean) the demand answers at once, fall of the power with it [W/K] and reset [s].

        A fall of 0 for a demand that answers nothing.
        """
        ...

    @property
    def longest_step(self) -> float:
        """Longest step [s] in which its answer stays small enough to be followed."""
        ...

    def slack(self, readings: dict[str, float], loss: float, memory: Array) -> float:
        """How far its reading must fall [K] before it asks for power; 0 where it does."""
        ...

    def demand(self, readings: dict[str, float], loss: float, memory: Array) -> Demand:
        """Demand at readings [K], present loss [W] and memory (2,): a shift of the set point [K] and a power [W]."""
        ...

    def memory_rates(self, readings: dict[str, float], memory: Array, clipped: int) -> Array:
        """Rates of the memory (2,) [K/s], [W/s]; clipped: 1 with the supply at a limit, -1 with it off, else 0."""
        ...


@dataclass(frozen=True)
class FixedDrive:
    """The same demand throughout."""

    fixed: Demand
    needs_readings: bool = False
    gain: tuple[str, float, float] = ("surface", 0.0, 1.0)
    longest_step: float = math.inf

    def slack(self, readings: dict[str, float], loss: float, memory: Array) -> float:
        """None: it asks the same throughout."""
        return 0.0

    def demand(self, readings: dict[str, float], loss: float, memory: Array) -> Demand:
        """The demand."""
        return self.fixed

    def memory_rates(self, readings: dict[str, float], memory: Array, clipped: int) -> Array:
        """Nothing to remember."""
        return np.zeros(2)


@dataclass(frozen=True)
class HoldTemperature:
    """Keeps a reading at its set point with absorbed power.

    P = loss + C (T_set - T)/response + J and J' = C (T_set - T)/(response reset), J kept from growing while the
    supply is at a limit and from falling while it is off. The surface and the mean are held directly. A reading inside
    the section follows the power too late for that: it is held through the surface, whose set point is moved by the
    deviation of the reading and by its integral over the lag of the section, but never above ceiling.

    reading ; set_point : [K] ; capacity : heat capacity of the workpiece [J/K] ; response, reset : [s] ;
    lag : [s] in which the section follows its surface ; ceiling : [K] hottest the surface may be asked for.
    """

    reading: str
    set_point: float
    capacity: float
    response: float
    reset: float
    lag: float
    ceiling: float
    needs_readings: bool = True

    @property
    def gain(self) -> tuple[str, float, float]:
        """The surface or the mean, C/response [W/K] and the reset [s]."""
        return ("mean" if self.reading == "mean" else "surface"), self.capacity / self.response, self.reset

    def demand(self, readings: dict[str, float], loss: float, memory: Array) -> Demand:
        """Absorbed power [W], never negative."""
        power = self._wanted(readings, loss, memory)
        return Demand("absorbed_power", power) if power > 0.0 else Demand("off", 0.0)

    def slack(self, readings: dict[str, float], loss: float, memory: Array) -> float:
        """How far the reading must fall [K] before the wanted power is above zero."""
        return max(0.0, -self._wanted(readings, loss, memory)) * self.response / self.capacity

    def memory_rates(self, readings: dict[str, float], memory: Array, clipped: int) -> Array:
        """Rates of the shift of the set point [K/s] and of J [W/s]; while clipped only towards what is possible."""
        wanted = self._surface_set_point(readings, memory)
        off = wanted - self._held(readings)
        shift = (self.set_point - readings[self.reading]) / self.lag if self._inside and wanted < self.ceiling else 0.0
        rates = np.array([shift, self.capacity * off / (self.response * self.reset)])
        return rates if clipped == 0 else np.where(rates * clipped < 0.0, rates, 0.0)

    @property
    def longest_step(self) -> float:
        """Twenty times the response: beyond that, the stages of a step ask for more than the supply has."""
        return RESPONSES_A_STEP * self.response

    def _wanted(self, readings: dict[str, float], loss: float, memory: Array) -> float:
        """Power [W] it would take, below zero where the workpiece is too hot."""
        off = self._surface_set_point(readings, memory) - self._held(readings)
        return loss + self.capacity * off / self.response + float(memory[1])

    @property
    def _inside(self) -> bool:
        return self.reading not in ("surface", "mean")

    def _held(self, readings: dict[str, float]) -> float:
        return readings["mean"] if self.reading == "mean" else readings["surface"]

    def _surface_set_point(self, readings: dict[str, float], memory: Array) -> float:
        if not self._inside:
            return self.set_point
        off = self.set_point - readings[self.reading]
        return min(self.set_point + off + float(memory[0]), self.ceiling)
