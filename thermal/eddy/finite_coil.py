"""A coil of finite length around a one-dimensional section: from coil current to field and back to impedance.

The flux path is split in two reluctances: inside the bore (workpiece and gap, plus the empty part of the bore where
the workpiece is shorter than the coil) and outside. The outside one is fixed by the air coil: Nagaoka's factor K
gives R_e = (1/K - 1) l/(mu_0 A_bore). The result is an average over the length of the workpiece.
"""

import math
from dataclasses import dataclass, field

import numpy as np
import numpy.typing as npt

from thermal.constants import MU_0
from thermal.eddy.cell_mean import CellMean
from thermal.eddy.exact import skin_depth
from thermal.eddy.radial import Magnetics, Profile, RadialSolver
from thermal.errors import NoConvergence
from thermal.geometry.mesh import Mesh
from thermal.interfaces import EddyField, FieldOf, PropertyOf

Array = npt.NDArray[np.float64]


STEEPNESS = (0.7, 2.0)
"""Power of mu_r - 1 with which the heat of a cell is taken to go, for the matrix of a step only, in a section thick and
thin against the skin depth: a half and two for uniform properties. Stalls on the Curie point need about this much, and
more costs steps on the way."""


@dataclass(frozen=True)
class FluxPath:
    """The coil as the workpiece meets it.

    turns ; length : [m] of the coil ; bore_area : [m2] up to the current sheet ; nagaoka : K of that sheet ;
    filled : [m] length of the bore that holds metal ; enclosed : [m2] inside the outer surface of the workpiece, a
    bore included ; perimeter : [m] of that surface.
    """

    turns: float
    length: float
    bore_area: float
    nagaoka: float
    filled: float
    enclosed: float
    perimeter: float

    def flux_area(self, impedance: complex, frequency: float) -> complex:
        """Flux per mu_0 H [m2] through the filled part of the bore at a surface impedance E/H [ohm]."""
        return self.bore_area - self.enclosed + self.perimeter * impedance / (2j * math.pi * frequency * MU_0)

    def reluctance(self, flux_area: complex) -> complex:
        """Reluctance of the whole path [1/H]."""
        inside = self.filled / (MU_0 * flux_area) + (self.length - self.filled) / (MU_0 * self.bore_area)
        outside = (1.0 / self.nagaoka - 1.0) * self.length / (MU_0 * self.bore_area)
        return inside + outside

    def field_per_ampere(self, impedance: complex, frequency: float) -> complex:
        """Surface field per coil current [1/m], a mean over the filled length."""
        area = self.flux_area(impedance, frequency)
        return self.turns / (MU_0 * area * self.reluctance(area))

    def coil_impedance(self, impedance: complex, frequency: float) -> complex:
        """Impedance [ohm] at the coil terminals of flux and workpiece, without the copper."""
        reluctance = self.reluctance(self.flux_area(impedance, frequency))
        return 2j * math.pi * frequency * self.turns**2 / reluctance


