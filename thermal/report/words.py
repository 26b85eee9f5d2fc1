"""The piece and its coil in a few words."""

from thermal.case import Case
from thermal.case.quantity import shown
from thermal.case.schema import Plate, Tube
from thermal.results.verdict import hertz
from thermal.setup import Setup


def reading_in_words(name: str, setup: Setup) -> str:
    """A reading as a table names it: the core of a tube is the surface of its bore."""
    return "core (the bore)" if name == "core" and "bore" in setup.section.mesh.faces else name


def piece_in_words(setup: Setup, case: Case) -> str:
    """Shape, size, material and what heats it, for the foot of a picture or the head of a table."""
    piece = case.workpiece
    match piece:
        case Plate():
            size = f"plate {shown(piece.thickness, 'mm')} thick, {shown(piece.width, 'mm')} wide"
        case Tube():
            size = f"tube {shown(piece.outer_diameter, 'mm')} outside, wall {shown(piece.wall, 'mm')}"
        case _:
            size = f"cylinder {shown(piece.diameter, 'mm')}"
    told = [f"{size}, {shown(piece.length, 'mm')} long, {setup.material.key}, {setup.mass:.3g} kg"]
    if setup.frequency > 0.0:
        told.append(hertz(setup.frequency))
    if case.coil is not None:
        told.append(f"coil {case.coil.turns:g} turns, {shown(case.coil.length, 'mm')} long")
    return "; ".join(told)
