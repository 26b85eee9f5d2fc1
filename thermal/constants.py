"""Physical constants, with their source."""

MU_0 = 1.25663706212e-6
"""Magnetic constant [H/m]; CODATA 2018."""

STEFAN_BOLTZMANN = 5.670374419e-8
"""Stefan-Boltzmann constant [W/(m2 K4)]; CODATA 2018 (exact in the SI of 2019)."""

GRAVITY = 9.80665
"""Standard acceleration of gravity [m/s2]; CGPM 1901."""

ZERO_CELSIUS = 273.15
"""0 °C [K]; by definition of the Celsius scale."""

COPPER_TEMPERATURES = (ZERO_CELSIUS, ZERO_CELSIUS + 200.0)
"""Where the copper of a water-cooled coil is known [K]: there its straight line has the slope of measured pure copper
(Matula 1979, J. Phys. Chem. Ref. Data 8:1147) within 1.4 % of the value."""
