"""The roles that parts of a run play, and the small frozen records that pass between them.

Arrays are float64; n cells. Kelvin and SI; AC values are rms unless the name says ``_peak``.
"""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal, Protocol, TypeVar

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]

Real = TypeVar("Real", float, Array)
"""A number or an array of them."""

DemandKind = Literal["absorbed_power", "supply_power", "coil_current", "coil_voltage", "surface_field", "off"]
Limit = Literal["power", "current", "voltage", "field"]


@dataclass(frozen=True, slots=True)
class EddyField:
    """The field in the workpiece at one excitation, averaged over the length of the workpiece.

    heat : (n,) [W/m3] ; power : [W] absorbed by this workpiece (= sum of heat x volume) ;
    impedance : [ohm] workpiece and air space reflected at the coil terminals, coil copper left out
    (0 where there is no coil) ; H_surface_rms : [A/m] ; mu_r : (n,) [-] as used in the cells ;
    solves : field solves it took ; fall : (n,) [W/(m3 K)] how much the heat of a cell falls with its own temperature as
    its permeability goes, a rough figure of zero or more for the matrix of a step; None for zero.
    """

    heat: Array
    power: float
    impedance: complex
    H_surface_rms: float
    mu_r: Array
    solves: int
    fall: Array | None = None


@dataclass(frozen=True, slots=True)
class OperatingPoint:
    """What the supply delivers at one moment. Whole coil, whole row of workpieces.

    limit names the limit of the supply that kept it from meeting the demand, None where none did.
    """

    frequency: float
    coil_current_rms: float
    coil_voltage_rms: float
    supply_power: float
    coil_loss: float
    tank_loss: float
    power_factor: float
    capacitor_voltage_rms: float | None
    limit: Limit | None


@dataclass(frozen=True, slots=True)
class Demand:
    """What a stage asks of the supply: kind and value in W, A, V or A/m (rms)."""

    kind: DemandKind
    value: float


PropertyOf = Callable[[Array], Array]
"""T (n,) [K] -> property (n,) in SI."""

FieldOf = Callable[[float, float, EddyField | None], EddyField]
"""(excitation, frequency [Hz], first guess) -> field. The excitation is the coil current [A], rms; without a
coil it is the surface field [A/m], rms."""


class HeatSource(Protocol):
    """Turns temperature and excitation into heat per volume."""

    def at(self, T: Array) -> FieldOf:
        """Field as a function of the excitation, at cell temperatures T (n,) [K]."""
        ...


class Supply(Protocol):
    """Meets a demand as far as its limits allow."""

    def operate(
        self, field_of: FieldOf, demand: Demand, guess: tuple[OperatingPoint, EddyField] | None
    ) -> tuple[OperatingPoint, EddyField]:
        """Operating point and field for a demand."""
        ...


class BoundaryLoss(Protocol):
    """Heat that leaves through a face of the workpiece."""

    @property
    def name(self) -> str:
        """Account the loss is booked on."""
        ...

    def flux(self, T_surface: Real, T_peak: Real) -> tuple[Real, Real]:
        """Flux out of the workpiece [W/m2] and its slope with T_surface [W/(m2 K)], at one place or at (s,).

        T_surface : [K] ; T_peak : [K] hottest this face has been, for surfaces that keep their oxide.
        """
        ...
