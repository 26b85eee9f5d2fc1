"""Test doubles for the roles of a run, and a run put together by hand from them."""

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Protocol

import numpy as np

from materials.caloric import Caloric
from materials.magnetics import Magnetics
from materials.material import Material
from materials.property import Property
from materials.source import Source
from thermal.build import interpolated
from thermal.conduction.assemble import EnthalpyTable, Section
from thermal.control import Control, FixedDrive
from thermal.geometry.mesh import Mesh
from thermal.geometry.sampling import Sampler
from thermal.interfaces import (
    Array,
    BoundaryLoss,
    Demand,
    EddyField,
    FieldOf,
    HeatSource,
    OperatingPoint,
    PropertyOf,
    Real,
    Supply,
)
from thermal.results.history import History
from thermal.schedule import Stage, Stop
from thermal.setup import Setup

ZERO = 273.15
"""0 °C [K]."""


@dataclass(frozen=True)
class PrescribedSource:
    """Heat per volume by a law of the cell temperatures and the excitation (plays HeatSource).

    law : (T (n,) [K], excitation) -> heat (n,) [W/m3].
    """

    mesh: Mesh
    law: Callable[[Array, float], Array]

    def at(self, T: Array) -> FieldOf:
        def field_of(excitation: float, frequency: float, guess: EddyField | None) -> EddyField:
            heat = self.law(T, excitation)
            return EddyField(heat, float(heat @ self.mesh.volume), 0j, 0.0, np.ones_like(T), 1)

        return field_of


@dataclass(frozen=True)
class ObedientSupply:
    """Passes the value of the demand on as the excitation, without limits (plays Supply)."""

    def operate(
        self, field_of: FieldOf, demand: Demand, guess: tuple[OperatingPoint, EddyField] | None
    ) -> tuple[OperatingPoint, EddyField]:
        none = float("nan")
        return OperatingPoint(0.0, none, none, none, none, 0.0, none, None, None), field_of(demand.value, 0.0, None)


@dataclass(frozen=True)
class Clock:
    """Demands the time since the start of the stage, so that a source may depend on it (plays Control).

    The first memory of the control is the clock: its rate is 1.
    """

    needs_readings: bool = False
    gain: tuple[str, float, float] = ("surface", 0.0, 1.0)

    def demand(self, readings: dict[str, float], loss: float, memory: Array) -> Demand:
        return Demand("surface_field", float(memory[0]))

    def memory_rates(self, readings: dict[str, float], memory: Array, clipped: int) -> Array:
        return np.array([1.0, 0.0])


class Law(Protocol):
    """Flux [W/m2] out of the workpiece and its slope [W/(m2 K)] from the surface temperature [K]."""

    def __call__(self, T: Real, /) -> tuple[Real, Real]: ...


@dataclass(frozen=True)
class FluxLaw:
    """A loss by any law of the surface temperature (plays BoundaryLoss)."""

    name: str
    law: Law

    def flux(self, T_surface: Real, T_peak: Real) -> tuple[Real, Real]:
        return self.law(T_surface)


def constant_flux(q: float) -> FluxLaw:
    """A flux q [W/m2] INTO the workpiece: a loss of the opposite sign."""

    def law(T: Real) -> tuple[Real, Real]:
        return 0.0 * T - q, 0.0 * T

    return FluxLaw("flux", law)


def convection(h: float, T_around: float) -> FluxLaw:
    """h [W/(m2 K)] to T_around [K]."""

    def law(T: Real) -> tuple[Real, Real]:
        return h * (T - T_around), 0.0 * T + h

    return FluxLaw("convection", law)


def radiation(emissivity: float, T_around: float) -> FluxLaw:
    """Grey radiation to large surroundings at T_around [K]; sigma of CODATA 2018."""
    s = emissivity * 5.670374419e-8

    def law(T: Real) -> tuple[Real, Real]:
        return s * (T * T * T * T - T_around**4), 4.0 * s * (T * T * T)

    return FluxLaw("radiation", law)


def by_hand(name: str, value: float) -> Property:
    """A property of one constant value from 200 to 3000 K."""
    made_up = Source("test", "made up", "assumed")
    return Property(name, np.array([200.0, 3000.0]), np.full(2, value), "linear", "hold", 0.0, "SI", made_up)


