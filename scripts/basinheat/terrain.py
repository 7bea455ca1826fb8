"""Elevation and water depth of the map cells, from rasters or from the wells themselves.

The rules, in order:

1. *Sea or land.* With a bathymetry raster, a cell is at sea where the raster has a value below 0.
   Without, a cell takes the class of its nearest well (at sea where ``water_depth_m`` > 0), except
   that a cell which the elevation raster puts above 0 m is land.
2. *Water depth* at sea: minus the bathymetry, or interpolated from the wells at sea; 0 on land.
3. *Elevation* at sea is minus the water depth (the sea floor). On land it is the elevation raster,
   and where that has no value, interpolated from the wells on land.

Interpolation from wells is by inverse squared distance of the ``NEIGHBOURS`` nearest wells that
have a value, distances below half a cell taken as half a cell (common practice, no source).
"""

from __future__ import annotations

import logging
from collections.abc import Iterator
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np
import pandas as pd

from basinheat.errors import UserError

if TYPE_CHECKING:
    from basinheat.grid import Grid
    from basinheat.settings.inputs import Rasters

NEIGHBOURS = 12
BATCH = 500_000  # cells queried at a time: bounds the memory of neighbour tables
BAND_CELLS = 4_000_000  # cells warped at a time

_log = logging.getLogger(__name__)


def describe(
    cells: pd.DataFrame, grid: Grid, wells: pd.DataFrame, rasters: Rasters
) -> pd.DataFrame:
    """Add elevation and water depth to cells; the rules stand in the module's docstring.

    Parameters
    ----------
    cells : DataFrame, (n,)
        Columns ``row, col, easting_m, northing_m``.
    grid : Grid
        Grid of the cells.
    wells : DataFrame
        ``tables.Wells``.
    rasters : Rasters
        ``inputs.rasters`` of the settings.

    Returns
    -------
    DataFrame, (n,)
        With ``elevation_m`` and ``water_depth_m``.
    """
    elevation = _sampled(cells, grid, rasters.elevation, "inputs.rasters.elevation")
    at_sea = wells["water_depth_m"].to_numpy() > 0.0
    if rasters.bathymetry is not None:
        floor = _sampled(cells, grid, rasters.bathymetry, "inputs.rasters.bathymetry")
        water = np.where(floor < 0.0, -floor, 0.0)
    else:
        sea = at_sea[_nearest(cells, wells)] & ~(elevation > 0.0)
        water = np.zeros(len(cells))
        water[sea] = interpolate(cells[sea], wells[at_sea], "water_depth_m", grid.cell_size)
    land_gap = (water == 0.0) & np.isnan(elevation)
    if rasters.elevation is not None and land_gap.any():
        _log.warning(
            "%s has no value at %d cells on land: taken from the wells",
            Path(rasters.elevation).name,
            land_gap.sum(),
        )
    on_land = wells[~at_sea] if (~at_sea).any() else wells
    elevation[land_gap] = interpolate(
        cells[land_gap], on_land, "ground_elevation_m", grid.cell_size
    )
    return cells.assign(elevation_m=np.where(water > 0.0, -water, elevation), water_depth_m=water)


def sample(grid: Grid, path: str, setting: str) -> np.ndarray:
    """Warp a raster onto the grid.

    Parameters
    ----------
    grid : Grid
        Target.
    path : str
        Any raster that GDAL reads; its first band, in any CRS and resolution.
    setting : str
        Name of the setting, for messages.

    Returns
    -------
    ndarray, (rows, cols)
        Bilinear at the cell centres (a finer raster is averaged with the same kernel, widened to
        the cell), NaN where the raster has no value.

    Raises
    ------
    UserError
        Missing or unreadable file, no CRS.
    """
    import rasterio
    from rasterio.enums import Resampling
    from rasterio.vrt import WarpedVRT
    from rasterio.windows import Window

    if not Path(path).is_file():
        raise UserError(f"{setting}: the file {path} is not there.")
    out = np.empty((grid.rows, grid.cols))
    band_rows = max(1, BAND_CELLS // grid.cols)
    try:
        with rasterio.open(path) as source:
            if source.crs is None:
                raise UserError(f"{setting}: {path} states no CRS. Save it with its CRS.")
            shape = {"transform": grid.transform, "width": grid.cols, "height": grid.rows}
            how = {"resampling": Resampling.bilinear, "dtype": "float64", "nodata": np.nan}
            with WarpedVRT(source, crs=grid.crs, **shape, **how) as warped:
                for row in range(0, grid.rows, band_rows):
                    rows = min(band_rows, grid.rows - row)
                    window = Window(0, row, grid.cols, rows)
                    out[row : row + rows] = warped.read(1, window=window)
            out = out * source.scales[0] + source.offsets[0]
    except rasterio.errors.RasterioIOError:
        raise UserError(f"{setting}: {path} is not a raster that GDAL can read.") from None
    return out


def interpolate(
    cells: pd.DataFrame, wells: pd.DataFrame, column: str, cell_size: float
) -> np.ndarray:
    """Interpolate a column of the wells by inverse squared distance.

    Parameters
    ----------
    cells : DataFrame, (n,)
        Columns ``easting_m``, ``northing_m``.
    wells : DataFrame
        Wells; those without a value in the column are passed over.
    column : str
        Column of ``wells``.
    cell_size : float
        m; distances below half of it count as half of it.

    Returns
    -------
    ndarray, (n,)
        0 where no well has a value.
    """
    known = wells[wells[column].notna()]
    out = np.zeros(len(cells))
    if known.empty or not len(cells):
        if len(cells):
            _log.warning("no well states %s: taken as 0 at %d cells", column, len(cells))
        return out
    values = known[column].to_numpy()
    tree = tree_of(known)
    centres = cells[["easting_m", "northing_m"]].to_numpy()
    order = [*range(1, min(NEIGHBOURS, len(known)) + 1)]
    for part in batches(len(cells)):
        distance, index = tree.query(centres[part], k=order)
        weight = 1.0 / np.maximum(distance, 0.5 * cell_size) ** 2
        out[part] = (weight * values[index]).sum(axis=1) / weight.sum(axis=1)
    return out


def tree_of(places: pd.DataFrame) -> Any:
    """Return a search tree over the columns ``easting_m`` and ``northing_m``."""
    from scipy.spatial import cKDTree

    return cKDTree(places[["easting_m", "northing_m"]].to_numpy())


def batches(count: int) -> Iterator[slice]:
    """Yield slices that cut a long table into parts of bounded memory."""
    for start in range(0, count, BATCH):
        yield slice(start, min(start + BATCH, count))


def _sampled(cells: pd.DataFrame, grid: Grid, path: str | None, setting: str) -> np.ndarray:
    if path is None:
        return np.full(len(cells), np.nan)
    values = sample(grid, path, setting)[cells["row"].to_numpy(), cells["col"].to_numpy()]
    if np.isnan(values).all():
        raise UserError(f"{setting}: {path} has no value anywhere on the map. Check its CRS.")
    return values


def _nearest(cells: pd.DataFrame, wells: pd.DataFrame) -> np.ndarray:
    """Return the position of each cell's nearest well."""
    tree = tree_of(wells)
    centres = cells[["easting_m", "northing_m"]].to_numpy()
    return np.concatenate([tree.query(centres[part])[1] for part in batches(len(cells))])
