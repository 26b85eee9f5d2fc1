"""From a data file to a Material, Gas or Lining."""

import math
from collections.abc import Mapping
from typing import cast

import numpy as np

from materials.caloric import Caloric, Transition
from materials.curve import Array, EndRule
from materials.formulas import CarbonSteelHeat
from materials.gas import Gas
from materials.limits import GAS, LINING, METAL, Limits
from materials.magnetics import Magnetics
from materials.magnetisation import MU_0, FroehlichKennelly, NormalCurve
from materials.material import Datum, Exemption, Lining, Material, Surface
from materials.property import Property, PropertyRule
from materials.reader import Section
from materials.source import KINDS, Kind, Reference, Source
from materials.units import display

FORMAT = 1
_RULES = ("linear", "monotone", "step")


class Collector:
    """Reads cited numbers out of one file and remembers them with their sources."""

    def __init__(self, root: Section, bibliography: Mapping[str, Reference]) -> None:
        self._bibliography = dict(bibliography)
        for key, entry in root.sections("sources"):
            self._bibliography[key] = reference_from(key, entry)
        self.data: list[Datum] = []
        self.references: dict[str, Reference] = {}

    def cite(self, section: Section, name: str, text: str) -> Datum:
        """Read source, locator, kind, uncertainty and note of a table, and close the table."""
        source = self._source(section)
        uncertainty = section.quantity("uncertainty", "ratio")
        if not 0.0 <= uncertainty <= 1.0:
            section.refuse("uncertainty", "must be from 0 to 100 %")
        datum = Datum(name, text, uncertainty, source, section.text("note", ""))
        section.done()
        self.data.append(datum)
        return datum

    def number(self, parent: Section, name: str, dimension: str, limits: Limits | None = None) -> float:
        """Read a cited number above zero: a table with `value`."""
        section = parent.section(name)
        value = section.quantity("value", dimension)
        if value <= 0.0:
            section.refuse("value", "must be above zero")
        if limits is not None:
            _refuse_impossible(section, "value", value, limits)
        self.cite(section, name, section.text("value"))
        return value

    def exemption(self, name: str, section: Section) -> Exemption:
        """Read a departure from a rule of the audit; its temperatures may be left out where it holds at all."""
        check, reason = section.text("check"), section.text("reason")
        start = section.quantity("from", "temperature") if section.has("from") else 0.0
        end = section.quantity("to", "temperature") if section.has("to") else math.inf
        if end < start:
            section.refuse("to", "must not be below from")
        source = self._source(section)
        section.done()
        return Exemption(name, check, start, end, reason, source)

    def property(self, section: Section, name: str, dimension: str, limits: Limits) -> Property:
        """Read a cited table over temperature, or a named formula in its place."""
        beyond = cast(EndRule, section.choice("beyond", ("hold", "refuse")))
        T = value = np.zeros(0)
        if dimension == "heat_capacity" and section.has("formula"):
            rule = section.choice("formula", ("EN 1993-1-2 3.4.1.2",))
            unit = section.unit("unit", dimension)
            text = f"formula {rule}, {_span(CarbonSteelHeat().x, '°C')} °C"
        else:
            T = section.array("T", "temperature", "T_unit")
            section.rising("T", T, section.text("T_unit"))
            unit = section.unit("unit", dimension)
            value = section.array("value", dimension, "unit")
            _check_values(section, T, value, unit, limits, fraction=dimension == "ratio")
            rule = section.choice("rule", _RULES)
            values = f"{_span(value, unit)}{f' {unit}' if unit != '1' else ''}"
            text = f"{values}, {_span(T, '°C')} °C, {T.size} point{'s' if T.size > 1 else ''}, {rule}"
        datum = self.cite(section, name, f"{text}, {'held' if beyond == 'hold' else 'refused'} beyond")
        return Property(
            name,
            T,
            value,
            cast(PropertyRule, rule),
            beyond,
            datum.uncertainty,
            unit,
            datum.source,
            datum.note,
        )

    def _source(self, section: Section) -> Source:
        if not section.has("source"):
            section.refuse("source", "missing, every number names its source")
        key = section.choice("source", self._bibliography)
        kind = cast(Kind, section.choice("kind", KINDS))
        self.references[key] = self._bibliography[key]
        return Source(key, section.text("locator"), kind)


def reference_from(key: str, section: Section) -> Reference:
    """One entry of a bibliography; only the title is required."""
    title = section.text("title")
    rest = [section.text(name, "") for name in ("authors", "year", "publisher", "note")]
    section.done()
    return Reference(key, title, *rest)


