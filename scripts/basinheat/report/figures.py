"""Figures of the report other than maps: corrections, variograms, validation."""

from __future__ import annotations

import numpy as np

from basinheat.geostat.models import Covariance
from basinheat.report.contents import Contents
from basinheat.report.draw import ACCENT, FAINT, INK, SECOND, as_data_uri, new_figure
from basinheat.report.mapfigures import Picture

MARKERS = "os^Dv<>Phx"


def correction_picture(contents: Contents) -> Picture:
    """Draw temperatures against depth before and after correction, and the correction itself."""
    figure = new_figure(10.4, 4.4)
    left, right = figure.subplots(1, 2, sharey=True)
    table = contents.temperatures
    depth = table["depth_m"] / 1000.0
    left.plot(
        table["raw_temperature_degc"], depth, ".", color=FAINT, markersize=4, label="as read"
    )
    left.plot(table["temperature_degc"], depth, ".", color=ACCENT, markersize=4, label="formation")
    left.set(xlabel="Temperature (°C)", ylabel="Depth (km)", title="Before and after correction")
    left.invert_yaxis()
    left.legend(loc="lower left")
    for (method, part), marker in zip(table.groupby("method"), MARKERS, strict=False):
        right.plot(
            part["correction_k"], part["depth_m"] / 1000.0, marker, markersize=3.5, alpha=0.7,
            label=f"{method} ({len(part)})",
        )
    right.axvline(0.0, color=INK, linewidth=0.6)
    right.set(xlabel="Correction (K)", title="Correction by method")
    right.legend(loc="lower right")
    return Picture("corrections", "Readings before and after correction", as_data_uri(figure))


def variogram_picture(contents: Contents) -> Picture:
    """Draw the variograms of heat flow and of conductivity, with the fitted models."""
    groups = contents.structure_model["groups"]
    figure = new_figure(10.4, 3.8)
    left, right = figure.subplots(1, 2)
    _variogram(left, contents.heat_flow_model, ACCENT, "Heat flow", "mW²/m⁴")
    for i, group in enumerate(groups):
        shade = str(0.15 + 0.6 * i / max(len(groups), 1))
        label = f"{group['top_m']:.0f}-{group['base_m']:.0f} m"
        _variogram(right, group, shade, "ln conductivity", "", label)
    if groups:
        right.legend(loc="lower right", title="depth")
    return Picture("variograms", "Variograms and fitted models", as_data_uri(figure))


def _variogram(ax, record, colour, title, unit, label=""):  # noqa: ANN001
    measured = record.get("experimental")
    covariance = Covariance.from_dict(record["covariance"])
    reach = 1.2 * covariance.range_m
    if measured and measured["lag_m"]:
        lag, gamma, pairs = (np.array(measured[key]) for key in ("lag_m", "gamma", "pairs"))
        reach = max(lag.max(), 1.0)
        size = 12 + 50 * pairs / max(pairs.max(), 1)
        ax.scatter(lag / 1000, gamma, s=size, color=colour, alpha=0.7, linewidths=0)
    h = np.linspace(reach / 200, reach, 200)
    ax.plot(h / 1000, covariance.semivariance(h), color=colour, label=label)
    ax.set(
        xlabel="Distance (km)",
        ylabel=f"Semivariance ({unit})" if unit else "Semivariance",
        title=title,
    )
    ax.set_ylim(bottom=0)
    ax.set_xlim(left=0)


def validation_picture(contents: Contents) -> Picture:
    """Draw wells left out: heat flow observed against predicted, and its standardised error."""
    figure = new_figure(10.4, 3.8)
    left, middle, right = figure.subplots(1, 3)
    table = contents.crossval_heat_flow
    ends = np.nanpercentile(table[["value", "predicted"]].to_numpy(), [0.5, 99.5])
    left.errorbar(
        table["predicted"], table["value"], yerr=table["value_std"], fmt=".", markersize=4,
        color=ACCENT, ecolor=FAINT, elinewidth=0.6, zorder=2,
    )
    left.plot(ends, ends, color=INK, linewidth=0.8)
    left.set(
        xlabel="Predicted from the others (mW/m²)", ylabel="Heat flow of the well (mW/m²)",
        title="Wells left out", xlim=ends, ylim=ends,
    )
    z = table["z_score"].to_numpy()
    grid = np.linspace(-4, 4, 200)
    middle.hist(np.clip(z[np.isfinite(z)], -4, 4), bins=24, density=True, color=ACCENT, alpha=0.6)
    middle.plot(grid, np.exp(-(grid**2) / 2) / np.sqrt(2 * np.pi), color=INK)
    middle.set(xlabel="Error / stated uncertainty", ylabel="Density", title="Is σ honest?")
    closing = contents.crossval_temperature
    right.plot(closing["left_out_k"], closing["depth_m"] / 1000, ".", color=SECOND, markersize=4)
    right.axvline(0.0, color=INK, linewidth=0.6)
    right.invert_yaxis()
    right.set(
        xlabel="Predicted less formation (K)", ylabel="Depth (km)",
        title="Temperature, well left out",
    )
    return Picture("validation", "Wells left out of their own prediction", as_data_uri(figure))
