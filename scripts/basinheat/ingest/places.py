"""Where wells lie: the CRS of each row, and the map and globe coordinates it leads to."""

from __future__ import annotations

import logging
import re
from collections.abc import Sequence

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat import projection
from basinheat.flags import mark
from basinheat.ingest.identity import keys
from basinheat.ledger import Ledger
from basinheat.readers import InputTable
from basinheat.settings.inputs import WellNames, WellsFile

_log = logging.getLogger(__name__)

# Geographic systems by the name of their datum (EPSG registry).
DATUMS = {
    "NAD27": "EPSG:4267",
    "NAD83": "EPSG:4269",
    "WGS84": "EPSG:4326",
    "ED50": "EPSG:4230",
    "ETRS89": "EPSG:4258",
    "GDA94": "EPSG:4283",
}
_CODE = re.compile(r"(?:EPSG\s*:{1,2}\s*)?(\d{4,6})(?:\.0+)?")
COLUMNS = ("easting_m", "northing_m", "longitude_deg", "latitude_deg")


def crs_of(word: str) -> str:
    """Return the CRS that a cell names, "" for none.

    Examples
    --------
    >>> crs_of("nad 27"), crs_of("4267"), crs_of("EPSG:4267"), crs_of("somewhere")
    ('EPSG:4267', 'EPSG:4267', 'EPSG:4267', '')
    """
    plain = re.sub(r"[\s_-]", "", word).upper()
    code = _CODE.fullmatch(word.strip().upper())
    found = f"EPSG:{code[1]}" if code else DATUMS.get(plain, "")
    if not found and re.search(r"[:[]", word):
        found = word  # of a file of points, or of another authority
    return "" if not found or projection.crs_fault(found) else found


# Of a map from its origin: twice round the Earth, with room for zones in front of eastings.
FARTHEST_M = 1e8


def with_crs(
    table: InputTable, ledger: Ledger, specs: Sequence[WellsFile], map_crs: str
) -> InputTable:
    """Give each row its CRS: the one it names, else that of its file, else the map's.

    Parameters
    ----------
    table : InputTable
        Wells; ``crs_word`` where rows name a CRS.
    ledger : Ledger
        Takes rows whose CRS is none.
    specs : sequence of WellsFile
        Files of wells.
    map_crs : str
        CRS of the maps.
    """
    frame = table.frame
    crs = np.full(len(frame), map_crs, object)
    for number, spec in enumerate(specs):
        if spec.crs and "config" in frame:
            crs[(frame["config"] == number).to_numpy()] = spec.crs
    frame["crs"] = crs
    if "crs_word" not in frame:
        return table
    codes, words = pd.factorize(frame["crs_word"].fillna(""))
    found = np.array([*(crs_of(word) for word in words), ""], object)[codes]
    stated = np.array([*(bool(word) for word in words), False], bool)[codes]
    frame["crs"] = np.where(found != "", found, frame["crs"])
    return ledger.refuse(
        table,
        stated & (found == ""),
        "crs_word",
        "crs_unknown",
        '"{written}" is no coordinate reference system; write an EPSG code or one of '
        f"{', '.join(DATUMS)}.",
    )


def without_place(table: InputTable, ledger: Ledger, rule: WellNames) -> InputTable:
    """Lend rows without coordinates those of their well's first row; refuse where it has none.

    The rows carry ``_lent`` then: they only fill the blanks of the others.
    """
    frame = table.frame
    blank = frame[["x", "y"]].isna().any(axis=1).to_numpy()
    frame["_lent"] = False
    if not blank.any():
        return table
    codes, unique = pd.factorize(frame["well"])
    key = np.array([*keys(list(unique), rule), ""], object)[codes]
    placed = frame.loc[~blank].assign(_key=key[~blank])
    lent = np.zeros(len(frame), bool)
    for own in (frame["well"].to_numpy(object), key):
        name = "well" if own is not key else "_key"
        source = placed.drop_duplicates(name).set_index(name)[["x", "y", "crs"]]
        rows = np.flatnonzero(blank & ~lent)
        rows = rows[pd.Index(own[rows]).isin(source.index)]
        if len(rows):
            for column in source:
                frame.iloc[rows, frame.columns.get_loc(column)] = (
                    source[column].reindex(own[rows]).to_numpy()
                )
            lent[rows] = True
    frame["_lent"] = lent
    for name in ("x", "y"):
        # a row that lacks both is told of x alone
        blank = table.frame[name].isna().to_numpy()
        table = ledger.refuse(table, blank, name, "no_coordinates", NOWHERE)
    return table


NOWHERE = 'column "{header}" is blank: the well has no place on the map.'


def placed(table: InputTable, map_crs: str) -> InputTable:
    """Add place on the map and on the globe."""
    frame = table.frame
    place = np.full((len(frame), len(COLUMNS)), np.nan)
    ballpark = np.zeros(len(frame), bool)
    for crs, rows in frame.groupby("crs", sort=True).indices.items():
        x, y = (frame[name].to_numpy(float)[rows] for name in ("x", "y"))
        there = projection.project(x, y, str(crs), map_crs)
        globe = projection.project(x, y, str(crs), projection.WGS84)
        place[rows] = np.column_stack([there.x, there.y, globe.x, globe.y])
        place[rows[np.fmax(np.abs(there.x), np.abs(there.y)) > FARTHEST_M]] = np.nan
        ballpark[rows] = there.ballpark
        for operation, points in sorted(there.operations.items()):
            _log.info("%s to %s: %s: %d wells", crs, map_crs, operation, points)
    frame[list(COLUMNS)] = place
    mark(frame, ballpark, "ballpark_datum_shift")
    return table


def without_owner(table: InputTable, ledger: Ledger) -> InputTable:
    """Refuse rows with lent coordinates whose well turned out to be none of those kept apart."""
    frame = table.frame
    lost: NDArray[np.bool_] = np.zeros(len(frame), bool)
    if frame["_lent"].any():
        own = frame.loc[~frame["_lent"], "well"].unique()
        lost = (frame["_lent"] & ~frame["well"].isin(own)).to_numpy()
    table = ledger.refuse(table, lost, "x", "no_coordinates", NOWHERE)
    table = table.with_frame(table.frame.drop(columns="_lent"))
    return table
