"""Points of geographic files: layers, other geometries, coordinate systems."""

import json

import numpy as np
import pyogrio.raw
import pyproj
import shapely

from .base import WELL_COLUMNS, case, inputs, well_rows
from .model import ledger, refused

CLEAN = ledger()
UTM = "EPSG:32631"
ATTRIBUTES = ("well", "ground_elevation", "datum_elevation", "total_depth")
TO_DEGREES = pyproj.Transformer.from_crs(UTM, "EPSG:4326", always_xy=True)
SHORT = {"well": "well", "ground_elevation": "ground_ele", "total_depth": "total_dept"}


def places() -> list:
    return [(row[1], row[2]) for row in well_rows()]


def degrees() -> list:
    return [TO_DEGREES.transform(*place) for place in places()]


def points(coordinates) -> list:
    return [shapely.Point(*place) for place in coordinates]


def write(path, geometries, *, layer=None, crs=UTM, kind="Point", append=False, changed=None):
    """Wells as a geographic file, with given geometries."""
    frame = dict(zip(WELL_COLUMNS, zip(*well_rows(), strict=True), strict=True)) | (changed or {})
    names = [name for name in frame if name in ATTRIBUTES or name in (changed or {})]
    pyogrio.raw.write(
        str(path),
        np.array(shapely.to_wkb(geometries), dtype=object),
        [np.array(frame[n], dtype=object if n == "well" else float) for n in names],
        names,
        layer=layer,
        driver={".gpkg": "GPKG", ".shp": "ESRI Shapefile"}.get(path.suffix, "GeoJSON"),
        geometry_type=kind,
        crs=crs,
        append=append,
    )


def file(geometries, **how):
    return lambda path: write(path, geometries, **how)


def two_layers(path):
    write(path, points(places()), layer="boreholes")
    write(path, points(places()), layer="seismic shots", append=True)


def without(*suffixes):
    """A shapefile that lost some of its parts."""

    def made(path):
        write(path, points(places()))
        for suffix in suffixes:
            path.with_suffix(suffix).unlink()

    return made


def geojson(geometries, properties=()) -> str:
    """Written by hand, with geometries as they are given (None: null)."""
    features = []
    for row, geometry in zip(well_rows(), geometries, strict=True):
        values = dict(zip(WELL_COLUMNS, row, strict=True))
        kept = {name: values[name] for name in (*ATTRIBUTES, *properties)}
        features.append({"type": "Feature", "properties": kept, "geometry": geometry})
    return json.dumps({"type": "FeatureCollection", "features": features})


def json_points() -> list:
    return [{"type": "Point", "coordinates": list(place)} for place in degrees()]


def wells(name, why, expected, filename, content, **settings):
    config = inputs(wells={"file": filename, **settings})
    return case(name, why, expected, files={filename: content}, config=config)


PLACED = ledger(values={("N06", "easting_m"): well_rows()[6][1]}, tolerance=1.0)
POLYGONS = [shapely.Point(*place).buffer(100) for place in places()]
MULTI = [shapely.MultiPoint([place]) for place in places()]
HIGH = [shapely.Point(*place, 35.0) for place in places()]
GAPS = [None, {"type": "Point", "coordinates": []}, *json_points()[2:]]
NO_PLACE = ledger(
    {("wells", "no_coordinates", None): 2, ("readings", "well_rejected", None): 4}, 14, 28
)

