"""Convection to a gas: a constant coefficient, or one tabulated once from the published correlations.

Free and forced convection together: h^3 = h_free^3 + h_forced^3, a smooth larger-of-the-two (assisting or
transverse flow; Bergman et al., Fundamentals of Heat and Mass Transfer, 7th ed., eq. 9.64, there in Nusselt
numbers of one length).
"""

from collections.abc import Callable
from dataclasses import dataclass
from functools import partial
from typing import Literal

import numpy as np

from materials.gas import Gas
from thermal.boundary.correlations import (
    CYLINDER_RAYLEIGH,
    PLATE_RAYLEIGH,
    PLATE_REYNOLDS,
    cylinder_in_cross_flow,
    horizontal_cylinder,
    plate_in_parallel_flow,
    vertical_cylinder,
    vertical_plate,
)
from thermal.boundary.table import Law, by_face, constant_law
from thermal.constants import GRAVITY, ZERO_CELSIUS
from thermal.errors import OutOfRange
from thermal.interfaces import Array, Real

Coefficient = Callable[[Array], Array]
Nusselt = Callable[[Array, Array], Array]

_CLOSEST = 1e-6  # [K] first node beside the surroundings
_EVEN_FROM = 100.0  # [K] up to here nodes are even in log |T - Ta|, for the steep start of free convection
_GROWTH = 800  # number of those
_STEP = 2.0  # [K] from there on, for the kinks of a gas table
_COLDEST = 20.0  # [K] no workpiece starts colder


@dataclass(frozen=True, eq=False)
class Convection:
    """Convection q = h(T) (T - Ta).

    Parameters
    ----------
    name : account the loss is booked to. T_surroundings : [K] of the gas far away.
    coefficient : h [W/(m2 K)] against surface temperature; ends where the gas table or a correlation ends.
    """

    name: str
    T_surroundings: float
    coefficient: Law

    def flux(self, T_surface: Real, T_peak: Real) -> tuple[Real, Real]:
        """Flux (s,) [W/m2] and slope (s,) [W/(m2 K)] at T_surface (s,) [K]. Errors: OutOfRange."""
        return by_face(self._exchange, T_surface, T_peak)

    def _exchange(self, T: Real, T_peak: Real) -> tuple[Real, Real]:
        h, h_slope = self.coefficient.at(T)
        excess = T - self.T_surroundings
        return h * excess, h + h_slope * excess


def constant_convection(name: str, h: float, T_surroundings: float) -> Convection:
    """Convection with a given h [W/(m2 K)] to T_surroundings [K]."""
    return Convection(name, T_surroundings, constant_law(h))


def cylinder_convection(
    name: str,
    gas: Gas,
    T_surroundings: float,
    diameter: float,
    length: float,
    axis: Literal["horizontal", "vertical"],
    speed: float = 0.0,
) -> Convection:
    """Convection from the side of a cylinder.

    T_surroundings : [K]. diameter, length : [m]. speed : [m/s] of a flow across the axis, 0 for none.
    With the axis vertical the side is a vertical plate as high as the cylinder is long, corrected for its curvature.
    Errors: OutOfRange where the gas table or a correlation does not reach the surroundings.
    """
    if axis == "horizontal":
        free = free_coefficient(gas, T_surroundings, diameter, horizontal_cylinder, CYLINDER_RAYLEIGH)
    else:
        side = partial(vertical_cylinder, slenderness=length / diameter)
        free = free_coefficient(gas, T_surroundings, length, side, PLATE_RAYLEIGH)
    forced = forced_coefficient(gas, T_surroundings, diameter, speed, cylinder_in_cross_flow)
    return _tabulated(name, gas, T_surroundings, free, forced, speed)


def plate_convection(name: str, gas: Gas, T_surroundings: float, height: float, speed: float = 0.0) -> Convection:
    """Convection from a flat face taken as upright, with any flow running along it over the same length.

    T_surroundings : [K]. height : [m]. speed : [m/s], 0 for none. For the end faces of a cylinder the
    height is the diameter: a fair estimate with the axis horizontal, a rough one with the axis vertical,
    where one face looks up and one down. Errors: OutOfRange as for ``cylinder_convection``.
    """
    free = free_coefficient(gas, T_surroundings, height, vertical_plate, PLATE_RAYLEIGH)
    forced = forced_coefficient(gas, T_surroundings, height, speed, plate_in_parallel_flow, PLATE_REYNOLDS[0])
    return _tabulated(name, gas, T_surroundings, free, forced, speed)


