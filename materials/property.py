"""A property over temperature, with its limits, uncertainty and source."""

from dataclasses import dataclass, field
from typing import Literal

import numpy.typing as npt

from materials.curve import Array, Curve, EndRule
from materials.errors import MaterialError
from materials.formulas import CarbonSteelHeat
from materials.source import Source

PropertyRule = Literal["linear", "monotone", "step", "EN 1993-1-2 3.4.1.2"]


@dataclass(frozen=True, eq=False)
class Property:
    """One property of one material.

    name : as printed ; T : (k,) [K] ; value : (k,) [SI] ; rule : between the points ;
    beyond : outside T_min..T_max hold the end value, or refuse with MaterialError ;
    uncertainty : relative [-] ; published_unit : unit of the source ; note : what to know when using it.
    """

    name: str
    T: Array
    value: Array
    rule: PropertyRule
    beyond: EndRule
    uncertainty: float
    published_unit: str
    source: Source
    note: str = ""
    law: Curve | CarbonSteelHeat = field(init=False, repr=False)

    def __post_init__(self) -> None:
        if self.rule == "EN 1993-1-2 3.4.1.2":
            law: Curve | CarbonSteelHeat = CarbonSteelHeat()
        else:
            law = Curve(self.T, self.value, self.rule, self.beyond)
        object.__setattr__(self, "T", law.x)
        object.__setattr__(self, "value", law(law.x))
        object.__setattr__(self, "law", law)

    @property
    def T_min(self) -> float:
        """Lowest temperature with data [K]."""
        return float(self.T[0])

    @property
    def T_max(self) -> float:
        """Highest temperature with data [K]."""
        return float(self.T[-1])

    def __call__(self, T: npt.ArrayLike) -> Array:
        """Value [SI] at T [K], any shape."""
        try:
            return self.law(T)
        except MaterialError as error:
            raise MaterialError(f"{self.name}: temperature {error} K") from None

    def slope(self, T: npt.ArrayLike) -> Array:
        """Slope with temperature [SI/K] at T [K], 0 where the end value is held."""
        try:
            return self.law.slope(T)
        except MaterialError as error:
            raise MaterialError(f"{self.name}: temperature {error} K") from None
