"""The only place where time moves."""

import math
import time
from collections import deque
from collections.abc import Callable, Iterator
from dataclasses import replace

import numpy as np

from thermal.build import build
from thermal.case import Case
from thermal.control import HoldTemperature
from thermal.interfaces import Array, EddyField, OperatingPoint
from thermal.results.balance import demand_closure
from thermal.results.history import History, StageRecord, Status
from thermal.results.recorder import Recorder, State
from thermal.schedule import Stage
from thermal.setup import Setup
from thermal.stepper import LANDING, SURFACES, Hottest, Moment, Stepper, account_names

SETTLED = 1e-3
"""Net heat below this share of what is absorbed counts as settled."""

LATELY = (3, 10)
"""Steps looked back on to tell whether a stage has settled."""

AT_ONCE = 1e-6
"""A stop passed within so short a step [s] is taken as met by it: a surface that begins to lose heat at once reads some
kelvin lower after any step, however short."""

HOPELESS = 1e3
"""A target so many times farther off than the stage has taken is out of reach."""


def march(setup: Setup) -> Iterator[State]:
    """Run the schedule; yields a state after every accepted step and at the start of every stage.

    The last state of a stage carries its record. The march ends early where a heating stage settles short of its
    target or the workpiece reaches setup.T_end.

    Raises
    ------
    NoConvergence : a step could not be made.
    """
    book = _Book(setup)
    for number, stage in enumerate(setup.stages):
        yield from _march_stage(setup, number, stage, book)
        if book.over:
            return


def _march_stage(setup: Setup, number: int, stage: Stage, book: "_Book") -> Iterator[State]:
    if isinstance(stage.control, HoldTemperature):
        ceiling = max(book.hottest.surfaces["outer"], stage.control.set_point)
        stage = replace(stage, control=replace(stage.control, ceiling=ceiling))
    stepper = Stepper(setup, stage, book.hottest)
    watch = _Watch(stage, stepper.accounts)
    begun = book.clock
    end_time = math.inf if stage.longest is None else begun + stage.longest

    def distance(at: Moment) -> float:
        """To the targets or to the end of the material, whichever comes first [K]."""
        room = setup.T_end - at.readings["maximum"]
        return min(room, stage.stop.distance(at.readings)) if stage.stop else room

    now = stepper.moment(book.H, np.zeros(2), book.recent)
    if book.clock == 0.0:
        now = stepper.untouched(now)
    if stage.stop and stage.stop.distance(now.readings) <= 0.0:
        yield book.state(number, stepper, now, 0.0, watch.record(begun, begun, "already there", met=True))
        return
    yield book.state(number, stepper, now, 0.0, None)
    step = stepper.first_step(now)
    record: StageRecord | None = None
    while record is None:
        left = end_time - book.clock
        taken, end, length, step, rejected = stepper.advance(now, step, left)
        far = distance(end)
        landed = far <= 0.0
        if landed:
            found = stepper.land(now, length, far, distance)
            if found is not None:
                taken, end, length = found
            elif length > AT_ONCE:
                step = 0.3 * length
                continue
        timed_out = not landed and length >= left
        book.accept(taken.gained, end, end_time if timed_out else book.clock + length)
        watch.see(book.clock - length, book.clock, end.point.limit)
        if landed:
            if stage.stop is not None and stage.stop.distance(end.readings) <= LANDING:
                record = watch.record(begun, book.clock, "target", met=True)
            else:
                record = watch.record(begun, book.clock, "too hot", met=stage.stop is None)
                book.over = True
        elif timed_out:
            # A transfer may end before its targets; a heating stage that does has failed them.
            met = stage.stop is None or stage.kind != "heat"
            record = watch.record(begun, book.clock, "time", met=met)
        elif (
            stage.kind == "heat"
            and stage.stop is not None
            and watch.settled(taken.gained, length, far, book.clock - begun)
        ):
            record = watch.record(begun, book.clock, "settled", met=False)
            book.over = True
        now = end
        yield book.state(number, stepper, now, length, record, rejected)


