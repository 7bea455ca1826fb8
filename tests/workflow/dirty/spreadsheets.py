"""Workbooks: sheets, merged cells, dates, numbers as text, formulas."""

import datetime as dt
import io
import re
import zipfile

from openpyxl import Workbook

from .base import (
    READING_COLUMNS,
    WELL_COLUMNS,
    case,
    good_readings,
    inputs,
    numbered,
    reading_rows,
    well_rows,
)
from .model import ledger, refused

CLEAN = ledger()
WELL_LINES = [WELL_COLUMNS, *well_rows()]
READING_LINES = [READING_COLUMNS, *[tuple(c or None for c in row) for row in reading_rows()]]


def workbook(sheets: dict, change=None) -> bytes:
    """Lines of cells per sheet; `change(book)` has the last word."""
    book = Workbook()
    book.remove(book.active)
    for name, lines in sheets.items():
        sheet = book.create_sheet(name)
        for line in lines:
            sheet.append(line)
    if change:
        change(book)
    memory = io.BytesIO()
    book.save(memory)
    return memory.getvalue()


def with_cached_values(content: bytes, values: dict[str, float]) -> bytes:
    """What a spreadsheet program saves: the last value beside each formula."""
    old, memory = zipfile.ZipFile(io.BytesIO(content)), io.BytesIO()
    with zipfile.ZipFile(memory, "w", zipfile.ZIP_DEFLATED) as new:
        for name in old.namelist():
            text = old.read(name)
            if name == "xl/worksheets/sheet1.xml":
                for cell, value in values.items():
                    pattern = rf'(<c r="{cell}"[^>]*><f>[^<]*</f>)<v ?(/>|></v>)'
                    text = re.sub(pattern, rf"\g<1><v>{value}</v>", text.decode()).encode()
            new.writestr(name, text)
    return memory.getvalue()


def excel(name, why, expected, table, content, suffix=".xlsx", **settings):
    """A case whose wells or readings stand in a workbook."""
    file = table + suffix
    config = inputs(**{table: {"file": file, **settings}})
    return case(name, why, expected, files={file: content}, config=config)


def readings_book(*more, header=READING_COLUMNS, before=(), change=None) -> bytes:
    """All readings in one sheet, with lines before the headers and behind the rows."""
    return workbook({"Readings": [*before, header, *READING_LINES[1:], *more]}, change)


def merge_headers(book):
    """The last two headers become one cell over two columns."""
    book["Readings"].merge_cells("E1:F1")


def merge_titles(book):
    book["Readings"].merge_cells("A1:F1")


def hide_and_frame(book):
    """Hidden rows, and a thousand blank rows with a frame."""
    sheet = book["Readings"]
    for line in (5, 6, 7):
        sheet.row_dimensions[line].hidden = True
    for line in range(34, 1034):
        sheet.cell(line, 1).number_format = "0.00"


def dated(value) -> tuple:
    return (*READING_COLUMNS, "date"), ("N15", 2500, 84.9, "equilibrium", None, None, value)


def formula_book() -> bytes:
    return readings_book(("N15", 2500, "=80+4.9", "equilibrium"), ("N15", 2600, "=C34+3", None))


def text_wells() -> list:
    return [WELL_COLUMNS, *[tuple(str(cell) for cell in row) for row in well_rows()]]


TWO = {"Notes": [["made", "2003"], ["by", "the survey"]], " Wells ": WELL_LINES}
SERIAL_HEADER, SERIAL_ROW = dated(31113)
_, DATE_ROW = dated(dt.datetime(1985, 3, 7))
TITLES = [["Temperatures of the licence"], [None]]
ERRORS = [("N15", 2500 + 50 * i, text) for i, text in enumerate(("#N/A", "#REF!", "#DIV/0!", True))]
ERROR_CODES = {("readings", "no_temperature", 34): 1} | {
    ("readings", "not_a_number", line): 1 for line in (35, 36, 37)
}

