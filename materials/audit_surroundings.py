"""Plausibility checks on gases and linings."""

import numpy as np

from materials.finding import Book, Finding, celsius
from materials.gas import Gas
from materials.limits import GAS, LINING
from materials.material import Lining
from materials.property import Property

PRESSURE = 101325.0
GAS_CONSTANT = 8.31446261815324
"""[J/(mol K)]; CODATA 2018."""

IDEAL, IDEAL_WRONG = 0.03, 0.15
"""Spread of rho T over the table: real gases depart by 1 to 2 % near their condensation, mistakes by more."""

HEAT = (2.5, 8.0)
"""Molar heat capacity over R: 5/2 of a gas of atoms is the least there is (kinetic theory); hot carbon dioxide 7.3."""

PRANDTL, PRANDTL_POSSIBLE = (0.5, 1.1), (0.2, 3.0)
"""Gases of atoms have 0.66, of two atoms 0.7, steam about 1; mixtures of helium and a heavy gas 0.2 to 0.5."""

HOT_FACE = 1273.15
"""A lining round hot steel sees this [K] (common practice)."""


def audit_gas(gas: Gas) -> list[Finding]:
    """Check one gas."""
    book = Book(gas.key)
    book.sources(gas.data, gas.references.values())
    tables = {name: getattr(gas, name) for name in ("density", "viscosity", "conductivity", "heat_capacity")}
    for name, table in tables.items():
        book.limits_over(name.replace("_", " "), table.T, table.value, GAS[name])
    for name in ("viscosity", "conductivity"):
        _rises(book, name, tables[name])
    low, high = max(each.T_min for each in tables.values()), min(each.T_max for each in tables.values())
    whole = low <= gas.T_min and high >= gas.T_max
    found = f"all four from {low:g} to {high:g} K"
    book.judge_number("same range", False, not whole, found, f"that of the density, {gas.T_min:g} to {gas.T_max:g} K")
    M = gas.density.value * GAS_CONSTANT * gas.density.T / PRESSURE
    spread = float(M.max() / M.min() - 1.0)
    book.judge_number(
        "ideal gas",
        spread > IDEAL,
        spread > IDEAL_WRONG,
        f"density times temperature gives {1e3 * M.min():.4g} to {1e3 * M.max():.4g} g/mol",
        f"the same molar mass within {100 * IDEAL:g} %",
    )
    T = gas.density.T[(gas.density.T >= low) & (gas.density.T <= high)]
    if T.size == 0:
        return book.close()
    heat = gas.heat_capacity(T) * M[-1] / GAS_CONSTANT
    off = (heat < HEAT[0] * 0.99) | (heat > HEAT[1])
    book.judge(
        "molar heat",
        T,
        off,
        off,
        lambda i: f"{heat[i]:.3g} times R at {celsius(T[i])}",
        f"{heat.min():.3g} to {heat.max():.3g} times R",
        f"{HEAT[0]:g} to {HEAT[1]:g} times R",
    )
    Pr = gas.prandtl(T)
    book.judge(
        "Prandtl number",
        T,
        (Pr < PRANDTL[0]) | (Pr > PRANDTL[1]),
        (Pr < PRANDTL_POSSIBLE[0]) | (Pr > PRANDTL_POSSIBLE[1]),
        lambda i: f"{Pr[i]:.3g} at {celsius(T[i])}",
        f"{Pr.min():.3g} to {Pr.max():.3g}",
        f"{PRANDTL[0]:g} to {PRANDTL[1]:g}",
    )
    return book.close()


def audit_lining(lining: Lining) -> list[Finding]:
    """Check one lining."""
    book = Book(lining.key)
    book.sources(lining.data, lining.references.values())
    book.limits("density", lining.density, LINING["density"])
    for name, table in (("conductivity", lining.conductivity), ("emissivity", lining.emissivity)):
        book.limits_over(name, table.T, table.value, LINING[name])
        cold, hot = table.T_min > 303.15, table.T_max < HOT_FACE
        ends = [f"below {celsius(table.T_min)}"] * cold + [f"above {celsius(table.T_max)}"] * hot
        done = "held" if table.beyond == "hold" else "refused"
        found = f"{done} {' and '.join(ends)}" if ends else f"to {celsius(table.T_max)}"
        book.add(f"reach of {name}", found, f"from 20 °C to {celsius(HOT_FACE)}", "remark" if ends else "ok")
    return book.close()


def _rises(book: Book, name: str, table: Property) -> None:
    T, falls = table.T, np.diff(table.value) <= 0.0
    book.judge(
        f"{name} rises",
        0.5 * (T[:-1] + T[1:]),
        falls,
        falls,
        lambda i: f"falls from {celsius(T[i])} to {celsius(T[i + 1])}",
        "rises with temperature",
        "rises with temperature",
    )
