"""Grey radiation: to large surroundings, to a closed wall around the workpiece, out of the bore of a tube."""

from dataclasses import dataclass
from math import sqrt

from thermal.boundary.emissivity import Emissivity
from thermal.boundary.table import by_face, constant_law
from thermal.constants import STEFAN_BOLTZMANN
from thermal.interfaces import Real


def exchange_factor(e1: Real, e2: Real | float, area_ratio: float) -> tuple[Real, Real, Real]:
    """Emissivity that counts between a surface and the wall that encloses it, and its slopes with e1 and e2.

    1 / (1/e1 + (A1/A2) (1/e2 - 1)), diffuse grey surfaces: concentric cylinders with A1/A2 = R1/R2, parallel
    planes with 1, large surroundings with 0. e2 above 0. Source: Bergman et al., Fundamentals of Heat and
    Mass Transfer, 7th ed., Table 13.3.
    """
    below = 1 + e1 * (area_ratio * (1 / e2 - 1))
    e = e1 / below
    return e, 1 / (below * below), area_ratio * (e / e2) * (e / e2)


@dataclass(frozen=True, eq=False)
class Radiation:
    """Radiation q = e sigma (T^4 - Ta^4) from a convex surface.

    Parameters
    ----------
    name : account the loss is booked to. emissivity : of the workpiece's surface.
    T_surroundings : [K] of the surroundings, or of the wall that encloses the workpiece.
    area_ratio : workpiece area over wall area [-], 0 for large surroundings. wall_emissivity : [-].
    """

    name: str
    emissivity: Emissivity
    T_surroundings: float
    area_ratio: float = 0.0
    wall_emissivity: float = 1.0

    def flux(self, T_surface: Real, T_peak: Real) -> tuple[Real, Real]:
        """Flux (s,) [W/m2] and slope (s,) [W/(m2 K)] at T_surface, hottest so far T_peak (s,) [K]."""
        return by_face(self._exchange, T_surface, T_peak)

    def _exchange(self, T: Real, T_peak: Real) -> tuple[Real, Real]:
        e1, e1_slope = self.emissivity.at(T, T_peak)
        e, with_e1, _ = exchange_factor(e1, self.wall_emissivity, self.area_ratio)
        cube = T * T * T
        black = STEFAN_BOLTZMANN * (T * cube - self.T_surroundings**4)
        return e * black, 4 * STEFAN_BOLTZMANN * e * cube + with_e1 * e1_slope * black


def bare_coil_radiation(
    name: str,
    emissivity: Emissivity,
    T_coil: float,
    area_ratio: float,
    coil_emissivity: float,
) -> Radiation:
    """Radiation from the workpiece to the bore of a coil without a lining.

    The coil is taken as a closed wall at the temperature of its cooling water T_coil [K] (the gaps between
    the turns are not seen); area_ratio = R1/R2 of a round workpiece in a round coil, 1 for a plate.
    Convection to the gas of the room is a loss of its own beside this one, since a bare coil is open to the
    room.
    """
    return Radiation(name, emissivity, T_coil, area_ratio, coil_emissivity)


def bore_radiation(name: str, radius: float, length: float, T_surroundings: float) -> Radiation:
    """Radiation out of the two open ends of a tube's bore, per m2 of bore. Leave it out where ends touch.

    radius, length : [m]. A bore of one temperature sees mostly itself and acts as a black body in its
    openings: 2 pi r^2 (1 - F) sigma (T^4 - Ta^4) leaves in all, F being the view factor from one opening to
    the other, which matters in rings (F = 0.01 at length = 10 radii, 0.38 at 1). Upper bound for a bright
    bore in a short ring. Convection in the bore is left out.
    Source: Bergman et al., 7th ed., Table 13.2, coaxial parallel disks (F); of all proportions, since
    (r / length) (1 - F) = 2 / (y + sqrt(y^2 + 4)) with y = length / r loses no digits.
    """
    y = length / radius
    return Radiation(name, Emissivity(constant_law(2 / (y + sqrt(y * y + 4))), False), T_surroundings)
