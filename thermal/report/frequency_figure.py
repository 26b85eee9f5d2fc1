"""The picture of a frequency window: what is absorbed, lost in the coil and left between surface and core."""

from typing import TYPE_CHECKING

import numpy as np

from thermal.interfaces import Array
from thermal.questions.frequency import GOOD, HIGH, TOO_LOW, FrequencyWindow
from thermal.report.labels import spread_out
from thermal.report.style import LEFT, LEVEL_COLOUR, MARGIN
from thermal.results.verdict import hertz
from thermal.setup import Setup

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

BOTTOM, TOP = 0.105, 0.85
NAMES, LINES = 0.041, 0.014
"""The names of the zones and of the lines lie so far above the panels (shares of the picture)."""
GAP = 0.02
COLOUR = "#1B5AA6"


def draw_frequency(figure: "Figure", setup: Setup, window: FrequencyWindow) -> None:
    """Draw the panels; inside styled()."""
    # Far below the window the voltage goes through the roof.
    inside = window.voltage[window.frequency >= 0.3 * window.lower]
    panels: list[tuple[str, Array, float | None]] = [
        ("energy per cycle,\n% of its peak", 100.0 * window.per_cycle / window.per_cycle.max(), 100.0)
    ]
    if setup.has_coil:
        panels.append(("electrical\nefficiency, %", 100.0 * window.efficiency, 100.0 * float(window.efficiency.max())))
    panels.append(("spread of even\nheating, K", window.spread, None))
    if setup.has_coil:
        panels.append(("coil voltage,\nV rms", window.voltage, float(inside.max())))
    height = (TOP - BOTTOM - GAP * (len(panels) - 1)) / len(panels)
    kilohertz = window.frequency / 1e3
    for row, (label, values, highest) in enumerate(panels):
        axes = figure.add_axes((LEFT + 0.02, TOP - (row + 1) * height - row * GAP, MARGIN - LEFT - 0.02, height))
        axes.set_xscale("log")
        axes.set_xlim(kilohertz[0], kilohertz[-1])
        axes.plot(kilohertz, values, color=COLOUR, linewidth=2.2, zorder=3)
        if highest is not None:
            axes.set_ylim(0.0, 1.08 * highest)
        axes.set_ylabel(label, fontsize=9.5)
        axes.yaxis.set_label_coords(-0.045, 0.5)
        _zones(axes, window, named=row == 0)
        if row < len(panels) - 1:
            axes.tick_params(labelbottom=False)
        else:
            axes.set_xlabel("frequency, kHz")
            axes.xaxis.set_major_formatter(lambda value, _: f"{value:g}")


def _zones(axes: "Axes", window: FrequencyWindow, named: bool) -> None:
    """Good in white, the rest shaded and hatched; the frequency of the case and the closed form as lines."""
    low, high = axes.get_xlim()
    lower, upper = window.lower / 1e3, window.upper / 1e3
    for start, end, hatch in ((low, lower, "///"), (upper, high, "\\\\\\")):
        axes.axvspan(start, end, facecolor="#EFEFEF", edgecolor="#D2D2D2", hatch=hatch, linewidth=0.0, zorder=0)
    axes.axvline(window.own / 1e3, color="#111111", linewidth=1.4, zorder=2)
    axes.axvline(window.closed_form / 1e3, color=LEVEL_COLOUR, linewidth=1.0, linestyle=(0, (2, 2)), zorder=2)
    if not named:
        return
    edges = [low, min(max(lower, low), high), min(max(upper, low), high), high]
    zones = [
        (name, float(np.sqrt(start * end)))
        for name, start, end in zip((TOO_LOW, GOOD, HIGH), edges, edges[1:], strict=False)
        if end > start
    ]
    _above(axes, NAMES, zones)
    lines = [(f"case {hertz(window.own)}", window.own / 1e3), ("closed form", window.closed_form / 1e3)]
    _above(axes, LINES, [(name, x) for name, x in lines if low <= x <= high])


def _above(axes: "Axes", height: float, names: list[tuple[str, float]]) -> None:
    """Names over places on the axis, side by side where they would overlap; the good zone in bold."""
    panel = axes.get_window_extent()
    y = 1.0 + height * axes.figure.bbox.height / panel.height
    low, high = np.log(axes.get_xlim())
    labels = [
        axes.text(
            0.0,
            y,
            name,
            transform=axes.transAxes,
            ha="center",
            va="center",
            fontsize=9.0,
            fontweight="bold" if name == GOOD else "normal",
            color="#222222",
        )
        for name, _ in names
    ]
    wanted = [float((np.log(x) - low) / (high - low)) for _, x in names]
    sizes = [label.get_window_extent().width / panel.width + 0.012 for label in labels]
    for label, centre in zip(labels, spread_out(wanted, sizes, 0.0, 1.0) or wanted, strict=True):
        label.set_x(centre)
