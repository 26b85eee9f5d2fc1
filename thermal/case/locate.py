"""Where in a TOML text a key stands; TOML readers keep no line numbers."""

import tomllib
from collections.abc import Iterator
from typing import Any

from materials.toml_text import statements

Path = tuple[str | int, ...]


def lines_of(text: str) -> dict[Path, int]:
    """Line (from 1) of every table and key: ("schedule", 1, "at", "core") -> 31.

    Every statement is parsed on its own, so that quoted and dotted keys, inline tables and values over several
    lines need no grammar here. Keys inside a value get its first line.

    Parameters
    ----------
    text : str
        Valid TOML.
    """
    found: dict[Path, int] = {}
    counts: dict[Path, int] = {}
    table: Path = ()
    for number, statement in statements(text):
        parsed = tomllib.loads(f"{statement}\n")
        if statement.lstrip().startswith("["):
            table = _header(parsed, counts)
            found.setdefault(table, number)
        else:
            for path in _paths(parsed):
                found.setdefault(table + path, number)
    return found


def line_of(path: Path, lines: dict[Path, int]) -> int | None:
    """Line of a path, or of the innermost table around it that stands in the text; None if none does."""
    for end in range(len(path), 0, -1):
        if path[:end] in lines:
            return lines[path[:end]]
    return None


def _header(parsed: dict[str, Any], counts: dict[Path, int]) -> Path:
    """Path a table header opens; a table in double brackets gets the next index of its name."""
    path: Path = ()
    inside: Any = parsed
    while inside:
        key = next(iter(inside))
        path = (*path, key)
        inside = inside[key]
        if isinstance(inside, list):
            counts[path] = counts.get(path, -1) + 1
            inside = None
        if path in counts:
            path = (*path, counts[path])
    return path


def _paths(value: Any) -> Iterator[Path]:
    if isinstance(value, dict):
        items: Iterator[tuple[str | int, Any]] = iter(value.items())
    elif isinstance(value, list):
        items = iter(enumerate(value))
    else:
        return
    for key, inner in items:
        yield (key,)
        for path in _paths(inner):
            yield (key, *path)
