"""Surface temperature of wells and cells."""

import numpy as np
import pandas as pd
import pytest

from basinheat import rasters, surface, tables
from basinheat.errors import UserError
from basinheat.settings.wells import (
    ColumnSurface,
    ConstantSurface,
    LinearSurface,
    RasterSurface,
)

CRS = "EPSG:32631"
LINEAR = LinearSurface(model="linear", at_sea_level_degc=12.5, lapse_k_per_km=6.0)


def _wells(**columns):
    n = len(next(iter(columns.values())))
    base = {
        "well": [f"W{i}" for i in range(n)],
        "easting_m": np.linspace(5e5, 5.1e5, n),
        "northing_m": np.full(n, 5.8e6),
        "ground_elevation_m": np.zeros(n),
        "water_depth_m": np.zeros(n),
    }
    return tables.Wells.conform(pd.DataFrame({**base, **columns}))


def _raster(path, crs, west, north, size, values):
    rasterio = pytest.importorskip("rasterio")
    with rasterio.open(
        path,
        "w",
        driver="GTiff",
        width=values.shape[1],
        height=values.shape[0],
        count=1,
        dtype="float64",
        crs=crs,
        transform=rasterio.transform.from_origin(west, north, size, size),
        nodata=-9999.0,
    ) as file:
        file.write(np.where(np.isnan(values), -9999.0, values), 1)
    return path


def test_linear_follows_the_ground_not_the_sea_floor():
    wells = _wells(ground_elevation_m=[0.0, 1000.0, -80.0], water_depth_m=[0.0, 0.0, 80.0])
    out = surface.at_wells(wells, LINEAR)
    assert out["surface_temperature_degc"].tolist() == pytest.approx([12.5, 6.5, 5.0])


def test_constant():
    settings = ConstantSurface(model="constant", temperature_degc=9.0)
    out = surface.at_wells(_wells(ground_elevation_m=[0.0, 900.0]), settings)
    assert out["surface_temperature_degc"].tolist() == [9.0, 9.0]


def test_own_and_shared_part_make_the_whole():
    out = surface.at_wells(_wells(water_depth_m=[0.0, 100.0]), LINEAR)
    own = out["surface_temperature_std_k"].to_numpy()
    assert np.hypot(own, LINEAR.shared_std_k) == pytest.approx(
        [LINEAR.std_k, LINEAR.sea_floor_std_k]
    )


def test_sea_floor_practice():
    """Practice of the Norwegian regulator (read): 5 degC, and -0.5 degC where water > 600 m."""
    found = surface.sea_floor(np.array([1.0, 300.0, 601.0, 3000.0]), 5.0, -0.5, 600.0)
    assert found == pytest.approx([5.0, 5.0, -0.5, -0.5])
    steps = surface.sea_floor(np.linspace(0.0, 1000.0, 501), 5.0, -0.5, 600.0)
    assert np.all(np.diff(steps) <= 0) and np.abs(np.diff(steps)).max() < 0.1


def test_unknown_elevation_is_the_median_with_the_spread():
    wells = _wells(ground_elevation_m=[100.0, 300.0, 800.0, np.nan])
    out = surface.at_wells(wells, LINEAR)
    assert out["surface_temperature_degc"].iloc[3] == pytest.approx(12.5 - 6.0 * 0.3)
    assert out["surface_temperature_std_k"].iloc[3] > out["surface_temperature_std_k"].iloc[0]
    assert out["flags"].tolist() == ["", "", "", "surface_elevation_assumed"]


def test_column_is_taken_as_given_and_blanks_are_refused():
    settings = ColumnSurface(model="column")
    wells = _wells(surface_temperature_degc=[8.0, 9.0])
    assert surface.at_wells(wells, settings)["surface_temperature_degc"].tolist() == [8.0, 9.0]
    wells.loc[1, "surface_temperature_degc"] = np.nan
    with pytest.raises(UserError, match=r"1 of 2 wells \(W1\)"):
        surface.at_wells(wells, settings)


def test_cells_lie_between_the_wells_of_a_column():
    settings = ColumnSurface(model="column")
    wells = surface.at_wells(_wells(surface_temperature_degc=[8.0, 10.0]), settings)
    cells = pd.DataFrame(
        {
            "easting_m": [5e5, 5.05e5],
            "northing_m": 5.8e6,
            "elevation_m": 0.0,
            "water_depth_m": 0.0,
        }
    )
    out = surface.at_cells(cells, settings, wells=wells)
    assert out["surface_temperature_degc"].tolist() == pytest.approx([8.0, 9.0], abs=1e-3)


def test_wells_and_cells_at_one_place_agree():
    wells = surface.at_wells(_wells(ground_elevation_m=[50.0, 700.0]), LINEAR)
    cells = wells.rename(columns={"ground_elevation_m": "elevation_m"})
    out = surface.at_cells(cells, LINEAR)
    assert out["surface_temperature_degc"].tolist() == pytest.approx(
        wells["surface_temperature_degc"].tolist()
    )


def test_raster_in_another_crs(tmp_path):
    """A plane in degrees is met at points given in metres."""
    pyproj = pytest.importorskip("pyproj")
    lon, lat = np.meshgrid(np.arange(2.505, 3.5, 0.01), np.arange(52.795, 51.8, -0.01))
    path = _raster(tmp_path / "t.tif", "EPSG:4326", 2.5, 52.8, 0.01, 2 * lon + 3 * (lat - 52))
    wells = _wells(ground_elevation_m=[0.0, 0.0, 0.0])
    out = surface.at_wells(wells, RasterSurface(model="raster"), path, CRS)
    to_degrees = pyproj.Transformer.from_crs(CRS, "EPSG:4326", always_xy=True)
    x, y = to_degrees.transform(wells["easting_m"].to_numpy(), wells["northing_m"].to_numpy())
    assert out["surface_temperature_degc"].to_numpy() == pytest.approx(2 * x + 3 * (y - 52))


def test_raster_that_does_not_cover_is_refused_for_wells_and_blank_for_cells(tmp_path):
    path = _raster(tmp_path / "t.tif", CRS, 4.99e5, 5.801e6, 500.0, np.full((4, 4), 9.0))
    settings = RasterSurface(model="raster")
    wells = _wells(ground_elevation_m=[0.0, 0.0])
    with pytest.raises(UserError, match=r"1 of 2 wells \(W1\)"):
        surface.at_wells(wells, settings, path, CRS)
    cells = wells.rename(columns={"ground_elevation_m": "elevation_m"})
    out = surface.at_cells(cells, settings, path, CRS)
    assert out["surface_temperature_degc"].to_numpy() == pytest.approx([9.0, np.nan], nan_ok=True)
    with pytest.raises(UserError, match=r"inputs\.rasters\.surface_temperature"):
        surface.at_wells(wells, settings, None, CRS)
    with pytest.raises(UserError, match="not a raster"):
        surface.at_wells(wells, settings, tmp_path / "absent.tif", CRS)


def test_bilinear_is_exact_on_planes_and_leaves_blanks_out():
    values = np.add.outer(2.0 * np.arange(4), 3.0 * np.arange(5))
    row, column = np.array([0.0, 1.25, 2.9]), np.array([0.5, 3.75, 0.0])
    assert rasters.bilinear(values, row, column) == pytest.approx(2 * row + 3 * column)
    values[1, 1] = np.nan
    assert rasters.bilinear(values, np.array([1.0]), np.array([1.5])) == pytest.approx([8.0])
    outside = rasters.bilinear(values, np.array([1.0, -0.6, 9.0]), np.array([1.0, 1.0, 1.0]))
    assert np.isnan(outside).all()
