"""Heat that leaves the surface: radiation, convection, the lining of the coil."""
