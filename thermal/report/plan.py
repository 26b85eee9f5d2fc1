"""What a case will be computed with: skin depths, expected field, mesh and everything assumed."""

import numpy as np

from thermal.case import Case
from thermal.report.conditions import Condition, conditions, section_of, thin_notes
from thermal.report.tables import COIL, PIECE
from thermal.report.text import bullets, columns
from thermal.report.words import piece_in_words
from thermal.results.verdict import LIMIT_WORDS, celsius, power_unit
from thermal.setup import Setup


def plan_text(setup: Setup, case: Case) -> str:
    """The plan of a run as plain text."""
    parts = [f"{setup.title}\n{piece_in_words(setup, case)}\nThe case is valid."]
    found = conditions(setup)
    if found:
        heading = "Workpiece in the field, at one temperature throughout, under the first drive"
        parts.append(f"{heading}\n{_condition_table(setup, case, found)}")
    parts.append(f"Mesh\n{_mesh_table(setup, found)}")
    notes = [*setup.notes, *thin_notes(case, found)]
    if notes:
        parts.append(f"Notes\n{bullets(notes)}")
    parts.append(f"Assumed\n{bullets(setup.assumptions)}")
    return "\n\n".join(parts) + "\n"


def _condition_table(setup: Setup, case: Case, found: tuple[Condition, ...]) -> str:
    name, size = section_of(case)
    powers = [each.point.supply_power if setup.has_coil else each.field.power for each in found]
    unit, watts = power_unit(max(powers))
    rows = [
        ["", "of", *(f"{each.name}, {celsius(each.T)}" for each in found)],
        ["relative permeability at the surface", PIECE, *(f"{each.field.mu_r[-1]:.3g}" for each in found)],
        ["skin depth, mm", PIECE, *(f"{each.skin_depth * 1e3:.3g}" for each in found)],
        [f"{name} / skin depth", PIECE, *(f"{size / each.skin_depth:.3g}" for each in found)],
        ["field at the surface, kA/m rms", PIECE, *(f"{each.field.H_surface_rms / 1e3:.3g}" for each in found)],
        [f"absorbed power, {unit}", PIECE, *(f"{each.field.power / watts:.3g}" for each in found)],
    ]
    if setup.has_coil:
        points = [each.point for each in found]
        rows += [
            [f"supply power, {unit}", COIL, *(f"{point.supply_power / watts:.3g}" for point in points)],
            ["coil current, A rms", COIL, *(f"{point.coil_current_rms:.4g}" for point in points)],
            ["coil voltage, V rms", COIL, *(f"{point.coil_voltage_rms:.4g}" for point in points)],
            ["power factor at the coil terminals", COIL, *(f"{point.power_factor:.2g}" for point in points)],
            [
                "electrical efficiency (absorbed/supply), %",
                COIL,
                *(f"{100.0 * each.field.power / (setup.share * each.point.supply_power):.3g}" for each in found),
            ],
        ]
    bounds = ["the drive" if each.point.limit is None else LIMIT_WORDS[each.point.limit] for each in found]
    rows.append(["what bounds it", COIL if setup.has_coil else PIECE, *bounds])
    return columns(rows)


def _mesh_table(setup: Setup, found: tuple[Condition, ...]) -> str:
    sizes = np.diff(setup.section.mesh.edges)
    rows = [
        ["cells across the section", str(sizes.size)],
        ["first cell under the surface, mm", f"{sizes[-1] * 1e3:.3g}"],
        ["largest cell, mm", f"{sizes.max() * 1e3:.3g}"],
    ]
    if found:
        rows.append(["skin depth, cold / first cell", f"{found[0].skin_depth / sizes[-1]:.2g}"])
    return columns(rows)
