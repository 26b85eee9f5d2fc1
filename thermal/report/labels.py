"""Keeping labels apart and inside the picture: positions along one line, free places, lines of a title."""

from bisect import bisect_right
from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np
import numpy.typing as npt

if TYPE_CHECKING:
    from matplotlib.text import Text

Box = tuple[float, float, float, float]
"""Left, bottom, right, top [pixels]."""

ROOM = 16.0
"""Distance to the nearest curve [pixels] beyond which more is no better."""


def spread_out(wanted: Sequence[float], sizes: Sequence[float], low: float, high: float) -> list[float] | None:
    """Centres nearest to the wanted ones at which intervals of the given sizes lie apart inside low..high.

    Intervals that touch form a block around the mean of what its members want. None where they cannot all fit.
    """
    if sum(sizes) > high - low:
        return None
    order = sorted(range(len(wanted)), key=lambda i: wanted[i])
    blocks: list[tuple[list[int], float]] = []
    for i in order:
        members = [i]
        start = _start(members, wanted, sizes, low, high)
        while blocks and blocks[-1][1] + sum(sizes[m] for m in blocks[-1][0]) > start:
            members = blocks.pop()[0] + members
            start = _start(members, wanted, sizes, low, high)
        blocks.append((members, start))
    centres = [0.0] * len(wanted)
    for members, start in blocks:
        for m in members:
            centres[m] = start + 0.5 * sizes[m]
            start += sizes[m]
    return centres


def _start(members: Sequence[int], wanted: Sequence[float], sizes: Sequence[float], low: float, high: float) -> float:
    """Start of a block whose members sit closest to where they want to be, kept inside low..high."""
    before, offsets = 0.0, []
    for m in members:
        offsets.append(wanted[m] - before - 0.5 * sizes[m])
        before += sizes[m]
    return min(max(sum(offsets) / len(offsets), low), high - before)


def cost_of_place(
    box: Box,
    curves: Sequence[npt.NDArray[np.float64]],
    rows: Sequence[float],
    upright: Sequence[float],
    placed: Sequence[Box],
) -> tuple[int, int, int, float]:
    """How bad a place for a label is, to be compared: labels hit, lines across, upright lines, lack of room.

    curves : (k, 2) points [pixels] with x rising ; rows : y of level lines ; upright : x of upright lines ;
    placed : boxes that are taken.
    """
    x0, y0, x1, y1 = box
    labels = sum(x0 < b[2] + ROOM / 2 and b[0] < x1 + ROOM / 2 and y0 < b[3] and b[1] < y1 for b in placed)
    gaps = [ROOM, *(max(y0 - row, row - y1) for row in rows)]
    for curve in curves:
        x, y = curve[:, 0], curve[:, 1]
        inside = y[(x >= x0) & (x <= x1)]
        reach = np.concatenate([inside, np.interp((x0, x1), x, y)])
        gaps.append(max(y0 - float(reach.max()), float(reach.min()) - y1))
    across = sum(gap <= 0.0 for gap in gaps)
    return labels, across, sum(x0 < x < x1 for x in upright), ROOM - min(gaps)


def fit_text(text: "Text", words: str, width: float, sizes: Sequence[float]) -> None:
    """Set words on at most two lines of a width [pixels], in the first of the sizes that fits.

    Words that fit in none of them are cut with an ellipsis.
    """
    lines: list[str] = []
    for size in sizes:
        text.set_fontsize(size)
        lines = _lines(text, words, width)
        if len(lines) <= 2:
            break
    if len(lines) > 2:
        end = lines[1]
        while _width(text, f"{end}…") > width:
            end = end[:-1]
        lines = [lines[0], f"{end}…"]
    text.set_text("\n".join(lines))


def _lines(text: "Text", words: str, width: float) -> list[str]:
    """Two lines no wider than a width, broken between words where possible, and a third with the rest if any."""
    rest = " ".join(words.split())
    lines: list[str] = []
    while rest and len(lines) < 2:
        room = _room(text, rest, width)
        if room < len(rest) and " " in rest[1 : room + 1]:
            room = rest.rindex(" ", 1, room + 1)
        room = max(room, 1)
        lines.append(rest[:room])
        rest = rest[room:].lstrip()
    return [*lines, rest] if rest else lines


def _room(text: "Text", words: str, width: float) -> int:
    """How many of the first letters fit a width."""
    return bisect_right(range(len(words)), width, key=lambda n: _width(text, words[: n + 1]))


def _width(text: "Text", words: str) -> float:
    text.set_text(words)
    return float(text.get_window_extent().width)
