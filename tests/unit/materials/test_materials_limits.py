"""What no metal, lining or gas can have is refused when the file is read, with the bounds and their reason."""

import re
import tomllib
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

import materials
from materials import database
from materials.errors import MaterialError
from materials.limits import GAS, LINING, METAL, Limits
from materials.parsing import gas_from, lining_from, material_from
from materials.reader import Section

DATA = Path(materials.__file__).parent / "data"


def read(key: str, change: Callable[[dict[str, Any]], None]) -> object:
    (path,) = DATA.glob(f"*/{key}.toml")
    values = tomllib.loads(path.read_text(encoding="utf-8"))
    change(values)
    by_folder = {"gas": gas_from, "lining": lining_from}
    return by_folder.get(path.parent.name, material_from)(Section("mine.toml", "", values), database.sources())


def put(table: str, key: str, value: object) -> Callable[[dict[str, Any]], None]:
    def change(values: dict[str, Any]) -> None:
        for part in table.split("."):
            values = values[part]
        values[key] = value

    return change


REFUSED: dict[str, tuple[str, Callable[[dict[str, Any]], None], str]] = {
    "W/(cm K) taken for W/(m K)": (
        "iron",
        put("conductivity", "value", [0.8] * 21),
        "conductivity.value: must be 1 to 500 W/(m K) (silver 430 W/(m K), alloys of nickel or titanium 7 to 9 "
        "W/(m K)), found 0.8 W/(m K) at 20 °C",
    ),
    "g/cm3 taken for kg/m3": (
        "iron",
        put("density", "value", "7.87 kg/m3"),
        "density.value: must be 400 to 25000 kg/m3 (magnesium 1738 kg/m3, osmium 22 590 kg/m3), found 7.87 kg/m3",
    ),
    "ohm m taken for uohm cm": (
        "copper",
        put("resistivity", "value", [1.7e-8] * 14),
        "resistivity.value: must be 0.5 to 10000 uohm cm (",
    ),
    "kJ taken for J": (
        "copper",
        put("specific_heat", "value", [0.385] * 15),
        "specific_heat.value: must be 80 to 100000",
    ),
    "MJ taken for kJ": (
        "copper",
        put("latent_heat", "value", "0.2 kJ/kg"),
        "latent_heat.value: must be 5 to 2000 kJ/kg",
    ),
    "kg/mol": ("copper", put("molar_mass", "value", "0.0635 g/mol"), "molar_mass.value: must be 6.9 to 245 g/mol"),
    "solidus": ("copper", put("solidus", "value", "10 °C"), "solidus.value: must be 25 to 3526.85 °C (indium 157 °C, "),
    "no room for a magnet": (
        "steel-42crmo4",
        put("magnetics", "saturation", "3 T"),
        "magnetics.saturation: must be 0 to 2.6 T (iron with 35 % cobalt 2.45 T, the highest of all), found 3 T",
    ),
    "curve beyond saturation": (
        "nickel",
        put("magnetics", "B_unit", "mT"),
        "magnetics.B: needs one number for each H, ",
    ),
    "gauss taken for tesla": (
        "iron",
        put("magnetics", "B", [3.0 + 0.01 * i for i in range(35)]),
        "magnetics.B: must be 0 to 2.6 T",
    ),
    "constant": ("copper", put("magnetics", "mu_r", "2e6"), "magnetics.mu_r: must be 0.5 to 1e+06 ("),
    "hotter than cobalt": (
        "iron",
        put("curie_temperature", "value", "1200 °C"),
        "curie_temperature.value: must be 26.85 to 1156.85 °C (cobalt 1121 °C, the highest of all), found 1200 °C",
    ),
    "heat of a transformation": (
        "iron",
        put("transformation.alpha-gamma", "heat", "16 MJ/kg"),
        "transformation.alpha-gamma.heat: must be 0.001 to 1000 kJ/kg",
    ),
    "gas": ("argon", put("conductivity", "unit", "W/(cm K)"), "conductivity.value: must be 1e-05 to 0.03 W/(cm K) ("),
    "lining": ("castable-alumina", put("density", "value", "2.7 kg/m3"), "density.value: must be 10 to 10000 kg/m3 ("),
    "exception upside down": (
        "titanium-grade2",
        put("exception.transus", "to", "800 °C"),
        "exception.transus.to: must not be below from",
    ),
    "exception without reason": (
        "titanium-grade2",
        put("exception.transus", "reason", " "),
        "exception.transus.reason: must be a text in quotes",
    ),
    "exception without source": (
        "titanium-grade2",
        lambda values: values["exception"]["transus"].pop("source") and None,
        "exception.transus.source: missing, every number names its source",
    ),
}


@pytest.mark.parametrize(("key", "change", "message"), REFUSED.values(), ids=REFUSED.keys())
def test_refused_with_bounds_and_reason(key: str, change: Callable[[dict[str, Any]], None], message: str) -> None:
    with pytest.raises(MaterialError, match=f"^{re.escape(f'mine.toml: {message}')}"):
        read(key, change)


def test_effective_curve_that_carries_more_than_any_metal() -> None:
    def change(values: dict[str, Any]) -> None:
        cite = {name: values["magnetics"][name] for name in ("source", "locator", "kind", "uncertainty")}
        values["magnetics"] = {
            "curve": "effective", "H": [1, 100], "H_unit": "kA/m", "mu_r": [600, 60], "mu_r_unit": "1", **cite,
        }  # fmt: skip

    with pytest.raises(MaterialError, match=r"magnetics\.mu_r: must be 0 to 2\.6 T .*, found 5\.8"):
        read("iron", change)


@pytest.mark.parametrize("limits", [*METAL.values(), *LINING.values(), *GAS.values()])
def test_usual_lies_within_possible(limits: Limits) -> None:
    assert limits.possible[0] <= limits.usual[0] < limits.usual[1] <= limits.possible[1]
    assert limits.impossible(limits.possible).size == 0
    assert limits.unusual(limits.usual).size == 0
    assert limits.impossible([limits.possible[0] - 1e-12, limits.possible[1] * 1.001]).tolist() == [0, 1]
