"""The field solver on its default grid against closed forms: bar, plate, tube (cases EM-01 to EM-03, CP-01, CP-04)."""

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose
from scipy.special import bei, beip, ber, berp

from thermal.constants import MU_0
from thermal.eddy import exact
from thermal.eddy.radial import RadialSolver
from thermal.geometry.grading import graded_edges
from thermal.geometry.shapes import cylinder, plate

LENGTH = 0.1


def solve(mesh, rho, mu_r, frequency):
    n = mesh.volume.size
    return RadialSolver(mesh).profile(np.full(n, rho), np.full(n, mu_r), frequency)


def bar(a, rho, mu_r, frequency, refinement=1):
    delta = float(exact.skin_depth(rho, frequency, mu_r))
    mesh = cylinder(graded_edges(0.0, a, delta, refinement), LENGTH)
    return mesh, solve(mesh, rho, mu_r, frequency)


def bar_at(xi):
    """A bar of 25 mm radius and 1 uohm m with a/delta = xi."""
    a, rho = 0.025, 1e-6
    frequency = rho / (math.pi * MU_0 * (a / xi) ** 2)
    mesh, profile = bar(a, rho, 1.0, frequency)
    return mesh, profile, a, rho


# EM-03; Lupi 2017 eqs 6.9-6.17, Davies 1990 eq. 9.10 (cited after a public notebook): Phi, computed.
PHI = {
    0.5: 0.031027862728122635,
    1.0: 0.22441026592098068,
    1.5: 0.5386583610770121,
    2.0: 0.7386167460867463,
    3.0: 0.8334669765116357,
    5.0: 0.8975861499535374,
    10.0: 0.9493810168595483,
    20.0: 0.9748440889263648,
    50.0: 0.9899750081458628,
    100.0: 0.9949937504985684,
}


@pytest.mark.parametrize("xi", PHI)
def test_bar_power_on_the_default_grid(xi):
    mesh, profile, a, rho = bar_at(xi)
    power = float(profile.heat @ mesh.volume) / LENGTH
    assert_allclose(power, 2.0 * math.pi * a * rho * xi / a * PHI[xi], rtol=1e-3)
    psi = complex(exact.cylinder_factor(xi)).imag
    assert_allclose(profile.impedance.imag, rho * xi / a * psi, rtol=1e-3)


@pytest.mark.parametrize(("cells", "tolerance"), [(20, 5e-3), (10, 7e-3)])
@pytest.mark.parametrize("xi", [0.25, 0.5, 1.0, 2.0, 3.0, 5.0, 10.0, 25.0, 100.0, 500.0])
def test_fitted_cells_need_no_fine_grid(xi, cells, tolerance):
    # Uniform cells up to 50 skin depths thick: the lumped scheme would be half the power short at two skin depths.
    a, rho = 0.025, 1e-6
    mesh = cylinder(np.linspace(0.0, a, cells + 1), LENGTH)
    profile = solve(mesh, rho, 1.0, rho / (math.pi * MU_0 * (a / xi) ** 2))
    power = float(profile.heat @ mesh.volume) / LENGTH
    assert_allclose(power, 2.0 * math.pi * rho * xi * exact.cylinder_factor(xi).real, rtol=tolerance)


@pytest.mark.parametrize("xi", [100.0, 400.0])
def test_curvature_of_a_thick_cell(xi):
    # EM-03, thin skin: Phi = 1 - 1/(2 xi), all of it from the curvature within the outermost cell.
    a, rho = 0.025, 1e-6
    mesh = cylinder(np.linspace(0.0, a, 5), LENGTH)
    profile = solve(mesh, rho, 1.0, rho / (math.pi * MU_0 * (a / xi) ** 2))
    phi = profile.impedance.real * a / (rho * xi)
    assert_allclose((1.0 - phi) * 2.0 * xi, 1.0, rtol=0.01)


BARS = [
    # EM-03: a [m], rho [ohm m], mu_r, f [Hz], H0 [A/m] peak -> P' [W/m].
    (0.025, 1.2e-6, 1.0, 1e3, 1e5, 27017.60696),
    (0.025, 2.5e-7, 40.0, 1e3, 1e5, 152100.5058),
    (0.05, 3.5e-8, 1.0, 50.0, 1e5, 3559.876984),
    (0.03, 2.5e-8, 1.0, 500.0, 1e5, 6222.291973),
    (0.004, 2e-7, 50.0, 2e5, 2e4, 13998.28492),
    # CP-04 (computed): through the Curie point.
    (0.025, 8e-7, 16.0, 10e3, 5e4, 136418.0444),
    (0.025, 8e-7, 1.0, 10e3, 5e4, 31685.69532),
]


@pytest.mark.parametrize(("a", "rho", "mu_r", "f", "H0", "power"), BARS)
def test_bar_power_in_watts(a, rho, mu_r, f, H0, power):
    mesh, profile = bar(a, rho, mu_r, f)
    assert_allclose(float(profile.heat @ mesh.volume) * H0**2 / 2.0 / LENGTH, power, rtol=1e-3)


