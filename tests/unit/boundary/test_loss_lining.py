from itertools import pairwise
from math import log, pi

import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy.integrate import quad
from scipy.optimize import brentq

from thermal.boundary.emissivity import emissivity_of
from thermal.boundary.lining import LiningLoss, flat_lining, round_lining
from thermal.boundary.radiation import exchange_factor
from thermal.boundary.table import constant_law
from thermal.constants import STEFAN_BOLTZMANN
from thermal.errors import CaseError, NoConvergence, OutOfRange

RADII = (0.025, 0.031, 0.040)
TC = 323.15
GREY = emissivity_of(0.8, grows=False, T_start=293.15)
NO_RADIATION = emissivity_of(0.0, grows=False, T_start=293.15)


def one(loss, T):
    q, slope = loss.flux(np.array([T]), np.array([T]))
    return q.item(), slope.item()


def test_without_radiation_it_is_two_resistances_in_series():
    R1, R2, R3 = RADII
    k_gas, k_lining = 0.07, 1.6
    loss = LiningLoss(
        "lining",
        NO_RADIATION,
        constant_law(0.8),
        constant_law(k_gas),
        constant_law(k_lining),
        R1 / R2,
        R1 * log(R2 / R1),
        R1 * log(R3 / R2),
        TC,
    )
    per_metre = log(R2 / R1) / (2 * pi * k_gas) + log(R3 / R2) / (2 * pi * k_lining)
    q, slope = one(loss, 1400.0)
    assert q == pytest.approx((1400.0 - TC) / per_metre / (2 * pi * R1), rel=1e-12)
    assert slope == pytest.approx(1 / per_metre / (2 * pi * R1), rel=1e-12)


def test_a_lining_without_thickness_puts_the_coil_in_view(air):
    R1, R2, _ = RADII
    q, _ = one(round_lining("lining", GREY, air, 1.6, 0.7, (R1, R2, R2), TC), 1400.0)
    radiated = exchange_factor(0.8, 0.7, R1 / R2)[0] * STEFAN_BOLTZMANN * (1400.0**4 - TC**4)
    still_gas = quad(air.conductivity, TC, 1400.0, epsabs=0, epsrel=1e-9, limit=200)[0] / (R1 * log(R2 / R1))
    assert q == pytest.approx(radiated + still_gas, rel=1e-5)


def test_a_thin_lining_tends_to_none(air):
    R1, R2, _ = RADII
    none, _ = one(round_lining("lining", GREY, air, 1.6, 0.7, (R1, R2, R2), TC), 1400.0)
    gaps = [
        none - one(round_lining("lining", GREY, air, 1.6, 0.7, (R1, R2, R2 + t), TC), 1400.0)[0]
        for t in (1e-3, 1e-5, 1e-7)
    ]
    assert gaps[0] > 50 * gaps[1] > 2500 * gaps[2] > 0


@pytest.mark.parametrize("T", [280.0, TC, 400.0, 900.0, 1473.15, 1850.0])
@pytest.mark.parametrize(
    "k_lining",
    [
        ([300.0, 1700.0], [1.2, 1.9]),
        ([300.0, 800.0], [6.0, 0.4]),
        ([300.0, 630.0, 804.0], [50.0, 50.0, 0.04]),
    ],
    ids=["rising", "falling", "plunging: plain Newton runs away"],
)
def test_hot_face_agrees_with_an_independent_root_and_quadrature(air, curve, T, k_lining):
    R1, R2, R3 = RADII
    k, e1 = curve(*k_lining), curve([300.0, 1300.0], [0.4, 0.85])
    e2 = curve([293.15, 773.15, 1273.15], [0.85, 0.65, 0.45])
    loss = round_lining("lining", emissivity_of(e1, True, 280.0), air, k, e2, RADII, TC)

    def through_gap(T2):
        e = 1 / (1 / float(e1(T)) + R1 / R2 * (1 / float(e2(T2)) - 1))
        gas = quad(air.conductivity, T2, T, epsabs=0, epsrel=1e-10, limit=400)[0]
        return e * STEFAN_BOLTZMANN * (T**4 - T2**4) + gas / (R1 * log(R2 / R1))

    def through_lining(T2):
        knees = sorted({TC, T2, *[knee for knee in k_lining[0] if TC < knee < T2]})
        pieces = [quad(k, *ends, epsabs=1e-9, epsrel=1e-12)[0] for ends in pairwise(knees)]
        return np.copysign(sum(pieces), T2 - TC) / (R1 * log(R3 / R2))

    if T == TC:
        assert one(loss, T)[0] == 0.0
        return
    T2 = brentq(lambda T2: through_gap(T2) - through_lining(T2), min(T, TC), max(T, TC), xtol=1e-12)
    assert one(loss, T)[0] == pytest.approx(through_lining(T2), rel=2e-6)