SHEETS = [
    excel(
        "sheet_not_stated_among_several",
        "A workbook has a sheet of notes before the table.",
        refused("wells.xlsx", "Notes", "Wells", "sheet"),
        "wells",
        workbook(TWO),
    ),
    excel(
        "sheet_name_padded_with_blanks",
        "The sheet's tab was typed with blanks around the name, which nobody can see.",
        CLEAN,
        "wells",
        workbook(TWO),
        sheet="wells",
    ),
    excel(
        "sheet_by_number",
        "Each year's workbook names its sheets otherwise, but the table is always the second.",
        CLEAN,
        "wells",
        workbook(TWO),
        sheet=2,
    ),
    excel(
        "sheet_number_too_high",
        "The sheet of notes was deleted, and the table is the first now.",
        refused("wells.xlsx", "sheet", "3", "Notes", "Wells"),
        "wells",
        workbook(TWO),
        sheet=3,
    ),
    excel(
        "sheet_name_misspelt",
        "The config names a sheet with a slip of the pen.",
        refused("wells.xlsx", "Welss", "Wells"),
        "wells",
        workbook(TWO),
        sheet="Welss",
    ),
    excel(
        "sheet_with_macros_suffix",
        "The workbook carries macros and has their suffix.",
        CLEAN,
        "wells",
        workbook({"Wells": WELL_LINES}),
        ".xlsm",
    ),
    excel(
        "sheet_with_merged_headers",
        "Two headers were merged into one cell to look neat.",
        refused("readings.xlsx", "merged"),
        "readings",
        readings_book(change=merge_headers),
    ),
    excel(
        "sheet_with_merged_titles",
        "A title over all columns stands above the headers; the last row is bad.",
        ledger({("readings", "not_a_number", 36): 1}),
        "readings",
        readings_book(("N15", 2500, "hot"), before=TITLES, change=merge_titles),
    ),
    excel(
        "sheet_with_hidden_and_blank_rows",
        "Rows were hidden by a filter, and a thousand blank ones below carry a format.",
        CLEAN,
        "readings",
        readings_book(change=hide_and_frame),
    ),
    excel(
        "sheet_encrypted",
        "The workbook has a password, so that it is no zip archive inside.",
        refused("wells.xlsx"),
        "wells",
        b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + bytes(4096),
    ),
]

CELLS = [
    excel(
        "cells_numbers_as_text",
        "A paste made text of all numbers, with green corners in the spreadsheet.",
        ledger(values={("N00", "easting_m"): 600000}),
        "wells",
        workbook({"Wells": text_wells()}),
    ),
    excel(
        "cells_date_as_serial",
        "The date lost its format and shows as the number 31113.",
        ledger(readings=33, values={("N15", "date"): "1985-03-07"}),
        "readings",
        readings_book(SERIAL_ROW, header=SERIAL_HEADER),
    ),
    excel(
        "cells_date_as_date",
        "Dates are dates, with midnight as their time of day.",
        ledger(readings=33, values={("N15", "date"): "1985-03-07"}),
        "readings",
        readings_book(DATE_ROW, header=SERIAL_HEADER),
    ),
    excel(
        "cells_formulas_with_their_values",
        "Temperatures are worked out in the sheet, and the program saved the results.",
        ledger(readings=34, values={("N15", "temperature_degc"): 87.9}),
        "readings",
        with_cached_values(formula_book(), {"C34": 84.9, "C35": 87.9}),
    ),
    excel(
        "cells_formulas_without_values",
        "A script wrote formulas, and no spreadsheet program has worked them out since.",
        ledger({("readings", "no_temperature", 34): 1, ("readings", "no_temperature", 35): 1}),
        "readings",
        formula_book(),
    ),
    excel(
        "cells_with_errors_and_truth_values",
        "Formulas broke when columns were deleted, and one cell says TRUE.",
        ledger(ERROR_CODES),
        "readings",
        readings_book(*ERRORS),
    ),
    case(
        "cells_well_names_as_numbers",
        "Wells are numbered, so that the spreadsheet stores their names as numbers.",
        ledger(values={("1003", "total_depth_m"): 1340}),
        files={
            "wells.xlsx": workbook(
                {"Wells": [WELL_COLUMNS, *[(1000 + i, *r[1:]) for i, r in enumerate(well_rows())]]}
            )
        },
        readings=numbered(good_readings()),
        config=inputs(wells={"file": "wells.xlsx"}),
    ),
]

CASES = [*SHEETS, *CELLS]
