"""Heat contents of the shipped data against published formulas, in kWh per tonne from 20 °C."""

import math

import pytest

import materials
from materials.formulas import CarbonSteelHeat

ZERO = 273.15

# EN 1993-1-2:2005 clause 3.4.1.2, integrated by hand.
EN_STEEL = {200: 24.498, 600: 93.261, 800: 156.000, 900: 175.573, 1000: 193.629, 1100: 211.684, 1200: 229.740}
# NIST Chemistry WebBook, Shomate equations of iron (coefficients after Chase 1998), integrated over its phases.
SHOMATE_IRON = {
    200: 24.19,
    600: 91.16,
    800: 144.60,
    900: 167.86,
    1000: 187.84,
    1100: 207.03,
    1200: 226.26,
    1250: 236.02,
}
# Shomate coefficients A B C D E of the solid, NIST Chemistry WebBook after Chase 1998, J/(mol K) over T/1000.
SHOMATE = {
    "copper": (63.546e-3, (17.72891, 28.09870, -31.25289, 13.97243, 0.068611)),
    "aluminium-6082": (26.981539e-3, (28.08920, -5.414849, 8.560423, 3.427370, -0.277375)),
}


def content(key: str, celsius: float) -> float:
    return float(materials.get(key).caloric.enthalpy(celsius + ZERO)) / 3600.0


def test_en_formula_pieces_are_exact() -> None:
    law = CarbonSteelHeat()
    assert float(law.integral(600 + ZERO, 735 + ZERO)) / 3600 == pytest.approx(38.80277651, abs=1e-8)
    assert float(law.integral(735 + ZERO, 900 + ZERO)) / 3600 == pytest.approx(43.51000822, abs=1e-8)
    assert float(law.integral(900 + ZERO, 1400 + ZERO)) == pytest.approx(650 * 500.0)
    closed = (666 * 135 + 13002 * math.log(138 / 3)) / 3600
    assert float(law.integral(600 + ZERO, 735 + ZERO)) / 3600 == pytest.approx(closed, rel=1e-12)


def test_en_formula_values() -> None:
    law = CarbonSteelHeat()
    # Values of the formula as printed, worked out for single temperatures; 5000 is the tabulated peak.
    for celsius, cp in ((20, 439.80), (400, 605.88), (735, 5000.0), (800, 803.26), (1000, 650.0), (1350, 650.0)):
        assert float(law(celsius + ZERO)) == pytest.approx(cp, abs=0.006)
    assert float(law(-50 + ZERO)) == float(law(20 + ZERO))


@pytest.mark.parametrize("celsius", [-30.0, 100.0, 650.0, 734.0, 736.0, 850.0, 1000.0, 1300.0])
def test_en_formula_slope(celsius: float) -> None:
    law, d = CarbonSteelHeat(), 1e-4
    T = celsius + ZERO
    assert float(law.slope(T)) == pytest.approx(float(law(T + d) - law(T - d)) / (2 * d), rel=1e-5, abs=1e-6)


@pytest.mark.parametrize(("celsius", "expected"), EN_STEEL.items())
def test_carbon_steel(celsius: int, expected: float) -> None:
    # The table of T(h) is good to 0.01 K; at 735 °C that is 0.014 kWh/t, elsewhere 0.002.
    assert content("steel-c45", celsius) == pytest.approx(expected, abs=0.003)


def test_carbon_steel_held_above_the_data() -> None:
    assert content("steel-c45", 1250) == pytest.approx(238.768, abs=0.003)
    assert 225 < content("steel-c45", 1200) < 240
    assert 235 < content("steel-c45", 1250) < 250


@pytest.mark.parametrize(("celsius", "expected"), SHOMATE_IRON.items())
def test_iron_within_its_stated_uncertainty(celsius: int, expected: float) -> None:
    iron = materials.get("iron")
    transformed = 16.1e3 / 3600 if celsius > 912 else 0.0
    latent = next(d.uncertainty for d in iron.data if d.name == "transformation (alpha-gamma)")
    band = iron.specific_heat.uncertainty * (expected - transformed) + latent * transformed
    assert abs(content("iron", celsius) - expected) < band


@pytest.mark.parametrize(
    ("key", "celsius"),
    [(key, c) for key, top in (("copper", 1050), ("aluminium-6082", 500)) for c in range(100, top + 1, 100)],
)
def test_copper_and_aluminium_against_shomate(key: str, celsius: int) -> None:
    mass, (a, b, c, d, e) = SHOMATE[key]

    def molar(t: float) -> float:
        return 1000.0 * (a * t + b * t**2 / 2 + c * t**3 / 3 + d * t**4 / 4 - e / t)

    expected = (molar((celsius + ZERO) / 1000) - molar(0.29315)) / mass / 3.6e6 * 1000
    band = materials.get(key).specific_heat.uncertainty
    assert content(key, celsius) == pytest.approx(expected, rel=band)


def test_molten_copper_has_its_latent_heat() -> None:
    # CRC Handbook: 13.26 kJ/mol over 63.546 g/mol.
    step = content("copper", 1085.1) - content("copper", 1084.1)
    assert step * 3600 == pytest.approx(13.26e3 / 63.546e-3 + 524.7, rel=1e-3)
