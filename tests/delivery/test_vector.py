"""The GeoPackage, opened as a GIS user would."""

import hashlib
import os
import subprocess
import sys

import numpy as np
import pandas as pd
import pyogrio
import pytest
import shapely
from pyogrio.raw import read

from basinheat import tables
from basinheat.delivery import contours, vector
from basinheat.delivery.metadata import About


@pytest.fixture(scope="module")
def package(tmp_path_factory, grid, maps, wells, results, about):
    """Write the GeoPackage once."""
    path = tmp_path_factory.mktemp("delivery") / "demo.gpkg"
    vector.write(path, grid, maps, wells, about=about, **results)
    return path


def _table(path, layer):
    meta, _, wkb, fields = read(path, layer=layer)
    table = pd.DataFrame(dict(zip(meta["fields"], fields, strict=True)))
    return table, shapely.from_wkb(wkb), meta


def test_layers(package):
    """Wells, temperatures, rejects, and contours of each best estimate that has any."""
    layers = dict(pyogrio.list_layers(package))
    assert layers == {
        "wells": "Point",
        "temperatures": "Point",
        "rejected": "Point",
        "contours_gradient": "LineString",
        "contours_heat_flow": "LineString",
        "contours_isotherm_100c": "LineString",
        "contours_temperature_1000m": "LineString",
        "contours_temperature_2000m": "LineString",
    }
    assert [file.name for file in package.parent.iterdir()] == ["demo.gpkg"]


def test_every_layer_has_the_crs_of_the_map(package):
    """EPSG:32631 everywhere."""
    for layer, _ in pyogrio.list_layers(package):
        assert pyogrio.read_info(package, layer=layer)["crs"] == "EPSG:32631"


def test_wells_keep_their_names_places_and_results(package, wells, results):
    """Hostile names are text like any other; wells without a result have NULL, not 0."""
    table, points, _ = _table(package, "wells")
    table = table.assign(x=shapely.get_x(points), y=shapely.get_y(points)).set_index("well")
    assert set(table.index) == set(wells["well"])
    expected = wells.set_index("well").loc[table.index]
    np.testing.assert_array_equal(table["x"], expected["easting_m"])
    np.testing.assert_array_equal(table["y"], expected["northing_m"])
    flow = results["heat_flow"].set_index("well")["heat_flow_mw_m2"]
    np.testing.assert_array_equal(table["heat_flow_mw_m2"], flow.reindex(table.index))
    assert table["gradient_k_km"].notna().sum() == 2
    assert table["heat_flow_points"].notna().sum() == 2


def test_temperatures_lie_at_their_wells(package, results):
    """One point per row of the table."""
    table, points, _ = _table(package, "temperatures")
    assert len(table) == len(results["temperatures"])
    assert sorted(shapely.get_x(points)) == [600_000.0, 600_000.0, 601_000.0]


def test_rejects_without_a_place_are_kept(package, results):
    """Rows in = rows out; a well of no known place gives a row without geometry."""
    table, points, _ = _table(package, "rejected")
    assert len(table) == len(results["rejected"])
    without = table["well"][[point is None for point in points]]
    assert list(without) == ["of no known place"]


def test_contours_lie_on_their_value(package, maps, grid):
    """Halfway between two cells, a contour's value is the bilinear value of the map."""
    from scipy.interpolate import RegularGridInterpolator

    table, curves, meta = _table(package, "contours_heat_flow")
    east, north = grid.centres
    field = grid.array(maps, maps["heat_flow"])[::-1]
    surface = RegularGridInterpolator((north[::-1], east), field)
    for value, curve in zip(table["value"], curves, strict=True):
        x, y = shapely.get_coordinates(curve).T
        found = surface(np.column_stack([y, x]))
        found = found[np.isfinite(found)]  # beside a blank cell the interpolator has no value
        assert found.size > 0.9 * x.size or x.size < 50
        np.testing.assert_allclose(found, value, atol=0.02)
    assert meta["geometry_type"] == "LineString"
    assert shapely.is_valid(curves).all()


def test_contours_stand_at_round_numbers_and_never_cross_blanks(package, maps, grid):
    """Multiples of one step; the same step at both depths; no line through the hole."""
    steps = []
    for layer in ("contours_temperature_1000m", "contours_temperature_2000m"):
        table, curves, _ = _table(package, layer)
        found = np.unique(table["value"])
        steps += list(np.unique(np.round(np.diff(found), 9))) if len(found) > 1 else []
        hole = shapely.Point(900_000.0, 5_550_000.0).buffer(37_000.0)
        assert not shapely.intersects(curves, hole).any()
        assert all(label.endswith("°C") for label in table["label"])
    assert len(set(steps)) == 1
    assert np.allclose(found % steps[0], 0.0)