def material_from(root: Section, bibliography: Mapping[str, Reference]) -> Material:
    """Build a material from its file.

    Parameters
    ----------
    root : Section
        The whole file.
    bibliography : mapping of Reference
        Entries that may be cited besides those of the file itself.

    Raises
    ------
    MaterialError
        Names the file and the key that is wrong, and what is allowed.
    """
    _check_format(root)
    read = Collector(root, bibliography)
    key, title, group = root.text("key"), root.text("title"), root.text("group")
    aliases = root.texts("aliases")
    density = read.number(root, "density", "density", METAL["density"])
    molar_mass = None
    if root.has("molar_mass"):
        molar_mass = read.number(root, "molar_mass", "molar_mass", METAL["molar_mass"])
    conductivity, resistivity, specific_heat = (
        read.property(root.section(name), name, dimension, METAL[name])
        for name, dimension in (
            ("conductivity", "conductivity"),
            ("resistivity", "resistivity"),
            ("specific_heat", "heat_capacity"),
        )
    )
    if specific_heat.beyond == "refuse":
        root.refuse("specific_heat.beyond", "must be hold, so that the enthalpy reaches beyond the data")
    transitions = [_transformation(read, name, each) for name, each in root.sections("transformation")]
    solidus = liquidus = latent_heat = None
    if any([root.has("solidus"), root.has("liquidus"), root.has("latent_heat")]):
        solidus, liquidus, latent_heat = (
            read.number(root, name, dimension, METAL[name])
            for name, dimension in (
                ("solidus", "temperature"),
                ("liquidus", "temperature"),
                ("latent_heat", "specific_energy"),
            )
        )
        if liquidus < solidus:
            root.refuse("liquidus", "must not be below the solidus")
        transitions.append(Transition.around("melting", solidus, liquidus, latent_heat))
    magnetics = _magnetics(read, root)
    surfaces = {}
    for state, section in root.sections("surface"):
        grows = section.flag("grows")
        emissivity = read.property(section, f"emissivity ({state})", "ratio", METAL["emissivity"])
        surfaces[state] = Surface(emissivity, grows)
    if not surfaces:
        root.refuse("surface", "missing, give the emissivity of at least one surface state ([surface.oxidised])")
    exemptions = tuple(read.exemption(name, each) for name, each in root.sections("exception"))
    root.done()
    caloric = Caloric.build(specific_heat, transitions)
    return Material(
        key, title, aliases, group, density, conductivity, resistivity, specific_heat, caloric, magnetics,
        surfaces, solidus, liquidus, latent_heat, tuple(read.data), read.references, molar_mass, exemptions,
    )  # fmt: skip


def gas_from(root: Section, bibliography: Mapping[str, Reference]) -> Gas:
    """Build a gas from its file; errors as `material_from`."""
    _check_format(root)
    read = Collector(root, bibliography)
    key, title = root.text("key"), root.text("title")
    density, viscosity, conductivity, heat_capacity = (
        read.property(root.section(name), f"{name} of {key}", name, GAS[name])
        for name in ("density", "viscosity", "conductivity", "heat_capacity")
    )
    root.done()
    data = tuple(read.data)
    return Gas(key, title, density, viscosity, conductivity, heat_capacity, data, read.references)


def lining_from(root: Section, bibliography: Mapping[str, Reference]) -> Lining:
    """Build a lining from its file; errors as `material_from`."""
    _check_format(root)
    read = Collector(root, bibliography)
    key, title = root.text("key"), root.text("title")
    conductivity = read.property(root.section("conductivity"), "conductivity", "conductivity", LINING["conductivity"])
    density = read.number(root, "density", "density", LINING["density"])
    emissivity = read.property(root.section("emissivity"), "emissivity", "ratio", LINING["emissivity"])
    root.done()
    return Lining(key, title, conductivity, density, emissivity, tuple(read.data), read.references)


def _span(values: Array, unit: str) -> str:
    """Smallest and largest of some values in their published unit."""
    low, high = (f"{display(float(end), unit):.5g}" for end in (values.min(), values.max()))
    return low if low == high else f"{low} to {high}"


def _check_format(root: Section) -> None:
    if root.quantity("format", "ratio") != FORMAT:
        root.refuse("format", f"this version reads format = {FORMAT}")


def _refuse_impossible(section: Section, key: str, value: float, limits: Limits) -> None:
    """Refuse a number that nothing can have."""
    if limits.impossible(value).size:
        found = f"{display(value, limits.unit):.6g} {limits.unit}".removesuffix(" 1")
        section.refuse(key, f"must be {limits.allowed()} ({limits.reason}), found {found}")


