"""Tables as CSV in which no spreadsheet finds a formula."""

from __future__ import annotations

import os
import re
from pathlib import Path

import pandas as pd
import pyarrow as pa
import pyarrow.csv as pa_csv

_NUMBER = re.compile(r"[+-]?(\d+([.,]\d*)?|[.,]\d+)([eE][+-]?\d+)?")
_FORMULA = re.compile(r"\s*[=+\-@]|[\t\r]")


def write_csv(frame: pd.DataFrame, path: str | Path) -> None:
    """Write a table as CSV, whole or not at all, its text inert; numbers to 4 decimals."""
    part = Path(f"{path}.part")
    part.parent.mkdir(parents=True, exist_ok=True)
    columns = {}
    for name in frame.columns:
        values = frame[name]
        text = not pd.api.types.is_numeric_dtype(values)
        columns[name] = pa.array(
            [inert(value) for value in values.tolist()] if text else values.round(4),
            from_pandas=True,
        )
    with open(part, "wb") as file:
        file.write(f"{','.join(columns)}\n".encode())
        options = pa_csv.WriteOptions(include_header=False, quoting_style="needed")
        pa_csv.write_csv(pa.table(columns), file, options)
    os.replace(part, path)


def inert(value: str) -> str:
    """Return text that a spreadsheet does not evaluate: with an apostrophe in front.

    Examples
    --------
    >>> inert("=1+1"), inert("-12.5"), inert("BW-0413")
    ("'=1+1", '-12.5', 'BW-0413')
    """
    if not value[:1].isalnum() and _FORMULA.match(value) and not _NUMBER.fullmatch(value.strip()):
        return f"'{value}"
    return value
