"""Collects the states of a march into a History."""

from dataclasses import dataclass, field

import numpy as np

from thermal.geometry.sampling import Sampler
from thermal.interfaces import Array, EddyField, OperatingPoint
from thermal.results.history import History, StageRecord, Status


@dataclass(frozen=True, slots=True)
class State:
    """The run after an accepted step, or at the start of a stage (step 0).

    time, step : [s] ; H : (n,) [J/m3] ; extended : (n + 2,) [K] core, cells, surface ; readings : name -> [K] ;
    losses : account -> [W] ; energy : account -> [J] since the start of the run.
    """

    time: float
    stage: int
    step: float
    H: Array
    extended: Array
    readings: dict[str, float]
    field: EddyField
    point: OperatingPoint
    losses: dict[str, float]
    energy: dict[str, float]
    record: StageRecord | None = None
    field_solves: int = 0
    rejected: int = 0


@dataclass
class Recorder:
    """Keeps states until history() is asked for.

    sampler : reads the section ; edges : (n + 1,) [m] cell faces.
    """

    sampler: Sampler
    edges: Array
    states: list[State] = field(default_factory=list)

    def add(self, state: State) -> None:
        """Keep a state."""
        self.states.append(state)

    def history(
        self,
        stages: tuple[StageRecord, ...],
        status: Status,
        field_solves: int,
        rejected: int,
        wall_s: float,
    ) -> History:
        """All states as arrays."""
        states = self.states

        def series(pick: str) -> Array:
            return np.array([getattr(s, pick) for s in states], dtype=float)

        def of_point(pick: str) -> Array:
            return np.array([getattr(s.point, pick) for s in states], dtype=float)

        extended = np.array([s.extended for s in states])
        losses = {name: np.array([s.losses[name] for s in states]) for name in states[0].losses}
        return History(
            time=series("time"),
            stage=np.array([s.stage for s in states], dtype=np.int64),
            step=series("step"),
            r=self.sampler.nodes[1:-1],
            edges=self.edges,
            T=extended[:, 1:-1],
            enthalpy=np.array([s.H for s in states]),
            heat=np.array([s.field.heat for s in states]),
            readings={name: np.array([s.readings[name] for s in states]) for name in states[0].readings},
            maximum_depth=np.array([self.sampler.hottest_depth(row) for row in extended]),
            absorbed_power=np.array([s.field.power for s in states]),
            supply_power=of_point("supply_power"),
            coil_loss=of_point("coil_loss"),
            loss_power=np.array([sum(s.losses.values()) for s in states]),
            losses=losses,
            frequency=of_point("frequency"),
            coil_current_rms=of_point("coil_current_rms"),
            coil_voltage_rms=of_point("coil_voltage_rms"),
            power_factor=of_point("power_factor"),
            H_surface_rms=np.array([s.field.H_surface_rms for s in states]),
            limit=tuple(s.point.limit for s in states),
            energy={name: np.array([s.energy[name] for s in states]) for name in states[0].energy},
            stages=stages,
            status=status,
            field_solves=field_solves,
            steps=sum(1 for s in states if s.step > 0.0),
            rejected=rejected,
            wall_s=wall_s,
        )
