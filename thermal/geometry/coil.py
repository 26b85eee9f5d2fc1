"""The coil as geometry: bore, length, turns and conductor."""

import math
from dataclasses import dataclass

from thermal.geometry.inductance import nagaoka


@dataclass(frozen=True)
class Coil:
    """A single-layer coil of square tube.

    turns : [-] ; length : [m] ; opening : (width, height) [m] of the bore, equal to the diameter twice where it is
    round ; round : True for a round bore ; tube : [m] outside of the square tube ; wall : [m].
    """

    turns: float
    length: float
    opening: tuple[float, float]
    round: bool
    tube: float
    wall: float

    def bore_area(self, depth: float = 0.0) -> float:
        """Area [m2] of the bore, widened all round by a depth [m] into the copper."""
        width, height = (side + 2.0 * depth for side in self.opening)
        return math.pi / 4.0 * width**2 if self.round else width * height

    def turn_length(self) -> float:
        """Length [m] of one turn along the middle of the tube."""
        width, height = (side + self.tube for side in self.opening)
        return math.pi * width if self.round else 2.0 * (width + height)

    def bore_perimeter(self) -> float:
        """Circumference [m] of the bore."""
        width, height = self.opening
        return math.pi * width if self.round else 2.0 * (width + height)

    def nagaoka(self, depth: float = 0.0) -> float:
        """Nagaoka's factor of the circle whose area equals the widened bore (an estimate unless round)."""
        diameter = math.sqrt(4.0 / math.pi * self.bore_area(depth))
        return nagaoka(diameter / self.length)
