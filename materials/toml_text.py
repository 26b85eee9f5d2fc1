"""TOML that somebody wrote by hand: read within bounds of size and depth, mistakes with their line in plain words.

The reader of the standard library is no match for a text made to break it: it calls itself for every bracket that
opens, and its time grows with the square of the parts of a dotted key.
"""

import os
import re
import stat
import tomllib
from collections.abc import Iterator
from pathlib import Path
from typing import Any

from materials.errors import MaterialError

LARGEST = 250_000
"""Bytes read of a file: a case or a material has a few thousand, one with a measured table of ten thousand rows fits,
and the worst there can be in this many is read in seconds."""

DEEPEST = 20
"""Tables and lists within each other, and parts of a dotted key; a case needs five."""

INTEGERS = range(-(2**63), 2**63)
"""Whole numbers of TOML 1.0; a reader that keeps others all the same would hand them on to where they overflow."""

_QUOTES = "\"'“”„‘’"
_TOKEN = re.compile(
    r'''"""(?:[^\\]|\\.)*?(?:"{3,5}|\Z)|\'\'\'.*?(?:'{3,5}|\Z)|"(?:[^"\\\n]|\\[^\n])*+"?|'[^'\n]*+'?|#[^\n]*+|[][{}.,=\n]''',
    re.DOTALL,
)
"""Strings and comments as a whole, closed or not, and the signs that give a text its structure."""


class TextError(MaterialError):
    """A text is not TOML that can be read; line : from 1, None where it is the whole file."""

    def __init__(self, sentence: str, line: int | None) -> None:
        self.line = line
        super().__init__(sentence)


class NotToml(TextError):
    """A text breaks the grammar of TOML."""


def read(path: Path) -> str:
    """Text of a file.

    Raises
    ------
    TextError
        It is larger than 250 kB, no plain file, or not UTF-8.
    OSError
        It cannot be read.
    """
    try:
        # A pipe without a writer would be waited for, and a device may never end.
        if not stat.S_ISREG(os.stat(path).st_mode) and not path.is_dir():
            raise TextError("is a pipe or a device, not a file", None)
        with path.open("rb") as file:
            raw = file.read(LARGEST + 1)
    except ValueError as error:
        raise TextError(f"cannot be the name of a file ({error})", None) from None
    if len(raw) > LARGEST:
        raise TextError(
            f"is larger than {LARGEST // 1000} kB, a case or a material file has a few thousand characters", None
        )
    try:
        text = raw.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise TextError("is not UTF-8 text, save it as UTF-8", raw.count(b"\n", 0, error.start) + 1) from None
    if "\0" in text:
        raise TextError("is not UTF-8 text, save it as UTF-8", text.count("\n", 0, text.index("\0")) + 1)
    return text


def parsed(text: str, lists: tuple[str, ...] = ()) -> dict[str, Any]:
    """The document in a TOML text.

    Parameters
    ----------
    text : str
        The text.
    lists : tuple of str
        Tables there may be several of, which take two brackets.

    Raises
    ------
    TextError
        It is no TOML, nested deeper than 20, or has a whole number TOML does not know.
    """
    for _ in statements(text):  # raises where it is nested too deep for the parser
        pass
    try:
        document = tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise _broken(text, str(error), lists) from None
    except ValueError:  # a number of more digits than Python turns into an integer
        number = re.search(r"\d[\d_]{4299}", text)
        line = text.count("\n", 0, number.start()) + 1 if number else None
        raise TextError("this number has thousands of digits", line) from None
    _demand_sound(document)
    return document


def statements(text: str) -> Iterator[tuple[int, str]]:
    """First line (from 1) and text of every statement: a table header, or a key with its value over all its lines.

    Raises
    ------
    TextError
        Brackets or the parts of a key are nested deeper than 20.
    """
    begin, line, first = 0, 1, 1
    depth = parts = 0
    for token in _TOKEN.finditer(text):
        match token.group():
            case "[" | "{":
                depth, parts = depth + 1, 0
            case "]" | "}":
                depth -= 1
            case ".":
                parts += 1
            case "," | "=":
                parts = 0
            case "\n":
                line, parts = line + 1, 0
                if depth <= 0:
                    yield first, text[begin : token.start()]
                    begin, first, depth = token.end(), line, 0
            case other:
                line += other.count("\n")
        if depth + parts > DEEPEST:
            raise TextError(f"tables and lists stand in each other more than {DEEPEST} deep", line)
    yield first, text[begin:]


def _demand_sound(document: dict[str, Any]) -> None:
    """Refuse what the parser lets pass: headers and keys that add up to a deep table, numbers of more than 64 bit."""
    waiting: list[tuple[int, str, Any]] = [(0, "", document)]
    while waiting:
        depth, path, value = waiting.pop()
        if depth > DEEPEST:
            raise TextError(f"{path}: tables and lists stand in each other more than {DEEPEST} deep", None)
        if isinstance(value, dict):
            waiting.extend((depth + 1, f"{path}.{key}" if path else key, inner) for key, inner in value.items())
        elif isinstance(value, list):
            waiting.extend((depth + 1, path, inner) for inner in value)
        elif isinstance(value, int) and value not in INTEGERS:
            raise TextError(f"{path}: this whole number has more than the 19 digits there may be", None)


def _broken(text: str, message: str, lists: tuple[str, ...]) -> NotToml:
    """What is wrong with a text that is no TOML, in the words of someone who edits a file."""
    found = re.fullmatch(r"(.*) \(at line (\d+), column \d+\)", message)
    lines = text.split("\n")
    number = int(found.group(2)) if found else len(lines)
    reason = found.group(1) if found else message.removesuffix(" (at end of document)")
    line = lines[number - 1]
    if "\r" in line.removesuffix("\r"):
        return NotToml("a line ends in CR alone, save the file with ordinary line ends", number)
    twice = re.fullmatch(r"Cannot declare \((.+),?\) twice", reason)
    if twice:
        name = ".".join(re.findall(r"'([^']*)'", twice.group(1)))
        return NotToml(brackets(name) if name in lists else f"the table [{name}] is given a second time", number)
    again = reason == "Cannot overwrite a value"
    if again and line.lstrip().startswith("[["):
        return NotToml(f"write every one of them with two brackets: {line.strip()}", number)
    unquoted = re.match(r"\s*([\w.-]+)\s*=\s*([^\s\"'\[{#=][^#]*?)\s*(#.*)?$", line)
    if unquoted and not again:
        return NotToml(f'{unquoted.group(1)}: put the value in quotes: "{unquoted.group(2).strip(_QUOTES)}"', number)
    open_quotes = [n for n, each in enumerate(lines, 1) if _has_open_quote(each)]
    if number in open_quotes or (open_quotes and not found):
        number = number if number in open_quotes else open_quotes[0]
        return NotToml(f"a closing quote is missing: {lines[number - 1].strip()}", number)
    if again:
        return NotToml(f"this key is given a second time: {line.strip()}", number)
    return NotToml(f"this is not TOML: {reason[:1].lower()}{reason[1:]}", number)


def brackets(name: str) -> str:
    """How a list of tables is written."""
    return f"write [[{name}]] with two brackets"


def _has_open_quote(line: str) -> bool:
    return line.count('"') % 2 == 1 or ('"' not in line and line.count("'") % 2 == 1)
