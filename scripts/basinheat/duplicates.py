"""The same reading written down more than once."""

from __future__ import annotations

import numpy as np
import pandas as pd

from basinheat.ledger import Ledger
from basinheat.readers import InputTable

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
_READING_MAYBE = ["circulation_stopped", "logger_on_bottom"]
_NUMBERS_MAYBE = ["drilling", "casing_shoe"]
_DETAILS = [
    "vertical_depth",
    "temperature_std",
    "since_circulation",
    "circulation",
    "drilling",
    "hole_diameter",
    "mud_temperature",
    "date",
    "log_run",
]


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
    for name in _READING_MAYBE:
        # Where it is not noted, the identity is that of a table without the column.
        noted = (frame[name] != "").to_numpy(bool)
        mixed[noted] = (mixed[noted] ^ _hashed(frame.loc[noted, name])) * multiplier
    for name in _NUMBERS_MAYBE:
        noted = frame[name].notna().to_numpy(bool)
        part = pd.util.hash_array(np.round(frame.loc[noted, name].to_numpy(float), 6) + 0.0)
        mixed[noted] = (mixed[noted] ^ part) * multiplier
    return np.array([f"r{value:016x}" for value in mixed.tolist()], object)


def _hashed(text: pd.Series) -> np.ndarray:
    return pd.util.hash_array(text.to_numpy(object), categorize=True)


def merged(table: InputTable, ledger: Ledger) -> InputTable:
    """Leave one of readings that say the same, and the first of those that contradict each other.

    Exact copies are merged, and so is a reading that agrees with another of the same well, depth,
    temperature and kind in all it states and states less. A reading of the same well, kind,
    depth, date and log run with another temperature in a later file is a ``reading_conflict``.

    Parameters
    ----------
    table : InputTable
        Readings in the order of the files, with ``reading_id``.
    ledger : Ledger
        Takes the rows that are merged away.
    """
    again = table.frame["reading_id"].duplicated().to_numpy()
    table = ledger.refuse(table, again, "", "merged", "the same reading stands in another row.")
    key = ["well", "depth", "temperature", "kind"]
    twins = np.flatnonzero(table.frame.duplicated(key, keep=False).to_numpy())
    less = np.zeros(len(table), bool)
    if len(twins):
        less[twins] = _says_less(table.frame.iloc[twins], key)
    sentence = "another row of the same well, depth and temperature says the same and more."
    table = ledger.refuse(table, less, "", "merged", sentence)
    return _first_file_counts(table, ledger)


def _first_file_counts(table: InputTable, ledger: Ledger) -> InputTable:
    """Refuse what a later file says otherwise of a reading that date and log run single out."""
    frame = table.frame
    named = np.flatnonzero(((frame["date"] != "") & (frame["log_run"] != "")).to_numpy())
    some = frame.iloc[named]
    depth = some["depth"].fillna(some["vertical_depth"]).round(2)
    key = some[["well", "kind", "date", "log_run"]].assign(depth=depth)
    twice = key.duplicated(keep=False).to_numpy()
    named, key, some = named[twice], key[twice], some[twice]
    if not len(named):
        return table
    group = key.groupby([*key], dropna=False, sort=False).ngroup().to_numpy()
    file = pd.factorize(some["source_file"])[0]
    first = np.zeros(group.max() + 1, np.int64)
    first[group[::-1]] = np.arange(len(group))[::-1]
    of_first = file == file[first[group]]
    said = pd.MultiIndex.from_arrays([group, some["temperature"].round(6)])
    otherwise = ~of_first & ~said.isin(said[of_first])
    conflict = np.zeros(len(frame), bool)
    conflict[named[otherwise]] = True
    counts = some.iloc[first[group]]
    place = counts["source_file"].astype(object) + ", line " + counts["source_line"].astype(str)
    frame["_counts"], frame["_place"] = np.nan, ""
    frame.iloc[named, -2] = counts["temperature"].to_numpy(float)
    frame.iloc[named, -1] = place.to_numpy(object)
    table = ledger.screen(
        table,
        conflict,
        "temperature",
        "reading_conflict",
        "the temperature of this depth, date and log run is {temperature:g} degC here and "
        "{_counts:g} degC in {_place}, whose file is named first and counts.",
    )
    table = table.with_frame(table.frame.drop(columns=["_counts", "_place"]))
    return table


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
