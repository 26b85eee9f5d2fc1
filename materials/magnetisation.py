"""Magnetisation laws at 20 °C and their first harmonic in a sinusoidal field."""

from dataclasses import dataclass
from typing import Protocol

import numpy as np
import numpy.typing as npt

from materials.curve import Array

MU_0 = 1.25663706212e-6
"""Magnetic constant [H/m]; CODATA 2018."""

_ANGLES = 256


class Law(Protocol):
    """Magnetisation of a virgin material in a rising field."""

    @property
    def initial_susceptibility(self) -> float:
        """Limit of M/H for H towards zero [-]."""
        ...

    def __call__(self, H: npt.ArrayLike) -> Array:
        """Magnetisation M [A/m] at H >= 0 [A/m]."""
        ...


@dataclass(frozen=True, slots=True)
class FroehlichKennelly:
    """M = (Js/mu0) H/(H + H_k); O. Froehlich 1881, A. E. Kennelly 1891, see Bozorth 1951.

    saturation : polarisation Js [T] ; H_k : field of half saturation [A/m].
    """

    saturation: float
    H_k: float

    @property
    def initial_susceptibility(self) -> float:
        """Limit of M/H for H towards zero [-]."""
        return self.saturation / MU_0 / self.H_k

    def __call__(self, H: npt.ArrayLike) -> Array:
        """Magnetisation [A/m] at H >= 0 [A/m]."""
        h = np.asarray(H, dtype=np.float64)
        return np.asarray(self.saturation / MU_0 * h / (h + self.H_k))


@dataclass(frozen=True, eq=False)
class NormalCurve:
    """Measured normal curve, J = B - mu0 H linear in log H.

    H : (k,) rising, above zero [A/m] ; B : (k,) [T] ; initial_susceptibility : at H towards zero.
    Beyond the last point J is constant. Below the first the susceptibility runs linearly from its initial
    value (Rayleigh's law), so the curve has no jump there.
    """

    H: Array
    B: Array
    initial_susceptibility: float

    def __call__(self, H: npt.ArrayLike) -> Array:
        """Magnetisation [A/m] at H >= 0 [A/m]."""
        h = np.asarray(H, dtype=np.float64)
        M = self.B / MU_0 - self.H
        measured = np.interp(np.log(np.maximum(h, self.H[0])), np.log(self.H), M)
        rise = (M[0] / self.H[0] - self.initial_susceptibility) / self.H[0]
        return np.asarray(np.where(h < self.H[0], (self.initial_susceptibility + rise * h) * h, measured))


def describing_function(law: Law, H_peak: Array) -> Array:
    """Susceptibility seen by the first harmonic of a sinusoidal field.

    (4 / (pi H)) times the integral of M(H sin a) sin a over a quarter cycle: the part of M in phase with H,
    of a law without hysteresis. Midpoint rule in the angle, exact to 1e-5 for the laws here.

    Parameters
    ----------
    law : Law
        Magnetisation of the material.
    H_peak : (k,) [A/m]
        Peak (not rms) amplitudes, above zero.
    """
    sine = np.sin((np.arange(_ANGLES) + 0.5) * (np.pi / 2.0 / _ANGLES))
    M = law(H_peak[:, None] * sine)
    return np.asarray(2.0 * (M * sine).mean(axis=1) / H_peak)
