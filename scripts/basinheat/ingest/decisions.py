"""A reviewer's decisions on wells and readings: what they do, and what became of each line.

A CSV with the columns ``well, reading, action, column, value, reason, initials, date``. A line
names a reading by its ``reading_id`` (the ledger and the readings state it) or else a well.

- ``set``: replaces a noted value, in the canonical column and unit (m, degC, h; x and y in the
  crs of the file); the record then passes the rules like any other.
- ``keep``: the screening rules do not refuse the record; their codes stay as flags.
- ``reject``: the record is refused.
- ``regrade``: ``value`` is the kind of the reading, or of all readings of the well.

Decisions have the last word over the rules. Each line is audited in the ledger under ``decisions``:
``decision_applied``, ``decision_without_effect`` (no such record, or nothing to change) or
``decision_invalid``; the record carries ``reviewed_<action>`` as a flag.
"""

from __future__ import annotations

from pathlib import Path
from typing import get_args

import numpy as np
import pandas as pd

from basinheat.errors import UserError
from basinheat.flags import mark
from basinheat.ledger import Ledger
from basinheat.readers import InputTable, headers, read_raw
from basinheat.readers.cells import words
from basinheat.readers.inputs import source_name
from basinheat.settings.columns import INPUT_COLUMNS
from basinheat.settings.inputs import Kind, TableFile

ACTIONS = ("keep", "reject", "regrade", "set")
COLUMNS = ("well", "reading", "action", "column", "value", "reason", "initials", "date")
_NEEDED = ("action", "reason", "initials", "date")


class Decisions:
    """The decisions of one run, and which of them took effect."""

    def __init__(self, lines: pd.DataFrame) -> None:
        self._lines = lines.reset_index(drop=True)
        self._invalid = [_fault(row) for row in self._lines.to_dict("records")]
        self._effect = np.zeros(len(lines), bool)

    @classmethod
    def load(cls, path: str | Path | None, folder: str | Path) -> Decisions:
        """Read the decisions; none where no file is named."""
        if path is None:
            return cls(pd.DataFrame(columns=[*COLUMNS, "source_file", "source_line"]))
        full = Path(folder) / path
        spec = TableFile(file=str(path))
        present = headers(full, spec)
        if "action" not in present or not {"well", "reading"} & set(present):
            raise UserError(f"{path}: decisions need the columns {', '.join(COLUMNS)}.")
        wanted = [name for name in COLUMNS if name in present]
        raw = read_raw(full, spec, wanted)
        lines = pd.DataFrame(
            {name: words(raw.cells[name], []) if name in wanted else "" for name in COLUMNS},
            index=range(len(raw.lines)),
        )
        lines["action"] = lines["action"].str.lower()
        return cls(lines.assign(source_file=source_name(full, folder), source_line=raw.lines))

    def set_values(self, table: InputTable) -> None:
        """Replace noted values of wells or of readings, before anything is judged."""
        contract, frame = INPUT_COLUMNS[table.name], table.frame
        for number, line, rows in self._matched(table, "set"):
            name = line["column"]
            if name not in contract:
                self._invalid[number] = (
                    f'"{name}" is no column of {table.name}; choose one of {", ".join(contract)}'
                )
                continue
            if contract[name].text:
                frame.loc[rows, name] = line["value"]
            else:
                try:
                    value = float(line["value"])
                except ValueError:
                    value = np.nan
                if not np.isfinite(value):
                    self._invalid[number] = f'value "{line["value"]}" is not a number'
                    continue
                frame.loc[rows, name] = value
                frame.loc[rows, f"wrong:{name}"] = False
            self._done(number, frame, rows, "set")

    def regrade(self, readings: InputTable) -> None:
        """Change the kind of readings."""
        for number, line, rows in self._matched(readings, "regrade", wells_too=True):
            readings.frame.loc[rows, "kind"] = line["value"]
            self._done(number, readings.frame, rows, "regrade")

    def reject(self, table: InputTable, ledger: Ledger) -> InputTable:
        """Refuse what the reviewer refuses."""
        frame = table.frame
        frame["_why"] = ""
        for number, line, rows in self._matched(table, "reject"):
            frame.loc[rows, "_why"] = f"{line['reason']} ({line['initials']}, {line['date']})"
            self._done(number, frame, rows, "reject")
        refused = (frame["_why"] != "").to_numpy()
        table = ledger.refuse(
            table, refused, "", "reviewed_reject", "refused by a reviewer: {_why}."
        )
        return table.with_frame(table.frame.drop(columns="_why"))

    def mark_kept(self, table: InputTable) -> None:
        """Give the table a column ``kept``: records that the rules may not refuse."""
        kept = np.zeros(len(table), bool)
        for number, _, rows in self._matched(table, "keep"):
            kept |= rows
            self._done(number, table.frame, rows, "keep")
        table.frame["kept"] = kept

    def audit(self, ledger: Ledger) -> None:
        """Enter in the ledger what became of each line."""
        lines = self._lines
        if not len(lines):
            return
        codes, sentences = [], []
        for line, invalid, done in zip(
            lines.to_dict("records"), self._invalid, self._effect, strict=True
        ):
            what = " ".join(
                word for word in (line["action"], line["column"], line["value"]) if word
            )
            record = line["reading"] or line["well"]
            who = f"{line['reason']} ({line['initials']}, {line['date']})"
            codes.append(
                "decision_invalid"
                if invalid
                else "decision_applied"
                if done
                else "decision_without_effect"
            )
            end = invalid or ("" if done else "no such record among those that could be read")
            sentences.append(f"{what}: {record}: {who}." + (f" Not applied: {end}." if end else ""))
        ledger.enter(
            pd.DataFrame(
                {
                    "table": "decisions",
                    "source_file": lines["source_file"],
                    "source_line": lines["source_line"],
                    "well": lines["well"],
                    "column": lines["column"],
                    "value": lines["value"],
                    "code": codes,
                    "sentence": sentences,
                    "reading_id": lines["reading"],
                }
            )
        )

    def _matched(self, table: InputTable, action: str, wells_too: bool = False):
        """Yield number, line and rows of the valid decisions of an action on this table."""
        frame, readings = table.frame, table.name == "readings"
        for number, line in enumerate(self._lines.to_dict("records")):
            if line["action"] != action or self._invalid[number]:
                continue
            if readings and line["reading"]:
                rows = (frame["reading_id"] == line["reading"]).to_numpy(bool)
            elif not line["reading"] and (not readings or wells_too):
                rows = (frame["well"] == line["well"]).to_numpy(bool)
            else:
                continue
            if rows.any():
                yield number, line, rows

    def _done(self, number: int, frame: pd.DataFrame, rows: np.ndarray, action: str) -> None:
        self._effect[number] = True
        mark(frame, rows, f"reviewed_{action}")


def _fault(line: dict[str, str]) -> str:
    """Return what is wrong with a line, "" for nothing."""
    if line["action"] not in ACTIONS:
        return f'action "{line["action"]}" is none of {", ".join(ACTIONS)}'
    blank = [name for name in _NEEDED if not line[name]]
    if blank:
        return f"{', '.join(blank)} left blank: a decision needs a reason, initials and a date"
    if not (line["well"] or line["reading"]):
        return "it names neither a well nor a reading"
    if line["action"] == "regrade" and line["value"] not in get_args(Kind):
        return f'kind "{line["value"]}" is none of {", ".join(get_args(Kind))}'
    if line["action"] == "set" and not (line["column"] and line["value"]):
        return "set needs a column and a value"
    return ""
