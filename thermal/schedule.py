"""Stages of the treatment and what ends them."""

from dataclasses import dataclass
from typing import Literal

from thermal.control import Control
from thermal.interfaces import Supply

Place = Literal["coil", "open"]


@dataclass(frozen=True)
class Stop:
    """Targets that must all hold.

    temperatures : reading -> [K] ; spread : largest |surface - core| [K] or None ; falling : the temperatures are
    reached from above (a piece that cools).
    """

    temperatures: dict[str, float]
    spread: float | None = None
    falling: bool = False

    def distance(self, readings: dict[str, float]) -> float:
        """How far the farthest target is from holding [K]; zero or less once all hold."""
        sign = -1.0 if self.falling else 1.0
        far = [sign * (target - readings[name]) for name, target in self.temperatures.items()]
        if self.spread is not None:
            far.append(abs(readings["spread"]) - self.spread)
        return max(far)


@dataclass(frozen=True)
class Stage:
    """One stage.

    kind ; control : what it asks of the supply ; place : in the coil or in the open ; stop : targets or None ;
    longest : [s] after which it ends whatever holds (its duration where there is no stop), None without bound ;
    supply : what drives this stage, where that is not the supply of the run.
    """

    kind: Literal["heat", "hold", "transfer"]
    control: Control
    place: Place
    stop: Stop | None
    longest: float | None
    supply: Supply | None = None
