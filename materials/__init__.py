"""Property data and laws of workpiece materials; knows nothing of the simulation."""

from materials.database import get, names
from materials.material import Material

__all__ = ["Material", "get", "names"]
