"""Whether the input tables of a config exist and hold the columns and units it says."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path

from basinheat.errors import UserError
from basinheat.settings.columns import INPUT_COLUMNS, ONE_OF, InputColumn
from basinheat.settings.faults import got, nearest
from basinheat.settings.files import located, matches
from basinheat.settings.inputs import TableFile

# Units that need no library of units (a second at each start) to be understood.
_PLAIN_UNITS = {
    "m": ("m", "ft", "km", "in", "mm", "cm"),
    "degC": ("degC", "degF", "K"),
    "K": ("K",),
    "h": ("h", "min", "d"),
    "W/(m K)": ("W/(m K)",),
    "uW/m3": ("uW/m3",),
    "deg": ("deg",),
}


def table_faults(path: str, kind: str, table: TableFile, folder: str | Path) -> list[str]:
    """Return one line per fault of one input table.

    Parameters
    ----------
    path : str
        Where the table stands in the config.
    kind : {"wells", "readings", "layers", "surveys"}
        What its rows are.
    table : TableFile
        The entry of the config, valid by itself.
    folder : str or Path
        Where relative paths start.
    """
    contract = INPUT_COLUMNS[kind]
    return [
        *_names(path, kind, table),
        *_units(path, table, contract),
        *_headers(path, kind, table, folder),
    ]


def _names(path: str, kind: str, table: TableFile) -> list[str]:
    """Return the faults of the names on the left of ``columns``."""
    if not table.columns:
        return []
    contract = INPUT_COLUMNS[kind]
    faults = [
        f"{path}.columns.{name}: no column of {kind}; {nearest(name, contract)}"
        for name in table.columns
        if name not in contract
    ]
    return faults + _required(f"{path}.columns", kind, table.columns)


def _required(path: str, kind: str, present: Mapping[str, str]) -> list[str]:
    """Return the columns that every row needs and that are not there."""
    faults = [
        f"{path}: {name} is missing ({column.description})"
        for name, column in INPUT_COLUMNS[kind].items()
        if column.required and name not in present
    ]
    faults += [
        f"{path}: {' or '.join(names)} is missing"
        for names in ONE_OF.get(kind, ())
        if not any(name in present for name in names)
    ]
    return faults


def _units(path: str, table: TableFile, contract: Mapping[str, InputColumn]) -> list[str]:
    """Return the faults of the units."""
    faults = []
    for name, unit in table.units.items():
        place = f"{path}.units.{name}"
        if name not in contract:
            faults.append(f"{place}: no such column; {nearest(name, contract)}")
        elif table.columns and name not in table.columns:
            faults.append(f"{place}: {name} is not among the columns that are read")
        elif contract[name].text or name in ("x", "y"):
            faults.append(f"{place}: {name} takes no unit (got {got(unit)})")
        else:
            faults += [f"{place}: {fault}" for fault in _unit(unit, contract[name].unit)]
    return faults


def _unit(unit: str, default: str) -> list[str]:
    """Return what is wrong with a unit for a column of a default unit."""
    if unit in _PLAIN_UNITS.get(default, ()):
        return []
    from basinheat.units import same_dimension

    choice = f"choose one of {', '.join(_PLAIN_UNITS.get(default, ('percent',)))}"
    try:
        fits = same_dimension(unit, default)
    except ValueError:
        return [f"{got(unit)} is not a unit; {choice}"]
    return [] if fits else [f"{got(unit)} is a unit of something else; {choice}"]


def _headers(path: str, kind: str, table: TableFile, folder: str | Path) -> list[str]:
    """Return the faults of the files: none found, not readable, a header that is absent."""
    files = matches(table.file, folder)
    if not files:
        looked_for = located(table.file, folder)[0]
        return [
            f"{path}.file: no file {looked_for} (relative paths start at the config's own folder)"
        ]
    from basinheat.readers import headers

    faults = []
    for file in files:
        try:
            present = headers(file, table)
        except UserError as error:
            faults += [f"{path}.file: {fault}" for fault in error.faults]
            continue
        faults += [
            f"{path}.columns.{name}: {file} has no column {got(header)}; {nearest(header, present)}"
            for name, header in table.columns.items()
            if header not in present
        ]
        if not table.columns:
            faults += [
                f"{fault}: {file} has {_told(present)}"
                for fault in _required(f"{path}.columns", kind, dict.fromkeys(present, ""))
            ]
    return faults


def _told(present: list[str]) -> str:
    """Return the first headers of a file, and the delimiter they may have in truth."""
    shown = ["".join(c if c.isprintable() else "?" for c in header[:40]) for header in present[:4]]
    text = "the headers " + ", ".join(got(header) for header in shown)
    mark = next((m for m in ";\t|," if len(present) == 1 and m in present[0]), None)
    return text + (f"; state delimiter: {mark!r}" if mark else "; map them under `columns`")
