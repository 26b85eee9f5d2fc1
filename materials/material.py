"""The property set of one alloy, and of a lining."""

from collections.abc import Mapping
from dataclasses import dataclass

from materials.caloric import Caloric
from materials.magnetics import Magnetics
from materials.property import Property
from materials.source import Reference, Source


@dataclass(frozen=True, slots=True)
class Datum:
    """One number or table as the data file gives it, ready to print.

    name : "conductivity", "emissivity (oxidised)", ... ; text : value and unit, or the range of a table ;
    uncertainty : relative [-].
    """

    name: str
    text: str
    uncertainty: float
    source: Source
    note: str


@dataclass(frozen=True, eq=False)
class Surface:
    """One surface state.

    emissivity : total, hemispherical as far as known ; grows : True where an oxide layer stays, so that the
    highest emissivity reached is kept on cooling.
    """

    emissivity: Property
    grows: bool


@dataclass(frozen=True, slots=True)
class Exemption:
    """A departure from a rule of the audit that is physics and no mistake, as the data file names it.

    check : of the audit ; start, end : where it holds [K] ; reason : a sentence without a full stop.
    """

    name: str
    check: str
    start: float
    end: float
    reason: str
    source: Source


@dataclass(frozen=True, eq=False)
class Material:
    """One alloy.

    density : [kg/m3] at 20 °C ; conductivity [W/(m K)], resistivity [ohm m], specific_heat [J/(kg K)] without
    transformation heats ; caloric : enthalpy with them ; curie_temperature, solidus, liquidus : [K] or None ;
    latent_heat : [J/kg] or None ; data : every number of the file ; references : what their sources cite ;
    molar_mass : mean over the atoms [kg/mol] or None ; exemptions : from rules of the audit.
    """

    key: str
    title: str
    aliases: tuple[str, ...]
    group: str
    density: float
    conductivity: Property
    resistivity: Property
    specific_heat: Property
    caloric: Caloric
    magnetics: Magnetics
    surfaces: Mapping[str, Surface]
    solidus: float | None
    liquidus: float | None
    latent_heat: float | None
    data: tuple[Datum, ...]
    references: Mapping[str, Reference]
    molar_mass: float | None = None
    exemptions: tuple[Exemption, ...] = ()

    @property
    def curie_temperature(self) -> float | None:
        """Temperature [K] from which the material is not magnetic, None where it never is."""
        return self.magnetics.curie_temperature

    def sources(self) -> list[tuple[str, Source]]:
        """Name and source of every number."""
        return [(datum.name, datum.source) for datum in self.data]

    def data_limit(self) -> dict[str, float]:
        """Highest temperature with data [K] of each property; above it the last value is held."""
        properties = [self.conductivity, self.resistivity, self.specific_heat]
        properties += [surface.emissivity for surface in self.surfaces.values()]
        return {each.name: each.T_max for each in properties}


@dataclass(frozen=True, eq=False)
class Lining:
    """A refractory lining between workpiece and coil.

    conductivity [W/(m K)] ; density [kg/m3] at 20 °C ; emissivity of the hot face [-].
    """

    key: str
    title: str
    conductivity: Property
    density: float
    emissivity: Property
    data: tuple[Datum, ...]
    references: Mapping[str, Reference]
