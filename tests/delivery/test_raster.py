"""The rasters, opened as a GIS user would."""

import hashlib
import os
import subprocess
import sys

import numpy as np
import pytest
import rasterio
from rasterio.shutil import copy

from basinheat.delivery import cautions, raster
from basinheat.delivery.metadata import STATUS_CLASSES, STATUS_NODATA, About, quantity
from basinheat.grid import Grid
from basinheat.mapnames import raster_files
from basinheat.tables.maps import STATUS


@pytest.fixture(scope="module")
def folder(tmp_path_factory, maps, grid, about):
    """Write the rasters once."""
    path = tmp_path_factory.mktemp("delivery") / "rasters"
    raster.write_all(maps, grid, path, about)
    return path


def test_one_raster_a_quantity_and_nothing_else(folder, maps):
    """Each map is a file of its own; classes have their names beside them."""
    names = {f"{name}.tif" for name in maps.columns if name not in ("row", "col")}
    assert {path.name for path in folder.iterdir()} == names | {"status.tif.aux.xml"}
    assert not folder.with_name("rasters.part").exists()


def test_layout_is_cloud_optimised(folder):
    """The layout tag and internal tiles are what the COG driver of GDAL documents."""
    for path in folder.glob("*.tif"):
        with rasterio.open(path) as source:
            assert source.tags(ns="IMAGE_STRUCTURE")["LAYOUT"] == "COG"
            assert source.block_shapes == [(512, 512)]
            assert source.compression.name == "deflate"
            assert source.overviews(1) == [2]
            assert source.count == 1


def test_ifds_stand_before_the_pixels(folder):
    """COG (OGC 21-026): headers first, so that one request reads them all."""
    with open(folder / "heat_flow.tif", "rb") as file:
        start = file.read(4096)
    assert start[:4] in (b"II*\0", b"II+\0")
    assert b"LAYOUT=IFDS_BEFORE_DATA" in start[:300]


def test_georeference(folder, grid):
    """CRS, corner and cell size are the grid's, edges at multiples of the cell size."""
    with rasterio.open(folder / "gradient.tif") as source:
        assert source.crs.to_epsg() == 32631
        assert source.transform == grid.transform
        assert source.res == (1000.0, 1000.0)
        assert [edge % 1000.0 for edge in source.bounds] == [0.0] * 4
        assert source.tags()["AREA_OR_POINT"] == "Area"


def test_values_are_the_tables(folder, maps, grid):
    """Every cell with a row has its value in single precision, every other is blank."""
    with rasterio.open(folder / "temperature_2000m.tif") as source:
        field = source.read(1)
        assert source.dtypes == ("float32",)
        assert np.isnan(source.nodata)
        mask = source.read_masks(1)
    at = maps["row"].to_numpy(), maps["col"].to_numpy()
    np.testing.assert_array_equal(field[at], maps["temperature_2000m"].to_numpy(np.float32))
    assert np.isfinite(field).sum() == len(maps)
    assert (mask > 0).sum() == len(maps)


def test_sampling_a_place_gives_its_cell(folder, maps):
    """A coordinate inside a cell returns the value of its row and column."""
    row, col = maps.loc[1000, ["row", "col"]].astype(int)
    place = (500_000.0 + 1000.0 * col + 1.0, 5_800_000.0 - 1000.0 * row - 999.0)
    with rasterio.open(folder / "heat_flow.tif") as source:
        value = next(source.sample([place]))[0]
    assert value == np.float32(maps.loc[1000, "heat_flow"])


def test_statistics_are_stored_and_true(folder, maps):
    """Stored so that a GIS stretches colours at once; blanks do not count."""
    values = maps["heat_flow"].to_numpy(np.float32).astype(float)
    with rasterio.open(folder / "heat_flow.tif") as source:
        stored = source.tags(1)
    assert float(stored["STATISTICS_MINIMUM"]) == pytest.approx(values.min(), rel=1e-9)
    assert float(stored["STATISTICS_MAXIMUM"]) == pytest.approx(values.max(), rel=1e-9)
    assert float(stored["STATISTICS_MEAN"]) == pytest.approx(values.mean(), rel=1e-9)
    assert float(stored["STATISTICS_STDDEV"]) == pytest.approx(values.std(), rel=1e-7)


def test_overviews_are_means_that_pass_over_blanks(folder, maps, grid):
    """An overview pixel is the mean of the values among its four cells."""
    field = grid.array(maps, maps["heat_flow"])
    with rasterio.open(folder / "heat_flow.tif", overview_level=0) as source:
        half = source.read(1)
    four = field.reshape(350, 2, 300, 2).swapaxes(1, 2).reshape(350, 300, 4)
    known = np.isfinite(four).any(axis=2)
    np.testing.assert_array_equal(np.isfinite(half), known)
    np.testing.assert_allclose(half[known], np.nanmean(four[known], axis=1), rtol=1e-6)


def test_words(folder, about):
    """Title with unit, quantity, run, method, depth reference, credits and caution."""
    with rasterio.open(folder / "heat_flow.tif") as source:
        assert source.descriptions == ("Surface heat flow (mW/m²)",)
        assert source.units == ("mW/m²",)
        tags = source.tags()
    assert tags["run"] == "demo"
    assert tags["method"] == "equilibrium, then harrison1983"
    assert tags["caution"] == cautions.SHORT
    assert "sea floor" in tags["depth_reference"]
    assert tags["credits"] == about.credits


