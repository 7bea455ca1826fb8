"""The first look as plain text: files, then the map, then the questions, nearest to the prompt."""

from __future__ import annotations

import textwrap
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from basinheat import documents
from basinheat.firstlook import answers, chart, wording
from basinheat.report.sheet import Sheet, shown

WIDTH = 110
WIDEST_CELL = 30
LEAST_LAST = 36  # characters of the last column, which is wrapped


def write(path: str | Path, record: Mapping[str, Any]) -> None:
    """Write first_look.txt, whole or not at all.

    Parameters
    ----------
    path : str or Path
        The file.
    record : mapping
        Of ``stage.look``.
    """
    documents.write_text(text(record), path)


def text(record: Mapping[str, Any]) -> str:
    """Return the first look as text in which nothing can steer a terminal."""
    lines = ["", f"A first look at the inputs of {plain(record['run'])}", ""]
    for entry in record["files"]:
        lines += _file(entry)
    lines += [*_heading("Where the wells lie"), *map(plain, wording.map_lines(record))]
    lines += chart.characters(record["map"])
    lines += ["", *_heading("Rows of each file"), *_table(wording.files_sheet(record))]
    decisions = wording.decisions_sheet(record)
    if decisions.rows:
        lines += ["", *_titled(decisions)]
    return "\n".join([*lines, "", *_questions(record), ""])


def plain(cell: Any, longest: int = 1000) -> str:
    r"""Return text on one line in which nothing is hidden.

    Examples
    --------
    >>> plain("BW\x1b[2J\n7")
    'BW[U+001B][2J 7'
    """
    return shown(" ".join(str(cell)[: 2 * longest].split()), longest)


def _file(entry: Mapping[str, Any]) -> list[str]:
    """Return what is told of one file."""
    lines = _heading(f"{entry['table']}: {plain(entry['file'], 80)} ({entry['place']})")
    lines += _wrapped(wording.summary(entry))
    sheets = [wording.columns_sheet(entry), wording.headers_sheet(entry)]
    sheets += [wording.formations_sheet(entry), wording.kinds_sheet(entry)]
    sheets += [wording.reasons_sheet(entry), wording.flags_sheet(entry)]
    for sheet in sheets:
        if sheet.rows or sheet.note:
            lines += ["", *_titled(sheet)]
    absent = wording.absent(entry)
    if absent:
        lines += ["", *_wrapped(f"Columns that the file does not give: {absent}.")]
    return [*lines, ""]


def _questions(record: Mapping[str, Any]) -> list[str]:
    """Return the questions, numbered as on the page."""
    if not record["questions"]:
        return [*_heading("Nothing calls for a question")]
    lines = _heading("Questions to the config, the most pressing (!) first")
    for number, each in enumerate(record["questions"], start=1):
        mark = "!" if each["weight"] == 0 else " "
        told = f"{plain(wording.label(each), 160)}: {plain(each['seen'])}"
        lines += _wrapped(told, f"{mark}{number:3d}. ", " " * 6)
        lines += _wrapped(each["ask"], " " * 6 + "-> ", " " * 9)
    together = answers.together(record)
    if together:
        lines += ["", "If every answer were yes, these keys of the config would read:", ""]
        lines += [line[: len(line) - len(line.lstrip())] + plain(line) for line in together]
    return lines


def _titled(sheet: Sheet) -> list[str]:
    """Return a table with its title and note."""
    note = _wrapped(sheet.note) if sheet.note else []
    if note and not sheet.rows:
        return note
    return [f"{sheet.title}{'' if sheet.rows else ': none.'}", *_table(sheet), *note]


def _table(sheet: Sheet) -> list[str]:
    """Return a table in columns of characters; the last column is wrapped."""
    if not sheet.rows:
        return []
    names = [name for name, _ in sheet.columns]
    right = [kind == "number" for _, kind in sheet.columns]
    rows = [[plain(cell, WIDEST_CELL) for cell in row[:-1]] + [plain(row[-1])]
            for row in sheet.rows]  # fmt: skip
    widths = [max(len(row[i]) for row in [names, *rows]) for i in range(len(names))]
    left = sum(widths[:-1]) + 2 * len(widths)
    widths[-1] = min(widths[-1], max(WIDTH - left, LEAST_LAST))
    lines = []
    for row in [names, *rows]:
        last = textwrap.wrap(row[-1], widths[-1], break_on_hyphens=False) or [""]
        cells = zip([*row[:-1], last[0]], widths, right, strict=True)
        first = [cell.rjust(w) if number else cell.ljust(w) for cell, w, number in cells]
        lines.append(("  " + "  ".join(first)).rstrip())
        lines += [" " * left + rest for rest in last[1:]]
    return lines


def _heading(title: str) -> list[str]:
    return [title, "-" * min(len(title), WIDTH)]


def _wrapped(told: str, first: str = "", others: str = "") -> list[str]:
    return textwrap.wrap(
        plain(told, 4000),
        WIDTH,
        initial_indent=first,
        subsequent_indent=others,
        break_on_hyphens=False,
    )
