"""One-dimensional interpolation with slope, integral and inverse."""

from dataclasses import dataclass, field
from typing import Literal

import numpy as np
import numpy.typing as npt

from materials.errors import MaterialError

Array = npt.NDArray[np.float64]
Rule = Literal["linear", "monotone", "step"]
EndRule = Literal["hold", "refuse"]


@dataclass(frozen=True, eq=False)
class Curve:
    """y(x) through given points.

    x, y : (k,) x strictly rising, k >= 1 ;
    rule : linear; monotone (cubic, no overshoot: Fritsch and Carlson 1980, SIAM J. Numer. Anal. 17, 238;
    slopes by Fritsch and Butland 1984, SIAM J. Sci. Stat. Comput. 5, 300); step (y_i until the next x) ;
    end : beyond the points hold the end value or refuse with MaterialError.
    """

    x: Array
    y: Array
    rule: Rule = "linear"
    end: EndRule = "hold"
    _knots: Array = field(init=False, repr=False)
    _poly: Array = field(init=False, repr=False)
    _area: Array = field(init=False, repr=False)

    def __post_init__(self) -> None:
        x, y = _frozen(self.x), _frozen(self.y)
        if x.ndim != 1 or x.shape != y.shape or x.size == 0:
            raise MaterialError("a curve needs as many y as x, at least one")
        if not (np.all(np.isfinite(x)) and np.all(np.isfinite(y)) and np.all(np.diff(x) > 0.0)):
            raise MaterialError("the x of a curve must rise from point to point, all values finite")
        # A last, flat piece makes a single point and the last step ordinary pieces.
        closing = self.rule == "step" or x.size == 1
        knots = np.append(x, x[-1] + 1.0) if closing else x
        values = np.append(y, y[-1]) if closing else y
        h, rise = np.diff(knots), np.diff(values)
        poly = np.zeros((4, h.size))
        poly[0] = values[:-1]
        if self.rule == "linear":
            poly[1] = rise / h
        elif self.rule == "monotone":
            d = _monotone_slopes(h, rise / h)
            poly[1] = d[:-1]
            poly[2] = (3.0 * rise / h - 2.0 * d[:-1] - d[1:]) / h
            poly[3] = (d[:-1] + d[1:] - 2.0 * rise / h) / h**2
        pieces = h * (poly[0] + h * (poly[1] / 2 + h * (poly[2] / 3 + h * poly[3] / 4)))
        for name, value in (
            ("x", x),
            ("y", y),
            ("_knots", knots),
            ("_poly", poly),
            ("_area", np.concatenate(([0.0], np.cumsum(pieces)))),
        ):
            object.__setattr__(self, name, value)

    def __call__(self, x: npt.ArrayLike) -> Array:
        """Value at x, any shape."""
        c, t, _ = self._locate(x)
        return np.asarray(c[0] + t * (c[1] + t * (c[2] + t * c[3])))

    def slope(self, x: npt.ArrayLike) -> Array:
        """dy/dx, at a point that of the piece to its right; 0 where the end value is held."""
        c, t, _ = self._locate(x)
        q = np.asarray(x, dtype=np.float64)
        inside = (q >= self.x[0]) & (q < self.x[-1])
        return np.where(inside, c[1] + t * (2.0 * c[2] + t * 3.0 * c[3]), 0.0)

    def integral(self, a: npt.ArrayLike, b: npt.ArrayLike) -> Array:
        """Exact integral of y from a to b, negative where b < a."""
        return self._primitive(b) - self._primitive(a)

    def inverse(self, y: npt.ArrayLike) -> Array:
        """Argument at which the curve has the value y.

        Raises
        ------
        MaterialError
            The curve is not strictly monotone, is a step curve, or never has the value y.
        """
        rise = np.diff(self.y)
        rising = bool(np.all(rise > 0.0))
        if self.rule == "step" or rise.size == 0 or not (rising or np.all(rise < 0.0)):
            raise MaterialError("only a strictly rising or falling curve can be inverted")
        sign = 1.0 if rising else -1.0
        target = sign * np.asarray(y, dtype=np.float64)
        values = sign * self.y
        if np.any(target < values[0]) or np.any(target > values[-1]):
            raise MaterialError(f"the curve only has values from {self.y.min():g} to {self.y.max():g}")
        if self.rule == "linear":
            return np.asarray(np.interp(target, values, self.x))
        i = np.clip(np.searchsorted(values, target, side="right") - 1, 0, rise.size - 1)
        low, high = self.x[i], self.x[i + 1]
        for _ in range(60):  # halves the bracket down to the last bit of a double
            middle = 0.5 * (low + high)
            below = sign * self(middle) < target
            low, high = np.where(below, middle, low), np.where(below, high, middle)
        return np.asarray(0.5 * (low + high))

    def _locate(self, x: npt.ArrayLike) -> tuple[Array, Array, npt.NDArray[np.intp]]:
        """Coefficients of the piece, distance from its left point, index of the piece."""
        q = np.asarray(x, dtype=np.float64)
        if self.end == "refuse":
            outside = q[(q < self.x[0]) | (q > self.x[-1])]
            if outside.size:
                raise MaterialError(f"{outside[0]:g} is outside {self.x[0]:g} to {self.x[-1]:g}")
        q = np.clip(q, self.x[0], self.x[-1])
        i = np.clip(np.searchsorted(self._knots, q, side="right") - 1, 0, self._poly.shape[1] - 1)
        return self._poly[:, i], q - self._knots[i], i

    def _primitive(self, x: npt.ArrayLike) -> Array:
        c, t, i = self._locate(x)
        inside = self._area[i] + t * (c[0] + t * (c[1] / 2 + t * (c[2] / 3 + t * c[3] / 4)))
        q = np.asarray(x, dtype=np.float64)
        held = self.y[0] * np.minimum(q - self.x[0], 0.0) + self.y[-1] * np.maximum(q - self.x[-1], 0.0)
        return np.asarray(inside + held)


def _frozen(values: npt.ArrayLike) -> Array:
    """Copy as a read-only float array."""
    copy = np.array(values, dtype=np.float64)
    copy.flags.writeable = False
    return copy


def _monotone_slopes(h: Array, secant: Array) -> Array:
    """Point slopes that keep a cubic between its data, after Fritsch and Butland 1984.

    h, secant : (k-1,) widths and slopes of the pieces -> (k,) ; weighted harmonic mean of the neighbouring
    secants, zero at an extremum; at the ends the three-point formula, limited so that the shape is kept.
    """
    if h.size == 1:
        return np.repeat(secant, 2)
    slopes = np.zeros(h.size + 1)
    same = secant[:-1] * secant[1:] > 0.0
    w1, w2 = 2.0 * h[1:] + h[:-1], h[1:] + 2.0 * h[:-1]
    slopes[1:-1][same] = (w1 + w2)[same] / (w1[same] / secant[:-1][same] + w2[same] / secant[1:][same])
    for end, first, second in ((0, 0, 1), (-1, -1, -2)):
        s0, s1 = secant[first], secant[second]
        slope = ((2.0 * h[first] + h[second]) * s0 - h[first] * s1) / (h[first] + h[second])
        if slope * s0 <= 0.0:
            slope = 0.0
        elif s0 * s1 <= 0.0 and abs(slope) > 3.0 * abs(s0):
            slope = 3.0 * s0
        slopes[end] = slope
    return slopes
