"""What is known of the shipped alloys besides the tables in their files."""

import numpy as np
import pytest

import materials
from materials.magnetics import Magnetics
from materials.magnetisation import FroehlichKennelly
from materials.material import Material

ZERO = 273.15
IACS = 1.7241e-8
"""Resistivity of annealed copper of 100 % IACS at 20 °C [ohm m]; IEC 60028."""

ALIASES = {
    "steel-c10": ("C10", "1.0301", "C10E", "1.1121", "Ck10", "AISI-1010", "G10100"),
    "steel-42crmo4": ("42CrMo4", "1.7225", "AISI-4140", "G41400"),
    "nickel": ("Ni",),
    "brass-cuzn37": ("CuZn37", "CW508L", "C27200"),
    "aluminium-1050": ("EN-AW-1050A", "Al99.5"),
    "titanium-grade2": ("3.7035", "R50400"),
}


def heat(material: Material, t: float) -> float:
    """Heat content from 20 °C to t °C [kJ/kg]."""
    return float(material.caloric.enthalpy(t + ZERO)) / 1e3


@pytest.mark.parametrize("key", ALIASES)
def test_trade_designations(key: str) -> None:
    for alias in ALIASES[key]:
        assert materials.get(alias).key == key


def test_titanium_transus() -> None:
    titanium = materials.get("titanium-grade2")
    below, above = titanium.resistivity([880.0 + ZERO, 890.0 + ZERO])
    assert below / above - 1.0 == pytest.approx(0.075, abs=0.002)
    assert np.all(np.diff(titanium.resistivity(np.arange(20.0, 881.0, 20.0) + ZERO)) > 0.0)
    assert np.all(np.diff(titanium.resistivity(np.arange(890.0, 1601.0, 20.0) + ZERO)) > 0.0)
    # 4.17 kJ/mol of transformation (JANAF, from memory), besides 10 K of specific heat.
    assert heat(titanium, 890.0) - heat(titanium, 880.0) == pytest.approx(4.17 / 47.867e-3 + 6.3, abs=0.5)
    (exemption,) = titanium.exemptions
    assert (exemption.check, exemption.start, exemption.end) == ("resistivity rises", 880.0 + ZERO, 890.0 + ZERO)


def test_42crmo4_takes_up_the_heat_of_carbon_steel_by_900_degrees() -> None:
    chromium, carbon = materials.get("steel-42crmo4"), materials.get("steel-c10")
    assert heat(chromium, 900.0) == pytest.approx(heat(carbon, 900.0), rel=5e-3)
    assert heat(chromium, 790.0) - heat(chromium, 745.0) == pytest.approx(76.6 + 45e-3 * 750.0, rel=0.02)
    assert np.all(chromium.caloric.heat_capacity(np.array([730.0, 800.0]) + ZERO) < 900.0)


def test_nickel_is_magnetic_up_to_its_curie_point_and_soft() -> None:
    magnetics = materials.get("nickel").magnetics
    assert magnetics.curie_temperature == pytest.approx(358.0 + ZERO)
    strong = np.full(3, 2e5)
    mu_r = magnetics.mu_r(strong, np.array([20.0, 300.0, 358.0]) + ZERO)
    assert mu_r[0] > mu_r[1] > mu_r[2] == 1.0
    # J. Crangle, G. M. Goodman, Proc. R. Soc. Lond. A 321, 477 (1971), from memory: 55.1 A m2/kg at 20 °C, 0.616 T
    saturation = 4e-7 * np.pi * float(mu_r[0] - 1.0) * 2e5 * np.pi / 4.0
    assert saturation == pytest.approx(0.616, rel=0.03)


def test_conductivity_of_the_non_ferrous_grades_in_iacs() -> None:
    # Grade sheets (from memory): EN AW-1050A 60 to 62 % IACS, CuZn37 26 to 28 % IACS
    assert IACS / float(materials.get("aluminium-1050").resistivity(20.0 + ZERO)) == pytest.approx(0.61, abs=0.01)
    assert IACS / float(materials.get("brass-cuzn37").resistivity(20.0 + ZERO)) == pytest.approx(0.27, abs=0.01)


def test_permeability_of_42crmo4_is_below_that_of_annealed_steel() -> None:
    H, T = np.array([1e3, 5e3, 2e4, 1e5]), np.full(4, 20.0 + ZERO)
    tempered, annealed = (materials.get(key).magnetics for key in ("steel-42crmo4", "steel-c45"))
    assert np.all(tempered.mu_r(H, T) < annealed.mu_r(H, T))
    # What the note in the file says: from 20 kA/m up half as much H_k again matters little.
    assert tempered.curie_temperature is not None
    harder = Magnetics.from_law("froehlich-kennelly", FroehlichKennelly(1.98, 3300.0), tempered.curie_temperature, 3.0)
    assert np.all(harder.mu_r(H, T)[2:] > 0.9 * tempered.mu_r(H, T)[2:])


def test_oxides_that_stay_are_marked() -> None:
    grows = {key: materials.get(key).surfaces["oxidised"].grows for key in ALIASES}
    assert grows == {
        "steel-c10": True,
        "steel-42crmo4": True,
        "nickel": True,
        "brass-cuzn37": False,
        "aluminium-1050": False,
        "titanium-grade2": True,
    }
    assert not any(materials.get(key).surfaces["bright"].grows for key in ALIASES)
