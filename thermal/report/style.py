"""How the pictures of this project look: colours and dashes that stay apart in grey and for colour-blind eyes."""

from contextlib import AbstractContextManager

SIZE = (11.69, 8.27)
DPI = 150
LEFT, RIGHT, MARGIN = 0.075, 0.855, 0.985
"""Bounds of the panels, and of everything that is written, as shares of the width."""
STYLES = {
    "surface": ("#B5401D", "-", 2.2),
    "core": ("#1B5AA6", (0, (6, 2)), 2.2),
    "mean": ("#4F4F4F", "-", 1.0),
    "maximum": ("#111111", (0, (1, 1.6)), 1.8),
}
"""Reading -> colour, dashes and width; told apart in grey by dashes and width alone."""
OWN_COLOURS = ("#00776B", "#8C4A94", "#A67800", "#5E7F13")
OWN_DASHES = ((0, (5, 1.5, 1, 1.5)), (0, (3, 1.5)), (0, (8, 2, 1, 2, 1, 2)), (0, (2, 1)))
LEVEL_COLOUR = "#6A6A6A"
OFF_COLOUR = "#ECECEC"
LIMIT_COLOUR = "#A67800"
NAME_AT_MOST = 18
"""Longest name of a reading beside its curve, in letters."""
LONG_RUN = 600.0
"""Above this many seconds the time axis is in minutes."""
SVG_METADATA = {"Date": None}
"""Leaves the date out: the same run gives the same file."""


def styled() -> AbstractContextManager[None]:
    """Settings of the pictures, in force inside a with block."""
    import matplotlib

    return matplotlib.rc_context(
        {
            "font.family": "DejaVu Sans",
            "font.size": 10.0,
            "axes.titlesize": 10.0,
            "axes.spines.top": False,
            "axes.spines.right": False,
            "axes.edgecolor": "#404040",
            "axes.linewidth": 0.8,
            "axes.grid": True,
            "grid.color": "#DDDDDD",
            "grid.linewidth": 0.6,
            "lines.linewidth": 1.8,
            "text.parse_math": False,
            "text.hinting": "none",
            "text.usetex": False,
            "savefig.bbox": None,
            "savefig.dpi": "figure",
            "svg.hashsalt": "thermal",
        }
    )
