"""Maps as Cloud-Optimised GeoTIFFs, one quantity and one band a file.

The bytes depend on the values, the grid and the words only: no date, host or path is written.
"""

from __future__ import annotations

import os
import shutil
from pathlib import Path
from typing import Any
from xml.sax.saxutils import escape

import numpy as np
import pandas as pd

from basinheat.delivery import cautions
from basinheat.delivery.metadata import (
    DEPTH_REFERENCE,
    PROGRAM,
    STATUS_CLASSES,
    STATUS_NODATA,
    VERSION,
    About,
    Quantity,
    quantity,
)
from basinheat.grid import Grid
from basinheat.tables.maps import STATUS

_LAYOUT = {"driver": "COG", "blocksize": 512, "compress": "DEFLATE", "bigtiff": "IF_SAFER"}
_VALUES = {
    **_LAYOUT,
    "dtype": "float32",
    "nodata": np.nan,
    "predictor": "FLOATING_POINT",
    "overview_resampling": "AVERAGE",
}
_CLASSES = {
    **_LAYOUT,
    "dtype": "uint8",
    "nodata": STATUS_NODATA,
    "overview_resampling": "MODE",  # the mean of two classes is a third one
}


def write_all(maps: pd.DataFrame, grid: Grid, folder: str | Path, about: About) -> list[Path]:
    """Write one raster per map, the folder whole or not at all.

    Parameters
    ----------
    maps : DataFrame
        ``tables.Maps``: every column but ``row`` and ``col`` is a raster, named as the column.
    grid : Grid
        Grid of the cells; cells without a row are blank.
    folder : str or Path
        Written anew: what lay there is replaced.
    about : About
        What each file says of itself.

    Returns
    -------
    list of Path
        The rasters, by name.
    """
    folder = Path(folder)
    part = folder.with_name(f"{folder.name}.part")
    shutil.rmtree(part, ignore_errors=True)
    part.mkdir(parents=True)
    names = sorted(maps.columns.drop(["row", "col"]))
    for name in names:
        what = quantity(name, about)
        write = write_classes if what.is_status else write_values
        write(part / f"{name}.tif", maps, grid, what, about)
    shutil.rmtree(folder, ignore_errors=True)
    os.replace(part, folder)
    return [folder / f"{name}.tif" for name in names]


def write_values(path: Path, maps: pd.DataFrame, grid: Grid, what: Quantity, about: About) -> None:
    """Write one map of numbers: float32, blank where NaN, statistics of the values inside."""
    field = grid.array(maps, maps[what.name]).astype(np.float32)
    statistics = "YES" if np.isfinite(field).any() else "NO"
    with _created(path, grid, {**_VALUES, "statistics": statistics}) as raster:
        raster.write(field, 1)
        _describe(raster, what, about)
        if what.unit:
            raster.units = (what.unit,)


def write_classes(path: Path, maps: pd.DataFrame, grid: Grid, what: Quantity, about: About) -> None:
    """Write one map of classes: uint8 with colours, and the classes' names beside it.

    A TIFF has no place for names of classes. They go to ``<name>.tif.aux.xml``, which GDAL and the
    programs built on it read by themselves, and into tags of the raster.
    """
    field = grid.array(maps, maps[what.name])
    codes = np.where(np.isnan(field), STATUS["no_basis"], field).astype(np.uint8)
    with _created(path, grid, _CLASSES) as raster:
        raster.write(codes, 1)
        _describe(raster, what, about)
        raster.update_tags(
            **{f"class_{one.code}": f"{one.name}: {one.meaning}" for one in STATUS_CLASSES}
        )
        raster.write_colormap(1, {one.code: one.colour for one in STATUS_CLASSES})
    names = "".join(f"      <Category>{escape(one.name)}</Category>\n" for one in STATUS_CLASSES)
    path.with_name(f"{path.name}.aux.xml").write_text(
        '<PAMDataset>\n  <PAMRasterBand band="1">\n    <CategoryNames>\n'
        f"{names}    </CategoryNames>\n  </PAMRasterBand>\n</PAMDataset>\n",
        encoding="utf-8",
    )


def tags(what: Quantity, about: About) -> dict[str, str]:
    """Return what a raster says of itself."""
    return {
        "quantity": what.name,
        "title": what.title,
        "description": what.description,
        "unit": what.unit or "none",
        "run": about.run,
        "scenario": about.scenario,
        "method": ", then ".join(about.methods),
        "depth_reference": DEPTH_REFERENCE,
        "program": f"{PROGRAM} {VERSION}",
        "credits": about.credits,
        "caution": cautions.SHORT,
    }


def _created(path: Path, grid: Grid, layout: dict[str, Any]) -> Any:
    import rasterio

    shape = {"width": grid.cols, "height": grid.rows, "count": 1}
    return rasterio.open(path, "w", crs=grid.crs, transform=grid.transform, **shape, **layout)


def _describe(raster: Any, what: Quantity, about: About) -> None:
    raster.set_band_description(1, what.label)
    raster.update_tags(**{key: text for key, text in tags(what, about).items() if text})
