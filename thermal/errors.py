"""What can go wrong, as exceptions that say where, what and what to do."""

from materials.errors import one_line


class ThermalError(Exception):
    """Base of all errors this package raises on purpose; the text is one sentence for the user."""


class CaseError(ThermalError):
    """The case file or a value in it is wrong.

    Parameters
    ----------
    problems : one entry per mistake, each a finished line ("line 7   workpiece.diameter: write the unit ...").
    """

    def __init__(self, *problems: str) -> None:
        self.problems = tuple(map(one_line, problems))
        super().__init__("\n".join(self.problems))


class OutOfRange(ThermalError):
    """A property or correlation was asked outside the range it was published for."""


class NoConvergence(ThermalError):
    """An iteration or the step control gave up; the text names where and at which state."""


class BalanceError(ThermalError):
    """The energy accounts of a run do not close; the result must not be used."""