def test_half_space_power_and_where_it_goes():
    # EM-01; Davies 1990 (from memory): 1.22e-6 ohm m, 10 kHz, 1e5 A/m peak; a plate 40 skin depths thick.
    delta = 5.559043174e-3
    mesh = plate(graded_edges(0.0, 20.0 * delta, delta), 1.0, 1.0)
    profile = solve(mesh, 1.22e-6, 1.0, 10e3)
    heat = profile.heat * mesh.volume / 2.0 * 1e5**2 / 2.0
    assert_allclose(heat.sum(), 1.097311140e6, rtol=2e-3)
    assert_allclose(profile.impedance, 2.194622279e-4 * (1.0 + 1.0j), rtol=2e-3)
    deeper = np.cumsum(heat)[::-1] / heat.sum()
    depth = (mesh.edges[-1] - mesh.edges)[:0:-1]
    for depths, share in ((1.0, 0.8646647168), (2.0, 0.9816843611), (3.0, 0.9975212478)):
        assert_allclose(1.0 - math.exp(np.interp(depths * delta, depth, np.log(deeper))), share, rtol=5e-4)


PROFILE = {
    # EM-03 (Lupi 2017 eqs 6.9-6.17, computed): |H|/H0 and |J|/|J_surface| at r/a = 0, 0.25, 0.5, 0.75, 0.9, 1.
    1.0: (
        [0.9425361039, 0.9427661919, 0.9462119165, 0.9610245180, 0.9805514903, 1.0],
        [0.0, 0.2474406349, 0.4951832465, 0.7447358085, 0.8968253670, 1.0],
    ),
    2.0: (
        [0.5617315520, 0.5639222583, 0.5959788167, 0.7214645957, 0.8674422859, 1.0],
        [0.0, 0.2157430891, 0.4356833366, 0.6804053610, 0.8585393187, 1.0],
    ),
    3.0: (
        [0.2521833391, 0.2571300674, 0.3238937713, 0.5433052681, 0.7802853901, 1.0],
        [0.0, 0.1452037272, 0.3044894887, 0.5427805080, 0.7785709540, 1.0],
    ),
    5.0: (
        [0.0443627266, 0.0507573393, 0.1166372539, 0.3322886045, 0.6402298252, 1.0],
        [0.0, 0.0422348091, 0.1130070513, 0.3267296519, 0.6367437252, 1.0],
    ),
    10.0: (
        [0.0004253011, 0.0011181900, 0.0095869027, 0.0949785730, 0.3880454305, 1.0],
        [0.0, 0.0010572601, 0.0093557005, 0.0941995178, 0.3869790379, 1.0],
    ),
}
PLACES = np.array([0.0, 0.25, 0.5, 0.75, 0.9, 1.0])


@pytest.mark.parametrize("xi", PROFILE)
def test_bar_field_and_current_profile(xi):
    mesh, profile, a, rho = bar_at(xi)
    H, J = PROFILE[xi]
    assert_allclose(np.abs(np.interp(PLACES, mesh.edges / a, profile.H)), H, atol=5e-3)
    at_surface = profile.impedance / rho
    current = np.concatenate([[0.0], np.diff(profile.H) / np.diff(mesh.edges) / at_surface, [1.0]])
    where = np.concatenate([[0.0], mesh.r / a, [1.0]])
    assert_allclose(np.abs(np.interp(PLACES, where, current)), J, atol=5e-3)


@pytest.mark.parametrize("xi", [0.3, 1.0, 2.5, 6.0, 20.0])
def test_heat_of_every_cell(xi):
    mesh, profile, a, rho = bar_at(xi)
    x = math.sqrt(2.0) * xi
    s = mesh.edges / a
    inside = (ber(x * s) - 1j * bei(x * s)) * x / a * (berp(x * s) + 1j * beip(x * s))
    flow = 2.0 * math.pi * mesh.edges * rho * inside.real / abs(ber(x) + 1j * bei(x)) ** 2 * LENGTH
    true = np.diff(flow) / mesh.volume
    assert_allclose(profile.heat, true, atol=5e-3 * true.max())


@settings(deadline=None, max_examples=60)
@given(
    sizes=st.lists(st.floats(0.05, 1.0), min_size=2, max_size=30),
    thickness_over_delta=st.floats(0.1, 400.0),
    mu_r=st.floats(1.0, 500.0),
    frequency=st.floats(50.0, 4e5),
)
def test_plate_is_exact_on_any_grid(sizes, thickness_over_delta, mu_r, frequency):
    rho = 4e-7
    half = 0.5 * thickness_over_delta * float(exact.skin_depth(rho, frequency, mu_r))
    edges = np.concatenate([[0.0], np.cumsum(sizes)]) * half / sum(sizes)
    profile = solve(plate(edges, 0.2, LENGTH), rho, mu_r, frequency)
    gamma = (1.0 + 1.0j) / (2.0 * half) * thickness_over_delta
    assert_allclose(profile.impedance, rho * gamma * np.tanh(gamma * half), rtol=1e-10)
    assert_allclose(profile.impedance, exact.plate_impedance(rho, frequency, mu_r, 2.0 * half), rtol=1e-10)
    inside = (
        np.exp(-gamma * (half - edges)) * (1.0 + np.exp(-2.0 * gamma * edges)) / (1.0 + np.exp(-2.0 * gamma * half))
    )
    assert_allclose(profile.H, inside, atol=1e-10)


