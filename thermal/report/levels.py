"""Temperatures that matter as labelled lines: targets, holds, the Curie point and the solidus."""

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from thermal.constants import ZERO_CELSIUS
from thermal.control import HoldTemperature
from thermal.report.labels import Box, cost_of_place
from thermal.report.style import LEVEL_COLOUR
from thermal.setup import Setup

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.text import Text
    from matplotlib.transforms import Bbox

PLACES = 80
"""Places along its line that are tried for a label."""
ABOVE, BELOW = 2.0, 2.5
"""Distance of a label from its line [points]."""
FROM_THE_SIDE = 6.0
"""Least distance of a label from the sides of the picture [points]."""


def targets(setup: Setup) -> list[tuple[str, float]]:
    """Name and temperature [K] of everything the schedule asks for, each once."""
    found: dict[tuple[str, float], None] = {}
    for stage in setup.stages:
        if stage.stop is not None:
            for name, T in stage.stop.temperatures.items():
                found[(f"target {name}", T)] = None
        if isinstance(stage.control, HoldTemperature):
            found[(f"hold {stage.control.reading}", stage.control.set_point)] = None
    return list(found)


def draw_levels(axes: "Axes", setup: Setup, upright: Sequence[float]) -> None:
    """Targets, and the Curie point and the solidus where the picture reaches them; equal ones share a label.

    upright : x of upright lines a label should keep clear of, as it does of the curves that are drawn already.
    """
    low, high = axes.get_ylim()
    material = setup.material
    levels = targets(setup)
    for name, T in (("Curie point", material.curie_temperature), ("solidus", material.solidus)):
        if T is not None and low < T - ZERO_CELSIUS < high + 0.15 * (high - low):
            levels.append((name, T))
            high = max(high, T - ZERO_CELSIUS + 0.06 * (high - low))
    axes.set_ylim(low, high)
    shared: dict[float, list[str]] = {}
    for name, T in sorted(levels, key=lambda level: level[1]):
        shared.setdefault(round(T - ZERO_CELSIUS, 3), []).append(name)
    from matplotlib.patheffects import withStroke

    curves = [axes.transData.transform(line.get_xydata()) for line in axes.lines]
    rows = [float(axes.transData.transform((0.0, height))[1]) for height in shared]
    lines = [float(axes.transData.transform((x, 0.0))[0]) for x in upright]
    placed: list[Box] = []
    for (height, names), row in zip(shared.items(), rows, strict=True):
        axes.axhline(height, color=LEVEL_COLOUR, linewidth=0.9, linestyle=(0, (10, 4)), zorder=2)
        label = axes.text(
            0.0,
            0.0,
            f"{', '.join(names)} {height:.0f} °C",
            transform=axes.transAxes,
            verticalalignment="bottom",
            fontsize=8.5,
            color="#333333",
            zorder=4,
            path_effects=[withStroke(linewidth=2.5, foreground="white")],
        )
        others = [other for other in rows if other != row]
        boxes = _places(label, axes.get_window_extent(), row, axes.figure.dpi / 72.0)
        best = min(boxes, key=lambda box: cost_of_place(box, curves, others, lines, placed))
        placed.append(best)
        x, y = axes.transAxes.inverted().transform(best[:2])
        label.set_position((float(x), float(y)))


def _places(label: "Text", frame: "Bbox", row: float, pixels: float) -> list[Box]:
    """Boxes [pixels] a label may fill, the first ones preferred: above its line from left to right, then below.

    frame : of the picture [pixels] ; row : y of the line [pixels] ; pixels : in a point.
    """
    size = label.get_window_extent()
    width, height = size.width, size.height
    first = frame.x0 + FROM_THE_SIDE * pixels
    last = max(first, frame.x1 - FROM_THE_SIDE * pixels - width)
    bottoms = (row + ABOVE * pixels, row - BELOW * pixels - height)
    return [(x, y, x + width, y + height) for y in bottoms for x in np.linspace(first, last, PLACES)]
