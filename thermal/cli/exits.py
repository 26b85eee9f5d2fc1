"""How a command ends: exit codes, and one clean message instead of a traceback."""

import os
import sys
from collections.abc import Iterator
from contextlib import contextmanager
from typing import TextIO

import typer

BAD_INPUT, NOT_REACHED, NO_RESULT, INTERRUPTED = 2, 3, 4, 130


@contextmanager
def exit_codes() -> Iterator[None]:
    """Turn the errors a user can meet into a message on stderr and an exit code."""
    try:
        # Here and not above: the package of the materials imports numpy.
        from materials.errors import MaterialError
        from thermal.errors import BalanceError, NoConvergence, OutOfRange, ThermalError

        try:
            yield
        except (NoConvergence, BalanceError, OutOfRange) as error:
            raise _told(str(error), NO_RESULT) from None
        except (ThermalError, MaterialError) as error:
            raise _told(str(error), BAD_INPUT) from None
    except KeyboardInterrupt:
        raise _told("interrupted, nothing was written", INTERRUPTED) from None


def say(text: str) -> None:
    """Print an answer; a reader that stops reading early is no error.

    Raises
    ------
    typer.Exit : it cannot be printed, code 2.
    """
    try:
        print(text, end="", flush=True)
    except BrokenPipeError:
        drop_output()
    except OSError as error:
        drop_output()
        raise _told(f"the answer cannot be printed ({error.strerror})", BAD_INPUT) from None


def drop_output() -> None:
    """Send what is still to be printed nowhere, or the end of the process would try and fail again."""
    _drop(sys.stdout)


def tell(message: str) -> None:
    """Print a message on stderr; where that cannot be done, the exit code has to do."""
    try:
        print(message, file=sys.stderr, flush=True)
    except OSError:
        _drop(sys.stderr)


def _drop(stream: TextIO) -> None:
    nowhere = os.open(os.devnull, os.O_WRONLY)
    os.dup2(nowhere, stream.fileno())
    os.close(nowhere)


def _told(message: str, code: int) -> typer.Exit:
    tell(message)
    return typer.Exit(code)
