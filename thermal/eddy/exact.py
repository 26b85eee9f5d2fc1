"""Closed forms for uniform properties: skin depth, half-space, plate, cylinder, tube, round wire.

Fields are phasors exp(+j w t). H is the peak amplitude in this module only where a name says ``_peak``; every
power function takes rms values. E. J. Davies 1990, Conduction and induction heating, ch. 5-9; S. Lupi 2017,
Fundamentals of electroheat, ch. 6 (both from memory).
"""

import numpy as np
import numpy.typing as npt
from scipy.special import ive, kve

from thermal.constants import MU_0

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]


def skin_depth(resistivity: npt.ArrayLike, frequency: float, mu_r: npt.ArrayLike = 1.0) -> Array:
    """Depth [m] at which the field in a half-space has fallen to 1/e.

    resistivity : [ohm m] ; frequency : [Hz] ; mu_r : [-]

    >>> round(float(skin_depth(1.22e-6, 10e3)) * 1e3, 6)
    5.559043
    """
    rho = np.asarray(resistivity, dtype=float)
    return np.asarray(np.sqrt(rho / (np.pi * frequency * MU_0 * np.asarray(mu_r, dtype=float))))


def half_space_power(resistivity: float, frequency: float, mu_r: float, H_rms: float) -> float:
    """Power into a half-space [W/m2] at a surface field H_rms [A/m]."""
    return float(resistivity / skin_depth(resistivity, frequency, mu_r) * H_rms**2)


def plate_factor(thickness_over_delta: npt.ArrayLike) -> Array:
    """F in P'' (both faces together) = 2 H_rms^2 rho/delta F for equal H on both faces."""
    nu = np.asarray(thickness_over_delta, dtype=float)
    return np.asarray(((1.0 + 1.0j) * np.tanh((1.0 + 1.0j) * nu / 2.0)).real)


def plate_impedance(resistivity: float, frequency: float, mu_r: float, thickness: float) -> complex:
    """Surface impedance E/H [ohm] of each face of a plate with equal H on both faces."""
    gamma = (1.0 + 1.0j) / float(skin_depth(resistivity, frequency, mu_r))
    return complex(resistivity * gamma * np.tanh(gamma * thickness / 2.0))


def cylinder_factor(radius_over_delta: npt.ArrayLike) -> ComplexArray:
    """Phi + j Psi of a solid cylinder in an axial field: surface impedance over rho/delta.

    Power per length P' = 2 pi a H_rms^2 rho/delta Phi.

    >>> round(float(cylinder_factor(5.0).real), 8)
    0.89758615
    """
    kappa = (1.0 + 1.0j) * np.asarray(radius_over_delta, dtype=float)
    return np.asarray((1.0 + 1.0j) * ive(1, kappa) / ive(0, kappa))


def cylinder_field(r_over_a: npt.ArrayLike, radius_over_delta: float) -> ComplexArray:
    """H(r)/H(a) in a solid cylinder in an axial field."""
    s = np.asarray(r_over_a, dtype=float)
    kappa = (1.0 + 1.0j) * radius_over_delta
    return np.asarray(ive(0, kappa * s) / ive(0, kappa) * np.exp(radius_over_delta * (s - 1.0)))


def tube_outer_field(
    r: npt.ArrayLike, inner: float, outer: float, resistivity: float, frequency: float, mu_r: float
) -> tuple[ComplexArray, ComplexArray]:
    """H(r)/H(outer) and E(r)/H(outer) [ohm] in a tube inside a coil, the flux in the bore counted."""
    delta = float(skin_depth(resistivity, frequency, mu_r))
    return _annulus(r, inner, outer, resistivity, delta, 2.0 * np.pi * frequency)


def tube_bore_field(
    r: npt.ArrayLike, inner: float, outer: float, resistivity: float, frequency: float, mu_r: float
) -> tuple[ComplexArray, ComplexArray]:
    """H(r)/H(inner) and E(r)/H(inner) [ohm] in a tube around a coil in its bore; H(outer) = 0."""
    delta = float(skin_depth(resistivity, frequency, mu_r))
    return _annulus(r, inner, outer, resistivity, delta, None)


def _annulus(
    r: npt.ArrayLike,
    inner: float,
    outer: float,
    resistivity: float,
    delta: float,
    bore_omega: float | None,
) -> tuple[ComplexArray, ComplexArray]:
    gamma = (1.0 + 1.0j) / delta
    radius = np.asarray(r, dtype=float)

    # Bessel functions scaled by exp(-gamma (outer - r)) and exp(-gamma (r - inner)): no overflow, one common base.
    def i_(order: int, x: npt.ArrayLike) -> ComplexArray:
        z = gamma * np.asarray(x)
        return np.asarray(ive(order, z) * np.exp(z.real - (gamma * outer).real))

    def k_(order: int, x: npt.ArrayLike) -> ComplexArray:
        z = gamma * np.asarray(x)
        return np.asarray(kve(order, z) * np.exp(-(z - gamma * inner)))

    # H = A I0 + B K0 ; E = -rho dH/dr with the sign chosen so that E/H is the surface impedance looking inwards.
    if bore_omega is None:
        rows = np.array([[i_(0, inner), k_(0, inner)], [i_(0, outer), k_(0, outer)]])
        a, b = np.linalg.solve(rows, np.array([1.0, 0.0]))
    else:
        flux = 1j * bore_omega * MU_0 * inner / 2.0
        inner_row = [
            resistivity * gamma * i_(1, inner) - flux * i_(0, inner),
            -resistivity * gamma * k_(1, inner) - flux * k_(0, inner),
        ]
        rows = np.array([inner_row, [i_(0, outer), k_(0, outer)]])
        a, b = np.linalg.solve(rows, np.array([0.0, 1.0]))
    H = a * i_(0, radius) + b * k_(0, radius)
    E = resistivity * gamma * (a * i_(1, radius) - b * k_(1, radius))
    return np.asarray(H), np.asarray(E)


def wire_resistance_ratio(radius_over_delta: npt.ArrayLike) -> Array:
    """R_ac/R_dc of a lone round wire carrying its own current, of any radius above zero."""
    kappa = (1.0 + 1.0j) * np.asarray(radius_over_delta, dtype=float)
    return np.asarray((kappa / 2.0 * ive(0, kappa) / ive(1, kappa)).real)


def surface_core_factor(radius_over_delta: npt.ArrayLike) -> Array:
    """K in T_surface - T_core = K q a/(2 k), the regular regime of a bar heated by its own skin currents.

    1/2 for a << delta, 1 - delta/a for thin skins; follows from the energy identity
    T - T_s = rho (|H_s|^2 - |H|^2)/(2 k) at rms H with the mean rise removed. Below a tenth of the skin depth, where
    that loses its digits, the first terms of its series, which join it within 1e-8.
    """
    ratio = np.asarray(radius_over_delta, dtype=float)
    x = np.maximum(ratio, 0.1)
    core = np.exp(-2.0 * x) / np.abs(ive(0, (1.0 + 1.0j) * x)) ** 2
    closed = 1.0 - (1.0 - core) / (x * cylinder_factor(x).real)
    return np.asarray(np.where(ratio < 0.1, 0.5 + ratio**4 / 384.0, closed))