def test_status_classes(folder, maps, grid):
    """Bytes with colours and names; cells without a row are of class 0, not of no class."""
    with rasterio.open(folder / "status.tif") as source:
        codes, colours = source.read(1), source.colormap(1)
        assert source.dtypes == ("uint8",)
        assert source.nodata == STATUS_NODATA
        assert source.tags()["class_1"].startswith("interpolated")
        assert source.colorinterp[0].name == "palette"
    assert set(np.unique(codes)) == {0, 1, 2}
    assert (codes == STATUS["no_basis"]).sum() == grid.rows * grid.cols - len(maps)
    assert all(colours[one.code] == one.colour for one in STATUS_CLASSES)


def test_gdal_sees_the_names_of_the_classes(folder, tmp_path):
    """A copy to GDAL's own XML format carries them, so GDAL has read them."""
    copy(str(folder / "status.tif"), str(tmp_path / "status.vrt"), driver="VRT")
    text = (tmp_path / "status.vrt").read_text()
    assert [f"<Category>{one.name}</Category>" in text for one in STATUS_CLASSES] == [True] * 4


def test_map_without_any_value_is_written(folder):
    """An isotherm that no cell reaches is a blank map, not a failed run."""
    with rasterio.open(folder / "isotherm_400c.tif") as source:
        assert np.isnan(source.read(1)).all()
        assert "STATISTICS_MEAN" not in source.tags(1)


def test_the_folder_holds_what_the_rule_promises(folder, maps):
    names = maps.columns.drop(["row", "col"])
    assert sorted(path.name for path in folder.iterdir()) == sorted(raster_files(names))


def test_folder_is_replaced_whole(tmp_path, maps, grid, about):
    """A raster of an earlier config does not survive in the folder."""
    (tmp_path / "rasters").mkdir()
    (tmp_path / "rasters" / "temperature_9000m.tif").write_bytes(b"old")
    raster.write_all(maps[["row", "col", "gradient"]], grid, tmp_path / "rasters", about)
    assert [path.name for path in (tmp_path / "rasters").iterdir()] == ["gradient.tif"]


def test_bytes_depend_on_content_only(tmp_path):
    """Two processes with another folder, time zone, locale and user write the same bytes."""
    code = (
        "import sys, pandas as pd\n"
        "from basinheat.delivery import raster, metadata\n"
        "from basinheat.grid import Grid\n"
        "maps = pd.DataFrame({'row': [0, 1], 'col': [1, 1], 'gradient': [30., 31.],"
        " 'status': [1, 2]})\n"
        "grid = Grid('EPSG:32631', 0., 6000000., 1000., 2, 2)\n"
        "raster.write_all(maps, grid, sys.argv[1], metadata.About('demo'))\n"
    )
    digests = []
    for name, zone, threads in (("a", "UTC", "1"), ("much/longer", "Asia/Tokyo", "2")):
        place = tmp_path / name
        place.mkdir(parents=True)
        env = {**os.environ, "TZ": zone, "GDAL_NUM_THREADS": threads, "USER": name}
        env["PYTHONPATH"] = os.pathsep.join(sys.path)
        target = str(place / "rasters")
        subprocess.run([sys.executable, "-c", code, target], cwd=place, env=env, check=True)
        files = sorted((place / "rasters").iterdir())
        digests.append([(f.name, hashlib.sha256(f.read_bytes()).hexdigest()) for f in files])
    assert digests[0] == digests[1]
    assert len(digests[0]) == 3


@pytest.mark.parametrize(
    ("name", "label"),
    [
        ("gradient", "Mean geothermal gradient down to 1500 m (K/km)"),
        ("temperature_2500m", "Temperature at 2500 m (°C)"),
        ("temperature_2500m_std", "Temperature at 2500 m, standard uncertainty (K)"),
        ("temperature_2500m_q10", "Temperature at 2500 m, 10 % quantile (°C)"),
        ("temperature_2500m_prob_gt_100c", "Temperature at 2500 m: chance of more than 100 °C"),
        ("isotherm_120.5c", "Depth of 120.5 °C (m)"),
        ("isotherm_120c_std", "Depth of 120 °C, standard uncertainty (m)"),
        ("well_distance", "Distance to the nearest well (m)"),
    ],
)
def test_labels(name, label):
    """Every name that the design lists has a title and a unit."""
    assert quantity(name, About("demo", reference_depth_m=1500.0)).label == label


@pytest.mark.parametrize("name", ["", "row", "temperature_", "temperature_5m_mean", "heat_flows"])
def test_unknown_names_are_refused(name):
    """A column nobody described is not delivered in silence."""
    with pytest.raises(KeyError):
        quantity(name, About("demo"))


def test_a_lone_cell_is_a_map(tmp_path, maps):
    """One row, one column."""
    one = maps.head(1).assign(row=0, col=0)
    raster.write_all(one, Grid("EPSG:32631", 0.0, 0.0, 1e3, 1, 1), tmp_path / "r", About("demo"))
    with rasterio.open(tmp_path / "r" / "heat_flow.tif") as source:
        assert source.read(1)[0, 0] == np.float32(one["heat_flow"].iloc[0])
