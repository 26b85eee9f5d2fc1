"""A gas at atmospheric pressure, tabulated over temperature."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from materials.curve import Array
from materials.errors import MaterialError
from materials.material import Datum
from materials.property import Property
from materials.source import Reference


@dataclass(frozen=True, eq=False)
class Gas:
    """Transport properties of a gas at 101 325 Pa; asked beyond T_min..T_max all of them raise MaterialError.

    density [kg/m3] ; viscosity, dynamic [Pa s] ; conductivity [W/(m K)] ; heat_capacity [J/(kg K)].
    """

    key: str
    title: str
    density: Property
    viscosity: Property
    conductivity: Property
    heat_capacity: Property
    data: tuple[Datum, ...]
    references: Mapping[str, Reference]

    @property
    def T_min(self) -> float:
        """Lowest temperature of the tables [K]."""
        return self.density.T_min

    @property
    def T_max(self) -> float:
        """Highest temperature of the tables [K]."""
        return self.density.T_max

    def kinematic_viscosity(self, T: npt.ArrayLike) -> Array:
        """Viscosity over density [m2/s] at T [K]."""
        return self.viscosity(T) / self.density(T)

    def prandtl(self, T: npt.ArrayLike) -> Array:
        """Prandtl number [-] at T [K]."""
        return self.viscosity(T) * self.heat_capacity(T) / self.conductivity(T)

    def expansion(self, T: npt.ArrayLike) -> Array:
        """Volume expansion coefficient [1/K] at T [K], as of an ideal gas."""
        t = np.asarray(T, dtype=np.float64)
        if np.any(t < self.T_min) or np.any(t > self.T_max):
            raise MaterialError(f"{self.key}: the tables reach from {self.T_min:g} to {self.T_max:g} K")
        return np.asarray(1.0 / t)
