"""The ledger of refused rows."""

from pathlib import Path

import pandas as pd

from basinheat.tables.contract import Table, text
from basinheat.tables.contract import count as whole
from basinheat.tables.spreadsheet import write_csv


class Rejected(Table):
    """One row per refused or merged input row."""

    columns = {
        "table": text(
            "wells, readings, layers or surveys; values: a cell dropped from a row that is kept; "
            "decisions: what became of a reviewer's line"
        ),
        "source_file": text("input file"),
        "source_line": whole("line in the input file"),
        "well": text("well as written"),
        "column": text("column at fault"),
        "value": text("value at fault, as written"),
        "code": text("rule that refused it, in words"),
        "sentence": text("what is wrong and the way out"),
        "reading_id": text("identity of a refused reading, to name it in the decisions"),
    }

    @classmethod
    def save_csv(cls, frame: pd.DataFrame, path: str | Path) -> None:
        """Write the ledger as CSV, whole or not at all, its text inert."""
        write_csv(cls.conform(frame), path)
