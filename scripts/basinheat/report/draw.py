"""Figures as PNG inside the page, the same bytes every time."""

from __future__ import annotations

import base64
import io
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from matplotlib.figure import Figure

INK, FAINT, ACCENT, SECOND = "#22303c", "#b9c2ca", "#1f6f8b", "#c25b1d"
DPI = 110


def new_figure(width: float, height: float) -> Figure:
    """Return an empty figure of a size in inches, in the report's look."""
    import matplotlib as mpl
    from matplotlib.figure import Figure

    mpl.rcParams.update(
        {
            "font.family": "DejaVu Sans",
            "font.size": 9,
            "axes.titlesize": 10,
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
            "hatch.linewidth": 0.6,
        }
    )
    return Figure(figsize=(width, height), layout="constrained")


def as_data_uri(figure: Figure) -> str:
    """Return a figure as a data URI of a PNG without date and program name."""
    buffer = io.BytesIO()
    figure.savefig(buffer, format="png", dpi=DPI, metadata={"Software": None})
    return "data:image/png;base64," + base64.b64encode(buffer.getvalue()).decode("ascii")