def test_a_wide_round_lining_is_flat(air):
    gap, thickness = 0.006, 0.009
    flat = one(flat_lining("lining", GREY, air, 1.6, 0.7, gap, thickness, TC), 1300.0)
    R = 1000.0
    wide = one(round_lining("lining", GREY, air, 1.6, 0.7, (R, R + gap, R + gap + thickness), TC), 1300.0)
    assert_allclose(wide, flat, rtol=2e-5)


def test_many_faces_give_what_each_gives_alone(air, curve):
    surface = emissivity_of(curve([300.0, 1300.0], [0.4, 0.85]), True, 280.0)
    loss = round_lining("lining", surface, air, curve([300.0, 900.0], [1.2, 1.9]), 0.7, RADII, TC)
    T, peak = np.array([290.0, TC, 700.0, 1400.0]), np.array([290.0, 900.0, 700.0, 1450.0])
    together = np.array(loss.flux(T, peak))
    alone = np.hstack([loss.flux(T[i : i + 1], peak[i : i + 1]) for i in range(T.size)])
    assert_allclose(alone, together, rtol=1e-11, atol=1e-9)


def test_the_oxide_of_the_peak_counts_on_cooling(air, curve):
    surface = emissivity_of(curve([300.0, 1300.0], [0.3, 0.9]), True, 293.15)
    loss = round_lining("lining", surface, air, 1.6, 0.7, RADII, TC)
    T = np.array([900.0])
    assert loss.flux(T, np.array([1300.0]))[0] > 1.05 * loss.flux(T, T)[0]


@pytest.mark.parametrize("radii", [(0.03, 0.03, 0.04), (0.03, 0.035, 0.034)])
def test_refuses_radii_without_a_gap_or_crossed(air, radii):
    with pytest.raises(CaseError, match="must grow outwards, read 30, "):
        round_lining("lining", GREY, air, 1.6, 0.7, radii, TC)


@pytest.mark.parametrize("sizes", [(0.0, 0.01), (0.005, -0.001)])
def test_refuses_a_flat_lining_without_a_gap(air, sizes):
    with pytest.raises(CaseError, match="the gap must be wider than zero"):
        flat_lining("lining", GREY, air, 1.6, 0.7, *sizes, TC)


def test_refuses_a_workpiece_beyond_the_gas_table(air):
    loss = round_lining("lining", GREY, air, 1.6, 0.7, RADII, TC)
    with pytest.raises(OutOfRange, match=r"^lining: conductivity of .* is known from -23 to 1627 °C, asked at 1"):
        one(loss, air.T_max + 1)


def test_refuses_only_the_hot_face_that_is_reached_not_one_that_is_tried(air, curve):
    k = curve([300.0, 1000.0], [0.3, 0.3], beyond="refuse")
    loss = round_lining("lining", GREY, air, k, 0.7, RADII, TC)
    assert one(loss, 980.0)[0] > 0
    assert one(loss, 1010.0)[0] > 0
    with pytest.raises(OutOfRange, match=r"^lining: conductivity of the lining is known from 27 to 727 °C"):
        one(loss, 1700.0)
    with pytest.raises(OutOfRange, match=r"asked at -3.1 °C"):
        round_lining("lining", GREY, air, k, 0.7, RADII, 270.0)


def test_a_temperature_that_is_no_number_is_not_answered(air):
    with pytest.raises(NoConvergence, match=r"^lining: the hot face of the lining was not found"):
        one(round_lining("lining", GREY, air, 1.6, 0.7, RADII, TC), float("nan"))
