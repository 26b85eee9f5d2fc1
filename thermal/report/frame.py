"""What stands around the panels of a question's picture: title, answer and version; and its two files."""

import warnings
from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING

from thermal.report.labels import fit_text
from thermal.report.style import DPI, LEFT, MARGIN, SIZE, SVG_METADATA, styled
from thermal.report.versions import own_version

if TYPE_CHECKING:
    from matplotlib.figure import Figure


def save_figure(name: str, folder: Path, draw: "Callable[[Figure], None]") -> None:
    """Write <name>.png and <name>.svg into an existing folder."""
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    with styled(), warnings.catch_warnings():
        # A title may hold characters the font lacks; a box in their place is no reason to fail or to talk.
        warnings.filterwarnings("ignore", message="Glyph .* missing from", category=UserWarning)
        figure = Figure(figsize=SIZE, dpi=DPI)
        FigureCanvasAgg(figure)
        draw(figure)
        figure.savefig(folder / f"{name}.png")
        figure.savefig(folder / f"{name}.svg", metadata=SVG_METADATA)


def frame(figure: "Figure", title: str, sentence: str, foot: str) -> None:
    """Title and answer above the panels, a line and the version below them."""
    width = (MARGIN - LEFT) * SIZE[0] * figure.dpi
    head = figure.text(LEFT, 0.978, "", fontweight="bold", va="top")
    fit_text(head, title, width, (14.0, 12.0, 10.0))
    under = head.get_window_extent().y0 / (SIZE[1] * figure.dpi) - 0.008
    fit_text(figure.text(LEFT, under, "", va="top"), sentence, width, (9.5, 8.5, 7.5))
    figure.text(LEFT, 0.022, foot, fontsize=8.5, color="#333333", va="bottom")
    figure.text(MARGIN, 0.022, f"thermal {own_version()}", fontsize=8.5, color="#333333", va="bottom", ha="right")
