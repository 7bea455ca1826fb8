"""The grid and its cells: snapping, mask, terrain and what is refused."""

import json
from types import SimpleNamespace

import numpy as np
import pandas as pd
import pytest
import rasterio
import shapely
from pyogrio.raw import write as write_layer

from basinheat import extent, tables, terrain
from basinheat import grid as grids
from basinheat.errors import UserError
from basinheat.grid import Grid
from basinheat.settings.inputs import Rasters
from basinheat.settings.maps import Maps
from basinheat.settings.wells import ColumnSurface, LinearSurface

CRS = "EPSG:32631"
PLACES = [(500_120.0, 5_800_030.0), (520_900.0, 5_810_400.0), (541_000.0, 5_795_777.0)]


def _settings(maps=None, rasters=None, surface=None, holdout=(), crs=CRS):
    return SimpleNamespace(
        crs=crs,
        maps=Maps(**(maps or {})),
        inputs=SimpleNamespace(rasters=Rasters(**(rasters or {}))),
        surface_temperature=surface
        or LinearSurface(model="linear", at_sea_level_degc=12.0, lapse_k_per_km=6.0),
        validation=SimpleNamespace(holdout=list(holdout)),
    )


@pytest.fixture
def wells():
    """Three wells on land."""
    frame = pd.DataFrame(PLACES, columns=["easting_m", "northing_m"])
    frame = frame.assign(well=["a", "b", "c"], ground_elevation_m=[0.0, 100.0, 200.0])
    return tables.Wells.conform(frame.assign(water_depth_m=0.0, surface_temperature_degc=9.0))


@pytest.fixture
def readings():
    """Two readings in each well."""
    frame = pd.DataFrame({"well": list("aabbcc"), "depth_m": [900.0, 1100, 2000, 1500, 800, 3000]})
    return tables.Readings.conform(frame)


def _polygon_file(path, shape, crs=CRS):
    wkb = np.array([shapely.to_wkb(shape)], dtype=object)
    kind = {"geometry_type": shape.geom_type, "driver": "GPKG", "crs": crs}
    write_layer(path, wkb, [np.array([1])], ["n"], **kind)
    return str(path)


def _raster(path, values, transform, crs=CRS, **more):
    shape = {"height": values.shape[0], "width": values.shape[1], "count": 1}
    with rasterio.open(
        path, "w", driver="GTiff", dtype="float32", crs=crs, transform=transform, **shape, **more
    ) as target:
        target.write(values.astype(np.float32), 1)
    return str(path)


def test_edges_are_multiples_of_the_cell_size(wells, readings):
    """Whatever the wells, neighbouring maps of one cell size fit together."""
    grid, _ = grids.define(wells, readings, _settings({"cell_size_m": 700.0}))
    for edge in grid.bounds:
        assert abs(edge / 700.0 - round(edge / 700.0)) < 1e-9
    west, south, east, north = grid.bounds
    xs, ys = zip(*PLACES, strict=True)
    assert 0.0 <= min(xs) - 40_000.0 - west < 700.0
    assert 0.0 <= north - (max(ys) + 40_000.0) < 700.0
    assert west < min(xs) < max(xs) < east
    assert south < min(ys)


def test_a_box_at_multiples_stays_as_it_is():
    """No cell is added by rounding, even where the size has no exact binary form."""
    grid = Grid.around(CRS, (0.3, 0.6, 1.2, 1.5), 0.3)
    assert (grid.rows, grid.cols) == (3, 3)
    grid = Grid.around(CRS, (-2000.0, -1000.0, 1000.0, 3000.0), 1000.0)
    assert grid.bounds == (-2000.0, -1000.0, 1000.0, 3000.0)


def test_json_round_trip(tmp_path):
    """The file gives the same grid and plain numbers."""
    grid = Grid.around(CRS, (500_000.0, 5_800_000.0, 501_000.0, 5_802_000.0), 250.0)
    grid.to_json(tmp_path / "grid.json")
    assert Grid.from_json(tmp_path / "grid.json") == grid
    assert json.loads((tmp_path / "grid.json").read_text())["cell_size"] == 250.0


def test_cells_agree_with_transform_and_array(wells, readings):
    """Centre, row and column of a cell are one place; ``array`` puts values there."""
    grid, cells = grids.define(wells, readings, _settings())
    x, y = rasterio.transform.xy(grid.transform, cells["row"], cells["col"])
    np.testing.assert_allclose(x, cells["easting_m"])
    np.testing.assert_allclose(y, cells["northing_m"])
    spread = grid.array(cells, cells["easting_m"])
    assert np.isfinite(spread).sum() == len(cells)
    np.testing.assert_allclose(spread[np.isfinite(spread)], x)
    assert cells[["row", "col"]].apply(tuple, axis=1).is_monotonic_increasing


