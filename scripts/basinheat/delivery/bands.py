"""Maps that are too large to be held, written to GeoTIFFs band after band."""

from __future__ import annotations

import os
from collections.abc import Iterable
from pathlib import Path
from typing import Any

import numpy as np

from basinheat.geostat.bands import ROWS
from basinheat.geostat.prediction import Prediction
from basinheat.grid import Grid

_LAYOUT = {
    "driver": "GTiff",
    "dtype": "float32",
    "count": 1,
    "nodata": np.nan,
    "tiled": True,
    "blockxsize": ROWS,
    "blockysize": ROWS,
    "bigtiff": "IF_SAFER",
}
_CACHE_MB = 32  # of blocks that GDAL holds back: by default a share of all memory


def write_bands(
    bands: Iterable[tuple[int, Prediction]], grid: Grid, value: str | Path, std: str | Path
) -> None:
    """Write the mean and the standard uncertainty of kriged bands, both files or none.

    Parameters
    ----------
    bands : iterable of (int, Prediction)
        First row and cells of each band (``geostat.bands.predict_bands``).
    grid : Grid
    value, std : str or Path
        GeoTIFFs, one band of 32-bit numbers each, not compressed.
    """
    import rasterio

    parts = [Path(f"{path}.part") for path in (value, std)]
    layout: dict[str, Any] = {
        **_LAYOUT,
        "height": grid.rows,
        "width": grid.cols,
        "crs": grid.crs,
        "transform": grid.transform,
    }
    with (
        rasterio.Env(GDAL_CACHEMAX=_CACHE_MB),
        rasterio.open(parts[0], "w", **layout) as means,
        rasterio.open(parts[1], "w", **layout) as stds,
    ):
        for row, band in bands:
            window = rasterio.windows.Window(0, row, grid.cols, len(band.mean) // grid.cols)
            for file, array in ((means, band.mean), (stds, np.sqrt(band.variance))):
                file.write(array.astype("float32").reshape(-1, grid.cols), 1, window=window)
    for part, path in zip(parts, (value, std), strict=True):
        os.replace(part, path)
