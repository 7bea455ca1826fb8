"""Cells of numbers: spellings, words beside numbers, bounds, units of columns and rows."""

from .base import (
    READING_COLUMNS,
    case,
    good_readings,
    good_wells,
    inputs,
    plus,
    reading_rows,
    table,
    temperature_at,
    with_cell,
    with_columns,
    with_depths,
    with_temperatures,
)
from .model import ledger, refused, rows

WELLS = good_wells()
READINGS = good_readings()


def fahrenheit(depth: float) -> float:
    return round(temperature_at(depth) * 1.8 + 32, 1)


def with_readings(columns: str, *lines: str) -> str:
    """Readings with further columns and rows."""
    return plus(with_columns(READINGS, *columns.split()), *lines)


def of_rows(**columns) -> dict:
    return inputs(readings={"file": "readings.csv", "unit_columns": columns})


SPELLINGS = [
    case(
        "numbers_in_every_spelling",
        "Programs write exponents, signs and points without a zero before them.",
        ledger(readings=35, values={("N15", "measured_depth_m"): 2550}),
        readings=with_depths("2.55e3", "+2500.", "002450"),
    ),
    case(
        "numbers_that_a_program_would_read_and_a_reader_would_not",
        "Infinity, underscores, hexadecimals, stray letters: none of these is a temperature.",
        ledger(rows("readings", "not_a_number|temperature_impossible", 34, 8)),
        readings=with_temperatures(
            "inf", "-Infinity", "8_5", "0x55", "1O5", "8 5", "1e999", "84..9"
        ),
    ),
    case(
        "numbers_with_a_typographic_minus",
        "A word processor made a real minus sign of the hyphen.",
        ledger(values={("N02", "ground_elevation_m"): -3}),
        wells=with_cell(WELLS, 4, "ground_elevation", "\u22123"),
    ),
    case(
        "numbers_with_units_in_cells",
        "The clerk noted each value as the log's header has it, unit and all.",
        ledger(
            readings=37,
            flags={("readings", "N15"): ("unit_in_cell",)},
            values={("N15", "temperature_degc"): 66.85, ("N15", "measured_depth_m"): 1800},
            tolerance=0.06,
        ),
        readings=with_temperatures(
            f"{fahrenheit(1800)} F",
            f"{fahrenheit(1850)}F",
            f"{fahrenheit(1900)} °F",
            f"{temperature_at(1950) + 273.15:.2f} K",
            f"{temperature_at(2000):.2f} degC",
        ).replace("N15,1800,", "N15,5905.5 ft,"),
    ),
    case(
        "numbers_with_an_inch_mark",
        "The bit size is given in inches, with the mark.",
        ledger(
            readings=33,
            flags={("readings", "N15"): ("unit_in_cell",)},
            values={("N15", "hole_diameter_m"): 0.31115},
            tolerance=0.0001,
        ),
        readings=with_readings("hole_diameter", 'N15,2500,78,bht,10,4,"12.25"""'),
    ),
    case(
        "numbers_with_a_common_fraction",
        "Bit sizes are often written 12 1/4; the size can't be read, the reading is good.",
        ledger({("readings", "hole_diameter_dropped", 34): 1}, readings=33),
        readings=with_readings("hole_diameter", "N15,2500,78,bht,10,4,12 1/4"),
    ),
    case(
        "numbers_with_units_of_another_kind",
        "Cells were swapped: a length as temperature, a temperature as time.",
        ledger(
            {
                ("readings", "not_a_number", 34): 1,
                ("readings", "not_a_number", 35): 1,
                ("readings", "since_circulation_dropped", 36): 1,
            },
            readings=33,
        ),
        readings=plus(READINGS, "N15,2500,84 m,,,", "N15,85 F,84,,,", "N15,2600,81,bht,8 degC,"),
    ),
    case(
        "numbers_that_are_approximate",
        "The engineer read the thermometer roughly, and said so.",
        ledger(
            readings=34,
            flags={("readings", "N15"): ("approximate",)},
            values={("N15", "temperature_degc"): 65.5},
        ),
        readings=with_temperatures("~63.9", "ca. 65.5"),
    ),
    case(
        "numbers_that_are_bounds",
        "The maximum thermometer went off its scale, or had not moved.",
        ledger(rows("readings", "bound_only", 34, 3)),
        readings=with_temperatures("<65", ">120", "> 70"),
    ),
    case(
        "numbers_that_are_bounds_where_optional",
        "The log says only that the mud stood for more than a day.",
        ledger(
            {("readings", "since_circulation_dropped", 34): 1},
            readings=33,
            values={("N15", "since_circulation_h"): None},
        ),
        readings=plus(READINGS, "N15,2500,78,bht,>24,4"),
    ),
    case(
        "numbers_that_are_estimates",
        "The blank was filled with a guess, and the word says so.",
        ledger(rows("readings", "estimated_value", 34, 3)),
        readings=with_temperatures("65 estimated", "67 (calculated)", "est. 68"),
    ),
    case(
        "numbers_with_a_mark_of_a_footnote",
        "A star behind a value points at a footnote that is not in the file.",
        ledger({("readings", "not_a_number", 34): 1}),
        readings=with_temperatures("63.9*"),
    ),
]


