"""Plausibility checks on data that were read without complaint: what is odd about them, and what cannot be."""

import math

import numpy as np

from materials.audit_surroundings import GAS_CONSTANT, audit_gas, audit_lining
from materials.caloric import T_REFERENCE
from materials.finding import Book, Finding, celsius
from materials.gas import Gas
from materials.limits import METAL
from materials.magnetisation import MU_0
from materials.material import Lining, Material
from materials.property import Property

LORENZ = (math.pi * 1.380649e-23 / 1.602176634e-19) ** 2 / 3.0
"""Sommerfeld's value of k rho/T, 2.443e-8 V2/K2; constants exact since 2019."""

LORENZ_LOW, LORENZ_HIGH = 0.8, 1.3
"""Of Sommerfeld's value, without the lattice: aluminium and nickel have 0.88 at 20 °C, iron 1.27 at 400 °C, tungsten
1.33 at 20 °C (from the conductivities and resistivities that the J. Phys. Chem. Ref. Data recommends)."""

LATTICE = 10.0 * 300.0
"""Conductivity of the lattice beside that of the electrons, at most, times T [W/m]: up to 10 W/(m K) in alloys at room
temperature, falling as 1/T. P. G. Klemens, R. K. Williams, Int. Metals Reviews 31, 197 (1986), from memory."""

MOLAR_HEAT_20 = (0.85, 1.15)
"""Heat capacity at 20 °C over 3R: metals from aluminium and magnesium to lead lie in 0.96 to 1.07; A. T. Petit, P. L.
Dulong, Ann. Chim. Phys. 10, 395 (1819)."""

MOLAR_HEAT_MEAN = (0.95, 1.75)
"""Mean heat capacity from 20 °C to the end of the data over 3R; iron with its magnetic and gamma heats has 1.54."""

MOLAR_HEAT_POSSIBLE = (0.5, 2.5)

FUSION = (6.5, 15.0)
"""Entropy of fusion [J/(mol K)]: titanium 7.3, copper 9.8, aluminium 11.5, tungsten 9.5 to 14; J. W. Richards, 1897."""

FUSION_POSSIBLE = (2.0, 35.0)

JUMP, JUMP_SLOPE, JUMP_WRONG = 0.03, 0.02, 0.4
"""A step of more than 3 % that is steeper than 2 % a kelvin is a jump; beyond a factor of 1.5 it fails."""

NEAR = 10.0
"""A jump within so many kelvin of a transformation or the Curie point is explained by it."""

WIDEST_MELTING = 250.0


def audit(item: Material | Lining | Gas) -> list[Finding]:
    """Check one material, lining or gas.

    Parameters
    ----------
    item : Material, Lining or Gas
        As it was loaded.
    """
    if isinstance(item, Material):
        return _audit_material(item)
    return audit_gas(item) if isinstance(item, Gas) else audit_lining(item)


def _audit_material(material: Material) -> list[Finding]:
    book = Book(material.key, material.exemptions)
    book.sources(material.data, material.references.values())
    _ranges(book, material)
    _resistivity_rises(book, material.resistivity)
    _enthalpy_rises(book, material)
    _wiedemann_franz(book, material)
    _molar_heats(book, material)
    _order(book, material)
    tables = [material.conductivity, material.resistivity, material.specific_heat]
    for each in tables + [surface.emissivity for surface in material.surfaces.values()]:
        _jumps(book, material, each)
    _reach(book, material)
    return book.close()


def _ranges(book: Book, material: Material) -> None:
    numbers = {
        name: getattr(material, name)
        for name in ("density", "molar_mass", "solidus", "liquidus", "latent_heat", "curie_temperature")
    }
    for name, value in numbers.items():
        if value is not None:
            book.limits(name.replace("_", " "), value, METAL[name])
    for each in material.caloric.transitions:
        if each.name != "melting":
            book.limits(f"transformation ({each.name})", each.heat, METAL["transformation"])
    for table in (material.conductivity, material.resistivity, material.specific_heat):
        book.limits_over(table.name.replace("_", " "), table.T, table.value, METAL[table.name])
    for surface in material.surfaces.values():
        table = surface.emissivity
        book.limits_over(table.name, table.T, table.value, METAL["emissivity"])
    magnetics = material.magnetics
    if magnetics.linear:
        book.limits("mu_r", 1.0 + magnetics.initial_susceptibility, METAL["mu_r"])
    else:  # the first harmonic of a polarisation that switches between its saturated values is 4/pi of it
        harmonic = MU_0 * float((magnetics.susceptibility * np.exp(magnetics.ln_H)).max())
        book.limits("saturation", harmonic * math.pi / 4.0, METAL["saturation"])


