"""Workbooks: the cells of a sheet as text, the rows as Excel counts them."""

from __future__ import annotations

import re
import warnings
import zipfile
from collections.abc import Iterator
from contextlib import contextmanager
from itertools import islice
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd

from basinheat.errors import UserError
from basinheat.readers import header
from basinheat.readers.raw import Head, RawTable
from basinheat.readers.typed import cell_text
from basinheat.settings.inputs import TableFile


def look(path: str | Path, spec: TableFile, needed: list[str]) -> Head:
    """Return the headers of the sheet, and whether rows follow."""
    with _sheet(path, spec) as sheet:
        row, names = _headers(path, spec, sheet, needed)
        below = sheet.iter_rows(min_row=row + 2, values_only=True)
        return Head(names, not any(_any(cells) for cells in below))


def read(path: str | Path, spec: TableFile, wanted: list[str]) -> RawTable:
    """Read the wanted columns as text.

    Rows of blank cells are no records. A cell with an error of Excel holds its name.

    Parameters
    ----------
    path : str or Path
        File.
    spec : TableFile
        Sheet, lines before the headers, decimal mark.
    wanted : list of str
        Headers to keep.

    Returns
    -------
    RawTable
    """
    with _sheet(path, spec) as sheet:
        row, names = _headers(path, spec, sheet, wanted)
        places = [header.place(name, names, path) for name in wanted]
        lines: list[int] = []
        columns: list[list[str]] = [[] for _ in wanted]
        for line, cells in enumerate(sheet.iter_rows(min_row=row + 2, values_only=True), row + 2):
            if not _any(cells):
                continue
            lines.append(line)
            for column, place in zip(columns, places, strict=True):
                value = cells[place] if place < len(cells) else None
                column.append(cell_text(value, spec.decimal))
        data = {
            name: pd.Series(column, dtype="str")
            for name, column in zip(wanted, columns, strict=True)
        }
        frame = pd.DataFrame(data, index=range(len(lines)))
        notes = [("sheet", str(sheet.title)), ("header_line", str(row + 1))]
        day_0 = sheet.parent.epoch.date().isoformat()
    return RawTable(frame, np.array(lines, np.int64), serial_day=day_0, notes=notes)


@contextmanager
def _sheet(path: str | Path, spec: TableFile) -> Iterator[Any]:
    """Yield the sheet that the config means; whatever the library meets is one plain line."""
    import openpyxl

    book = None
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")  # of parts of a workbook that are no cells
            book = openpyxl.load_workbook(path, read_only=True, data_only=True)
            sheet = _chosen(path, spec.sheet, book.worksheets)
            sheet.reset_dimensions()  # some programs state them wrongly
            yield sheet
    except UserError:
        raise
    except Exception as error:  # a damaged workbook raises a dozen kinds
        reason = str(error).split("\n")[0].rstrip(".")
        raise UserError(
            f"{path}: is no workbook that can be read ({reason}). Does it have a password, or is "
            "it of another format? Save it anew as .xlsx."
        ) from None
    finally:
        if book is not None:
            book.close()


def _chosen(path: str | Path, stated: int | str | None, sheets: list[Any]) -> Any:
    """Return the sheet of a name or number."""
    told = ", ".join(f'"{sheet.title}"' for sheet in sheets)
    if stated is None:
        if len(sheets) != 1:
            raise UserError(f"{path}: holds several sheets; state sheet, one of {told}.")
        return sheets[0]
    named = [s for s in sheets if s.title.strip().casefold() == str(stated).strip().casefold()]
    if isinstance(stated, str) and len(named) == 1:
        return named[0]
    number = int(stated) if re.fullmatch(r"[1-9]\d*", str(stated)) else 0
    if 1 <= number <= len(sheets) and not named:
        return sheets[number - 1]
    raise UserError(f'{path}: there is no sheet "{stated}"; it holds {told}.')


def _headers(
    path: str | Path, spec: TableFile, sheet: Any, needed: list[str]
) -> tuple[int, list[str]]:
    """Return the row of headers, counted from 0, and the headers."""
    first = 0 if spec.skip_lines == "auto" else int(spec.skip_lines)
    rows = sheet.iter_rows(min_row=first + 1, values_only=True)
    count = header.LOOKED_AT if spec.skip_lines == "auto" else 1
    candidates = (
        (row, [cell_text(value, ".") for value in cells])
        for row, cells in enumerate(islice(rows, count), first)
    )
    found = header.choose(candidates, needed)
    if found is None:
        raise header.no_headers(path, first + 1)
    row, names = found
    while names and not names[-1]:
        names.pop()
    for merged in _merged(path, sheet):
        low, high = (int(part) for part in re.findall(r"\d+", merged))
        if low <= row + 1 <= high:
            raise UserError(
                f"{path}: cells {merged} are merged in the line of headers. Unmerge them and give "
                "each column a header of its own."
            )
    return row, names


def _merged(path: str | Path, sheet: Any) -> list[str]:
    """Return the ranges of merged cells, which stand behind the rows in the sheet's part."""
    name = sheet._worksheet_path.lstrip("/")  # the library tells them only of sheets held in memory
    tail = b""
    with zipfile.ZipFile(path) as archive, archive.open(name) as part:
        while chunk := part.read(1 << 20):
            text = tail + chunk
            end = text.rfind(b"sheetData")
            # Of the rows only the last letters are kept: the end may lie across two pieces.
            tail = text[end:] if end >= 0 else text[-20:]
    return re.findall(r'mergeCell\s+ref="([A-Z]+\d+:[A-Z]+\d+)"', tail.decode("utf-8", "replace"))


def _any(cells: tuple[Any, ...]) -> bool:
    """Tell whether a row holds anything but blanks."""
    return any(cell is not None and str(cell).strip() for cell in cells)
