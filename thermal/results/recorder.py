"""Collects the states of a march into a History."""

from dataclasses import dataclass, field
from typing import Protocol

import numpy as np

from thermal.interfaces import Array, EddyField, OperatingPoint
from thermal.results.history import History, StageRecord, Status


class State(Protocol):
    """What a march yields after every accepted step, and at the start of every stage."""

    @property
    def time(self) -> float: ...
    @property
    def stage(self) -> int: ...
    @property
    def step(self) -> float: ...
    @property
    def H(self) -> Array: ...
    @property
    def extended(self) -> Array: ...
    @property
    def readings(self) -> dict[str, float]: ...
    @property
    def field(self) -> EddyField: ...
    @property
    def point(self) -> OperatingPoint: ...
    @property
    def losses(self) -> dict[str, float]: ...
    @property
    def energy(self) -> dict[str, float]: ...


@dataclass
class Recorder:
    """Keeps states until history() is asked for.

    nodes : (n + 2,) [m] core, cell centres, surface ; edges : (n + 1,) [m].
    """

    nodes: Array
    edges: Array
    states: list[State] = field(default_factory=list)

    def add(self, state: State) -> None:
        """Keep a state."""
        self.states.append(state)

    def history(
        self,
        stages: tuple[StageRecord, ...],
        status: Status,
        sentence: str,
        notes: tuple[str, ...],
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
            r=self.nodes[1:-1],
            edges=self.edges,
            T=extended[:, 1:-1],
            enthalpy=np.array([s.H for s in states]),
            heat=np.array([s.field.heat for s in states]),
            readings={name: np.array([s.readings[name] for s in states]) for name in states[0].readings},
            maximum_depth=self.nodes[-1] - self.nodes[np.argmax(extended, axis=1)],
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
            sentence=sentence,
            notes=notes,
            field_solves=field_solves,
            steps=sum(1 for s in states if s.step > 0.0),
            rejected=rejected,
            wall_s=wall_s,
        )
