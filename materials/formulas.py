"""Published closed formulas that stand in a data file by name instead of a table."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from materials.curve import Array

_ZERO_CELSIUS = 273.15


@dataclass(frozen=True, eq=False)
class CarbonSteelHeat:
    """Specific heat of carbon steel, EN 1993-1-2:2005 clause 3.4.1.2, 20 to 1200 °C, held beyond.

    In J/(kg K) with t in °C: 425 + 0.773 t - 1.69e-3 t2 + 2.22e-6 t3 below 600 °C; 666 + 13002/(738 - t)
    up to 735 °C; 545 + 17820/(t - 731) up to 900 °C; 650 above. The integral is closed, so the narrow peak of
    5000 J/(kg K) at 735 °C keeps its heat whatever the table that is made of it.
    """

    @property
    def x(self) -> Array:
        """Temperatures (5,) [K] between which the formula is smooth."""
        return np.array([20.0, 600.0, 735.0, 900.0, 1200.0]) + _ZERO_CELSIUS

    def __call__(self, T: npt.ArrayLike) -> Array:
        """Specific heat [J/(kg K)] at T [K]."""
        t = _celsius(T)
        return np.select(
            [t < 600.0, t < 735.0, t < 900.0],
            [
                425.0 + t * (0.773 + t * (-1.69e-3 + t * 2.22e-6)),
                666.0 + 13002.0 / (738.0 - np.minimum(t, 735.0)),
                545.0 + 17820.0 / (np.maximum(t, 735.0) - 731.0),
            ],
            650.0,
        )

    def slope(self, T: npt.ArrayLike) -> Array:
        """Slope [J/(kg K2)] at T [K]; at a change of formula that of the upper one."""
        t = _celsius(T)
        return np.select(
            [t <= 20.0, t < 600.0, t < 735.0, t < 900.0],
            [
                0.0,
                0.773 + t * (-3.38e-3 + t * 6.66e-6),
                13002.0 / (738.0 - np.minimum(t, 735.0)) ** 2,
                -17820.0 / (np.maximum(t, 735.0) - 731.0) ** 2,
            ],
            0.0,
        )

    def integral(self, a: npt.ArrayLike, b: npt.ArrayLike) -> Array:
        """Heat [J/kg] from a to b [K]."""
        return self._heat(b) - self._heat(a)

    def _heat(self, T: npt.ArrayLike) -> Array:
        """Heat from 20 °C; each piece counts up to where the temperature stands in it."""
        t = np.asarray(T, dtype=np.float64) - _ZERO_CELSIUS
        p1, p2, p3 = np.clip(t, 20.0, 600.0), np.clip(t, 600.0, 735.0), np.clip(t, 735.0, 900.0)

        def polynomial(u: npt.ArrayLike) -> Array:
            v = np.asarray(u, dtype=np.float64)
            return np.asarray(v * (425.0 + v * (0.773 / 2 + v * (-1.69e-3 / 3 + v * 2.22e-6 / 4))))

        below = float(self(20.0 + _ZERO_CELSIUS)) * np.minimum(t - 20.0, 0.0)
        ferrite = polynomial(p1) - polynomial(20.0) + 666.0 * (p2 - 600.0) + 13002.0 * np.log(138.0 / (738.0 - p2))
        austenite = 545.0 * (p3 - 735.0) + 17820.0 * np.log((p3 - 731.0) / 4.0)
        return np.asarray(below + ferrite + austenite + 650.0 * np.maximum(t - 900.0, 0.0))


def _celsius(T: npt.ArrayLike) -> Array:
    """Temperature in °C, held at the lower end of the formula."""
    return np.maximum(np.asarray(T, dtype=np.float64) - _ZERO_CELSIUS, 20.0)
