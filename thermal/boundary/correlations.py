"""Published mean Nusselt numbers of free and forced convection, each within its published range.

Properties at film temperature, the mean of surface and gas. Arrays or numbers in, the same shape out.
Errors: OutOfRange beyond the range that stands in the docstring.
"""

import numpy as np

from thermal.errors import OutOfRange
from thermal.interfaces import Array

CYLINDER_RAYLEIGH = (1e-5, 1e12)
PLATE_RAYLEIGH = (1e-1, 1e12)
PLATE_REYNOLDS = (10.0, 1e7)
MOST_CURVED = 5.0


def horizontal_cylinder(Ra: Array, Pr: Array) -> Array:
    """Free convection round a long horizontal cylinder, length scale the diameter.

    Range: Ra 1e-5 to 1e12, all Pr.
    Source: Churchill & Chu 1975, Int. J. Heat Mass Transfer 18:1049-1053; upper limit Bergman et al.,
    Fundamentals of Heat and Mass Transfer, 7th ed., eq. 9.34.
    """
    _within("free convection round a horizontal cylinder", "the Rayleigh number", Ra, *CYLINDER_RAYLEIGH)
    return _churchill_chu(Ra, Pr, 0.60, 0.559)


def vertical_plate(Ra: Array, Pr: Array) -> Array:
    """Free convection along a vertical plate, length scale the height, laminar and turbulent.

    Range: Ra 0.1 to 1e12, all Pr.
    Source: Churchill & Chu 1975, Int. J. Heat Mass Transfer 18:1323-1329; Bergman et al., 7th ed., eq. 9.26.
    """
    _within("free convection along a vertical plate", "the Rayleigh number", Ra, *PLATE_RAYLEIGH)
    return _churchill_chu(Ra, Pr, 0.825, 0.492)


def vertical_cylinder(Ra: Array, Pr: Array, slenderness: float) -> Array:
    """Free convection along the side of a vertical cylinder, length scale the height.

    slenderness : height over diameter. The vertical plate times 1 + B x^C with x = sqrt(32) Gr^-1/4 L/D, which is 1.05
    where D/L = 35 / Gr^1/4, up to where the plate alone is commonly taken (Bergman et al., 7th ed., section 9.6.1).
    Range: that of the plate, Pr 0.01 to 100, and x up to 5 (from memory), where the factor is held: a thinner rod loses
    more than this.
    Source: Popiel, Wojtkowiak & Bober 2007, Exp. Therm. Fluid Sci. 32:607-613, a fit to the laminar solution of Cebeci.
    """
    _within("free convection along a vertical cylinder", "the Prandtl number", Pr, 0.01, 100.0)
    x = np.minimum(32**0.5 * (Pr / Ra) ** 0.25 * slenderness, MOST_CURVED)
    B = 0.0571322 + 0.20305 * Pr**-0.43
    C = 0.9165 - 0.0043 * Pr**0.5 + 0.01333 * np.log(Pr) + 0.0004809 / Pr
    return np.asarray(vertical_plate(Ra, Pr) * (1 + B * x**C))


def cylinder_in_cross_flow(Re: Array, Pr: Array) -> Array:
    """Forced flow across a long cylinder, length scale the diameter.

    Range: Re Pr at least 0.2, Re up to 1e7.
    Source: Churchill & Bernstein 1977, J. Heat Transfer 99:300-306; Bergman et al., 7th ed., eq. 7.54.
    """
    what = "forced flow across a cylinder"
    _within(what, "the product of Reynolds and Prandtl number", Re * Pr, 0.2, np.inf)
    _within(what, "the Reynolds number", Re, 0.0, 1e7)
    laminar = 0.62 * Re**0.5 * Pr ** (1 / 3) / (1 + (0.4 / Pr) ** (2 / 3)) ** 0.25
    return 0.3 + laminar * (1 + (Re / 282000) ** 0.625) ** 0.8


def plate_in_parallel_flow(Re: Array, Pr: Array) -> Array:
    """Forced flow along a flat plate, length scale its length, laminar to turbulent without a step.

    Root of the sum of squares of the laminar (Pohlhausen) and turbulent (Petukhov & Popov) means, for
    plates with the usual blunt edge and turbulence of the stream. Range: Re 10 to 1e7, Pr 0.6 to 2000.
    Source: Gnielinski 1975, Forsch. Ingenieurwes. 41:145-153; VDI Heat Atlas, 2nd ed. 2010, part G4.
    """
    what = "forced flow along a plate"
    _within(what, "the Reynolds number", Re, *PLATE_REYNOLDS)
    _within(what, "the Prandtl number", Pr, 0.6, 2000.0)
    laminar = 0.664 * Re**0.5 * Pr ** (1 / 3)
    turbulent = 0.037 * Re**0.8 * Pr / (1 + 2.443 * Re**-0.1 * (Pr ** (2 / 3) - 1))
    return np.hypot(laminar, turbulent)


def _churchill_chu(Ra: Array, Pr: Array, still: float, prandtl: float) -> Array:
    return (still + 0.387 * Ra ** (1 / 6) / (1 + (prandtl / Pr) ** (9 / 16)) ** (8 / 27)) ** 2


def _within(what: str, number: str, value: Array, low: float, high: float) -> None:
    outside = np.ravel(~((value >= low) & (value <= high)))  # what is no number is outside too
    if outside.any():
        worst = np.ravel(value)[outside][0]
        allowed = f"{low:.3g} or more" if high == np.inf else f"{low:.3g} to {high:.3g}"
        raise OutOfRange(f"{what}: {number} is {worst:.3g}, the correlation holds for {allowed}")
