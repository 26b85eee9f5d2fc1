"""The curves of a run as one picture: temperatures above, limits and power below."""

import warnings
from dataclasses import dataclass
from itertools import cycle
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np

from thermal.case import Case
from thermal.constants import ZERO_CELSIUS
from thermal.report.labels import fit_text, spread_out
from thermal.report.levels import draw_levels, targets
from thermal.report.style import (
    DPI,
    LEFT,
    LIMIT_COLOUR,
    LONG_RUN,
    MARGIN,
    NAME_AT_MOST,
    OFF_COLOUR,
    OWN_COLOURS,
    OWN_DASHES,
    RIGHT,
    SIZE,
    STYLES,
    SVG_METADATA,
    styled,
)
from thermal.report.versions import own_version
from thermal.report.words import piece_in_words
from thermal.results.dense import Sampled, sample
from thermal.results.history import History
from thermal.results.stages import limit_spans, off_spans, stage_ends
from thermal.results.verdict import power_unit, sentence
from thermal.setup import Setup

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure


@dataclass(frozen=True)
class Clock:
    """Unit of the time axis."""

    unit: str
    seconds: float


def save_curves(setup: Setup, case: Case, history: History, folder: Path) -> None:
    """Write curves.png and curves.svg into an existing folder."""
    with styled(), warnings.catch_warnings():
        # A title may hold characters the font lacks; a box in their place is no reason to fail or to talk.
        warnings.filterwarnings("ignore", message="Glyph .* missing from", category=UserWarning)
        figure = curves_figure(setup, case, history)
        figure.savefig(folder / "curves.png")
        figure.savefig(folder / "curves.svg", metadata=SVG_METADATA)


def curves_figure(setup: Setup, case: Case, history: History) -> "Figure":
    """The picture; to be drawn inside styled()."""
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    figure = Figure(figsize=SIZE, dpi=DPI)
    FigureCanvasAgg(figure)
    end = float(history.time[-1])
    clock = Clock("min", 60.0) if end > LONG_RUN else Clock("s", 1.0)
    fine = _fine(setup, history)
    spans = limit_spans(history)
    strip = 0.030 * len(spans)
    powered = _is_powered(history)
    bottom = 0.36 + strip if powered else 0.115
    upper = figure.add_axes((LEFT, bottom, RIGHT - LEFT, 0.845 - bottom))
    upper.set_xlim(0.0, max(end, 1e-9) / clock.seconds)
    if powered:
        lower = figure.add_axes((LEFT, 0.115, RIGHT - LEFT, 0.20), sharex=upper)
        upper.tick_params(labelbottom=False)
        for axes in (upper, lower):
            for start, stop in off_spans(history):
                axes.axvspan(start / clock.seconds, stop / clock.seconds, color=OFF_COLOUR, linewidth=0)
        _powers(lower, setup, fine, clock)
    figure.axes[-1].set_xlabel(f"time, {clock.unit}")
    _temperatures(upper, setup, history, fine, clock)
    if spans:
        limits = figure.add_axes((LEFT, 0.335, RIGHT - LEFT, strip), sharex=upper)
        _limits(limits, spans, clock)
    _stages(figure, upper, setup, history, clock)
    _frame(figure, setup, case, history)
    return figure


def _is_powered(history: History) -> bool:
    return bool((history.absorbed_power > 0.0).any())


def _fine(setup: Setup, history: History) -> Sampled:
    """The run at its steps and evenly in between, stage by stage; boundaries stand twice."""
    stages, times = [], []
    even = np.linspace(0.0, history.time[-1], 401)
    for end in stage_ends(setup, history):
        inside = even[(even > end.record.start) & (even < end.record.end)]
        moments = np.unique(np.concatenate([history.time[history.stage == end.number], inside]))
        times.append(moments)
        stages.append(np.full(moments.size, end.number))
    return sample(setup, history, np.concatenate(stages), np.concatenate(times))


def _temperatures(axes: "Axes", setup: Setup, history: History, fine: Sampled, clock: Clock) -> None:
    time = fine.time / clock.seconds
    names = [name for name in fine.readings if name != "spread"]
    own = zip(cycle(OWN_COLOURS), cycle(OWN_DASHES), strict=False)
    lines = []
    top = max([float(fine.readings["maximum"].max()), *(T for _, T in targets(setup))])
    for name in names:
        colour, dashes, width = STYLES[name] if name in STYLES else (*next(own), 1.3)
        values = fine.readings[name] - ZERO_CELSIUS
        axes.plot(time, values, color=colour, linestyle=dashes, linewidth=width, zorder=3)
        lines.append((name, colour, float(values[-1])))
    low = min(float(fine.extended.min()) - ZERO_CELSIUS, 0.0)
    axes.set_ylim(low, top - ZERO_CELSIUS + 0.09 * (top - ZERO_CELSIUS - low))
    axes.set_ylabel("temperature, °C")
    draw_levels(axes, setup, [end.record.start / clock.seconds for end in stage_ends(setup, history)])
    _end_labels(axes, lines)


