"""One line on the terminal that shows how far a run is."""

import sys
import time
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from thermal.results.recorder import State

EVERY = 0.1
"""Seconds between two rewrites."""
WIDTH = 79


class Progress:
    """Rewrites one line on stderr; silent where that is no terminal.

    names : of the stages.
    """

    def __init__(self, names: tuple[str, ...], quiet: bool) -> None:
        self._names = names
        self._shown = not quiet and sys.stderr.isatty()
        self._last = 0.0

    def see(self, state: "State") -> None:
        """Show a state, if the last one was not just now."""
        now = time.monotonic()
        if not self._shown or now - self._last < EVERY:
            return
        self._last = now
        from thermal.results.verdict import celsius

        surface, core = celsius(state.readings["surface"]), celsius(state.readings["core"])
        line = f"{self._names[state.stage]:<12} {state.time:9.1f} s   surface {surface:>8}   core {core:>8}"
        self._print(f"\r{line[:WIDTH]:<{WIDTH}}")

    def clear(self) -> None:
        """Wipe the line."""
        if self._shown:
            self._print(f"\r{'':<{WIDTH}}\r")

    def _print(self, text: str) -> None:
        try:
            print(text, end="", file=sys.stderr, flush=True)
        except OSError:  # a terminal that has gone is no reason to lose the run
            self._shown = False
