"""What every reader of a file format returns, and which reader reads which file."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from importlib import import_module
from pathlib import Path
from types import ModuleType

import numpy as np
import pandas as pd

from basinheat.errors import UserError
from basinheat.settings.inputs import TableFile

_MODULES = {
    **dict.fromkeys((".csv", ".tsv", ".txt", ".dat"), "csv_text"),
    ".parquet": "parquet",
    **dict.fromkeys((".xlsx", ".xlsm"), "excel"),
    **dict.fromkeys((".gpkg", ".shp", ".geojson", ".json"), "vector"),
}


@dataclass
class RawTable:
    """Cells as written.

    Parameters
    ----------
    cells : DataFrame, (n,)
        Text, one column per wanted header.
    lines : ndarray, (n,)
        Line in the file where each record starts, 1 being the first.
    broken : list of tuple
        Records that could not be split into cells: line, first cell, code, sentence.
    crs : str
        CRS of the file's points, "" where the format has none.
    serial_day : str
        Day 0 of dates that stand there as numbers, "" where they never do.
    notes : list of tuple
        What was found out about the file: what, value.
    """

    cells: pd.DataFrame
    lines: np.ndarray
    broken: list[tuple[int, str, str, str]] = field(default_factory=list)
    crs: str = ""
    serial_day: str = ""
    notes: list[tuple[str, str]] = field(default_factory=list)


@dataclass(frozen=True)
class Head:
    """What a first look at a file tells.

    Parameters
    ----------
    headers : list of str
        Headers, in order.
    empty : bool
        Whether no row follows.
    crs : str
        CRS of the file's points, "" where there is none.
    """

    headers: list[str]
    empty: bool
    crs: str = ""


def read_raw(path: str | Path, spec: TableFile, wanted: Iterable[str]) -> RawTable:
    """Read the wanted columns of a file as text.

    Parameters
    ----------
    path : str or Path
        File.
    spec : TableFile
        How the config says to read it.
    wanted : iterable of str
        Headers; all must be there.
    """
    return _module(path).read(path, spec, list(wanted))


def look(path: str | Path, spec: TableFile, needed: Sequence[str] = ()) -> Head:
    """Return the headers of a file, and whether rows follow.

    Parameters
    ----------
    path : str or Path
        File.
    spec : TableFile
        How the config says to read it.
    needed : sequence of str, optional
        Headers by which the line of headers is known below title rows; those that the config
        names where none are given.
    """
    needed = needed or [*spec.columns.values(), *spec.more_headers]
    return _module(path).look(path, spec, list(needed))


def headers(path: str | Path, spec: TableFile, needed: Sequence[str] = ()) -> list[str]:
    """Return the headers of a file, in order."""
    return look(path, spec, needed).headers


def _module(path: str | Path) -> ModuleType:
    """Return the reader for a file name; formats join here."""
    suffix = Path(path).suffix.lower()
    if suffix == ".las":
        raise UserError(f"{path}: well logs are named under inputs.las.")
    if suffix not in _MODULES:
        known = ", ".join(_MODULES)
        raise UserError(f'{path}: files of the kind "{suffix}" are not read; known are {known}.')
    return import_module(f"basinheat.readers.{_MODULES[suffix]}")