def _resistivity_rises(book: Book, resistivity: Property) -> None:
    T, rho = resistivity.T, resistivity.value
    between, change = 0.5 * (T[:-1] + T[1:]), np.diff(rho) / rho[:-1]
    book.judge(
        "resistivity rises",
        between,
        change < 0.0,
        change < -0.01,
        lambda i: f"falls by {-100.0 * change[i]:.2g} % from {celsius(T[i])} to {celsius(T[i + 1])}",
        "rises with temperature",
        "rises with temperature",
    )


def _enthalpy_rises(book: Book, material: Material) -> None:
    T, h = material.caloric.T_nodes, material.caloric.h_nodes
    wrong = ~((np.diff(h) > 0.0) & (np.diff(T) > 0.0))
    book.judge(
        "enthalpy rises",
        0.5 * (T[:-1] + T[1:]),
        wrong,
        wrong,
        lambda i: f"does not rise from {celsius(T[i])} to {celsius(T[i + 1])}",
        f"{np.interp(material.caloric.T_max, T, h) / 1e3:.4g} kJ/kg from 20 °C to {celsius(material.caloric.T_max)}",
        "rises with temperature",
    )


def _wiedemann_franz(book: Book, material: Material) -> None:
    k, rho = material.conductivity, material.resistivity
    T = np.union1d(k.T, rho.T)
    T = T[(T >= max(k.T_min, rho.T_min)) & (T <= min(k.T_max, rho.T_max))]
    if T.size == 0:
        book.add("Wiedemann-Franz", "conductivity and resistivity have no temperature in common", "one", "remark")
        return
    L = k(T) * rho(T) / T
    lattice = LATTICE / T * rho(T) / T
    low, high = LORENZ_LOW * LORENZ, LORENZ_HIGH * LORENZ + lattice
    book.judge(
        "Wiedemann-Franz",
        T,
        (L < low) | (L > high),
        (L < 0.5 * low) | (L > 2.0 * high),
        lambda i: f"k rho/T is {L[i]:.3g} V2/K2 at {celsius(T[i])}, the band there {low:.3g} to {high[i]:.3g} V2/K2",
        f"k rho/T from {L.min():.3g} to {L.max():.3g} V2/K2",
        f"{low:.3g} to {LORENZ_HIGH * LORENZ:.3g} V2/K2 and what a lattice conductivity of 10 W/(m K) at 27 °C adds",
    )


def _molar_heats(book: Book, material: Material) -> None:
    if material.molar_mass is None:
        book.add("Dulong-Petit", "no molar_mass in the file", "about 3R per mole of atoms", "remark")
        return
    three_R = 3.0 * GAS_CONSTANT / material.molar_mass
    at_20 = float(material.specific_heat(T_REFERENCE)) / three_R
    caloric = material.caloric
    end = caloric.T_max if material.solidus is None else min(caloric.T_max, material.solidus - 1.0)
    checks = [("Dulong-Petit", at_20, MOLAR_HEAT_20)]
    if end > T_REFERENCE:
        mean = float(caloric.enthalpy(end)) / (end - T_REFERENCE) / three_R
        checks.append(("mean molar heat", mean, MOLAR_HEAT_MEAN))
    for check, found, (low, high) in checks:
        where = "at 20 °C" if check == "Dulong-Petit" else f"from 20 °C to {celsius(end)}"
        odd = not low <= found <= high
        wrong = not MOLAR_HEAT_POSSIBLE[0] <= found <= MOLAR_HEAT_POSSIBLE[1]
        book.judge_number(check, odd, wrong, f"{found:.3g} times 3R {where}", f"{low:g} to {high:g} times 3R")
    if material.latent_heat is not None and material.liquidus is not None:
        entropy = material.latent_heat * material.molar_mass / material.liquidus
        book.judge_number(
            "heat of fusion",
            not FUSION[0] <= entropy <= FUSION[1],
            not FUSION_POSSIBLE[0] <= entropy <= FUSION_POSSIBLE[1],
            f"an entropy of {entropy:.3g} J/(mol K)",
            f"{FUSION[0]:g} to {FUSION[1]:g} J/(mol K)",
        )


