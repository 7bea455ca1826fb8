"""Figures of the report other than maps: corrections, variograms, validation."""

from __future__ import annotations

from typing import Any

import numpy as np

from basinheat.geostat.models import Covariance
from basinheat.report import captions
from basinheat.report.contents import Contents
from basinheat.report.draw import (
    ACCENT,
    COLOURS,
    FAINT,
    INK,
    SECOND,
    Panel,
    Picture,
    as_panel,
    legend_below,
    new_figure,
    plot_axes,
)

MARKERS = "os^Dv<>Phx"
KM = 1e-3
ERROR_BARS = 3000  # beyond, they are a smear and take long to draw
INTERVALS = (50, 80, 90, 95)


def correction_picture(contents: Contents) -> Picture:
    """Draw temperatures against depth before and after correction, and the correction itself."""
    table = contents.temperatures
    depth = table["depth_m"] * KM
    size = _size(len(table))
    figure = new_figure(4.4)
    ax = plot_axes(figure)
    ax.plot(
        table["raw_temperature_degc"], depth, "o", color=FAINT, markersize=size, label="as read",
        markeredgewidth=0,
    )  # fmt: skip
    ax.plot(
        table["temperature_degc"], depth, "o", color=ACCENT, markersize=size, label="corrected",
        markeredgewidth=0, alpha=0.8,
    )  # fmt: skip
    ax.set(xlabel="Temperature (°C)", ylabel="Depth (km)", title="Before and after correction")
    ax.set_ylim(_down(ax))
    ax.legend(loc="lower left")
    return Picture(
        "corrections",
        "Readings before and after correction",
        "Each point is one well and depth. Left, the warmest reading of a set and the formation "
        "temperature made of it; right, the difference, by method.",
        [
            as_panel(figure, "Temperature against depth, as read and corrected"),
            _by_method(contents, size),
        ],
    )


def _by_method(contents: Contents, size: float) -> Panel:
    table = contents.temperatures
    figure = new_figure(4.4)
    ax = plot_axes(figure, legend_rows=table["method"].nunique())
    for i, (method, part) in enumerate(table.groupby("method", sort=True)):
        ax.plot(
            part["correction_k"], part["depth_m"] * KM, MARKERS[i % len(MARKERS)],
            color=COLOURS[i % len(COLOURS)], markersize=size, alpha=0.75, markeredgewidth=0,
            label=f"{captions.of_method(str(method))}: {len(part):,}",
        )  # fmt: skip
    ax.axvline(0.0, color=INK, linewidth=0.6, zorder=0)
    ax.set(xlabel="Correction (K)", ylabel="Depth (km)", title="Correction by method")
    ax.set_ylim(_down(ax))
    legend_below(figure)
    return as_panel(figure, "Correction against depth, by method")


