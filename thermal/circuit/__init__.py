"""Coil copper and supply: what it takes to put a field on the workpiece."""
