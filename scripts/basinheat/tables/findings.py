"""What screening found, for a person to go through; and the form to answer it in."""

from pathlib import Path

import pandas as pd

from basinheat.tables.contract import Table, number, text
from basinheat.tables.contract import count as whole
from basinheat.tables.spreadsheet import write_csv


class Findings(Table):
    """One row per flag of screening and per refusal, the worst first."""

    columns = {
        "severity": text("refused: the record is not used; doubt: used, look at it; note: known"),
        "code": text("rule, in words"),
        "sentence": text("what it means, with the value, the threshold and its setting"),
        "well": text("well"),
        "reading_id": text("identity of a reading, as decisions name it"),
        "table": text("wells, readings, layers or surveys"),
        "source_file": text("input file"),
        "source_line": whole("line in the input file, 0 where a whole file is meant"),
        "value": text("value found fault with"),
        "expected_degc": number("degC", "temperature that the wells around lead to expect"),
        "score": number("", "how many times the neighbours' scatter the reading lies off"),
    }

    @classmethod
    def save_csv(cls, frame: pd.DataFrame, path: str | Path) -> None:
        """Write the findings as CSV, whole or not at all."""
        write_csv(cls.conform(frame), path)


class DecisionsTemplate(Table):
    """One row per record that a person should decide on, the worst first.

    The columns of ``inputs.decisions``, to be filled in, and behind them what it is about.
    """

    columns = {
        "well": text("well"),
        "reading": text("identity of the reading, blank where the well is meant"),
        "action": text("set, keep, reject or regrade; blank: not yet answered"),
        "column": text("column to set"),
        "value": text("value to set, or kind"),
        "reason": text("why"),
        "initials": text("who decided"),
        "date": text("when"),
        "severity": text("refused or doubt"),
        "code": text("rules, ;-joined"),
        "sentence": text("what they mean"),
        "noted": text("value found fault with"),
        "expected_degc": number("degC", "temperature that the wells around lead to expect"),
        "source_file": text("input file"),
        "source_line": whole("line in the input file"),
    }

    @classmethod
    def save_csv(cls, frame: pd.DataFrame, path: str | Path) -> None:
        """Write the form as CSV, whole or not at all."""
        write_csv(cls.conform(frame), path)
