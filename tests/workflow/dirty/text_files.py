"""Delimited text: bytes, line ends, delimiters, marks of numbers, lines that can't be split."""

import io
import zipfile

from .base import (
    READING_COLUMNS,
    case,
    good_readings,
    good_wells,
    inputs,
    reading_rows,
    renamed,
    table,
    well_rows,
    with_line,
)
from .model import ledger, refused

CLEAN = ledger()


def european(columns, lines, thousands="") -> str:
    """Semicolons and decimal commas."""

    def cell(value):
        if isinstance(value, str):
            return value
        text = f"{value:,}".replace(",", " ").replace(".", ",")
        return text.replace(" ", thousands)

    return table(columns, [[cell(value) for value in line] for line in lines], ";")


def grouped_wells(mark: str) -> str:
    """Wells with a mark between the thousands of x and y, in quotes."""
    lines = [
        (well, *(f'"{value:,}"'.replace(",", mark) for value in (x, y)), *rest)
        for well, x, y, *rest in well_rows()
    ]
    return table(good_wells().split("\n")[0].split(","), lines)


def accented(text: str) -> str:
    return text.replace("N0", "Brønn Å0")


def zipped() -> bytes:
    memory = io.BytesIO()
    with zipfile.ZipFile(memory, "w") as archive:
        archive.writestr("readings.csv", good_readings())
    return memory.getvalue()


def spaced_readings() -> str:
    """Columns lined up with blanks, as printed tables are."""
    lines = [("well", "depth", "temperature", "kind"), *(row[:4] for row in reading_rows())]
    return "".join("  ".join(f"{cell!s:>12}" for cell in line) + "\n" for line in lines)


HTML = """<!DOCTYPE html>
<html><head><title>503 Service Unavailable</title></head>
<body><h1>Service Unavailable</h1><p>Please log in, then try again.</p></body></html>
"""
READINGS = good_readings()
WELLS = good_wells()

BYTES = [
    case(
        "text_utf8_with_byte_order_mark",
        "Spreadsheets put a byte order mark before the first header when they save as UTF-8.",
        CLEAN,
        wells=WELLS.encode("utf-8-sig"),
        readings=READINGS.encode("utf-8-sig"),
    ),
    case(
        "text_utf16_both_byte_orders",
        "Old spreadsheets save 'Unicode text' as UTF-16; another machine wrote the other order.",
        CLEAN,
        wells=b"\xff\xfe" + WELLS.encode("utf-16-le"),
        readings=b"\xfe\xff" + READINGS.encode("utf-16-be"),
    ),
    case(
        "text_western_8bit_names",
        "An old database writes accented well names in a western 8-bit encoding.",
        ledger(values={("Brønn Å00", "total_depth_m"): 800}),
        wells=accented(WELLS).encode("cp1252"),
        readings=accented(READINGS).encode("cp1252"),
    ),
    case(
        "text_encodings_differ_between_files",
        "The wells come from one office in UTF-8, the readings from another in Latin-1.",
        ledger(values={("Brønn Å01", "total_depth_m"): 980}),
        wells=accented(WELLS),
        readings=accented(READINGS).encode("latin-1"),
    ),
    case(
        "text_degree_sign_in_header",
        "The header shows the unit with a degree sign, saved in a western 8-bit encoding.",
        CLEAN,
        readings=renamed(READINGS, {"temperature": "T [°C]"}).encode("cp1252"),
        config=inputs(
            readings={
                "file": "readings.csv",
                "columns": {
                    "well": "well",
                    "depth": "depth",
                    "temperature": "T [°C]",
                    "kind": "kind",
                },
            }
        ),
    ),
    case(
        "text_lines_end_in_cr",
        "An old desktop computer ended its lines in CR alone.",
        CLEAN,
        wells=WELLS.replace("\n", "\r"),
        readings=READINGS.replace("\n", "\r"),
    ),
    case(
        "text_line_ends_mixed_and_last_missing",
        "Files of several systems were pasted together, and the last line was not ended.",
        CLEAN,
        wells=WELLS.replace("\n", "\r\n", 7).rstrip("\n"),
        readings=READINGS.replace("\n", "\r", 9).rstrip("\n"),
    ),
    case(
        "text_end_of_file_mark",
        "Programs of the eighties ended text files with the byte 1A.",
        CLEAN,
        readings=READINGS.replace("\n", "\r\n").encode() + b"\x1a",
    ),
]

