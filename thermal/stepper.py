"""Steps of one stage: rates at a state, step-length control, and landing on a stop.

Knows the parts of a Setup only through their roles.
"""

import math
from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from thermal.conduction.assemble import FaceState
from thermal.conduction.step import Fading, Feedback, Matrix, Rates, Step, rosenbrock_step
from thermal.constants import ZERO_CELSIUS
from thermal.errors import NoConvergence, OutOfRange
from thermal.interfaces import Array, EddyField, OperatingPoint
from thermal.schedule import Stage
from thermal.setup import Setup

GROWTH_AT_MOST = 4.0
SHRINK_AT_MOST = 0.2
SAFETY = 0.85
STEP_AT_LEAST = 1e-9
LANDINGS_AT_MOST = 30
HOLDING_AT_MOST = 1.0
"""Largest tolerance of a step under a controller [K]: in coarser ones a quick controller books too much energy."""
NEARLY_ON = 1.0
"""A controller counts as about to ask for power within this many kelvin."""
LANDING = 1e-3
"""A stop is met within this many kelvin."""

ELECTRICAL = ("supply", "coil", "tank")

SURFACES = ("outer", "bore")
"""Faces of one cell, with a surface temperature of their own; end faces and edges show that of every cell."""


@dataclass
class Hottest:
    """How hot the faces have been [K], for surfaces that keep their oxide.

    surfaces : outer (and bore) -> [K] ; cells : (n,), as the end faces and edges show them.
    """

    surfaces: dict[str, float]
    cells: Array

    def see(self, faces: dict[str, FaceState], T: Array) -> None:
        """Take over the temperatures of an accepted step; T (n,) [K] of the cells."""
        for name in self.surfaces:
            self.surfaces[name] = max(self.surfaces[name], float(faces[name].T_surface))
        self.cells = np.maximum(self.cells, T)


@dataclass(frozen=True, slots=True)
class Moment:
    """The workpiece at one instant, with everything that follows from its enthalpy.

    H : (n,) ; extended : (n + 2,) [K] core, cells, surface ; readings : name -> [K] ; memory : of the control [W] ;
    faces : face -> state ; field, point ; rates ; matrix : of a step that starts here ; trend : (n,) mean dH/dt of
    the step that led here.
    """

    H: Array
    extended: Array
    readings: dict[str, float]
    memory: Array
    faces: dict[str, FaceState]
    field: EddyField
    point: OperatingPoint
    rates: Rates
    matrix: Matrix
    trend: Array


@dataclass(slots=True)
class _Conduction:
    """What conduction and losses make of an enthalpy: T (n,), flow into cells (n,) [W], accounts (p,) [W]."""

    T: Array
    conductance: Array
    heat_flow: Array
    accounts: Array
    lost: float
    faces: dict[str, FaceState]
    dT_dH: Array | None
    slopes: list[tuple[int, int | slice, float | Array]]


