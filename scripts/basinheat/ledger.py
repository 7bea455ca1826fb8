"""The ledger while it is written: every row that leaves a table leaves a line here."""

from __future__ import annotations

import numpy as np
import pandas as pd

from basinheat.flags import mark
from basinheat.readers import InputTable
from basinheat.tables import Rejected

Sentence = str
_EXPECTED = {"reading_id": object, "expected_degc": float, "score": float}


class Ledger:
    """Collects refused rows (``table`` is that of the row) and remarks.

    Remarks do not stand for a row: ``table`` is "values" for a cell that was dropped from a row
    that is kept, and "decisions" for what became of a reviewer's line.
    """

    def __init__(self) -> None:
        self._parts: list[pd.DataFrame] = []
        self._expected: list[pd.DataFrame] = []
        self.spared: set[tuple[str, str, int]] = set()  # table, file, line

    def refuse(
        self, table: InputTable, mask: np.ndarray, column: str, code: str, sentence: Sentence
    ) -> InputTable:
        """Move the rows of a mask to the ledger and return the table without them.

        Parameters
        ----------
        table : InputTable
            Rows; the canonical columns and ``reading_id`` may stand in the sentence.
        mask : ndarray of bool, (n,)
            Rows to refuse.
        column : str
            Canonical name of the column at fault, "" for none.
        code : str
            Rule, in words.
        sentence : str
            What is wrong and the way out, with ``{name:format}`` fields from the row, ``{written}``
            and ``{header}``.
        """
        mask = np.asarray(mask, bool)
        if not mask.any():
            return table
        self._write(table, mask, table.name, column, code, sentence)
        return table.where(~mask)

    def screen(
        self, table: InputTable, mask: np.ndarray, column: str, code: str, sentence: Sentence
    ) -> InputTable:
        """Refuse rows, except those that a reviewer keeps: they carry the code as a flag."""
        mask = np.asarray(mask, bool)
        kept = table.frame["kept"].to_numpy(bool) if "kept" in table.frame else False
        self.spare(table, mask & kept, code)
        return self.refuse(table, mask & ~kept, column, code, sentence)

    def spare(self, table: InputTable, mask: np.ndarray, code: str) -> None:
        """Flag rows that a rule would refuse and a reviewer keeps."""
        if not mask.any():
            return
        for flag in (code, "reviewed_keep"):
            mark(table.frame, mask, flag)
        rows = table.frame.loc[mask, ["source_file", "source_line"]]
        self.spared.update((table.name, *row) for row in rows.itertuples(index=False, name=None))

    def drop(
        self, table: InputTable, mask: np.ndarray, column: str, code: str, sentence: Sentence
    ) -> None:
        """Blank an optional cell of rows that are kept, flag the rows and note each cell."""
        mask = np.asarray(mask, bool)
        if mask.any():
            self.remark(table, mask, column, code, sentence)
            table.frame.loc[mask, column] = "" if table.frame[column].dtype == "str" else np.nan
            mark(table.frame, mask, code)

    def remark(
        self, table: InputTable, mask: np.ndarray, column: str, code: str, sentence: Sentence
    ) -> None:
        """Note a cell that was dropped from rows that are kept."""
        mask = np.asarray(mask, bool)
        if mask.any():
            self._write(table, mask, "values", column, code, sentence)

    def broken(self, table: InputTable) -> None:
        """Enter the records that could not be split into cells."""
        self._parts.append(table.broken.assign(table=table.name))

    def enter(self, lines: pd.DataFrame) -> None:
        """Enter lines that are ready."""
        self._parts.append(lines)

    def rows_of(self, table: str) -> int:
        """Return how many input rows of a table were refused or merged."""
        return sum(int((part["table"] == table).sum()) for part in self._parts)

    def table(self) -> pd.DataFrame:
        """Return the ledger as ``tables.Rejected``, in an order that content alone decides."""
        parts = [part for part in self._parts if len(part)]
        frame = Rejected.conform(pd.concat(parts, ignore_index=True) if parts else Rejected.empty())
        return frame.sort_values(list(frame.columns), kind="stable").reset_index(drop=True)

    def expected(self) -> pd.DataFrame:
        """Return what the neighbours of refused readings led to expect, where that was known."""
        nothing = pd.DataFrame({name: pd.Series(dtype=kind) for name, kind in _EXPECTED.items()})
        return pd.concat(self._expected, ignore_index=True) if self._expected else nothing

    def _write(
        self,
        table: InputTable,
        mask: np.ndarray,
        label: str,
        column: str,
        code: str,
        sentence: Sentence,
    ) -> None:
        rows = table.frame[mask]
        if "expected_degc" in rows:
            self._expected.append(rows[list(_EXPECTED)])
        written = rows.get(f"as_written:{column}", rows.get(column))
        written = pd.Series([""] * len(rows), index=rows.index) if written is None else written
        headers = table.header(column, rows["spec"])
        plain = rows.rename(columns=lambda name: str(name).replace(":", "_"))
        plain = plain.assign(written=written, header=headers)
        names = [name for name in plain.columns if f"{{{name}" in sentence]
        records = plain[names].to_dict("records") if names else [{}] * len(rows)
        self._parts.append(
            pd.DataFrame(
                {
                    "table": label,
                    "source_file": rows["source_file"].to_numpy(),
                    "source_line": rows["source_line"].to_numpy(),
                    "well": rows.get("as_written:well", rows["well"]).to_numpy(),
                    "column": headers if column else "",
                    "value": written.to_numpy(),
                    "code": code,
                    "sentence": [sentence.format(**record) for record in records],
                    "reading_id": rows["reading_id"].to_numpy() if "reading_id" in rows else "",
                }
            )
        )
