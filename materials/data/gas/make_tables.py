"""Make the gas tables with CoolProp: python make_tables.py (run it in this folder or anywhere else).

At 101 325 Pa. CoolProp's own validity ends at 2000 K for all four gases and reaches down to where they condense
(nitrogen 77.4 K, argon 87.3 K, helium 4.2 K). The tables begin at 120 K: below it the expansion coefficients of
nitrogen and argon depart by more than 4 % from the 1/T that the free convection takes, and the viscosity equation of
helium jumps by 1.6 % at 100 K. Air: 250 K to 1900 K.
"""

from dataclasses import dataclass
from pathlib import Path

import CoolProp
import numpy as np
from CoolProp.CoolProp import PT_INPUTS, AbstractState
from numpy.typing import NDArray

PRESSURE = 101325.0
PROPERTIES = (
    ("density", "kg/m3", "rhomass"),
    ("viscosity", "Pa s", "viscosity"),
    ("conductivity", "W/(m K)", "conductivity"),
    ("heat_capacity", "J/(kg K)", "cpmass"),
)


@dataclass(frozen=True)
class Table:
    """One file.

    T : nodes [K] ; spacing : of them, in words ; sources, uncertainty : of density, viscosity, conductivity and heat
    capacity, the latter of a dilute gas as the works state it (from memory), rounded up ; note : on the two transport
    properties.
    """

    key: str
    fluid: str
    title: str
    T: NDArray[np.float64]
    spacing: str
    sources: tuple[str, str, str, str]
    uncertainty: tuple[str, str, str, str]
    note: str = ""


LEMMON = ("lemmon-jacobsen-2004", "lemmon-jacobsen-2004")
RISING = np.round(np.geomspace(120.0, 2000.0, 59))
SPACING = "in steps of about 5 %"
GASES = (
    Table(
        "air",
        "Air",
        "Dry air at 101325 Pa",
        np.arange(250.0, 1901.0, 25.0),
        "in steps of 25 K",
        ("lemmon-2000", *LEMMON, "lemmon-2000"),
        ("0.1 %", "2 %", "3 %", "1 %"),
    ),
    Table(
        "nitrogen",
        "Nitrogen",
        "Nitrogen at 101325 Pa",
        RISING,
        SPACING,
        ("span-2000", *LEMMON, "span-2000"),
        ("0.1 %", "2 %", "4 %", "1 %"),
    ),
    Table(
        "argon",
        "Argon",
        "Argon at 101325 Pa",
        RISING,
        SPACING,
        ("tegeler-1999", *LEMMON, "tegeler-1999"),
        ("0.1 %", "2 %", "3 %", "1 %"),
    ),
    Table(
        "helium",
        "Helium",
        "Helium at 101325 Pa",
        RISING,
        SPACING,
        ("ortiz-vega-helium", "arp-1998", "hands-arp-1981", "ortiz-vega-helium"),
        ("0.1 %", "3 %", "4 %", "1 %"),
        "published for up to 1500 K, continued above",
    ),
)


def column(numbers: list[float]) -> str:
    """Numbers as a TOML list, ten to a line."""
    texts = [f"{number:.7g}" for number in numbers]
    lines = (", ".join(texts[i : i + 10]) for i in range(0, len(texts), 10))
    return "[\n" + "".join(f"    {line},\n" for line in lines) + "]"


def text(gas: Table) -> str:
    """The whole file."""
    state = AbstractState("HEOS", gas.fluid)
    rows: dict[str, list[float]] = {name: [] for name, *_ in PROPERTIES}
    for each in gas.T:
        state.update(PT_INPUTS, PRESSURE, float(each))
        for name, _, method in PROPERTIES:
            rows[name].append(getattr(state, method)())
    parts = [
        f"# Made by make_tables.py with CoolProp {CoolProp.__version__} at 101325 Pa,\n"
        f"# {gas.T[0]:g} K to {gas.T[-1]:g} K {gas.spacing}. Do not edit: change the script and run it.\n\n"
        f'format = 1\nkey = "{gas.key}"\ntitle = "{gas.title}"\n'
    ]
    for (name, unit, _), source, uncertainty in zip(PROPERTIES, gas.sources, gas.uncertainty, strict=True):
        transport = name in ("viscosity", "conductivity")
        equation = f"{name} equation" if transport else "equation of state"
        parts.append(
            f'\n[{name}]\nT = {column([float(t) for t in gas.T])}\nT_unit = "K"\n'
            f'value = {column(rows[name])}\nunit = "{unit}"\nrule = "monotone"\nbeyond = "refuse"\n'
            f'source = "{source}"\nlocator = "{equation}, evaluated with CoolProp (bell-2014)"\nkind = "recommended"\n'
            f'uncertainty = "{uncertainty}"\n' + (f'note = "{gas.note}"\n' if transport and gas.note else "")
        )
    return "".join(parts)


def main() -> None:
    """Write the files beside this script."""
    for gas in GASES:
        (Path(__file__).parent / f"{gas.key}.toml").write_text(text(gas), encoding="utf-8")


if __name__ == "__main__":
    main()
