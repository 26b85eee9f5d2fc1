"""The lining of a coil: a refractory sleeve between the hot workpiece and the water-cooled bore.

The heat crosses the gap by radiation and by conduction in its still gas, then the lining by conduction, in
one dimension and quasi-steady (the lining stores nothing). Both conductions use the integral of the
conductivity between their two temperatures, the exact steady answer for a conductivity that varies, rather
than its value at a mean temperature.
"""

from dataclasses import dataclass
from math import log

from materials.gas import Gas
from materials.property import Property
from thermal.boundary.emissivity import Emissivity
from thermal.boundary.radiation import exchange_factor
from thermal.boundary.table import Law, by_face, law_of, pick
from thermal.constants import STEFAN_BOLTZMANN
from thermal.errors import CaseError, NoConvergence
from thermal.interfaces import Real

_SETTLED = 1e-7  # [K] last Newton step; the error left is its square times a curvature below 0.01/K
_MOST = 60


@dataclass(frozen=True, eq=False)
class LiningLoss:
    """Flux from the workpiece through gap and lining to the coil.

    Parameters
    ----------
    name : account the loss is booked to; the heat ends in the cooling water of the coil.
    emissivity : of the workpiece. lining_emissivity : [-] of the lining's hot face, against temperature.
    gas, lining : conductivity [W/(m K)] of the gas in the gap and of the lining.
    area_ratio : workpiece area over area of the lining's hot face [-].
    gap, wall : [m] paths through gap and lining referred to the workpiece's area: thicknesses when flat,
        R1 ln(R2/R1) and R1 ln(R3/R2) when round. A wall of 0 puts the hot face at T_coil.
    T_coil : [K] of the coil's bore.
    """

    name: str
    emissivity: Emissivity
    lining_emissivity: Law
    gas: Law
    lining: Law
    area_ratio: float
    gap: float
    wall: float
    T_coil: float

    def flux(self, T_surface: Real, T_peak: Real) -> tuple[Real, Real]:
        """Flux (s,) [W/m2] and slope (s,) [W/(m2 K)] at T_surface, hottest so far T_peak (s,) [K].

        Errors: OutOfRange beyond the data of gas, lining or emissivity.
        """
        return by_face(self._through, T_surface, T_peak)

    def _through(self, T: Real, T_peak: Real) -> tuple[Real, Real]:
        e1, e1_slope = self.emissivity.at(T, T_peak)
        T2 = self._hot_face(T, e1)
        e2, e2_slope = self.lining_emissivity.at(T2)
        e, with_e1, with_e2 = exchange_factor(e1, e2, self.area_ratio)
        (k1, _), (k2, _), (k_lining, _) = self.gas.at(T), self.gas.at(T2), self.lining.at(T2)
        cube, cube2 = STEFAN_BOLTZMANN * T * T * T, STEFAN_BOLTZMANN * T2 * T2 * T2
        black = cube * T - cube2 * T2
        q = e * black + (self.gas.integral(T)[0] - self.gas.integral(T2)[0]) / self.gap
        with_T = 4 * e * cube + with_e1 * e1_slope * black + k1 / self.gap
        with_T2 = 4 * e * cube2 - with_e2 * e2_slope * black + k2 / self.gap
        return q, with_T * k_lining / (k_lining + self.wall * with_T2)

    def _hot_face(self, T: Real, e1: Real) -> Real:
        """Temperature [K] of the lining's hot face, where the lining carries off what the gap brings.

        Newton on carried minus brought, which rises with T2, kept between the workpiece and the coil.
        """
        coil, hotter = 0 * T + self.T_coil, T > self.T_coil
        low, high = pick(hotter, coil, T), pick(hotter, T, coil)
        carried_from = self.lining.integral(self.T_coil)[0]
        gas_from, emitted = self.gas.integral(T)[0], STEFAN_BOLTZMANN * T * T * T * T
        T2 = high
        for _ in range(_MOST):
            e2, e2_slope = self.lining_emissivity.held(T2)
            e, _, with_e2 = exchange_factor(e1, e2, self.area_ratio)
            cube = STEFAN_BOLTZMANN * T2 * T2 * T2
            black = emitted - cube * T2
            gas_to, k2 = self.gas.integral(T2)
            carried, k_lining = self.lining.integral(T2)
            brought = e * black + (gas_from - gas_to) / self.gap
            excess = carried - carried_from - self.wall * brought
            slope = k_lining + self.wall * (4 * e * cube - with_e2 * e2_slope * black + k2 / self.gap)
            above = excess > 0
            low, high = pick(above, low, T2), pick(above, T2, high)
            next_T2 = T2 - excess / slope
            next_T2 = pick((next_T2 < low) | (next_T2 > high), (low + high) / 2, next_T2)
            moved = abs(next_T2 - T2)
            T2 = next_T2
            if (moved if isinstance(moved, float) else moved.max()) < _SETTLED:
                return T2
        raise NoConvergence(f"{self.name}: the hot face of the lining was not found in {_MOST} iterations")


def round_lining(
    name: str,
    emissivity: Emissivity,
    gas: Gas,
    conductivity: Property | float,
    lining_emissivity: Property | float,
    radii: tuple[float, float, float],
    T_coil: float,
) -> LiningLoss:
    """Lining of a round coil round a cylinder.

    emissivity : of the workpiece. conductivity : [W/(m K)] of the lining. lining_emissivity : [-].
    radii : [m] of the workpiece, of the lining's hot face, of the coil's bore. T_coil : [K].
    Errors: CaseError where the radii leave no gap or cross; OutOfRange where T_coil is beyond the data.
    """
    R1, R2, R3 = radii
    if not R1 < R2 <= R3:
        raise CaseError(
            f"{name}: the radii of workpiece, lining and coil bore must grow outwards, "
            f"read {1e3 * R1:g}, {1e3 * R2:g} and {1e3 * R3:g} mm"
        )
    paths = R1 * log(R2 / R1), R1 * log(R3 / R2)
    return _lining(name, emissivity, gas, conductivity, lining_emissivity, R1 / R2, paths, T_coil)


def flat_lining(
    name: str,
    emissivity: Emissivity,
    gas: Gas,
    conductivity: Property | float,
    lining_emissivity: Property | float,
    gap: float,
    thickness: float,
    T_coil: float,
) -> LiningLoss:
    """Lining beside the broad face of a plate: parallel planes.

    gap, thickness : [m] of gas and of lining; the rest as for ``round_lining``.
    Errors: CaseError where there is no gap; OutOfRange where T_coil is beyond the data.
    """
    if not (gap > 0 and thickness >= 0):
        raise CaseError(
            f"{name}: the gap must be wider than zero and the lining not thinner than zero, "
            f"read {1e3 * gap:g} and {1e3 * thickness:g} mm"
        )
    return _lining(name, emissivity, gas, conductivity, lining_emissivity, 1.0, (gap, thickness), T_coil)


def _lining(
    name: str,
    emissivity: Emissivity,
    gas: Gas,
    conductivity: Property | float,
    lining_emissivity: Property | float,
    area_ratio: float,
    paths: tuple[float, float],
    T_coil: float,
) -> LiningLoss:
    still_gas = law_of(gas.conductivity, f"{name}: conductivity of {gas.title}")
    lining = law_of(conductivity, f"{name}: conductivity of the lining")
    lining.at(T_coil)
    e2 = law_of(lining_emissivity, f"{name}: emissivity of the lining")
    return LiningLoss(name, emissivity, e2, still_gas, lining, area_ratio, *paths, T_coil)
