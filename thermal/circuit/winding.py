"""Resistance of a water-cooled coil of square tube."""

import math
from dataclasses import dataclass

from thermal.constants import COPPER_TEMPERATURES, MU_0, ZERO_CELSIUS
from thermal.errors import OutOfRange
from thermal.geometry.coil import Coil

COPPER_RESISTIVITY_20C = 1.7241e-8
"""Annealed copper at 20 °C [ohm m]; IEC 60028 (from memory)."""

COPPER_COEFFICIENT = 3.93e-3
"""Temperature coefficient of that copper at 20 °C [1/K]; IEC 60028 (from memory)."""


def copper_resistivity(temperature: float) -> float:
    """Resistivity of coil copper [ohm m] at a temperature [K]. Errors: OutOfRange beyond 0 and 200 °C."""
    if not COPPER_TEMPERATURES[0] <= temperature <= COPPER_TEMPERATURES[1]:
        raise OutOfRange(
            f"the copper of the coil is known from 0 to 200 °C, asked at {temperature - ZERO_CELSIUS:g} °C"
        )
    return COPPER_RESISTIVITY_20C * (1.0 + COPPER_COEFFICIENT * (temperature - ZERO_CELSIUS - 20.0))


def copper_depth(resistivity: float, frequency: float) -> float:
    """Skin depth in the coil copper [m]."""
    return math.sqrt(resistivity / (math.pi * frequency * MU_0))


def usual_wall(tube: float, depth: float) -> float:
    """Wall [m] a coil maker would choose: 1.5 skin depths, up to the next 0.5 mm, 1 mm to a quarter of the tube.

    Common practice.
    """
    step = 0.5e-3
    return min(max(math.ceil(1.5 * depth / step - 1e-9) * step, 1e-3), tube / 4.0)


def sheet_resistance(
    resistivity: float, depth: float, turns: float, bore_perimeter: float, length: float, fill: float = 1.0
) -> float:
    """Resistance [ohm] of a single-layer coil whose current hugs the bore one skin depth deep.

    fill : share of the coil length that is copper.
    """
    return resistivity * bore_perimeter * turns**2 / (length * fill * depth)


def wall_factor(wall: float, depth: float) -> float:
    """Rise of the resistance because the wall is not thick against the skin depth.

    One-dimensional sheet with the field on one side only: (sinh 2v + sin 2v)/(cosh 2v - cos 2v), v = wall/depth;
    P. L. Dowell, Proc. IEE 113 (1966) 1387 (from memory). For every wall: 1/v where it is thin, and from
    20 skin depths up 1 to the last digit.
    """
    v = wall / depth
    if v > 20.0:
        return 1.0
    # cosh 2v - cos 2v, which would lose its digits in thin walls
    between = 2.0 * (math.sinh(v) ** 2 + math.sin(v) ** 2)
    return (math.sinh(2 * v) + math.sin(2 * v)) / between


def coil_resistance(coil: Coil, resistivity: float, frequency: float) -> float:
    """AC resistance [ohm] of the coil copper, within about 15 %.

    Current sheet on the bore blended with the lone turn, R0 (1 + (1.4 R_w/R0)^3)^(1/3), which follows field
    solutions for square turns from a fill of 0.2 to 0.9 within 10-13 %; times the wall factor.
    """
    depth = copper_depth(resistivity, frequency)
    sheet = sheet_resistance(resistivity, depth, coil.turns, coil.bore_perimeter(), coil.length)
    lone = resistivity * coil.turns * coil.turn_length() / (4.0 * coil.tube * depth)
    blend: float = (1.0 + (1.4 * lone / sheet) ** 3) ** (1.0 / 3.0)
    return sheet * blend * wall_factor(coil.wall, depth)


@dataclass(frozen=True)
class Winding:
    """Coil copper and leads in series with the reflected workpiece.

    coil, resistivity : [ohm m] of the copper ; leads_resistance : [ohm] ; leads_inductance : [H].
    """

    coil: Coil
    resistivity: float
    leads_resistance: float = 0.0
    leads_inductance: float = 0.0

    def impedance(self, frequency: float) -> complex:
        """Series impedance [ohm]."""
        resistance = coil_resistance(self.coil, self.resistivity, frequency) + self.leads_resistance
        return complex(resistance, 2.0 * math.pi * frequency * self.leads_inductance)