@pytest.mark.parametrize("size", [0.003, 1.0, 17.0, 9999.0, 3e6])
def test_steps_are_round_and_few(size):
    """At most ten intervals, at least four; a step is 1, 2, 2.5 or 5 times a power of ten."""
    step = contours.step(5.0, 5.0 + size)
    assert 4.0 <= size / step <= 10.0 + 1e-6
    assert round(step / 10 ** np.floor(np.log10(step) + 1e-9), 6) in (1.0, 2.0, 2.5, 5.0)


def test_flat_and_blank_maps_have_no_contours(tmp_path, grid, maps, wells, results, about):
    """A constant field or one without values is no fault."""
    flat = maps[["row", "col"]].assign(gradient=30.0, isotherm_100c=np.nan)
    vector.write(tmp_path / "flat.gpkg", grid, flat, wells, about=about, **results)
    layers = [name for name, _ in pyogrio.list_layers(tmp_path / "flat.gpkg")]
    assert layers == ["wells", "temperatures", "rejected"]


def test_empty_tables_are_empty_layers(tmp_path, grid, maps, wells, about):
    """No rejects, no temperatures: the layers are there all the same."""
    empty = {
        "temperatures": tables.Temperatures.empty(),
        "gradients": tables.Gradients.empty(),
        "heat_flow": tables.HeatFlow.empty(),
        "rejected": tables.Rejected.empty(),
    }
    vector.write(tmp_path / "e.gpkg", grid, maps[["row", "col"]], wells, about=about, **empty)
    assert pyogrio.read_info(tmp_path / "e.gpkg", layer="rejected")["features"] == 0
    assert pyogrio.read_info(tmp_path / "e.gpkg", layer="wells")["features"] == len(wells)
    assert "heat_flow_mw_m2" in pyogrio.read_info(tmp_path / "e.gpkg", layer="wells")["fields"]


def test_bytes_depend_on_content_only(tmp_path, grid, maps, wells, results):
    """Two processes with another folder, clock zone and threads write the same SQLite file."""
    for name, frame in {"maps": maps, "wells": wells, **results}.items():
        frame.to_pickle(tmp_path / f"{name}.pickle")
    grid.to_json(tmp_path / "grid.json")
    code = (
        "import sys, pandas as pd\n"
        "from basinheat.delivery import vector, metadata\n"
        "from basinheat.grid import Grid\n"
        "names = ['maps', 'wells', 'temperatures', 'gradients', 'heat_flow', 'rejected']\n"
        "tables = {name: pd.read_pickle(f'{sys.argv[1]}/{name}.pickle') for name in names}\n"
        "grid = Grid.from_json(f'{sys.argv[1]}/grid.json')\n"
        "vector.write(sys.argv[2], grid, about=metadata.About('demo'), **tables)\n"
    )
    digests = set()
    for name, zone, threads in (("a", "UTC", "1"), ("b", "Asia/Tokyo", "2")):
        place = tmp_path / name
        place.mkdir()
        env = {**os.environ, "TZ": zone, "GDAL_NUM_THREADS": threads}
        env["PYTHONPATH"] = os.pathsep.join(sys.path)
        target = str(place / f"{name}.gpkg")
        command = [sys.executable, "-c", code, str(tmp_path), target]
        subprocess.run(command, cwd=place, env=env, check=True)
        digests.add(hashlib.sha256((place / f"{name}.gpkg").read_bytes()).hexdigest())
    assert len(digests) == 1


def test_the_file_says_nothing_of_where_it_was_made(package):
    """No folder in the bytes."""
    assert str(package.parent).encode() not in package.read_bytes()
    assert b".part" not in package.read_bytes()


def test_range_and_step_are_common_to_all_depths(maps):
    """One family, one range: equal colours mean equal temperatures."""
    from basinheat.delivery import style

    limits = style.limits(maps, About("demo"))
    both = np.concatenate([maps["temperature_1000m"], maps["temperature_2000m"]])
    low, high = limits["temperature"]
    assert low <= np.percentile(maps["temperature_1000m"], 1)
    assert high >= np.percentile(maps["temperature_2000m"], 99)
    assert low <= np.median(both) <= high
    assert "status" not in limits


def test_ramps_are_matplotlibs_and_grow_lighter_or_darker_throughout():
    """Perceptually uniform: lightness (CIE L*) is monotone along every ramp.

    L* from linear sRGB luminance: IEC 61966-2-1 and CIE 15, from memory.
    """
    import matplotlib

    from basinheat.delivery import style

    for family in (*style._RAMPS, "heat_flow_std"):
        rgb = matplotlib.colormaps[style.ramp(family)](np.linspace(0, 1, 64))[:, :3]
        linear = np.where(rgb <= 0.04045, rgb / 12.92, ((rgb + 0.055) / 1.055) ** 2.4)
        luminance = linear @ [0.2126, 0.7152, 0.0722]
        lightness = 116.0 * np.cbrt(np.maximum(luminance, 0.008856)) - 16.0
        change = np.diff(lightness)
        assert (change > -1e-9).all() or (change < 1e-9).all(), family
