"""Eddy currents: closed forms, the radial field solver and the coil around the workpiece."""