def variogram_picture(contents: Contents) -> Picture:
    """Draw the variograms of heat flow and of conductivity, with the fitted models."""
    groups = contents.structure_model["groups"]
    figures = [new_figure(3.8), new_figure(3.8)]
    left = plot_axes(figures[0])
    right = plot_axes(figures[1], legend_rows=-(-len(groups) // 3))
    _variogram(left, contents.heat_flow_model, ACCENT)
    left.set(ylabel="Semivariance (mW²/m⁴)", title="Heat flow")
    for i, group in enumerate(groups):
        label = f"{group['top_m']:,.0f}–{group['base_m']:,.0f} m"
        _variogram(right, group, COLOURS[i % len(COLOURS)], label, MARKERS[i % len(MARKERS)])
    right.set(ylabel="Semivariance", title="ln of conductivity, by depth")
    if groups:
        legend_below(figures[1], columns=3)
    return Picture(
        "variograms",
        "Variograms and fitted models",
        "How much two wells differ with their distance. Points: measured, the wells' own errors "
        "taken out, larger where more pairs stand behind them. Lines: the models that kriging "
        "uses; they are fitted by likelihood and checked on wells left out, so they need not run "
        "through the points.",
        [
            as_panel(figures[0], "Variogram of heat flow"),
            as_panel(figures[1], "Variograms of the logarithm of conductivity"),
        ],
    )


def _variogram(
    ax: Any, record: dict[str, Any], colour: str, label: str = "", marker: str = "o"
) -> None:
    measured = record.get("experimental")
    covariance = Covariance.from_dict(record["covariance"])
    reach = 1.2 * covariance.range_m
    if measured and measured["lag_m"]:
        lag, gamma, pairs = (np.array(measured[key], float) for key in ("lag_m", "gamma", "pairs"))
        reach = max(lag.max(), 1.0)
        size = 8 + 40 * pairs / max(pairs.max(), 1)
        ax.scatter(lag * KM, gamma, s=size, color=colour, alpha=0.7, linewidths=0, marker=marker)
    h = np.linspace(reach / 200, reach, 200)
    ax.plot(h * KM, covariance.semivariance(h), color=colour)
    ax.plot([], [], color=colour, marker=marker, markersize=4, label=label)
    ax.set(xlabel="Distance (km)")
    ax.set_ylim(bottom=0)
    ax.set_xlim(left=0)


def validation_picture(contents: Contents) -> Picture:
    """Draw wells left out: observed against predicted, errors by depth, and their size."""
    return Picture(
        "validation",
        "Wells left out of their own prediction",
        "First, heat flow of each well against what the others say (the line: equal; bars: the "
        "well's own σ). Second, errors of temperature by depth, well left out: they should lie "
        "around zero at every depth. Third, those errors in units of their σ: like the curve "
        "where σ is right. Fourth, how many errors lie inside the stated intervals: above the line "
        "σ is too wide, below it too narrow.",
        [_left_out(contents), _by_depth(contents), _standardised(contents), _coverage(contents)],
    )


def _left_out(contents: Contents) -> Panel:
    table = contents.crossval_heat_flow
    figure = new_figure(4.2)
    ax = plot_axes(figure)
    both = table[["value", "predicted"]].to_numpy()
    both = both[np.isfinite(both)]
    ends = np.percentile(both, [0.2, 99.8]) if both.size else np.array([0.0, 1.0])
    ends = ends + np.array([-0.05, 0.05]) * max(np.ptp(ends), 1.0)
    if len(table) <= ERROR_BARS:
        ax.errorbar(
            table["predicted"], table["value"], yerr=table["value_std"], fmt="none", ecolor=FAINT,
            elinewidth=0.7, zorder=1,
        )  # fmt: skip
    ax.plot(
        table["predicted"], table["value"], "o", markersize=_size(len(table)), color=ACCENT,
        markeredgewidth=0, zorder=2,
    )  # fmt: skip
    ax.plot(ends, ends, color=INK, linewidth=0.8, zorder=3)
    ax.set(
        xlabel="Predicted from the others (mW/m²)", ylabel="Heat flow of the well (mW/m²)",
        title="Heat flow", xlim=ends, ylim=ends, aspect="equal", anchor="SW",
    )  # fmt: skip
    return as_panel(figure, "Heat flow of wells against the prediction from the others")


def _by_depth(contents: Contents) -> Panel:
    table = contents.crossval_temperature
    figure = new_figure(4.2)
    ax = plot_axes(figure)
    ax.plot(
        table["left_out_k"], table["depth_m"] * KM, "o", color=SECOND, alpha=0.7,
        markersize=_size(len(table)), markeredgewidth=0,
    )  # fmt: skip
    ax.axvline(0.0, color=INK, linewidth=0.8)
    ax.set(
        xlabel="Predicted less formation temperature (K)", ylabel="Depth (km)",
        title="Temperature, well left out",
    )  # fmt: skip
    ax.set_ylim(_down(ax))
    return as_panel(figure, "Errors of temperature against depth, wells left out")


def _standardised(contents: Contents) -> Panel:
    table = contents.crossval_temperature
    z = (table["left_out_k"] / table["left_out_std_k"]).to_numpy()
    z = z[np.isfinite(z)]
    figure = new_figure(4.2)
    ax = plot_axes(figure)
    edges = np.linspace(-4.0, 4.0, 33)
    ax.hist(np.clip(z, -3.999, 3.999), bins=edges, color=ACCENT, alpha=0.6)
    grid = np.linspace(-4.0, 4.0, 200)
    normal = np.exp(-(grid**2) / 2) / np.sqrt(2 * np.pi)
    ax.plot(grid, normal * len(z) * (edges[1] - edges[0]), color=INK)
    ax.set(
        xlabel="Error / its stated σ (ends: all beyond)", ylabel="Temperatures",
        title="Temperature, well left out: is σ honest?", xlim=(-4.0, 4.0),
    )  # fmt: skip
    return as_panel(figure, "Histogram of errors of temperature over their stated uncertainty")


def _coverage(contents: Contents) -> Panel:
    figure = new_figure(4.2)
    ax = plot_axes(figure, legend_rows=sum(key in contents.scores for key in captions.SCORES))
    ax.plot([0, 100], [0, 100], color=INK, linewidth=0.8)
    for i, (key, (title, _, _)) in enumerate(captions.SCORES.items()):
        score = contents.scores.get(key)
        if not score or score["coverage_50"] is None:
            continue
        inside = [100 * score[f"coverage_{share}"] for share in INTERVALS]
        ax.plot(
            INTERVALS, inside, linestyle=":", marker=MARKERS[i], color=COLOURS[i], markersize=5,
            label=title,
        )  # fmt: skip
    ax.set(xlim=(40, 100), ylim=(40, 100), aspect="equal", anchor="SW")
    ax.set(xlabel="Stated interval (%)", ylabel="Errors inside it (%)")
    ax.set_title("Are the intervals right?")
    legend_below(figure)
    return as_panel(figure, "Share of errors inside the stated intervals")


def _size(count: int) -> float:
    """Return a marker size that leaves many points apart."""
    return float(np.clip(80.0 / np.sqrt(max(count, 1)), 1.0, 4.0))


def _down(ax: Any) -> tuple[float, float]:
    """Return limits that let depth grow downwards from the surface."""
    return max(ax.get_ylim()), 0.0
