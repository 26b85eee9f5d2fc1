"""The losses a case describes: the part of build() that turns words into radiation, convection and lining."""

from materials.material import Material
from thermal.boundary.convection import constant_convection, cylinder_convection, plate_convection
from thermal.boundary.emissivity import Emissivity, emissivity_of
from thermal.boundary.lining import flat_lining, round_lining
from thermal.boundary.radiation import Radiation, bare_coil_radiation, bore_radiation
from thermal.case import Case
from thermal.case.against_materials import lining_material, surroundings_gas
from thermal.case.schema import Plate, Tube
from thermal.geometry.coil import Coil
from thermal.interfaces import BoundaryLoss
from thermal.setup import Losses

COPPER_EMISSIVITY = 0.6
"""Emissivity of the bore of a bare copper coil, tarnished: 0.5-0.7 (common practice)."""


def losses_of(case: Case, material: Material, coil: Coil | None, covered: float, assumptions: list[str]) -> Losses:
    """What leaves the workpiece through each face, in the coil and in the open.

    covered : [m] length that is computed ; assumptions : what is taken for granted is added to it.

    Raises
    ------
    OutOfRange : a gas table or a correlation does not reach the surroundings.
    """
    piece, around = case.workpiece, case.surroundings
    if piece.emissivity is not None:
        skin = emissivity_of(piece.emissivity, False, piece.initial)
    else:
        assert piece.surface is not None
        surface = material.surfaces[piece.surface]
        skin = emissivity_of(surface.emissivity, surface.grows, piece.initial)
    T_out = around.temperature
    open_air: tuple[BoundaryLoss, ...] = (Radiation("radiation", skin, T_out), _side_convection(case))
    ends: tuple[BoundaryLoss, ...] = (Radiation("radiation", skin, T_out), _end_convection(case))
    alone: dict[str, tuple[BoundaryLoss, ...]] = {"outer": open_air, "ends": ends}
    if isinstance(piece, Plate):
        alone["edges"] = ends
    # Of a piece longer than the coil only the part inside is computed: it has no ends of its own.
    beyond = coil is not None and piece.length > coil.length
    if beyond:
        alone["ends"] = ()
    in_coil = dict(alone)
    if case.coil is not None:
        in_coil["outer"] = _facing_coil(case, skin, assumptions)
    if piece.neighbours == "touching":
        in_coil["ends"] = ()
    if isinstance(piece, Tube):
        bore = piece.outer_diameter / 2.0 - piece.wall
        # Of a longer piece, the part inside the coil looks along its own cold bore: as black as an opening.
        out_of_bore = (bore_radiation("radiation", bore, covered, T_out),)
        alone["bore"] = out_of_bore
        in_coil["bore"] = () if piece.neighbours == "touching" else out_of_bore
    return {"coil": in_coil, "open": alone}


def _facing_coil(case: Case, skin: Emissivity, assumptions: list[str]) -> tuple[BoundaryLoss, ...]:
    piece, words = case.workpiece, case.coil
    assert words is not None
    width, height = words.bore
    flat = isinstance(piece, Plate)
    room = (height - piece.outline[1]) / 2.0
    if case.lining is None:
        ratio = 1.0 if flat else piece.outline[0] / width
        assumptions.append(
            f"coil bore emissivity = {COPPER_EMISSIVITY:g} (tarnished copper, common practice); the bare coil is taken "
            "as a closed wall for radiation, with the gas of the room around the workpiece"
        )
        seen = bare_coil_radiation("radiation", skin, words.temperature, ratio, COPPER_EMISSIVITY)
        return (seen, _side_convection(case))
    stuff = lining_material(case)
    assert stuff is not None
    emissivity = case.lining.emissivity if case.lining.emissivity is not None else stuff.emissivity
    still_gas = surroundings_gas(case)
    thickness = case.lining.thickness
    if flat:
        gap = room - thickness
        return (
            flat_lining("lining", skin, still_gas, stuff.conductivity, emissivity, gap, thickness, words.temperature),
        )
    radii = (piece.outline[0] / 2.0, width / 2.0 - thickness, width / 2.0)
    return (round_lining("lining", skin, still_gas, stuff.conductivity, emissivity, radii, words.temperature),)


def _side_convection(case: Case) -> BoundaryLoss:
    piece, around = case.workpiece, case.surroundings
    if around.h is not None:
        return constant_convection("convection", around.h, around.temperature)
    gas, speed = surroundings_gas(case), around.speed or 0.0
    if isinstance(piece, Plate):
        height = piece.width if piece.axis == "horizontal" else piece.length
        return plate_convection("convection", gas, around.temperature, height, speed)
    return cylinder_convection("convection", gas, around.temperature, piece.outline[0], piece.length, piece.axis, speed)


def _end_convection(case: Case) -> BoundaryLoss:
    piece, around = case.workpiece, case.surroundings
    if around.h is not None:
        return constant_convection("convection", around.h, around.temperature)
    gas, speed = surroundings_gas(case), around.speed or 0.0
    return plate_convection("convection", gas, around.temperature, piece.outline[1], speed)
