"""Supplies that meet a demand as far as their limits let them."""

import math
from collections.abc import Callable
from dataclasses import dataclass

from thermal.circuit.winding import Winding
from thermal.errors import NoConvergence
from thermal.interfaces import Demand, EddyField, FieldOf, Limit, OperatingPoint

TOLERANCE = 1e-6
TRIES_AT_MOST = 60
STEEPEST = 8.0


@dataclass(frozen=True, slots=True)
class Trial:
    """One excitation tried: how far it goes (1 = exactly as far as allowed), what sets that, and the outcome."""

    reach: float
    binding: Limit | None
    point: OperatingPoint
    field: EddyField


def excitation_for(try_at: Callable[[float, EddyField | None], Trial], start: float, field: EddyField | None) -> Trial:
    """The excitation whose reach is 1, on logarithms.

    Every demand and every limit is written as a reach that rises with the excitation (power as its square root), most
    often in proportion, so the largest of them decides and one root finds both the operating point and what binds.
    Secant rule, kept within its bracket.

    Raises
    ------
    NoConvergence : after 60 trials.
    """
    here = math.log(start)
    low, high = -math.inf, math.inf
    before: tuple[float, float] | None = None
    slope = 1.0
    for _ in range(TRIES_AT_MOST):
        trial = try_at(math.exp(here), field)
        if not (math.isfinite(trial.reach) and trial.reach > 0.0):
            break
        off = math.log(trial.reach)
        low, high = (here, high) if off < 0.0 else (low, here)
        # The field is settled to 1e-5 only: where it jumps past the reach, the excitation is known well enough.
        if abs(off) < TOLERANCE or high - low < TOLERANCE:
            return trial
        if before is not None and here != before[0]:
            slope = min(max((off - before[1]) / (here - before[0]), 0.3), STEEPEST)
        slower = before is not None and abs(off) > 0.5 * abs(before[1])
        before = (here, off)
        here -= off / slope
        if math.isfinite(high - low) and (slower or not low < here < high):
            # The secant has left the bracket or hardly helps: iron that saturates makes the reach steep.
            here = 0.5 * (low + high)
        field = trial.field
    raise NoConvergence(f"no operating point found near an excitation of {math.exp(here):.4g}")


def decide(own: float, limits: list[tuple[float, Limit]]) -> tuple[float, Limit | None]:
    """The largest reach, and the limit it belongs to (None for the demand itself)."""
    reach: float = own
    binding: Limit | None = None
    for further, limit in limits:
        if further > reach * (1.0 + 2.0 * TOLERANCE):
            reach, binding = further, limit
    return reach, binding


@dataclass(frozen=True)
class CoilSupply:
    """A supply of fixed frequency driving the coil directly, within limits (plays the Supply role).

    frequency : [Hz] ; winding : coil copper and leads ; max_power : [W] at the supply output ; max_current,
    max_voltage : [A], [V] rms at the coil terminals, leads included; None where there is no such limit.
    """

    frequency: float
    winding: Winding
    max_power: float | None = None
    max_current: float | None = None
    max_voltage: float | None = None

    def operate(
        self, field_of: FieldOf, demand: Demand, guess: tuple[OperatingPoint, EddyField] | None
    ) -> tuple[OperatingPoint, EddyField]:
        """Operating point and field that meet the demand, or the nearest the limits allow.

        Raises
        ------
        NoConvergence : no current does it.
        """
        series = self.winding.impedance(self.frequency)

        def try_at(current: float, field: EddyField | None) -> Trial:
            found = field_of(current, self.frequency, field)
            total = series + found.impedance
            voltage = abs(total) * current
            power = total.real * current**2
            limits: list[tuple[float, Limit]] = []
            if self.max_power is not None:
                limits.append((math.sqrt(power / self.max_power), "power"))
            if self.max_current is not None:
                limits.append((current / self.max_current, "current"))
            if self.max_voltage is not None:
                limits.append((voltage / self.max_voltage, "voltage"))
            reach, binding = decide(self._reach(demand, current, voltage, power, found), limits)
            point = OperatingPoint(
                frequency=self.frequency,
                coil_current_rms=current,
                coil_voltage_rms=voltage,
                supply_power=power,
                coil_loss=series.real * current**2,
                tank_loss=0.0,
                power_factor=total.real / abs(total),
                capacitor_voltage_rms=None,
                limit=binding,
            )
            return Trial(reach, binding, point, found)

        if guess is not None and guess[0].coil_current_rms > 0.0:
            start, field = guess[0].coil_current_rms, guess[1]
        else:
            start, field = self._first_current(demand), None
        trial = excitation_for(try_at, start, field)
        return trial.point, trial.field

    def _first_current(self, demand: Demand) -> float:
        if demand.kind == "coil_current":
            return demand.value
        return self.max_current if self.max_current is not None else 500.0

    @staticmethod
    def _reach(demand: Demand, current: float, voltage: float, power: float, field: EddyField) -> float:
        match demand.kind:
            case "absorbed_power":
                return math.sqrt(field.power / demand.value)
            case "supply_power":
                return math.sqrt(power / demand.value)
            case "coil_current":
                return current / demand.value
            case "coil_voltage":
                return voltage / demand.value
            case "surface_field":
                return field.H_surface_rms / demand.value
            case "off":
                raise ValueError("a supply that is off has no operating point")


@dataclass(frozen=True)
class DirectDrive:
    """Absorbed power or surface field prescribed without a coil (plays the Supply role).

    frequency : [Hz] ; max_power : [W] absorbed, max_field : [A/m] rms; what a hold may use at most.
    """

    frequency: float
    max_power: float | None = None
    max_field: float | None = None

    def operate(
        self, field_of: FieldOf, demand: Demand, guess: tuple[OperatingPoint, EddyField] | None
    ) -> tuple[OperatingPoint, EddyField]:
        """Field that meets the demand; no electrical figures.

        Raises
        ------
        NoConvergence : no surface field does it.
        ValueError : the demand needs a coil.
        """
        if demand.kind not in ("absorbed_power", "surface_field"):
            raise ValueError(f"without a coil there is no {demand.kind}")

        def try_at(H: float, field: EddyField | None) -> Trial:
            found = field_of(H, self.frequency, field)
            limits: list[tuple[float, Limit]] = []
            if self.max_power is not None:
                limits.append((math.sqrt(found.power / self.max_power), "power"))
            if self.max_field is not None:
                limits.append((H / self.max_field, "field"))
            by_field = demand.kind == "surface_field"
            own = H / demand.value if by_field else math.sqrt(found.power / demand.value)
            reach, binding = decide(own, limits)
            none = math.nan
            point = OperatingPoint(self.frequency, none, none, none, none, 0.0, none, None, binding)
            return Trial(reach, binding, point, found)

        if guess is not None and guess[1].H_surface_rms > 0.0:
            start, field = guess[1].H_surface_rms, guess[1]
        else:
            start, field = (demand.value if demand.kind == "surface_field" else 3e4), None
        trial = excitation_for(try_at, start, field)
        return trial.point, trial.field