def _end_labels(axes: "Axes", lines: list[tuple[str, str, float]]) -> None:
    """Names and last values right of the curves, moved apart, with a thin line to the end of each curve."""
    figure, box = axes.figure, axes.get_window_extent()
    right = axes.get_yaxis_transform()
    ends = [float(axes.transData.transform((0.0, value))[1]) for _, _, value in lines]
    labels = [
        axes.text(1.024, 0.0, f"{_short(name)} {value:.0f} °C", transform=right, color=colour, va="center_baseline")
        for name, colour, value in lines
    ]
    for size in (9.5, 8.5, 7.5, 6.5, 5.5, 4.5):
        for label in labels:
            label.set_fontsize(size)
        height = size * figure.dpi / 72.0 * 1.3
        centres = spread_out(ends, [height] * len(lines), box.y0 - 2.0 * height, box.y1)
        widest = max(label.get_window_extent().x1 for label in labels)
        if centres is not None and widest < MARGIN * SIZE[0] * figure.dpi:
            break
    else:
        for label in labels:
            label.remove()
        axes.legend(axes.lines, [_short(name) for name, _, _ in lines], loc="lower right", ncols=4, fontsize=6)
        return
    for label, (_, colour, value), centre in zip(labels, lines, centres, strict=True):
        at = float(axes.transData.inverted().transform((0.0, centre))[1])
        label.set_y(at)
        axes.plot([1.0, 1.02], [value, at], transform=right, color=colour, linewidth=0.7, clip_on=False)


def _short(name: str) -> str:
    """A name with the middle left out where it is long; the end tells similar names apart."""
    return name if len(name) <= NAME_AT_MOST else f"{name[: NAME_AT_MOST // 2]}…{name[-NAME_AT_MOST // 2 :]}"


def _powers(axes: "Axes", setup: Setup, fine: Sampled, clock: Clock) -> None:
    time = fine.time / clock.seconds
    unit, watts = power_unit(float(fine.series["supply_power" if setup.has_coil else "absorbed_power"].max()))
    axes.plot(
        time, fine.series["absorbed_power"] / watts, color="#00776B", linestyle="-", label="absorbed\nby the workpiece"
    )
    if setup.has_coil:
        supply = fine.series["supply_power"] / watts
        axes.plot(time, supply, color="#8C4A94", linestyle=(0, (6, 2)), label="from the supply\n(whole coil)")
    axes.set_ylim(bottom=0.0)
    axes.set_ylabel(f"power, {unit}")
    axes.legend(loc="upper left", bbox_to_anchor=(1.0, 1.08), frameon=False, fontsize=8.5, labelspacing=0.8)


def _limits(axes: "Axes", spans: dict[str, list[tuple[float, float]]], clock: Clock) -> None:
    """One row per limit that bound, marked where it did."""
    for row, (name, found) in enumerate(spans.items()):
        bars = [(start / clock.seconds, (stop - start) / clock.seconds) for start, stop in found]
        axes.broken_barh(bars, (row - 0.32, 0.64), facecolor=LIMIT_COLOUR, edgecolor="#404040", hatch="////")
        axes.text(
            1.012,
            row,
            f"{name} limit bound",
            transform=axes.get_yaxis_transform(),
            verticalalignment="center",
            fontsize=8.5,
        )
    axes.set_ylim(len(spans) - 0.5, -0.5)
    axes.set_yticks([])
    axes.grid(visible=False)
    axes.tick_params(bottom=False, labelbottom=False)
    for side in ("left", "bottom"):
        axes.spines[side].set_visible(False)


def _stages(figure: "Figure", axes: "Axes", setup: Setup, history: History, clock: Clock) -> None:
    """Stage boundaries, and the names of the stages above the picture."""
    ends = [end for end in stage_ends(setup, history) if end.record.end > end.record.start]
    for end in ends[1:]:
        for each in figure.axes:
            each.axvline(end.record.start / clock.seconds, color="#9A9A9A", linewidth=0.8, zorder=1)
    wanted = [0.5 * (end.record.start + end.record.end) / float(history.time[-1]) for end in ends]
    labels = [
        axes.text(0.0, 1.052, end.name, transform=axes.transAxes, ha="center", va="center", fontsize=9.5)
        for end in ends
    ]
    width = axes.get_window_extent().width
    sizes = [label.get_window_extent().width / width + 0.015 for label in labels]
    centres = spread_out(wanted, sizes, -0.05, 1.15)
    if centres is None:
        for label, end in zip(labels, ends, strict=True):
            label.set_text(str(end.number + 1))
        sizes = [label.get_window_extent().width / width + 0.004 for label in labels]
        centres = spread_out(wanted, sizes, -0.05, 1.15)
    for label, position, tip in zip(labels, centres or wanted, wanted, strict=True):
        label.set_x(position)
        axes.plot(
            [position, tip], [1.033, 1.0], transform=axes.transAxes, color="#9A9A9A", linewidth=0.8, clip_on=False
        )


def _frame(figure: "Figure", setup: Setup, case: Case, history: History) -> None:
    """Title, verdict, and the footer with the piece and the version."""
    width = (MARGIN - LEFT) * SIZE[0] * figure.dpi
    title = figure.text(LEFT, 0.978, "", fontweight="bold", va="top")
    marked = f"Interrupted, incomplete: {setup.title}" if history.status == "interrupted" else setup.title
    fit_text(title, marked, width, (14.0, 12.0, 10.0))
    under = title.get_window_extent().y0 / (SIZE[1] * figure.dpi) - 0.008
    fit_text(figure.text(LEFT, under, "", va="top"), sentence(setup, history), width, (9.5, 8.5, 7.5))
    figure.text(LEFT, 0.022, piece_in_words(setup, case), fontsize=8.5, color="#333333", va="bottom")
    figure.text(MARGIN, 0.022, f"thermal {own_version()}", fontsize=8.5, color="#333333", va="bottom", ha="right")
    if _is_powered(history) and off_spans(history):
        figure.text(LEFT, 0.045, "grey: power off", fontsize=8.5, color="#333333", va="bottom")
