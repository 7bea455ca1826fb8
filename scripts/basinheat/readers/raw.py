"""What every reader of a file format returns, and which reader reads which file."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field
from pathlib import Path

import numpy as np
import pandas as pd

from basinheat.errors import UserError
from basinheat.settings.inputs import TableFile


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
    """

    cells: pd.DataFrame
    lines: np.ndarray
    broken: list[tuple[int, str, str, str]] = field(default_factory=list)


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


def headers(path: str | Path, spec: TableFile) -> list[str]:
    """Return the headers of a file, in order."""
    return _module(path).headers(path, spec)


def _module(path: str | Path):
    """Return the reader for a file name; formats join here."""
    suffix = Path(path).suffix.lower()
    if suffix in (".parquet", ".xlsx", ".xls", ".gpkg", ".las"):
        raise UserError(f"{path}: {suffix} files are not read yet. Save the table as CSV.")
    from basinheat.readers import csv_text

    return csv_text
