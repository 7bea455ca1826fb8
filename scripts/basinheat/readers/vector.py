"""Points of a geographic file: attributes as text, x and y of the geometry; features count from 1.

The library hands over columns and, for geometries, well-known binary.
"""

from __future__ import annotations

import warnings
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd

from basinheat.errors import UserError
from basinheat.readers import header
from basinheat.readers.raw import Head, RawTable
from basinheat.readers.typed import as_text
from basinheat.settings.inputs import TableFile
from basinheat.settings.schemas import GEOMETRY

POINT, NOTHING = 0, -1  # of shapely's types of geometry


def look(path: str | Path, spec: TableFile, needed: list[str]) -> Head:
    """Return the attributes with the columns of the geometry, whether there are features, the CRS.

    The geometries are looked at too: what are no points is a fault of the whole file.
    """
    _, info = _info(path, spec)
    names = [header.clean(name) for name in info["fields"]]
    if info["features"] == 0:
        return Head([*names, *GEOMETRY.values()], True, _crs(info["crs"]))
    _check_kind(path, info["geometry_type"])
    return Head([*names, *GEOMETRY.values()], False, _crs(info["crs"]))


def read(path: str | Path, spec: TableFile, wanted: list[str]) -> RawTable:
    """Read the wanted attributes, and the coordinates of the points, as text.

    Parameters
    ----------
    path : str or Path
        File.
    spec : TableFile
        Layer; decimal mark.
    wanted : list of str
        Attributes, or the names of ``GEOMETRY``.

    Returns
    -------
    RawTable
        With the CRS of the file.
    """
    import pyarrow as pa
    import pyogrio

    layer, info = _info(path, spec)
    own = list(info["fields"])
    names = [header.clean(name) for name in own]
    attributes = {
        name: own[header.place(name, names, path)]
        for name in wanted
        if name not in GEOMETRY.values()
    }
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")  # of geometries that are none: their rows say so
            meta, table = pyogrio.read_arrow(path, layer=layer, columns=[*attributes.values()])
    except Exception as error:  # of the library, and of the one below it
        raise _unreadable(path, error) from None
    cells = {
        name: as_text(table[column], spec.decimal, f'{path}: "{name}"')
        for name, column in attributes.items()
    }
    geometry = meta["geometry_name"] or "wkb_geometry"
    x, y = _places(path, table[geometry]) if geometry in table.column_names else (None, None)
    for name, values in zip(GEOMETRY.values(), (x, y), strict=True):
        if name in wanted:
            values = np.full(len(table), np.nan) if values is None else values
            cells[name] = as_text(pa.chunked_array([values]), spec.decimal, str(path))
    rows = len(table)
    frame = pd.DataFrame({name: cells[name] for name in wanted}, index=range(rows))
    crs = _crs(info["crs"])
    notes = [("layer", str(layer or "")), ("crs", crs)]
    lines = np.arange(1, rows + 1, dtype=np.int64)
    return RawTable(frame, lines, crs=crs, notes=[note for note in notes if note[1]])


def _info(path: str | Path, spec: TableFile) -> tuple[str | None, dict[str, Any]]:
    """Return the layer to read and what the file says of it."""
    import pyogrio

    if not Path(path).is_file():
        raise UserError(f"{path}: cannot be read (no such file).")
    try:
        layers = [str(name) for name in pyogrio.list_layers(path)[:, 0]]
        layer = _layer(path, spec.layer, layers)
        return layer, pyogrio.read_info(path, layer=layer, force_feature_count=True)
    except UserError:
        raise
    except Exception as error:  # of the library, and of the one below it
        raise _unreadable(path, error) from None


def _layer(path: str | Path, stated: str | None, layers: list[str]) -> str:
    """Return the layer that is meant."""
    told = ", ".join(f'"{name}"' for name in layers)
    if not layers:
        raise UserError(f"{path}: holds no layer.")
    if stated is None:
        if len(layers) > 1:
            raise UserError(f"{path}: holds several layers; state layer, one of {told}.")
        return layers[0]
    if stated not in layers:
        raise UserError(f'{path}: there is no layer "{stated}"; it holds {told}.')
    return stated


def _check_kind(path: str | Path, kind: str | None) -> None:
    """Refuse a file whose geometries can't be points."""
    if kind and kind.removesuffix(" M").removesuffix(" ZM").removesuffix(" Z") not in (
        *("Point", "2.5D Point", "Unknown", "2.5D Unknown"),
    ):
        raise UserError(f"{path}: holds geometries of the kind {kind}; only points are read.")


def _places(path: str | Path, column: Any) -> tuple[np.ndarray, np.ndarray]:
    """Return coordinates of points, NaN where there is no geometry."""
    import shapely

    geometry = shapely.from_wkb(np.array(column.to_pylist(), object), on_invalid="ignore")
    kind = shapely.get_type_id(geometry)
    other = np.flatnonzero((kind != POINT) & (kind != NOTHING))
    if len(other):
        first = geometry[other[0]].geom_type
        raise UserError(
            f"{path}: {len(other)} of its geometries are no points (the first is a {first}); only "
            "points are read."
        )
    return shapely.get_x(geometry), shapely.get_y(geometry)


def _crs(stated: str | None) -> str:
    """Return a CRS as its code where it has one, else in well-known text."""
    if not stated:
        return ""
    from pyproj import CRS
    from pyproj.exceptions import CRSError

    try:
        authority = CRS.from_user_input(stated).to_authority(min_confidence=70)
    except CRSError:
        return ""
    return ":".join(authority) if authority else stated


def _unreadable(path: str | Path, error: Exception) -> UserError:
    reason = str(error).split("\n")[0].rstrip(".")
    return UserError(f"{path}: is no file of points that can be read ({reason}).")
