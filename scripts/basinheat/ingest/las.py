"""Headers of well logs as rows of wells and readings, beside those of the tables."""

from __future__ import annotations

import re
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd

from basinheat import units
from basinheat.errors import UserError
from basinheat.flags import PREFIX, mark
from basinheat.ingest.conflicts import HEADER
from basinheat.ledger import Ledger
from basinheat.readers import InputTable
from basinheat.readers.canonical import Reading, canonical, filled
from basinheat.readers.inputs import source_name
from basinheat.readers.las import Item, read_header
from basinheat.readers.las_values import degrees, iso_date
from basinheat.readers.raw import RawTable
from basinheat.settings.columns import INPUT_COLUMNS
from basinheat.settings.files import matches
from basinheat.settings.inputs import Inputs, LasFile, TableFile

OF_WELL = ("x", "y", "ground_elevation", "datum_elevation", "water_depth", "total_depth")
OF_RUN = (
    *("temperature", "depth", "since_circulation", "circulation", "circulation_stopped"),
    *("logger_on_bottom", "hole_diameter", "mud_temperature", "date", "log_run"),
)
LENGTHS = ("ground_elevation", "datum_elevation", "water_depth", "total_depth", "depth")
Row = dict[str, Any]


def append(
    tables: dict[str, InputTable], inputs: Inputs, folder: str | Path, ledger: Ledger
) -> int:
    """Append what the headers of logs tell to the tables of wells and readings.

    Every file is at least one row of the readings, one per run that has a temperature; what it
    lacks refuses it like a row of a table. A file that is no LAS goes to the ledger.

    Parameters
    ----------
    tables : dict of InputTable
        ``wells`` and ``readings`` are replaced.
    inputs : Inputs
        Its ``las``: files or globs, and the mnemonics to look for.
    folder : str or Path
        Where relative paths start.
    ledger : Ledger
        Takes files that are no LAS.

    Returns
    -------
    int
        How many files are none.
    """
    none: list[Row] = []
    for number, spec in enumerate(inputs.las):
        files = matches(spec.file, folder)
        if not files:
            raise UserError(f"inputs.las[{number}].file: no file {spec.file}.")
        rows: dict[str, list[Row]] = {"wells": [], "readings": []}
        known = frozenset(name for _, names in spec.mnemonics for name in names)
        for path in files:
            label = {"source_file": source_name(path, folder)}
            try:
                items = read_header(path, known)
            except UserError as error:
                none.append({**label, "sentence": _told(path, label["source_file"], error)})
                continue
            well, readings = _rows(items, spec)
            rows["readings"] += [{**row, **label} for row in readings]
            if well:
                rows["wells"].append({**well, **label})
        for name, found in rows.items():
            config = len(getattr(inputs, name)) + number
            tables[name] = _with_rows(tables[name], found, spec, config)
    ledger.enter(
        pd.DataFrame(none, columns=["source_file", "sentence"]).assign(
            table="las", source_line=1, code="unreadable_file"
        )
    )
    return len(none)


def _told(path: str, label: str, error: UserError) -> str:
    """Return why a file could not be read, without the path on this machine."""
    return f"the file is no LAS: {error.faults[0].replace(path, label)}"


def _rows(items: list[Item], spec: LasFile) -> tuple[Row, list[Row]]:
    """Return the row of the well, {} where the header tells nothing of it, and its readings."""
    null = next((item.value for item in items if item.mnemonic == "NULL"), "")
    items = [item for item in items if item.value and not _same(item.value, null)]
    temperatures = set(spec.mnemonics.temperature)
    runs = sorted({item.run for item in items if item.mnemonic in temperatures and item.run})
    name = _found(items, spec.mnemonics.well, 0)
    well = {"well": name.value if name else "", "source_line": name.line if name else 1}
    readings = []
    for run in runs or [0]:
        row = {**well, "kind": spec.kind} | _cells(items, spec, OF_RUN, run)
        row["log_run"] = row["log_run"] or (str(run) if run else "")
        row["source_line"] = row.pop("_line", 0) or well["source_line"]
        readings.append(row)
    of_well = _cells(items, spec, OF_WELL, 0)
    of_well["crs_word"] = _crs(items, spec, of_well)
    usable = any(row["temperature"] and row["depth"] for row in readings)
    told = usable or any(of_well[name] for name in OF_WELL)
    return ({**well, **of_well} if well["well"] and told else {}), readings


def _cells(items: list[Item], spec: LasFile, columns: tuple[str, ...], run: int) -> Row:
    """Return the cells of columns, their units and headers."""
    row: Row = {}
    for column in columns:
        names = getattr(spec.mnemonics, column)
        item = _found(items, names, run, column)
        row[column] = _text(item, column, spec) if item else ""
        row[f"{column} unit"] = _unit(item, column) if item else ""
        row[f"{column} header"] = item.mnemonic if item else ", ".join(names)
        if column == "temperature" and item:
            row["_line"] = item.line
    return row


