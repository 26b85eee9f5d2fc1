"""Inductance of air-core coils."""

import math

from scipy.special import ellipe, ellipk

from thermal.constants import MU_0


def nagaoka(diameter_over_length: float) -> float:
    """Ratio of the inductance of a cylindrical current sheet to that of the same length of an endless one.

    Lorenz's closed form with complete elliptic integrals; H. Nagaoka, J. Coll. Sci. Tokyo 27 (1909) art. 6,
    tabulates it (p. 31). For every proportion: below 1e-3 and above 1e3, where the closed form loses its digits, the
    first terms of its series (above: Rayleigh and Niven's, from memory), which join it within 1e-10.

    Parameters
    ----------
    diameter_over_length : [-], > 0.

    >>> round(nagaoka(1.0), 6)
    0.688423
    """
    if not diameter_over_length > 0.0:
        raise ValueError("diameter over length must be positive")
    if diameter_over_length > 1e3:
        logarithm = math.log(4.0 * diameter_over_length)
        small = (logarithm + 0.25) / (8.0 * diameter_over_length**2)
        return 2.0 / (math.pi * diameter_over_length) * (logarithm - 0.5 + small)
    m = diameter_over_length**2 / (1.0 + diameter_over_length**2)
    if m < 1e-6:  # series: the closed form cancels for very long coils
        return 1.0 - 4.0 / (3.0 * math.pi) * diameter_over_length + diameter_over_length**2 / 8.0
    k = math.sqrt(m)
    kk, ee = float(ellipk(m)), float(ellipe(m))
    return 4.0 / (3.0 * math.pi * math.sqrt(1.0 - m)) * ((1.0 - m) / m * kk + (2.0 * m - 1.0) / m * ee - k)


def current_sheet_inductance(turns: float, diameter: float, length: float) -> float:
    """Inductance [H] of a single-layer coil taken as a uniform current sheet of that diameter and length [m]."""
    section = math.pi / 4.0 * diameter**2
    return MU_0 * turns**2 * section / length * nagaoka(diameter / length)
