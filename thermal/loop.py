"""The only place where time moves."""

import math
import time
from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace

import numpy as np

from thermal.constants import ZERO_CELSIUS
from thermal.control import HoldTemperature
from thermal.errors import ThermalError
from thermal.interfaces import Array, EddyField, OperatingPoint
from thermal.results.balance import demand_closure
from thermal.results.history import History, StageRecord, Status
from thermal.results.recorder import Recorder
from thermal.schedule import Stage, Stop
from thermal.setup import Setup
from thermal.stepper import Moment, Stepper, account_names

SETTLED = 1e-3
"""Net heat below this share of what is absorbed counts as settled."""

FASTEST = 1e6
"""A stage that has neither met its targets nor settled after this many steps is given up."""


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


def march(setup: Setup) -> Iterator[State]:
    """Run the schedule; yields a state after every accepted step and at the start of every stage.

    The last state of a stage carries its record. The march ends early where the workpiece reaches setup.T_end.

    Raises
    ------
    NoConvergence : a step could not be made.
    """
    section = setup.section
    mesh = section.mesh
    H = section.table.enthalpy(np.full(mesh.volume.size, setup.T_initial))
    H_start = H
    T_peak = {name: np.full(face.cells.size, setup.T_initial) for name, face in mesh.faces.items()}
    names = account_names(setup)
    gained = np.zeros(len(names))
    clock = 0.0
    hottest_surface = setup.T_initial
    recent: tuple[OperatingPoint, EddyField] | None = None

    for number, planned in enumerate(setup.stages):
        stage = planned
        if isinstance(stage.control, HoldTemperature):
            ceiling = max(hottest_surface, stage.control.set_point)
            stage = replace(stage, control=replace(stage.control, ceiling=ceiling))
        stepper = Stepper(setup, stage, T_peak)
        watch = _Watch(stage)
        begun = clock
        now = stepper.moment(H, np.zeros(1), recent, may_start=True)

        def state(
            at: Moment,
            step: float,
            record: StageRecord | None,
            rejected: int = 0,
            *,
            stepper: Stepper = stepper,
            number: int = number,
        ) -> State:
            energy = dict(zip(names, gained.tolist(), strict=True))
            energy["stored"] = float(mesh.volume @ (at.H - H_start))
            losses = {
                name: float(at.rates.accounts[i]) for i, name in enumerate(names) if name.startswith("loss: ")
            }
            return State(
                clock,
                number,
                step,
                at.H,
                at.extended,
                stepper.readings(at.extended),
                at.field,
                at.point,
                losses,
                energy,
                record,
                stepper.field_solves,
                rejected,
            )

        def distance(at: Moment, *, stepper: Stepper = stepper, stage: Stage = stage) -> float:
            readings = stepper.readings(at.extended)
            room = setup.T_end - readings["maximum"]
            return min(room, stage.stop.distance(readings)) if stage.stop else room

        if stage.stop and stage.stop.distance(stepper.readings(now.extended)) <= 0.0:
            yield state(now, 0.0, watch.record(begun, clock, "already there", met=True))
            continue
        yield state(now, 0.0, None)
        step = stepper.first_step(now)
        while True:
            left = math.inf if stage.longest is None else begun + stage.longest - clock
            taken, end, length, proposed, rejected = stepper.advance(now, step, left)
            far = distance(end)
            if far <= 0.0:
                taken, end, length = stepper.land(now, length, far, distance)
            finished = length >= left or far <= 0.0
            previous = now
            gained = gained + taken.gained
            clock = begun + stage.longest if stage.longest is not None and length >= left else clock + length
            now, step = end, proposed
            for name, face_state in now.faces.items():
                T_peak[name] = np.maximum(T_peak[name], face_state.T_surface)
            hottest_surface = max(hottest_surface, float(now.extended[-1]))
            watch.see(clock - length, clock, now.point.limit)
            record = None
            readings = stepper.readings(now.extended)
            if finished:
                melted = readings["maximum"] >= setup.T_end - 1e-3 - 1e-9
                on_target = stage.stop is not None and stage.stop.distance(readings) <= 1e-3
                if on_target:
                    record = watch.record(begun, clock, "target", met=True)
                elif melted:
                    record = watch.record(begun, clock, "too hot", met=stage.stop is None)
                else:
                    record = watch.record(begun, clock, "time", met=stage.stop is None or stage.kind != "heat")
            elif stage.stop and stage.kind == "heat" and watch.settled(previous, now, length, distance(now)):
                record = watch.record(begun, clock, "settled", met=False)
            yield state(now, length, record, rejected)
            if record is not None:
                if record.reason == "too hot":
                    return
                if not record.met and record.reason == "settled":
                    return
                break
        H = now.H
        recent = (now.point, now.field) if now.field.power > 0.0 else None


