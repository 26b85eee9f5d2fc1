"""The field across the section: one-dimensional, mu_r from field and temperature, any skin depth.

(1/r^m) d/dr (r^m rho dH/dr) = j w mu H with m = 1 (cylinder, tube) or 0 (plate), H axial. The unknown is H on
the faces of the thermal cells; each cell is the exact two-port of a layer of uniform rho and mu, its curvature
taken to first order ("exponentially fitted"): coth- and csch-shaped coefficients in place of the lumped ones.
"""

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Protocol

import numpy as np
import numpy.typing as npt
from scipy.linalg.lapack import zgtsv

from thermal.constants import MU_0
from thermal.errors import NoConvergence
from thermal.geometry.mesh import Mesh

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]

SOLVES_AT_MOST = 60
IMPEDANCE_TOLERANCE = 1e-5


class Magnetics(Protocol):
    """What the field needs of a material: mu_r(H_peak, T) = 1 + factor(T) susceptibility(H_peak)."""

    @property
    def linear(self) -> bool:
        """True where mu_r does not depend on the field."""
        ...

    @property
    def curie_temperature(self) -> float | None:
        """Temperature [K] from which factor is zero, None where there is none."""
        ...

    def factor(self, T: Array) -> Array:
        """Share of the saturation left at T [K]."""
        ...

    def effective_susceptibility(self, H_peak: Array) -> Array:
        """mu_r - 1 at 20 °C for a sinusoidal field of that peak amplitude [A/m]."""
        ...


@dataclass(frozen=True, slots=True)
class Profile:
    """Field across the section for a surface field of 1 A/m.

    H : (n + 1,) [-] phasors on the cell faces, the last one 1 ; impedance : E/H [ohm] at the outer surface ;
    heat : (n,) [W/m3] for 1 A/m rms ; mu_r : (n,).
    """

    H: ComplexArray
    impedance: complex
    heat: Array
    mu_r: Array