def free_coefficient(
    gas: Gas, T_surroundings: float, size: float, nusselt: Nusselt, range_of_Ra: tuple[float, float]
) -> Coefficient:
    """Free convection h(T_surface) straight from a correlation in (Ra, Pr), size [m] its length.

    Below the lowest Ra of the correlation, a small part of a kelvin from the surroundings for a workpiece,
    its Nusselt number is held.
    """

    def h(T: Array) -> Array:
        film = (T + T_surroundings) / 2
        nu, Pr = gas.kinematic_viscosity(film), gas.prandtl(film)
        Ra = GRAVITY * gas.expansion(film) * np.abs(T - T_surroundings) * size**3 * Pr / (nu * nu)
        return nusselt(np.maximum(Ra, range_of_Ra[0]), Pr) * gas.conductivity(film) / size

    return h


def forced_coefficient(
    gas: Gas, T_surroundings: float, size: float, speed: float, nusselt: Nusselt, lowest_Re: float = 0.0
) -> Coefficient:
    """Forced convection h(T_surface) straight from a correlation in (Re, Pr), size [m] its length.

    Below the lowest Re of the correlation its Nusselt number is held, an upper estimate beside free convection.
    """

    def h(T: Array) -> Array:
        film = (T + T_surroundings) / 2
        Re = speed * size / gas.kinematic_viscosity(film)
        return nusselt(np.maximum(Re, lowest_Re), gas.prandtl(film)) * gas.conductivity(film) / size

    return h


def _tabulated(
    name: str, gas: Gas, T_surroundings: float, free: Coefficient, forced: Coefficient, speed: float
) -> Convection:
    def together(T: Array) -> Array:
        if speed == 0:
            return free(T)
        return np.cbrt(free(T) ** 3 + forced(T) ** 3)

    low, high = gas.T_min - ZERO_CELSIUS, gas.T_max - ZERO_CELSIUS
    end = f"{name}: {gas.title} is tabulated from {low:.0f} to {high:.0f} °C (mean of surface and gas)"
    if not gas.T_min < T_surroundings < gas.T_max:
        raise OutOfRange(f"{end}, the surroundings are at {T_surroundings - ZERO_CELSIUS:.0f} °C")
    coldest = max(2 * gas.T_min - T_surroundings, _COLDEST)
    under, below = _nodes(name, together, T_surroundings, coldest, end)
    over, above = _nodes(name, together, T_surroundings, 2 * gas.T_max - T_surroundings, end)
    T = np.concatenate([under[::-1], [T_surroundings], over])
    return Convection(name, T_surroundings, Law(T, together(T), below, above))


def _nodes(name: str, coefficient: Coefficient, near: float, far: float, end: str) -> tuple[Array, str]:
    """Nodes [K] from near towards far, as far as the coefficient holds, and the sentence for beyond."""
    furthest = abs(far - near) * (1 - 1e-9)  # rounding must not put the film past the end of the gas table
    even_from = min(_EVEN_FROM, furthest / 2)
    even = np.linspace(even_from, furthest, int((furthest - even_from) / _STEP) + 2)
    distance = np.concatenate([np.geomspace(_CLOSEST, even_from, _GROWTH), even[1:]])
    T = near + np.copysign(distance, far - near)
    try:
        coefficient(T)
    except OutOfRange as error:
        reason = str(error)
    else:
        return T, end
    holds, fails = 0, T.size
    while fails - holds > 1:
        middle = (holds + fails) // 2
        try:
            coefficient(T[:middle])
        except OutOfRange:
            fails = middle
        else:
            holds = middle
    if holds == 0:
        raise OutOfRange(f"{name}: {reason}")
    limit = T[holds - 1] - ZERO_CELSIUS
    return T[:holds], f"{name}: not known for a surface beyond {limit:.0f} °C ({reason})"
