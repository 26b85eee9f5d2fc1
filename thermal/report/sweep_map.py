"""A sweep as a picture: curves over one axis, maps over two."""

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
import numpy.typing as npt

from thermal.interfaces import Array
from thermal.questions.sweep import Sweep
from thermal.questions.sweep_plan import Axis
from thermal.questions.sweep_store import Row
from thermal.report.frame import frame
from thermal.report.style import LEFT, LONG_RUN, MARGIN

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.axis import Axis as Side
    from matplotlib.figure import Figure as Picture

Index = npt.NDArray[np.int64]

SHADES = ("#F6F1DF", "#C9D3A0", "#7FB08C", "#2F7F86", "#1B4A78", "#141C3F")
"""From low to high: every step is darker, so grey keeps the order; blue against yellow for colour-blind eyes."""
NOT_REACHED, TOO_HOT, FAILED = "target not met", "hotter than the solidus", "failed"
MARKS = {NOT_REACHED: ("#E9E9E9", "..."), TOO_HOT: ("#CFCFCF", "xxx"), FAILED: ("#FFFFFF", "////")}
"""What became of a run without a figure -> ground and hatching; told apart by the hatching alone."""
CELLS_WITH_NUMBERS = 12
"""Up to so many cells on a side a map without contours shows numbers in them."""
LEVELS = 7
"""Contours, about."""
STUB = 0.03
"""Share of the range at either end that gets no contour."""
WRITTEN_OUT = 11
"""Most values of an axis that are written at it one by one."""
LETTERS = 7
"""Room for a number at an axis, in letters."""
PANEL, GAP, FOOT = 0.208, 0.042, 0.135
"""Height of a panel of curves, distance between two of them, and place of the lowest, as shares of the picture."""


@dataclass(frozen=True)
class Figure:
    """One figure of the rows that is drawn. name : in the rows ; label : with its unit ; scale : divides it."""

    name: str
    label: str
    scale: float = 1.0


def figures_of_picture(sweep: Sweep) -> tuple[Figure, Figure, Figure]:
    """Time, spread and energy of a sweep, the energy from the supply where there is one."""
    times = [row.figures["time_s"] for row in sweep.rows if "time_s" in row.figures]
    aimed = any(row.met is not None for row in sweep.rows)
    words = "time to the target" if aimed else "heating time"
    long = max(times, default=0.0) > LONG_RUN
    time = Figure("time_s", f"{words}, {'min' if long else 's'}", 60.0 if long else 1.0)
    spread = Figure("spread_K", "spread (surface - core) then, K")
    if any("supply_energy_kWh_per_t" in row.figures for row in sweep.rows):
        return time, spread, Figure("supply_energy_kWh_per_t", "energy from the supply, kWh/t")
    return time, spread, Figure("absorbed_energy_kWh_per_t", "energy absorbed, kWh/t")


def fits(sweep: Sweep) -> bool:
    """Whether a picture has room for the axes."""
    return len(sweep.axes) <= 2


def drawable(sweep: Sweep) -> bool:
    """Whether any run has something to show."""
    return any(fate(row) is None for row in sweep.rows)


def fate(row: Row) -> str | None:
    """What became of a run that has no figures to compare; None for one that has."""
    if row.status == "failed" or "time_s" not in row.figures:
        return FAILED
    if row.status == "limit":
        return TOO_HOT
    return NOT_REACHED if row.met is False else None


def draw_sweep(picture: "Picture", sweep: Sweep, title: str, sentence: str) -> None:
    """Fill an empty picture with a sweep over one or two axes; inside styled()."""
    if len(sweep.axes) == 1:
        _curves(picture, sweep)
    else:
        _maps(picture, sweep)
    _frame(picture, sweep, title, sentence)


