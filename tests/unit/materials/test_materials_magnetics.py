"""Permeability: first harmonic against closed forms and a Fourier transform, temperature factor, limits."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import pytest

import materials
from materials.curve import Array
from materials.magnetics import Magnetics
from materials.magnetisation import MU_0, FroehlichKennelly, Law, NormalCurve, describing_function

CURIE = 1043.15
FROEHLICH = FroehlichKennelly(2.0, 1000.0)
NORMAL = NormalCurve(np.array([200.0, 1e3, 1e4, 1e5]), np.array([0.2, 1.0, 1.7, 2.1]), 500.0)
FIELDS = np.array([3.0, 150.0, 700.0, 3e3, 2e4, 3e5, 5e6])


@dataclass(frozen=True)
class Straight:
    initial_susceptibility: float

    def __call__(self, H: npt.ArrayLike) -> Array:
        return self.initial_susceptibility * np.asarray(H, dtype=np.float64)


@dataclass(frozen=True)
class Step:
    """Magnetisation that is saturated in any field."""

    saturation: float
    initial_susceptibility: float = np.inf

    def __call__(self, H: npt.ArrayLike) -> Array:
        return np.full_like(np.asarray(H, dtype=np.float64), self.saturation / MU_0)


def by_fourier(law: Law, H_peak: float) -> float:
    """First harmonic of M over a whole cycle, over the peak field."""
    n = 2**17
    H = H_peak * np.sin(2.0 * np.pi * (np.arange(n) + 0.5) / n)
    M = np.sign(H) * law(np.abs(H))
    return float(2.0 / n * np.abs(np.fft.rfft(M)[1]) / H_peak)


def test_linear_material_keeps_its_susceptibility() -> None:
    assert describing_function(Straight(40.0), FIELDS) == pytest.approx(np.full(FIELDS.size, 40.0), rel=1e-12)


def test_step_magnetisation_has_four_over_pi_of_its_saturation() -> None:
    B_1 = MU_0 * FIELDS * describing_function(Step(1.8), FIELDS)
    assert B_1 == pytest.approx(np.full(FIELDS.size, 4.0 * 1.8 / np.pi), rel=1e-5)


def test_froehlich_against_its_closed_form() -> None:
    # Quarter-cycle integral of sin^2/(sin + k), k = H_k/H > 1, from the tangent half-angle substitution.
    H = np.array([10.0, 300.0, 900.0])
    k = FROEHLICH.H_k / H
    root = np.sqrt(k**2 - 1.0)
    rest = 2.0 / root * (np.arctan((k + 1.0) / root) - np.arctan(1.0 / root))
    expected = 4.0 / np.pi * FROEHLICH.saturation / MU_0 / H * (1.0 - k * np.pi / 2.0 + k**2 * rest)
    assert describing_function(FROEHLICH, H) == pytest.approx(expected, rel=1e-6)


@pytest.mark.parametrize("law", [FROEHLICH, NORMAL], ids=["froehlich", "normal"])
@pytest.mark.parametrize("H", FIELDS)
def test_table_against_fourier(law: FroehlichKennelly | NormalCurve, H: float) -> None:
    definition = "normal" if isinstance(law, NormalCurve) else "froehlich-kennelly"
    magnetics = Magnetics.from_law(definition, law, CURIE, 3.0)
    assert magnetics.definition == definition
    assert not magnetics.linear
    assert float(magnetics.effective_susceptibility(H)) == pytest.approx(by_fourier(law, H), rel=1e-4)


@pytest.mark.parametrize("law", [FROEHLICH, NORMAL], ids=["froehlich", "normal"])
def test_limits_of_the_field(law: FroehlichKennelly | NormalCurve) -> None:
    chi = Magnetics.from_law("normal", law, CURIE, 3.0).effective_susceptibility
    assert float(chi(0.0)) == law.initial_susceptibility
    assert float(chi(1e-3)) == pytest.approx(law.initial_susceptibility, rel=1e-5)
    assert float(chi(1.0 - 1e-9)) == pytest.approx(float(chi(1.0 + 1e-9)), rel=1e-8)
    saturation = float(law(1e9)) * 4.0 / np.pi
    assert float(chi(1e9)) * 1e9 == pytest.approx(saturation, rel=5e-4)
    assert float(chi(1e7)) == pytest.approx(10.0 * float(chi(1e8)), rel=1e-12)


def test_normal_curve_passes_its_points_without_a_jump() -> None:
    assert MU_0 * (NORMAL.H + NORMAL(NORMAL.H)) == pytest.approx(NORMAL.B, rel=1e-12)
    middle = np.sqrt(1e3 * 1e4)
    J = NORMAL.B - MU_0 * NORMAL.H
    assert MU_0 * float(NORMAL(middle)) == pytest.approx(0.5 * (J[1] + J[2]))
    assert MU_0 * float(NORMAL(1e8)) == pytest.approx(J[-1])
    assert float(NORMAL(200.0 * (1 - 1e-12))) == pytest.approx(float(NORMAL(200.0)), rel=1e-9)
    assert float(NORMAL(1e-6)) / 1e-6 == pytest.approx(500.0, rel=1e-6)


def test_effective_table_is_used_as_it_is() -> None:
    H, mu_r = np.array([1e3, 1e4, 1e5]), np.array([600.0, 110.0, 17.0])
    magnetics = Magnetics.from_effective(H, mu_r, CURIE, 3.0)
    assert magnetics.mu_r(H, 293.15) == pytest.approx(mu_r, rel=1e-9)
    assert float(magnetics.mu_r(np.sqrt(1e3 * 1e4), 293.15)) == pytest.approx(355.0)
    assert float(magnetics.mu_r(0.0, 293.15)) == 600.0
    assert float(magnetics.mu_r(1e6, 293.15)) == pytest.approx(1.0 + 1.6)  # polarisation constant: chi as 1/H


def test_constant_at_every_field_and_temperature() -> None:
    magnetics = Magnetics.constant(1.01)
    assert magnetics.linear
    assert magnetics.curie_temperature is None
    mu_r = magnetics.mu_r(np.array([[0.0], [1.0], [1e9]]), np.array([200.0, 3000.0]))
    assert np.array_equal(mu_r, np.full((3, 2), 1.01))


def test_factor() -> None:
    factor = Magnetics.from_law("froehlich-kennelly", FROEHLICH, CURIE, 3.0).factor
    assert float(factor(293.15)) == pytest.approx(1.0, rel=1e-15)
    assert np.array_equal(factor([CURIE, CURIE + 1e-9, 1500.0, 5000.0]), np.zeros(4))
    assert 0.0 < float(factor(CURIE - 1e-3)) < 0.02
    T = np.array([373.15, 673.15, 873.15, 1013.15])
    ellipse = factor(T) * (1.0 - (293.15 / CURIE) ** 3) ** (1 / 3)
    assert ellipse**3 + (T / CURIE) ** 3 == pytest.approx(np.ones(4))


def test_factor_against_the_curve_of_kuzmin() -> None:
    # M. D. Kuz'min, Phys. Rev. Lett. 94, 107204 (2005), iron: s = 0.35, p = 4 (from memory).
    def kuzmin(T: Array) -> Array:
        t = T / CURIE
        return np.asarray((1.0 - 0.35 * t**1.5 - 0.65 * t**4) ** (1.0 / 3.0))

    T = np.arange(293.15, 1040.0, 10.0)
    expected = kuzmin(T) / kuzmin(np.array([293.15]))
    factor = Magnetics.from_law("froehlich-kennelly", FROEHLICH, CURIE, 3.0).factor
    assert np.abs(factor(T) - expected).max() < 0.015


@pytest.mark.parametrize("key", ["steel-c45", "iron"])
def test_shipped_magnetic_materials(key: str) -> None:
    magnetics = materials.get(key).magnetics
    assert magnetics.definition == "normal"
    assert magnetics.curie_temperature is not None
    fields = np.logspace(0, 7, 50)
    assert np.array_equal(magnetics.mu_r(fields, magnetics.curie_temperature), np.ones(50))
    assert np.array_equal(magnetics.mu_r(fields, 1500.0), np.ones(50))
    mu_r = magnetics.mu_r(fields[:, None], np.array([293.15, 673.15, 993.15]))
    assert np.all(np.diff(mu_r, axis=1) < 0.0)
    assert np.all(np.diff(mu_r[fields > 3e3, 0]) < 0.0)
    assert np.all(mu_r > 1.0)


@pytest.mark.parametrize(("H", "mu_r"), [(2141.0, 523.9), (6691.0, 203.1), (16320.0, 92.36), (79910.0, 20.9)])
def test_permeability_of_c45_against_its_published_curve(H: float, mu_r: float) -> None:
    # B/(mu0 H), Metals Handbook 1966. Where M(H) is concave the first harmonic exceeds M at the peak field, by
    # 4/pi at most, and comes the closer to that the flatter the curve is.
    ratio = (float(materials.get("steel-c45").magnetics.mu_r(H, 293.15)) - 1.0) / (mu_r - 1.0)
    assert 1.0 < ratio < 4.0 / np.pi
    if H > 1e4:
        assert ratio > 1.2


def test_non_magnetic_materials() -> None:
    for key, mu_r in (("stainless-304", 1.01), ("copper", 1.0), ("aluminium-6082", 1.0)):
        material = materials.get(key)
        assert material.curie_temperature is None
        assert np.all(material.magnetics.mu_r([0.0, 1e4], 293.15) == mu_r)