def test_mask_is_the_distance_to_the_nearest_well(wells, readings):
    """By brute force: the kept cells are those within the limit, with their true distance."""
    maps = {"cell_size_m": 2000.0, "mask": {"max_distance_km": 15.0}}
    grid, cells = grids.define(wells, readings, _settings(maps))
    east, north = np.meshgrid(*grid.centres)
    distance = np.min([np.hypot(east - x, north - y) for x, y in PLACES], axis=0)
    kept = grid.array(cells, cells["well_distance_m"])
    np.testing.assert_array_equal(np.isfinite(kept), distance <= 15_000.0)
    np.testing.assert_allclose(kept[np.isfinite(kept)], distance[distance <= 15_000.0])


def test_wells_without_use_support_no_map(wells, readings):
    """A well with no reading, or held out, neither stretches the map nor unmasks cells."""
    part = readings[readings["well"] != "c"]
    grid, cells = grids.define(wells, part, _settings())
    again, held = grids.define(wells, readings, _settings(holdout=["c"]))
    assert grid == again
    pd.testing.assert_frame_equal(cells, held)
    assert grid.bounds[2] < 541_000.0 + 40_000.0
    assert cells["deepest_reading_m"].unique().tolist() == [2000.0]


def test_deepest_reading_is_that_of_the_nearest_wells():
    """Of nine wells in a row the far end does not count at the near end."""
    x = 500_000.0 + 10_000.0 * np.arange(9)
    names = [f"w{i}" for i in range(9)]
    wells = tables.Wells.conform(
        pd.DataFrame({"well": names, "easting_m": x, "northing_m": 5.8e6, "water_depth_m": 0.0})
    )
    depths = [1000.0] * 8 + [5000.0]
    readings = tables.Readings.conform(pd.DataFrame({"well": names, "depth_m": depths}))
    _, cells = grids.define(wells, readings, _settings({"mask": {"max_distance_km": 5.0}}))
    cells = cells.sort_values("easting_m")
    assert cells["deepest_reading_m"].iloc[0] == 1000.0
    assert cells["deepest_reading_m"].iloc[-1] == 5000.0


def test_order_of_wells_does_not_matter(wells, readings):
    """Rows in another order give the same cells to the last bit."""
    one = grids.define(wells, readings, _settings())
    two = grids.define(wells.iloc[::-1], readings.iloc[::-1], _settings())
    assert one[0] == two[0]
    pd.testing.assert_frame_equal(tables.Cells.conform(one[1]), tables.Cells.conform(two[1]))


def test_mask_polygon_in_another_crs(tmp_path, wells, readings):
    """A box in degrees: cells are kept where their centre, taken to degrees, lies inside."""
    from pyproj import Transformer

    box = shapely.box(3.1, 52.3, 3.4, 52.5)
    path = _polygon_file(tmp_path / "m.gpkg", box, "EPSG:4326")
    maps = {"mask": {"polygon": path, "max_distance_km": 100.0}}
    grid, cells = grids.define(wells, readings, _settings(maps))
    east, north = np.meshgrid(*grid.centres)
    to_degrees = Transformer.from_crs(CRS, 4326, always_xy=True).transform
    lon, lat = to_degrees(east, north)
    inside = (lon > 3.1) & (lon < 3.4) & (lat > 52.3) & (lat < 52.5)
    kept = np.isfinite(grid.array(cells, cells["well_distance_m"]))
    np.testing.assert_array_equal(kept, inside)
    assert grid.rows < 30  # the rectangle is clipped to the mask


def test_extent_from_a_polygon_file(tmp_path, wells, readings):
    """Its rectangle, snapped outwards, and no mask."""
    triangle = shapely.Polygon([(500_500, 5_790_000), (530_000, 5_790_000), (510_000, 5_820_100)])
    path = _polygon_file(tmp_path / "e.gpkg", triangle)
    grid, cells = grids.define(wells, readings, _settings({"extent": path}))
    assert grid.bounds == (500_000.0, 5_790_000.0, 530_000.0, 5_821_000.0)
    assert len(cells) == grid.rows * grid.cols


