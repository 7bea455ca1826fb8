"""Figures as PNG inside the page, the same bytes every time."""

from __future__ import annotations

import base64
import io
from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

INK, FAINT, ACCENT, SECOND = "#22303c", "#b9c2ca", "#1f6f8b", "#c25b1d"
# Okabe and Ito (2008), told apart by colour-blind readers (from memory); their yellow left out.
COLOURS = ("#0072B2", "#E69F00", "#009E73", "#D55E00", "#CC79A7", "#56B4E9", "#000000")
DPI = 120
WIDTH = 5.2  # inches: two beside each other on a desk, one above the other on a phone

_LOOK = {
    "font.family": "DejaVu Sans",
    "font.size": 10,
    "axes.titlesize": 10.5,
    "axes.titlelocation": "left",
    "axes.edgecolor": INK,
    "axes.labelcolor": INK,
    "text.color": INK,
    "xtick.color": INK,
    "ytick.color": INK,
    "axes.linewidth": 0.7,
    "axes.spines.top": False,
    "axes.spines.right": False,
    "legend.frameon": False,
    "legend.fontsize": 9,
    "text.parse_math": False,
}


@dataclass(frozen=True)
class Panel:
    """One image of a picture: what it shows in words, and the image as a data URI."""

    alt: str
    image: str
    width: int
    height: int


@dataclass(frozen=True)
class Picture:
    """A picture of the page: name (its anchor), title, how to read it, panels side by side."""

    name: str
    title: str
    caption: str
    panels: list[Panel]


def new_figure(height: float = 4.0, width: float = WIDTH) -> Figure:
    """Return an empty figure of a size in inches, in the report's look whatever the user's is."""
    import matplotlib as mpl
    from matplotlib.figure import Figure

    mpl.rcdefaults()
    mpl.rcParams.update(_LOOK)
    return Figure(figsize=(width, height))


def plot_axes(figure: Figure, legend_rows: int = 0) -> Axes:
    """Return axes with room for labels, and for a legend below; placed by hand, which is fast."""
    width, height = figure.get_size_inches()
    left, right, top = 0.68, 0.12, 0.32
    bottom = 0.52 + (0.08 + 0.2 * legend_rows if legend_rows else 0.0)
    size = (width - left - right) / width, (height - top - bottom) / height
    return figure.add_axes((left / width, bottom / height, *size))


def legend_below(figure: Figure, columns: int = 1) -> None:
    """Put the legend of the axes at the foot of the figure."""
    figure.legend(
        loc="lower left", bbox_to_anchor=(0.02, 0.0), ncols=columns, borderaxespad=0.2,
        labelspacing=0.25, columnspacing=1.2, handletextpad=0.5, markerscale=1.4,
    )  # fmt: skip


def as_panel(figure: Figure, alt: str) -> Panel:
    """Return a figure as a PNG without date and program name."""
    buffer = io.BytesIO()
    figure.savefig(buffer, format="png", dpi=DPI, metadata={"Software": None})
    uri = "data:image/png;base64," + base64.b64encode(buffer.getvalue()).decode("ascii")
    width, height = (round(size * DPI) for size in figure.get_size_inches())
    return Panel(alt, uri, width, height)