class RadialSolver:
    """Field solver bound to one mesh: cylinder, tube (coil outside, flux in the bore counted) or plate."""

    def __init__(self, mesh: Mesh) -> None:
        self.mesh = mesh
        edges = mesh.edges
        inner, outer = edges[:-1], edges[1:]
        self._minus_h = inner - outer
        if mesh.kind == "cylindrical":
            # As complex numbers: products of one kind are quicker than mixed ones.
            self._inner, self._outer = inner.astype(complex), outer.astype(complex)
            self._per_volume = 1.0 / (0.5 * (outer**2 - inner**2))
            self._surface = float(outer[-1])
            self._bore = 0.5j * MU_0 * float(inner[0]) ** 2
        else:
            self._inner = self._outer = np.ones_like(inner, dtype=complex)
            self._per_volume = 1.0 / (outer - inner)
            self._surface = 1.0
            self._bore = 0j
        self._curved = mesh.kind == "cylindrical"
        self._g_twice = self._inner + self._outer

    def profile(self, resistivity: Array, mu_r: Array, frequency: float) -> Profile:
        """Field for given cell properties.

        resistivity : (n,) [ohm m] ; mu_r : (n,) ; frequency : [Hz].

        Raises
        ------
        NoConvergence : the equations are singular (a property is not a number).
        """
        omega = 2.0 * math.pi * frequency
        per_depth = math.sqrt(0.5 * omega * MU_0) * np.sqrt(mu_r / resistivity)
        e = np.exp((1.0 + 1.0j) * (per_depth * self._minus_h))
        near = 1.0 - e
        scale = (1.0 + 1.0j) * (resistivity * per_depth) / (1.0 + e)
        # rho gamma csch(t) g and rho gamma tanh(t/2) with t = gamma h.
        k = scale * e * self._g_twice / near
        half = scale * near
        d_inner = half * self._inner
        d_outer = half * self._outer
        if self._curved:
            # rho gamma tanh(t/2) h phi/4 with phi = tanh(t/2)/(t/2): the bending of the layer, to first order.
            bend = half * half * ((-0.5j / (omega * MU_0)) / mu_r)
            d_inner += bend
            d_outer -= bend

        # Solve for the shortfall u = 1 - H/H_s: its right-hand side holds only the induced terms, so that weak
        # shielding (a << delta) keeps full relative accuracy.
        induced = d_inner.copy()
        induced[1:] += d_outer[:-1]
        induced[0] += omega * self._bore
        diagonal = induced + k
        diagonal[1:] += k[:-1]
        off = -k[:-1]
        *_, u, info = zgtsv(off, diagonal, off, induced)
        if info != 0:
            raise NoConvergence("the field equations of the section could not be solved (singular matrix)")
        H = np.empty(u.size + 1, dtype=np.complex128)
        np.subtract(1.0, u, out=H[:-1])
        H[-1] = 1.0
        drop = u.copy()
        drop[:-1] -= u[1:]
        # Faraday over the whole section: E at the surface is the sum of the induced terms.
        E_surface = complex(induced @ H[:-1] + d_outer[-1]) / self._surface
        square = H.real**2 + H.imag**2
        power = k.real * (drop.real**2 + drop.imag**2) + d_inner.real * square[:-1] + d_outer.real * square[1:]
        return Profile(H, E_surface, power * self._per_volume, mu_r)

    def settled(
        self,
        resistivity: Array,
        magnetics: Magnetics,
        factor: Array,
        frequency: float,
        surface_field: Callable[[complex], float],
        mu_r: Array,
    ) -> tuple[Profile, float, int]:
        """Field whose mu_r follows the local amplitude: fixed point, Anderson-accelerated, nothing damped.

        D. G. Anderson, J. ACM 12 (1965) 547, depth 1. Converged when no more
        than 1e-5 of the surface impedance can change.

        resistivity, factor : (n,), factor as Magnetics.factor(T) ; surface_field : impedance [ohm] -> H at the
        surface [A/m], rms (a constant, or what a coil makes of it) ; mu_r : (n,) first guess.

        Returns the profile, the surface field [A/m] rms and the number of field solves.

        Raises
        ------
        NoConvergence : after 60 solves.
        """
        flux = 2.0 * math.pi * frequency * MU_0 / (self._per_volume * self._surface)
        before: tuple[Array, Array] | None = None
        for solves in range(1, SOLVES_AT_MOST + 1):
            profile = self.profile(resistivity, mu_r, frequency)
            H_surface = surface_field(profile.impedance)
            if magnetics.linear:
                return profile, H_surface, solves
            size = np.abs(profile.H)
            # Mean square over a cell of an amplitude that is straight between its faces.
            square = (size[:-1] * size[:-1] + size[:-1] * size[1:] + size[1:] * size[1:]) / 3.0
            H_peak = H_surface * np.sqrt(2.0 * square)
            following = 1.0 + factor * magnetics.effective_susceptibility(H_peak)
            off = following / mu_r - 1.0
            # What a relative change of mu_r in a cell does to the surface impedance, to first order: j w mu H^2 dV.
            weight = flux * mu_r * square
            if float(weight @ np.abs(off)) < IMPEDANCE_TOLERANCE * abs(profile.impedance):
                return profile, H_surface, solves
            mu_r = following
            if before is not None:
                # Anderson's rule over the last two solves, relative changes weighted by what they do.
                change = off - before[1]
                weighted = weight * change
                if (norm := float(weighted @ change)) > 0.0:
                    blend = float(weighted @ off) / norm
                    mu_r = np.maximum(following - blend * (following - before[0]), 1.0)
            before = (following, off)
        raise NoConvergence(
            f"the permeability did not settle within {SOLVES_AT_MOST} field solves "
            f"(surface field {H_surface:.3g} A/m rms, {frequency:.4g} Hz)"
        )
