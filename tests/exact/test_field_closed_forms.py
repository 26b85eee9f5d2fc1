"""Closed forms of the field (cases EM-01 to EM-09, CP-01, CP-04) against published figures and a second route.

E. J. Davies, Conduction and Induction Heating (1990), and S. Lupi, Fundamentals of Electroheat (2017), ch. 6, give
the formulas; the figures are computed from them with mu_0 = 4 pi 1e-7, 5.5e-10 below the value used here.
"""

import math

import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy.integrate import quad
from scipy.optimize import minimize_scalar
from scipy.special import bei, beip, ber, berp, iv, kv

from thermal.constants import MU_0
from thermal.eddy import exact

PRINTED = 2e-9
"""Relative; the printed figures have an older mu_0, and weak skins follow its square."""


def by_kelvin_functions(xi):
    """Phi + j Psi of a bar from the Kelvin functions: no modified Bessel function of complex argument."""
    x = math.sqrt(2.0) * xi
    return math.sqrt(2.0) * (berp(x) + 1j * beip(x)) / (ber(x) + 1j * bei(x))


def test_half_space():
    # EM-01; Davies 1990 (from memory): rho 1.22e-6 ohm m, 10 kHz, H0 = 1e5 A/m peak.
    delta = float(exact.skin_depth(1.22e-6, 10e3))
    assert_allclose(delta, 5.559043174e-3, rtol=PRINTED)
    assert_allclose(1.22e-6 / delta, 2.194622279e-4, rtol=PRINTED)
    power = exact.half_space_power(1.22e-6, 10e3, 1.0, 1e5 / math.sqrt(2.0))
    assert_allclose(power, 1.097311140e6, rtol=PRINTED)
    # Second route: loss of the current under the surface, whole and down to 1, 2, 3 skin depths.
    for depths, share in ((1, 0.8646647168), (2, 0.9816843611), (3, 0.9975212478), (40, 1.0)):
        loss, _ = quad(lambda x: 1.22e-6 * (1e5 / delta) ** 2 * math.exp(-2.0 * x / delta), 0.0, depths * delta)
        assert_allclose(loss, share * power, rtol=1e-9)


PLATE = {
    # EM-02; Lupi 2017 ch. 6 (from memory), computed.
    0.2: 0.0013332469897990825,
    0.5: 0.02078076485634941,
    1.0: 0.16018668595147273,
    1.5: 0.4670721809310639,
    2.0: 0.8121707420191829,
    2.5: 1.022619240946066,
    3.0: 1.0880275956560364,
    math.pi: 1.0903314107273683,
    4.0: 1.052228547438705,
    5.0: 1.0089742480707653,
    6.0: 0.9966289338982621,
    8.0: 0.9994335539098321,
    10.0: 1.0001255900632555,
    20.0: 0.9999999945543195,
}


@pytest.mark.parametrize("nu", PLATE)
def test_plate_factor(nu):
    assert_allclose(exact.plate_factor(nu), PLATE[nu], rtol=1e-11)
    # Second route: the loss of |dH/dx|^2 across the plate, H = cosh(gamma x)/cosh(gamma d/2), delta = 1.
    edge = np.cosh((1.0 + 1.0j) * nu / 2.0)
    loss, _ = quad(lambda x: 2.0 * abs(np.sinh((1.0 + 1.0j) * x) / edge) ** 2, -nu / 2.0, nu / 2.0, epsabs=0.0)
    assert_allclose(loss / 2.0, PLATE[nu], rtol=1e-9)


def test_plate_power_and_impedance():
    # EM-02: aluminium 5 mm, 2.82e-8 ohm m, 1 kHz, 2e4 A/m peak, both faces together.
    Z = exact.plate_impedance(2.82e-8, 1e3, 1.0, 5e-3)
    assert_allclose(2.0 * Z.real * 2e4**2 / 2.0, 3086.250806, rtol=PRINTED)
    delta = float(exact.skin_depth(2.82e-8, 1e3))
    assert_allclose(Z.real * delta / 2.82e-8, exact.plate_factor(5e-3 / delta), rtol=1e-12)


def test_best_plate():
    # EM-02: the largest F is coth(pi/2) at pi; the resistivity that heats best has d/delta = 2.254172516.
    top = minimize_scalar(lambda nu: -exact.plate_factor(nu), bracket=(2.0, 3.0, 4.0), tol=1e-9)
    assert_allclose(top.x, math.pi, rtol=1e-5)
    assert_allclose(-top.fun, 1.0 / math.tanh(math.pi / 2.0), rtol=1e-12)
    best = minimize_scalar(lambda nu: -exact.plate_factor(nu) / nu, bracket=(1.0, 2.0, 4.0), tol=1e-9)
    assert_allclose(best.x, 2.2541725157, rtol=1e-5)