def _order(book: Book, material: Material) -> None:
    """Temperatures in the order they must have."""
    solidus, liquidus, curie = material.solidus, material.liquidus, material.curie_temperature
    if solidus is None or liquidus is None:
        book.add("melting range", "none in the file: a run cannot tell when it melts", "solidus, liquidus", "remark")
        return
    book.judge_number(
        "melting range",
        liquidus - solidus > WIDEST_MELTING,
        liquidus < solidus,
        f"solidus {celsius(solidus)}, liquidus {celsius(liquidus)}",
        f"the liquidus at most {WIDEST_MELTING:g} K above the solidus",
    )
    if curie is not None:
        found = f"Curie point {celsius(curie)}, solidus {celsius(solidus)}"
        book.judge_number("Curie point", False, curie >= solidus, found, "below the solidus")
    for each in material.caloric.transitions:
        if each.name != "melting":
            found = f"{celsius(each.start)} to {celsius(each.end)}"
            book.judge_number(f"place of {each.name}", False, each.end > solidus, found, "below the solidus")


def _jumps(book: Book, material: Material, table: Property) -> None:
    if table.rule not in ("linear", "monotone", "step"):  # a formula is smooth or jumps as its publisher wants
        return
    T, size, width = table.T, np.abs(np.diff(np.log(table.value))), np.diff(table.T)
    jump = size > JUMP
    if table.rule != "step":
        jump &= size / width > JUMP_SLOPE
    explained = [(each.start, each.end) for each in material.caloric.transitions if each.name != "melting"]
    if material.curie_temperature is not None:
        explained.append((material.curie_temperature, material.curie_temperature))
    for start, end in explained:
        jump &= ~((T[1:] >= start - NEAR) & (T[:-1] <= end + NEAR))
    peak = table.name == "specific_heat"  # where a transformation may stand in the table
    book.judge(
        f"jumps of {table.name.replace('_', ' ')}",
        0.5 * (T[:-1] + T[1:]),
        jump,
        jump & (size > JUMP_WRONG) & (not peak),
        lambda i: f"changes by {100.0 * np.expm1(size[i]):.2g} % from {celsius(T[i])} to {celsius(T[i + 1])}",
        "none, or at a transformation",
        f"none of more than {100 * JUMP:g} % away from transformations and the Curie point",
    )


def _reach(book: Book, material: Material) -> None:
    """Whether the data go from room temperature to the solidus; what is done where they do not."""
    tables: dict[str, tuple[Property, ...]] = {
        each.name.replace("_", " "): (each,)
        for each in (material.conductivity, material.resistivity, material.specific_heat)
    }
    tables["emissivity"] = tuple(surface.emissivity for surface in material.surfaces.values())
    for name, group in tables.items():
        short = [told for told in (_short(table, material.solidus) for table in group) if told]
        top = "the end of the data" if material.solidus is None else f"the solidus {celsius(material.solidus)}"
        found = "; ".join(short) if short else f"to {celsius(min(table.T_max for table in group))}"
        book.add(f"reach of {name}", found, f"from 20 °C to {top}", "remark" if short else "ok")


def _short(table: Property, solidus: float | None) -> str:
    """What a table lacks, in words; empty where it lacks nothing."""
    state = table.name.partition("(")[2].rstrip(")")
    if table.T.size == 1:
        return f"{state} one value for all".strip()
    ends = []
    if table.T_min > T_REFERENCE + 10.0:
        ends.append(f"below {celsius(table.T_min)}")
    if solidus is not None and table.T_max < solidus - 10.0:
        ends.append(f"above {celsius(table.T_max)}")
    done = "held" if table.beyond == "hold" else "refused"
    return f"{state} {done} {' and '.join(ends)}".strip() if ends else ""
