"""How a command ends: exit codes, and one clean message instead of a traceback."""

import sys
from collections.abc import Iterator
from contextlib import contextmanager

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


def _told(message: str, code: int) -> typer.Exit:
    print(message, file=sys.stderr)
    return typer.Exit(code)