def test_elevation_raster_of_a_plane_is_the_plane(tmp_path, wells, readings):
    """Bilinear interpolation keeps a plane, whatever the resolution of the raster."""
    west, north = 380_000.0, 5_950_000.0
    for size in (333.0, 2500.0):
        shape = (int(260_000 / size), int(310_000 / size))
        row, col = np.indices(shape)
        x, y = west + (col + 0.5) * size, north - (row + 0.5) * size
        plane = 300.0 + 0.001 * (x - 500_000.0) + 0.002 * (y - 5_800_000.0)
        transform = rasterio.transform.from_origin(west, north, size, size)
        path = _raster(tmp_path / f"{size:g}.tif", plane, transform)
        _, cells = grids.define(wells, readings, _settings(rasters={"elevation": path}))
        expected = (
            300.0
            + 0.001 * (cells["easting_m"] - 500_000.0)
            + 0.002 * (cells["northing_m"] - 5_800_000.0)
        )
        np.testing.assert_allclose(cells["elevation_m"], expected, atol=0.05)
        temperature = 12.0 - 6.0 * cells["elevation_m"] / 1000.0
        np.testing.assert_allclose(cells["surface_temperature_degc"], temperature)


def test_elevation_raster_in_degrees_with_nodata_and_scale(tmp_path, wells, readings):
    """Another CRS, decimetres and a hole: the hole is filled from the wells."""
    values = np.full((300, 400), 2500.0)
    values[:, :150] = -9999.0  # west of 2.5 degrees
    transform = rasterio.transform.from_origin(1.0, 54.0, 0.01, 0.01)
    path = _raster(tmp_path / "d.tif", values, transform, "EPSG:4326", nodata=-9999.0)
    with rasterio.open(path, "r+") as source:
        source.scales = (0.1,)
    grid, cells = grids.define(wells, readings, _settings(rasters={"elevation": path}))
    sampled = terrain.sample(grid, path, "inputs.rasters.elevation")
    assert np.isnan(sampled).any()
    np.testing.assert_allclose(sampled[np.isfinite(sampled)], 250.0, rtol=1e-6)
    assert cells["elevation_m"].notna().all()
    filled = cells["elevation_m"][cells["elevation_m"] < 249.0]
    assert filled.between(0.0, 200.0).all()


def test_elevation_between_wells(wells, readings):
    """Without a raster: at a well its own value nearly, nowhere outside the wells' range."""
    maps = {"cell_size_m": 100.0, "mask": {"max_distance_km": 1.0}}
    _, cells = grids.define(wells, readings, _settings(maps))
    assert cells["elevation_m"].between(0.0, 200.0).all()
    at_b = np.hypot(cells["easting_m"] - 520_900.0, cells["northing_m"] - 5_810_400.0)
    assert cells.loc[at_b.idxmin(), "elevation_m"] == pytest.approx(100.0, abs=0.1)


def test_inverse_distance_by_hand():
    """Two wells 1000 m and 2000 m away weigh 4 to 1; common practice, no source."""
    cells = pd.DataFrame({"easting_m": [0.0], "northing_m": [0.0]})
    wells = pd.DataFrame({"easting_m": [1000.0, -2000.0], "northing_m": 0.0, "v": [10.0, 20.0]})
    assert terrain.interpolate(cells, wells, "v", 100.0)[0] == pytest.approx((4 * 10 + 20) / 5)
    at_well = pd.DataFrame({"easting_m": [1000.0], "northing_m": [0.0]})
    assert np.isfinite(terrain.interpolate(at_well, wells, "v", 100.0)).all()


def test_sea_follows_the_nearest_well(wells, readings):
    """Cells nearest a well at sea are sea, with that well's water depth and floor temperature."""
    wells.loc[0, ["water_depth_m", "ground_elevation_m"]] = [80.0, -80.0]
    _, cells = grids.define(wells, readings, _settings())
    squared = [(cells["easting_m"] - x) ** 2 + (cells["northing_m"] - y) ** 2 for x, y in PLACES]
    nearest = np.argmin(squared, axis=0)
    np.testing.assert_allclose(cells["water_depth_m"], np.where(nearest == 0, 80.0, 0.0))
    sea = cells[nearest == 0]
    np.testing.assert_allclose(sea["elevation_m"], -80.0)
    assert (sea["surface_temperature_degc"] == 5.0).all()  # sea_floor_degc, shallow water
    assert cells[nearest != 0]["elevation_m"].between(100.0, 200.0).all()


def test_land_by_the_elevation_raster_is_land(tmp_path, wells, readings):
    """A raster that says 50 m above the sea overrules the nearest well's class."""
    wells.loc[0, "water_depth_m"] = 80.0
    transform = rasterio.transform.from_origin(3e5, 6e6, 5000.0, 5000.0)
    path = _raster(tmp_path / "e.tif", np.full((100, 100), 50.0), transform)
    _, cells = grids.define(wells, readings, _settings(rasters={"elevation": path}))
    assert (cells["water_depth_m"] == 0.0).all()


