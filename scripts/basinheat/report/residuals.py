"""Residuals of the calibration and of what counts in its place, at the pairs."""

from __future__ import annotations

from typing import Any

import numpy as np
import pandas as pd

from basinheat.report import captions
from basinheat.report.calibration import other_rows, own_rows
from basinheat.report.contents import Contents
from basinheat.report.draw import (
    ACCENT,
    INK,
    SECOND,
    Panel,
    Picture,
    as_panel,
    legend_below,
    new_figure,
    plot_axes,
)
from basinheat.report.sheet import number

KM = 1e-3
WIDEST_K = 30.0  # a gross error must not press the others together
_MARKS = {"equilibrium": ("o", "logs"), "dst": ("s", "tests")}
_HOURS = (0.5, 1, 2, 5, 10, 20, 50, 100, 200, 500, 1000)


def residual_picture(contents: Contents) -> Picture:
    """Draw residuals at the pairs against depth and against time since circulation."""
    own, other = own_rows(contents), other_rows(contents)
    if own.empty:
        return Picture("residuals", _TITLE, "", [])
    panels = [_by_depth(own, other)]
    timed = own["since_circulation_h"].notna()
    if timed.any():
        panels.append(_by_time(own[timed], other))
    return Picture("residuals", _TITLE, _caption(own, other), panels)


_TITLE = "Residuals at the pairs"


def _caption(own: pd.DataFrame, other: pd.DataFrame) -> str:
    """Say what is drawn, and what is not."""
    text = "Estimate less direct temperature; without bias they lie around zero at every depth and "
    text += "time. The direct temperature's own error is in them, "
    text += f"{number(own['anchor_std_k'].median(), 1)} K in the middle. Filled: the calibration, "
    text += "each pair predicted without its own well and log."
    if len(other):
        methods = "; ".join(captions.of_method(name) for name in sorted(set(other["method"])))
        text += " Open: the method of correction.order that counts there, before what the joint "
        text += f"fit learned is taken out ({methods})."
    untimed = int(own["since_circulation_h"].isna().sum())
    if 0 < untimed < len(own):
        pairs = "1 pair has" if untimed == 1 else f"{number(untimed)} pairs have"
        text += f" By depth only: {pairs} no time."
    if max(part["residual_k"].abs().max() for part in (own, other) if len(part)) > WIDEST_K:
        text += f" What lies beyond {WIDEST_K:g} K is drawn at the edge."
    return text


def _by_depth(own: pd.DataFrame, other: pd.DataFrame) -> Panel:
    figure, ax = _axes(own, other)
    for kind, part, look in _series(own, other):
        ax.plot(_cut(part), part["depth_m"] * KM, **look, label=kind)
    ax.axvline(0.0, color=INK, linewidth=0.6, zorder=0)
    deepest = float(own["depth_m"].max()) * KM
    ax.set(xlabel="Residual (K)", ylabel="Depth (km)", title="By depth")
    ax.set(xlim=_limits(own, other), ylim=(1.05 * deepest, 0.0))
    legend_below(figure, columns=2)
    return as_panel(figure, "Residuals at the pairs against depth")


def _by_time(own: pd.DataFrame, other: pd.DataFrame) -> Panel:
    other = other[other["since_circulation_h"].notna()]
    figure, ax = _axes(own, other)
    for kind, part, look in _series(own, other):
        ax.plot(part["since_circulation_h"], _cut(part), **look, label=kind)
    ax.axhline(0.0, color=INK, linewidth=0.6, zorder=0)
    ax.set_xscale("log")
    hours = own["since_circulation_h"].to_numpy()
    low, high = 0.8 * float(hours.min()), 1.25 * float(hours.max())
    ticks = [hour for hour in _HOURS if low <= hour <= high]
    ax.set_xticks(ticks, [f"{hour:g}" for hour in ticks])
    ax.set_xticks([], minor=True)
    ax.set(xlabel="Time since circulation (h)", ylabel="Residual (K)")
    ax.set(title="By time since circulation", xlim=(low, high), ylim=_limits(own, other))
    legend_below(figure, columns=2)
    return as_panel(figure, "Residuals at the pairs against time since circulation")


def _axes(own: pd.DataFrame, other: pd.DataFrame) -> tuple[Any, Any]:
    figure = new_figure(4.4)
    kinds = max(part["anchor_kind"].nunique() for part in (own, other))
    return figure, plot_axes(figure, legend_rows=kinds)


def _series(own: pd.DataFrame, other: pd.DataFrame) -> list[tuple[str, pd.DataFrame, Any]]:
    """Return label, pairs and look of each series, by source and kind of anchor."""
    out = []
    # Open signs first, so that the filled ones lie on them.
    for name, table, face, edge in (
        ("what counts there", other, "none", SECOND), ("calibration", own, ACCENT, ACCENT),
    ):  # fmt: skip
        for kind, part in table.groupby("anchor_kind", sort=True):
            marker, title = _MARKS[str(kind)]
            look = {"linestyle": "none", "marker": marker, "markersize": 4.5, "alpha": 0.8}
            look |= {"markerfacecolor": face, "markeredgecolor": edge, "markeredgewidth": 1.0}
            out.append((f"{name}, {title}: {len(part):,}", part, look))
    return out


def _cut(part: pd.DataFrame) -> pd.Series:
    return part["residual_k"].clip(-WIDEST_K, WIDEST_K)


def _limits(own: pd.DataFrame, other: pd.DataFrame) -> tuple[float, float]:
    largest = float(pd.concat([own, other])["residual_k"].abs().max())
    reach = 1.06 * float(np.clip(largest, 1.0, WIDEST_K))
    return -reach, reach
