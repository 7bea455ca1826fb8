"""The ledgers of refused rows, joined, and as CSV in which no spreadsheet finds a formula."""

from __future__ import annotations

import re
from pathlib import Path

import pandas as pd

from basinheat import tables

_ORDER = ["table", "source_file", "source_line", "column", "code", "value", "sentence"]
_NUMBER = re.compile(r"[+-]?(\d+([.,]\d*)?|[.,]\d+)([eE][+-]?\d+)?")
_FORMULA = re.compile(r"\s*[=+\-@]|[\t\r]")


def join(*ledgers: pd.DataFrame) -> pd.DataFrame:
    """Join the ledgers of all stages (``tables.Rejected``), by file and line."""
    joined = pd.concat([tables.Rejected.conform(one) for one in ledgers], ignore_index=True)
    return joined.sort_values(_ORDER, kind="stable", ignore_index=True)


def write(rejected: pd.DataFrame, path: str | Path) -> None:
    """Write the ledger as CSV in which no spreadsheet finds a formula.

    Text that starts with = + - @ (numbers apart), a tab or a carriage return gets an apostrophe in
    front: a spreadsheet then shows it and does not run it.
    """
    safe = join(rejected)
    for name, column in tables.Rejected.columns.items():
        if column.kind == "text":
            safe[name] = [inert(value) for value in safe[name]]
    tables.Rejected.save_csv(safe, path)


def inert(value: str) -> str:
    """Return text that a spreadsheet does not evaluate.

    Examples
    --------
    >>> inert("=1+1"), inert("-12.5"), inert("BW-0413")
    ("'=1+1", '-12.5', 'BW-0413')
    """
    if _FORMULA.match(value) and not _NUMBER.fullmatch(value.strip()):
        return f"'{value}"
    return value