class _Watch:
    """Keeps book of limits and notices when a stage gets no further."""

    def __init__(self, stage: Stage) -> None:
        self.stage = stage
        self.limits: dict[str, list[tuple[float, float]]] = {}
        self._approach: float | None = None
        self._distance: float | None = None

    def see(self, start: float, end: float, limit: str | None) -> None:
        """A step from start to end ran at a limit (or at none)."""
        if limit is None:
            return
        spans = self.limits.setdefault(limit, [])
        if spans and abs(spans[-1][1] - start) < 1e-9:
            spans[-1] = (spans[-1][0], end)
        else:
            spans.append((start, end))

    def settled(self, before: Moment, now: Moment, step: float, distance: float) -> bool:
        """Whether the workpiece has come to rest short of its target.

        Net heat must be below 0.1 % of what is absorbed, and the approach to the target must die out before it gets
        there if it goes on slowing down as it did over the last two steps.
        """
        absorbed = now.field.power
        lost = sum(float(loss.sum()) for face in now.faces.values() for loss in face.loss)
        earlier, self._distance = self._distance, distance
        last, self._approach = self._approach, None if earlier is None else (earlier - distance) / step
        if abs(absorbed - lost) > SETTLED * max(absorbed, lost):
            return False
        if last is None or self._approach is None:
            return False
        if self._approach <= 0.0:
            return True
        if self._approach >= last:
            return False
        decay = step / math.log(last / self._approach)
        return self._approach * decay < distance

    def record(self, start: float, end: float, reason: str, met: bool) -> StageRecord:
        """The stage as it happened."""
        return StageRecord(self.stage.kind, start, end, reason, met, self.limits)


def run(setup: Setup, on_state: Callable[[State], None] | None = None) -> History:
    """March to the end and keep everything.

    on_state : called after every state (progress). A KeyboardInterrupt ends the march; the history up to then comes
    back with the status "interrupted".

    Raises
    ------
    NoConvergence : a step could not be made.
    BalanceError : the energy accounts do not close.
    """
    began = time.perf_counter()
    recorder = Recorder(setup.sampler.nodes, setup.section.mesh.edges)
    records: list[StageRecord] = []
    solves = rejected = 0
    per_stage = 0
    interrupted = False
    try:
        for state in march(setup):
            recorder.add(state)
            rejected += state.rejected
            per_stage = state.field_solves
            if state.record is not None:
                records.append(state.record)
                solves += per_stage
                per_stage = 0
            if on_state is not None:
                on_state(state)
    except KeyboardInterrupt:
        if not recorder.states:
            raise
        interrupted = True
    status: Status = "interrupted" if interrupted else _status(setup, records, recorder)
    history = recorder.history(
        tuple(records),
        status,
        sentence="",
        notes=setup.notes,
        field_solves=solves + per_stage,
        rejected=rejected,
        wall_s=time.perf_counter() - began,
    )
    demand_closure(history.energy)
    return history


def _status(setup: Setup, records: list[StageRecord], recorder: Recorder) -> Status:
    hottest = max(state.readings["maximum"] for state in recorder.states)
    solidus = setup.material.solidus
    if any(r.reason == "too hot" for r in records) or (solidus is not None and hottest > solidus):
        return "limit"
    if any(not r.met for r in records):
        return "cannot_reach"
    return "target" if any(stage.stop for stage in setup.stages) else "finished"
