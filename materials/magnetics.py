"""Relative permeability over field and temperature."""

from dataclasses import dataclass
from typing import Literal

import numpy as np
import numpy.typing as npt

from materials.caloric import T_REFERENCE
from materials.curve import Array
from materials.magnetisation import Law, describing_function

Definition = Literal["constant", "normal", "froehlich-kennelly", "effective"]

_LN_H = np.linspace(0.0, np.log(1e7), 1025)
_LN_H.flags.writeable = False


@dataclass(frozen=True, eq=False)
class Magnetics:
    """mu_r(H_peak, T) = 1 + factor(T) times the effective susceptibility at 20 °C.

    The magnetisation of every temperature is that of 20 °C times one factor, so one table serves all.
    definition : how the data are given ; curie_temperature : [K] or None ;
    saturation_exponent : n of the saturation curve, see `factor` ; initial_susceptibility : towards H = 0 ;
    ln_H, susceptibility : (k,) effective susceptibility over ln of the peak field [A/m]; for a law 1025 rows
    from 1 A/m to 1e7 A/m, one for a constant.
    """

    definition: Definition
    curie_temperature: float | None
    saturation_exponent: float
    initial_susceptibility: float
    ln_H: Array
    susceptibility: Array

    @classmethod
    def constant(cls, mu_r: float) -> "Magnetics":
        """The same permeability at every field and temperature."""
        return cls("constant", None, 1.0, mu_r - 1.0, np.zeros(1), np.array([mu_r - 1.0]))

    @classmethod
    def from_law(
        cls,
        definition: Literal["normal", "froehlich-kennelly"],
        law: Law,
        curie_temperature: float,
        saturation_exponent: float,
    ) -> "Magnetics":
        """Permeability of a magnetisation law of 20 °C.

        Parameters
        ----------
        definition : str
            Name of the law for the report.
        law : Law
            Magnetisation [A/m] over field [A/m].
        curie_temperature : float
            Temperature [K] from which the material is not magnetic.
        saturation_exponent : float
            n of the saturation curve [-].
        """
        chi = describing_function(law, np.exp(_LN_H))
        return cls(definition, curie_temperature, saturation_exponent, law.initial_susceptibility, _LN_H, chi)

    @classmethod
    def from_effective(
        cls, H_peak: Array, mu_r: Array, curie_temperature: float, saturation_exponent: float
    ) -> "Magnetics":
        """Permeability given as already effective for a sinusoidal field, used as it is.

        Linear in ln H between the points, held below the first, constant polarisation beyond the last.

        Parameters
        ----------
        H_peak : (k,) [A/m]
            Peak amplitudes, rising, above zero.
        mu_r : (k,) [-]
            Effective relative permeability at 20 °C.
        curie_temperature : float
            Temperature [K] from which the material is not magnetic.
        saturation_exponent : float
            n of the saturation curve [-].
        """
        chi = np.array(mu_r) - 1.0
        return cls("effective", curie_temperature, saturation_exponent, float(chi[0]), np.log(H_peak), chi)

    @property
    def linear(self) -> bool:
        """True where the permeability does not depend on the field."""
        return self.definition == "constant"

    def mu_r(self, H_peak: npt.ArrayLike, T: npt.ArrayLike) -> Array:
        """Effective relative permeability.

        Parameters
        ----------
        H_peak : (n,) [A/m]
            Peak amplitude of the local field: sqrt(2) times its rms value.
        T : (n,) [K]
            Local temperature.
        """
        return 1.0 + self.factor(T) * self.effective_susceptibility(H_peak)

    def factor(self, T: npt.ArrayLike) -> Array:
        """Saturation polarisation over that of 20 °C [-] at T [K]; 0 from the Curie point up.

        (Js/Js0)^n + (T/Tc)^n = 1 with T in kelvin; A. Perevertov, arXiv:2512.24771 (2025). 1 for a constant
        permeability.
        """
        t = np.asarray(T, dtype=np.float64)
        if self.curie_temperature is None:
            return np.ones_like(t)
        n = self.saturation_exponent
        rest = np.maximum(1.0 - (t / self.curie_temperature) ** n, 0.0)
        rest_20 = 1.0 - (T_REFERENCE / self.curie_temperature) ** n
        return np.asarray((rest / rest_20) ** (1.0 / n))

    def effective_susceptibility(self, H_peak: npt.ArrayLike) -> Array:
        """First harmonic of the magnetisation at 20 °C over the peak field [-].

        Linear from the initial susceptibility at zero to the first table row, falling as 1/H beyond the last.

        Parameters
        ----------
        H_peak : (n,) [A/m]
            Peak amplitude of the local field.
        """
        h = np.asarray(H_peak, dtype=np.float64)
        if self.linear:
            return np.full_like(h, self.initial_susceptibility)
        lowest, highest = np.exp(self.ln_H[0]), np.exp(self.ln_H[-1])
        table = np.interp(np.log(np.maximum(h, lowest)), self.ln_H, self.susceptibility)
        start = self.initial_susceptibility
        near_zero = start + (table - start) * np.minimum(h / lowest, 1.0)
        return np.asarray(near_zero * (highest / np.maximum(h, highest)))
