"""The record of the first look in words: the same tables for the page, the report and the console.

Text from the data is left as it is here; whoever prints it makes it harmless (``sheet.shown``).
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import Any

import numpy as np

from basinheat.report.sheet import Sheet, number, percent, words

Entry = Mapping[str, Any]
MOST_HEADERS = 40
MOST_FILES = 6


def files_sheet(record: Entry) -> Sheet:
    """List the files: rows in, kept, merged and refused."""
    rows = [
        [
            each["table"],
            each["file"],
            each["place"],
            *(number(each[name]) for name in ("rows", "kept", "merged", "refused")),
            percent(each["refused"] / each["rows"]) if each["rows"] else "–",
        ]
        for each in record["files"]
    ]
    headers = ["table", "file", "in the config", "#rows", "#kept", "#merged", "#refused",
               "#share refused"]  # fmt: skip
    return Sheet("Rows of each file", headers, rows)


def questions_sheet(record: Entry) -> Sheet:
    """List the questions to the config."""
    rows = [[label(each), each["seen"], each["ask"].replace("`", "")]
            for each in record["questions"]]  # fmt: skip
    note = "Asked by the first look at the inputs (first_look.html among the results); nothing was "
    note += "changed."
    headers = ["file", "what was seen", "question to the config"]
    return Sheet("Open questions to the config", headers, rows, note if rows else "")


def label(question: Entry) -> str:
    """Return the files that a question is about."""
    return listed(dict.fromkeys(name for _, name in question["files"]), MOST_FILES)


def columns_sheet(entry: Entry) -> Sheet:
    """List the columns of a file that are read: header, unit, gaps, range, rounding."""
    rows = []
    for column in entry["columns"]:
        total = max(entry["rows"], 1)
        start = [column["name"], column["header"], _unit(column)]
        if "words" in column:
            shown = ", ".join(f"{word} ({number(n)})" for word, n in column["words"])
            told = f"{number(column['distinct'])} different: {shown}" if shown else "–"
            rows.append([*start, percent(column["missing"] / total), "–", *["–"] * 3, told])
            continue
        ends = [_short(column[name]) for name in ("low", "middle", "high")]
        rows.append(
            [
                *start,
                percent(column["missing"] / total),
                number(column["wrong"]) if column["wrong"] else "–",
                *ends,
                "; ".join(filter(None, (_as_written(column), _rounding(column), _gaps(column)))),
            ]
        )
    headers = ["column", "header in the file", "unit in the file", "#missing", "#no number",
               "#least", "#median", "#greatest", "as written"]  # fmt: skip
    note = "Least, median and greatest in " + _canonical(entry) + ", before any rule; as written: "
    note += "the cells that hold them."
    return Sheet("Columns that are read", headers, rows, note if rows else "")


def headers_sheet(entry: Entry) -> Sheet:
    """List the headers that are not read and resemble a column."""
    rows = [
        [
            each["header"],
            each["name"]
            if each["table"] == entry["table"]
            else f"{each['name']} of inputs.{each['table']}",
            each["unit"] or "–",
        ]
        for each in entry["not_read"]
        if each["table"]
    ]
    others = [each["header"] for each in entry["not_read"] if not each["table"]]
    note = f"Not read, and like no column that is known: {listed(others, MOST_HEADERS)}."
    note = note if others else ""
    return Sheet("Headers that are not read", ["header", "may be", "unit it names"], rows, note)


def kinds_sheet(entry: Entry) -> Sheet:
    """Count the kinds of readings, or the rocks of layers."""
    if entry["rocks"]:
        rows = [
            [
                each["word"],
                f"not known; {each['unknown']}" if each["unknown"] else "known",
                number(each["rows"]),
            ]
            for each in entry["rocks"]
        ]
        return Sheet("Rocks", ["word in the file", "in the catalogue", "#rows"], rows)
    rows = [
        [each["word"] or "(none stated)", each["kind"] or "not known", number(each["rows"])]
        for each in entry["kinds"]
    ]
    return Sheet("Kinds of readings", ["word in the file", "taken as", "#rows"], rows)


def formations_sheet(entry: Entry) -> Sheet:
    """Count tops, zeros and blanks of each formation in a file of columns."""
    rows = [
        [each["header"], each["lithology"],
         *(number(each[name]) for name in ("tops", "zeros", "blanks", "wrong"))]
        for each in entry["formations"]
    ]  # fmt: skip
    headers = ["formation", "lithology", "#tops", "#zeros", "#blanks", "#no number"]
    return Sheet("Formations in columns", headers, rows)


def reasons_sheet(entry: Entry) -> Sheet:
    """Count what was refused, dropped or merged, with an example each."""
    rows = [
        [
            words(each["code"]),
            number(each["rows"]) + ("" if each["what"] == "row" else " cells"),
            # Of several files read as one entry, the one at fault.
            ("" if each["file"] == entry["file"] else f"{each['file']}, ") + f"line {each['line']}",
            each["well"],
            f"{each['value']}" if each["value"] else "–",
            each["sentence"],
        ]
        for each in entry["reasons"]
    ]
    headers = ["reason", "#rows", "first in", "well", "as written", "what is wrong there"]
    note = "Cells: dropped, and the row is used without them. Every one: rejected.csv."
    return Sheet("Refused, merged and dropped", headers, rows, note if rows else "")


def decisions_sheet(record: Entry) -> Sheet:
    """Count what became of a reviewer's decisions."""
    rows = [[words(each["code"]), number(each["rows"]), each["sentence"]]
            for each in record["decisions"]]  # fmt: skip
    return Sheet("A reviewer's decisions", ["what became of them", "#lines", "first of them"], rows)


