"""What a case file may say, as frozen records in SI: kelvin, rms, one record per section.

Keys that have a default are listed in defaults.py, with the reason; here they are required.
"""

from typing import Annotated, Literal

from pydantic import BaseModel, BeforeValidator, ConfigDict, Discriminator, model_validator
from pydantic import Field as Declared
from pydantic_core import PydanticCustomError

from thermal.case.quantity import (
    Current,
    Depth,
    Emissivity,
    Field,
    Frequency,
    HeatTransfer,
    Inductance,
    Length,
    Moment,
    Opening,
    Power,
    Resistance,
    ResponseTime,
    Speed,
    Temperature,
    TemperatureDifference,
    Time,
    Title,
    Tolerance,
    Turns,
    Voltage,
    read_value,
)

DRIVES = ("supply_power", "absorbed_power", "coil_current", "coil_voltage", "surface_field")
"""What a drive can fix; exactly one of them."""

TEMPERATURES = ("surface", "core", "mean", "maximum")
"""Readings every run has, besides the spread (surface minus core)."""

REFINEMENTS = range(1, 9)


def refuse(key: str | None, sentence: str) -> PydanticCustomError:
    """An error of a record that is to be shown at one of its keys (None: at the record itself)."""
    return PydanticCustomError("case", "{sentence}", {"sentence": sentence, "key": key})


def _given(record: BaseModel, names: tuple[str, ...]) -> list[str]:
    return [name for name in names if getattr(record, name) is not None]


def _targets(record: BaseModel) -> dict[str, float]:
    """Declared and free keys of a record of targets that were given, in SI."""
    return {name: value for name, value in record if value is not None}


def _only_one(value: object) -> object:
    if value == 1 and not isinstance(value, bool):
        return value
    if isinstance(value, str):
        raise ValueError(f"'{value}' is a text, write the number 1 without quotes")
    raise ValueError(f"{value} is not available in this version (accepted: 1)")


def _refinement(value: object) -> object:
    if isinstance(value, bool) or value not in REFINEMENTS:
        raise ValueError(f"{read_value(value)} is not accepted, write a whole number from 1 to {REFINEMENTS[-1]}")
    return value


class Section(BaseModel):
    """Common settings: frozen, and a key that is not declared is an error."""

    model_config = ConfigDict(frozen=True, extra="forbid")


class _Workpiece(Section):
    length: Length
    material: str
    surface: str | None = None
    emissivity: Emissivity | None = None
    initial: Temperature
    neighbours: Literal["none", "touching"]
    axis: Literal["horizontal", "vertical"]

    @model_validator(mode="after")
    def _one_radiation(self) -> "_Workpiece":
        given = _given(self, ("surface", "emissivity"))
        if not given:
            raise refuse(None, 'how it radiates is missing, write surface = "oxidised" (a state) or emissivity = 0.8')
        if len(given) == 2:
            raise refuse("emissivity", "give surface or emissivity, not both")
        return self


class Cylinder(_Workpiece):
    """A full round bar."""

    shape: Literal["cylinder"]
    diameter: Length

    @property
    def section(self) -> float:
        """Depth [m] from the outer surface to the core: the radius."""
        return self.diameter / 2

    @property
    def outline(self) -> tuple[float, float]:
        """Width and height [m] the coil must leave free."""
        return self.diameter, self.diameter


class Tube(_Workpiece):
    """A round tube, heated from outside."""

    shape: Literal["tube"]
    outer_diameter: Length
    wall: Length

    @property
    def section(self) -> float:
        """Depth [m] from the outer surface to the core: the wall, the core being the bore surface."""
        return self.wall

    @property
    def outline(self) -> tuple[float, float]:
        """Width and height [m] the coil must leave free."""
        return self.outer_diameter, self.outer_diameter


class Plate(_Workpiece):
    """A flat plate or slab, both faces heated alike."""

    shape: Literal["plate"]
    thickness: Length
    width: Length

    @property
    def section(self) -> float:
        """Depth [m] from a face to the core: half of the thickness."""
        return self.thickness / 2

    @property
    def outline(self) -> tuple[float, float]:
        """Width and height [m] the coil must leave free."""
        return self.width, self.thickness


Workpiece = Annotated[Cylinder | Tube | Plate, Discriminator("shape")]


class CoilSection(Section):
    """The coil: a single layer of square copper tube. wall None: by rule."""

    turns: Turns
    inner_diameter: Length | None = None
    opening: Opening | None = None
    length: Length
    tube: Length
    wall: Length | None = None
    temperature: Temperature
    leads_resistance: Resistance
    leads_inductance: Inductance

    @model_validator(mode="after")
    def _one_bore(self) -> "CoilSection":
        given = _given(self, ("inner_diameter", "opening"))
        if not given:
            raise refuse(None, 'inner_diameter is missing (or, for a plate, opening = "120 x 40 mm")')
        if len(given) == 2:
            raise refuse("opening", "give inner_diameter or opening, not both")
        return self

    @property
    def bore(self) -> tuple[float, float]:
        """Width and height [m] of the opening."""
        if self.opening is not None:
            return self.opening
        assert self.inner_diameter is not None
        return self.inner_diameter, self.inner_diameter


class LiningSection(Section):
    """A refractory layer against the coil bore. emissivity None: that of its material."""

    material: str
    thickness: Length
    emissivity: Emissivity | None = None


