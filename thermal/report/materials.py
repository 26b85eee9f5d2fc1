"""Materials, linings and gases as text and JSON: every number with its source, and what an audit found."""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import asdict
from typing import Any

from materials.finding import Finding
from materials.gas import Gas
from materials.library import Library
from materials.material import Datum, Lining, Material
from materials.source import Reference
from thermal.constants import ZERO_CELSIUS
from thermal.report.text import bullets, paragraph

KINDS = "The kind of a source: measured, recommended, estimated, assumed, or memory (recalled)."


def list_text(library: Library) -> str:
    """Materials, linings and gases, one line each."""
    linings = [["key", "kg/m³", "title"]]
    for lining in map(library.lining, library.keys("lining")):
        linings.append([lining.key, f"{lining.density:.0f}", lining.title])
    gases = [["key", "from °C", "to °C", "title"]]
    for gas in map(library.gas, library.keys("gas")):
        gases.append([gas.key, _celsius(gas.T_min), _celsius(gas.T_max), gas.title])
    alloys = material_list_text([library.material(key) for key in library.keys("material")])
    return f"materials\n\n{alloys}\nlinings\n\n{_rows(linings)}\ngases\n\n{_rows(gases)}"


def material_list_text(materials: list[Material]) -> str:
    """One line per material."""
    rows = [["key", "group", "solidus °C", "Curie °C", "title"]]
    for each in materials:
        rows.append([each.key, each.group, _celsius(each.solidus), _celsius(each.curie_temperature), each.title])
    return _rows(rows)


def list_entries(library: Library) -> list[dict[str, Any]]:
    """Materials, linings and gases for scripts; file : of the user's own folder, None for a shipped one."""
    found: list[dict[str, Any]] = []
    for kind in ("material", "lining", "gas"):
        for key in library.keys(kind):
            own = library.file(kind, key)
            found.append({"kind": kind, "file": None if own is None else str(own), **_entry(library.any(key))})
    return found


def item_text(item: Material | Lining | Gas) -> str:
    """Every number of a material, lining or gas with its uncertainty, source and note."""
    return material_text(item) if isinstance(item, Material) else _told(f"{item.key}: {item.title}", item)


def material_text(material: Material) -> str:
    """Every number of a material with its uncertainty, source and note."""
    head = f"{material.key}: {material.title}\ngroup: {material.group}"
    also = paragraph(f"also called: {', '.join(material.aliases)}") if material.aliases else ""
    return _told(f"{head}\n{also}".rstrip(), material)


def item_json(item: Material | Lining | Gas) -> dict[str, Any]:
    """A material, lining or gas for scripts."""
    own: dict[str, Any] = {}
    if isinstance(item, Material):
        own = {"latent_heat_J_per_kg": item.latent_heat, "surfaces": list(item.surfaces)}
    return {**_entry(item), **own, "data": _data(item.data, item.references)}


def audit_text(findings: Sequence[Sequence[Finding]]) -> str:
    """A line for every material and, under it, every remark and failure; a line of totals at the end."""
    parts = []
    for group in findings:
        parts.append(f"{group[0].material}: {_count(group)}")
        told = [each for each in group if each.verdict != "ok"]
        if told:
            lines = [f"{each.verdict}: {each.check}: {each.found} (allowed: {each.allowed})" for each in told]
            parts.append(bullets(lines))
    total = _count([each for group in findings for each in group])
    return "\n".join([*parts, "", f"{len(findings)} file{'s' if len(findings) != 1 else ''}: {total}"]) + "\n"


def audit_entries(findings: Iterable[Iterable[Finding]]) -> list[dict[str, str]]:
    """Every finding of an audit for scripts."""
    return [asdict(each) for group in findings for each in group]


def _count(findings: Sequence[Finding]) -> str:
    fails = sum(each.verdict == "fails" for each in findings)
    remarks = sum(each.verdict == "remark" for each in findings)
    told = f"{len(findings)} check{'s' if len(findings) != 1 else ''}, {remarks} remark{'s' if remarks != 1 else ''}, "
    return told + (f"{fails} FAIL" if fails else "nothing fails")


def _told(head: str, item: Material | Lining | Gas) -> str:
    """Head, and every number as a bullet."""
    told = []
    for datum in item.data:
        reference = item.references[datum.source.key]
        text = f"{datum.name}: {datum.text}"
        if datum.uncertainty > 0.0:
            text += f", ±{100.0 * datum.uncertainty:.2g} %"
        text += f". {datum.source.kind.capitalize()}: {reference.title}, {datum.source.locator}."
        told.append(f"{text} {datum.note[:1].upper()}{datum.note[1:]}." if datum.note else text)
    return "\n\n".join([head, bullets(told), paragraph(KINDS)]) + "\n"


def _data(data: Iterable[Datum], references: Mapping[str, Reference]) -> list[dict[str, Any]]:
    return [
        {
            "name": datum.name,
            "value": datum.text,
            "relative_uncertainty": datum.uncertainty,
            "source": datum.source.key,
            "title": references[datum.source.key].title,
            "where": datum.source.locator,
            "kind": datum.source.kind,
            "note": datum.note,
        }
        for datum in data
    ]


def _entry(item: Material | Lining | Gas) -> dict[str, Any]:
    """What a list says about each."""
    if isinstance(item, Lining):
        return {"key": item.key, "title": item.title, "density_kg_per_m3": item.density}
    if isinstance(item, Gas):
        return {"key": item.key, "title": item.title, "from_C": _degrees(item.T_min), "to_C": _degrees(item.T_max)}
    return {
        "key": item.key,
        "title": item.title,
        "group": item.group,
        "aliases": list(item.aliases),
        "density_kg_per_m3": item.density,
        "curie_C": _degrees(item.curie_temperature),
        "solidus_C": _degrees(item.solidus),
        "liquidus_C": _degrees(item.liquidus),
    }


def _rows(rows: list[list[str]]) -> str:
    """Cells in aligned columns, all to the left."""
    widths = [max(len(row[i]) for row in rows) for i in range(len(rows[0]) - 1)]
    lines = ["  ".join([*map(str.ljust, row[:-1], widths), row[-1]]) for row in rows]
    return "\n".join(lines) + "\n"


def _degrees(T: float | None) -> float | None:
    return None if T is None else round(T - ZERO_CELSIUS, 6)


def _celsius(T: float | None) -> str:
    return "-" if T is None else f"{T - ZERO_CELSIUS:.0f}"
