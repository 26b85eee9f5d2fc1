"""Keeping labels apart and inside the picture: positions along one line, boxes in a plane, lines of a title."""

from collections.abc import Sequence
from typing import TYPE_CHECKING, Protocol

if TYPE_CHECKING:
    from matplotlib.text import Text


class Box(Protocol):
    """A rectangle in drawing units."""

    @property
    def x0(self) -> float: ...
    @property
    def x1(self) -> float: ...
    @property
    def y0(self) -> float: ...
    @property
    def y1(self) -> float: ...


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


def _start(
    members: Sequence[int], wanted: Sequence[float], sizes: Sequence[float], low: float, high: float
) -> float:
    """Start of a block whose members sit closest to where they want to be, kept inside low..high."""
    before, offsets = 0.0, []
    for m in members:
        offsets.append(wanted[m] - before - 0.5 * sizes[m])
        before += sizes[m]
    return min(max(sum(offsets) / len(offsets), low), high - before)


def overlap(a: Box, b: Box) -> bool:
    """Whether two boxes share area."""
    return a.x0 < b.x1 and b.x0 < a.x1 and a.y0 < b.y1 and b.y0 < a.y1


def fit_text(text: "Text", words: str, width: float, sizes: Sequence[float]) -> None:
    """Set words on at most two lines of a width [pixels], in the first of the sizes that fits, cut with an ellipsis at last."""
    for size in sizes:
        text.set_fontsize(size)
        lines = _wrapped(text, words, width)
        if len(lines) <= 2:
            break
    if len(lines) > 2:
        second = lines[1]
        text.set_text(second + "…")
        while text.get_window_extent().width > width:
            second = second[:-1]
            text.set_text(second + "…")
        lines = [lines[0], second + "…"]
    text.set_text("\n".join(lines))


def _wrapped(text: "Text", words: str, width: float) -> list[str]:
    """Lines of whole words no wider than a width [pixels]; a longer word is broken."""
    lines = [""]
    for word in words.split():
        rest = word
        while rest:
            trial = f"{lines[-1]} {rest}".strip()
            text.set_text(trial)
            if text.get_window_extent().width <= width:
                lines[-1], rest = trial, ""
            elif lines[-1]:
                lines.append("")
            else:
                cut = len(rest)
                while cut > 1 and text.get_window_extent().width > width:
                    cut -= 1
                    text.set_text(rest[:cut])
                lines[-1], rest = rest[:cut], rest[cut:]
                if rest:
                    lines.append("")
    return lines
