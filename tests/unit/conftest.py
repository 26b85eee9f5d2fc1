from collections.abc import Callable
from functools import cache

import pytest

from thermal.build import build
from thermal.case import Case, from_text
from thermal.case.starter import starter
from thermal.loop import State, run
from thermal.results.history import History
from thermal.setup import Setup

Run = tuple[Setup, Case, History]
RunOf = Callable[..., Run]


@cache
def _run(kind: str, changes: tuple[tuple[str, str], ...], stop_after: float | None) -> Run:
    case = from_text(starter(kind), ".", dict(changes))
    setup = build(case)

    def watch(state: State) -> None:
        if stop_after is not None and state.time > stop_after:
            raise KeyboardInterrupt

    return setup, case, run(setup, watch)


@pytest.fixture(scope="session")
def run_of() -> RunOf:
    """Run of a starter case with changes, made once per session."""

    def wanted(kind: str, stop_after: float | None = None, **changes: str) -> Run:
        paths = {path.replace("__", "."): " ".join(value.split()) for path, value in changes.items()}
        return _run(kind, tuple(sorted(paths.items())), stop_after)

    return wanted
