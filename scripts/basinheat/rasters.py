"""Values of a raster at points, whatever its CRS and resolution."""

from __future__ import annotations

from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from basinheat.errors import UserError

Array = NDArray[np.float64]


def sample(path: str | Path, crs: str, easting_m: Array, northing_m: Array) -> Array:
    """Interpolate a raster bilinearly at points given in another CRS.

    Parameters
    ----------
    path : str or Path
        A single-band raster that GDAL can read.
    crs : str
        CRS of the points.
    easting_m, northing_m : ndarray, shape (n,)
        Points.

    Returns
    -------
    ndarray, shape (n,)
        Values in the raster's own unit; NaN where the raster has none.

    Raises
    ------
    UserError
        When the raster can't be read or has no CRS.

    Notes
    -----
    A blank pixel among the four around a point is left out and the others share its weight, so a
    coast does not widen by a pixel. Only the window around the points is read.
    """
    import rasterio
    from pyproj import Transformer

    x, y = np.asarray(easting_m, float), np.asarray(northing_m, float)
    try:
        source = rasterio.open(path)
    except rasterio.errors.RasterioIOError as fault:
        raise UserError(f"{path}: not a raster that can be read ({fault}).") from fault
    with source:
        if source.crs is None:
            raise UserError(f"{path}: the raster states no CRS. Write one into it (EPSG:...).")
        to_raster = Transformer.from_crs(crs, source.crs.to_wkt(), always_xy=True)
        x, y = (np.asarray(part) for part in to_raster.transform(x, y))
        pixel = ~source.transform
        column = pixel.a * x + pixel.b * y + pixel.c
        row = pixel.d * x + pixel.e * y + pixel.f
        values, first_row, first_column = _window(source, row, column)
    return bilinear(values, row - 0.5 - first_row, column - 0.5 - first_column)


def bilinear(values: Array, row: Array, column: Array) -> Array:
    """Interpolate a grid at fractional positions, 0 being the centre of the first pixel.

    Parameters
    ----------
    values : ndarray, shape (rows, columns)
        Grid, NaN where blank.
    row, column : ndarray, shape (n,)
        Positions; the outer half pixel takes the value of the edge.

    Returns
    -------
    ndarray, shape (n,)
        Values, NaN outside the grid and where all four pixels are blank.
    """
    rows, columns = values.shape
    with np.errstate(invalid="ignore"):
        inside = (row >= -0.5) & (row <= rows - 0.5) & (column >= -0.5) & (column <= columns - 0.5)
    r = np.clip(np.where(inside, row, 0.0), 0.0, rows - 1.0)
    c = np.clip(np.where(inside, column, 0.0), 0.0, columns - 1.0)
    r0, c0 = np.floor(r).astype(int), np.floor(c).astype(int)
    total, weights = np.zeros(r.shape), np.zeros(r.shape)
    for dr in (0, 1):
        for dc in (0, 1):
            pixel = values[np.minimum(r0 + dr, rows - 1), np.minimum(c0 + dc, columns - 1)]
            weight = np.abs(1 - dr - (r - r0)) * np.abs(1 - dc - (c - c0)) * np.isfinite(pixel)
            total += weight * np.where(np.isfinite(pixel), pixel, 0.0)
            weights += weight
    with np.errstate(invalid="ignore", divide="ignore"):
        return np.where(inside & (weights > 1e-9), total / weights, np.nan)


def _window(source, row: Array, column: Array) -> tuple[Array, int, int]:
    """Read the part of the raster around the points: values, its first row and column."""
    finite = np.isfinite(row) & np.isfinite(column)
    if not finite.any():
        return np.full((1, 1), np.nan), 0, 0
    first_row = int(np.clip(np.floor(row[finite].min()) - 2, 0, source.height - 1))
    last_row = int(np.clip(np.ceil(row[finite].max()) + 2, first_row + 1, source.height))
    first_column = int(np.clip(np.floor(column[finite].min()) - 2, 0, source.width - 1))
    last_column = int(np.clip(np.ceil(column[finite].max()) + 2, first_column + 1, source.width))
    band = source.read(
        1, window=((first_row, last_row), (first_column, last_column)), masked=True
    ).astype(float)
    values = np.asarray(band.filled(np.nan)) * source.scales[0] + source.offsets[0]
    return values, first_row, first_column