class SupplySection(Section):
    """The supply: rated output power, fixed frequency, optional limits at the coil terminals (rms)."""

    power: Power
    frequency: Frequency
    max_current: Current | None = None
    max_voltage: Voltage | None = None


class SurroundingsSection(Section):
    """What the workpiece gives its heat to. Either a speed (correlation) or a constant h."""

    temperature: Temperature
    gas: str
    speed: Speed | None = None
    h: HeatTransfer | None = None

    @model_validator(mode="after")
    def _one_convection(self) -> "SurroundingsSection":
        if self.h is not None and self.speed is not None:
            raise refuse("speed", "h is a constant coefficient and knows no speed, leave one of them out")
        return self


class Drive(Section):
    """What a heat stage asks for; frequency only where there is no supply."""

    supply_power: Power | None = None
    absorbed_power: Power | None = None
    coil_current: Current | None = None
    coil_voltage: Voltage | None = None
    surface_field: Field | None = None
    frequency: Frequency | None = None

    @model_validator(mode="after")
    def _exactly_one(self) -> "Drive":
        given = _given(self, DRIVES)
        if len(given) != 1:
            found = f"both {given[0]} and {given[1]} are given" if given else "nothing is asked for"
            raise refuse(None, f"{found}, write exactly one of {', '.join(DRIVES)}")
        return self

    @property
    def kind(self) -> str:
        """Name of the one quantity that is fixed."""
        return _given(self, DRIVES)[0]

    @property
    def value(self) -> float:
        """Its value in W, A, V or A/m, rms."""
        value: float = getattr(self, self.kind)
        return value


class Until(Section):
    """Targets that must all hold for a stage to end."""

    model_config = ConfigDict(frozen=True, extra="allow")
    __pydantic_extra__: dict[str, Temperature] = Declared(init=False)

    surface: Temperature | None = None
    core: Temperature | None = None
    mean: Temperature | None = None
    maximum: Temperature | None = None
    spread: TemperatureDifference | None = None

    @model_validator(mode="after")
    def _not_empty(self) -> "Until":
        if not self.targets:
            raise refuse(None, 'no target is given, write for example until = { core = "1150 °C" }')
        return self

    @property
    def targets(self) -> dict[str, float]:
        """Reading -> temperature [K]; for the spread its absolute value [K]."""
        return _targets(self)


class At(Section):
    """The one reading a hold stage controls."""

    model_config = ConfigDict(frozen=True, extra="allow")
    __pydantic_extra__: dict[str, Temperature] = Declared(init=False)

    surface: Temperature | None = None
    core: Temperature | None = None
    mean: Temperature | None = None

    @model_validator(mode="after")
    def _exactly_one(self) -> "At":
        if len(_targets(self)) != 1:
            raise refuse(None, "name exactly one of surface, core, mean or a reading")
        return self

    @property
    def reading(self) -> str:
        """Name of the reading."""
        return next(iter(_targets(self)))

    @property
    def temperature(self) -> float:
        """Its set point [K]."""
        return _targets(self)[self.reading]


class Heat(Section):
    """Heating with a fixed demand, until targets hold (at the longest `longest`) or for a duration."""

    stage: Literal["heat"]
    drive: Drive
    until: Until | None = None
    longest: Time | None = None
    duration: Time | None = None

    @model_validator(mode="after")
    def _has_end(self) -> "Heat":
        if self.until is None and self.duration is None:
            raise refuse(None, "it never ends, give until (with longest) or duration")
        if self.until is not None and self.duration is not None:
            raise refuse("duration", "give until or duration, not both (longest bounds an until)")
        if self.longest is not None and self.until is None:
            raise refuse("longest", "longest bounds an until, with a duration leave it out")
        return self


class Hold(Section):
    """Keeping one reading at a temperature; response and reset are the time constants of the control [s]."""

    stage: Literal["hold"]
    at: At
    duration: Time
    response: ResponseTime
    reset: ResponseTime


class Transfer(Section):
    """No power, outside the coil; ends early where until holds."""

    stage: Literal["transfer"]
    duration: Time
    until: Until | None = None


Stage = Annotated[Heat | Hold | Transfer, Discriminator("stage")]


class Reading(Section):
    """A named temperature at a depth [m] under the outer surface."""

    name: str
    depth: Depth


class NumericsSection(Section):
    """How the run is computed: tolerance [K] per step, refinement multiplies the planned number of cells."""

    dimensions: Annotated[int, BeforeValidator(_only_one)]
    tolerance: Tolerance
    refinement: Annotated[int, BeforeValidator(_refinement)]


class OutputSection(Section):
    """What is written: rows of the curves every interval [s], profiles at given times [s]."""

    interval: Time | None = None
    profiles_at: tuple[Moment, ...] = ()


class CaseFile(Section):
    """The whole file."""

    format: Annotated[int, BeforeValidator(_only_one)]
    title: Title = ""
    workpiece: Workpiece
    coil: CoilSection | None = None
    lining: LiningSection | None = None
    supply: SupplySection | None = None
    surroundings: SurroundingsSection
    schedule: tuple[Stage, ...]
    reading: tuple[Reading, ...] = ()
    numerics: NumericsSection
    output: OutputSection