DELIMITERS = [
    case(
        "text_semicolons_and_decimal_commas",
        "A European spreadsheet saves CSV with semicolons and decimal commas.",
        ledger(values={("N00", "temperature_degc"): 21.1}),
        readings=european(READING_COLUMNS, reading_rows()),
        config=inputs(readings={"file": "readings.csv", "decimal": ","}),
    ),
    case(
        "text_decimal_comma_not_stated",
        "One row was typed with a decimal comma into a file with points.",
        ledger({("readings", "not_a_number", 34): 1}),
        readings=READINGS.replace(",", ";") + "N15;2500;84,9;equilibrium;;\n",
    ),
    case(
        "text_point_in_a_file_of_decimal_commas",
        "One row was pasted with a decimal point into a file with commas.",
        ledger({("readings", "not_a_number", 34): 1}),
        readings=european(READING_COLUMNS, reading_rows()) + "N15;2500;84.9;equilibrium;;\n",
        config=inputs(readings={"file": "readings.csv", "decimal": ","}),
    ),
    case(
        "text_tabs_and_bars",
        "One table was copied from a screen with tabs, the other is a dump with bars.",
        CLEAN,
        files={"wells.tsv": WELLS.replace(",", "\t"), "readings.txt": READINGS.replace(",", "|")},
        config=inputs(wells={"file": "wells.tsv"}, readings={"file": "readings.txt"}),
    ),
    case(
        "text_columns_lined_up_with_blanks",
        "A printed table was typed with runs of blanks between its columns.",
        CLEAN,
        files={"readings.dat": spaced_readings()},
        config=inputs(readings={"file": "readings.dat", "delimiter": " "}),
    ),
    case(
        "text_first_line_names_the_delimiter",
        "Some programs write sep=; as the first line for the spreadsheet's sake.",
        CLEAN,
        readings="sep=;\n" + READINGS.replace(",", ";"),
    ),
    case(
        "text_commas_in_titles_of_a_semicolon_file",
        "Title rows are full of commas while the table below has semicolons.",
        CLEAN,
        readings="Licence, north, 2003, rev, B, c, d, e\n" + READINGS.replace(",", ";"),
    ),
    case(
        "text_delimiter_inside_quotes",
        "The field and the block are part of the well's name, with a comma between.",
        ledger(values={("N03, block 7", "total_depth_m"): 1340}),
        wells=WELLS.replace("N03", '"N03, block 7"'),
        readings=READINGS.replace("N03", '"N03, block 7"'),
    ),
    case(
        "text_thousands_comma",
        "A report prints coordinates with commas between the thousands.",
        ledger(values={("N00", "easting_m"): 600000}),
        wells=grouped_wells(","),
        config=inputs(wells={"file": "wells.csv", "thousands": ","}),
    ),
    case(
        "text_thousands_apostrophe",
        "A Swiss table has apostrophes between the thousands.",
        ledger(values={("N00", "northing_m"): 5700000}),
        wells=grouped_wells("'"),
        config=inputs(wells={"file": "wells.csv", "thousands": "'"}),
    ),
    case(
        "text_thousands_no_break_space",
        "A word processor put no-break spaces between the thousands, which look like blanks.",
        ledger(values={("N00", "easting_m"): 600000}),
        wells=grouped_wells("\u00a0"),
        config=inputs(wells={"file": "wells.csv", "thousands": " "}),
    ),
    case(
        "text_thousands_point_decimal_comma",
        "A German report has points between the thousands and decimal commas.",
        ledger(values={("N15", "measured_depth_m"): 3480}),
        readings=european(READING_COLUMNS, reading_rows(), thousands="."),
        config=inputs(readings={"file": "readings.csv", "decimal": ",", "thousands": "."}),
    ),
    case(
        "text_thousands_not_stated",
        "Coordinates with commas between the thousands in quotes, and nobody said so.",
        ledger({("wells", "not_a_number", 2): 1, ("readings", "well_rejected", None): 2}, 15, 30),
        wells=with_line(WELLS, 2, 'N00,"600,000","5,700,000",20,25,800'),
    ),
]

WHOLE_FILES = [
    case(
        "text_empty_file",
        "An export broke off before it wrote anything.",
        refused("readings.csv", "empty"),
        readings="",
    ),
    case(
        "text_headers_and_nothing_else",
        "A query found no rows, and its headers were saved all the same.",
        refused("readings.csv", "row"),
        readings=READINGS.split("\n")[0] + "\n",
    ),
    case(
        "text_html_error_page",
        "A download needed a login, and the page saying so was saved as wells.csv.",
        refused("wells.csv", "HTML"),
        wells=HTML,
    ),
    case(
        "text_zip_with_a_csv_suffix",
        "A portal sent a zip archive under the name of the table in it.",
        refused("readings.csv", "zip"),
        readings=zipped(),
    ),
    case(
        "text_csv_with_an_excel_suffix",
        "Someone renamed a CSV so that it opens in the spreadsheet.",
        refused("wells.xlsx"),
        files={"wells.xlsx": WELLS},
        config=inputs(wells={"file": "wells.xlsx"}),
    ),
    case(
        "text_suffix_not_known",
        "A table was saved by an office program in its own format.",
        refused("inputs.wells", "wells.ods", ".xlsx"),
        files={"wells.ods": zipped()},
        config=inputs(wells={"file": "wells.ods"}),
    ),
    case(
        "text_file_is_not_there",
        "The name in the config has a slip of the pen.",
        refused("inputs.wells", "well.csv"),
        config=inputs(wells={"file": "well.csv"}),
    ),
    case(
        "text_glob_finds_nothing",
        "The folder of the readings was renamed.",
        refused("inputs.readings", "readings/*.csv"),
        config=inputs(readings={"file": "readings/*.csv"}),
    ),
    case(
        "text_glob_finds_two_files",
        "Each year's wells stand in a file of their own.",
        CLEAN,
        files={
            "parts/wells_1.csv": "\n".join(WELLS.split("\n")[:9]) + "\n",
            "parts/wells_2.csv": "\n".join([WELLS.split("\n")[0], *WELLS.split("\n")[9:]]),
        },
        config=inputs(wells={"file": "parts/wells_*.csv"}),
    ),
]

CASES = [*BYTES, *DELIMITERS, *WHOLE_FILES]
