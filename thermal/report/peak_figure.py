"""The picture of a peak temperature: what the drive brings and what is lost, over the mean temperature."""

from typing import TYPE_CHECKING

import numpy as np

from thermal.constants import ZERO_CELSIUS
from thermal.interfaces import Array
from thermal.questions.peak_temperature import PeakTemperature
from thermal.report.labels import spread_out
from thermal.report.style import LEFT, LEVEL_COLOUR, MARGIN
from thermal.results.verdict import power_unit
from thermal.setup import Setup

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

BRINGS, LOSES = "#00776B", "#B5401D"
HEADROOM = 1.18
"""The power axis ends at so many times what is shown: room for the legend."""
BESIDE = 3.0
"""Of losses beyond the last state of rest, so many times the largest power before it is shown."""
ROOM = 8.0
"""Of what the drive brings, so many times the largest loss is shown, where that leaves anything of it."""
STRIP, FIRST, LAST = 1.075, 1.012, -0.02
"""Names above the panel, the start of their lines, and how far beyond its left end they go (shares of the panel)."""


def draw_peak(figure: "Figure", setup: Setup, result: PeakTemperature) -> None:
    """Draw the panel; inside styled()."""
    axes = figure.add_axes((LEFT, 0.115, MARGIN - LEFT, 0.685))
    points = result.curve.points
    mean = np.array([point.mean for point in points]) - ZERO_CELSIUS
    brought, lost = np.array([(point.field.power, point.lost) for point in points]).T
    unit, watts = power_unit(float(lost.max()))
    axes.plot(mean, brought / watts, color=BRINGS, linestyle="-", linewidth=2.2, label="absorbed from the drive")
    axes.plot(mean, lost / watts, color=LOSES, linestyle=(0, (6, 2)), linewidth=2.2, label="lost at that temperature")
    axes.set_ylim(0.0, HEADROOM * _largest_shown(result, brought, lost) / watts)
    axes.set_xlim(float(mean[0]), float(mean[-1]))
    axes.set_xlabel("mean temperature of the section, °C")
    axes.set_ylabel(f"power, {unit}")
    _names(axes, setup, result, watts)
    axes.legend(loc="upper left", frameon=True, framealpha=0.9, edgecolor="none")


def _largest_shown(result: PeakTemperature, brought: Array, lost: Array) -> float:
    """Power [W] up to which the panel goes."""
    most = float(lost.max())
    if result.curve.states:
        most = min(most, BESIDE * max(float(brought.max()), result.curve.states[-1].at.lost))
    return max(most, float(brought.max()) if brought.min() > ROOM * most else min(float(brought.max()), ROOM * most))


def _names(axes: "Axes", setup: Setup, result: PeakTemperature, watts: float) -> None:
    """States of rest, filled where stable and open where not, and landmarks, named above the panel."""
    low, high = axes.get_xlim()
    named: list[tuple[str, float, float]] = []
    for state in result.curve.states:
        reached = state is result.reached
        kind = "reached" if reached else "stable" if state.stable else "unstable"
        x, y = state.at.mean - ZERO_CELSIUS, state.at.lost / watts
        axes.plot(
            [x],
            [y],
            marker="o",
            markersize=11.0 if reached else 8.0,
            markerfacecolor="#111111" if state.stable else "white",
            markeredgecolor="#111111",
            linestyle="none",
            clip_on=False,
            zorder=5,
        )
        named.append((f"{kind}\nsurface {state.at.readings['surface'] - ZERO_CELSIUS:.0f} °C", x, y))
    for name, T in (("Curie point", setup.material.curie_temperature), ("solidus", setup.material.solidus)):
        if T is not None and low < T - ZERO_CELSIUS < high:
            x = T - ZERO_CELSIUS
            axes.axvline(x, color=LEVEL_COLOUR, linewidth=0.9, linestyle=(0, (10, 4)), zorder=1)
            named.append((f"{name}\n{x:.0f} °C", x, axes.get_ylim()[1]))
    labels = [
        axes.text(
            0.0,
            STRIP,
            text,
            transform=axes.transAxes,
            ha="center",
            va="center",
            fontsize=9.0,
            fontweight="bold" if text.startswith("reached") else "normal",
        )
        for text, *_ in named
    ]
    panel = axes.get_window_extent().width
    wanted = [(x - low) / (high - low) for _, x, _ in named]
    sizes = [label.get_window_extent().width / panel + 0.012 for label in labels]
    for label, centre, (_, x, y) in zip(labels, spread_out(wanted, sizes, LAST, 1.0) or wanted, named, strict=True):
        label.set_x(centre)
        place = (x - low) / (high - low)
        axes.plot(
            [centre, place, place],
            [STRIP - 0.03, FIRST, y / axes.get_ylim()[1]],
            transform=axes.transAxes,
            color="#333333",
            linewidth=0.8,
            linestyle=(0, (1, 2)),
            clip_on=False,
            zorder=3,
        )
