"""What the reader of a result must know before a step is taken: where data or models do not quite fit the case."""

from materials.audit import audit
from materials.material import Material
from thermal.case import Case
from thermal.geometry.coil import Coil

SLOW_MAGNETISATION = 30e3
"""Above this frequency [Hz] real permeability begins to fall off (tens of kilohertz, from memory)."""


def material_remarks(case: Case, material: Material, frequency: float) -> list[str]:
    """What the data of the workpiece leave open or contradict.

    frequency : [Hz] of the run, 0 for none.
    """
    remarks = []
    if case.workpiece.material.endswith(".toml"):
        for finding in audit(material):
            if finding.verdict == "fails":
                remarks.append(
                    f"The data of {material.key} fail the audit, {finding.check}: {finding.found} (allowed: "
                    f"{finding.allowed}). Do not rely on the result before that is settled."
                )
    if material.solidus is None:
        remarks.append(f"{material.key} has no solidus in its data: whether it burns or melts is not checked.")
    state = case.workpiece.surface
    surface = None if state is None else material.surfaces[state]
    if surface is not None and surface.emissivity.note and not surface.grows:
        remarks.append(f"Surface {state}: {surface.emissivity.note}. Around the piece is {case.surroundings.gas}.")
    curie = material.curie_temperature
    if curie is not None and frequency > SLOW_MAGNETISATION and case.workpiece.initial < curie:
        remarks.append(
            f"At {frequency / 1e3:.4g} kHz real permeability is lower than the table of slow magnetisation (from "
            "memory): below the Curie point expect less power for the current, a lower efficiency and a longer time."
        )
    return remarks


def coil_remarks(case: Case, coil: Coil, covered: float, material: Material) -> list[str]:
    """How well the coil model fits this piece; covered : [m] length that is computed."""
    piece, remarks = case.workpiece, []
    diameter = max(coil.opening)
    if piece.length > coil.length:
        remarks.append(
            f"The piece ({1e3 * piece.length:.4g} mm) is longer than the coil: only the {1e3 * covered:.4g} mm inside "
            "the coil are computed, as if no heat flowed along the length. Time, temperature and energy per tonne are "
            "those of that part."
        )
    if coil.length < diameter:
        remarks.append("The coil is shorter than its bore is wide: expect errors of 10 to 20 % in power (estimate).")
    alone = piece.neighbours == "none"
    if alone and covered < 0.8 * coil.length:
        worst = 20 if not material.magnetics.linear else 10
        remarks.append(
            f"The piece is {1e3 * covered:.4g} mm long in a coil of {1e3 * coil.length:.4g} mm: power may be off by up "
            f"to {worst} % (estimate)."
        )
    if alone and piece.length < piece.outline[0]:
        remarks.append("The piece is shorter than it is wide: its ends count, which one dimension does not see.")
    return remarks
