"""The ledgers of refused rows, joined, and as CSV in which no spreadsheet finds a formula."""

from __future__ import annotations

from pathlib import Path

import pandas as pd

from basinheat import tables

_ORDER = ["table", "source_file", "source_line", "column", "code", "value", "sentence"]


def join(*ledgers: pd.DataFrame) -> pd.DataFrame:
    """Join the ledgers of all stages (``tables.Rejected``), by file and line."""
    joined = pd.concat([tables.Rejected.conform(one) for one in ledgers], ignore_index=True)
    return joined.sort_values(_ORDER, kind="stable", ignore_index=True)


def write(rejected: pd.DataFrame, path: str | Path) -> None:
    """Write the ledger as CSV in which no spreadsheet finds a formula.

    Text that starts with = + - @ (numbers apart), a tab or a carriage return gets an apostrophe in
    front: a spreadsheet then shows it and does not run it.
    """
    tables.Rejected.save_csv(join(rejected), path)
