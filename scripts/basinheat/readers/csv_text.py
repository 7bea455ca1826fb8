"""Separated text: cells as written, with the line each record really starts at."""

from __future__ import annotations

import csv
import io
from collections.abc import Iterator
from dataclasses import dataclass
from itertools import islice
from pathlib import Path

import pandas as pd

from basinheat.readers import csv_lines, header
from basinheat.readers.encoding import read_text
from basinheat.readers.raw import Head, RawTable
from basinheat.settings.inputs import TableFile

HEAD = 1_000_000  # bytes that surely hold the headers
DELIMITERS = (",", ";", "\t", "|")
NAMES = {",": "comma", ";": "semicolon", "\t": "tab", "|": "bar", " ": "blanks"}


@dataclass(frozen=True)
class _Layout:
    """Lines of a file, and how they are to be read."""

    lines: list[str]
    encoding: str
    delimiter: str
    header: list[str]
    header_line: int  # counted from 1
    start: int  # index of the line after the headers


def look(path: str | Path, spec: TableFile, needed: list[str]) -> Head:
    """Return the headers of the file, in order, and whether rows follow."""
    layout = _layout(path, spec, needed, HEAD)
    rows = islice(layout.lines, layout.start, None)
    return Head(layout.header, not any(line.strip(' \t\r\n,;|"') for line in rows))


def read(path: str | Path, spec: TableFile, wanted: list[str]) -> RawTable:
    """Read the wanted columns as text.

    Records of blank cells only are no records. One with too few or too many cells is broken, and
    so is one whose quote is not closed within ``csv_lines.LONGEST_RECORD`` lines: reading goes on
    in the line after its first.

    Parameters
    ----------
    path : str or Path
        File.
    spec : TableFile
        Delimiter, encoding and lines before the header.
    wanted : list of str
        Headers to keep.

    Returns
    -------
    RawTable
    """
    layout = _layout(path, spec, wanted)
    places = [header.place(name, layout.header, path) for name in wanted]
    columns, lines, broken = csv_lines.records(
        layout.lines, layout.start, layout.delimiter, len(layout.header), places
    )
    cells = pd.DataFrame(dict(zip(wanted, columns, strict=True)), index=range(len(lines)))
    notes = [
        ("encoding", layout.encoding),
        ("delimiter", NAMES.get(layout.delimiter, layout.delimiter)),
        ("header_line", str(layout.header_line)),
    ]
    return RawTable(cells, lines, broken, notes=notes)


def _layout(path: str | Path, spec: TableFile, needed: list[str], size: int = -1) -> _Layout:
    """Return the lines of the file, or of its first bytes, and how they are to be read."""
    csv_lines.check_delimiter(spec.delimiter, path)
    text, encoding = read_text(path, spec.encoding, size)
    lines = list(io.StringIO(text, newline=""))
    first = 0 if spec.skip_lines == "auto" else spec.skip_lines
    spans: dict[tuple[int, str], int] = {}
    found = header.choose(_candidates(lines, spec, spans), needed)
    if found is None:
        raise header.no_headers(path, first + 1)
    (row, delimiter), cells = found
    start = row + spans[row, delimiter]
    if delimiter == " ":
        lines = csv_lines.single_blanks(lines)
    return _Layout(lines, encoding, delimiter, cells, row + 1, start)


def _candidates(
    lines: list[str], spec: TableFile, spans: dict[tuple[int, str], int]
) -> Iterator[tuple[tuple[int, str], list[str]]]:
    """Yield what may be the headers, in the order of preference; ``spans`` counts their lines."""
    rows = range(header.LOOKED_AT) if spec.skip_lines == "auto" else [int(spec.skip_lines)]
    delimiters = DELIMITERS if spec.delimiter == "auto" else (spec.delimiter,)
    for row in rows:
        if row >= len(lines):
            return
        found = []
        for delimiter in delimiters:
            cells, spans[row, delimiter] = _record(lines, row, delimiter)
            found.append(((row, delimiter), cells))
        yield from sorted(found, key=lambda each: -len(each[1]))


def _record(lines: list[str], row: int, delimiter: str) -> tuple[list[str], int]:
    """Return the cells of the record that starts in a line, and how many lines it has.

    A record of several lines is one only where its quotes are closed.
    """
    how = csv_lines.dialect(delimiter)
    for last, strict in ((row + csv_lines.LONGEST_RECORD, True), (row + 1, False)):
        reader = csv.reader(islice(lines, row, last), strict=strict, **how)
        try:
            return next(reader, []), reader.line_num
        except csv.Error:
            continue
    return [], 1
