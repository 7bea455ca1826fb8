"""Parquet: typed columns as text; rows are counted from 1."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd

from basinheat.errors import UserError
from basinheat.readers import header
from basinheat.readers.raw import Head, RawTable
from basinheat.readers.typed import as_text
from basinheat.settings.inputs import TableFile


def look(path: str | Path, spec: TableFile, needed: list[str]) -> Head:
    """Return the names of the columns, and whether there are rows."""
    file = _opened(path)
    return Head(_names(file), file.metadata.num_rows == 0)


def read(path: str | Path, spec: TableFile, wanted: list[str]) -> RawTable:
    """Read the wanted columns as text.

    Parameters
    ----------
    path : str or Path
        File.
    spec : TableFile
        Decimal mark.
    wanted : list of str
        Names of columns.

    Returns
    -------
    RawTable
    """
    file = _opened(path)
    names = _names(file)
    own = file.schema_arrow.names
    rows = file.metadata.num_rows
    cells = {}
    for name in wanted:
        column = own[header.place(name, names, path)]
        try:
            values = file.read(columns=[column])[column]
            values.validate(full=True)
        except Exception as error:  # a damaged file raises a dozen kinds
            raise _unreadable(path, error) from None
        if len(values) != rows:
            raise _unreadable(path, ValueError(f"{len(values)} of {rows} rows"))
        cells[name] = as_text(values, spec.decimal, f'{path}: column "{name}"')
    return RawTable(pd.DataFrame(cells, index=range(rows)), np.arange(1, rows + 1, dtype=np.int64))


def _names(file: Any) -> list[str]:
    """Return the names of the columns, as headers are compared."""
    return [header.clean(name) for name in file.schema_arrow.names]


def _opened(path: str | Path) -> Any:
    """Return the open file."""
    from pyarrow import parquet

    try:
        file = parquet.ParquetFile(path)
        _names(file)
        return file
    except Exception as error:  # a damaged file raises a dozen kinds
        raise _unreadable(path, error) from None


def _unreadable(path: str | Path, error: Exception) -> UserError:
    reason = str(error).split("\n")[0].rstrip(".")
    return UserError(f"{path}: is no Parquet file that can be read ({reason}).")