def _check_values(section: Section, T: Array, value: Array, unit: str, limits: Limits, fraction: bool) -> None:
    """Refuse lists of different length, values outside (0, inf) or (0, 1] for a fraction, and impossible ones."""
    if value.size != T.size:
        section.refuse("value", f"{value.size} numbers for {T.size} temperatures")
    wrong = np.flatnonzero((value <= 0.0) | ((value > 1.0) if fraction else False))
    if wrong.size:
        found = f"{display(float(value[wrong[0]]), unit):.6g} {unit}" if unit != "1" else f"{value[wrong[0]]:g}"
        bound = "above zero and at most 1" if fraction else "above zero"
        section.refuse("value", f"must be {bound}, found {found} at {display(float(T[wrong[0]]), '°C'):g} °C")
    beyond = limits.impossible(value)
    if beyond.size:
        found = f"{display(float(value[beyond[0]]), unit):.6g} {unit} at {display(float(T[beyond[0]]), '°C'):g} °C"
        section.refuse("value", f"must be {limits.allowed(unit)} ({limits.reason}), found {found}")


def _transformation(read: Collector, name: str, section: Section) -> Transition:
    middle = section.quantity("temperature", "temperature")
    width = section.quantity("width", "temperature_difference")
    heat = section.quantity("heat", "specific_energy")
    if width < 1.0:
        section.refuse("width", "spread the heat over at least 1 K")
    if heat <= 0.0:
        section.refuse("heat", "must be above zero (heat taken up on heating)")
    _refuse_impossible(section, "heat", heat, METAL["transformation"])
    text = f"{section.text('heat')} at {section.text('temperature')} over {section.text('width')}"
    read.cite(section, f"transformation ({name})", text)
    return Transition(name, middle - width / 2.0, middle + width / 2.0, heat)


def _magnetics(read: Collector, root: Section) -> Magnetics:
    section = root.section("magnetics")
    if not any([section.has("mu_r"), section.has("curve"), section.has("law")]):
        section.refuse("", "give mu_r, curve or law")
    if section.has("mu_r") and not section.has("curve"):
        mu_r = section.quantity("mu_r", "ratio")
        if mu_r <= 0.0:
            section.refuse("mu_r", "must be above zero")
        _refuse_impossible(section, "mu_r", mu_r, METAL["mu_r"])
        read.cite(section, "magnetics", f"constant mu_r {mu_r:g}")
        return Magnetics.constant(mu_r)
    curie = read.number(root, "curie_temperature", "temperature")
    exponent = read.number(root, "saturation_exponent", "ratio")
    if not 1.0 <= exponent <= 10.0:
        root.refuse("saturation_exponent.value", "must be from 1 to 10 (3 for iron and steel)")
    if curie <= 300.0:
        root.refuse("curie_temperature.value", "must be above 27 °C for a law of 20 °C")
    _refuse_impossible(root, "curie_temperature.value", curie, METAL["curie_temperature"])
    if section.has("law"):
        section.choice("law", ("froehlich-kennelly",))
        saturation = section.quantity("saturation", "flux_density")
        H_k = section.quantity("H_k", "magnetic_field")
        for name, value in (("saturation", saturation), ("H_k", H_k)):
            if value <= 0.0:
                section.refuse(name, "must be above zero")
        _refuse_impossible(section, "saturation", saturation, METAL["saturation"])
        law = FroehlichKennelly(saturation, H_k)
        read.cite(section, "magnetics", f"Froehlich-Kennelly law, {saturation:g} T, H_k {H_k:g} A/m")
        return Magnetics.from_law("froehlich-kennelly", law, curie, exponent)
    curve = section.choice("curve", ("normal", "effective"))
    H = section.array("H", "magnetic_field", "H_unit")
    section.rising("H", H, section.text("H_unit"))
    if H[0] <= 0.0:
        section.refuse("H", "must be above zero (the origin is understood)")
    if curve == "effective":
        mu_r_table = section.array("mu_r", "ratio", "mu_r_unit")
        if mu_r_table.size != H.size or np.any(mu_r_table < 1.0):
            section.refuse("mu_r", "needs one number for each H, none below 1")
        # The first harmonic of a polarisation that switches between its two saturated values is 4/pi of it.
        polarisation = float((MU_0 * (mu_r_table - 1.0) * H).max()) * np.pi / 4.0
        _refuse_impossible(section, "mu_r", polarisation, METAL["saturation"])
        read.cite(section, "magnetics", f"effective permeability over peak field, {H.size} points")
        return Magnetics.from_effective(H, mu_r_table, curie, exponent)
    B = section.array("B", "flux_density", "B_unit")
    if B.size != H.size or np.any(B <= MU_0 * H):
        section.refuse("B", "needs one number for each H, all above mu0 H")
    section.rising("B", B, section.text("B_unit"))
    _refuse_impossible(section, "B", float((B - MU_0 * H).max()), METAL["saturation"])
    initial = section.quantity("mu_r_initial", "ratio")
    if initial <= 1.0:
        section.refuse("mu_r_initial", "must be above 1")
    _refuse_impossible(section, "mu_r_initial", initial, METAL["mu_r"])
    read.cite(section, "magnetics", f"normal curve, {H.size} points from {H[0]:g} to {H[-1]:g} A/m")
    return Magnetics.from_law("normal", NormalCurve(H, B, initial - 1.0), curie, exponent)
