"""Where the wells lie: a small map, and coordinates that were mixed up in a whole file."""

from __future__ import annotations

from typing import Any

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.firstlook.inputfile import InputFile
from basinheat.projection import WGS84, project
from basinheat.screening.locations import SLIPS
from basinheat.settings import schemas

Array = NDArray[np.float64]

COLUMNS, ROWS = 120, 80  # cells of the map at most, along its longer sides
MOST = 0.5  # share of a file's wells that lie outside where a map CRS is used
MENDED = 0.9  # share that a slip must bring inside to be named
# Zones of map projections are used beyond their edges (common practice): a slip must bring wells
# this close to the zone, and without one they must lie further off to be asked about.
NEAR_DEG, FAR_DEG = 3.0, 15.0


def small_map(wells: pd.DataFrame, with_readings: NDArray[np.bool_], crs: str) -> dict[str, Any]:
    """Return the counts of wells in coarse cells, and where the corners lie.

    Parameters
    ----------
    wells : DataFrame, (n,)
        ``tables.Wells``.
    with_readings : ndarray of bool, (n,)
        Which of them have readings that can be used.
    crs : str
        Of easting and northing.

    Returns
    -------
    dict
        ``west, south, east, north`` (m), ``longitude, latitude`` (least and greatest, deg),
        ``cell_m, columns, rows``, ``cells``: row from the north, column, wells, of these with
        readings. Empty without wells.
    """
    if wells.empty:
        return {"wells": 0, "crs": crs, "cells": []}
    x, y = (wells[name].to_numpy(float) for name in ("easting_m", "northing_m"))
    west, south, east, north = x.min(), y.min(), x.max(), y.max()
    cell = max((east - west) / COLUMNS, (north - south) / ROWS, 1.0)
    column = np.minimum(((x - west) / cell).astype(int), COLUMNS - 1)
    row = np.minimum(((north - y) / cell).astype(int), ROWS - 1)
    counts = pd.DataFrame({"row": row, "column": column, "n": 1, "used": with_readings})
    cells = counts.groupby(["row", "column"], sort=True)[["n", "used"]].sum().reset_index()
    return {
        "wells": len(wells),
        "with_readings": int(with_readings.sum()),
        "crs": crs,
        "west": west,
        "south": south,
        "east": east,
        "north": north,
        "longitude": [wells["longitude_deg"].min(), wells["longitude_deg"].max()],
        "latitude": [wells["latitude_deg"].min(), wells["latitude_deg"].max()],
        "cell_m": cell,
        "columns": int(column.max()) + 1,
        "rows": int(row.max()) + 1,
        "cells": cells.astype(int).to_numpy().tolist(),
    }


def judge_places(file: InputFile, map_crs: str) -> dict[str, Any] | None:
    """Return where a file's coordinates do not fit its CRS or the CRS of the maps.

    Parameters
    ----------
    file : InputFile
        A file of wells.
    map_crs : str
        CRS of the maps.

    Returns
    -------
    dict or None
        ``kind``: degrees (projected CRS, but numbers like degrees), metres (the reverse), or
        outside (where the CRS of the maps is used); ``share`` of the rows; for outside the
        ``area``, and the ``slip`` that brings them inside, "" for none. None where all is well.
    """
    ready, column = schemas.crs_of(file.spec, file.table, file.headers)
    own = getattr(file.spec, "crs", None) or ready
    crs = own or map_crs
    x, y = (file.frame[name].to_numpy(float) for name in ("x", "y"))
    known = np.isfinite(x) & np.isfinite(y) & ((x != 0.0) | (y != 0.0))
    if not known.any() or column or (schemas.is_places(file.path) and not own):
        return None  # each row, or the file itself, says where it lies
    x, y = x[known], y[known]
    like_degrees = float(((np.abs(x) <= 360.0) & (np.abs(y) <= 90.0)).mean())
    if _is_geographic(crs):
        swapped = float(((np.abs(y) <= 360.0) & (np.abs(x) <= 90.0)).mean())
        if max(like_degrees, swapped) < MOST:
            return {"kind": "metres", "crs": crs, "share": 1.0 - like_degrees}
    elif like_degrees > MOST:
        return {"kind": "degrees", "crs": crs, "share": like_degrees}
    return _outside(x, y, crs, map_crs)


def _outside(x: Array, y: Array, crs: str, map_crs: str) -> dict[str, Any] | None:
    """Return the share of places outside the area of the map CRS, and what would mend them."""
    area = _area(map_crs)
    if area is None:
        return None
    if 1.0 - _share_inside(x, y, crs, area, NEAR_DEG) < MOST:
        return None
    mended = {name: _share_inside(*slip(x, y), crs, area, NEAR_DEG) for name, slip in SLIPS.items()}
    best = max(mended, key=lambda name: mended[name])
    slip = best if mended[best] >= MENDED else ""
    outside = 1.0 - _share_inside(x, y, crs, area, NEAR_DEG if slip else FAR_DEG)
    if outside < MOST:
        return None
    return {"kind": "outside", "crs": crs, "share": outside, "area": list(area), "slip": slip}


def _share_inside(
    x: Array, y: Array, crs: str, area: tuple[float, float, float, float], margin_deg: float
) -> float:
    """Return the share of places inside west, south, east, north (deg), with a margin."""
    globe = project(x, y, crs, WGS84)
    west, south, east, north = area
    width = (east - west) % 360.0 or 360.0
    along = (globe.x - west + margin_deg) % 360.0 <= min(width + 2.0 * margin_deg, 360.0)
    across = (globe.y >= south - margin_deg) & (globe.y <= north + margin_deg)
    return float((np.isfinite(globe.x) & along & across).mean())


def _is_geographic(crs: str) -> bool:
    from pyproj import CRS

    return bool(CRS.from_user_input(crs).is_geographic)


def _area(crs: str) -> tuple[float, float, float, float] | None:
    """Return where a CRS is meant to be used: west, south, east, north; deg."""
    from pyproj import CRS

    area = CRS.from_user_input(crs).area_of_use
    return None if area is None else (area.west, area.south, area.east, area.north)
