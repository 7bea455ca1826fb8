"""Workbooks and Parquet: sheets, rows as a spreadsheet counts them, types as text."""

import datetime as dt

import numpy as np
import openpyxl
import pandas as pd
import pytest

from basinheat.errors import UserError
from basinheat.readers import look, read_inputs, read_raw
from basinheat.settings.inputs import TableFile

HEAD = ["well", "depth", "temperature", "date"]


def book(path, sheets, change=None):
    """Write lines of cells per sheet; ``change(workbook)`` has the last word."""
    out = openpyxl.Workbook()
    out.remove(out.active)
    for name, lines in sheets.items():
        sheet = out.create_sheet(name)
        for line in lines:
            sheet.append(line)
    if change:
        change(out)
    out.save(path)
    return path


def read(path, wanted=tuple(HEAD), **spec):
    return read_raw(path, TableFile(file=path.name, **spec), wanted)


def test_rows_are_those_of_the_spreadsheet(tmp_path):
    lines = [["A title"], [None], HEAD, ["A", 1.0, 2.5, None], [None, " "], ["B", 3, "x", "1984"]]
    table = read(book(tmp_path / "t.xlsx", {"Data": lines}))
    assert table.lines.tolist() == [4, 6]
    assert table.cells.to_numpy().tolist() == [["A", "1", "2.5", ""], ["B", "3", "x", "1984"]]
    assert dict(table.notes) == {"sheet": "Data", "header_line": "3"}


def test_names_that_are_numbers(tmp_path):
    """Fourteen digits are a well number in the US, and no 4.2e13."""
    lines = [["well"], [42001000010000], [42001000010000.0], [17.5], ["0042"], [True]]
    table = read(book(tmp_path / "t.xlsx", {"Data": lines}), ["well"])
    assert table.cells["well"].tolist() == ["42001000010000"] * 2 + ["17.5", "0042", "TRUE"]


def test_dates_and_times(tmp_path):
    cells = [
        dt.datetime(1985, 3, 7), dt.datetime(1985, 3, 7, 4, 30), dt.time(7, 30),
        dt.timedelta(hours=30, minutes=5), dt.date(1985, 3, 7),
    ]  # fmt: skip
    table = read(book(tmp_path / "t.xlsx", {"Data": [["date"], *[[c] for c in cells]]}), ["date"])
    assert table.cells["date"].tolist() == [
        "1985-03-07", "1985-03-07 04:30:00", "07:30", "30:05", "1985-03-07",
    ]  # fmt: skip


@pytest.mark.parametrize("epoch", [openpyxl.utils.datetime.CALENDAR_WINDOWS_1900,
                                   openpyxl.utils.datetime.CALENDAR_MAC_1904])  # fmt: skip
def test_a_date_that_lost_its_format(tmp_path, epoch):
    """The writing library turns the date into the serial: it is the outside check."""

    def plain(workbook):
        workbook.epoch = epoch
        workbook["Data"]["D2"] = dt.datetime(1985, 3, 7)
        workbook["Data"]["D2"].number_format = "yyyy-mm-dd"

    path = book(tmp_path / "t.xlsx", {"Data": [HEAD, ["A", 1, 2, None]]}, plain)
    assert read(path).cells["date"].tolist() == ["1985-03-07"]
    serial = int(openpyxl.utils.datetime.to_excel(dt.datetime(1985, 3, 7), epoch))

    def number(workbook):
        plain(workbook)
        workbook["Data"]["D2"] = serial
        workbook["Data"]["D2"].number_format = "General"

    book(path, {"Data": [HEAD, ["A", 1, 2, None]]}, number)
    frame = read_inputs("readings", [TableFile(file="t.xlsx")], tmp_path).frame
    assert frame["date"].tolist() == ["1985-03-07"]


def test_decimal_commas_do_not_touch_numbers_that_are_numbers(tmp_path):
    book(tmp_path / "t.xlsx", {"D": [HEAD, ["A", 1234.5, "12,5", None]]})
    spec = TableFile(file="t.xlsx", decimal=",", thousands=".")
    frame = read_inputs("readings", [spec], tmp_path).frame
    assert frame[["depth", "temperature"]].to_numpy().tolist() == [[1234.5, 12.5]]