@dataclass(frozen=True)
class SectionSource:
    """Heat source of a section in an axial field (plays the HeatSource role).

    Parameters
    ----------
    mesh, resistivity, magnetics : the workpiece.
    solver : of the field, on that mesh or on one with every cell cut into equal parts.
    path : the coil around it, or None where the surface field itself is the excitation.
    """

    mesh: Mesh
    solver: RadialSolver
    resistivity: PropertyOf
    magnetics: Magnetics
    path: FluxPath | None
    _factor: PropertyOf = field(init=False, repr=False)
    _parts: int = field(init=False, repr=False)

    def __post_init__(self) -> None:
        curie, law = self.magnetics.curie_temperature, self.magnetics.factor
        object.__setattr__(self, "_factor", law if curie is None else CellMean(self.solver.mesh, law, curie))
        object.__setattr__(self, "_parts", self.solver.mesh.r.size // self.mesh.r.size)

    def at(self, T: Array) -> FieldOf:
        """Field as a function of excitation and frequency at cell temperatures T (n,) [K].

        The excitation is the coil current, or without a coil the surface field; rms.
        """
        if self._parts > 1:
            T = straight(self.solver.mesh.r, self.mesh.r, T)
        resistivity = self.resistivity(T)
        if not np.isfinite(resistivity).all():
            raise NoConvergence("the resistivity of the workpiece is not a number")
        factor = self._factor(T)
        # A section without permeability left responds in proportion: one solve serves every excitation.
        proportional = self.magnetics.linear or not factor.any()
        known: dict[float, Profile] = {}
        losing = None if proportional else self._losing(T, factor)

        def field_of(excitation: float, frequency: float, guess: EddyField | None) -> EddyField:
            if proportional and frequency in known:
                profile, solves = known[frequency], 0
                H_surface = self._surface_field(profile.impedance, excitation, frequency)
            else:
                if guess is None or proportional:
                    start = self._first_mu(factor, excitation)
                else:
                    start = guess.mu_r
                profile, H_surface, solves = self.solver.settled(
                    resistivity,
                    self.magnetics,
                    factor,
                    frequency,
                    lambda impedance: self._surface_field(impedance, excitation, frequency),
                    start,
                )
                known[frequency] = profile
            heat = profile.heat * H_surface**2
            fall = (
                None
                if losing is None
                else self._gathered(
                    heat * (1.0 - 1.0 / profile.mu_r) * losing * self._steepness(resistivity, profile, frequency)
                )
            )
            heat = self._gathered(heat)
            power = float(heat @ self.mesh.volume)
            if not 0.0 <= power < math.inf:
                # Below zero by rounding: what is absorbed is lost in the digits of what flows in and out again.
                raise NoConvergence("the power in the workpiece is below zero or no number")
            at_terminals = self.path.coil_impedance(profile.impedance, frequency) if self.path else 0j
            return EddyField(heat, power, at_terminals, H_surface, profile.mu_r, solves, fall)

        return field_of

    def _steepness(self, resistivity: Array, profile: Profile, frequency: float) -> Array:
        edges = self.mesh.edges
        depth = skin_depth(resistivity, frequency, profile.mu_r)
        thick, thin = STEEPNESS
        return np.asarray(thick + (thin - thick) / (1.0 + ((edges[-1] - edges[0]) / (2.0 * depth)) ** 2))

    def _losing(self, T: Array, factor: Array) -> Array | None:
        """Relative fall of the susceptibility with temperature [1/K] in the solver's cells, where it falls."""
        if not isinstance(self._factor, CellMean):
            return None
        return np.maximum(-self._factor.slope(T), 0.0) / np.maximum(factor, 1e-3)

    def _gathered(self, density: Array) -> Array:
        """A density (per volume) of the solver's cells as that of the cells of the workpiece."""
        if self._parts == 1:
            return density
        whole = (density * self.solver.mesh.volume).reshape(-1, self._parts).sum(axis=1)
        return np.asarray(whole / self.mesh.volume)

    def _surface_field(self, impedance: complex, excitation: float, frequency: float) -> float:
        if self.path is None:
            return excitation
        return abs(self.path.field_per_ampere(impedance, frequency)) * excitation

    def _first_mu(self, factor: Array, excitation: float) -> Array:
        H = excitation * (self.path.turns / self.path.length if self.path else 1.0)
        peak = np.full(factor.shape, math.sqrt(2.0) * H)
        return np.asarray(1.0 + factor * self.magnetics.effective_susceptibility(peak))


def straight(r: Array, centres: Array, T: Array) -> Array:
    """Temperatures at r, straight between the cell centres, on to the outer surface, level to the inner end."""
    found = np.interp(r, centres, T)
    outside = r > centres[-1]
    slope = (T[-1] - T[-2]) / (centres[-1] - centres[-2])
    found[outside] = T[-1] + slope * (r[outside] - centres[-1])
    return found
