"""Delimited text: title rows, headers, blank and broken lines."""

from .base import case, good_readings, good_wells, inputs, plus, renamed, with_columns, with_line
from .model import ledger, refused

CLEAN = ledger()
WELLS = good_wells()
READINGS = good_readings()
BAD = "N15,2500,hot,equilibrium,,"
TITLES = "Temperatures of the northern licence\nas of May, 2003, all wells\n\n"
NAMED = {"well": "well", "depth": "DEPTH (m)", "temperature": "temperature", "kind": "kind"}


def every_line(text: str, ending: str) -> str:
    return text.replace("\n", ending + "\n")


HEADERS = [
    case(
        "headers_below_title_rows",
        "A report's table has a title above it, with commas in it; the last row is bad.",
        ledger({("readings", "not_a_number", 37): 1}),
        readings=TITLES + plus(READINGS, BAD),
    ),
    case(
        "headers_below_title_rows_stated",
        "The number of title rows is known and stated.",
        ledger({("readings", "not_a_number", 37): 1}),
        readings=TITLES + plus(READINGS, BAD),
        config=inputs(readings={"file": "readings.csv", "skip_lines": 3}),
    ),
    case(
        "headers_below_sixty_lines_of_prose",
        "A data report starts with pages of text before its table.",
        refused("readings.csv", "skip_lines"),
        readings="A line of the report's introduction\n" * 60 + READINGS,
    ),
    case(
        "headers_below_sixty_lines_stated",
        "The same report, with the number of its lines counted and stated.",
        CLEAN,
        readings="A line of the report's introduction\n" * 60 + READINGS,
        config=inputs(readings={"file": "readings.csv", "skip_lines": 60}),
    ),
    case(
        "headers_with_blanks_around",
        "A database pads its column names to a fixed width.",
        CLEAN,
        wells=renamed(WELLS, {"x": "  x", "total_depth": "total_depth   "}),
        readings=renamed(READINGS, {"depth": "depth     ", "temperature": " temperature "}),
    ),
    case(
        "headers_with_a_line_break",
        "The header was wrapped in its spreadsheet cell, unit below name.",
        ledger({("readings", "not_a_number", 35): 1}),
        readings=renamed(plus(READINGS, BAD), {"depth": '"DEPTH\n(m)"'}),
        config=inputs(readings={"file": "readings.csv", "columns": NAMED}),
    ),
    case(
        "headers_one_misspelt",
        "A column name was typed by hand, with a letter left out.",
        refused("readings.csv", "temprature", "temperature"),
        readings=renamed(READINGS, {"temperature": "temprature"}),
    ),
    case(
        "headers_in_another_case",
        "A database writes all column names in capitals.",
        refused("readings.csv", "DEPTH"),
        readings=renamed(READINGS, {"depth": "DEPTH"}),
    ),
    case(
        "headers_mapped_but_absent",
        "The config was copied from last year, when the export named its columns otherwise.",
        refused("readings.csv", "DEPTH_M", "DEPTH (m)"),
        readings=renamed(READINGS, {"depth": "DEPTH (m)"}),
        config=inputs(readings={"file": "readings.csv", "columns": NAMED | {"depth": "DEPTH_M"}}),
    ),
    case(
        "headers_twice_the_same_and_needed",
        "Two tables were joined side by side, both with a column temperature.",
        refused("readings.csv", "temperature"),
        readings=renamed(READINGS, {"circulation": "temperature"}),
    ),
    case(
        "headers_twice_the_same_but_not_needed",
        "A joined table has two columns of remarks, which the config does not name.",
        CLEAN,
        readings=renamed(with_columns(READINGS, "remark", "remark"), {"depth": "DEPTH (m)"}),
        config=inputs(readings={"file": "readings.csv", "columns": NAMED}),
    ),
    case(
        "headers_repeated_in_the_middle",
        "Two exports were pasted below each other, headers and all.",
        ledger({("readings", "not_a_number|unknown_well", 34): 1}, readings=33),
        readings=plus(READINGS, READINGS.split("\n")[0], "N15,2500,84.9,equilibrium,,"),
    ),
    case(
        "headers_with_a_line_of_units_below",
        "The line below the headers holds the units, as exchange formats have it.",
        ledger(
            {
                ("wells", "not_a_number", 2): 1,
                ("readings", "not_a_number|unknown_well|well_rejected", 2): 1,
            }
        ),
        wells=WELLS.replace("N00", "name,m,m,m,m,m\nN00", 1),
        readings=READINGS.replace("N00", "name,m,degC,text,h,h\nN00", 1),
    ),
]

LINES = [
    case(
        "lines_blank_and_of_commas_only",
        "A spreadsheet saves rows that were cleared as lines of commas.",
        ledger({("readings", "not_a_number", 39): 1}),
        wells=WELLS.replace("N04", "\n   \nN04", 1) + ",,,,,\n" * 20,
        readings=plus(READINGS.replace("N04", "\n,,,,,\n\n\nN04", 1), ",,,,,", BAD, "", ""),
    ),
    case(
        "lines_with_a_comma_at_the_end",
        "The export writes a comma behind each cell, the last included.",
        CLEAN,
        wells=every_line(WELLS, ","),
        readings=every_line(READINGS, ",,"),
    ),
    case(
        "lines_with_further_blank_cells",
        "Stray commas stand behind some rows, with nothing in the cells between them.",
        CLEAN,
        readings=READINGS.replace("equilibrium,,", "equilibrium,,,,", 5),
    ),
    case(
        "lines_cut_off",
        "The disk was full, and the last line ends in the middle of a number.",
        ledger({("readings", "wrong_number_of_cells", 34): 1}),
        readings=READINGS + "N15,25",
    ),
    case(
        "lines_with_a_comma_not_quoted",
        "A decimal comma in a comma-separated file makes one cell two.",
        ledger({("readings", "wrong_number_of_cells", 34): 1}),
        readings=plus(READINGS, "N15,2500,84,9,equilibrium,6,2"),
    ),
    case(
        "lines_with_a_source_at_the_foot",
        "The last line of a report's table names its source.",
        ledger({("readings", "wrong_number_of_cells", 35): 1}),
        readings=plus(READINGS, "", "Source: archive of the survey, 2019"),
    ),
    case(
        "lines_with_an_unclosed_quote_among_readings",
        "A quote that was meant as an inch mark opens a cell and never closes it.",
        ledger({("readings", "unclosed_quote", 10): 1}, readings=31),
        readings=with_line(READINGS, 10, '"N04,760,32.6,equilibrium,,'),
    ),
    case(
        "lines_with_an_unclosed_quote_among_wells",
        "A well's name lost its closing quote when a table was edited by hand.",
        ledger({("wells", "unclosed_quote", 7): 1, ("readings", "unknown_well", None): 2}, 15, 30),
        wells=with_line(WELLS, 7, '"N05,623300,5720600,35,40,1700'),
    ),
    case(
        "lines_with_an_unclosed_quote_at_the_end",
        "The last line was cut off inside quotes.",
        ledger({("readings", "unclosed_quote", 34): 1}),
        readings=READINGS + 'N15,2500,84.9,"equilib',
    ),
    case(
        "lines_with_a_break_inside_quotes",
        "A remark was typed over two lines in its cell; the row behind it is bad.",
        ledger({("readings", "not_a_number", 36): 1}, readings=33),
        readings=plus(
            with_columns(READINGS, "log_run"),
            'N15,2500,84.9,equilibrium,,,"run 2\nsecond try"',
            BAD + ",",
        ),
    ),
]

CASES = [*HEADERS, *LINES]
