"""Well logs as the first look tells of them: the headers of all files of an entry together."""

from __future__ import annotations

from pathlib import Path

import pandas as pd

from basinheat.firstlook.inputfile import InputFile
from basinheat.ingest import las
from basinheat.ledger import Ledger
from basinheat.readers import InputTable, read_inputs
from basinheat.readers.inputs import source_name
from basinheat.settings.columns import INPUT_COLUMNS
from basinheat.settings.files import matches
from basinheat.settings.inputs import Inputs, LasFile, ReadingsFile, TableFile, WellsFile

FROM_HEADER = "the header of each file"


def logs(inputs: Inputs, folder: str) -> list[InputFile]:
    """Return wells and readings that the headers of logs hold, two entries per entry of the config.

    Parameters
    ----------
    inputs : Inputs
        Of the config.
    folder : str
        Where its relative paths start.
    """
    tables = {name: read_inputs(name, [], folder) for name in ("wells", "readings")}
    ledger = Ledger()
    las.append(tables, inputs, folder, ledger)
    unread = ledger.table()["source_file"]
    found = []
    for number, spec in enumerate(inputs.las):
        names = frozenset(source_name(path, folder) for path in matches(spec.file, folder))
        here = source_name(Path(folder) / spec.file, folder)
        label = here if len(names) == 1 else f"{here}, {len(names):,} files"
        for name, table in tables.items():
            # Entries of logs are numbered after those of the tables.
            config = table.frame.get("config", pd.Series(dtype=float))
            frame = table.frame[(config == len(getattr(inputs, name)) + number).to_numpy(bool)]
            none = int(unread.isin(sorted(names)).sum()) if name == "readings" else 0
            columns = _columns(table, frame, spec)
            entry = _as_table(name, columns, spec)
            place = f"inputs.las[{number}]"
            found.append(
                InputFile(name, place, spec.file, label, names, entry, [], columns, frame, none, [])
            )
    return found


def _columns(table: InputTable, frame: pd.DataFrame, spec: LasFile) -> dict[str, str]:
    """Return the columns that any header fills, and the mnemonics they were found under."""
    found = {}
    for name, column in INPUT_COLUMNS[table.name].items():
        cells = frame.get(name if column.text else f"as_written:{name}")
        if cells is not None and (cells != "").any():
            told = set(table.header(name, frame.loc[cells != "", "spec"]))
            # Under which mnemonic the name of the well stood is not kept: then what was sought.
            sought = told == {name}
            found[name] = ", ".join(
                getattr(spec.mnemonics, name, [name]) if sought else sorted(told)
            )
    return found


def _as_table(table: str, columns: dict[str, str], spec: LasFile) -> TableFile:
    """Return an entry of the config that says the same of a table: units and CRS by row."""
    numbers = [name for name in columns if not INPUT_COLUMNS[table][name].text]
    units = dict.fromkeys([name for name in numbers if name not in ("x", "y")], FROM_HEADER)
    if table == "wells":
        return WellsFile(file=spec.file, unit_columns=units, crs_column=FROM_HEADER)
    return ReadingsFile(file=spec.file, unit_columns=units, kind=spec.kind)
