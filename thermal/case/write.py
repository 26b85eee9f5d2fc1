"""A document of a case back to TOML text, for the case as it was run."""

from collections.abc import Iterator, Mapping
from typing import Any


def to_toml(document: Mapping[str, Any]) -> str:
    """TOML text of a document of texts, numbers, lists and tables; comments are not kept.

    Parameters
    ----------
    document : mapping
        As read from TOML; tables at the top become [table], lists of tables [[table]], deeper ones stand
        inline.
    """
    return "\n".join(_lines(document)) + "\n"


def _lines(document: Mapping[str, Any]) -> Iterator[str]:
    for key, value in document.items():
        if not _is_table(value) and not _is_tables(value):
            yield f"{_key(key)} = {_inline(value)}"
    for key, value in document.items():
        if _is_table(value):
            yield from ("", f"[{_key(key)}]", *_pairs(value))
        elif _is_tables(value):
            for table in value:
                yield from ("", f"[[{_key(key)}]]", *_pairs(table))


def _pairs(table: Mapping[str, Any]) -> Iterator[str]:
    return (f"{_key(key)} = {_inline(value)}" for key, value in table.items())


def _is_table(value: Any) -> bool:
    return isinstance(value, Mapping)


def _is_tables(value: Any) -> bool:
    return isinstance(value, list) and bool(value) and all(_is_table(entry) for entry in value)


def _key(key: str) -> str:
    bare = key.isascii() and key.replace("-", "").replace("_", "").isalnum()
    return key if bare else _quoted(key)


def _inline(value: Any) -> str:
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, str):
        return _quoted(value)
    if isinstance(value, Mapping):
        return "{ " + ", ".join(_pairs(value)) + " }"
    if isinstance(value, list):
        return "[" + ", ".join(_inline(entry) for entry in value) + "]"
    return repr(value)


def _quoted(text: str) -> str:
    """A basic TOML string; characters that may not stand in one are written by their code point."""
    escaped = text.replace("\\", "\\\\").replace('"', '\\"')
    return '"' + "".join(c if c.isprintable() else f"\\u{ord(c):04X}" for c in escaped) + '"'