def test_bathymetry_raster_sets_sea_and_depth(tmp_path, wells, readings):
    """West of 520 km the floor is at -300 m, east of it is land."""
    values = np.full((100, 100), 40.0)
    values[:, :44] = -300.0  # up to 520 000
    transform = rasterio.transform.from_origin(3e5, 6e6, 5000.0, 5000.0)
    path = _raster(tmp_path / "b.tif", values, transform)
    _, cells = grids.define(wells, readings, _settings(rasters={"bathymetry": path}))
    far_west, far_east = cells["easting_m"] < 517_000, cells["easting_m"] > 523_000
    assert (cells["water_depth_m"][far_west] == 300.0).all()
    assert (cells["elevation_m"][far_west] == -300.0).all()
    assert (cells["water_depth_m"][far_east] == 0.0).all()


def test_surface_temperature_from_the_wells_column(wells, readings):
    """The model ``column`` spreads the wells' own values over the cells."""
    column = ColumnSurface(model="column")
    _, cells = grids.define(wells, readings, _settings(surface=column))
    np.testing.assert_allclose(cells["surface_temperature_degc"], 9.0)


@pytest.mark.parametrize(
    ("crs", "word"),
    [
        ("EPSG:4326", "not projected"),
        ("EPSG:99999999", "no coordinate reference system"),
        ("nonsense", "no coordinate reference system"),
        ("EPSG:2277", "metres"),  # Texas Central, US survey feet
    ],
)
def test_crs_without_square_metres_is_refused(crs, word):
    """One line that names the CRS and the way out."""
    with pytest.raises(UserError, match=word) as caught:
        extent.check_crs(crs)
    assert crs in str(caught.value)
    assert len(caught.value.faults) == 1


def test_box_without_wells_is_refused(wells, readings):
    """The line shows both rectangles."""
    box = _settings({"extent": [0.0, 0.0, 10_000.0, 10_000.0]})
    with pytest.raises(UserError, match=r"maps\.extent: no well lies in \[0, 0, 10000, 10000\]"):
        grids.define(wells, readings, box)


def test_too_many_cells_are_refused_before_memory_is_taken(wells, readings):
    """A cell size in kilometres, say."""
    with pytest.raises(UserError, match=r"maps\.cell_size_m: 1 m gives"):
        grids.define(wells, readings, _settings({"cell_size_m": 1.0}))


def test_no_reading_is_refused(wells):
    """Nothing to map."""
    with pytest.raises(UserError, match="nothing to map"):
        grids.define(wells, tables.Readings.empty(), _settings())


def test_polygon_faults_are_lines(tmp_path, wells, readings):
    """Absent, unreadable, without polygon, without CRS, far away: each names setting and file."""
    (tmp_path / "text.gpkg").write_text("no database")
    line = shapely.LineString([(5e5, 5.8e6), (5.1e5, 5.8e6)])
    far = shapely.box(0.0, 0.0, 1000.0, 1000.0)
    cases = {
        str(tmp_path / "absent.gpkg"): "is not there",
        str(tmp_path / "text.gpkg"): "GDAL can read",
        _polygon_file(tmp_path / "line.gpkg", line): "no polygon",
        _polygon_file(tmp_path / "nocrs.gpkg", far, None): "no CRS",
        _polygon_file(tmp_path / "far.gpkg", far): "further than",
    }
    for path, word in cases.items():
        settings = _settings({"mask": {"polygon": path}})
        with pytest.raises(UserError, match=word) as caught:
            grids.define(wells, readings, settings)
        assert "maps.mask.polygon" in str(caught.value)


def test_raster_faults_are_lines(tmp_path, wells, readings):
    """Absent, unreadable, without CRS, elsewhere."""
    (tmp_path / "text.tif").write_text("no raster")
    here = rasterio.transform.from_origin(5e5, 5.8e6, 1000.0, 1000.0)
    away = rasterio.transform.from_origin(1e5, 1e6, 1000.0, 1000.0)
    cases = {
        str(tmp_path / "absent.tif"): "is not there",
        str(tmp_path / "text.tif"): "GDAL can read",
        _raster(tmp_path / "nocrs.tif", np.ones((3, 3)), here, None): "no CRS",
        _raster(tmp_path / "away.tif", np.ones((3, 3)), away): "no value anywhere",
    }
    for path, word in cases.items():
        with pytest.raises(UserError, match=word) as caught:
            grids.define(wells, readings, _settings(rasters={"elevation": path}))
        assert "inputs.rasters.elevation" in str(caught.value)