def test_aluminium_plate_in_watts():
    # EM-02; Lupi 2017 ch. 6 (from memory): 5 mm, 2.82e-8 ohm m, 1 kHz, 2e4 A/m peak, both faces together.
    mesh = plate(np.linspace(0.0, 2.5e-3, 4), 1.0, 1.0)
    profile = solve(mesh, 2.82e-8, 1.0, 1e3)
    assert_allclose(float(profile.heat @ mesh.volume) * 2e4**2 / 2.0, 3086.250806, rtol=2e-9)


@pytest.mark.parametrize("wall", [0.02, 0.2, 0.6, 0.95])
@pytest.mark.parametrize("xi", [0.3, 1.0, 3.0, 10.0, 60.0])
def test_tube_in_a_coil(wall, xi):
    a, rho = 0.03, 5e-7
    b = a * (1.0 - wall)
    frequency = rho / (math.pi * MU_0 * (a / xi) ** 2)
    mesh = cylinder(graded_edges(b, a, a / xi), LENGTH)
    profile = solve(mesh, rho, 1.0, frequency)
    H, E = exact.tube_outer_field(mesh.edges, b, a, rho, frequency, 1.0)
    assert_allclose(profile.impedance, E[-1], rtol=1e-3)
    assert_allclose(profile.impedance.real, E[-1].real, rtol=1e-3)
    assert_allclose(profile.H, H, atol=1e-3)


def test_tube_without_the_flux_in_its_bore_is_another_problem():
    # The bore carries the flux of the whole tube here: leaving it out is off by far more than any tolerance above.
    a, b, rho, frequency = 0.03, 0.028, 5e-7, 1e3
    _, E = exact.tube_outer_field(np.array([a]), b, a, rho, frequency, 1.0)
    without = exact.plate_impedance(rho, frequency, 1.0, 2.0 * (a - b))
    assert without.real < 0.1 * E[0].real


@pytest.mark.parametrize("t", [1e-4, 2.5e-5])
def test_thin_tube(t):
    # H_bore = 1/(1 + j w mu0 a t/(2 rho)), a thin wall t of bore radius a (derived from the flux of the bore).
    a, f, rho = 0.025, 2e3, 2.82e-8 * t / 1e-4
    mesh = cylinder(graded_edges(a, a + t, float(exact.skin_depth(rho, f))), LENGTH)
    profile = solve(mesh, rho, 1.0, f)
    bore = 1.0 / (1.0 + 1j * math.pi * f * MU_0 * a * t / rho)
    power = rho * abs(1.0 - bore) ** 2 / t * 2.0 * math.pi * a * LENGTH
    model = 2.0 * t / a
    assert_allclose(profile.H[0], bore, rtol=model)
    assert_allclose(float(profile.heat @ mesh.volume), power, rtol=model)


# CP-01 (closed form checked by quadrature): K of surface minus core = K q a/(2 k).
CORE_FACTOR = {
    0.5: 0.5001626733,
    1.0: 0.5025820574,
    2.0: 0.5366625065,
    3.0: 0.6254986341,
    5.0: 0.7776186835,
    10.0: 0.8946682311,
    20.0: 0.948709747,
    50.0: 0.9797974698,
}


@pytest.mark.parametrize("xi", CORE_FACTOR)
def test_surface_minus_core_of_the_heat_profile(xi):
    mesh, profile, a, _ = bar_at(xi)
    mean = float(profile.heat @ mesh.volume) / float(mesh.volume.sum())
    # k r dT/dr = integral of (mean - heat) r dr, with the heat uniform in each cell.
    r, R = mesh.edges[:-1], mesh.edges[1:]
    missing = mean - profile.heat
    flow = np.concatenate([[0.0], np.cumsum(missing * (R**2 - r**2) / 2.0)])[:-1]
    ring = np.log(R[1:] / r[1:])
    rise = missing[0] * R[0] ** 2 / 4.0
    rise += float((flow[1:] * ring + missing[1:] * ((R[1:] ** 2 - r[1:] ** 2) / 4.0 - r[1:] ** 2 / 2.0 * ring)).sum())
    surface_flux = mean * a / 2.0
    assert_allclose(rise / (surface_flux * a / 2.0), CORE_FACTOR[xi], rtol=5e-3)
