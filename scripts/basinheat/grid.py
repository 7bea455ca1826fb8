"""The map grid, and the cells of it that have a basis."""

from __future__ import annotations

import json
import os
from dataclasses import asdict, dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np
import pandas as pd

from basinheat import extent, surface, tables, terrain
from basinheat.errors import UserError

if TYPE_CHECKING:
    from basinheat.settings.model import Settings

NEAREST_WELLS = 8  # common practice: the wells that a moving neighbourhood would use
CELLS_LIMIT = 200_000_000  # 800 MB a raster: beyond, the cell size is a slip of the pen


@dataclass(frozen=True)
class Grid:
    """A north-up grid of square cells, its edges at multiples of the cell size.

    Parameters
    ----------
    crs : str
        CRS as written in the config; projected, in metres.
    west, north : float
        Outer corner, m.
    cell_size : float
        Edge of a cell, m.
    rows, cols : int
        Row 0 is the northernmost, column 0 the westernmost.

    Examples
    --------
    >>> grid = Grid("EPSG:32631", 0.0, 300.0, 100.0, 3, 2)
    >>> grid.centres
    (array([ 50., 150.]), array([250., 150.,  50.]))
    >>> grid.bounds
    (0.0, 0.0, 200.0, 300.0)
    """

    crs: str
    west: float
    north: float
    cell_size: float
    rows: int
    cols: int

    @classmethod
    def around(cls, crs: str, bounds: tuple[float, ...], cell_size: float) -> Grid:
        """Return the smallest snapped grid that holds the bounds (west, south, east, north; m)."""
        lower = np.floor(np.array(bounds[:2]) / cell_size + 1e-9)
        upper = np.ceil(np.array(bounds[2:]) / cell_size - 1e-9)
        cols, rows = (int(number) for number in np.maximum(upper - lower, 1.0))
        west, north = float(lower[0] * cell_size), float((lower[1] + rows) * cell_size)
        return cls(crs, west, north, float(cell_size), rows, cols)

    @property
    def bounds(self) -> tuple[float, float, float, float]:
        """Return west, south, east, north; m."""
        east = self.west + self.cols * self.cell_size
        return self.west, self.north - self.rows * self.cell_size, east, self.north

    @property
    def centres(self) -> tuple[np.ndarray, np.ndarray]:
        """Return eastings by column (cols,) and northings by row (rows,) of the centres; m."""
        eastings = self.west + (np.arange(self.cols) + 0.5) * self.cell_size
        return eastings, self.north - (np.arange(self.rows) + 0.5) * self.cell_size

    @property
    def transform(self) -> Any:
        """Return the affine transform from (column, row) to (easting, northing)."""
        from affine import Affine

        return Affine(self.cell_size, 0.0, self.west, 0.0, -self.cell_size, self.north)

    def array(self, cells: pd.DataFrame, values: Any) -> np.ndarray:
        """Spread values of cells over the grid.

        Parameters
        ----------
        cells : DataFrame, (n,)
            With columns ``row`` and ``col``.
        values : array_like, (n,)
            One value a cell.

        Returns
        -------
        ndarray, (rows, cols)
            NaN where there is no cell.
        """
        spread = np.full((self.rows, self.cols), np.nan)
        spread[cells["row"].to_numpy(), cells["col"].to_numpy()] = np.asarray(values, float)
        return spread

    def to_json(self, path: str | Path) -> None:
        """Write the grid, whole or not at all."""
        part = Path(f"{path}.part")
        part.parent.mkdir(parents=True, exist_ok=True)
        part.write_text(json.dumps(asdict(self), indent=1, sort_keys=True) + "\n", "utf-8")
        os.replace(part, path)

    @classmethod
    def from_json(cls, path: str | Path) -> Grid:
        """Read a grid that ``to_json`` wrote."""
        return cls(**json.loads(Path(path).read_text("utf-8")))


