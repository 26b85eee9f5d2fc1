"""Enthalpy tables against exact integration of the specific heat."""

from itertools import pairwise

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.optimize import brentq

import materials
from materials.caloric import T_REFERENCE, Caloric, Transition
from materials.errors import MaterialError
from materials.property import Property
from materials.source import Source

HERE = Source("from-memory", "made up for this test", "assumed")


def heat(T: list[float], value: list[float]) -> Property:
    return Property("cp", np.array(T), np.array(value), "linear", "hold", 0.0, "J/(kg K)", HERE)


def exact(cp: Property, transitions: tuple[Transition, ...], T: float) -> float:
    """Enthalpy by adaptive quadrature of the property, split at its points; independent of the table."""
    low, high = sorted((T_REFERENCE, T))
    inner = [float(t) for t in cp.T if low < t < high]
    points = [low, *inner, high]
    sensible = sum(quad(cp, a, b, epsabs=1e-9, epsrel=1e-12, limit=200)[0] for a, b in pairwise(points))
    latent = sum(t.heat * min(max((T - t.start) / (t.end - t.start), 0.0), 1.0) for t in transitions)
    return float(np.sign(T - T_REFERENCE)) * sensible + latent


PEAK_AS_TRANSITION = Caloric.build(heat([293.15, 1500.0], [600.0, 700.0]), [Transition("peak", 1000, 1001, 1e5)])
PEAK_AS_TABLE = heat([293.15, 999.5, 1000.0, 1000.5, 1500.0], [600.0, 650.0, 2e5, 650.0, 700.0])


def check_table(table: Caloric, cp: Property) -> None:
    """Largest difference between T(h) of the table and the exact curve, at 20 places of every segment.

    Gauss-Legendre quadrature of cp from node to node: every corner of cp and of the transitions is a node.
    """
    corners = [t for t in cp.T if t >= table.T_nodes[0]] + [e for t in table.transitions for e in (t.start, t.end)]
    assert set(corners) <= set(table.T_nodes)
    x, w = np.polynomial.legendre.leggauss(12)
    left, width = table.T_nodes[:-1, None], np.diff(table.T_nodes)[:, None]
    rate = np.zeros_like(left)
    for t in table.transitions:
        inside = (left >= t.start) & (left < t.end)
        rate = rate + np.where(inside, t.heat / (t.end - t.start), 0.0)

    def from_left(share: float) -> np.ndarray:
        at = left + width * share * (x + 1.0) / 2.0
        return (cp(at) + rate) @ w * (width[:, 0] * share / 2.0)

    h_nodes = np.concatenate(([0.0], np.cumsum(from_left(1.0))))
    h_nodes -= h_nodes[table.T_nodes == T_REFERENCE]
    for share in np.linspace(0.0, 1.0, 20, endpoint=False):
        T = left[:, 0] + width[:, 0] * share
        assert np.abs(table.temperature(h_nodes[:-1] + from_left(float(share))) - T).max() < 0.01


@pytest.mark.parametrize("key", materials.names())
def test_table_error_of_the_shipped_materials(key: str) -> None:
    material = materials.get(key)
    check_table(material.caloric, material.specific_heat)


def test_table_error_at_a_narrow_peak() -> None:
    check_table(Caloric.build(PEAK_AS_TABLE), PEAK_AS_TABLE)
    check_table(PEAK_AS_TRANSITION, heat([293.15, 1500.0], [600.0, 700.0]))
    T = PEAK_AS_TABLE
    content = float(Caloric.build(T).enthalpy(1000.5) - Caloric.build(T).enthalpy(999.5))
    assert content == pytest.approx(2e5 * 0.5 + 650.0 * 0.5, rel=1e-9)  # two triangles of 0.5 K on a base of 650


