"""The same well or the same reading written down more than once."""

from __future__ import annotations

import numpy as np
import pandas as pd

from basinheat.flags import mark
from basinheat.ledger import Ledger
from basinheat.readers import InputTable

_WELL_VALUES = [
    "ground_elevation",
    "datum_elevation",
    "water_depth",
    "total_depth",
    "surface_temperature",
]
_READING_NUMBERS = [
    "depth",
    "vertical_depth",
    "temperature",
    "temperature_std",
    "since_circulation",
    "circulation",
    "hole_diameter",
    "mud_temperature",
]
_READING_WORDS = ["well", "kind", "date", "log_run"]
_DETAILS = [
    "vertical_depth",
    "temperature_std",
    "since_circulation",
    "circulation",
    "hole_diameter",
    "mud_temperature",
    "date",
    "log_run",
]


def one_row_a_well(table: InputTable, ledger: Ledger, distance_m: float) -> InputTable:
    """Leave one row of each well.

    Rows of one name that lie within ``distance_m`` of each other are one well: the fullest row
    stays, its blanks are filled from the others, and the others are ``merged``. Rows further apart
    are in conflict: those that agree with more than half of the rows stay, and without such a
    majority none does, because readings could not be attributed. All refused rows are listed.

    Parameters
    ----------
    table : InputTable
        Wells with ``easting_m, northing_m``.
    ledger : Ledger
        Takes the refused rows.
    distance_m : float
        Largest distance between rows of one well, m.
    """
    if not table.frame["well"].duplicated().any():
        return table
    table = _agreeing(table, ledger, distance_m)
    frame = table.frame
    filled = frame[_WELL_VALUES].notna().sum(axis=1)
    keys = ["easting_m", "northing_m", *_WELL_VALUES, "source_file", "source_line"]
    ordered = frame.assign(_blank=-filled).sort_values(["well", "_blank", *keys], kind="stable")
    again = ordered["well"].duplicated()
    rows = ordered.groupby("well", sort=False)[_WELL_VALUES]
    spread = rows.transform("max") - rows.transform("min")
    ordered[_WELL_VALUES] = rows.transform("first")
    ordered = ordered.drop(columns="_blank").reset_index(drop=True)
    mark(ordered, (spread > 1.0).any(axis=1).to_numpy(), "rows_disagree")
    sentence = "the well stands in another row, whose blanks are filled from this one."
    table = table.with_frame(ordered)
    return ledger.refuse(table, again.to_numpy(), "well", "merged", sentence)


def _agreeing(table: InputTable, ledger: Ledger, distance_m: float) -> InputTable:
    """Refuse rows of one well that lie apart, but for a majority that lies together."""
    frame = table.frame
    places = frame.groupby("well")[["easting_m", "northing_m"]]
    width = places.transform("max") - places.transform("min")
    apart = np.hypot(width["easting_m"], width["northing_m"]).to_numpy()
    middle = frame[["easting_m", "northing_m"]] - places.transform("median")
    # Half the distance: then any two of the rows that stay lie within the whole of it.
    near = np.hypot(middle["easting_m"], middle["northing_m"]).to_numpy() <= distance_m / 2.0
    share = pd.Series(near).groupby(frame["well"].to_numpy()).transform("mean").to_numpy()
    conflict = (apart > distance_m) & ~(near & (share > 0.5))
    if not conflict.any():
        return table
    frame = frame.assign(_apart=apart / 1000.0)
    lines = frame["source_file"] + ", line " + frame["source_line"].astype(str)
    text = lines.sort_values().groupby(frame["well"]).agg("; ".join)
    frame["_rows"] = frame["well"].map(text)
    table = table.with_frame(frame)
    sentence = (
        "rows of this well lie up to {_apart:.1f} km apart ({_rows}) and no majority of them lies "
        "together. Mend the coordinates, or give different wells different names."
    )
    out = ledger.refuse(table, conflict, "x", "well_location_conflict", sentence)
    return out.with_frame(out.frame.drop(columns=["_apart", "_rows"]))


def reading_ids(frame: pd.DataFrame) -> np.ndarray:
    """Return an identity for each reading, made from its content alone.

    Parameters
    ----------
    frame : DataFrame, (n,)
        Canonical columns of readings; a number that could not be read counts as written.

    Returns
    -------
    ndarray of str, (n,)
        Equal for readings of equal content, whatever file and line they stand in.
    """
    mixed = np.zeros(len(frame), np.uint64)
    multiplier = np.uint64(0x9E3779B97F4A7C15)
    for name in _READING_NUMBERS:
        values = frame[name].to_numpy(float)
        part = pd.util.hash_array(np.round(values, 6) + 0.0)
        wrong = frame[f"wrong:{name}"].to_numpy(bool)
        if wrong.any():
            part[wrong] = _hashed(frame.loc[wrong, f"as_written:{name}"])
        mixed = (mixed ^ part) * multiplier
    for name in _READING_WORDS:
        mixed = (mixed ^ _hashed(frame[name])) * multiplier
    return np.array([f"r{value:016x}" for value in mixed.tolist()], object)


def _hashed(text: pd.Series) -> np.ndarray:
    return pd.util.hash_array(text.to_numpy(object), categorize=True)


def merged(table: InputTable, ledger: Ledger) -> InputTable:
    """Leave one of readings that say the same.

    Exact copies are merged, and so is a reading that agrees with another of the same well, depth,
    temperature and kind in all it states and states less.

    Parameters
    ----------
    table : InputTable
        Readings with ``reading_id``.
    ledger : Ledger
        Takes the rows that are merged away.
    """
    copies = table.frame[table.frame.duplicated("reading_id", keep=False)]
    order = ["reading_id", "source_file", "source_line"]
    copies = copies[order].sort_values(order, kind="stable")
    again = np.zeros(len(table), bool)
    again[copies.index[copies["reading_id"].duplicated()]] = True
    table = ledger.refuse(table, again, "", "merged", "the same reading stands in another row.")
    key = ["well", "depth", "temperature", "kind"]
    twins = np.flatnonzero(table.frame.duplicated(key, keep=False).to_numpy())
    less = np.zeros(len(table), bool)
    if len(twins):
        less[twins] = _says_less(table.frame.iloc[twins], key)
    sentence = "another row of the same well, depth and temperature says the same and more."
    return ledger.refuse(table, less, "", "merged", sentence)


def _says_less(frame: pd.DataFrame, key: list[str]) -> np.ndarray:
    """Tell which rows the fullest row of their group contains."""
    details = frame[_DETAILS].replace("", np.nan)
    fullness = details.notna().sum(axis=1)
    group = frame.groupby(key, dropna=False, sort=False).ngroup()
    order = pd.DataFrame({"group": group, "blank": -fullness, "id": frame["reading_id"]})
    order = order.sort_values(["group", "blank", "id"], kind="stable").index
    ordered, group = details.loc[order].reset_index(drop=True), group.loc[order].to_numpy()
    start = np.flatnonzero(np.r_[True, group[1:] != group[:-1]])
    best = ordered.iloc[np.repeat(start, np.diff(np.r_[start, len(group)]))].reset_index(drop=True)
    contained = (ordered.isna() | (ordered == best)).all(axis=1).to_numpy(copy=True)
    contained[start] = False
    return pd.Series(contained, index=order).loc[frame.index].to_numpy()