SHEETS = {"Notes": [["made", 2003]], " Wells ": [HEAD, ["A", 1, 2, None]]}


@pytest.mark.parametrize("sheet", ["Wells", "wELLS ", 2, "2"])
def test_a_sheet_by_name_or_number(tmp_path, sheet):
    assert read(book(tmp_path / "t.xlsx", SHEETS), sheet=sheet).lines.tolist() == [2]


@pytest.mark.parametrize("sheet", [None, "Welss", 3, 0, "-1"])
def test_sheets_that_are_not_there_or_not_stated(tmp_path, sheet):
    with pytest.raises(UserError, match='"Notes", " Wells "'):
        read(book(tmp_path / "t.xlsx", SHEETS), sheet=sheet)


def test_merged_cells_are_a_fault_in_the_headers_alone(tmp_path):
    lines = [["Title"], HEAD, ["A", 1, 2, None], ["B", 1, 2, None]]

    def merge(cells):
        return lambda workbook: workbook["D"].merge_cells(cells)

    for harmless in ("A1:D1", "C3:C4"):
        path = book(tmp_path / "t.xlsx", {"D": lines}, merge(harmless))
        assert len(read(path).lines) == 2
    path = book(tmp_path / "t.xlsx", {"D": lines}, merge("D2:E2"))
    with pytest.raises(UserError, match="D2:E2 are merged"):
        read(path)
    with pytest.raises(UserError, match="D2:E2 are merged"):
        look(path, TableFile(file=""), HEAD)


@pytest.mark.parametrize("data", [b"", b"well,depth\nA,1\n", b"PK\x03\x04 and no more",
                                  b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + bytes(600)])  # fmt: skip
@pytest.mark.parametrize("name", ["t.xlsx", "t.xlsm", "t.parquet"])
def test_files_that_are_something_else(tmp_path, name, data):
    path = tmp_path / name
    path.write_bytes(data)
    with pytest.raises(UserError) as caught:
        look(path, TableFile(file=""))
    assert len(caught.value.faults) == 1 and name in caught.value.faults[0]
    assert "\n" not in caught.value.faults[0]


def test_a_sheet_without_headers_or_rows(tmp_path):
    with pytest.raises(UserError, match="no headers"):
        read(book(tmp_path / "t.xlsx", {"D": [[None], [" "]]}))
    assert look(book(tmp_path / "t.xlsx", {"D": [HEAD]}), TableFile(file=""), HEAD).empty
    frame = read_inputs("readings", [TableFile(file="t.xlsx")], tmp_path).frame
    assert len(frame) == 0


def test_parquet_types_as_text(tmp_path):
    frame = pd.DataFrame(
        {
            "well": [42001000010000, 7],
            "depth": [0.1 + 0.2, float("nan")],
            "temperature": pd.array([5, None], dtype="Int64"),
            "kind": pd.Categorical(["bht", None]),
            "api": [42001000010000.0, -0.5],
            "short": np.array([0.3, 1003.0], np.float32),
            "date": pd.to_datetime(["1985-03-07 00:00", "1985-03-07 04:30"]),
        }
    )
    frame.to_parquet(tmp_path / "t.parquet")
    table = read(tmp_path / "t.parquet", list(frame))
    assert table.cells.to_numpy().tolist() == [
        [
            "42001000010000",
            "0.30000000000000004",
            "5",
            "bht",
            "42001000010000",
            "0.3",
            "1985-03-07",
        ],
        ["7", "", "", "", "-0.5", "1003", "1985-03-07 04:30:00"],
    ]
    assert table.lines.tolist() == [1, 2]
    assert float(table.cells["depth"][0]) == 0.1 + 0.2


def test_a_parquet_column_that_is_no_cell(tmp_path):
    pd.DataFrame({"well": [["A", "B"]], "depth": [1]}).to_parquet(tmp_path / "t.parquet")
    with pytest.raises(UserError, match='column "well": holds list'):
        read(tmp_path / "t.parquet", ["well"])
