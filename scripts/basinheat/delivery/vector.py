"""Wells, temperatures, rejects and contours as one GeoPackage."""

from __future__ import annotations

import os
from pathlib import Path

import numpy as np
import pandas as pd

from basinheat import tables
from basinheat.delivery import contours, rejects, style
from basinheat.delivery.metadata import About, Quantity, quantity
from basinheat.grid import Grid

# GeoPackage stores when a layer changed: a fixed day, so that equal content gives equal bytes.
_FIXED_DATE = "2000-01-01T00:00:00.000Z"


def write(
    path: str | Path,
    grid: Grid,
    maps: pd.DataFrame,
    wells: pd.DataFrame,
    temperatures: pd.DataFrame,
    gradients: pd.DataFrame,
    heat_flow: pd.DataFrame,
    rejected: pd.DataFrame,
    about: About,
) -> None:
    """Write the GeoPackage, whole or not at all.

    Layers: ``wells`` (with heat flow and gradient), ``temperatures`` (at their wells),
    ``rejected`` (at the well where its place is known, else without a place), and
    ``contours_<quantity>`` for every best estimate that has a contour.

    Parameters
    ----------
    path : str or Path
        Written anew.
    grid, maps : Grid, DataFrame
        ``tables.Maps`` and its grid.
    wells, temperatures, gradients, heat_flow, rejected : DataFrame
        Their contracts in ``tables``; ``rejected`` is what ``rejects.join`` made
        of the ledgers.
    about : About
        Of the delivery.
    """
    path = Path(path)
    part = path.with_name(f"{path.stem}.part.gpkg")
    part.parent.mkdir(parents=True, exist_ok=True)
    part.unlink(missing_ok=True)
    _fix_date()
    places = wells.set_index("well")[["easting_m", "northing_m"]]
    merged = _wells(wells, gradients, heat_flow)
    _points(part, grid, "wells", "Wells with heat flow and gradient", merged, places)
    used = tables.Temperatures.conform(temperatures)
    _points(part, grid, "temperatures", "Formation temperatures", used, places)
    _points(
        part,
        grid,
        "rejected",
        "Refused or merged input rows and why",
        rejects.join(rejected),
        places,
    )
    steps = style.contour_steps(maps, about)
    for name in sorted(maps.columns.drop(["row", "col"])):
        what = quantity(name, about)
        if what.is_value and what.family in steps:
            _contours(part, grid, maps, what, steps[what.family])
    os.replace(part, path)


def _wells(wells: pd.DataFrame, gradients: pd.DataFrame, heat_flow: pd.DataFrame) -> pd.DataFrame:
    """Join what is known of each well; names that both results use get the result's name."""
    flow = heat_flow.rename(columns={"method": "heat_flow_method", "n_points": "heat_flow_points"})
    slope = gradients.rename(
        columns={
            "method": "gradient_methods",
            "n_points": "gradient_points",
            "top_m": "gradient_top_m",
            "base_m": "gradient_base_m",
            "intercept_degc": "gradient_intercept_degc",
        }
    )
    joined = wells.merge(flow, on="well", how="left", validate="1:1")
    return joined.merge(slope, on="well", how="left", validate="1:1").sort_values("well")


def _points(
    path: Path, grid: Grid, layer: str, title: str, frame: pd.DataFrame, places: pd.DataFrame
) -> None:
    import shapely

    at = places.reindex(frame["well"]).to_numpy(float)
    known = np.isfinite(at).all(axis=1)
    geometry = np.full(len(frame), None, dtype=object)
    geometry[known] = shapely.to_wkb(shapely.points(at[known]))
    _layer(path, grid, layer, title, "Point", geometry, frame)


def _contours(path: Path, grid: Grid, maps: pd.DataFrame, what: Quantity, step: float) -> None:
    import shapely

    field = grid.array(maps, maps[what.name])
    if np.isnan(field).all():
        return
    low, high = np.nanmin(field), np.nanmax(field)
    traced, at = contours.lines(field, *grid.centres, contours.levels(low, high, step))
    if not traced:
        return
    wkb = np.array([shapely.to_wkb(shapely.LineString(line)) for line in traced], dtype=object)
    frame = pd.DataFrame({"value": at, "label": [f"{value:g} {what.unit}" for value in at]})
    frame["major"] = (np.round(at / step).astype(int) % 5 == 0).astype(int)
    _layer(path, grid, f"contours_{what.name}", what.label, "LineString", wkb, frame)


def _layer(
    path: Path,
    grid: Grid,
    layer: str,
    title: str,
    geometry_type: str,
    geometry: np.ndarray,
    frame: pd.DataFrame,
) -> None:
    """Append one layer; NaN becomes NULL."""
    from pyogrio.raw import write as write_layer

    write_layer(
        path,
        geometry,
        [_field(frame[name]) for name in frame.columns],
        [str(name) for name in frame.columns],
        layer=layer,
        driver="GPKG",
        geometry_type=geometry_type,
        crs=grid.crs,
        append=path.exists(),
        layer_options={"DESCRIPTION": title, "GEOMETRY_NAME": "geom"},
    )


def _field(values: pd.Series) -> np.ndarray:
    array = values.to_numpy()
    if array.dtype.kind in "fiu":
        return array
    return values.astype(object).where(values.notna(), None).to_numpy(dtype=object)


def _fix_date() -> None:
    from pyogrio import set_gdal_config_options

    set_gdal_config_options({"OGR_CURRENT_DATE": _FIXED_DATE})