CYLINDER = {
    # EM-03; Lupi 2017 eqs 6.9-6.17, Davies 1990 eq. 9.10 (cited after a public notebook): Phi and Psi, computed.
    0.25: (0.0039045024124752664, 0.24991865752365156),
    0.5: (0.031027862728122635, 0.4974150177656901),
    1.0: (0.22441026592098068, 0.9255056536234992),
    1.25: (0.3825180583173388, 1.0527576527522906),
    1.5: (0.5386583610770121, 1.1041796996921258),
    2.0: (0.7386167460867463, 1.0730673227818754),
    2.5: (0.8076907929238208, 1.02403023260213),
    3.0: (0.8334669765116357, 1.0065802060178717),
    4.0: (0.8706775150027306, 1.0044420321989558),
    5.0: (0.8975861499535374, 1.0031857620868354),
    7.0: (0.9273218444555481, 1.0014745098093611),
    10.0: (0.9493810168595483, 1.0006922000778251),
    20.0: (0.9748440889263648, 1.0001643652876986),
    50.0: (0.9899750081458628, 1.0000255078035838),
    100.0: (0.9949937504985684, 1.000006312988146),
}


@pytest.mark.parametrize("xi", CYLINDER)
def test_cylinder_factor(xi):
    found = complex(exact.cylinder_factor(xi))
    assert_allclose([found.real, found.imag], CYLINDER[xi], rtol=1e-11)
    assert_allclose(found, by_kelvin_functions(xi), rtol=1e-10)


def test_cylinder_limits():
    # EM-03: xi^3/4 for weak, 1 - 1/(2 xi) for thin skins.
    assert_allclose(exact.cylinder_factor(0.05).real / (0.05**3 / 4.0), 0.9999992838548575, rtol=1e-9)
    assert_allclose(exact.cylinder_factor(200.0).real / (1.0 - 1.0 / 400.0), 0.9999984336148742, rtol=1e-9)
    assert_allclose(exact.cylinder_factor(5000.0), 1.0 - 1.0e-4 + 1j, rtol=1e-7)


BARS = [
    # EM-03: a [m], rho [ohm m], mu_r, f [Hz], H0 [A/m] peak -> P' [W/m], surface source [W/m3].
    pytest.param(0.025, 1.2e-6, 1.0, 1e3, 1e5, 27017.606961467573, 28694131.22, id="hot steel"),
    pytest.param(0.025, 2.5e-7, 40.0, 1e3, 1e5, 152100.50578474323, 1539918292.9784594, id="cold steel"),
    pytest.param(0.05, 3.5e-8, 1.0, 50.0, 1e5, 3559.876984198785, 1729381.7282881993, id="aluminium"),
    pytest.param(0.03, 2.5e-8, 1.0, 500.0, 1e5, 6222.291973294472, 18606648.696264956, id="copper"),
    pytest.param(0.004, 2e-7, 50.0, 2e5, 2e4, 13998.284922312618, 15651504251.1319, id="rod"),
    pytest.param(0.001, 1.2e-6, 1.0, 1e3, 1e5, 0.10200643509060942, 64939.32080878879, id="wire"),
]


@pytest.mark.parametrize(("a", "rho", "mu_r", "f", "H0", "power", "source"), BARS)
def test_bar_power(a, rho, mu_r, f, H0, power, source):
    delta = float(exact.skin_depth(rho, f, mu_r))
    factor = complex(exact.cylinder_factor(a / delta))
    assert_allclose(math.pi * a * H0**2 * rho / delta * factor.real, power, rtol=PRINTED)
    assert_allclose(rho * abs(H0 * factor / delta) ** 2 / 2.0, source, rtol=2e-9)

    # Second route: the loss of the current, J = -dH/dr from the Kelvin functions.
    x = math.sqrt(2.0) * a / delta
    edge = abs(ber(x) + 1j * bei(x))
    whole, _ = quad(
        lambda s: (x * abs(berp(x * s) + 1j * beip(x * s)) / edge) ** 2 * s,
        max(0.0, 1.0 - 15.0 * delta / a),
        1.0,
        epsabs=0.0,
        epsrel=1e-10,
    )
    assert_allclose(math.pi * rho * H0**2 * whole, power, rtol=2e-9)


