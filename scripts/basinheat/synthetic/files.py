"""Write the invented basin's files and the config that reads them."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pandas as pd

from basinheat.synthetic.geography import (
    CRS,
    EAST,
    NORTH,
    SOUTH,
    STATED_AT_SEA_LEVEL_DEGC,
    STATED_LAPSE_K_PER_KM,
    WEST,
    Geography,
)

# Its heat flow and its temperatures at 3 km are ordinary ones.
DEMO_SEED = 3

_CONFIG = """\
run: {run}
crs: {crs}
inputs:
  wells:
    - file: {folder}wells.csv
      crs: EPSG:4326
      columns: {{well: API, x: LONG, y: LAT, ground_elevation: GL_FT, datum_elevation: KB_FT,
                water_depth: WD_FT, total_depth: TD_FT}}
      units: {{ground_elevation: ft, datum_elevation: ft, water_depth: ft, total_depth: ft}}
      missing: ["NA", "-999.25"]
  readings:
    - file: {folder}readings.csv
      columns: {{well: API, depth: DEPTH_FT, temperature: BHT_F, kind: SOURCE,
                since_circulation: TSC_H, circulation: CIRC_H, hole_diameter: BIT_IN,
                mud_temperature: MUD_F, date: LOGGED, log_run: RUN}}
      units: {{depth: ft, temperature: degF, hole_diameter: in, mud_temperature: degF}}
      kinds: {{LOG: bht, DST: dst, STATIC: equilibrium}}
      missing: ["NA", "-999.25"]
  layers:
    - file: {folder}layers.csv
      columns: {{well: API, top: TOP_FT, base: BASE_FT, lithology: LITH, porosity: PHI,
                conductivity: COND_WMK}}
      units: {{top: ft, base: ft}}
  surveys:
    - file: {folder}surveys.csv
      columns: {{well: API, depth: DEPTH_FT, inclination: INCL, azimuth: AZIM}}
      units: {{depth: ft}}
  rasters: {{elevation: {folder}topography.tif, bathymetry: {folder}topography.tif}}
surface_temperature:
  model: linear
  at_sea_level_degc: {sea_level}
  lapse_k_per_km: {lapse}
  std_k: 1.5
conductivity:
  lithologies: {{salt: halite}}
maps:
  cell_size_m: {cell_size_m}
  mask: {{max_distance_km: 20}}
  depths_m: {depths_m}
  isotherms_degc: {isotherms_degc}
"""


def config_text(
    run: str = "tarnholm",
    folder: str = "",
    cell_size_m: int = 2000,
    depths_m: tuple[int, ...] = (1000, 2000, 3000),
    isotherms_degc: tuple[int, ...] = (100, 150),
) -> str:
    """Return the config of an invented basin.

    Parameters
    ----------
    run : str
        Name of the run.
    folder : str
        Folder of the CSV files seen from the config, "" or ending in a slash.
    cell_size_m : int, m
        Cells of the maps.
    depths_m, isotherms_degc : tuple of int
        What is mapped.

    Returns
    -------
    str
        YAML.
    """
    return _CONFIG.format(
        run=run,
        crs=CRS,
        folder=folder,
        sea_level=STATED_AT_SEA_LEVEL_DEGC,
        lapse=STATED_LAPSE_K_PER_KM,
        cell_size_m=cell_size_m,
        depths_m=list(depths_m),
        isotherms_degc=list(isotherms_degc),
    )


def write(tables: dict[str, pd.DataFrame], dirt: pd.DataFrame, folder: Path) -> None:
    """Write the tables and the list of spoiled rows as CSV, UTF-8, in a folder made if absent."""
    folder.mkdir(parents=True, exist_ok=True)
    for name, table in {**tables, "dirt": dirt}.items():
        table.to_csv(folder / f"{name}.csv", index=False, lineterminator="\n", encoding="utf-8")


def write_topography(geography: Geography, folder: Path) -> None:
    """Write topography.tif: ground above sea level, the sea floor negative, in whole metres.

    It covers the basin and 50 km around it, in cells of 2 km.
    """
    import rasterio
    from rasterio import Affine

    cell, margin = 2_000.0, 50_000.0
    east = np.arange(WEST - margin + cell / 2, EAST + margin, cell)
    north = np.arange(NORTH + margin - cell / 2, SOUTH - margin, -cell)
    x, y = np.meshgrid(east, north)
    elevation = geography.elevation_m(x.ravel(), y.ravel()).reshape(x.shape)
    # A shore below half a metre is still land or sea.
    whole = np.where(elevation >= 0.0, np.maximum(np.round(elevation), 1.0), np.round(elevation))
    whole = np.where(elevation < 0.0, np.minimum(whole, -1.0), whole)
    with rasterio.open(
        folder / "topography.tif",
        "w",
        driver="GTiff",
        dtype="int16",
        count=1,
        height=north.size,
        width=east.size,
        crs=CRS,
        transform=Affine(cell, 0.0, WEST - margin, 0.0, -cell, NORTH + margin),
        compress="deflate",
        predictor=2,
    ) as raster:
        raster.write(whole.astype(np.int16), 1)


def write_demo(folder: str | Path) -> None:
    """Write the demo's inputs: the basin of ``DEMO_SEED``, hard and dirty."""
    from basinheat.synthetic.basin import make_basin

    basin = make_basin(DEMO_SEED)
    write(basin.tables, basin.dirt, Path(folder))
    write_topography(basin.truth.geography, Path(folder))
