"""What a stage asks of the supply, as a pure function of the state and one memory."""

from dataclasses import dataclass
from typing import Protocol

from thermal.interfaces import Demand


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

    def demand(self, readings: dict[str, float], loss: float, memory: float) -> Demand:
        """Demand at readings [K], present loss [W] and memory [W]."""
        ...

    def memory_rate(self, readings: dict[str, float], clipped: bool) -> float:
        """Rate of the memory [W/s]; clipped where the supply did not meet the demand."""
        ...


@dataclass(frozen=True)
class FixedDrive:
    """The same demand throughout."""

    fixed: Demand
    needs_readings: bool = False
    gain: tuple[str, float, float] = ("surface", 0.0, 1.0)

    def demand(self, readings: dict[str, float], loss: float, memory: float) -> Demand:
        """The demand."""
        return self.fixed

    def memory_rate(self, readings: dict[str, float], clipped: bool) -> float:
        """Nothing to remember."""
        return 0.0


@dataclass(frozen=True)
class HoldTemperature:
    """Keeps a reading at its set point with absorbed power.

    P = loss + C (T_set - T)/response + J and J' = C (T_set - T)/(response reset), J frozen while the supply is at a
    limit or off. The surface and the mean are held directly. A reading inside the section follows the power too late
    for that: it is held through the surface, whose set point moves by the deviation of the reading but never above
    ceiling.

    reading ; set_point : [K] ; capacity : heat capacity of the workpiece [J/K] ; response, reset : [s] ;
    ceiling : [K] hottest the surface may be asked for.
    """

    reading: str
    set_point: float
    capacity: float
    response: float
    reset: float
    ceiling: float
    needs_readings: bool = True

    @property
    def gain(self) -> tuple[str, float, float]:
        """The surface or the mean, C/response [W/K] and the reset [s]."""
        return ("mean" if self.reading == "mean" else "surface"), self.capacity / self.response, self.reset

    def demand(self, readings: dict[str, float], loss: float, memory: float) -> Demand:
        """Absorbed power [W], never negative."""
        power = loss + self.capacity * self._deviation(readings) / self.response + memory
        return Demand("absorbed_power", power) if power > 0.0 else Demand("off", 0.0)

    def memory_rate(self, readings: dict[str, float], clipped: bool) -> float:
        """Rate of J [W/s]."""
        if clipped:
            return 0.0
        return self.capacity * self._deviation(readings) / (self.response * self.reset)

    def _deviation(self, readings: dict[str, float]) -> float:
        off = self.set_point - readings[self.reading]
        if self.reading in ("surface", "mean"):
            return off
        return min(self.set_point + off, self.ceiling) - readings["surface"]
