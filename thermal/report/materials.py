"""Materials as text and JSON: every number with its source."""

from typing import Any

from materials.material import Material
from thermal.constants import ZERO_CELSIUS
from thermal.report.text import bullets, paragraph


def material_list_text(materials: list[Material]) -> str:
    """One line per material."""
    rows = [["key", "group", "solidus °C", "Curie °C", "title"]]
    for each in materials:
        rows.append([each.key, each.group, _celsius(each.solidus), _celsius(each.curie_temperature), each.title])
    widths = [max(len(row[i]) for row in rows) for i in range(4)]
    lines = ["  ".join([*map(str.ljust, row[:4], widths), row[4]]) for row in rows]
    return "\n".join(lines) + "\n"


def material_text(material: Material) -> str:
    """Every number of a material with its uncertainty, source and note."""
    head = f"{material.key}: {material.title}\ngroup: {material.group}"
    also = paragraph(f"also called: {', '.join(material.aliases)}") if material.aliases else ""
    parts = [f"{head}\n{also}".rstrip()]
    told = []
    for datum in material.data:
        reference = material.references[datum.source.key]
        text = f"{datum.name}: {datum.text}"
        if datum.uncertainty > 0.0:
            text += f", ±{100.0 * datum.uncertainty:.2g} %"
        text += f". {datum.source.kind.capitalize()}: {reference.title}, {datum.source.locator}."
        told.append(f"{text} {datum.note[:1].upper()}{datum.note[1:]}." if datum.note else text)
    parts.append(bullets(told))
    parts.append(paragraph("The kind of a source: measured, recommended, estimated, assumed, or memory (recalled)."))
    return "\n\n".join(parts) + "\n"


def material_json(material: Material) -> dict[str, Any]:
    """A material for scripts."""
    return {
        **material_entry(material),
        "latent_heat_J_per_kg": material.latent_heat,
        "surfaces": list(material.surfaces),
        "data": [
            {
                "name": datum.name,
                "value": datum.text,
                "relative_uncertainty": datum.uncertainty,
                "source": datum.source.key,
                "title": material.references[datum.source.key].title,
                "where": datum.source.locator,
                "kind": datum.source.kind,
                "note": datum.note,
            }
            for datum in material.data
        ],
    }


def material_entry(material: Material) -> dict[str, Any]:
    """What a list of materials says about each."""
    return {
        "key": material.key,
        "title": material.title,
        "group": material.group,
        "aliases": list(material.aliases),
        "density_kg_per_m3": material.density,
        "curie_C": _degrees(material.curie_temperature),
        "solidus_C": _degrees(material.solidus),
        "liquidus_C": _degrees(material.liquidus),
    }


def _degrees(T: float | None) -> float | None:
    return None if T is None else round(T - ZERO_CELSIUS, 6)


def _celsius(T: float | None) -> str:
    return "-" if T is None else f"{T - ZERO_CELSIUS:.0f}"
