"""Piecewise-linear laws of temperature, looked up fast for one face or for many.

A loss is asked about eight times in a time step, mostly for one face. Plain floats are then several times
quicker than arrays of one element, so every formula of this package is written once and takes either.
"""

from bisect import bisect_right
from dataclasses import dataclass, field
from typing import Protocol

import numpy as np
import numpy.typing as npt

from materials.property import Property
from thermal.constants import ZERO_CELSIUS
from thermal.errors import OutOfRange
from thermal.interfaces import Array, Real

_PIECES = 32  # of each interval of a curve that is not linear; the chord error of a cubic falls as 1/32^2


@dataclass(frozen=True, eq=False)
class Law:
    """A continuous law of temperature, linear between its nodes and constant beyond them.

    Parameters
    ----------
    T : (k,) [K] nodes, increasing. value : (k,) the law at the nodes.
    below, above : sentence for the user where the law ends there; None where it is held constant.

    Errors: OutOfRange from ``at`` beyond an end that has a sentence.
    """

    T: Array
    value: Array
    below: str | None = None
    above: str | None = None
    _low: float = field(init=False)
    _high: float = field(init=False)
    _columns: Array = field(init=False)
    _edges: list[float] = field(init=False)
    _rows: list[tuple[float, float, float, float]] = field(init=False)

    def __post_init__(self) -> None:
        step = np.diff(self.T)
        mean = (self.value[1:] + self.value[:-1]) / 2
        columns = np.stack(  # per cell: origin, value and slope there, integral from the first node
            [
                np.concatenate([self.T[:1], self.T]),
                np.concatenate([self.value[:1], self.value]),
                np.concatenate([[0.0], np.diff(self.value) / step, [0.0]]),
                np.concatenate([[0.0, 0.0], np.cumsum(mean * step)]),
            ]
        )
        object.__setattr__(self, "_low", -np.inf if self.below is None else float(self.T[0]))
        object.__setattr__(self, "_high", np.inf if self.above is None else float(self.T[-1]))
        object.__setattr__(self, "_columns", columns)
        object.__setattr__(self, "_edges", self.T.tolist())
        object.__setattr__(self, "_rows", list(zip(*columns.tolist(), strict=True)))

    def at(self, T: Real) -> tuple[Real, Real]:
        """Value of the law and its slope at T [K]. Errors: OutOfRange."""
        if isinstance(T, float):
            if not self._low <= T <= self._high:
                self._refuse(T, T)
            origin, value, slope, _ = self._rows[bisect_right(self._edges, T)]
            return value + slope * (T - origin), slope
        if (self.below or self.above) and T.size:
            self._refuse(T.min(), T.max())
        return self.held(T)

    def held(self, T: Real) -> tuple[Real, Real]:
        """The same, but constant beyond both ends: an iteration may stray, ``at`` judges where it ends."""
        origin, value, slope, _ = self._cell(T)
        return value + slope * (T - origin), slope

    def integral(self, T: Real) -> tuple[Real, Real]:
        """Integral of the law from its first node to T [K], and its value at T; constant beyond both ends."""
        origin, value, slope, before = self._cell(T)
        past = T - origin
        return before + past * (value + slope / 2 * past), value + slope * past

    def _cell(self, T: Real) -> tuple[Real, Real, Real, Real]:
        if isinstance(T, float):
            return self._rows[bisect_right(self._edges, T)]
        origin, value, slope, before = self._columns[:, self.T.searchsorted(T, "right")]
        return origin, value, slope, before

    def _refuse(self, coldest: float, hottest: float) -> None:
        if coldest < self._low:
            raise OutOfRange(f"{self.below}, asked at {coldest - ZERO_CELSIUS:.1f} °C")
        if hottest > self._high:
            raise OutOfRange(f"{self.above}, asked at {hottest - ZERO_CELSIUS:.1f} °C")


def constant_law(value: float) -> Law:
    """The same value at every temperature."""
    return Law(np.array([ZERO_CELSIUS]), np.array([value]))


def law_of(curve: Property | float, what: str) -> Law:
    """A material's curve at its own nodes, or a constant; what : its name in an error.

    A curve that is not linear between its nodes is read at 31 more points of each interval. Beyond its data
    it is held or refused as the property says. Errors: OutOfRange for a curve in steps, which would make
    the loss jump.
    """
    if not isinstance(curve, Property):
        return constant_law(float(curve))
    if curve.rule == "step":
        raise OutOfRange(f"{what} is tabulated in steps, a heat loss needs a continuous curve (linear, monotone)")
    T = curve.T
    if curve.rule != "linear":
        fine = np.arange((T.size - 1) * _PIECES + 1) / _PIECES
        T = np.interp(fine, np.arange(T.size), T)
    end = None
    if curve.beyond == "refuse":
        low, high = curve.T_min - ZERO_CELSIUS, curve.T_max - ZERO_CELSIUS
        end = f"{what} is known from {low:.0f} to {high:.0f} °C"
    return Law(T, curve(T), end, end)


def pick(condition: bool | npt.NDArray[np.bool_], a: Real, b: Real) -> Real:
    """First value where the condition holds, second elsewhere, for a number or element by element."""
    if isinstance(a, float) and isinstance(b, float):
        return a if condition else b
    return np.where(condition, a, b)


class Formula(Protocol):
    """Flux and slope from surface and peak temperature, for a number or element by element."""

    def __call__(self, T: Real, T_peak: Real, /) -> tuple[Real, Real]:
        """Flux [W/m2] and slope [W/(m2 K)] at T, T_peak [K]."""
        ...


def by_face(formula: Formula, T_surface: Real, T_peak: Real) -> tuple[Real, Real]:
    """Flux and slope of a formula at (s,) faces or at one face given as numbers, the quicker way for one."""
    if isinstance(T_surface, float) or not T_surface.shape == np.shape(T_peak) == (1,):
        return formula(T_surface, T_peak)
    q, slope = formula(T_surface.item(), T_peak.item())
    return np.array([q]), np.array([slope])
