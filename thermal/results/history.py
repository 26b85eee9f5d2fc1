"""What a run leaves behind: plain frozen arrays."""

from dataclasses import dataclass
from typing import Literal

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]

Status = Literal["finished", "target", "limit", "cannot_reach", "interrupted"]
"""finished: all stages done, no target asked; target: every target met; limit: done, but the solidus was passed or
the run had to stop at the liquidus; cannot_reach: a target was not met; interrupted: stopped by the user. (A run
that finds no solution raises.)"""


@dataclass(frozen=True)
class StageRecord:
    """One stage of the schedule as it happened.

    kind : heat, hold or transfer ; start, end : [s] ; reason : why it ended, in words ("core reached 1150 °C",
    "duration", "longest time", "settled") ; met : False where a target was asked and not met ;
    limits : limit name -> list of (from, to) [s] while that limit of the supply bound.
    """

    kind: str
    start: float
    end: float
    reason: str
    met: bool
    limits: dict[str, list[tuple[float, float]]]


@dataclass(frozen=True)
class History:
    """A run, step by step: s accepted steps (and the start of each stage), n cells.

    Parameters
    ----------
    time, stage, step : (s,) [s], index, [s]; a stage boundary stands twice, once for each stage.
    r : (n,) [m] cell centres: radius, or for a plate the distance from the mid-plane.
    edges : (n + 1,) [m] cell faces.
    T, enthalpy, heat : (s, n) [K], [J/m3], [W/m3].
    readings : name -> (s,) [K]; always surface, core, mean, maximum, spread (= surface - core, signed), then the
        case's own.
    maximum_depth : (s,) [m] depth of the hottest point under the outer surface.
    absorbed_power, supply_power, coil_loss, loss_power : (s,) [W]; supply and coil of the whole coil.
    losses : account -> (s,) [W] leaving the workpiece (radiation, convection, lining, ends, bore).
    frequency, coil_current_rms, coil_voltage_rms, power_factor, H_surface_rms : (s,).
    limit : (s,) name of the binding supply limit or None.
    energy : account -> (s,) [J] since the start: absorbed, stored, supply, coil, tank, and "loss: <account>".
    field_solves, steps, rejected : counts.
    """

    time: Array
    stage: npt.NDArray[np.int64]
    step: Array
    r: Array
    edges: Array
    T: Array
    enthalpy: Array
    heat: Array
    readings: dict[str, Array]
    maximum_depth: Array
    absorbed_power: Array
    supply_power: Array
    coil_loss: Array
    loss_power: Array
    losses: dict[str, Array]
    frequency: Array
    coil_current_rms: Array
    coil_voltage_rms: Array
    power_factor: Array
    H_surface_rms: Array
    limit: tuple[str | None, ...]
    energy: dict[str, Array]
    stages: tuple[StageRecord, ...]
    status: Status
    field_solves: int
    steps: int
    rejected: int
    wall_s: float
