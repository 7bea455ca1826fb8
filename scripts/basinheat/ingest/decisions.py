"""A reviewer's decisions on wells and readings: what they do, and what became of each line.

A CSV with the columns ``well, reading, action, column, value, reason, initials, date``. A line
names a reading by its ``reading_id`` (the ledger and the readings state it) or else a well.

- ``set``: replaces a noted value, in the canonical column and unit (m, degC, h; x and y in the
  crs of the file); the record then passes the rules like any other.
- ``keep``: the screening rules do not refuse the record; their codes stay as flags. For a well
  whose rows lie apart ``value`` may name the row that is kept: its file, or ``file:line``.
- ``reject``: the record is refused.
- ``regrade``: ``value`` is the kind of the reading, or of all readings of the well.

Decisions have the last word over the rules. Each line is audited in the ledger under ``decisions``:
``decision_applied``, ``decision_without_effect`` (no such record, or nothing to change) or
``decision_invalid``; the record carries ``reviewed_<action>`` as a flag. A line without an action,
column and value is a question not yet answered (``decisions_template.csv`` is full of them): it is
counted in the log and nothing else.
"""

from __future__ import annotations

import logging
from pathlib import Path
from typing import get_args

import numpy as np
import pandas as pd

from basinheat.errors import UserError
from basinheat.flags import mark
from basinheat.ingest.identity import WRITTEN
from basinheat.ledger import Ledger
from basinheat.readers import InputTable, headers, read_raw
from basinheat.readers.cells import dates, words
from basinheat.readers.inputs import source_name
from basinheat.settings.columns import INPUT_COLUMNS
from basinheat.settings.inputs import Kind, TableFile

_log = logging.getLogger(__name__)

ACTIONS = ("keep", "reject", "regrade", "set")
COLUMNS = ("well", "reading", "action", "column", "value", "reason", "initials", "date")
_NEEDED = ("action", "reason", "initials", "date")


