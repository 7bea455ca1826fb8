"""Whether the input tables of a config exist and hold the columns and units it says."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import TYPE_CHECKING

from basinheat.errors import UserError
from basinheat.settings import schemas
from basinheat.settings.columns import INPUT_COLUMNS, ONE_OF
from basinheat.settings.faults import got, nearest
from basinheat.settings.files import located, matches
from basinheat.settings.inputs import LasFile, LayersFile, Mnemonics, TableFile

if TYPE_CHECKING:
    from basinheat.conductivity.mixtures import Vocabulary

# Units that need no library of units (a second at each start) to be understood.
_PLAIN_UNITS = {
    "m": ("m", "ft", "km", "in", "mm", "cm"),
    "degC": ("degC", "degF", "K"),
    "K": ("K",),
    "h": ("h", "min", "d"),
    "W/(m K)": ("W/(m K)",),
    "uW/m3": ("uW/m3",),
    "deg": ("deg",),
    "mW/m2": ("mW/m2",),
    "K/km": ("K/km",),
}
_MARKS = ";\t|,"  # separators of columns, as likely ones first
_SHOWN = 12  # headers that a line lists: as many as are read at a glance (no source)


def table_faults(path: str, kind: str, table: TableFile, folder: str | Path) -> list[str]:
    """Return one line per fault of one input table.

    Parameters
    ----------
    path : str
        Where the table stands in the config.
    kind : {"wells", "readings", "layers", "surveys", "heat_flow"}
        What its rows are.
    table : TableFile
        The entry of the config, valid by itself.
    folder : str or Path
        Where relative paths start.
    """
    return [
        *_schema(path, kind, table),
        *_names(path, kind, table),
        *_units(path, kind, table),
        *_zeros(path, kind, table),
        *_headers(path, kind, table, folder),
    ]


def rock_faults(path: str, table: LayersFile, words: Vocabulary) -> list[str]:
    """Return one line per formation of a wide file whose rock stands for nothing.

    Rows of the other shapes name their rock in the file: what is unknown there is told row by row
    in the ledger.
    """
    return [
        f"{path}.tops.{header}: {got(rock)} {meaning.why}"
        for header, rock in table.tops.items()
        if (meaning := words.meaning(rock)).code
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
    geometry = schemas.GEOMETRY if schemas.is_places(table.file) else {}
    present = {**_ready(kind, table), **geometry, **dict.fromkeys(table.given, "")}
    return faults + _required(f"{path}.columns", kind, {**present, **table.columns})


def _ready(kind: str, table: TableFile) -> dict[str, str]:
    return schemas.column_list(table, kind).columns


def _schema(path: str, kind: str, table: TableFile) -> list[str]:
    """Return a line where a ready-made list is for other tables."""
    name = table.known_columns
    if name is None or _ready(kind, table):
        return []
    kinds = " and ".join(f"inputs.{each}" for each in schemas.SCHEMAS[name])
    return [f"{path}.schema: {name} is for {kinds}"]


def _zeros(path: str, kind: str, table: TableFile) -> list[str]:
    """Return the faults of the columns in which zero is to mean missing."""
    contract = INPUT_COLUMNS[kind]
    return [
        f"{path}.zero_is_missing: {got(name)} is no column of numbers of {kind}; "
        f"{nearest(name, [each for each, column in contract.items() if not column.text])}"
        for name in table.zero_is_missing or ()
        if name not in contract or contract[name].text
    ]


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


def _units(path: str, kind: str, table: TableFile) -> list[str]:
    """Return the faults of the units, of columns and of rows."""
    contract, faults = INPUT_COLUMNS[kind], []
    columns = {**_ready(kind, table), **table.columns}
    stated = [("units", name, unit) for name, unit in table.units.items()]
    stated += [("unit_columns", name, header) for name, header in table.unit_columns.items()]
    for key, name, value in stated:
        place = f"{path}.{key}.{name}"
        if name not in contract:
            faults.append(f"{place}: no such column; {nearest(name, contract)}")
        elif columns and name not in columns and name not in table.given:
            faults.append(f"{place}: {name} is not among the columns that are read")
        elif contract[name].text or name in ("x", "y"):
            faults.append(f"{place}: {name} takes no unit (got {got(value)})")
        elif key == "units":
            faults += [f"{place}: {fault}" for fault in _unit(value, contract[name].unit)]
    return faults


def las_units(path: str, logs: LasFile) -> list[str]:
    """Return the faults of the units of well logs whose headers state none."""
    contract = {**INPUT_COLUMNS["wells"], **INPUT_COLUMNS["readings"]}
    faults = []
    for name, unit in logs.units.items():
        place = f"{path}.units.{name}"
        if name not in Mnemonics.model_fields or name not in contract or contract[name].text:
            faults.append(f"{place}: no column of numbers in the headers of logs")
        else:
            faults += [f"{place}: {fault}" for fault in _unit(unit, contract[name].unit)]
    return faults


def _unit(unit: str, default: str) -> list[str]:
    """Return what is wrong with a unit for a column of a default unit."""
    if unit in _PLAIN_UNITS.get(default, ()):
        return []
    from basinheat.units import same_dimension

    choice = f"choose one of {', '.join(_PLAIN_UNITS.get(default, (default or 'percent',)))}"
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
    from basinheat.readers import look
    from basinheat.readers.inputs import no_crs

    faults, empty = [], []
    for file in files:
        try:
            places = schemas.is_places(file)
            head = look(file, table, schemas.all_needed(table, kind, places))
        except UserError as error:
            faults += [f"{path}.file: {fault}" for fault in error.faults]
            continue
        faults += _of_file(path, kind, table, file, head.headers)
        faults += [f"{path}: {fault}" for fault in [no_crs(file, table, head)] if fault]
        empty += [file] if head.empty else []
    if kind in ("wells", "readings") and len(empty) == len(files):
        way_out = "name the file that holds them"
        faults += [f"{path}.file: {file} has headers and no rows; {way_out}" for file in empty]
    return faults


def _of_file(path: str, kind: str, table: TableFile, file: str, present: list[str]) -> list[str]:
    """Return the faults of the headers of one file."""
    from basinheat.readers.header import clean

    ready, places = _ready(kind, table), schemas.is_places(file)
    needed = schemas.needed(table, kind, places)
    wanted = [*needed.values(), *table.columns.values(), *table.more_headers]
    if not any(clean(header) in present for header in wanted) and _prose(table, places, present):
        return [
            f"{path}.skip_lines: {file} has none of the headers in its first lines, of which one "
            f'is "{present[0][:40]}"; state how many lines stand before them, or the `delimiter` '
            "that parts them"
        ]
    stated = {f"columns.{name}": header for name, header in table.columns.items()}
    stated |= {f"unit_columns.{name}": header for name, header in table.unit_columns.items()}
    stated |= {f"tops.{header}": header for header in table.more_headers}
    crs_column = getattr(table, "crs_column", None)
    stated |= {"crs_column": crs_column} if crs_column else {}
    if ready:
        stated |= {
            f"schema ({name})": header
            for name, header in needed.items()
            if name not in table.columns
        }
    faults = [
        f"{path}.{key}: {file} has no column {got(header)}; {_likely(key, header, present)}"
        for key, header in stated.items()
        if clean(header) not in present
    ]
    read = schemas.found(table, kind, present, places)
    faults += [
        f"{path}.columns.{name}: {file} has {got(header)} {present.count(clean(header))} times; "
        "rename all but one"
        for name, header in read.items()
        if present.count(clean(header)) > 1
    ]
    if not table.columns and not ready:
        geometry = schemas.GEOMETRY if places else {}
        here = dict.fromkeys([*present, *table.given, *geometry], "")
        absent = _required(f"{path}.columns", kind, here)
        faults += [f"{fault}: {file} has {_told(kind, present)}" for fault in absent]
    return faults


def _prose(table: TableFile, places: bool, present: list[str]) -> bool:
    """Tell whether what was taken for headers is a line of prose: one cell, cut by no mark."""
    alone = [each for each in present if each]
    return (
        table.skip_lines == "auto"
        and not places
        and len(alone) < 2
        and not any(mark in each for each in alone for mark in _MARKS)
    )


def _likely(key: str, header: str, present: list[str]) -> str:
    """Return a hint at the header that was meant: one spelled alike, or one of that meaning."""
    from difflib import get_close_matches

    from basinheat.firstlook.headers import likely_header

    alike = get_close_matches(header.casefold(), [each.casefold() for each in present], 1)
    meant = None if alike else likely_header(key.removeprefix("columns."), present)
    return nearest(header, present) if meant is None else f"may it be {got(meant)}?"


def _told(kind: str, present: list[str]) -> str:
    """Return the headers of a file, and the delimiter they may have in truth."""
    from basinheat.firstlook.proposals import proposal

    clear = ["".join(c if c.isprintable() else "?" for c in header[:40]) for header in present]
    text = "the headers " + ", ".join(got(header) for header in clear[:_SHOWN])
    text += f" and {len(clear) - _SHOWN} more" if len(clear) > _SHOWN else ""
    mark = next((m for m in _MARKS if len(present) == 1 and m in present[0]), None)
    if mark:
        return f"{text}; state delimiter: {mark!r}"
    likely = proposal(kind, present)
    return f"{text}; map them under `columns`" + (f", perhaps {likely}" if likely else "")
