"""Something goes wrong at a chosen moment of the writing of results, in a process of its own."""

import errno
import os
import sys
from collections.abc import Callable
from pathlib import Path

KILLED, FINISHED, INTERRUPTED, REFUSED = 9, 0, 10, 11
"""How the child ends."""


def _kill() -> None:
    os._exit(KILLED)


def _interrupt() -> None:
    raise KeyboardInterrupt


def _full() -> None:
    raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))


FAULTS = {"killed": _kill, "interrupted": _interrupt, "disk full": _full}


def end_of(work: Callable[[], None], refusal: type[Exception], place: Path, moment: int, fault: str) -> int:
    """How a child ends that does some work while something goes wrong as it touches a place for the n-th time.

    Every opening, making, renaming and deleting of something in `place` counts, by the audit events of Python.
    """
    child = os.fork()
    if child == 0:
        os._exit(_child(work, refusal, place, moment, fault))
    return os.waitstatus_to_exitcode(os.waitpid(child, 0)[1])


def _child(work: Callable[[], None], refusal: type[Exception], place: Path, moment: int, fault: str) -> int:
    seen = 0
    inside = f"{place}{os.sep}"

    def watch(event: str, arguments: tuple[object, ...]) -> None:
        nonlocal seen
        if event.startswith(("open", "os.")) and any(str(each).startswith(inside) for each in arguments):
            seen += 1
            if seen == moment:
                FAULTS[fault]()

    sys.addaudithook(watch)  # stays for the life of the child
    try:
        work()
    except KeyboardInterrupt:
        return INTERRUPTED
    except refusal:
        return REFUSED
    return FINISHED