def in_feet() -> str:
    """All readings in feet and degrees Fahrenheit."""
    lines = [
        (well, round(depth / 0.3048, 1), round(temperature * 1.8 + 32, 2), *rest)
        for well, depth, temperature, *rest in reading_rows()
    ]
    return table(READING_COLUMNS, lines)


UNIT_ROWS = (
    f"N15,2500,{fahrenheit(2500)},,,,F,m",
    f"N15,8366.1,{temperature_at(2550)},,,,deg C,ft",
    f"N15,8530.2,{temperature_at(2600) + 273.15:.2f},,,,k,FEET",
    f"N15,2650,{fahrenheit(2650)},,,,°F,Meters",
    f"N15,2700,{temperature_at(2700)},,,,,",
    "N15,2750,92,,,,furlong,m",
    "N15,2800,94,,,,C,degC",
    f"N15,9350.4,{fahrenheit(2850)},,,,Fahrenheit,Ft",
)

UNITS = [
    case(
        "units_of_columns",
        "The whole table is in feet, Fahrenheit and minutes, and the config says so.",
        ledger(
            readings=33,
            values={
                ("N15", "since_circulation_h"): 1.5,
                ("N15", "measured_depth_m"): 2500,
                ("N00", "temperature_degc"): reading_rows()[0][2],
            },
            tolerance=0.05,
        ),
        readings=plus(in_feet(), f"N15,{2500 / 0.3048:.1f},{fahrenheit(2500) - 12:.1f},bht,90,"),
        config=inputs(
            readings={
                "file": "readings.csv",
                "units": {"depth": "ft", "temperature": "degF", "since_circulation": "min"},
            }
        ),
    ),
    case(
        "units_of_each_row",
        "Two states' tables were joined, with columns that say what each row is in.",
        ledger(
            {("readings", "unit_unknown", 39): 1, ("readings", "unit_unknown", 40): 1},
            readings=38,
            values={
                ("N15", "temperature_degc"): round(temperature_at(2850), 2),
                ("N15", "measured_depth_m"): 2550,
            },
            tolerance=0.06,
        ),
        readings=with_readings("t_unit d_unit", *UNIT_ROWS),
        config=of_rows(temperature="t_unit", depth="d_unit"),
    ),
    case(
        "units_of_each_row_where_optional",
        "The unit of the bit size is misspelt in one row.",
        ledger(
            {("readings", "hole_diameter_dropped", 35): 1},
            readings=34,
            values={("N15", "hole_diameter_m"): 0.2159},
            tolerance=0.0001,
        ),
        readings=with_readings(
            "hole_diameter size_unit",
            "N15,2500,78,bht,10,4,8.5,IN",
            "N15,2600,81,bht,12,4,8.5,inhces",
        ),
        config=of_rows(hole_diameter="size_unit"),
    ),
    case(
        "units_of_each_row_in_a_column_that_is_not_there",
        "The config names a column of units that this file lacks.",
        refused("readings.csv", "T_UNIT"),
        config=of_rows(temperature="T_UNIT"),
    ),
    case(
        "units_no_unit_in_the_config",
        "A unit in the config has a slip of the pen.",
        refused("units", "temperature", "degX"),
        config=inputs(readings={"file": "readings.csv", "units": {"temperature": "degX"}}),
    ),
    case(
        "units_of_another_kind_in_the_config",
        "Two lines of the config were swapped.",
        refused("units", "depth", "degF"),
        config=inputs(readings={"file": "readings.csv", "units": {"depth": "degF"}}),
    ),
]

CASES = [*SPELLINGS, *UNITS]