def plain_material(density: float, specific_heat: Property, conductivity: Property) -> Material:
    """A material without transformations, magnetism or surfaces, for runs put together by hand."""
    return Material(
        key="plain",
        title="plain",
        aliases=(),
        group="test",
        density=density,
        conductivity=conductivity,
        resistivity=by_hand("resistivity", 1e-6),
        specific_heat=specific_heat,
        caloric=Caloric.build(specific_heat),
        magnetics=Magnetics.constant(1.0),
        surfaces={},
        solidus=None,
        liquidus=None,
        latent_heat=None,
        data=(),
        references={},
    )


STEEL_LIKE = plain_material(7800.0, by_hand("specific heat", 650.0), by_hand("conductivity", 30.0))
"""The constant properties of most closed solutions: k 30 W/(m K), 7800 kg/m3, 650 J/(kg K)."""


@dataclass(frozen=True)
class Problem:
    """A run put together by hand: everything a Setup needs that is not the same in every test.

    losses : face -> losses, the faces left out lose nothing ; conductivity : T -> k, else that of the material.
    """

    mesh: Mesh
    stages: tuple[Stage, ...]
    T_initial: float = 293.15
    losses: dict[str, tuple[BoundaryLoss, ...]] = field(default_factory=dict)
    source: HeatSource | None = None
    supply: Supply = field(default_factory=ObedientSupply)
    material: Material = STEEL_LIKE
    conductivity: PropertyOf | None = None
    table: EnthalpyTable | None = None
    tolerance: float = 0.01
    frequency: float = 0.0
    T_end: float = 1e9
    depths: dict[str, float] = field(default_factory=dict)

    def setup(self) -> Setup:
        caloric = self.material.caloric
        table = self.table or EnthalpyTable(self.material.density * caloric.h_nodes, caloric.T_nodes)
        faces = {name: self.losses.get(name, ()) for name in self.mesh.faces}
        nothing = PrescribedSource(self.mesh, lambda T, excitation: np.zeros_like(T))
        return Setup(
            title="by hand",
            material=self.material,
            section=Section(self.mesh, table, self.conductivity or interpolated(self.material.conductivity)),
            sampler=Sampler.of(self.mesh),
            source=self.source or nothing,
            supply=self.supply,
            has_coil=False,
            share=1.0,
            losses={"coil": faces, "open": faces},
            stages=self.stages,
            depths=self.depths,
            T_initial=self.T_initial,
            T_end=self.T_end,
            mass=self.material.density * float(self.mesh.volume.sum()),
            frequency=self.frequency,
            tolerance=self.tolerance,
            assumptions=(),
            notes=(),
        )


def uniform_source(mesh: Mesh, heat: float) -> PrescribedSource:
    """The same heat [W/m3] everywhere."""
    return PrescribedSource(mesh, lambda T, excitation: np.full_like(T, heat))


ON = FixedDrive(Demand("surface_field", 1.0))
OFF = FixedDrive(Demand("off", 0.0))


def heating(duration: float | None, stop: Stop | None = None, control: Control = ON) -> Stage:
    """A heating stage of a duration [s], or with a stop of that longest time."""
    return Stage("heat", control, "coil", stop, duration)


def left_alone(duration: float | None, stop: Stop | None = None) -> Stage:
    """A stage without power."""
    return Stage("transfer", OFF, "open", stop, duration)


def uniform_edges(inner: float, outer: float, cells: int) -> Array:
    """Cell faces of equal spacing (cells + 1,) [m]."""
    return np.linspace(inner, outer, cells + 1)


def observed_order(sizes: list[float], errors: list[float]) -> float:
    """Slope of log(error) over log(size), by least squares."""
    return float(np.polyfit(np.log(sizes), np.log(errors), 1)[0])


def account_gap(energy: dict[str, Array]) -> float:
    """|stored + lost - absorbed| over the largest of the three, at every moment of the history."""
    lost = np.sum([series for name, series in energy.items() if name.startswith("loss: ")], axis=0)
    stored, absorbed = energy["stored"], energy["absorbed"]
    size = max(np.abs(stored).max(), np.abs(lost).max(), np.abs(absorbed).max())
    return float(np.abs(stored + lost - absorbed).max() / size)


def last_of(history: History, reading: str) -> float:
    """Value of a reading [K] at the end."""
    return float(history.readings[reading][-1])