PROFILE = {
    # EM-03: |H|/H0 and |J|/|J_surface| at r/a = 0, 0.25, 0.5, 0.75, 0.9, 1 (Lupi 2017 eqs 6.9-6.17, computed).
    1.0: (
        [0.9425361039400946, 0.9427661918911884, 0.9462119164802627, 0.9610245180350389, 0.9805514903026228, 1.0],
        [0.0, 0.24744063494818117, 0.4951832465260148, 0.7447358084976222, 0.8968253669611698, 1.0],
    ),
    3.0: (
        [0.2521833391350725, 0.25713006741665706, 0.3238937712995283, 0.5433052680628567, 0.7802853900835017, 1.0],
        [0.0, 0.1452037271910911, 0.30448948868758147, 0.5427805079611586, 0.7785709540065546, 1.0],
    ),
    10.0: (
        [
            0.0004253011446118457,
            0.0011181900075238542,
            0.009586902726221893,
            0.09497857302540086,
            0.3880454305323661,
            1,
        ],
        [0.0, 0.0010572601260119897, 0.009355700500744225, 0.09419951776908132, 0.38697903792305083, 1.0],
    ),
}
PLACES = np.array([0.0, 0.25, 0.5, 0.75, 0.9, 1.0])


@pytest.mark.parametrize("xi", PROFILE)
def test_bar_profile(xi):
    H, J = PROFILE[xi]
    assert_allclose(np.abs(exact.cylinder_field(PLACES, xi)), H, rtol=1e-10)
    x = math.sqrt(2.0) * xi
    ratio = np.abs((berp(x * PLACES) + 1j * beip(x * PLACES)) / (berp(x) + 1j * beip(x)))
    assert_allclose(ratio, J, rtol=1e-9)


def test_best_bar():
    # EM-03b: best a/delta over resistivity, 1.778372774, where Phi/xi is 0.3774518086 (computed).
    best = minimize_scalar(lambda xi: -exact.cylinder_factor(xi).real / xi, bracket=(1.0, 2.0, 4.0), tol=1e-9)
    assert_allclose(best.x, 1.7783727740221227, rtol=1e-5)
    assert_allclose(-best.fun, 0.3774518085570724, rtol=1e-10)


TUBES = [
    # EM-05, coil in the bore (derived): rho, mu_r, H0 peak -> P' [W/m], |J(a)|/|J(b)|; a 30 mm, b 20 mm, 10 kHz.
    pytest.param(1.2e-6, 1.0, 1e5, 145291.4517490176, 0.2557364482535664, id="hot"),
    pytest.param(2.5e-7, 50.0, 3e4, 40077.0346766675, 1.018264049960167e-12, id="cold"),
]


@pytest.mark.parametrize(("rho", "mu_r", "H0", "power", "ratio"), TUBES)
def test_tube_around_its_coil(rho, mu_r, H0, power, ratio):
    inner, outer = 0.02, 0.03
    H, E = exact.tube_bore_field(np.array([inner, outer]), inner, outer, rho, 10e3, mu_r)
    assert_allclose(H, [1.0, 0.0], atol=1e-12)
    # E points against the circulation that carries power outwards at the bore.
    assert_allclose(-2.0 * math.pi * inner * (E[0] * H[0].conjugate()).real * H0**2 / 2.0, power, rtol=PRINTED)
    assert_allclose(abs(E[1] / E[0]), ratio, rtol=1e-8)
    # Second route: unscaled Bessel functions, the two constants by Cramer's rule, and the loss by quadrature.
    delta = float(exact.skin_depth(rho, 10e3, mu_r))
    gamma = (1.0 + 1.0j) / delta
    det = iv(0, gamma * inner) * kv(0, gamma * outer) - iv(0, gamma * outer) * kv(0, gamma * inner)
    A, B = kv(0, gamma * outer) / det, -iv(0, gamma * outer) / det
    loss, _ = quad(
        lambda r: abs(gamma * (A * iv(1, gamma * r) - B * kv(1, gamma * r))) ** 2 * r,
        inner,
        min(outer, inner + 18.0 * delta),
        epsabs=0.0,
        epsrel=1e-10,
        limit=200,
    )
    assert_allclose(math.pi * rho * H0**2 * loss, power, rtol=PRINTED)


def test_thin_tube():
    # Thin wall t of bore radius a in a coil: H_bore = 1/(1 + j w mu0 a t/(2 rho)), from the drop J t of the field
    # across the wall and the flux pi a^2 mu0 H of the bore (derived). The error falls with t at fixed t/rho.
    a, f = 0.025, 2e3
    errors = []
    for t in (1e-4, 5e-5, 2.5e-5):
        rho = 2.82e-8 * t / 1e-4
        H, E = exact.tube_outer_field(np.array([a, a + t]), a, a + t, rho, f, 1.0)
        thin = 1.0 / (1.0 + 1j * math.pi * f * MU_0 * a * t / rho)
        loss = rho * abs(1.0 - thin) ** 2 / t * 2.0 * math.pi * a
        power = 2.0 * math.pi * (a + t) * E[1].real
        errors.append(max(abs(H[0] / thin - 1.0), abs(power / loss - 1.0)))
    assert errors[2] < 2e-3
    assert_allclose(np.array(errors[:2]) / errors[1:], 2.0, rtol=0.15)