def flags_sheet(entry: Entry) -> Sheet:
    """Count what was assumed or doubted about the rows that are kept."""
    rows = [
        [words(each["code"]), number(each["rows"]), percent(each["rows"] / max(entry["kept"], 1))]
        for each in entry["flags"]
    ]
    return Sheet("Kept, but assumed or doubted", ["flag", "#rows", "#share of the kept"], rows)


def summary(entry: Entry) -> str:
    """Return in one line what became of a file's rows."""
    parts = [f"{number(entry['rows'])} rows: {number(entry['kept'])} kept"]
    parts += [f"{number(entry[name])} {name}" for name in ("merged", "refused") if entry[name]]
    text = ", ".join(parts) + "."
    if entry.get("gradient_k_km") is not None:
        text += f" Median gradient as given {number(entry['gradient_k_km'], 1)} K/km."
    notes = [f"{note['what']} {_visible(note['value'])}".strip() for note in entry["read_as"]]
    return text + (f" Read as: {'; '.join(notes)}." if notes else "")


def absent(entry: Entry) -> str:
    """Return the columns that the file does not give, in one line."""
    return ", ".join(each["name"] for each in entry["absent"])


def map_lines(record: Entry) -> list[str]:
    """Return in words where the wells lie."""
    place = record["map"]
    if not place["wells"]:
        return ["No well is left to map."]
    (west, east), (south, north) = place["longitude"], place["latitude"]
    return [
        f"{number(place['wells'])} wells, {number(place['with_readings'])} of them with readings "
        f"that can be used.",
        f"Longitude {number(west, 3)} to {number(east, 3)}, latitude {number(south, 3)} to "
        f"{number(north, 3)} (WGS 84).",
        f"{number((place['east'] - place['west']) / 1000.0)} km from west to east, "
        f"{number((place['north'] - place['south']) / 1000.0)} km from south to north, in "
        f"{place['crs']}.",
    ]


def listed(texts: Iterable[str], most: int) -> str:
    """Return texts joined by commas, the last ones left out where they are many."""
    texts = [each if len(each) <= 60 else each[:59] + "…" for each in texts]
    more = f" and {len(texts) - most} more" if len(texts) > most else ""
    return ", ".join(texts[:most]) + more


def _visible(value: str) -> str:
    """Return a mark that would not show as a word."""
    return {"\t": "tab", " ": "blanks"}.get(value, value)


def _unit(column: Entry) -> str:
    """Return the unit of a column in the file, and whether the config states it."""
    unit = column["unit"]
    if not unit:
        return "–"
    if column["stated"]:
        return unit
    return f"{unit}, as the header says" if column.get("named") else f"{unit}, assumed"


def _canonical(entry: Entry) -> str:
    """Return the canonical units of the columns of a file."""
    units = dict.fromkeys(each["canonical"] for each in entry["columns"] if each.get("canonical"))
    return ", ".join(units) if units else "the file's unit"


def _short(value: float | None) -> str:
    """Return a number with four figures, more for places."""
    if value is None or not np.isfinite(value):
        return "–"
    size = int(np.floor(np.log10(abs(value)))) if value else 0
    return number(value, int(np.clip(3 - size, 0, 4)))


def _as_written(column: Entry) -> str:
    cells = column["as_written"]
    return " … ".join(cell if len(cell) <= 24 else cell[:23] + "…" for cell in cells)


def _rounding(column: Entry) -> str:
    """Return to what the numbers of a column are rounded."""
    found = column["rounding"]
    if column["name"] in ("x", "y") or not found or not (found["step"] or found["heap"]):
        return ""
    parts = []
    if found["step"]:
        parts.append(f"all multiples of {found['step']:g}" if found["share"] == 1.0
                     else f"{percent(found['share'])} multiples of {found['step']:g}")  # fmt: skip
    if found["heap"]:
        parts.append(f"{percent(found['heap_share'])} of {found['heap']:g}"
                     if parts else f"{percent(found['heap_share'])} multiples of "
                     f"{found['heap']:g}")  # fmt: skip
    return ", ".join(parts)


def _gaps(column: Entry) -> str:
    """Return the words taken as missing, and those that are no numbers."""
    parts = []
    for label, name in (("missing", "missing_words"), ("no number", "wrong_words")):
        if column[name]:
            told = ", ".join(f'"{word[:24]}" ({number(rows)})' for word, rows in column[name])
            parts.append(f"{label}: {told}")
    return "; ".join(parts)
