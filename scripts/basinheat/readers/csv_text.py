"""Separated text: cells as written, with the line each record really starts at."""

from __future__ import annotations

import csv
import io
import logging
from collections.abc import Iterator
from itertools import islice
from pathlib import Path

import numpy as np
import pandas as pd

from basinheat.errors import UserError
from basinheat.readers.encoding import read_text
from basinheat.readers.raw import RawTable
from basinheat.settings.inputs import TableFile

_log = logging.getLogger(__name__)

LONGEST_RECORD = 20  # lines; a quote that is never closed would swallow the rest of the file
HEAD = 1_000_000  # bytes that surely hold the headers
_BATCH = 100_000  # records turned into columns at a time: bounds the memory of small strings

Broken = list[tuple[int, str, str, str]]


def headers(path: str | Path, spec: TableFile) -> list[str]:
    """Return the headers of the file, in order."""
    return _header(_lines(path, spec, HEAD), path, spec)[0]


def read(path: str | Path, spec: TableFile, wanted: list[str]) -> RawTable:
    """Read the wanted columns as text.

    Records of blank cells only are no records. One with too few or too many cells is broken, and
    so is one whose quote is not closed within ``LONGEST_RECORD`` lines: reading goes on in the
    line after its first.

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
    text = _lines(path, spec)
    header, start = _header(text, path, spec)
    places = [_place(name, header, path) for name in wanted]
    if _is_plain(text, start, spec.delimiter, len(header)):
        return _split(text, start, spec.delimiter, dict(zip(wanted, places, strict=True)))
    broken: Broken = []
    parts, lines = [], []
    good = _whole(_records(text, start, spec.delimiter, len(header), broken), len(header), broken)
    while batch := list(islice(good, _BATCH)):
        cells = list(zip(*([row[place] for place in places] for _, row in batch), strict=True))
        parts.append(pd.DataFrame(dict(zip(wanted, cells, strict=True)), dtype="str"))
        lines.append(np.array([line for line, _ in batch], np.int64))
    cells = (
        pd.concat(parts, ignore_index=True) if parts else pd.DataFrame(columns=wanted, dtype="str")
    )
    return RawTable(cells, np.concatenate([np.empty(0, np.int64), *lines]), broken)


def _is_plain(lines: list[str], start: int, delimiter: str, width: int) -> bool:
    """Tell whether every line is a record of the right width: no quotes, no lines to judge."""
    return width > 1 and all(
        line.count(delimiter) == width - 1 and '"' not in line and line[0] != delimiter
        for line in islice(lines, start, None)
    )


def _split(lines: list[str], start: int, delimiter: str, places: dict[str, int]) -> RawTable:
    """Split lines that are records each: tens of times faster than one by one."""
    import pyarrow as pa
    from pyarrow import csv as arrow_csv

    names = {place: name for name, place in places.items()}
    width = lines[start].count(delimiter) + 1 if start < len(lines) else 0
    columns = [names.get(place, f"_{place}") for place in range(width)]
    if start == len(lines):
        return RawTable(pd.DataFrame(columns=list(places), dtype="str"), np.empty(0, np.int64))
    table = arrow_csv.read_csv(
        pa.BufferReader("".join(lines[start:]).encode()),
        read_options=arrow_csv.ReadOptions(column_names=columns, use_threads=False),
        parse_options=arrow_csv.ParseOptions(delimiter=delimiter, quote_char=False),
        convert_options=arrow_csv.ConvertOptions(
            include_columns=list(places),
            column_types=dict.fromkeys(places, pa.string()),
            strings_can_be_null=False,
        ),
    )
    cells = pd.DataFrame({name: pd.array(table[name], dtype="str") for name in places})
    return RawTable(cells, np.arange(start + 1, len(lines) + 1, dtype=np.int64))


def _lines(path: str | Path, spec: TableFile, size: int = -1) -> list[str]:
    """Return the lines of the file, or of its first bytes, with their ends."""
    if len(spec.delimiter) != 1:
        raise UserError(f'{path}: delimiter "{spec.delimiter}" must be one character.')
    return list(io.StringIO(read_text(path, spec.encoding, size), newline=""))


def _header(lines: list[str], path: str | Path, spec: TableFile) -> tuple[list[str], int]:
    """Return the headers, stripped, and the index of the line after them."""
    reader = csv.reader(islice(lines, spec.skip_lines, None), delimiter=spec.delimiter)
    header = [cell.strip() for cell in next(reader, [])]
    if not any(header):
        raise UserError(
            f"{path}: line {spec.skip_lines + 1} holds no headers. Is the file empty? Lines before "
            "the headers are stated under `skip_lines`."
        )
    return header, spec.skip_lines + reader.line_num


def _records(
    lines: list[str], start: int, delimiter: str, width: int, broken: Broken
) -> Iterator[tuple[int, list[str]]]:
    """Yield line and cells of each record; start afresh in the line after a quote left open."""
    while start < len(lines):
        reader = csv.reader(islice(lines, start, None), delimiter=delimiter)
        first, opened = start, -1
        while opened < 0:
            try:
                row = next(reader, None)
            except csv.Error:
                row, opened = [], first
            if row is None:
                return
            span = start + reader.line_num - first
            if opened >= 0 or span > LONGEST_RECORD or (span > 1 and len(row) != width):
                opened = first
                broken.append(_unclosed(first + 1, lines[first]))
            else:
                yield first + 1, row
                first = start + reader.line_num
        start = opened + 1


def _unclosed(line: int, text: str) -> tuple[int, str, str, str]:
    sentence = (
        "a quote opens in this line and is not closed in the next ones. "
        "Close it, or remove it where it stands for inches."
    )
    return line, text.strip()[:40], "unclosed_quote", sentence


def _whole(
    records: Iterator[tuple[int, list[str]]], width: int, broken: Broken
) -> Iterator[tuple[int, list[str]]]:
    """Yield line and cells of the records that have as many cells as the header."""
    for line, row in records:
        if not any(map(str.strip, row)):
            continue
        if len(row) == width:
            yield line, row
        elif len(row) > width and not any(map(str.strip, row[width:])):
            yield line, row[:width]
        else:
            sentence = (
                f"the line has {len(row)} cells and the header {width}. Quote cells that hold "
                "the delimiter, and complete lines that were cut off."
            )
            broken.append((line, row[0].strip()[:40], "wrong_number_of_cells", sentence))


def _place(name: str, header: list[str], path: str | Path) -> int:
    """Return where a header stands; it must stand there once."""
    if header.count(name) == 1:
        return header.index(name)
    from difflib import get_close_matches

    if name in header:
        raise UserError(
            f'{path}: the header "{name}" stands there {header.count(name)} times. Rename or '
            "remove all but one."
        )
    near = get_close_matches(name, header, 1) or header
    raise UserError(f'{path}: there is no column "{name}"; the nearest is "{near[0]}".')
