"""Points of geographic files: layers, attributes as text, the CRS of the file."""

import json

import numpy as np
import pyogrio.raw
import pytest
import shapely

from basinheat.errors import UserError
from basinheat.readers import look, read_inputs
from basinheat.readers.inputs import no_crs
from basinheat.settings.inputs import ReadingsFile, WellsFile

PLACES = [(500000.123456789, 6000000.0), (510000.0, 6010000.25)]


def write(path, geometries=None, *, layer=None, crs="EPSG:32631", kind="Point", append=False):
    """Write two wells with a name and a total depth."""
    geometries = shapely.points(PLACES) if geometries is None else geometries
    pyogrio.raw.write(
        str(path),
        np.array(shapely.to_wkb(geometries), object),
        [np.array(["A", "B"], object), np.array([3000.0, np.nan])],
        ["well", "td"],
        layer=layer,
        driver={".gpkg": "GPKG", ".shp": "ESRI Shapefile"}.get(path.suffix, "GeoJSON"),
        geometry_type=kind,
        crs=crs,
        append=append,
    )
    return path


def wells(path, **spec):
    return read_inputs("wells", [WellsFile(file=path.name, **spec)], path.parent)


@pytest.mark.parametrize("suffix", [".gpkg", ".shp", ".geojson", ".json"])
def test_places_come_from_the_geometry(tmp_path, suffix):
    degrees = suffix.endswith("json")
    geometry = shapely.points([(3.5, 54.0), (4.0, 55.0)]) if degrees else None
    crs = "EPSG:4326" if degrees else "EPSG:32631"
    path = write(tmp_path / f"w{suffix}", geometry, crs=crs)
    table = wells(path, columns={"well": "well", "total_depth": "td"})
    expected = [[3.5, 54.0], [4.0, 55.0]] if degrees else [list(place) for place in PLACES]
    assert table.frame[["x", "y"]].to_numpy().tolist() == expected
    assert table.frame["total_depth"].tolist()[0] == 3000.0
    assert np.isnan(table.frame["total_depth"].tolist()[1])
    assert table.frame["crs_word"].tolist() == [crs] * 2
    assert table.frame["source_line"].tolist() == [1, 2]
    assert table.headers[0]["x"] == "x of the geometry"


def test_a_stated_crs_counts(tmp_path):
    path = write(tmp_path / "w.gpkg", crs="EPSG:4326")
    assert "crs_word" not in wells(path, crs="EPSG:32631").frame


def test_a_file_without_a_crs(tmp_path):
    path = write(tmp_path / "w.shp")
    path.with_suffix(".prj").unlink()
    with pytest.raises(UserError, match="state crs"):
        wells(path)
    assert len(wells(path, crs="EPSG:32631")) == 2
    head = look(path, WellsFile(file=""))
    assert no_crs(path, ReadingsFile(file=""), head) == "", "readings need no place"


def test_readings_of_a_geographic_file(tmp_path):
    path = write(tmp_path / "r.gpkg")
    spec = ReadingsFile(file="r.gpkg", columns={"well": "well", "depth": "td"})
    table = read_inputs("readings", [spec], path.parent)
    assert table.frame["depth"].tolist()[0] == 3000.0
    assert "x" not in table.frame


def test_layers(tmp_path):
    path = write(tmp_path / "w.gpkg", layer="boreholes")
    write(path, layer="seismic shots", append=True)
    assert len(wells(path, layer="boreholes")) == 2
    with pytest.raises(UserError, match='state layer, one of "boreholes", "seismic shots"'):
        wells(path)
    with pytest.raises(UserError, match='no layer "borehole"; it holds "boreholes"'):
        wells(path, layer="borehole")


@pytest.mark.parametrize("kind", ["Polygon", "MultiPoint", "LineString"])
def test_geometries_that_are_no_points(tmp_path, kind):
    shape = {
        "Polygon": shapely.Point(0, 0).buffer(1),
        "MultiPoint": shapely.MultiPoint([(0, 0)]),
        "LineString": shapely.LineString([(0, 0), (1, 1)]),
    }[kind]
    path = write(tmp_path / "w.gpkg", np.array([shape, shape]), kind=kind)
    with pytest.raises(UserError, match="only points"):
        wells(path)


def feature(geometry, **properties):
    return {"type": "Feature", "properties": properties, "geometry": geometry}


def test_points_mixed_with_others_and_with_nothing(tmp_path):
    point = {"type": "Point", "coordinates": [3.5, 54.0, 12.0]}
    line = {"type": "LineString", "coordinates": [[3, 54], [4, 55]]}
    empty = {"type": "Point", "coordinates": []}
    path = tmp_path / "w.geojson"

    def save(*geometries):
        features = [feature(each, well="A", x=1, y=2) for each in geometries]
        path.write_text(json.dumps({"type": "FeatureCollection", "features": features}))

    save(point, None, empty)
    frame = wells(path).frame
    assert frame["x"].tolist()[0] == 3.5, "the geometry counts, not the attribute"
    assert np.isnan(frame["x"].to_numpy()[1:]).all()
    save(point, line)
    with pytest.raises(UserError, match="1 of its geometries are no points"):
        wells(path)


@pytest.mark.parametrize("suffix", [".gpkg", ".shp", ".geojson"])
def test_files_that_are_none(tmp_path, suffix):
    path = tmp_path / f"w{suffix}"
    path.write_bytes(b"well,x,y\nA,1,2\n")
    with pytest.raises(UserError) as caught:
        wells(path)
    assert len(caught.value.faults) == 1 and path.name in caught.value.faults[0]


def test_marks_of_numbers_do_not_touch_coordinates(tmp_path):
    path = write(tmp_path / "w.gpkg")
    frame = wells(path, decimal=",", thousands=".").frame
    assert frame["x"].tolist() == [PLACES[0][0], PLACES[1][0]]
