"""Heating problems put together by hand, of plain properties and prescribed heat, to hold against closed solutions."""

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Protocol

import numpy as np

from materials.caloric import Caloric
from materials.magnetics import Magnetics
from materials.material import Material
from materials.property import Property
from materials.source import Source
from thermal.boundary.convection import constant_convection
from thermal.boundary.emissivity import Emissivity
from thermal.boundary.radiation import Radiation
from thermal.boundary.table import constant_law
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
from thermal.schedule import Stage, Stop
from thermal.setup import Setup


@dataclass(frozen=True)
class PrescribedSource:
    """Heat per volume by a law of the cell temperatures and the excitation (plays HeatSource).

    law : (T (n,) [K], excitation) -> heat (n,) [W/m3].
    """

    mesh: Mesh
    law: Callable[[Array, float], Array]
    _plain: Array = field(init=False, repr=False)

    def __post_init__(self) -> None:
        object.__setattr__(self, "_plain", np.ones_like(self.mesh.r))

    def at(self, T: Array) -> FieldOf:
        """Field as a function of the excitation at T (n,) [K]."""

        def field_of(excitation: float, frequency: float, guess: EddyField | None) -> EddyField:
            heat = self.law(T, excitation)
            return EddyField(heat, float(heat @ self.mesh.volume), 0j, 0.0, self._plain, 1)

        return field_of


@dataclass(frozen=True)
class ObedientSupply:
    """Passes the value of the demand on as the excitation, without limits (plays Supply)."""

    def operate(
        self, field_of: FieldOf, demand: Demand, guess: tuple[OperatingPoint, EddyField] | None
    ) -> tuple[OperatingPoint, EddyField]:
        """Operating point without electrical answers, and the field."""
        none = float("nan")
        return OperatingPoint(0.0, none, none, none, none, 0.0, none, None, None), field_of(demand.value, 0.0, None)


class Law(Protocol):
    """Flux [W/m2] out of the workpiece and its slope [W/(m2 K)] from the surface temperature [K]."""

    def __call__(self, T: Real, /) -> tuple[Real, Real]:
        """Flux and slope."""
        ...


@dataclass(frozen=True)
class FluxLaw:
    """A loss by any law of the surface temperature (plays BoundaryLoss)."""

    name: str
    law: Law

    def flux(self, T_surface: Real, T_peak: Real) -> tuple[Real, Real]:
        """Flux and slope at T_surface [K]."""
        return self.law(T_surface)


def constant_flux(q: float) -> FluxLaw:
    """A flux q [W/m2] INTO the workpiece: a loss of the opposite sign."""

    def law(T: Real) -> tuple[Real, Real]:
        return 0.0 * T - q, 0.0 * T

    return FluxLaw("flux", law)


def convection(h: float, T_around: float) -> BoundaryLoss:
    """Loss by h [W/(m2 K)] to T_around [K], as a run has it."""
    return constant_convection("convection", h, T_around)


def radiation(emissivity: float, T_around: float) -> BoundaryLoss:
    """Loss by grey radiation to large surroundings at T_around [K], as a run has it."""
    return Radiation("radiation", Emissivity(constant_law(emissivity), False), T_around)


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
        """The problem as a run takes it."""
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
            gas="air",
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
"""An excitation of 1."""
OFF = FixedDrive(Demand("off", 0.0))
"""No power."""


def heating(duration: float | None, stop: Stop | None = None, control: Control = ON) -> Stage:
    """A heating stage of a duration [s], or with a stop of that longest time."""
    return Stage("heat", control, "coil", stop, duration)


def left_alone(duration: float | None, stop: Stop | None = None) -> Stage:
    """A stage without power."""
    return Stage("transfer", OFF, "open", stop, duration)
