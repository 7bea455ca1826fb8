"""Maps for the report: each value with its uncertainty beside it."""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Any

import numpy as np

from basinheat.delivery import style
from basinheat.delivery.metadata import quantity
from basinheat.report.contents import Contents
from basinheat.report.draw import INK, as_data_uri, new_figure

KM = 1e-3
BLANK = "#e6e9ec"


@dataclass(frozen=True)
class Picture:
    """A picture of the page: name, caption and image as a data URI."""

    name: str
    caption: str
    image: str


def map_pictures(contents: Contents) -> list[Picture]:
    """Draw every mapped quantity beside its standard uncertainty."""
    limits = style.limits(contents.maps, contents.about)
    names = [
        name
        for name in contents.maps.columns
        if f"{name}_std" in contents.maps and contents.maps[name].notna().any()
    ]
    names.sort(key=_order)
    return [_pair(name, contents, limits) for name in names]


def _order(name: str) -> tuple[int, float]:
    families = ["heat_flow", "gradient", "temperature", "isotherm"]
    family = next(i for i, stem in enumerate(families) if name.startswith(stem))
    number = re.search(r"-?\d+(\.\d+)?", name)
    return family, float(number.group()) if number else 0.0


def _pair(name: str, contents: Contents, limits: dict[str, tuple[float, float]]) -> Picture:
    figure = new_figure(10.4, 4.5)
    axes = figure.subplots(1, 2, sharey=True)
    for ax, column in zip(axes, (name, f"{name}_std"), strict=True):
        what = quantity(column, contents.about)
        values = contents.grid.array(contents.maps, contents.maps[column])
        image = _show(ax, contents, values, what.family, limits.get(what.family))
        _hatch(ax, contents, _doubtful(name, contents))
        bar = figure.colorbar(image, ax=ax, shrink=0.86, pad=0.02)
        bar.set_label(what.unit)
        bar.outline.set_visible(False)
        ax.set_title(what.title[0].upper() + what.title[1:] if column == name else
                     "Standard uncertainty")
        ax.set_xlabel("Easting (km)")
    _wells(axes[0], contents)
    axes[0].set_ylabel("Northing (km)")
    return Picture(name, quantity(name, contents.about).label, as_data_uri(figure))


def _show(
    ax: Any, contents: Contents, values: np.ndarray, family: str, ends: tuple[float, float] | None
) -> Any:
    import matplotlib as mpl

    west, south, east, north = (edge * KM for edge in contents.grid.bounds)
    low, high = ends or (None, None)
    ax.set_facecolor(BLANK)
    colours = mpl.colormaps[style.ramp(family)]
    return ax.imshow(
        np.ma.masked_invalid(values),
        extent=(west, east, south, north),
        cmap=colours,
        vmin=low,
        vmax=high,
        interpolation="nearest",
        zorder=1,
    )


def _doubtful(name: str, contents: Contents) -> np.ndarray:
    """Return the grid of cells carried down below every reading nearby, for this quantity."""
    maps = contents.maps
    match = re.fullmatch(r"temperature_(\d+(?:\.\d+)?)m", name)
    if match:
        below = maps["deepest_reading"] < float(match.group(1))
    elif name.startswith("isotherm_"):
        below = maps["deepest_reading"] < maps[name]
    else:
        below = maps["deepest_reading"] < 0.0
    return contents.grid.array(maps, below.astype(float)) > 0.5


def _hatch(ax: Any, contents: Contents, doubtful: np.ndarray) -> None:
    """Hatch what is extrapolated; cells without basis keep the blank colour, cross-hatched."""
    eastings, northings = (axis * KM for axis in contents.grid.centres)
    no_basis = np.isnan(contents.grid.array(contents.maps, contents.maps["well_distance"]))
    for area, hatch in ((doubtful, "///"), (no_basis, "xx")):
        if area.any() and min(area.shape) > 1:
            ax.contourf(
                eastings, northings, area.astype(float), levels=[0.5, 1.5], colors="none",
                hatches=[hatch], zorder=2,
            ).set_edgecolor("#8a949d" if hatch == "xx" else INK)


def _wells(ax: Any, contents: Contents) -> None:
    used = contents.wells["well"].isin(contents.heat_flow["well"])
    wells = contents.wells[used]
    ax.plot(
        wells["easting_m"] * KM, wells["northing_m"] * KM, linestyle="none", marker="o",
        markersize=2.6, markerfacecolor="white", markeredgecolor="black", markeredgewidth=0.5,
        zorder=3,
    )
    west, south, east, north = (edge * KM for edge in contents.grid.bounds)
    ax.set_xlim(west, east)
    ax.set_ylim(south, north)
