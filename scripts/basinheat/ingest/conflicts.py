"""Rows of one well, in one file or in several: merged where they agree, told where they do not."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.flags import PREFIX, mark
from basinheat.ledger import Ledger
from basinheat.readers import InputTable
from basinheat.settings.columns import WELLS

HEADER = "from_header"  # rows that come from the header of a log: a table counts before them
# Differences up to these are rounding to whole metres, feet or tenths of a degree (common
# practice, no source).
ROUNDING = {
    "ground_elevation": 1.0,
    "datum_elevation": 1.0,
    "water_depth": 1.0,
    "total_depth": 1.0,
    "surface_temperature": 0.1,
}
VALUES = list(ROUNDING)


def one_row_a_well(table: InputTable, ledger: Ledger, distance_m: float) -> InputTable:
    """Leave one row of each well.

    Rows of one name that lie within ``distance_m`` of each other are one well: the fullest row
    stays, its blanks are filled from the others in their order, and the others are ``merged``.
    Where values disagree the first row stays and counts, and those that say otherwise leave as
    ``well_conflict``. Rows further apart refuse the well, because readings could not be attributed.

    Parameters
    ----------
    table : InputTable
        Wells in the order of the files, with ``easting_m, northing_m, kept, from_header``.
    ledger : Ledger
        Takes the refused rows.
    distance_m : float
        Largest distance between rows of one well, m.
    """
    if not table.frame["well"].duplicated().any():
        return table
    table = _near_the_table(table, ledger, distance_m)
    table = _together(table, ledger, distance_m)
    rows = np.flatnonzero(table.frame["well"].duplicated(keep=False).to_numpy())
    return _merged(table, ledger, rows) if len(rows) else table


def _near_the_table(table: InputTable, ledger: Ledger, distance_m: float) -> InputTable:
    """Refuse headers of logs that lie far from the row of their well in a table."""
    frame = table.frame
    header = frame[HEADER].to_numpy(bool)
    if not header.any():
        return table
    places = frame.loc[~header].drop_duplicates("well").set_index("well")
    own = frame[["easting_m", "northing_m"]].to_numpy(float)
    there = places.reindex(frame["well"])[["easting_m", "northing_m"]].to_numpy(float)
    apart = np.hypot(*(own - there).T)
    far = header & (apart > distance_m)
    frame["_apart"] = apart / 1000.0
    table = ledger.refuse(
        table,
        far,
        "x",
        "well_location_conflict",
        "the header places the well {_apart:.1f} km from its row in the wells, which counts.",
    )
    table = table.with_frame(table.frame.drop(columns="_apart"))
    return table


def _together(table: InputTable, ledger: Ledger, distance_m: float) -> InputTable:
    """Refuse wells whose rows lie apart, but for the rows that a decision keeps."""
    frame = table.frame
    apart = _width(frame)
    conflict = apart > distance_m
    if not conflict.any():
        return table
    kept = conflict & frame["kept"].to_numpy(bool)
    base = frame.loc[kept].drop_duplicates("well").set_index("well")
    there = base.reindex(frame["well"])[["easting_m", "northing_m"]].to_numpy(float)
    off = np.hypot(*(frame[["easting_m", "northing_m"]].to_numpy(float) - there).T)
    stays = kept & (off <= distance_m)
    ledger.spare(table, stays, "well_location_conflict")
    decided = frame["well"].isin(base.index).to_numpy(bool)
    told_of = frame.loc[np.where(decided, kept, conflict)]
    lines = _lines(told_of).groupby(told_of["well"])
    text = lines.agg("; ".join).where(~lines.first().index.isin(base.index), lines.first())
    frame["_apart"] = np.where(decided, off, apart) / 1000.0
    frame["_rows"] = frame["well"].map(text)
    refused = conflict & ~stays
    told = "this row lies {_apart:.1f} km from the one that a decision keeps ({_rows})."
    code = "well_location_conflict"
    table = ledger.refuse(table, refused & decided, "x", code, told)
    table = ledger.refuse(
        table,
        refused[~(refused & decided)],
        "x",
        code,
        "rows of this well lie up to {_apart:.1f} km apart ({_rows}). Mend the coordinates, give "
        "different wells different names, or keep the well by a decision: its first row counts "
        "then, or the row that the decision names as value, file or file:line.",
    )
    return table.with_frame(table.frame.drop(columns=["_apart", "_rows"]))


def _lines(frame: pd.DataFrame) -> pd.Series:
    """Return for each row where it stands, in words."""
    return frame["source_file"].astype(object) + ", line " + frame["source_line"].astype(str)


def _width(frame: pd.DataFrame) -> NDArray[np.float64]:
    """Return for each row how far the rows of its well lie apart, m."""
    places = frame.groupby("well", sort=False)[["easting_m", "northing_m"]]
    width = places.transform("max") - places.transform("min")
    return np.hypot(width["easting_m"].to_numpy(), width["northing_m"].to_numpy())


def _merged(table: InputTable, ledger: Ledger, rows: NDArray[np.int64]) -> InputTable:
    """Merge the rows of wells that stand in several, which lie together."""
    frame = table.frame
    some = frame.iloc[rows]
    wells = some.groupby("well", sort=False)
    group = wells.ngroup().to_numpy()
    values = some[VALUES].to_numpy(float)
    counts = wells[VALUES].transform("first").to_numpy(float)
    says_otherwise = np.abs(values - counts) > list(ROUNDING.values())
    torn = np.bincount(group, says_otherwise.any(axis=1))[group] > 0
    fullness = np.where(torn, 0, np.isfinite(values).sum(axis=1))
    order = np.lexsort([np.arange(len(some)), -fullness, some[HEADER].to_numpy(bool), group])
    stays = np.zeros(len(some), bool)
    stays[order[np.r_[True, group[order][1:] != group[order][:-1]]]] = True

    place = _lines(some)
    frame["_both"] = ""
    frame.iloc[rows, frame.columns.get_loc("_both")] = _both(
        values, counts, says_otherwise, group, place.to_numpy(object)
    )
    for name in [name for name in frame if str(name).startswith(PREFIX)]:
        frame.iloc[rows, frame.columns.get_loc(name)] = wells[name].transform("any").to_numpy()
    for column, name in enumerate(VALUES):
        frame.iloc[rows, frame.columns.get_loc(name)] = counts[:, column]
    mark(frame, _spread(torn, rows, len(frame)), "well_conflict")

    refused = np.where(says_otherwise.any(axis=1), says_otherwise.argmax(axis=1), len(VALUES))
    refused[stays] = -1
    code = np.full(len(frame), -1)
    code[rows] = refused
    return _refused(table, ledger, code)


def _refused(table: InputTable, ledger: Ledger, code: NDArray[np.int64]) -> InputTable:
    """Refuse rows by the value in which they disagree; those that agree in all are merged."""
    sentence = "the well stands in another row that counts: {_both}."
    for column, name in enumerate(VALUES):
        mask = code == column
        table = ledger.refuse(table, mask, name, "well_conflict", sentence)
        code = code[~mask]
    sentence = "the well stands in another row, whose blanks are filled from this one."
    table = ledger.refuse(table, code == len(VALUES), "well", "merged", sentence)
    table = table.with_frame(table.frame.drop(columns="_both"))
    return table


def _both(
    values: NDArray[np.float64],
    counts: NDArray[np.float64],
    differs: NDArray[np.bool_],
    group: NDArray[np.int64],
    place: NDArray[np.object_],
) -> NDArray[np.object_]:
    """Return for each row both values wherever it disagrees, and where the one that counts is."""
    out = np.full(len(values), "", object)
    for column, name in enumerate(VALUES):
        noted = np.flatnonzero(np.isfinite(values[:, column]))
        source = np.full(group.max() + 1, 0, np.int64)
        source[group[noted[::-1]]] = noted[::-1]
        for row in np.flatnonzero(differs[:, column]):
            text = (
                f"{name} {counts[row, column]:g} {WELLS[name].unit} in "
                f"{place[source[group[row]]]}, and not {values[row, column]:g}"
            )
            out[row] = f"{out[row]}; {text}" if out[row] else text
    return out


def _spread(mask: NDArray[np.bool_], rows: NDArray[np.int64], count: int) -> NDArray[np.bool_]:
    """Return a mask of some rows as one of all rows."""
    out = np.zeros(count, bool)
    out[rows] = mask
    return out
