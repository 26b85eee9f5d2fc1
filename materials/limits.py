"""What a number about a metal, a lining or a gas can be: beyond `possible` a file is refused, beyond `usual` remarked.

The bounds are rounded outwards from the extremes of the elements and of technical alloys (CRC Handbook of Chemistry and
Physics, from memory, unless a reason says otherwise); their purpose is to catch a slipped digit or unit.
"""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from materials.units import display


@dataclass(frozen=True, slots=True)
class Limits:
    """Bounds of one quantity.

    unit : to show them in ; possible, usual : lowest and highest [SI] ; reason : where the usual bounds come from.
    """

    unit: str
    possible: tuple[float, float]
    usual: tuple[float, float]
    reason: str

    def impossible(self, values: npt.ArrayLike) -> npt.NDArray[np.intp]:
        """Indices of the values nothing can have."""
        return _outside(values, self.possible)

    def unusual(self, values: npt.ArrayLike) -> npt.NDArray[np.intp]:
        """Indices of the values that are hardly met."""
        return _outside(values, self.usual)

    def allowed(self, unit: str | None = None, *, usual: bool = False) -> str:
        """The possible bounds in words, or the usual ones."""
        shown = self.unit if unit is None else unit
        low, high = (f"{display(end, shown):.6g}" for end in (self.usual if usual else self.possible))
        return f"{low} to {high} {shown}".removesuffix(" 1")


METAL: Mapping[str, Limits] = {
    "density": Limits("kg/m3", (400.0, 25000.0), (1700.0, 22600.0), "magnesium 1738 kg/m3, osmium 22 590 kg/m3"),
    "molar_mass": Limits("g/mol", (6.9e-3, 245e-3), (9e-3, 239e-3), "beryllium 9.01 g/mol, uranium 238 g/mol"),
    "conductivity": Limits(
        "W/(m K)",
        (1.0, 500.0),
        (6.0, 430.0),
        "silver 430 W/(m K), alloys of nickel or titanium 7 to 9 W/(m K)",
    ),
    "resistivity": Limits(
        "uohm cm",
        (0.5e-8, 1e-4),
        (1.4e-8, 2.5e-6),
        "silver 1.6 uohm cm at 20 °C; with a free path of one atomic distance metals end at 150 to 250 uohm cm (J. H. "
        "Mooij, phys. stat. sol. (a) 17, 521, 1973, from memory)",
    ),
    "specific_heat": Limits(
        "J/(kg K)",
        (80.0, 1e5),
        (110.0, 6000.0),
        "uranium 116 J/(kg K); the peak of EN 1993-1-2 has 5000 J/(kg K)",
    ),
    "emissivity": Limits("1", (0.0, 1.0), (0.01, 0.99), "polished gold 0.02, soot and heavy scale 0.95 to 0.98"),
    "solidus": Limits("°C", (298.15, 3800.0), (420.0, 3700.0), "indium 157 °C, tungsten 3422 °C"),
    "liquidus": Limits("°C", (298.15, 4000.0), (420.0, 3900.0), "indium 157 °C, tungsten 3422 °C"),
    "latent_heat": Limits("kJ/kg", (5e3, 2e6), (20e3, 900e3), "lead 23 kJ/kg, beryllium 880 kJ/kg"),
    "transformation": Limits("kJ/kg", (1.0, 1e6), (1e3, 150e3), "iron 15 kJ/kg, titanium 87 kJ/kg"),
    "curie_temperature": Limits("°C", (300.0, 1430.0), (300.0, 1400.0), "cobalt 1121 °C, the highest of all"),
    "saturation": Limits("T", (0.0, 2.6), (0.1, 2.45), "iron with 35 % cobalt 2.45 T, the highest of all"),
    "mu_r": Limits("1", (0.5, 1e6), (0.99, 1.2), "a constant permeability is for what does not saturate"),
}
"""Of an alloy, by name of the property."""

LINING: Mapping[str, Limits] = {
    "density": Limits("kg/m3", (10.0, 1e4), (50.0, 6500.0), "fibre blanket 60 to 160 kg/m3, zirconia 5000 kg/m3"),
    "conductivity": Limits(
        "W/(m K)", (0.01, 100.0), (0.03, 30.0), "fibre 0.05 W/(m K) when cold, silicon carbide 20 W/(m K)"
    ),
    "emissivity": Limits("1", (0.0, 1.0), (0.1, 0.99), "refractories 0.3 to 0.95"),
}
"""Of a lining."""

GAS: Mapping[str, Limits] = {
    "density": Limits("kg/m3", (1e-3, 100.0), (5e-3, 20.0), "hydrogen at 2000 K 0.012 kg/m3, xenon at 200 K 8 kg/m3"),
    "viscosity": Limits("Pa s", (1e-7, 1e-3), (1e-6, 2e-4), "hydrogen at 120 K 4e-6 Pa s, neon at 2000 K 1.1e-4 Pa s"),
    "conductivity": Limits(
        "W/(m K)", (1e-3, 3.0), (2e-3, 1.5), "xenon at 200 K 0.004 W/(m K), hydrogen at 2000 K 0.9 W/(m K)"
    ),
    "heat_capacity": Limits(
        "J/(kg K)", (50.0, 5e4), (150.0, 2e4), "xenon 158 J/(kg K), hydrogen at 2000 K 17 000 J/(kg K)"
    ),
}
"""Of a gas at 101 325 Pa."""


def _outside(values: npt.ArrayLike, bounds: tuple[float, float]) -> npt.NDArray[np.intp]:
    v = np.atleast_1d(np.asarray(values, dtype=np.float64))
    return np.flatnonzero((v < bounds[0]) | (v > bounds[1]))