@dataclass(frozen=True)
class Scale:
    """Where the values of an axis stand in a picture.

    centres : (n,) in the order of the axis: numbers, or 0, 1, 2 ... for words ; edges : (n + 1,) rising, around them ;
    order : (n,) indices of the values from low to high ; smooth : numbers, between which one may interpolate.
    """

    axis: Axis
    centres: Array
    edges: Array
    order: Index
    smooth: bool
    logarithmic: bool

    @classmethod
    def of(cls, axis: Axis) -> "Scale":
        """Scale of an axis; logarithmic where its steps are."""
        smooth = axis.numbers is not None
        centres = np.arange(float(len(axis.values))) if axis.numbers is None else np.array(axis.numbers)
        logarithmic = axis.logarithmic or (smooth and _more_even_in_ratios(np.sort(centres)))
        at = np.log(np.sort(centres)) if logarithmic else np.sort(centres)
        middles = 0.5 * (at[:-1] + at[1:])
        first, last = (0.5 * (at[1] - at[0]), 0.5 * (at[-1] - at[-2])) if at.size > 1 else (0.5, 0.5)
        edges = np.concatenate([[at[0] - first], middles, [at[-1] + last]])
        return cls(axis, centres, np.exp(edges) if logarithmic else edges, np.argsort(centres), smooth, logarithmic)

    @property
    def label(self) -> str:
        """Path and unit."""
        return f"{self.axis.path}, {self.axis.unit}" if self.axis.unit else self.axis.path

    def cell(self, i: int) -> tuple[float, float]:
        """Edges of value i."""
        rank = int(np.flatnonzero(self.order == i)[0])
        return float(self.edges[rank]), float(self.edges[rank + 1])

    def across(self, axes: "Axes", letters: int) -> None:
        """Set up the x axis; letters : that fit beside each other."""
        axes.set_xscale("log" if self.logarithmic else "linear")
        axes.set_xlim(*self.edges[[0, -1]])
        self._marks(axes.xaxis, letters)
        if not self.smooth and self._length() > letters:
            for label in axes.get_xticklabels():
                label.set(rotation=25, horizontalalignment="right", rotation_mode="anchor")

    def up(self, axes: "Axes") -> None:
        """Set up the y axis."""
        axes.set_yscale("log" if self.logarithmic else "linear")
        axes.set_ylim(*self.edges[[0, -1]])
        self._marks(axes.yaxis, None)

    def _marks(self, side: "Side", letters: int | None) -> None:
        """A mark at every value, or at every so manyth; round numbers where there are many."""
        from matplotlib.ticker import FuncFormatter, LogLocator, NullLocator

        texts = self._texts()
        side.set_minor_locator(NullLocator())
        if len(texts) > WRITTEN_OUT and self.smooth:
            if self.logarithmic:
                decades = float(np.log10(self.edges[-1] / self.edges[0]))
                few = letters is not None and 3 * LETTERS * decades > letters
                side.set_major_locator(LogLocator(subs=(1.0, 3.0) if few else (1.0, 2.0, 5.0)))
                side.set_major_formatter(FuncFormatter(lambda value, _: rounded(value, 4)))
            return
        at_least = -(-self._length() // letters) if self.smooth and letters is not None else 1
        chosen = self.order[:: max(at_least, -(-len(texts) // WRITTEN_OUT))]
        side.set_ticks(self.centres[chosen], [texts[i] for i in chosen])

    def _length(self) -> int:
        """Letters of all values side by side, with room between them."""
        return sum(len(text) + 2 for text in self._texts())

    def _texts(self) -> list[str]:
        if self.axis.numbers is None:
            return [value.strip("\"'") for value in self.axis.values]
        return [rounded(number, 4) for number in self.axis.numbers]


def rounded(value: float, figures: int) -> str:
    """A number with so many figures, written out: 40000 and not 4e+04."""
    return f"{float(f'{value:.{figures}g}'):.12g}".replace("-", "−")


def _more_even_in_ratios(rising: Array) -> bool:
    """Whether numbers follow each other in ratios rather than in steps."""
    if rising.size < 3 or rising[0] <= 0.0:
        return False
    steps, ratios = np.diff(rising), np.diff(np.log(rising))
    return bool(ratios.std() / ratios.mean() < steps.std() / steps.mean())


def _curves(picture: "Picture", sweep: Sweep) -> None:
    """Time, spread and energy over the one axis, one below the other."""
    scale = Scale.of(sweep.axes[0])
    fates = [fate(row) for row in sweep.rows]
    figures = figures_of_picture(sweep)
    for place, figure in enumerate(figures):
        bottom = FOOT + (len(figures) - 1 - place) * (PANEL + GAP)
        axes = picture.add_axes((LEFT, bottom, MARGIN - LEFT, PANEL))
        values = np.full(scale.centres.size, np.nan)
        for row, end in zip(sweep.rows, fates, strict=True):
            if end is None:
                values[row.run - 1] = row.figures[figure.name] / figure.scale
            else:
                ground, hatch = MARKS[end]
                low, high = scale.cell(row.run - 1)
                axes.axvspan(low, high, facecolor=ground, hatch=hatch, edgecolor="#8A8A8A", linewidth=0.0, zorder=1.6)
        line = "-" if scale.smooth else ""
        many = scale.centres.size > 3 * WRITTEN_OUT
        at, shown = scale.centres[scale.order], values[scale.order]
        axes.plot(at, shown, linestyle=line, color="#1B4A78", marker="" if many else "o", markersize=5.0, zorder=3)
        scale.across(axes, 110)
        low, high = axes.get_ylim()
        axes.set_ylim(min(low, 0.0) if figure.name != "spread_K" else low, high + 0.06 * (high - low))
        axes.tick_params(labelbottom=place == len(figures) - 1)
        axes.set_title(figure.label, loc="left", fontsize=9.5, pad=4.0)
    picture.axes[-1].set_xlabel(scale.label)


def _maps(picture: "Picture", sweep: Sweep) -> None:
    """A large map of the time, and beside it spread and energy."""
    time, spread, energy = figures_of_picture(sweep)
    places = {
        time: (LEFT, 0.165, 0.47, 0.675),
        spread: (0.675, 0.54, 0.24, 0.30),
        energy: (0.675, 0.165, 0.24, 0.30),
    }
    for figure, (left, bottom, width, height) in places.items():
        axes = picture.add_axes((left, bottom, width, height))
        bar = picture.add_axes((left + width + 0.010, bottom, 0.011, height))
        large = figure is time
        _map(axes, bar, sweep, figure, 9.5 if large else 8.0, 56 if large else 30)
        axes.set_title(figure.label, loc="left", fontsize=10.5 if large else 9.0, fontweight="bold" if large else None)
        if figure is spread:  # the map below it has the same axis
            axes.set_xlabel("")
            axes.tick_params(labelbottom=False)


def _map(axes: "Axes", bar: "Axes", sweep: Sweep, figure: Figure, size: float, letters: int) -> None:
    from matplotlib.colors import LinearSegmentedColormap, ListedColormap
    from matplotlib.patheffects import withStroke
    from matplotlib.ticker import MaxNLocator

    across, up = (Scale.of(axis) for axis in sweep.axes)
    shape = (across.centres.size, up.centres.size)
    values, fates = np.full(shape, np.nan), np.full(shape, FAILED, dtype=object)
    for row in sweep.rows:
        place = np.unravel_index(row.run - 1, shape)
        fates[place] = fate(row)
        if fates[place] is None:
            values[place] = row.figures[figure.name] / figure.scale
    sorted_cells = np.ix_(across.order, up.order)
    values, fates = np.ma.masked_invalid(values[sorted_cells].T), fates[sorted_cells].T
    shades = LinearSegmentedColormap.from_list("shades", SHADES)
    cells = axes.pcolormesh(across.edges, up.edges, values, cmap=shades, rasterized=True, zorder=1)
    for end, (ground, hatch) in MARKS.items():
        if (fates == end).any():
            only = np.ma.masked_where(fates != end, np.ones(fates.shape))
            one = ListedColormap([ground])
            axes.pcolor(
                across.edges, up.edges, only, cmap=one, hatch=hatch, edgecolors="#8A8A8A", linewidth=0.0, zorder=2
            )
    across.across(axes, letters)
    up.up(axes)
    axes.grid(visible=False)
    axes.set_xlabel(across.label, fontsize=size)
    axes.set_ylabel(up.label, fontsize=size)
    axes.figure.colorbar(cells, cax=bar, ticks=MaxNLocator(LEVELS))
    bar.grid(visible=False)
    for each in (axes, bar):
        each.tick_params(labelsize=size - 0.5)
    x, y = across.centres[across.order], up.centres[up.order]
    if across.smooth and up.smooth and min(shape) > 2 and values.max() > values.min():
        _contours(axes, x, y, values, size)
    elif max(shape) <= CELLS_WITH_NUMBERS:
        for j, i in np.argwhere(~np.ma.getmaskarray(values)):
            label = axes.text(x[i], y[j], rounded(values[j, i], 3), ha="center", va="center", fontsize=size)
            label.set_path_effects([withStroke(linewidth=2.5, foreground="#FFFFFF")])


def _contours(axes: "Axes", x: Array, y: Array, values: Array, size: float) -> None:
    """Labelled lines of equal figure, straight between the centres of the cells."""
    from matplotlib.patheffects import withStroke
    from matplotlib.ticker import MaxNLocator

    low, high = float(values.min()), float(values.max())
    levels = np.asarray(MaxNLocator(LEVELS).tick_values(low, high))
    # One that grazes an end would be a stub in a corner.
    levels = levels[(levels > low + STUB * (high - low)) & (levels < high - STUB * (high - low))]
    lines = axes.contour(x, y, values, levels=levels, colors="#111111", linestyles="-", linewidths=0.9, zorder=3)
    lines.set_path_effects([withStroke(linewidth=2.2, foreground="#FFFFFF")])
    labels = axes.clabel(lines, fmt=lambda level: rounded(level, 4), fontsize=size, zorder=4)
    for label in labels:
        label.set_path_effects([withStroke(linewidth=2.5, foreground="#FFFFFF")])


def _frame(picture: "Picture", sweep: Sweep, title: str, sentence: str) -> None:
    """Title, answer, what the hatchings mean, and the version."""
    from matplotlib.patches import Patch

    frame(picture, title, sentence, "")
    found = {fate(row) for row in sweep.rows}
    marks = [
        Patch(facecolor=ground, hatch=hatch, edgecolor="#8A8A8A", linewidth=0.6, label=end)
        for end, (ground, hatch) in MARKS.items()
        if end in found
    ]
    if marks:
        picture.legend(
            handles=marks,
            loc="lower left",
            bbox_to_anchor=(LEFT - 0.008, 0.008),
            ncols=len(marks),
            frameon=False,
            fontsize=8.5,
            handleheight=1.4,
        )