def define(
    wells: pd.DataFrame,
    readings: pd.DataFrame,
    settings: Settings,
    published: pd.DataFrame | None = None,
) -> tuple[Grid, pd.DataFrame]:
    """Lay the grid, and describe the cells that have a basis.

    A cell has a basis where its centre lies inside ``maps.mask.polygon`` (if any) and within
    ``maps.mask.max_distance_km`` of a well that has a reading and is not held out
    (``validation.holdout``), or of a place of published heat flow: a well that tells no
    temperature supports no map.

    Parameters
    ----------
    wells : DataFrame
        ``tables.Wells``.
    readings : DataFrame
        ``tables.Readings``.
    settings : Settings
        The scenario's settings; used are ``crs, maps, inputs.rasters, surface_temperature`` and
        ``validation.holdout``.
    published : DataFrame, optional
        ``tables.HeatFlowPoints``.

    Returns
    -------
    Grid
        The whole rectangle.
    DataFrame
        ``tables.Cells``: one row per cell with a basis, by row and column.

    Raises
    ------
    UserError
        CRS not projected or not in metres, no well in the map's rectangle, empty polygon, raster
        that does not cover the map, too many cells, no cell with a basis.
    """
    extent.check_crs(settings.crs)
    basis = _with_readings(wells, readings, settings.validation.holdout)
    bounds, polygon = extent.find(basis, settings.maps, settings.crs)
    if published is not None and len(published):
        basis = pd.concat([basis, published.assign(deepest_m=0.0)], ignore_index=True)
    grid = Grid.around(settings.crs, bounds, settings.maps.cell_size_m)
    if grid.rows * grid.cols > CELLS_LIMIT:
        raise UserError(
            f"maps.cell_size_m: {grid.cell_size:g} m gives {grid.rows} x {grid.cols} cells, more "
            f"than {CELLS_LIMIT:.0e}. Take larger cells or a smaller maps.extent."
        )
    cells = _inside(grid, basis, polygon, 1000.0 * settings.maps.mask.max_distance_km)
    cells["deepest_reading_m"] = _deepest_nearby(cells, basis)
    cells = terrain.describe(cells, grid, wells, settings.inputs.rasters)
    raster = settings.inputs.rasters.surface_temperature
    cells = surface.at_cells(cells, settings.surface_temperature, raster, settings.crs, wells)
    return grid, tables.Cells.conform(cells)


def _with_readings(wells: pd.DataFrame, readings: pd.DataFrame, holdout: list[str]) -> pd.DataFrame:
    """Return the wells that support a map, with their deepest reading, by name."""
    deepest = readings.groupby("well")["depth_m"].max().rename("deepest_m")
    basis = wells[~wells["well"].isin(holdout)].merge(deepest, on="well", how="inner")
    if basis.empty:
        raise UserError(
            "no well has a usable reading, there is nothing to map. "
            "rejected.csv in the folder wells of the results says what was refused and why."
        )
    return basis.sort_values("well", ignore_index=True)


def _inside(grid: Grid, basis: pd.DataFrame, polygon: Any, farthest_m: float) -> pd.DataFrame:
    """Return row, column, centre and well distance of the cells with a basis, band by band."""
    tree = terrain.tree_of(basis)
    within = extent.rasterize(polygon, grid) if polygon is not None else None
    eastings, northings = grid.centres
    bands = []
    for row in range(grid.rows):
        cols = np.arange(grid.cols) if within is None else np.flatnonzero(within[row])
        centres = np.column_stack([eastings[cols], np.full(cols.size, northings[row])])
        distance = tree.query(centres)[0] if cols.size else np.empty(0)
        near = distance <= farthest_m
        bands.append((np.full(near.sum(), row), cols[near], distance[near]))
    rows, cols, distance = (np.concatenate(part) for part in zip(*bands, strict=True))
    if not rows.size:
        raise UserError(
            f"no cell of the map lies within maps.mask.max_distance_km ({farthest_m / 1000:g} km) "
            "of a well and inside the mask. Check maps.extent, maps.mask and the CRS of the wells."
        )
    return pd.DataFrame(
        {
            "row": rows,
            "col": cols,
            "easting_m": eastings[cols],
            "northing_m": northings[rows],
            "well_distance_m": distance,
        }
    )


def _deepest_nearby(cells: pd.DataFrame, basis: pd.DataFrame) -> np.ndarray:
    """Return the deepest reading among the nearest wells of each cell; m."""
    deepest = basis["deepest_m"].to_numpy()
    nearest = min(NEAREST_WELLS, len(basis))
    tree = terrain.tree_of(basis)
    centres = cells[["easting_m", "northing_m"]].to_numpy()
    out = np.empty(len(cells))
    for part in terrain.batches(len(cells)):
        _, index = tree.query(centres[part], k=[*range(1, nearest + 1)])
        out[part] = deepest[index].max(axis=1)
    return out
