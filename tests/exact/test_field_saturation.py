"""Saturating permeability against exact and time-domain solutions (case EM-08b and the describing function)."""

import math

import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy.linalg import solve_banded

from materials.magnetics import Magnetics
from materials.magnetisation import FroehlichKennelly
from thermal.constants import MU_0
from thermal.eddy.finite_coil import SectionSource
from thermal.eddy.radial import RadialSolver
from thermal.geometry.grading import graded_edges
from thermal.geometry.shapes import plate

B_S, RHO, FREQUENCY, H0 = 1.8, 2e-7, 1e3, 3e4
"""Case EM-08b: [T], [ohm m], [Hz], [A/m] peak."""


class FullySaturated:
    """mu = B_s/|H|; held below a thousandth of the surface field, where no power is left."""

    linear = False
    curie_temperature = None

    def factor(self, T):
        return np.ones_like(T)

    def effective_susceptibility(self, H_peak):
        return B_S / (MU_0 * np.maximum(H_peak, 1e-3 * H0)) - 1.0


@pytest.fixture(scope="module")
def saturated():
    # The field goes through zero like (1 - x/L)^2 at the depth L: a singular end, so every cell of the default grid
    # is cut in two here.
    delta = math.sqrt(RHO * H0 / (math.pi * FREQUENCY * B_S))
    mesh = plate(graded_edges(0.0, 6e-3, delta, refinement=2), 1.0, 1.0)
    source = SectionSource(mesh, RadialSolver(mesh), lambda T: np.full(T.shape, RHO), FullySaturated(), None)
    field = source.at(np.full(mesh.r.shape, 300.0))(H0 / math.sqrt(2.0), FREQUENCY, None)
    profile = source.solver.profile(np.full(mesh.r.shape, RHO), field.mu_r, FREQUENCY)
    return mesh, field, profile, delta


def test_saturated_half_space_power(saturated):
    # EM-08b; the factors 1.37 and 0.97 of L. R. Neiman (from memory), rederived: H = H0 (1 - x/L)^(2 + j sqrt 2),
    # L^2 = 3 sqrt(2) H0 rho/(w B_s); P'' = 119978.9178 W/m2 at H0 = 30 kA/m peak.
    _, field, profile, delta = saturated
    assert_allclose(field.power / 2.0, 119978.9178, rtol=3e-3)
    assert_allclose(profile.impedance * delta / RHO, 1.3731780959 + 0.9709835434j, rtol=3e-3)
    assert_allclose(math.cos(np.angle(profile.impedance)), 2.0 / math.sqrt(6.0), rtol=3e-3)


def test_saturated_half_space_profile(saturated):
    mesh, _, profile, _ = saturated
    depth_of_field = math.sqrt(3.0 * math.sqrt(2.0) * H0 * RHO / (2.0 * math.pi * FREQUENCY * B_S))
    assert_allclose(depth_of_field, 1.500263574e-3, rtol=1e-9)
    left = np.maximum(1.0 - (mesh.edges[-1] - mesh.edges) / depth_of_field, 0.0)
    assert_allclose(np.abs(profile.H), left**2, atol=5e-3)


def test_closed_form_of_the_saturated_half_space():
    # The second route to EM-08b: d/dx(rho dH/dx) = j w (B_s/|H|) H, checked at ten depths by differences.
    omega = 2.0 * math.pi * FREQUENCY
    L = math.sqrt(3.0 * math.sqrt(2.0) * H0 * RHO / (omega * B_S))
    power = 2.0 + 1j * math.sqrt(2.0)
    x, step = np.linspace(0.0, 0.8 * L, 10), 1e-4 * L

    def H(at):
        return H0 * (1.0 - at / L) ** power

    curvature = RHO * (H(x + step) - 2.0 * H(x) + H(x - step)) / step**2
    assert_allclose(curvature, 1j * omega * B_S * H(x) / np.abs(H(x)), rtol=1e-5)
    assert_allclose(0.5 * (RHO * power / L).real * H0**2, 119978.9178, rtol=1e-9)


LAW = FroehlichKennelly(saturation=2.05, H_k=3271.0)
"""Invented: initial mu_r 500, mu_r 124 at 10 kA/m."""


def flux_density(H):
    size = np.abs(H)
    return MU_0 * H + LAW.saturation * H / (size + LAW.H_k)


def slope(H):
    return MU_0 + LAW.saturation * LAW.H_k / (np.abs(H) + LAW.H_k) ** 2


def time_domain_power(H_peak, rho, frequency, steps, cycles=3):
    """Mean power into a half-space [W/m2] over the last cycle: implicit Euler in B(H), Newton in every step."""
    mu = flux_density(H_peak) / H_peak
    delta = math.sqrt(rho / (math.pi * frequency * mu))
    sizes = 0.04 * delta * np.minimum(1.03 ** np.arange(200), 8.0)
    sizes = sizes[: int(np.searchsorted(np.cumsum(sizes), 12.0 * delta))]
    nodes = np.concatenate([[0.0], np.cumsum(sizes)])
    k = rho / np.diff(nodes)
    volume = np.zeros_like(nodes)
    volume[:-1] += 0.5 * sizes
    volume[1:] += 0.5 * sizes
    dt = 1.0 / (frequency * steps)
    H = np.zeros_like(nodes)
    B = flux_density(H)
    energy = 0.0
    bands = np.zeros((3, nodes.size - 1))
    for step in range(1, cycles * steps + 1):
        H[0] = H_peak * math.sin(2.0 * math.pi * step / steps)
        for _ in range(30):
            current = k * np.diff(H)
            out = np.append(current[1:], 0.0)
            residual = volume[1:] * (flux_density(H[1:]) - B[1:]) / dt + current - out
            bands[0, 1:] = -k[1:]
            bands[1] = volume[1:] * slope(H[1:]) / dt + k + np.append(k[1:], 0.0)
            bands[2, :-1] = -k[1:]
            change = solve_banded((1, 1), bands, -residual)
            H[1:] += change
            if np.max(np.abs(change)) < 1e-7 * H_peak:
                break
        else:
            raise AssertionError("the reference itself did not converge")
        new = flux_density(H)
        if step > (cycles - 1) * steps:
            E = -k[0] * (H[1] - H[0]) + volume[0] * (new[0] - B[0]) / dt
            energy += E * H[0] * dt
        B = new
    return energy * frequency


TIME_DOMAIN = [
    # H0 [A/m] peak ; power [W/m2] of another time-domain program for the same case, three digits (unpublished).
    (1e4, 7.15e4),
    (1e5, 3.09e6),
]


@pytest.mark.parametrize(("H_peak", "known"), TIME_DOMAIN)
def test_describing_function_against_the_time_domain(H_peak, known):
    rho, frequency = 2.5e-7, 10e3
    coarse, fine = (time_domain_power(H_peak, rho, frequency, steps) for steps in (100, 200))
    true = 2.0 * fine - coarse
    assert_allclose(true, known, rtol=1e-2)

    magnetics = Magnetics.from_law("froehlich-kennelly", LAW, 1043.0, 3.0)
    T = 293.15
    mu_r = float(magnetics.mu_r(H_peak, T))
    delta = math.sqrt(rho / (math.pi * frequency * MU_0 * mu_r))
    mesh = plate(graded_edges(0.0, 30.0 * delta, delta), 1.0, 1.0)
    source = SectionSource(mesh, RadialSolver(mesh), lambda T: np.full(T.shape, rho), magnetics, None)
    field = source.at(np.full(mesh.r.shape, T))(H_peak / math.sqrt(2.0), frequency, None)
    assert_allclose(field.power / 2.0, true, rtol=0.05)
