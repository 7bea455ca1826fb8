"""Spoil rows the way archives do, and keep a list of what was spoiled."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pandas as pd

COLUMNS = ("code", "table", "well", "line", "column", "value", "expected")
Tables = dict[str, pd.DataFrame]
Edit = Callable[[pd.Series], str]


def nothing() -> pd.DataFrame:
    """Return an empty list of spoiled rows."""
    return pd.DataFrame({name: pd.Series(dtype=object) for name in COLUMNS})


def spoil(rng: np.random.Generator, tables: Tables) -> tuple[Tables, pd.DataFrame]:
    """Spoil some rows, no well twice.

    Parameters
    ----------
    rng : numpy.random.Generator
        Source of randomness.
    tables : dict of str to pandas.DataFrame
        wells, readings, layers, surveys as text; left as they are.

    Returns
    -------
    tables : dict of str to pandas.DataFrame
        With spoiled rows.
    dirt : pandas.DataFrame
        code, table, well, line (in the file, the header being 1), column, value, expected: what
        a careful reader makes of it (rejected, merged, noticed: rejected or flagged, or kept).
    """
    archive = _Archive(rng, tables)
    _spoil_cells(archive)
    _spoil_sets(archive)
    _spoil_rows(archive)
    _spoil_wells(archive)
    return archive.tables, archive.notes()


class _Archive:
    """The tables while they are spoiled; rows keep an identity until lines are counted."""

    def __init__(self, rng: np.random.Generator, tables: Tables):
        self.rng = rng
        self.tables = {name: table.reset_index(drop=True) for name, table in tables.items()}
        self.spoiled: set[str] = set(tables["surveys"].API)
        self._notes: list[tuple[str, str, int, str, str]] = []

    def pick(self, name: str, mask: pd.Series) -> int | None:
        """Return a row of a well not yet spoiled, None where there is none."""
        table = self.tables[name]
        rows = table.index[mask & ~table.API.isin(self.spoiled)]
        if not len(rows):
            return None
        row = int(self.rng.choice(rows))
        self.spoiled.add(table.API[row])
        return row

    def note(self, code: str, name: str, row: int, column: str, expected: str) -> None:
        """Remember what was done to a row."""
        self._notes.append((code, name, row, column, expected))

    def set(self, code: str, name: str, row: int, column: str, value: str, expected: str) -> None:
        """Change a cell and remember it."""
        self.tables[name].loc[row, column] = value
        self.note(code, name, row, column, expected)

    def add(self, name: str, after: int, row: pd.Series) -> int:
        """Add a row behind another and return its identity."""
        table = self.tables[name]
        identity = int(table.index.max()) + 1
        place = table.index.get_loc(after) + 1
        new = pd.DataFrame([row.to_numpy()], columns=table.columns, index=[identity])
        self.tables[name] = pd.concat([table.iloc[:place], new, table.iloc[place:]])
        return identity

    def notes(self) -> pd.DataFrame:
        """Return the list of spoiled rows, by table and line."""
        rows = []
        for code, name, row, column, expected in self._notes:
            table = self.tables[name]
            value = table.loc[row, column] if column else ""
            line = table.index.get_loc(row) + 2
            rows.append((code, name, table.API[row], line, column, value, expected))
        out = pd.DataFrame(rows, columns=list(COLUMNS))
        return out.sort_values(["table", "line", "code"], kind="stable").reset_index(drop=True)


def _log(archive: _Archive, shallowest_ft: float = 0.0) -> pd.Series:
    """Return which readings are logs deeper than a limit."""
    readings = archive.tables["readings"]
    deep = pd.to_numeric(readings.DEPTH_FT, errors="coerce") > shallowest_ft
    return (readings.SOURCE == "LOG") & deep & (readings.BHT_F != "")


def _spoil_cells(archive: _Archive) -> None:
    """Spoil single cells of readings."""
    edits: list[tuple[str, str, float, Edit, str]] = [
        ("celsius_in_fahrenheit_column", "BHT_F", 8500.0, _in_celsius, "noticed"),
        ("metres_in_feet_column", "DEPTH_FT", 8500.0, _in_metres, "noticed"),
        ("missing_word", "BHT_F", 0.0, lambda _: "nil", "rejected"),
        ("approximate_number", "BHT_F", 0.0, lambda row: f"~{row.BHT_F}", "noticed"),
        ("negative_depth", "DEPTH_FT", 0.0, lambda row: f"-{row.DEPTH_FT}", "rejected"),
        ("below_surface_temperature", "BHT_F", 4000.0, lambda _: "36", "rejected"),
        ("blank_temperature", "BHT_F", 0.0, lambda _: "", "rejected"),
        ("missing_code", "BHT_F", 0.0, lambda _: "-999.25", "rejected"),
        ("deeper_than_total_depth", "DEPTH_FT", 5000.0, _deeper, "noticed"),
        ("too_hot", "BHT_F", 5000.0, lambda row: f"{row.BHT_F}0", "rejected"),
        ("well_name_padded", "API", 5000.0, lambda row: f" {row.API} ", "kept"),
    ]
    for code, column, shallowest, edit, expected in edits:
        row = archive.pick("readings", _log(archive, shallowest))
        if row is not None:
            value = edit(archive.tables["readings"].loc[row])
            archive.set(code, "readings", row, column, value, expected)


def _in_celsius(row: pd.Series) -> str:
    return f"{(float(row.BHT_F) - 32.0) / 1.8:.0f}"


def _in_metres(row: pd.Series) -> str:
    return f"{float(row.DEPTH_FT) * 0.3048:.0f}"


def _deeper(row: pd.Series) -> str:
    return f"{float(row.DEPTH_FT) + 4000.0:.0f}"


def _spoil_sets(archive: _Archive) -> None:
    """Spoil noted times, and copy a reading to a later run."""
    readings = archive.tables["readings"]
    timed = _log(archive) & (readings.TSC_H != "") & (readings.CIRC_H != "")
    for column, value, code in (
        ("TSC_H", "0", "zero_time"),
        ("TSC_H", "0.0", "zero_time"),
        ("CIRC_H", "0", "zero_time"),
        ("TSC_H", "nil", "missing_word_in_time"),
        ("TSC_H", "", "blank_time"),
    ):
        row = archive.pick("readings", timed)
        if row is not None:
            archive.set(code, "readings", row, column, value, "kept")
    first = timed & (readings.RUN.str[-1:] == "A")
    row = archive.pick("readings", first)
    if row is not None:
        copy = archive.tables["readings"].BHT_F[row]
        archive.set("copied_reading", "readings", row + 1, "BHT_F", copy, "noticed")


def _spoil_rows(archive: _Archive) -> None:
    """Add rows: exact duplicates, readings of wells nobody knows; spoil layers."""
    for _ in range(2):
        row = archive.pick("readings", _log(archive))
        if row is not None:
            new = archive.add("readings", row, archive.tables["readings"].loc[row])
            archive.note("duplicate_row", "readings", new, "", "merged")
    for name in ("BW-9001", "BW-9001"):
        readings = archive.tables["readings"]
        last = int(readings.index[-1])
        row = archive.pick("readings", _log(archive))
        if row is not None:
            new = archive.add(
                "readings", last, readings.loc[row].where(readings.columns != "API", name)
            )
            archive.note("unknown_well", "readings", new, "API", "rejected")
    everywhere = archive.tables["layers"].API != ""
    row = archive.pick("layers", everywhere)
    if row is not None:
        archive.set("unknown_lithology", "layers", row, "LITH", "wacke?", "noticed")
    row = archive.pick("layers", everywhere)
    if row is not None:
        layer = archive.tables["layers"].loc[row]
        archive.tables["layers"].loc[row, "TOP_FT"] = layer.BASE_FT
        archive.set("base_above_top", "layers", row, "BASE_FT", layer.TOP_FT, "rejected")


def _spoil_wells(archive: _Archive) -> None:
    """Spoil wells: twice, swapped, without rig floor, with an awkward name, without survey."""
    onshore = archive.tables["wells"].GL_FT != ""
    # About 80 m, and about 3 km: the same well noted again, and two that cannot both be right.
    for code, shift, expected in (
        ("well_twice_nearby", 0.0007, "merged"),
        ("well_twice_far", 0.0270, "noticed"),
    ):
        row = archive.pick("wells", onshore)
        if row is not None:
            well = archive.tables["wells"].loc[row].copy()
            well["LAT"] = f"{float(well.LAT) + shift:.6f}"
            new = archive.add("wells", row, well)
            archive.note(code, "wells", new, "LAT", expected)
            onshore = archive.tables["wells"].GL_FT != ""
    row = archive.pick("wells", onshore)
    if row is not None:
        well = archive.tables["wells"].loc[row]
        archive.tables["wells"].loc[row, "LONG"] = well.LAT
        archive.set("longitude_latitude_swapped", "wells", row, "LAT", well.LONG, "rejected")
    for code, column, value, expected in (
        ("missing_datum", "KB_FT", "", "noticed"),
        ("missing_datum", "KB_FT", "NA", "noticed"),
        ("text_in_number", "GL_FT", "unkn", "noticed"),
        ("blank_coordinate", "LONG", "", "rejected"),
    ):
        row = archive.pick("wells", onshore)
        if row is not None:
            archive.set(code, "wells", row, column, value, expected)
    _rename(archive)
    _lose_survey(archive)


def _rename(archive: _Archive) -> None:
    """Give a well a name that is markup, a path and needs quoting, all in one."""
    row = archive.pick("wells", archive.tables["wells"].GL_FT != "")
    if row is None:
        return
    old, new = archive.tables["wells"].API[row], 'BW-../7, "A" & <b>ST1</b>'
    for table in archive.tables.values():
        table.loc[table["API"] == old, "API"] = new
    archive.note("awkward_name", "wells", row, "API", "kept")


def _lose_survey(archive: _Archive) -> None:
    """Lose the survey of a deviated well, which then looks vertical."""
    surveys = archive.tables["surveys"]
    if surveys.API.nunique() < 2:
        return
    lost = archive.rng.choice(np.unique(surveys.API))
    archive.tables["surveys"] = surveys[surveys["API"] != lost]
    wells = archive.tables["wells"]
    archive.note("survey_lost", "wells", int(wells.index[wells["API"] == lost][0]), "API", "kept")
