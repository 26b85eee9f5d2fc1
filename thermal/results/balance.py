"""Whether the energy accounts of a run close."""

import numpy as np
import numpy.typing as npt

from thermal.errors import BalanceError

Array = npt.NDArray[np.float64]

CLOSURE = 1e-11
"""Largest residual allowed, relative to the largest of absorbed, lost and stored energy."""


ROUND_OFFS = 50.0
"""Round-offs of the heat content that may add up in a run."""


def relative_residual(energy: dict[str, Array]) -> float:
    """|stored + lost - absorbed| at the end, relative to the largest of the three.

    energy : account -> (s,) [J]; stored is read from the cells, absorbed from the field, "loss: ..." from the faces.
    """
    stored, absorbed = float(energy["stored"][-1]), float(energy["absorbed"][-1])
    lost = float(sum(series[-1] for name, series in energy.items() if name.startswith("loss: ")))
    size = max(abs(stored), abs(absorbed), abs(lost))
    return abs(stored + lost - absorbed) / size if size > 0.0 else 0.0


def demand_closure(energy: dict[str, Array], heat_content: float) -> None:
    """Refuse a result whose accounts do not close.

    heat_content : [J] sum over the cells of |enthalpy|; the energy stored is a difference of two such sums and cannot
    be known better than their round-off, which shows where next to nothing has moved.

    Raises
    ------
    BalanceError : the residual is above 1e-11 of the energy moved and above that round-off.
    """
    residual = relative_residual(energy)
    moved = max(abs(float(series[-1])) for series in energy.values())
    round_off = ROUND_OFFS * np.finfo(float).eps * heat_content
    if not residual * moved <= CLOSURE * moved + round_off:
        raise BalanceError(
            f"the energy accounts do not close (residual {residual:.1e} of the energy moved, "
            f"allowed {CLOSURE:.0e}): the result must not be used"
        )