LAYERS = [
    wells(
        "layer_not_stated_among_two",
        "A project's GeoPackage holds boreholes and other points.",
        refused("wells.gpkg", "boreholes", "seismic shots", "layer"),
        "wells.gpkg",
        two_layers,
    ),
    wells(
        "layer_stated",
        "The same, with the layer named.",
        CLEAN,
        "wells.gpkg",
        two_layers,
        layer="boreholes",
    ),
    wells(
        "layer_misspelt",
        "The same, with a slip of the pen.",
        refused("wells.gpkg", "borehole", "boreholes"),
        "wells.gpkg",
        two_layers,
        layer="borehole",
    ),
    wells(
        "layer_of_polygons",
        "The file holds well pads as areas rather than wells as points.",
        refused("wells.gpkg", "polygon", "point"),
        "wells.gpkg",
        file(POLYGONS, kind="Polygon"),
    ),
    wells(
        "layer_of_multipoints",
        "A tool made multipoints of single points.",
        refused("wells.gpkg", "multipoint"),
        "wells.gpkg",
        file(MULTI, kind="MultiPoint"),
    ),
    wells(
        "layer_of_points_with_heights",
        "The points carry a height as third coordinate.",
        PLACED,
        "wells.gpkg",
        file(HIGH, kind="Point Z"),
    ),
    wells(
        "layer_with_no_features",
        "A filter left nothing, and the empty layer was saved.",
        refused("wells.geojson"),
        "wells.geojson",
        '{"type": "FeatureCollection", "features": []}',
    ),
    wells(
        "layer_without_some_geometries",
        "Two wells were never located: one has no geometry, one an empty point.",
        NO_PLACE,
        "wells.geojson",
        geojson(GAPS),
    ),
    wells(
        "layer_is_no_json",
        "The download broke off in the middle of the file.",
        refused("wells.geojson"),
        "wells.geojson",
        geojson(json_points())[:700],
    ),
]

SYSTEMS = [
    wells(
        "crs_from_a_geopackage_in_degrees",
        "The file is in degrees, and says so itself.",
        PLACED,
        "wells.gpkg",
        file(points(degrees()), crs="EPSG:4326"),
    ),
    wells(
        "crs_from_geojson",
        "GeoJSON is in degrees by its standard.",
        PLACED,
        "wells.geojson",
        geojson(json_points()),
    ),
    wells(
        "crs_from_geojson_under_another_suffix",
        "A web service sends GeoJSON under the suffix .json.",
        PLACED,
        "wells.json",
        geojson(json_points()),
    ),
    wells(
        "crs_in_the_file_is_wrong_and_another_stated",
        "Metres were saved under the label of degrees; the config puts it right.",
        PLACED,
        "wells.gpkg",
        file(points(places()), crs="EPSG:4326"),
        crs=UTM,
    ),
    wells(
        "crs_missing_beside_a_shapefile",
        "The .prj was lost when the shapefile was mailed.",
        refused("wells.shp", "crs"),
        "wells.shp",
        without(".prj"),
        columns=SHORT,
    ),
    wells(
        "crs_missing_beside_a_shapefile_but_stated",
        "The .prj was lost, and the config states the system.",
        PLACED,
        "wells.shp",
        without(".prj"),
        columns=SHORT,
        crs=UTM,
    ),
    wells(
        "crs_stated_is_none",
        "A system was written by its nickname.",
        refused("inputs.wells", "crs", "UTM-31-ish"),
        "wells.gpkg",
        file(points(places())),
        crs="UTM-31-ish",
    ),
    wells(
        "shapefile_without_its_index",
        "Only the .shp and the .prj were mailed.",
        refused("wells.shp"),
        "wells.shp",
        without(".dbf", ".shx"),
        columns=SHORT,
    ),
    wells(
        "shapefile_with_names_cut_at_ten_letters",
        "Shapefiles cut column names, and the config asks for the long ones.",
        refused("wells.shp", "ground_elevation", "ground_ele"),
        "wells.shp",
        without(),
        columns=SHORT | {"ground_elevation": "ground_elevation"},
    ),
    wells(
        "geometry_beside_columns_x_and_y",
        "Old coordinates in metres stand among the attributes; the geometry is what counts.",
        PLACED,
        "wells.geojson",
        geojson(json_points(), ("x", "y")),
    ),
]

CASES = [*LAYERS, *SYSTEMS]