@pytest.mark.parametrize("key", materials.names())
def test_monotone_and_zero_at_20_celsius(key: str) -> None:
    table = materials.get(key).caloric
    assert np.all(np.diff(table.T_nodes) > 0.0)
    assert np.all(np.diff(table.h_nodes) > 0.0)
    assert float(table.enthalpy(293.15)) == 0.0
    assert float(table.enthalpy(283.15)) < 0.0
    assert table.T_nodes[0] <= 173.15
    liquidus = materials.get(key).liquidus
    assert liquidus is not None
    assert table.T_nodes[-1] >= max(liquidus, table.T_max) + 300.0


@pytest.mark.parametrize("key", materials.names())
def test_there_and_back(key: str) -> None:
    table = materials.get(key).caloric
    T = np.linspace(table.T_nodes[0], table.T_nodes[-1], 3001)
    assert table.temperature(table.enthalpy(T)) == pytest.approx(T, abs=1e-9)


@pytest.mark.parametrize("key", materials.names())
def test_latent_heat_is_exact(key: str) -> None:
    material = materials.get(key)
    assert material.solidus is not None and material.liquidus is not None and material.latent_heat is not None
    middle = 0.5 * (material.solidus + material.liquidus)
    half = max(material.liquidus - material.solidus, 1.0) / 2.0
    below, above = middle - half, middle + half
    taken_up = float(material.caloric.enthalpy(above) - material.caloric.enthalpy(below))
    sensible = quad(material.specific_heat, below, above)[0]
    assert taken_up - sensible == pytest.approx(material.latent_heat, rel=1e-9)


def test_transformations_of_iron_add_their_heat() -> None:
    iron = materials.get("iron")
    for celsius, joule in ((912.0, 16.1e3), (1394.0, 15e3)):
        a, b = celsius + 273.15 - 1.0, celsius + 273.15 + 1.0
        taken_up = float(iron.caloric.enthalpy(b) - iron.caloric.enthalpy(a))
        assert taken_up - quad(iron.specific_heat, a, b)[0] == pytest.approx(joule, rel=1e-9)


def test_heat_capacity_is_the_slope_of_the_table() -> None:
    table = materials.get("steel-c45").caloric
    T = np.array([250.0, 400.3, 1007.77, 1500.1, 1750.1])
    d = 1e-4
    slope = (table.enthalpy(T + d) - table.enthalpy(T - d)) / (2 * d)
    assert table.heat_capacity(T) == pytest.approx(slope, rel=1e-6)
    assert float(table.heat_capacity(1750.0)) == pytest.approx(650.0 + 260e3 / 65.0, rel=1e-9)


def test_inversion_agrees_with_root_finding() -> None:
    material = materials.get("steel-c45")
    for h in (1e5, 470e3, 480e3, 8e5, 1.2e6):
        root = brentq(lambda T, h=h: exact(material.specific_heat, material.caloric.transitions, T) - h, 300, 2200)
        assert float(material.caloric.temperature(h)) == pytest.approx(root, abs=0.01)


def test_narrow_melting_is_widened_about_its_middle() -> None:
    sharp = Transition.around("melting", 1357.75, 1357.75, 2e5)
    assert (sharp.start, sharp.end) == (1357.25, 1358.25)
    wide = Transition.around("melting", 1700.0, 1765.0, 2e5)
    assert (wide.start, wide.end) == (1700.0, 1765.0)


def test_refusals() -> None:
    with pytest.raises(MaterialError, match="sharp: spread the heat over at least 1 K"):
        Caloric.build(heat([300.0], [500.0]), [Transition("sharp", 1000.0, 1000.5, 1e5)])
    with pytest.raises(MaterialError, match="above zero"):
        Caloric.build(heat([300.0, 400.0, 500.0], [500.0, -500.0, 500.0]))
    table = Caloric.build(heat([300.0], [500.0]))
    with pytest.raises(MaterialError, match="temperature 100 K is outside"):
        table.enthalpy(100.0)
    with pytest.raises(MaterialError, match=r"enthalpy 1e\+09 J/kg is outside"):
        table.temperature(1e9)