class Stepper:
    """Advances the workpiece within one stage."""

    def __init__(self, setup: Setup, stage: Stage, hottest: Hottest) -> None:
        self.setup = setup
        self.stage = stage
        self.hottest = hottest
        self._supply = stage.supply if stage.supply is not None else setup.supply
        self.accounts = account_names(setup)
        # End faces that lose nothing need no evaluation; the outer surface and the bore have a temperature to find.
        self._faces = [
            (name, losses, [self.accounts.index(loss_account(name, loss.name)) for loss in losses])
            for name, losses in setup.losses[stage.place].items()
            if losses or name in SURFACES
        ]
        self._volume = setup.section.mesh.volume
        n = self._volume.size
        self._idle_field = EddyField(np.zeros(n), 0.0, 0j, 0.0, np.ones(n), 0)
        nothing = 0.0 if setup.has_coil else math.nan
        self._idle_point = OperatingPoint(
            setup.frequency, nothing, nothing, nothing, nothing, 0.0, math.nan, None, None
        )
        self.field_solves = 0
        self._tolerance = setup.tolerance
        if stage.control.gain[1] > 0.0:
            self._tolerance = min(setup.tolerance, HOLDING_AT_MOST)

    def moment(
        self, H: Array, memory: Array, guess: tuple[OperatingPoint, EddyField] | None, trend: Array | None = None
    ) -> Moment:
        """Everything that follows from H (n,) [J/m3] and the memory of the control."""
        here = self._conduct(H, with_slopes=True)
        extended = self._extended(here)
        readings = self._readings(extended)
        rates, point, field = self._drive(here, readings, memory, guess)
        assert here.dT_dH is not None
        feedback = self._feedback(here, readings, memory, point, field, guess)
        fading = self._fading(here.dT_dH, field, rates.accounts)
        matrix = Matrix(here.conductance, here.dT_dH, tuple(here.slopes), feedback, fading)
        if trend is None:
            trend = rates.heat_flow / self._volume
        return Moment(H, extended, readings, memory, here.faces, field, point, rates, matrix, trend)

    def untouched(self, moment: Moment) -> Moment:
        """The moment before anything has flowed: the surface as warm as the cell behind it."""
        T = moment.extended[1:-1]
        extended = self.setup.sampler.extended(T, float(T[-1]), float(T[0]))
        return replace(moment, extended=extended, readings=self._readings(extended))

    def _conduct(self, H: Array, with_slopes: bool) -> _Conduction:
        section = self.setup.section
        T = section.table.temperature(H)
        k = section.conductivity(T)
        conductance = section.conductances(k)
        flow = conductance * (T[:-1] - T[1:])
        net = np.zeros_like(T)
        net[:-1] = -flow
        net[1:] += flow
        dT_dH = section.table.slope(H) if with_slopes else None
        here = _Conduction(T, conductance, net, np.zeros(len(self.accounts)), 0.0, {}, dT_dH, [])
        for name, losses, rows in self._faces:
            cells: int | slice
            if name not in SURFACES:
                face = section.ends_state(name, losses, T, dT_dH, self.hottest.cells)
                cells = slice(None)
            else:
                face = section.surface_state(name, losses, T, k, flow, dT_dH, self.hottest.surfaces[name])
                cells = -1 if name == "outer" else 0
            here.faces[name] = face
            for row, loss in zip(rows, face.loss, strict=True):
                net[cells] -= loss
                total = loss if isinstance(loss, float) else float(loss.sum())
                here.accounts[row] += total
                here.lost += total
            if with_slopes:
                here.slopes += [(row, cells, slope) for row, slope in zip(rows, face.slope, strict=True)]
        return here

    def _drive(
        self,
        here: _Conduction,
        readings: dict[str, float],
        memory: Array,
        guess: tuple[OperatingPoint, EddyField] | None,
    ) -> tuple[Rates, OperatingPoint, EddyField]:
        setup, control = self.setup, self.stage.control
        demand = control.demand(readings, here.lost, memory)
        if demand.kind == "off":
            point, field = self._idle_point, self._idle_field
        else:
            response = setup.source.at(here.T)

            def field_of(excitation: float, frequency: float, start: EddyField | None) -> EddyField:
                found = response(excitation, frequency, start)
                self.field_solves += found.solves
                return found

            usable = guess if guess is not None and guess[1].power > 0.0 else None
            point, field = self._supply.operate(field_of, demand, usable)
        accounts = self._booked(here.accounts, point, field)
        clipped = -1 if demand.kind == "off" else int(point.limit is not None)
        memory_rates = control.memory_rates(readings, memory, clipped)
        return Rates(here.heat_flow + self._volume * field.heat, accounts, memory_rates), point, field

    def _extended(self, here: _Conduction) -> Array:
        surface = here.faces["outer"].T_surface
        bore = here.faces["bore"].T_surface if "bore" in here.faces else None
        assert isinstance(surface, float) and not isinstance(bore, np.ndarray)
        return self.setup.sampler.extended(here.T, surface, bore)

    def _per_watt(self, field: EddyField, accounts: Array) -> Array:
        """What every account gains per watt absorbed."""
        gains = np.zeros_like(accounts)
        electrical = 1 + len(ELECTRICAL) if self.setup.has_coil else 1
        gains[:electrical] = accounts[:electrical] / field.power
        return gains

    def _fading(self, dT_dH: Array, field: EddyField, accounts: Array) -> Fading | None:
        """What the source adds to the matrix at the Curie point: without it, steps are as short as that is steep."""
        if field.fall is None or field.power <= 0.0:
            return None
        return Fading(self._volume * field.fall * dT_dH, self._per_watt(field, accounts))

    def _feedback(
        self,
        here: _Conduction,
        readings: dict[str, float],
        memory: Array,
        point: OperatingPoint,
        field: EddyField,
        guess: tuple[OperatingPoint, EddyField] | None,
    ) -> Feedback | None:
        """What the controller adds to the matrix: without it, it would hold the steps to its response time.

        A controller that is off but about to ask for power counts as well, with the field it had last: else a hold
        can end every step with the power off and book what it needs in between.
        """
        control = self.stage.control
        reading, gain, reset = control.gain
        if gain == 0.0 or point.limit is not None:
            return None
        if point is self._idle_point:
            if guess is None or control.slack(readings, here.lost, memory) > NEARLY_ON:
                return None
            point, field = guess
        if field.power <= 0.0:
            return None
        assert here.dT_dH is not None
        if reading == "mean":
            pull = gain * self.setup.sampler.volume_share * here.dT_dH
        else:
            pull = np.zeros_like(here.dT_dH)
            pull[-1] = gain * here.dT_dH[-1]
        share = self._volume * field.heat / field.power
        booked = self._booked(np.zeros(len(self.accounts)), point, field)
        return Feedback(share, pull, self._per_watt(field, booked), reset)

    def _booked(self, accounts: Array, point: OperatingPoint, field: EddyField) -> Array:
        """The accounts (p,) [W] with what the workpiece absorbs and what supply, coil and tank give for it."""
        accounts[0] = field.power
        if self.setup.has_coil:
            drawn = (point.supply_power, point.coil_loss, point.tank_loss)
            accounts[1 : 1 + len(ELECTRICAL)] = [self.setup.share * watts for watts in drawn]
        return accounts

    def _readings(self, extended: Array) -> dict[str, float]:
        """Every reading [K] by name."""
        found = self.setup.sampler.readings(extended, self.setup.depths)
        return {name: float(value) for name, value in found.items()}

    def try_step(self, start: Moment, step: float, reach: float | None = None) -> tuple[Step, Moment]:
        """One step of a given length from a moment; the embedded error is not judged.

        reach : [s] how far the matrix looks ahead, the step itself if left out.
        """
        recent = (start.point, start.field)

        def rates(H: Array, memory: Array) -> Rates:
            nonlocal recent
            here = self._conduct(H, with_slopes=False)
            wanted = self.stage.control.needs_readings
            readings = self._readings(self._extended(here)) if wanted else {}
            found, point, field = self._drive(here, readings, memory, recent)
            if field.power > 0.0:
                recent = (point, field)
            return found

        matrix = self._ahead(start, step if reach is None else reach)
        taken = rosenbrock_step(start.H, start.memory, start.rates, matrix, self._volume, step, rates)
        return taken, self.moment(taken.H, taken.extra, recent, (taken.H - start.H) / step)

    def _ahead(self, start: Moment, step: float) -> Matrix:
        """The matrix of a step, its dT/dH the larger of here and where each cell is heading.

        A W-method stays stable with a matrix too stiff, not with one too soft, and dT/dH jumps where a cell leaves
        a transformation or melting.
        """
        here = start.matrix.dT_dH
        dT_dH = np.maximum(here, self.setup.section.table.slope(start.H + step * start.trend))
        ratio = dT_dH / here
        slopes = tuple((row, cells, ratio[cells] * slope) for row, cells, slope in start.matrix.slopes)
        fading = start.matrix.fading
        if fading is not None:
            fading = replace(fading, fall=ratio * fading.fall)
        return replace(start.matrix, dT_dH=dT_dH, slopes=slopes, fading=fading)

    def error_of(self, taken: Step, start: Moment, end: Moment) -> float:
        """Largest embedded error of a step [K] over the tolerance."""
        slope = np.maximum(start.matrix.dT_dH, end.matrix.dT_dH)
        return float((np.abs(taken.error) * slope).max()) / self._tolerance

    def advance(self, start: Moment, step: float, most: float) -> tuple[Step, Moment, float, float, int]:
        """The next accepted step.

        step : [s] proposed ; most : [s] time left.
        Returns the step, its end, its length, the length proposed next and the number of rejections.

        Raises
        ------
        NoConvergence : the step would have to be shorter than a nanosecond.
        """
        rejected = 0
        while True:
            length = min(step, most, self.stage.control.longest_step)
            if most - length < 0.1 * length:
                length = most
            try:
                taken, end = self.try_step(start, length)
                error = self.error_of(taken, start, end)
            except (NoConvergence, OutOfRange) as reason:
                error, failure = np.inf, str(reason)
            else:
                failure = ""
            if error <= 1.0:
                factor = min(GROWTH_AT_MOST, SAFETY * max(error, 1e-6) ** (-1.0 / 3.0))
                proposed = max(length * factor, step if length < step else 0.0)
                return taken, end, length, proposed, rejected
            rejected += 1
            factor = max(SHRINK_AT_MOST, SAFETY * error ** (-1.0 / 3.0)) if np.isfinite(error) else 0.25
            step = length * factor
            if step < STEP_AT_LEAST:
                hottest = float(start.extended.max()) - ZERO_CELSIUS
                raise NoConvergence(
                    "the time step fell below a nanosecond"
                    f" (hottest cell {hottest:.0f} °C){': ' + failure if failure else ''}"
                )

    def first_step(self, start: Moment) -> float:
        """Length [s] of the first step after a switch: a fraction of the tolerance at the present rate."""
        rate = float(np.max(np.abs(start.rates.heat_flow / self._volume) * start.matrix.dT_dH))
        return 5.0 * self.setup.tolerance / rate if rate > 0.0 else 1.0

    def land(
        self, start: Moment, length: float, end_distance: float, distance: Callable[[Moment], float]
    ) -> tuple[Step, Moment, float] | None:
        """Retake a step that went past a stop so that it ends on it (secant with bracketing).

        length : [s] of the step that went past ; end_distance : its distance there, <= 0.
        Returns None where a shorter step does not keep the tolerance: the caller goes on from the start with one.
        """
        low, low_d = 0.0, distance(start)
        high, high_d = length, end_distance
        for _ in range(LANDINGS_AT_MOST):
            trial = high - high_d * (high - low) / (high_d - low_d)
            trial = min(max(trial, low + 0.02 * (high - low)), high - 0.001 * (high - low))
            try:
                taken, end = self.try_step(start, trial, reach=length)
            except (NoConvergence, OutOfRange):
                return None
            if self.error_of(taken, start, end) > 1.0:
                return None
            d = distance(end)
            if abs(d) < LANDING:
                return taken, end, trial
            if d > 0.0:
                low, low_d = trial, d
                high_d = high_d if high_d < -LANDING else -LANDING
            else:
                high, high_d = trial, d
        return None


def loss_account(face: str, loss: str) -> str:
    """Name of the account a loss is booked on: the loss itself outside, the face elsewhere."""
    return f"loss: {loss if face == 'outer' else face}"


def account_names(setup: Setup) -> list[str]:
    """Energy accounts of a run, absorbed first, then supply, coil and tank where there is a coil, then losses."""
    names = ["absorbed", *(ELECTRICAL if setup.has_coil else ())]
    for faces in setup.losses.values():
        for face, losses in faces.items():
            for loss in losses:
                if (account := loss_account(face, loss.name)) not in names:
                    names.append(account)
    return names