def _found(items: list[Item], names: list[str], run: int, column: str = "") -> Item | None:
    """Return the first item by the order of names: of the run, else of all runs."""
    fit = [item for item in items if _fits(item, column)]
    for wanted in (run, 0) if run else (None,):
        for name in names:
            for item in fit:
                if item.mnemonic == name and wanted in (None, item.run):
                    return item
    return None


def _fits(item: Item, column: str) -> bool:
    """Tell whether an item can be of a column: TIMC is a duration or a time of day."""
    if item.mnemonic != "TIMC" or column not in ("since_circulation", "circulation_stopped"):
        return True
    lasting = bool(item.unit) and units.named(item.unit, "h") is not None
    return lasting == (column == "since_circulation")


def _text(item: Item, column: str, spec: LasFile) -> str:
    """Return the value as a table would have it."""
    if column in ("x", "y"):
        return degrees(item.value)
    if column == "date":
        return iso_date(item.value, item.description, spec.date_format)
    timed = re.fullmatch(r"(\S*\d\S*)\s+(\d{1,2}[:.h]?\d{2}\S*)", item.value)
    if timed and column in ("circulation_stopped", "logger_on_bottom"):
        return f"{iso_date(timed[1], item.description, spec.date_format)} {timed[2]}"
    text = (
        re.sub(r"^[CFK]\s+(?=[-+\d])", "", item.value)
        if item.unit.upper() == "DEG"
        else (item.value)
    )
    between = re.fullmatch(r"\s*[-+\d.]+\s*[,;]\s*([-+\d.]+)\s*", text)
    return between[1] if between and column == "depth" else text


def _unit(item: Item, column: str) -> str:
    """Return the unit, where a blank parts it (DEG F) too; F of a length is feet."""
    letter = re.match(r"([CFK])\s+[-+\d]", item.value)
    if letter and item.unit.upper() == "DEG":
        return f"DEG {letter[1]}"
    return "ft" if item.unit.upper() == "F" and column in LENGTHS else item.unit


def _crs(items: list[Item], spec: LasFile, well: Row) -> str:
    """Return the CRS of a header's coordinates, "" for the map's."""
    try:
        x, y = float(well["x"]), float(well["y"])
    except ValueError:
        return spec.crs or ""
    if abs(x) > 360.0 or abs(y) > 90.0:
        return spec.crs or ""
    stated = _found(items, spec.mnemonics.crs, 0)
    return stated.value if stated else spec.crs or "EPSG:4326"


def _same(value: str, null: str) -> bool:
    """Tell whether a value is the null of its file."""
    try:
        return float(value) == float(null)
    except ValueError:
        return False


def _with_rows(table: InputTable, rows: list[Row], spec: LasFile, config: int) -> InputTable:
    """Return the table with rows of headers below its own."""
    if not rows:
        return table
    frame = pd.DataFrame(rows)
    contract = INPUT_COLUMNS[table.name]
    columns = {name: name for name in contract if name in frame}
    measured = {
        name: f"{name} unit" for name in columns if f"{name} unit" in frame and name not in "xy"
    }
    measured = {name: unit for name, unit in measured.items() if not contract[name].text}
    raw = RawTable(
        frame.astype({name: "str" for name in [*columns, *measured.values()]}),
        frame["source_line"].to_numpy(np.int64),
    )
    how = Reading(columns, {n: u for n, u in spec.units.items() if n in columns}, measured)
    out, _ = canonical(raw, how, TableFile(file=spec.file), table.name)
    first = len(table.headers)
    out["source_file"], out["config"] = frame["source_file"], config
    out["spec"] = first + np.arange(len(out))
    if "crs_word" in frame:
        out["crs_word"] = frame["crs_word"].astype("str")
    headers = [{name: row.get(f"{name} header", name) for name in columns} for row in rows]
    in_cell = out.get(f"{PREFIX}unit_in_cell", pd.Series(False, index=out.index)).to_numpy(bool)
    for name in ("temperature", "depth"):
        if name not in measured:
            continue
        bare = (frame[measured[name]] == "") & (frame[name] != "") & (name not in spec.units)
        mark(out, bare.to_numpy(bool) & ~in_cell, "unit_assumed")
    out[HEADER] = True
    own = table.frame.assign(**{HEADER: False})
    both = filled(pd.concat([own, out], ignore_index=True) if len(own) else _typed(own, out))
    both[HEADER] = both[HEADER].astype(bool)
    return InputTable(table.name, both, [*table.headers, *headers], table.broken, table.notes)


def _typed(own: pd.DataFrame, out: pd.DataFrame) -> pd.DataFrame:
    """Return the rows of headers with every column of a table that has no rows itself."""
    missing = own.columns.difference(out.columns, sort=False)
    blank = own[missing].reindex(out.index)
    return pd.concat([out, blank], axis=1)
