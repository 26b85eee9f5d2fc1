"""The coil around the workpiece: energy identity, limits and the long-coil circuit (case EM-10)."""

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from thermal.circuit.winding import sheet_resistance
from thermal.constants import MU_0
from thermal.eddy.exact import cylinder_factor, skin_depth
from thermal.eddy.finite_coil import FluxPath
from thermal.geometry.inductance import current_sheet_inductance, nagaoka


def path_of(turns, length, bore, radius, filled, K=None):
    """Round bar of a radius in a round coil of a bore radius [m]."""
    K = nagaoka(2.0 * bore / length) if K is None else K
    area = math.pi * radius**2
    return FluxPath(turns, length, math.pi * bore**2, K, filled, area, 2.0 * math.pi * radius)


@settings(deadline=None, max_examples=200)
@given(
    turns=st.floats(1.0, 60.0),
    length=st.floats(0.01, 1.0),
    bore=st.floats(0.005, 0.2),
    fill=st.floats(0.05, 1.0),
    inside=st.floats(0.05, 1.0),
    resistance=st.floats(1e-6, 1e-2),
    reactance=st.floats(0.0, 1e-2),
    frequency=st.floats(50.0, 4e5),
)
def test_power_of_the_piece_is_power_at_the_terminals(
    turns, length, bore, fill, inside, resistance, reactance, frequency
):
    # Re(Z_s) |H|^2 times the surface inside the coil = I^2 Re Z, for a piece shorter than the coil as well.
    path = path_of(turns, length, bore, fill * bore, inside * length)
    Z_s = complex(resistance, reactance)
    H = abs(path.field_per_ampere(Z_s, frequency))
    piece = Z_s.real * H**2 * path.perimeter * path.filled
    Z = path.coil_impedance(Z_s, frequency)
    # The real part of a nearly reactive Z keeps that many digits less.
    assert_allclose(Z.real, piece, rtol=1e-12 + 1e-16 * abs(Z) / Z.real)


@settings(deadline=None, max_examples=100)
@given(
    length=st.floats(0.02, 1.0),
    bore=st.floats(0.01, 0.2),
    fill=st.floats(0.05, 1.0),
    inside=st.floats(0.05, 1.0),
    resistance=st.floats(1e-5, 1e-2),
    share=st.floats(0.2, 1.0),
)
def test_flux_in_series_and_ampere_around(length, bore, fill, inside, resistance, share):
    # Second route: one unknown flux. H = flux/(mu0 A) in each part of the bore, the mmf of all parts is N I, and the
    # voltage is j w N flux.
    frequency, turns = 3e3, 9.0
    path = path_of(turns, length, bore, fill * bore, inside * length)
    Z_s = complex(share * resistance, resistance)
    omega = 2.0 * math.pi * frequency
    gap = path.bore_area - path.enclosed
    per_flux = 1.0 / (MU_0 * gap + path.perimeter * Z_s / (1j * omega))
    empty = 1.0 / (MU_0 * path.bore_area)
    air_coil = current_sheet_inductance(1.0, 2.0 * bore, length)
    outside = 1.0 / air_coil - length / (MU_0 * path.bore_area)
    flux = turns / (path.filled * per_flux + (length - path.filled) * empty + outside)
    assert_allclose(path.field_per_ampere(Z_s, frequency), flux * per_flux, rtol=1e-9)
    assert_allclose(path.coil_impedance(Z_s, frequency), 1j * omega * turns * flux, rtol=1e-9)


@pytest.mark.parametrize("filled", [0.0, 0.03, 0.1])
@pytest.mark.parametrize("bore", [0.01, 0.05, 0.3])
def test_without_a_workpiece_it_is_the_air_coil(bore, filled):
    # Nagaoka 1909: L = K mu0 pi b^2 N^2/l.
    path = FluxPath(12.0, 0.1, math.pi * bore**2, nagaoka(20.0 * bore), filled, 0.0, 0.0)
    L = current_sheet_inductance(12.0, 2.0 * bore, 0.1)
    for frequency in (50.0, 2e5):
        assert_allclose(path.coil_impedance(1e-3 + 2e-3j, frequency), 2j * math.pi * frequency * L, rtol=1e-12)


def test_piece_that_fills_the_bore_of_a_long_coil():
    # All the flux is in the metal and H = N I/l whatever the metal: a transformer of ratio N.
    path = path_of(20.0, 0.5, 0.04, 0.04, 0.5, K=1.0)
    for Z_s in (1e-9 + 1e-9j, 2e-4 + 2e-4j, 1.0 + 0.1j):
        assert_allclose(path.field_per_ampere(Z_s, 1e3), 20.0 / 0.5, rtol=1e-12)
        assert_allclose(path.coil_impedance(Z_s, 1e3), 400.0 * 2.0 * math.pi * 0.04 * Z_s / 0.5, rtol=1e-12)


def test_piece_that_fills_the_bore_of_a_short_coil():
    # A surface that lets no flux in takes the whole mmf over its own length: H = N I/l_p and no impedance is left.
    path = path_of(5.0, 0.05, 0.04, 0.04, 0.03)
    assert_allclose(abs(path.field_per_ampere(1e-12 + 1e-12j, 1e3)), 5.0 / 0.03, rtol=1e-6)
    assert abs(path.coil_impedance(1e-12 + 1e-12j, 1e3)) < 1e-8


