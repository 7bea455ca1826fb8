"""Lines of separated text to records: the many plain ones at once, the odd ones one by one.

A line is plain when it is a record for certain, whatever stands around it: each of its cells
quoted whole or not begun with a quote, and as many cells as the header has. Only between plain
lines is there something to judge.
"""

from __future__ import annotations

import csv
from collections.abc import Iterator
from itertools import chain, islice
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np
import pandas as pd

from basinheat.errors import UserError

if TYPE_CHECKING:
    import pyarrow as pa

LONGEST_RECORD = 20  # lines; a quote that is never closed would swallow the rest of the file
_LONGEST_PLAIN = 100_000  # characters
_WIDEST_PLAIN = 900  # cells: the engine of regular expressions repeats a thousand times at most

Broken = list[tuple[int, str, str, str]]
Record = tuple[int, list[str]]


def records(
    lines: list[str], start: int, delimiter: str, width: int, places: list[int]
) -> tuple[list[pd.Series], np.ndarray, Broken]:
    """Return columns of text, the line where each record starts, and the broken records.

    Parameters
    ----------
    lines : list of str
        Lines with their ends.
    start : int
        Index of the first line after the headers.
    delimiter : str
        One character; " " where runs of blanks are already one.
    width : int
        Number of headers.
    places : list of int, (columns,)
        Which cells to keep.

    Returns
    -------
    columns : list of Series
        Text, per place.
    lines : ndarray of int, (n,)
        Counted from 1.
    broken : list of tuple
        Line, first cell, code, sentence.
    """
    plain, text, extra = _plain(lines, start, delimiter, width)
    broken: Broken = []
    odd = list(_whole(_odd(lines, start, delimiter, width, plain, broken), width, broken))
    parts = _split(text.filter(plain), delimiter, width + extra, places)
    found = np.flatnonzero(plain) + start + 1
    if not odd:
        return parts, found, broken
    found = np.concatenate([found, [line for line, _ in odd]])
    order = np.argsort(found, kind="stable")
    rest = [pd.Series([row[place] for _, row in odd], dtype="str") for place in places]
    columns = [
        pd.concat(both, ignore_index=True).iloc[order].reset_index(drop=True)
        for both in zip(parts, rest, strict=True)
    ]
    return columns, found[order], broken


def check_delimiter(delimiter: str, path: str | Path) -> None:
    """Refuse a delimiter that can't be one."""
    if delimiter != "auto" and (len(delimiter) != 1 or delimiter in '\r\n"'):
        raise UserError(f'{path}: delimiter "{delimiter}" must be one character, or auto.')


def dialect(delimiter: str) -> dict[str, Any]:
    """Return how Python's reader is to take the lines."""
    return {"delimiter": delimiter, "skipinitialspace": delimiter == " "}


def single_blanks(lines: list[str]) -> list[str]:
    """Return lines in which each run of blanks is one, those with quotes but for their tabs."""
    return [
        line.replace("\t", " ") if '"' in line else " ".join(line.split()) + "\n" for line in lines
    ]


def _plain(
    lines: list[str], start: int, delimiter: str, width: int
) -> tuple[np.ndarray, pa.Array, int]:
    """Tell which lines are one record of the right width each, whatever stands around them.

    Returns
    -------
    plain : ndarray of bool, (lines,)
    text : Array, (lines,)
        The lines without their ends.
    extra : int
        Blank cells behind those of the header, in every plain line.
    """
    import pyarrow as pa
    import pyarrow.compute as pc

    text = pc.utf8_rtrim(pa.array(islice(lines, start, None), pa.large_string()), "\r\n")
    extra = _extra(lines, start, delimiter, width)
    if width + extra > _WIDEST_PLAIN or not len(text):
        return np.zeros(len(text), bool), text, 0
    mark = f"\\x{{{ord(delimiter):x}}}"
    # A quote inside a cell that does not begin with one stands for itself.
    cell = rf'(?:(?:[^"{mark}][^{mark}]*)?|"(?:[^"]|"")*")'
    whole = rf"^{cell}(?:{mark}{cell}){{{width - 1}}}(?:{mark}[ \t]*){{{extra}}}$"
    tests = (
        pc.match_substring_regex(text, whole),
        # A record of blanks is none; a byte-order mark and an endless line trip the fast reader.
        pc.match_substring_regex(text, "[A-Za-z0-9]"),
        pc.invert(pc.match_substring(text, "\ufeff")),
        # Of lines with quotes the runs of blanks were left as they are.
        pc.invert(pc.match_substring(text, '"' if delimiter == " " else "\ufeff")),
        pc.less(pc.utf8_length(text), _LONGEST_PLAIN),
    )
    return (
        np.logical_and.reduce([test.to_numpy(zero_copy_only=False) for test in tests]),
        text,
        extra,
    )