class Decisions:
    """The decisions of one run, and which of them took effect."""

    def __init__(self, lines: pd.DataFrame, broken: pd.DataFrame | None = None) -> None:
        self._lines = lines.reset_index(drop=True)
        self._broken = pd.DataFrame({"table": []}) if broken is None else broken
        self._found: set[int] = set()
        self._kept: dict[int, set[tuple[str, str, int]]] = {}
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
        absent = [name for name in _NEEDED if name not in present]
        if absent or not {"well", "reading"} & set(present):
            names = ", ".join(absent or ["well", "reading"])
            raise UserError(
                f"{path}: {names} missing; decisions need the columns {', '.join(COLUMNS)}."
            )
        wanted = [name for name in COLUMNS if name in present]
        raw = read_raw(full, spec, wanted)
        lines = pd.DataFrame(
            {name: words(raw.cells[name], []) if name in wanted else "" for name in COLUMNS},
            index=range(len(raw.lines)),
        )
        lines["action"] = lines["action"].str.lower()
        # A spreadsheet shows such a name instead of evaluating it.
        lines["well"] = lines["well"].str.replace(r"^'(?=\s*[=+\-@])", "", regex=True)
        answers = ["action", "column", "value", "initials", "date"]
        unanswered = (lines[answers] == "").all(axis=1)
        lines = lines.assign(source_file=source_name(full, folder), source_line=raw.lines)
        if unanswered.any():
            _log.info("decisions: %d decision_open", unanswered.sum())
        names = ["source_line", "well", "code", "sentence"]
        broken = pd.DataFrame(raw.broken, columns=names)
        file = source_name(full, folder)
        return cls(lines[~unanswered], broken.assign(table="decisions", source_file=file))

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
                changed = rows & (frame[name] != line["value"]).to_numpy(bool)
                frame.loc[rows, name] = line["value"]
            else:
                try:
                    value = float(line["value"])
                except ValueError:
                    value = np.nan
                if not np.isfinite(value):
                    self._invalid[number] = f'value "{line["value"]}" is not a number'
                    continue
                changed = rows & (frame[name] != value).to_numpy(bool)
                frame.loc[rows, name] = value
                frame.loc[rows, f"wrong:{name}"] = False
            # Later stages work values out from others, but not those that a reviewer set.
            frame[f"set:{name}"] = rows | frame.get(f"set:{name}", False)
            if changed.any():
                self._done(number, frame, changed, "set")

    def regrade(self, readings: InputTable) -> None:
        """Change the kind of readings."""
        for number, line, rows in self._matched(readings, "regrade", wells_too=True):
            changed = rows & (readings.frame["kind"] != line["value"]).to_numpy(bool)
            readings.frame.loc[rows, "kind"] = line["value"]
            if changed.any():
                self._done(number, readings.frame, changed, "regrade")

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
        for number, line, rows in self._matched(table, "keep"):
            if table.name == "wells" and line["value"]:
                there = rows & _stands_in(table.frame, line["value"])
                if not there.any():
                    first = table.frame.loc[rows].iloc[0]
                    self._invalid[number] = (
                        f'value "{line["value"]}" is no row of the well; write its file, or '
                        f"file:line such as {first['source_file']}:{first['source_line']}"
                    )
                    continue
                rows = there
            kept |= rows
            found = table.frame.loc[rows, ["source_file", "source_line"]]
            self._kept.setdefault(number, set()).update(
                (table.name, *row) for row in found.itertuples(index=False, name=None)
            )
        table.frame["kept"] = kept

    def audit(self, ledger: Ledger) -> None:
        """Enter in the ledger what became of each line."""
        lines = self._lines
        ledger.enter(self._broken)
        if not len(lines):
            return
        for number, records in self._kept.items():
            self._effect[number] = bool(records & ledger.spared)
        codes, sentences = [], []
        records = zip(lines.to_dict("records"), self._invalid, self._effect, strict=True)
        for number, (line, invalid, done) in enumerate(records):
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
            end = invalid or ("" if done else _without_effect(number in self._found))
            kept = self._kept.get(number, set()) & ledger.spared
            places = sorted((file, row) for table, file, row in kept if table == "wells")
            end = f" Not applied: {end}." if end else ""
            if places:
                end = f" Kept: {'; '.join(f'{file}, line {row}' for file, row in places)}."
            sentences.append(f"{what}: {record}: {who}.{end}")
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
        # Of a million readings only those that a line names are looked at.
        named = frame["reading_id"].isin(self._lines["reading"]) if readings else []
        places = frame[named].groupby("reading_id").indices if readings else {}
        places = {key: np.flatnonzero(named)[rows] for key, rows in places.items()}
        for number, line in enumerate(self._lines.to_dict("records")):
            if line["action"] != action or self._invalid[number]:
                continue
            if readings and line["reading"]:
                rows = np.zeros(len(frame), bool)
                rows[places.get(line["reading"], [])] = True
            elif not line["reading"] and (not readings or wells_too):
                rows = _named(frame, line["well"])
            else:
                continue
            if rows.any():
                self._found.add(number)
                yield number, line, rows

    def _done(self, number: int, frame: pd.DataFrame, rows: np.ndarray, action: str) -> None:
        self._effect[number] = True
        mark(frame, rows, f"reviewed_{action}")


def _without_effect(found: bool) -> str:
    """Return why a valid line changed nothing."""
    return "nothing to change" if found else "no such record among those that could be read"


def _stands_in(frame: pd.DataFrame, value: str) -> np.ndarray:
    """Tell which rows stand in a file, or in a line of a file written ``file:line``."""
    file = frame["source_file"].astype(object)
    line = file + ":" + frame["source_line"].astype(str)
    return ((file == value) | (line == value)).to_numpy(bool)


def _named(frame: pd.DataFrame, well: str) -> np.ndarray:
    """Tell which rows are of a well, by its final name or as written."""
    rows = (frame["well"] == well).to_numpy(bool)
    written = frame.get(WRITTEN)
    return rows if written is None else rows | (written == well).to_numpy(bool)


def _fault(line: dict[str, str]) -> str:
    """Return what is wrong with a line, "" for nothing."""
    if line["action"] not in ACTIONS:
        return f'action "{line["action"]}" is none of {", ".join(ACTIONS)}'
    blank = [name for name in _NEEDED if not line[name]]
    if blank:
        return f"{', '.join(blank)} left blank: a decision needs a reason, initials and a date"
    if dates(pd.Series([line["date"]], dtype="str"), None)[1].any():
        return f'date "{line["date"]}" is no date; write it like 2026-11-30'
    if not (line["well"] or line["reading"]):
        return "it names neither a well nor a reading"
    if line["action"] == "regrade" and line["value"] not in get_args(Kind):
        return f'kind "{line["value"]}" is none of {", ".join(get_args(Kind))}'
    if line["action"] == "set" and not (line["column"] and line["value"]):
        return "set needs a column and a value"
    return ""
