"""Ready-made column lists of open standards, and which headers a table is read from."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from pathlib import Path

from basinheat.settings.columns import INPUT_COLUMNS
from basinheat.settings.inputs import TableFile


@dataclass(frozen=True)
class ColumnList:
    """What an open standard says of one kind of input table.

    Parameters
    ----------
    columns, units, unit_columns : dict
        As in the config.
    missing : tuple of str
        Words of the standard for missing, beside those that always mean it.
    crs : str
        CRS of coordinates whose row states none.
    crs_column : str
        Header of the column of each row's CRS.
    """

    columns: dict[str, str]
    units: dict[str, str] = field(default_factory=dict)
    unit_columns: dict[str, str] = field(default_factory=dict)
    missing: tuple[str, ...] = ()
    crs: str = ""
    crs_column: str = ""


# Field names of the content model: a public style file of the layer (ngds_schema). That the
# coordinates are WGS 84 and diameters inches where nothing is stated: from memory of the model.
# TrueVerticalDepth is not taken: it stands beside the driller's total depth, and whether it means
# the depth of the measurement or of the hole is not certain. APINo identifies the well.
_NGDS = {
    "wells": ColumnList(
        columns={
            "well": "APINo",
            "x": "LongDegree",
            "y": "LatDegree",
            "ground_elevation": "ElevationGL",
            "datum_elevation": "ElevationKB",
            "total_depth": "DrillerTotalDepth",
        },
        unit_columns=dict.fromkeys(
            ("ground_elevation", "datum_elevation", "total_depth"), "LengthUnits"
        ),
        missing=("nil:missing", "nil:unknown", "nil:inapplicable"),
        crs="EPSG:4326",
        crs_column="SRS",
    ),
    "readings": ColumnList(
        columns={
            "well": "APINo",
            "depth": "DepthOfMeasurement",
            "temperature": "MeasuredTemperature",
            "since_circulation": "TimeSinceCirculation",
            "circulation": "CirculationDuration",
            "hole_diameter": "BitDiameterTD",
            "date": "MeasurementDateTime",
            "remarks": "MeasurementNotes",
        },
        units={"hole_diameter": "in"},
        unit_columns={
            "depth": "LengthUnits",
            "temperature": "TemperatureUnits",
            "hole_diameter": "DiameterUnits",
        },
        missing=("nil:missing", "nil:unknown", "nil:inapplicable"),
    ),
}

# Field names: the headers of the release of 2024. q is the heat flow of the place, qc that of one
# interval; units in the description of the release (mW/m2, K/km, W/(m K), m; degrees of WGS 84).
_IHFC = {
    "heat_flow": ColumnList(
        columns={
            "well": "ID_parent",
            "site": "name",
            "x": "long_EW",
            "y": "lat_NS",
            "heat_flow": "q",
            "heat_flow_std": "q_uncertainty",
            "gradient": "T_grad_mean",
            "gradient_std": "T_grad_uncertainty",
            "conductivity": "tc_mean",
            "conductivity_std": "tc_uncertainty",
            "top": "q_top",
            "base": "q_bottom",
            "ground_elevation": "elevation",
            "environment": "environment",
            "method": "q_method",
            "temperature_method": "T_method_bottom",
            "quality": "Quality_Code",
            "date": "q_date",
            "reference": "publication_reference",
        },
        missing=("[unspecified]", "unspecified"),
        crs="EPSG:4326",
    )
}

SCHEMAS: dict[str, dict[str, ColumnList]] = {
    "ngds_borehole_temperature": _NGDS,
    "ihfc_heat_flow": _IHFC,
}
_NONE = ColumnList({})
# Coordinates of files of points: no header names them, the geometry does.
GEOMETRY = {"x": "x of the geometry", "y": "y of the geometry"}
_POINTS = (".gpkg", ".shp", ".geojson", ".json")


def is_places(path: str | Path) -> bool:
    """Tell whether a file is one of points, whose geometry stands for x and y."""
    return Path(path).suffix.lower() in _POINTS


def column_list(table: TableFile, kind: str) -> ColumnList:
    """Return the ready-made list of a table, an empty one where it states none."""
    return SCHEMAS.get(table.known_columns or "", {}).get(kind, _NONE)


def needed(table: TableFile, kind: str, places: bool = False) -> dict[str, str]:
    """Return the columns that must be there: canonical name to header.

    What the config names must be there; of a ready-made list, or where nothing is named, what
    every row needs.

    Parameters
    ----------
    table : TableFile
        Entry of the config.
    kind : str
        Which of the input tables.
    places : bool, optional
        Whether the file's geometry gives x and y.
    """
    ready = column_list(table, kind)
    names = {
        name: name
        for name, column in INPUT_COLUMNS[kind].items()
        if column.required and name not in table.given and not (places and name in GEOMETRY)
    }
    if ready.columns:
        names = {name: ready.columns[name] for name in names if name in ready.columns}
    elif table.columns:
        names = {}
    return {**names, **table.columns}


def all_needed(table: TableFile, kind: str, places: bool = False) -> list[str]:
    """Return every header that must be there, columns of units and CRS among them."""
    more = [getattr(table, "crs_column", None)]
    found = [*needed(table, kind, places).values(), *table.more_headers]
    return [*found, *table.unit_columns.values(), *(name for name in more if name)]


def found(
    table: TableFile, kind: str, present: Sequence[str], places: bool = False
) -> dict[str, str]:
    """Return the columns that are read of a file: canonical name to header.

    Parameters
    ----------
    table, kind, places
        As for ``needed``.
    present : sequence of str
        Headers of the file.
    """
    ready = column_list(table, kind).columns
    if not ready and not table.columns:
        ready = {name: name for name in INPUT_COLUMNS[kind]}
    columns = {name: header for name, header in ready.items() if header in present}
    if places:
        columns |= {name: GEOMETRY[name] for name in GEOMETRY if name in INPUT_COLUMNS[kind]}
    return {**columns, **table.columns}


def units_of(table: TableFile, kind: str) -> dict[str, str]:
    """Return the unit of each column for which one is stated."""
    return {**column_list(table, kind).units, **table.units}


def unit_columns(table: TableFile, kind: str, present: Sequence[str]) -> dict[str, str]:
    """Return the headers of the columns that hold each row's units."""
    ready = column_list(table, kind).unit_columns
    kept = {name: header for name, header in ready.items() if header in present}
    # A unit that the config states for a column is meant for all its rows.
    kept = {name: header for name, header in kept.items() if name not in table.units}
    return {**kept, **table.unit_columns}


def crs_of(table: TableFile, kind: str, present: Sequence[str]) -> tuple[str, str]:
    """Return the CRS that the standard gives where the config states none, and its column."""
    ready, stated = column_list(table, kind), getattr(table, "crs", None)
    own = getattr(table, "crs_column", None)
    header = own or (ready.crs_column if ready.crs_column in present and not stated else "")
    return "" if stated else ready.crs, header
