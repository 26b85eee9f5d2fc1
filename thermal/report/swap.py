"""Two folders change places in one step, where the system can do that."""

import os
import sys
from pathlib import Path

_HERE = -100
"""AT_FDCWD of Linux: a path counts from the present folder."""

_EXCHANGE = 2
"""RENAME_EXCHANGE of renameat2(2), Linux 3.15."""


def swapped(one: Path, other: Path) -> bool:
    """Swap two folders so that nobody ever finds one of them missing; False, and nothing done, where that fails."""
    if sys.platform != "linux":
        return False
    import ctypes

    rename = getattr(ctypes.CDLL(None), "renameat2", None)  # no C library has to have it
    return rename is not None and rename(_HERE, os.fsencode(one), _HERE, os.fsencode(other), _EXCHANGE) == 0