class _Book:
    """What is carried from stage to stage: clock, enthalpy, energy accounts, hottest temperatures."""

    def __init__(self, setup: Setup) -> None:
        mesh = setup.section.mesh
        self.H = setup.section.table.enthalpy(np.full(mesh.volume.size, setup.T_initial))
        self.clock = 0.0
        surfaces = {name: setup.T_initial for name in mesh.faces if name in SURFACES}
        self.hottest = Hottest(surfaces, np.full(mesh.volume.size, setup.T_initial))
        self.recent: tuple[OperatingPoint, EddyField] | None = None
        self.over = False
        self._volume = mesh.volume
        self._H_start = self.H
        self._names = account_names(setup)
        self._gained = np.zeros(len(self._names))

    def accept(self, gained: Array, end: Moment, clock: float) -> None:
        """Take over a step."""
        self._gained = self._gained + gained
        self.clock = clock
        self.H = end.H
        self.hottest.see(end.faces, end.extended[1:-1])
        if end.field.power > 0.0:
            self.recent = (end.point, end.field)

    def state(
        self,
        number: int,
        stepper: Stepper,
        at: Moment,
        step: float,
        record: StageRecord | None,
        rejected: int = 0,
    ) -> State:
        """The present as a State."""
        energy = dict(zip(self._names, self._gained.tolist(), strict=True))
        energy["stored"] = float(self._volume @ (at.H - self._H_start))
        losses = {
            name: float(watts)
            for name, watts in zip(self._names, at.rates.accounts.tolist(), strict=True)
            if name.startswith("loss: ")
        }
        return State(
            time=self.clock,
            stage=number,
            step=step,
            H=at.H,
            extended=at.extended,
            readings=at.readings,
            field=at.field,
            point=at.point,
            losses=losses,
            energy=energy,
            record=record,
            field_solves=stepper.field_solves,
            rejected=rejected,
        )


class _Watch:
    """Keeps book of limits and notices when a stage gets no further."""

    def __init__(self, stage: Stage, accounts: list[str]) -> None:
        self.stage = stage
        self._losses = [i for i, name in enumerate(accounts) if name.startswith("loss: ")]
        self.limits: dict[str, list[tuple[float, float]]] = {}
        self._lately: deque[tuple[float, float, float, float]] = deque(maxlen=max(LATELY))

    def see(self, start: float, end: float, limit: str | None) -> None:
        """A step from start to end ran at a limit (or at none)."""
        if limit is None:
            return
        spans = self.limits.setdefault(limit, [])
        if spans and abs(spans[-1][1] - start) < 1e-9:
            spans[-1] = (spans[-1][0], end)
        else:
            spans.append((start, end))

    def settled(self, gained: Array, step: float, distance: float, elapsed: float) -> bool:
        """Whether the workpiece has come to rest short of its target.

        Seen over the last three steps, or over the last ten where the heat of single steps swings (a piece that rests
        on its Curie point): in their later half net heat must be below 0.1 % of what is absorbed, and the approach to
        the target must die out before it gets there if it goes on slowing down as it did from the earlier half, or
        would take a thousand times as long as the stage has taken so far.

        gained : (p,) [J] of the energy accounts over the step ; distance : [K] ; elapsed : [s] since the stage began.
        """
        self._lately.append((float(gained[0]), float(gained[self._losses].sum()), step, distance))
        return any(self._at_rest(count, distance, elapsed) for count in LATELY if len(self._lately) >= count)

    def _at_rest(self, count: int, distance: float, elapsed: float) -> bool:
        lately = list(self._lately)[-count:]
        middle = count // 2
        absorbed = sum(each[0] for each in lately[middle + 1 :])
        lost = sum(each[1] for each in lately[middle + 1 :])
        if abs(absorbed - lost) > SETTLED * max(absorbed, lost):
            return False
        _, _, steps, distances = np.array(lately).T
        times = np.cumsum(steps)
        first = (distances[0] - distances[middle]) / (times[middle] - times[0])
        second = (distances[middle] - distances[-1]) / (times[-1] - times[middle])
        if second * HOPELESS * elapsed <= distance:
            return True
        if second >= first:
            return False
        decay = 0.5 * (times[-1] - times[0]) / math.log(first / second)
        return bool(second * decay < distance)

    def record(self, start: float, end: float, reason: str, met: bool) -> StageRecord:
        """The stage as it happened."""
        return StageRecord(self.stage.kind, start, end, reason, met, self.limits)


def run_case(case: Case) -> History:
    """Run a case: run(build(case)).

    Raises
    ------
    CaseError, MaterialError, NoConvergence, BalanceError : see build and run.
    """
    return run(build(case))


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
    recorder = Recorder(setup.sampler, setup.section.mesh.edges)
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
        field_solves=solves + per_stage,
        rejected=rejected,
        wall_s=time.perf_counter() - began,
    )
    volume = setup.section.mesh.volume
    demand_closure(history.energy, float(np.abs(history.enthalpy[[0, -1]] @ volume).max()))
    return history


def _status(setup: Setup, records: list[StageRecord], recorder: Recorder) -> Status:
    hottest = max(state.readings["maximum"] for state in recorder.states)
    solidus = setup.material.solidus
    if any(r.reason == "too hot" for r in records) or (solidus is not None and hottest > solidus):
        return "limit"
    if any(not r.met for r in records):
        return "cannot_reach"
    return "target" if any(stage.stop for stage in setup.stages) else "finished"
