"""The picture of a comparison: the reading over time for every metal, and what each absorbs at the same current."""

from typing import TYPE_CHECKING

import numpy as np

from thermal.constants import ZERO_CELSIUS
from thermal.questions.compare import Comparison
from thermal.report.labels import spread_out
from thermal.report.style import LEFT, LEVEL_COLOUR, MARGIN, NAME_AT_MOST, SIZE
from thermal.results.dense import sample
from thermal.results.stages import stage_ends
from thermal.results.verdict import celsius, power
from thermal.setup import Setup

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

LOOKS = (
    ("#B5401D", "-"),
    ("#1B5AA6", (0, (6, 2))),
    ("#00776B", (0, (1, 1.6))),
    ("#8C4A94", (0, (5, 1.5, 1, 1.5))),
    ("#A67800", (0, (3, 1.5))),
    ("#4F4F4F", (0, (8, 2, 1, 2, 1, 2))),
)
"""Colour and dashes of the metals in turn; told apart in grey by the dashes and the names at the curves."""
BOTTOM, BETWEEN, TOP, RIGHT_END = 0.115, 0.075, 0.8, 0.96
PER_METAL, HIGHEST = 0.06, 0.36
"""Height of the bars of a metal and of all of them (shares of the picture)."""
BAR = 0.28
"""Letters beside a bar over what a metal takes: two bars with room between them."""
NAME_SIZES = (9.5, 8.0, 6.5, 5.5)
MOST = 4.0
"""The time axis ends at this many times the median time, where a metal takes longer."""


def draw_compare(figure: "Figure", setup: Setup, result: Comparison) -> None:
    """Draw the panels; inside styled()."""
    height = min(PER_METAL * len(result.metals), HIGHEST)
    lower = figure.add_axes((LEFT + 0.09, BOTTOM, MARGIN - LEFT - 0.09, height))
    _bars(lower, setup, result, BAR * height * SIZE[1] * 72.0 / len(result.metals))
    bottom = BOTTOM + height + BETWEEN
    _curves(figure.add_axes((LEFT, bottom, RIGHT_END - LEFT, TOP - bottom)), result)


def _curves(axes: "Axes", result: Comparison) -> None:
    ends = [metal.common.result.history.time[-1] for metal in result.metals]
    end = min(float(max(ends)), MOST * float(np.median(ends)))
    axes.set_xlim(0.0, end)
    lasts = []
    for number, metal in enumerate(result.metals):
        setup, history = metal.common.result.setup, metal.common.result.history
        colour, dashes = LOOKS[number % len(LOOKS)]
        last = stage_ends(setup, history)[-1].number
        times = np.unique(np.concatenate([history.time, np.linspace(0.0, history.time[-1], 300)]))
        starts = np.array([history.time[history.stage == stage][0] for stage in range(last + 1)])
        stages = np.searchsorted(starts, times, side="right") - 1
        values = sample(setup, history, stages, times).readings[result.at] - ZERO_CELSIUS
        axes.plot(times, values, color=colour, linestyle=dashes, linewidth=2.2, zorder=3)
        shown = times <= end
        lasts.append((_short(metal.key), colour, float(values[shown][-1]), float(times[shown][-1])))
    axes.axhline(result.T_common - ZERO_CELSIUS, color=LEVEL_COLOUR, linewidth=0.9, linestyle=(0, (10, 4)), zorder=1)
    axes.set_ylim(0.0, 1.06 * (result.T_common - ZERO_CELSIUS))
    axes.set_xlabel("time, s")
    axes.set_ylabel(f"{result.at}, °C")
    _names(axes, lasts, result)


def _short(key: str) -> str:
    return key if len(key) <= NAME_AT_MOST else f"{key[: NAME_AT_MOST // 2]}…{key[-NAME_AT_MOST // 2 :]}"


def _names(axes: "Axes", lasts: list[tuple[str, str, float, float]], result: Comparison) -> None:
    """Names above the panel where the curves end, each with its time or with where it stands at the end."""
    (low, high), end = axes.get_ylim(), axes.get_xlim()[1]
    panel = axes.get_window_extent()
    # Of the picture, not of the panel, whose height depends on the number of metals.
    strip, elbow, start = (1.0 + share * axes.figure.bbox.height / panel.height for share in (0.047, 0.004, 0.027))
    labels = []
    for (key, colour, value, _), metal in zip(lasts, result.metals, strict=True):
        reached = metal.common.result.time
        told = f"{reached:.3g} s" if reached is not None else f"never, {value:.0f} °C"
        label = axes.text(
            0.0, strip, f"{key}\n{told}", transform=axes.transAxes, color=colour, ha="center", va="center"
        )
        labels.append(label)
    wanted = [time / end for *_, time in lasts]
    last = (MARGIN - LEFT) / (RIGHT_END - LEFT)
    centres: list[float] | None = None
    for size in NAME_SIZES:
        for label in labels:
            label.set_fontsize(size)
        sizes = [label.get_window_extent().width / panel.width + 0.012 for label in labels]
        if (centres := spread_out(wanted, sizes, -0.05, last)) is not None:
            break
    for number, (label, centre) in enumerate(zip(labels, centres or wanted, strict=True)):
        _, colour, value, time = lasts[number]
        label.set_x(centre)
        axes.plot(
            [centre, time / end, time / end],
            [start, elbow, (value - low) / (high - low)],
            transform=axes.transAxes,
            color=colour,
            linewidth=0.8,
            clip_on=False,
        )


def _bars(axes: "Axes", setup: Setup, result: Comparison, letters: float) -> None:
    """What every metal absorbs; letters : size [pt] of what is written beside a bar, at most."""
    top = max(metal.cold.absorbed for metal in result.metals)
    top = max(top, *(metal.hot.absorbed for metal in result.metals))
    width = 0.38
    for number, metal in enumerate(result.metals):
        colour = LOOKS[number % len(LOOKS)][0]
        for shift, response, filled in ((-0.5, metal.cold, True), (0.5, metal.hot, False)):
            share = response.absorbed / top
            axes.barh(
                number + shift * width,
                100.0 * share,
                height=0.9 * width,
                facecolor=colour if filled else "white",
                edgecolor=colour,
                hatch="" if filled else "////",
                linewidth=1.0,
                zorder=3,
            )
            efficiency = "" if response.efficiency is None else f", coil efficiency {100.0 * response.efficiency:.0f} %"
            axes.text(
                100.0 * share + 0.8,
                number + shift * width,
                f"{power(response.absorbed)} at {celsius(response.T)}{efficiency}",
                va="center",
                fontsize=min(8.0, letters),
            )
    axes.set_ylim(len(result.metals) - 0.5, -0.5)
    axes.set_yticks(range(len(result.metals)), [_short(metal.key) for metal in result.metals])
    axes.set_xlim(0.0, 145.0)
    axes.set_xticks([0, 25, 50, 75, 100])
    axes.grid(visible=False, axis="y")
    at = f"{result.excitation:.4g} A rms" if setup.has_coil else f"{result.excitation / 1e3:.4g} kA/m rms"
    axes.set_xlabel(f"absorbed at {at} by every metal, % of the largest")