def test_short_coil_has_less_field_than_a_long_one():
    # 1/K - 1 of the mmf goes outside: without metal H falls by K.
    path = FluxPath(5.0, 0.05, math.pi * 0.04**2, nagaoka(1.6), 0.05, 0.0, 0.0)
    assert_allclose(path.field_per_ampere(0j, 1e3), 100.0 * nagaoka(1.6), rtol=1e-12)


LONG_COIL = [
    # EM-10 (derived): R_c [m], a [m], rho [ohm m], mu_r, f [Hz] -> R_w', X_w', X_gap', R_coil' [ohm/m], efficiency;
    # 20 turns per metre, coil copper 1.8e-8 ohm m without gaps.
    pytest.param(
        (0.035, 0.025, 1.2e-6, 1.0, 1e3),
        (0.002161408556917406, 0.004745048633051336, 0.005953205122617565, 0.000741521973422728, 0.7445608960763369),
        id="hot steel, 1 kHz",
    ),
    pytest.param(
        (0.035, 0.025, 1.2e-6, 1.0, 1e4),
        (0.012124604912368667, 0.013729368002461611, 0.05953205122617566, 0.0023448983710786637, 0.8379420270935523),
        id="hot steel, 10 kHz",
    ),
    pytest.param(
        (0.035, 0.025, 2.5e-7, 40.0, 1e3),
        (0.01216804046277946, 0.012486251580443437, 0.005953205122617565, 0.000741521973422728, 0.9425602550754715),
        id="cold steel",
    ),
    pytest.param(
        (0.065, 0.05, 7e-8, 1.0, 50.0),
        (
            0.0003818859424247073,
            0.00047447713788017836,
            0.000855773236376275,
            0.00030793165731398797,
            0.5536042318568948,
        ),
        id="aluminium, 50 Hz",
    ),
    pytest.param(
        (0.04, 0.03, 5.8e-8, 1.0, 1e3),
        (0.001066889433062816, 0.0011422464085817713, 0.0069454059763871595, 0.0008474536839116891, 0.5573135889813554),
        id="copper",
    ),
]


@pytest.mark.parametrize(("inputs", "expected"), LONG_COIL)
def test_long_coil(inputs, expected):
    bore, radius, rho, mu_r, frequency = inputs
    R_w, X_w, X_gap, R_coil, efficiency = expected
    length = 3.0
    path = path_of(20.0 * length, length, bore, radius, length, K=1.0)
    delta = float(skin_depth(rho, frequency, mu_r))
    Z_s = complex(rho / delta * cylinder_factor(radius / delta))
    Z = path.coil_impedance(Z_s, frequency) / length
    assert_allclose([Z.real, Z.imag], [R_w, X_w + X_gap], rtol=1e-8)
    depth = float(skin_depth(1.8e-8, frequency))
    copper = sheet_resistance(1.8e-8, depth, 20.0 * length, 2.0 * math.pi * bore, length) / length
    assert_allclose(copper, R_coil, rtol=1e-8)
    assert_allclose(Z.real / (Z.real + copper), efficiency, rtol=1e-8)


ENDLESS = [
    # DD-03; the integral of C. V. Dodd and W. E. Deeds, J. Appl. Phys. 39 (1968) 2829, evaluated: endless bar of 25 mm
    # radius in a coil of 35 to 45 mm radius, 200 mm long, 10 turns. rho [ohm m], mu_r, f [Hz] -> change of the coil's
    # impedance [ohm], tolerance of its real part.
    pytest.param(1.2e-6, 1.0, 1e3, 0.002033587572 - 0.001316142551j, 0.025, id="hot, 1 kHz"),
    pytest.param(1.2e-6, 1.0, 1e4, 0.01214105366 - 0.04615173531j, 0.025, id="hot, 10 kHz"),
    pytest.param(2.5e-7, 40.0, 1e3, 0.01050687835 + 0.006399348947j, 0.10, id="cold, 1 kHz"),
    pytest.param(2.5e-7, 40.0, 1e4, 0.03775494676 - 0.01992406445j, 0.10, id="cold, 10 kHz"),
]


@pytest.mark.parametrize(("rho", "mu_r", "frequency", "change", "tolerance"), ENDLESS)
def test_endless_bar_in_a_coil_of_finite_length(rho, mu_r, frequency, change, tolerance):
    # The circuit, with the coil as a sheet at its mean radius and a field uniform along it, is a model: 1.0 to 7.9 %
    # low here, where H = N I/l alone is 25 to 45 % high.
    length, bore, radius = 0.2, 0.04, 0.025
    path = path_of(10.0, length, bore, radius, length)
    delta = float(skin_depth(rho, frequency, mu_r))
    Z_s = complex(rho / delta * cylinder_factor(radius / delta))
    Z = path.coil_impedance(Z_s, frequency)
    X_empty = 2.0 * math.pi * frequency * current_sheet_inductance(10.0, 2.0 * bore, length)
    assert_allclose(Z.real, change.real, rtol=tolerance)
    assert abs(Z.imag - X_empty - change.imag) < 0.01 * X_empty
    endless = Z_s.real * (10.0 / length) ** 2 * path.perimeter * length
    assert 1.2 < endless / change.real < 1.5