def _extra(lines: list[str], start: int, delimiter: str, width: int) -> int:
    """Return how many blank cells stand behind the first record; often they do so in all."""
    first = next((line for line in islice(lines, start, None) if line.strip()), "")
    try:
        row = next(csv.reader([first], **dialect(delimiter)), [])
    except csv.Error:
        return 0
    return len(row) - width if _fits(row, width) else 0


def _split(text: pa.Array, delimiter: str, width: int, places: list[int]) -> list[pd.Series]:
    """Return columns of plain lines: tens of times faster than line by line."""
    import pyarrow as pa
    from pyarrow import csv as arrow_csv

    if not len(text):
        return [pd.Series([], dtype="str") for _ in places]
    names = [str(place) for place in range(width)]
    kept = [names[place] for place in places]
    table = arrow_csv.read_csv(
        pa.BufferReader("\n".join(text.to_pylist()).encode()),
        read_options=arrow_csv.ReadOptions(column_names=names, use_threads=False),
        parse_options=arrow_csv.ParseOptions(delimiter=delimiter),
        convert_options=arrow_csv.ConvertOptions(
            include_columns=list(dict.fromkeys(kept)),
            column_types=dict.fromkeys(kept, pa.string()),
            strings_can_be_null=False,
        ),
    )
    return [pd.Series(pd.array(table[name], dtype="str")) for name in kept]


def _odd(
    lines: list[str], start: int, delimiter: str, width: int, plain: np.ndarray, broken: Broken
) -> Iterator[Record]:
    """Yield line and cells of the records that begin in a line that is not plain.

    After a quote left open, reading starts afresh in the next line. Plain lines that such a record
    contains are marked as not plain.
    """
    how, after = dialect(delimiter), start
    for first in (np.flatnonzero(~plain) + start).tolist():
        if first < after:
            continue
        some = lines[first : first + LONGEST_RECORD]
        # The blank line behind them is reached only by a record that is still open.
        reader = csv.reader(chain(some, ["\n"]), **how)
        try:
            row = next(reader)
            span = reader.line_num
        except csv.Error:
            row, span = [], len(some) + 1
        if span > len(some) or (span > 1 and not _fits(row, width)):
            broken.append(_unclosed(first + 1, lines[first]))
            span = 1
        else:
            yield first + 1, row
        after = first + span
        plain[first - start : after - start] = False


def _fits(row: list[str], width: int) -> bool:
    """Tell whether a record has as many cells as the header; blank ones behind them are nothing."""
    return len(row) >= width and not any(map(str.strip, row[width:]))


def _whole(records: Iterator[Record], width: int, broken: Broken) -> Iterator[Record]:
    """Yield line and cells of the records that have as many cells as the header."""
    for line, row in records:
        if not any(map(str.strip, row)):
            continue
        if _fits(row, width):
            yield line, row[:width]
        else:
            sentence = (
                f"the line has {len(row)} cells and the header {width}. Quote cells that hold "
                "the delimiter, and complete lines that were cut off."
            )
            broken.append((line, row[0].strip()[:40], "wrong_number_of_cells", sentence))


def _unclosed(line: int, text: str) -> tuple[int, str, str, str]:
    sentence = (
        "a quote opens in this line and is not closed in the next ones. "
        "Close it, or remove it where it stands for inches."
    )
    return line, text.strip()[:40], "unclosed_quote", sentence
