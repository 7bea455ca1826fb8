"""Maps for the report: each value with its uncertainty beside it."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from basinheat.delivery import contours, style
from basinheat.delivery.metadata import Quantity, quantity
from basinheat.grid import NEAREST_WELLS
from basinheat.report import basis, captions
from basinheat.report.contents import Contents
from basinheat.report.draw import INK, WIDTH, Panel, Picture, as_panel, new_figure

if TYPE_CHECKING:
    from matplotlib.figure import Figure

KM = 1e-3
BLANK, CROSSES = "#eceff1", "#aab3ba"
PIXELS = 900  # of a map's longer side: more do not show
_MARGINS, _TOP, _BOTTOM = (0.72, 1.0), 0.32, 0.52  # inches around a map, the bar at its right
_YES = 0.5


def map_pictures(contents: Contents) -> list[Picture]:
    """Draw every mapped quantity beside its standard uncertainty."""
    ends = style.limits(contents.maps, contents.about)
    return [_pair(name, contents, ends) for name in basis.mapped(contents)]


def value_figure(name: str, contents: Contents, ends: dict[str, tuple[float, float]]) -> Figure:
    """Draw one column of the maps.

    Parameters
    ----------
    name : str
        Column: ``temperature_2000m``, ``temperature_2000m_std``, ...
    contents : Contents
        Of the report.
    ends : dict
        Family to the range of its colours (``style.limits``).
    """
    import matplotlib as mpl

    what = quantity(name, contents.about)
    stem = name.removesuffix("_std")
    figure, ax = _map(contents)
    low, high = ends[what.family]
    values = _thin(contents, contents.maps[name])
    image = _paint(
        ax, contents, values, mpl.colormaps[style.ramp(what.family)], vmin=low, vmax=high
    )
    _hatch(ax, contents, _thin(contents, basis.below_readings(stem, contents)) > _YES)
    if what.is_value:
        _contours(ax, contents, values, what, ends)
        _wells(ax, contents)
    beyond = _beyond(values, low, high)
    bar = figure.colorbar(image, cax=_bar_axes(figure, ax), extend=beyond)
    bar.set_label(f"{'σ' if name != stem else _symbol(what)} ({what.unit})")
    bar.outline.set_visible(False)
    title = quantity(stem, contents.about).title
    ax.set_title(title if name == stem else f"σ: {title[0].lower()}{title[1:]}")
    return figure


def trust_picture(contents: Contents) -> Picture:
    """Draw how deep readings go, and how far wells are."""
    maps = contents.maps
    deepest = max(maps["deepest_reading"].max(), 1.0)
    edges = [0.0, *(depth for depth in contents.depths_m if depth < deepest)]
    edges.append(float(np.ceil(deepest / 100.0) * 100.0))
    depth = _classes(
        contents, maps["deepest_reading"], edges, "viridis_r", "Deepest reading nearby (m)"
    )
    farthest = max(maps["well_distance"].max() * KM, 1e-3)
    size = contours.step(0.0, farthest, 5)
    steps = np.arange(np.ceil(farthest / size) + 1.0) * size
    distance = _classes(
        contents, maps["well_distance"] * KM, list(steps), "cividis", "Distance to a well (km)"
    )
    return Picture(
        "basis",
        "What the maps rest on",
        f"Left, the deepest reading among the {NEAREST_WELLS} nearest wells: a map deeper than "
        "that is carried down by the rock model, not tied to a measurement. Right, the distance to "
        "the nearest well. Crossed: no basis, all maps are blank.",
        [
            as_panel(depth, "Map of the deepest reading among the nearest wells"),
            as_panel(distance, "Map of the distance to the nearest well"),
        ],
    )


def _pair(name: str, contents: Contents, ends: dict[str, tuple[float, float]]) -> Picture:
    what = quantity(name, contents.about)
    panels: list[Panel] = [
        as_panel(
            value_figure(column, contents, ends), f"Map: {quantity(column, contents.about).label}"
        )
        for column in (name, f"{name}_std")
    ]
    return Picture(name, what.label, captions.of_map(what, contents.about), panels)


def _symbol(what: Quantity) -> str:
    return {"temperature": "Temperature", "isotherm": "Depth", "heat_flow": "Heat flow"}.get(
        what.family, "Gradient"
    )


def _map(contents: Contents) -> tuple[Figure, Any]:
    """Return a figure and axes in km that fit the grid."""
    west, south, east, north = (edge * KM for edge in contents.grid.bounds)
    shape = (north - south) / (east - west)
    width = WIDTH - sum(_MARGINS)
    height = float(np.clip(width * shape, 1.5, 6.0))
    figure = new_figure(height + _TOP + _BOTTOM)
    total = height + _TOP + _BOTTOM
    ax = figure.add_axes(
        (_MARGINS[0] / WIDTH, _BOTTOM / total, width / WIDTH, height / total), anchor="SW"
    )
    ax.set_facecolor(BLANK)
    ax.set(xlim=(west, east), ylim=(south, north), aspect="equal")
    ax.set(xlabel="Easting (km)", ylabel="Northing (km)")
    ax.locator_params(nbins=6)
    ax.ticklabel_format(useOffset=False, style="plain")
    ax.tick_params(length=3)
    return figure, ax


def _bar_axes(figure: Figure, ax: Any) -> Any:
    """Return axes for a colour bar at the right of a map."""
    ax.apply_aspect()
    place = ax.get_position()
    return figure.add_axes((place.x1 + 0.1 / WIDTH, place.y0, 0.13 / WIDTH, place.height))


def _beyond(values: np.ndarray, low: float, high: float) -> str:
    """Return at which ends of the colours some cells lie beyond."""
    under, over = np.nanmin(values) < low, np.nanmax(values) > high
    return {(1, 1): "both", (1, 0): "min", (0, 1): "max"}.get((int(under), int(over)), "neither")


def _stride(contents: Contents) -> int:
    return -(-max(contents.grid.rows, contents.grid.cols) // PIXELS)


def _thin(contents: Contents, values: Any) -> np.ndarray:
    """Spread values of cells over the grid, every n-th row and column of a large one."""
    stride = _stride(contents)
    return contents.grid.array(contents.maps, values)[::stride, ::stride]


def _axes(contents: Contents) -> tuple[np.ndarray, np.ndarray]:
    stride = _stride(contents)
    eastings, northings = contents.grid.centres
    return eastings[::stride] * KM, northings[::stride] * KM


def _paint(ax: Any, contents: Contents, values: np.ndarray, colours: Any, **scale: Any) -> Any:
    west, north = contents.grid.west * KM, contents.grid.north * KM
    step = _stride(contents) * contents.grid.cell_size * KM
    rows, cols = values.shape
    extent = (west, west + cols * step, north - rows * step, north)
    masked = np.ma.masked_invalid(values)
    window = ax.get_xlim(), ax.get_ylim()
    image = ax.imshow(
        masked, extent=extent, cmap=colours, interpolation="nearest", zorder=1, **scale
    )
    ax.set(xlim=window[0], ylim=window[1])
    _cross(ax, contents)
    return image


def _cross(ax: Any, contents: Contents) -> None:
    """Cross-hatch the cells without basis."""
    no_basis = np.isnan(_thin(contents, contents.maps["well_distance"]))
    _fill(ax, contents, no_basis, "xxx", CROSSES, 0.5)


def _hatch(ax: Any, contents: Contents, doubtful: np.ndarray) -> None:
    """Hatch what is extrapolated, in light over dark so that it shows on every colour."""
    _fill(ax, contents, doubtful, "//", INK, 1.6)
    _fill(ax, contents, doubtful, "//", "white", 0.8)


def _fill(
    ax: Any, contents: Contents, area: np.ndarray, hatch: str, colour: str, width: float
) -> None:
    if not area.any() or min(area.shape) < 2:
        return
    drawn = ax.contourf(
        *_axes(contents), area.astype(float), levels=[0.5, 1.5], colors="none", hatches=[hatch],
        zorder=2,
    )  # fmt: skip
    drawn.set_edgecolor(colour)
    drawn.set_linewidth(0.0)
    drawn.set_hatch_linewidth(width)


def _contours(
    ax: Any,
    contents: Contents,
    values: np.ndarray,
    what: Quantity,
    ends: dict[str, tuple[float, float]],
) -> None:
    """Draw labelled lines at round numbers, the same at all depths."""
    step = contours.step(*ends[what.family], wanted=8)
    finite = values[np.isfinite(values)]
    at = contours.levels(finite.min(), finite.max(), step)
    at = at[(at > finite.min()) & (at < finite.max())]
    if not at.size or min(values.shape) < 2:
        return
    east, north = _axes(contents)
    lines = ax.contour(
        east, north, np.ma.masked_invalid(values), levels=at, colors="white", linewidths=0.9,
        zorder=3,
    )  # fmt: skip
    labels = ax.clabel(lines, fmt="%g", fontsize=8.5, inline=True, inline_spacing=3)
    for label in labels:
        label.set(color=INK, zorder=5)
        label.set_bbox({"facecolor": "white", "edgecolor": "none", "pad": 0.8, "alpha": 0.85})


def _wells(ax: Any, contents: Contents) -> None:
    """Mark the wells in the maps by circles, those held out by triangles."""
    wells = contents.wells
    held = wells["well"].isin(contents.holdout)
    used = wells["well"].isin(contents.heat_flow["well"]) & ~held
    size = float(np.clip(60.0 / np.sqrt(max(used.sum(), 1)), 0.7, 3.0))
    for rows, marker, factor in ((used, "o", 1.0), (held, "^", 1.8)):
        ax.plot(
            wells.loc[rows, "easting_m"] * KM, wells.loc[rows, "northing_m"] * KM,
            linestyle="none", marker=marker, markersize=size * factor, markerfacecolor="white",
            markeredgecolor="black", markeredgewidth=0.6, zorder=4, scalex=False, scaley=False,
        )  # fmt: skip


def _classes(contents: Contents, values: Any, edges: list[float], ramp: str, label: str) -> Figure:
    """Draw values in classes, with wells."""
    import matplotlib as mpl
    from matplotlib.colors import BoundaryNorm, ListedColormap

    count = len(edges) - 1
    colours = ListedColormap(mpl.colormaps[ramp](np.linspace(0.08, 0.92, count)))
    figure, ax = _map(contents)
    image = _paint(ax, contents, _thin(contents, values), colours, norm=BoundaryNorm(edges, count))
    _wells(ax, contents)
    bar = figure.colorbar(image, cax=_bar_axes(figure, ax), spacing="uniform")
    bar.set_label(label)
    bar.set_ticks(edges)
    bar.ax.set_yticklabels([f"{edge + 0.0:,.6g}" for edge in edges])
    bar.outline.set_visible(False)
    ax.set_title(label.split(" (")[0])
    return figure
