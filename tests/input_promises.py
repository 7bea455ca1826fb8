"""What basinheat promises of any input: lines that a person can act on, or counted tables."""

import logging
import re
from dataclasses import dataclass

import pandas as pd
import yaml

from basinheat import ingest
from basinheat.errors import UserError
from basinheat.settings.load import load_config
from basinheat.tables import DecisionsTemplate

COUNTED = ("wells", "readings", "layers", "surveys", "heat_flow")
LINES = re.compile("[\n\r\v\f\x1c-\x1e\x85\u2028\u2029]")
NUL = "\u2400"  # stands for the character in tables
# Words of a program's own distress, which no person can act on.
DISTRESS = ("Traceback", 'File "', "Error:", "Exception", "object at 0x", "<class ")


@dataclass(frozen=True)
class Outcome:
    """What came of inputs: faults that end the run, or tables and how many rows were kept."""

    faults: list[str]
    prepared: ingest.stage.Prepared | None = None
    kept: dict[str, int] | None = None


class _Kept(logging.Handler):
    """Listens to the log for the rows kept; of surveys no table tells."""

    def __init__(self):
        super().__init__(logging.INFO)
        self.counts = {}

    def emit(self, record):
        found = re.fullmatch(r"(\w+): (\d+) kept", record.getMessage())
        if found:
            self.counts[found[1]] = int(found[2])


def write(inputs, folder):
    """Write the files into a folder and return the config as YAML."""
    for name, data in inputs.files.items():
        (folder / name).write_bytes(data)
    return inputs.text()


def outcome(text, folder):
    """Take a config and the files beside it through loading and `ingest.prepare`.

    Text that is no YAML, or no mapping, never reaches basinheat: snakemake refuses it.
    """
    try:
        raw = yaml.safe_load(text)
    except (yaml.YAMLError, ValueError, RecursionError, UnicodeError) as error:
        return Outcome([f"case.yaml: no YAML: {type(error).__name__}"])
    if not isinstance(raw, dict):
        return Outcome(["case.yaml: no mapping"])
    listener, log = _Kept(), logging.getLogger("basinheat")
    level = log.level
    log.addHandler(listener)
    log.setLevel(logging.INFO)
    try:
        settings = load_config(raw, "case.yaml", folder)
        return Outcome([], ingest.prepare(settings["base"], folder), listener.counts)
    except UserError as error:
        _readable(error)
        return Outcome(error.faults)
    finally:
        log.removeHandler(listener)
        log.setLevel(level)


def _readable(error):
    """Each fault is one line, says where, and is of people's words."""
    assert error.faults
    for fault in error.faults:
        assert not LINES.search(fault), f"more than a line: {fault!r}"
        assert re.search(r"\w", fault), f"says nothing: {fault!r}"
        placed = re.search(r"^[^:]*\S: \S", fault) or re.search(r"[\w.]+\.(csv|json)", fault)
        assert placed or "no well is left" in fault, f"names no place: {fault!r}"
        assert not any(word in fault for word in DISTRESS), f"a program's distress: {fault!r}"
    fault.encode("utf-8", "backslashreplace")


def conserved(made, sheets):
    """Rows in = kept + in the ledger, for each table; rows in as the sheets hold them."""
    refused = made.prepared.rejected["table"].value_counts()
    for name in COUNTED:
        rows, found = _rows(sheets.get(name)), made.kept[name] + int(refused.get(name, 0))
        assert found == rows, f"{name}: {rows} rows in, {found} out"
    prepared = made.prepared
    lengths = {name: len(getattr(prepared, name)) for name in COUNTED if name != "surveys"}
    assert lengths == {name: made.kept[name] for name in lengths}


def _rows(sheet):
    """How many records a sheet holds: its rows that are not blank."""
    return sum(any(cell.strip() for cell in row) for row in sheet.rows) if sheet else 0


def same(one, other, but=()):
    """Two outcomes are equal, columns of a list of names apart and rows in any order."""
    assert one.faults == other.faults
    if one.prepared is None:
        return
    for name in ("wells", "readings", "layers", "heat_flow", "rejected", "findings"):
        left, right = (
            getattr(each.prepared, name).drop(columns=[*but], errors="ignore")
            for each in (one, other)
        )
        if but:
            left, right = (
                frame.sort_values(list(frame.columns)).reset_index(drop=True)
                for frame in (left, right)
            )
        pd.testing.assert_frame_equal(left, right, obj=name)


def names_are_text(made, sheet):
    """Names of wells are as they stand in the file, but for the blanks around them."""
    place = sheet.header.index("well")
    cells = {row[place].replace("\0", NUL).strip() for row in sheet.rows}
    padded = {cell.strip(NUL).strip() for cell in cells}
    assert set(made.prepared.wells["well"]) <= cells | padded


def template_is_without_effect(made, text, folder):
    """The form that a run writes is a question: named as decisions it changes nothing."""
    config = yaml.safe_load(text)
    config["inputs"]["decisions"] = "template.csv"
    DecisionsTemplate.save_csv(made.prepared.decisions_template, folder / "template.csv")
    same(made, outcome(yaml.safe_dump(config), folder))
