"""The uniform workpiece in the field, cold and hot, and whether its section suits the frequency."""

from dataclasses import dataclass

import numpy as np

from thermal.case import Case
from thermal.case.schema import Plate, Tube
from thermal.control import FixedDrive, HoldTemperature
from thermal.eddy.exact import skin_depth
from thermal.interfaces import Demand, EddyField, OperatingPoint
from thermal.setup import Setup

THIN = {"diameter": 3.5, "thickness": 3.0}
"""Section over skin depth below which a hot section lets the field through (common practice)."""


@dataclass(frozen=True)
class Condition:
    """The uniform workpiece at one temperature under the first drive of the schedule.

    name ; T : [K] ; skin_depth : [m] at the surface ; field, point.
    """

    name: str
    T: float
    skin_depth: float
    field: EddyField
    point: OperatingPoint


def conditions(setup: Setup) -> tuple[Condition, ...]:
    """Cold and hot: at the start, and at the highest temperature asked for; none without a heat stage.

    Raises
    ------
    NoConvergence : no operating point.
    """
    drives = [stage.control.fixed for stage in setup.stages if isinstance(stage.control, FixedDrive)]
    demand = next((drive for drive in drives if drive.kind != "off"), None)
    if demand is None:
        return ()
    cold = _condition(setup, demand, "cold", setup.T_initial)
    hot = _highest_asked(setup)
    return (cold,) if hot is None else (cold, _condition(setup, demand, "hot", hot))


def _condition(setup: Setup, demand: Demand, name: str, T: float) -> Condition:
    everywhere = np.full(setup.section.mesh.volume.size, T)
    point, field = setup.supply.operate(setup.source.at(everywhere), demand, None)
    resistivity = setup.material.resistivity(everywhere[-1:])
    depth = float(skin_depth(resistivity, point.frequency, field.mu_r[-1:])[0])
    return Condition(name, T, depth, field, point)


def _highest_asked(setup: Setup) -> float | None:
    asked = [
        T
        for stage in setup.stages
        if stage.stop is not None and not stage.stop.falling
        for T in stage.stop.temperatures.values()
    ]
    asked += [stage.control.set_point for stage in setup.stages if isinstance(stage.control, HoldTemperature)]
    return max(asked, default=None)


def section_of(case: Case) -> tuple[str, float]:
    """Name and size [m] of the section that is compared with the skin depth."""
    match case.workpiece:
        case Plate():
            return "thickness", case.workpiece.thickness
        case Tube():
            return "wall", case.workpiece.wall
        case _:
            return "diameter", case.workpiece.diameter


def thin_notes(case: Case, found: tuple[Condition, ...]) -> list[str]:
    """A note where the hot section lets the field through."""
    name, size = section_of(case)
    return [
        f"Hot, the {name} is {size / each.skin_depth:.2g} skin depths: below about {THIN[name]:.2g} the field passes "
        "through and heats little for its current (common practice); a higher frequency couples better."
        for each in found
        if each.name == "hot" and name in THIN and size / each.skin_depth < THIN[name]
    ]
