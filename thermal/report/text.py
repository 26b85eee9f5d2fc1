"""Plain text in columns, no wider than a terminal."""

import shutil
import sys
import textwrap
from collections.abc import Sequence

WIDTH, LEAST_WIDTH = 100, 60
"""Most and least letters in a line."""
INDENT = "  "


def width() -> int:
    """Letters in a line: as wide as a terminal within limits, always the most where the text goes elsewhere."""
    if not sys.stdout.isatty():
        return WIDTH
    return max(LEAST_WIDTH, min(WIDTH, shutil.get_terminal_size().columns))


def paragraph(text: str) -> str:
    """A text wrapped to the width."""
    return textwrap.fill(text, width())


def indented(text: str) -> str:
    """A text wrapped to the width, set in by two letters."""
    return textwrap.fill(text, width(), initial_indent=INDENT, subsequent_indent=INDENT)


def bullets(lines: Sequence[str]) -> str:
    """Texts as a list, each wrapped to the width."""
    return "\n".join(textwrap.fill(line, width(), initial_indent="  - ", subsequent_indent="    ") for line in lines)


def columns(rows: Sequence[Sequence[str]], most_first: int = 48) -> str:
    """Rows in aligned columns, the first to the left and the others to the right.

    Columns that do not fit the width go into further blocks below, with the first column repeated; a first column
    wider than most_first is cut with an ellipsis.
    """
    labels = [_cut(row[0], most_first) for row in rows]
    first = max(len(label) for label in labels)
    widths = [max(len(row[c]) for row in rows) + 2 for c in range(1, len(rows[0]))]
    blocks: list[list[int]] = [[]]
    used, room = len(INDENT) + first, width()
    for column, needed in enumerate(widths, start=1):
        if used + needed > room and blocks[-1]:
            blocks.append([])
            used = len(INDENT) + first
        blocks[-1].append(column)
        used += needed
    return "\n\n".join(_block(rows, labels, first, block, widths) for block in blocks)


def _block(rows: Sequence[Sequence[str]], labels: list[str], first: int, block: list[int], widths: list[int]) -> str:
    lines = []
    for label, row in zip(labels, rows, strict=True):
        cells = "".join(row[column].rjust(widths[column - 1]) for column in block)
        lines.append(f"{INDENT}{label.ljust(first)}{cells}".rstrip())
    return "\n".join(lines)


def _cut(text: str, most: int) -> str:
    return text if len(text) <= most else text[: most - 1] + "…"
