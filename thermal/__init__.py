"""Transient thermal simulation of induction-heated workpieces.

>>> from pathlib import Path
>>> from thermal import from_text, run_case
>>> history = run_case(from_text('''
... format = 1
... workpiece = { shape = "cylinder", diameter = "20 mm", length = "100 mm", material = "copper", emissivity = 0.1 }
... [[schedule]]
... stage = "heat"
... drive = { absorbed_power = "1 kW", frequency = "10 kHz" }
... duration = "10 s"
... ''', Path(".")))
>>> round(float(history.energy["absorbed"][-1]))
10000
"""

from importlib import import_module
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from thermal.case import Case, from_text, load_case
    from thermal.loop import run_case
    from thermal.results.history import History

__all__ = ["Case", "History", "from_text", "load_case", "run_case"]

# Loaded on first use: the command line answers --help without numpy.
_HOMES = {
    "Case": "thermal.case",
    "History": "thermal.results.history",
    "from_text": "thermal.case",
    "load_case": "thermal.case",
    "run_case": "thermal.loop",
}


def __getattr__(name: str) -> object:
    if name in _HOMES:
        return getattr(import_module(_HOMES[name]), name)
    raise AttributeError(f"module 'thermal' has no attribute '{name}'")