def test_tube_with_a_vanishing_bore_is_a_bar():
    delta = float(exact.skin_depth(1.2e-6, 10e3))
    _, E = exact.tube_outer_field(np.array([0.025]), 1e-7, 0.025, 1.2e-6, 10e3, 1.0)
    assert_allclose(E[0], 1.2e-6 / delta * exact.cylinder_factor(0.025 / delta), rtol=1e-9)


WIRE = {
    # EM-09 (from memory): R_ac/R_dc of a round wire, computed.
    0.5: 1.0013007285557947,
    1.0: 1.0204923888556223,
    1.5: 1.0973282460892444,
    2.0: 1.2646429062732134,
    3.0: 1.7681316525097364,
    5.0: 2.768107600734291,
    10.0: 5.259301857510798,
    20.0: 10.254679114660357,
}


@pytest.mark.parametrize("xi", WIRE)
def test_wire(xi):
    assert_allclose(exact.wire_resistance_ratio(xi), WIRE[xi], rtol=1e-10)
    x = math.sqrt(2.0) * xi
    kelvin = (0.5j * x * (ber(x) + 1j * bei(x)) / (berp(x) + 1j * beip(x))).real
    assert_allclose(exact.wire_resistance_ratio(xi), kelvin, rtol=1e-9)


CORE_FACTOR = {
    # CP-01 (closed form checked by quadrature): K of surface minus core = K q a/(2 k).
    0.25: 0.5000101721857146,
    0.5: 0.5001626733388557,
    1.0: 0.5025820574147302,
    1.5: 0.5126363858446131,
    2.0: 0.5366625065130266,
    3.0: 0.6254986340783102,
    5.0: 0.7776186835012953,
    10.0: 0.8946682310515507,
    20.0: 0.9487097469554674,
    50.0: 0.9797974697993049,
    100.0: 0.989949685618639,
}


@pytest.mark.parametrize("xi", CORE_FACTOR)
def test_surface_core_factor(xi):
    assert_allclose(exact.surface_core_factor(xi), CORE_FACTOR[xi], rtol=1e-8)
    # Second route: k r dT/dr = r (qbar r - q(r))/2 with q(r) the Poynting flux inside r, integrated over r.
    x = math.sqrt(2.0) * xi

    def inside(s):
        value = (ber(x * s) - 1j * bei(x * s)) * (berp(x * s) + 1j * beip(x * s))
        return value.real / abs(ber(x) + 1j * bei(x)) ** 2

    whole = inside(1.0)
    integral, _ = quad(lambda s: s * whole - inside(s), 0.0, 1.0, epsabs=0.0, epsrel=1e-10, limit=200)
    assert_allclose(2.0 * integral / whole, CORE_FACTOR[xi], rtol=1e-8)


def test_surface_core_factor_limits():
    # CP-01: 1/2 for a << delta, (1 - K) xi = 1.0050314381 at xi = 100.
    assert_allclose(exact.surface_core_factor(0.02), 0.5, rtol=1e-6)
    assert_allclose((1.0 - exact.surface_core_factor(100.0)) * 100.0, 1.0050314381360947, rtol=1e-9)


def test_surface_core_factor_of_a_very_thin_skin():
    # CP-01: 1 - K tends to delta/a.
    assert_allclose((1.0 - exact.surface_core_factor(2000.0)) * 2000.0, 1.0, rtol=1e-3)


def test_thick_plate_tends_to_the_half_space():
    assert_allclose(exact.plate_factor(2000.0), 1.0, rtol=1e-12)


@pytest.mark.parametrize(("mu_r", "power"), [(16.0, 136418.0444264881), (1.0, 31685.69531775995)])
def test_power_through_the_curie_point(mu_r, power):
    # CP-04 (computed): a 25 mm, 10 kHz, 8e-7 ohm m, H0 5e4 A/m peak.
    delta = float(exact.skin_depth(8e-7, 10e3, mu_r))
    found = math.pi * 0.025 * 5e4**2 * 8e-7 / delta * exact.cylinder_factor(0.025 / delta).real
    assert_allclose(found, power, rtol=PRINTED)
    assert_allclose(by_kelvin_functions(0.025 / delta).real, exact.cylinder_factor(0.025 / delta).real, rtol=1e-10)
