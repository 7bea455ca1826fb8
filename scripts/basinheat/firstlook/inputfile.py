"""One file of the config as one input table: its entry, its rows as read."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import pandas as pd

from basinheat.settings import schemas
from basinheat.settings.columns import INPUT_COLUMNS
from basinheat.settings.inputs import TableFile


@dataclass(frozen=True)
class InputFile:
    """One file of the config as one input table.

    Parameters
    ----------
    table : str
        wells, readings, layers or surveys.
    place : str
        Where it stands in the config: ``inputs.readings[0]``.
    path : str
        The file.
    label : str
        How the file is called.
    sources : frozenset of str
        How it is called in tables and ledger; one name for each of the well logs of an entry.
    spec : TableFile
        Its entry of the config.
    headers : list of str
        All headers of the file, in order.
    columns : dict
        Canonical name to header, of those that are read.
    frame : DataFrame
        Its rows as read, before any rule.
    broken : int
        Records that could not be split into cells.
    notes : list of dict
        What the reader found out about the file.
    """

    table: str
    place: str
    path: str
    label: str
    sources: frozenset[str]
    spec: TableFile
    headers: list[str]
    columns: dict[str, str]
    frame: pd.DataFrame
    broken: int
    notes: list[dict[str, Any]]

    @property
    def unread(self) -> list[str]:
        """Return the table of the ledger that holds logs that are none."""
        return ["las"] if self.place.startswith("inputs.las") and self.table == "readings" else []

    def unit(self, name: str) -> str:
        """Return the unit that the numbers of a column are read in, where it is not by row."""
        stated = schemas.units_of(self.spec, self.table)
        return stated.get(name, INPUT_COLUMNS[self.table][name].unit)

    def with_columns(self, columns: dict[str, str]) -> dict[str, str]:
        """Return columns as they would be stated: where none are, all that are read now too."""
        stated = self.spec.columns or schemas.column_list(self.spec, self.table).columns
        return columns if stated else {**self.columns, **columns}

    @property
    def unit_columns(self) -> dict[str, str]:
        """Return the headers of the columns that hold each row's units, by canonical name."""
        return schemas.unit_columns(self.spec, self.table, self.headers)
