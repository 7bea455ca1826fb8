"""Where the map lies: its CRS, its rectangle and the polygons that bound it."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np
import pandas as pd

from basinheat.errors import UserError
from basinheat.projection import crs_fault

if TYPE_CHECKING:
    from basinheat.grid import Grid
    from basinheat.settings.maps import Maps

Bounds = tuple[float, float, float, float]
EDGE_PARTS = 200  # an edge straight in one CRS is a curve in another: 200 pieces follow it


def check_crs(crs: str) -> None:
    """Refuse a CRS in which a cell is not a square of metres.

    Raises
    ------
    UserError
        Unknown, geographic, or not in metres.
    """
    fault = crs_fault(crs, for_maps=True)
    if fault:
        raise UserError(f"crs: {fault}")


def find(wells: pd.DataFrame, maps: Maps, crs: str) -> tuple[Bounds, Any]:
    """Find the rectangle of the map and the polygon that masks it.

    The rectangle ``wells`` is that of the wells, widened by the mask distance and clipped to the
    mask polygon. A polygon file given as ``maps.extent`` sets the rectangle only; what lies in the
    rectangle but outside ``maps.mask.polygon`` is blank.

    Parameters
    ----------
    wells : DataFrame
        Wells that support the map; columns ``easting_m``, ``northing_m``.
    maps : Maps
        The section ``maps`` of the settings.
    crs : str
        CRS of the map.

    Returns
    -------
    tuple
        West, south, east, north; m.
    shapely geometry or None
        Mask in the CRS of the map.
    """
    mask = maps.mask.polygon
    polygon = read_polygon(mask, crs, "maps.mask.polygon") if mask else None
    if isinstance(maps.extent, list):
        bounds = tuple(maps.extent)
    elif maps.extent != "wells":
        bounds = read_polygon(maps.extent, crs, "maps.extent").bounds
    else:
        bounds = _around_wells(wells, 1000.0 * maps.mask.max_distance_km)
        bounds = bounds if polygon is None else _clip(bounds, polygon.bounds)
    _require_wells(wells, bounds, 1000.0 * maps.mask.max_distance_km)
    return bounds, polygon


def read_polygon(path: str, crs: str, setting: str) -> Any:
    """Read the union of a file's polygons.

    Parameters
    ----------
    path : str
        Any vector format that GDAL reads, with a CRS; its first layer is read.
    crs : str
        CRS of the map.
    setting : str
        Name of the setting, for messages.

    Returns
    -------
    shapely geometry
        In the CRS of the map.

    Raises
    ------
    UserError
        Missing or unreadable file, no CRS, no polygon, no area in the CRS of the map.
    """
    import shapely
    from pyogrio.errors import DataLayerError, DataSourceError
    from pyogrio.raw import read

    if not Path(path).is_file():
        raise UserError(f"{setting}: the file {path} is not there.")
    try:
        meta, _, wkb, _ = read(path, columns=[])
    except (DataSourceError, DataLayerError):
        raise UserError(f"{setting}: {path} is not a vector file that GDAL can read.") from None
    if not meta["crs"]:
        raise UserError(f"{setting}: {path} states no CRS. Save it with its CRS.")
    shapes = shapely.get_parts(shapely.from_wkb([shape for shape in wkb if shape is not None]))
    areas = shapes[np.isin(shapely.get_type_id(shapes), (3, 6))]  # polygon, multipolygon
    union = shapely.union_all(shapely.make_valid(_project(areas, meta["crs"], crs)))
    if union.is_empty or union.area == 0.0 or not np.isfinite(union.bounds).all():
        raise UserError(f"{setting}: {path} holds no polygon that has an area in {crs}.")
    return union


def rasterize(polygon: Any, grid: Grid) -> np.ndarray:
    """Return which cell centres lie inside the polygon, (rows, cols) of bool."""
    from rasterio.features import geometry_mask

    shape = (grid.rows, grid.cols)
    return geometry_mask([polygon], shape, grid.transform, invert=True, all_touched=False)


def _project(shapes: np.ndarray, source: str, target: str) -> np.ndarray:
    import shapely
    from pyproj import Transformer

    if not shapes.size:
        return shapes
    west, south, east, north = shapely.total_bounds(shapes)
    longest = max(east - west, north - south) / EDGE_PARTS
    move = Transformer.from_crs(source, target, always_xy=True).transform
    fine = shapely.segmentize(shapes, longest) if longest > 0 else shapes
    return shapely.transform(fine, lambda xy: np.column_stack(move(xy[:, 0], xy[:, 1])))


def _around_wells(wells: pd.DataFrame, margin_m: float) -> Bounds:
    places = wells[["easting_m", "northing_m"]].to_numpy()
    west, south = places.min(axis=0) - margin_m
    east, north = places.max(axis=0) + margin_m
    return west, south, east, north


def _clip(bounds: Bounds, to: Bounds) -> Bounds:
    west, south = max(bounds[0], to[0]), max(bounds[1], to[1])
    east, north = min(bounds[2], to[2]), min(bounds[3], to[3])
    if west >= east or south >= north:
        raise UserError(
            "maps.mask.polygon: it lies further than maps.mask.max_distance_km from every well. "
            "Check its CRS and that of the wells."
        )
    return west, south, east, north


def _require_wells(wells: pd.DataFrame, bounds: Bounds, margin_m: float) -> None:
    west, south, east, north = bounds
    inside = wells["easting_m"].between(west - margin_m, east + margin_m)
    inside &= wells["northing_m"].between(south - margin_m, north + margin_m)
    if not inside.any():
        places = wells[["easting_m", "northing_m"]]
        low, high = places.min().to_numpy(), places.max().to_numpy()
        raise UserError(
            f"maps.extent: no well lies in [{west:.0f}, {south:.0f}, {east:.0f}, {north:.0f}] or "
            f"near it; the wells lie in [{low[0]:.0f}, {low[1]:.0f}, {high[0]:.0f}, {high[1]:.0f}]."
            " Check the order (west, south, east, north) and the CRS."
        )
