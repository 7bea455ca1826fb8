"""Coordinates, elevations, depths and temperatures that can't be, or look like another unit."""

import pyproj

from .base import (
    NEXT_WELL_LINE,
    case,
    good_readings,
    good_wells,
    inputs,
    plus,
    temperature_at,
    well_rows,
    with_cell,
    with_columns,
    with_line,
)
from .model import Ledger, ledger, refused

WELLS = good_wells()
READINGS = good_readings()


def lost(code: str, line: int = 4, **more):
    """The well in one line of the wells is refused, and so are its two readings."""
    codes = {("wells", code, line): 1, ("readings", "well_rejected", None): 2}
    return ledger(codes, 15, 30, **more)


def moved(x: str, y: str) -> str:
    """Wells with another place for N02 (line 4)."""
    return with_cell(with_cell(WELLS, 4, "x", x), 4, "y", y)


def read(*cells: str) -> str:
    """Readings with one more of N12 (2960 m deep) in line 34."""
    return plus(READINGS, ",".join(cells))


def one(code: str):
    return ledger({("readings", code, 34): 1})


SYSTEMS = {
    "N00": ("EPSG:4230", "ED50"),
    "N01": ("EPSG:4230", "EPSG:4230"),
    "N02": ("EPSG:4230", "4230"),
    "N03": ("EPSG:4258", "ETRS89"),
    "N04": ("EPSG:4326", "wgs84"),
    "N05": ("EPSG:4326", "epsg:4326"),
    "N06": ("EPSG:32632", "EPSG:32632"),
}


def wells_of_several_systems(last: str = "") -> str:
    """Each row in the system it names; blank: metres, the config's crs."""
    lines = [WELLS.split("\n")[0] + ",srs"]
    for well, x, y, *rest in well_rows():
        system, word = SYSTEMS.get(well, ("EPSG:32631", last if well == "N15" else ""))
        to = pyproj.Transformer.from_crs("EPSG:32631", system, always_xy=True)
        place = to.transform(x, y)
        lines.append(",".join(map(str, (well, *place, *rest, word))))
    return "\n".join(lines) + "\n"


MIXED = inputs(wells={"file": "wells.csv", "crs_column": "srs"})
ROWS = {row[0]: row for row in well_rows()}
DEGREES = "4.4389,51.4411"

PLACES = [
    case(
        "place_one_coordinate_blank",
        "A northing was not typed in.",
        lost("no_coordinates"),
        wells=with_cell(WELLS, 4, "y", ""),
    ),
    case(
        "place_zero_zero",
        "A database fills coordinates that are not known with zeros.",
        lost("coordinates_zero"),
        wells=moved("0", "0.0"),
    ),
    case(
        "place_that_can_not_be",
        "A digit was typed a few times too often.",
        lost("coordinates_impossible"),
        wells=moved("64070000000", "5700100"),
    ),
    case(
        "place_with_x_and_y_swapped",
        "Easting and northing were typed in each other's column.",
        lost("coordinates_suspect|coordinates_impossible"),
        wells=moved("5700100", "640800"),
    ),
    case(
        "place_with_a_digit_missing",
        "The northing lost its last digit.",
        lost("coordinates_suspect|coordinates_impossible"),
        wells=moved("640800", "570010"),
    ),
    case(
        "place_in_degrees_among_metres",
        "One well's place came from a web map, in degrees.",
        lost("coordinates_suspect|coordinates_impossible"),
        wells=moved(*DEGREES.split(",")),
    ),
    case(
        "place_in_degrees_minutes_seconds",
        "The place was typed as a chart has it.",
        lost("not_a_number"),
        wells=moved("5°1'33''E", "51°26'28''N"),
    ),
    case(
        "place_latitude_beyond_the_pole",
        "A digit of the latitude went wrong: 95 degrees north.",
        lost("coordinates_impossible", 17),
        wells=with_line(wells_of_several_systems("WGS84"), 17, "N15,5.3,95.2,65,70,3500,WGS84"),
        config=MIXED,
    ),
    case(
        "place_of_each_rows_own_system",
        "Wells of several vintages were joined, each with its datum noted.",
        ledger(
            values={
                ("N00", "easting_m"): ROWS["N00"][1],
                ("N02", "northing_m"): ROWS["N02"][2],
                ("N04", "easting_m"): ROWS["N04"][1],
                ("N06", "easting_m"): ROWS["N06"][1],
            },
            tolerance=15.0,
        ),
        wells=wells_of_several_systems(),
        config=MIXED,
    ),
    case(
        "place_of_a_system_that_is_none",
        "The datum's name is one nobody knows.",
        lost("crs_unknown", 17),
        wells=wells_of_several_systems("Local grid 7"),
        config=MIXED,
    ),
    case(
        "place_system_column_is_not_there",
        "The column of datums was left out of this year's export.",
        refused("wells.csv", "srs"),
        config=MIXED,
    ),
]

OFFSHORE = with_columns(WELLS, "water_depth")

DEPTHS = [
    case(
        "depth_negative",
        "Depths were noted as elevations, negative down.",
        one("depth_negative"),
        readings=read("N12", "-1500", "54.9", "equilibrium", "", ""),
    ),
    case(
        "depth_that_can_not_be",
        "Centimetres, or a depth and a date run together.",
        one("depth_impossible|depth_unit_suspect"),
        readings=read("N12", "15000000", "54.9", "equilibrium", "", ""),
    ),
    case(
        "depth_in_feet_among_metres",
        "One row was copied from a log in feet.",
        one("depth_unit_suspect|depth_impossible"),
        readings=read("N12", "9514", f"{temperature_at(2900):.1f}", "equilibrium", "", ""),
    ),
    case(
        "depth_within_the_sea",
        "The depth of an offshore reading was counted from the sea floor.",
        ledger({("readings", "depth_above_ground", 34): 1}, 17, 33),
        wells=plus(OFFSHORE, "Sea 1,660500,5730500,-100,30,2000,100"),
        readings=plus(
            READINGS,
            "Sea 1,60,14,equilibrium,,",
            f"Sea 1,1500,{5 + 0.03 * 1370:.1f},equilibrium,,",
        ),
    ),
    case(
        "depth_of_water_negative",
        "Water depth was noted as the elevation of the sea floor.",
        lost("water_depth_negative"),
        wells=with_cell(OFFSHORE, 4, "water_depth", "-90"),
    ),
    case(
        "depth_below_the_end_of_the_hole_by_a_little",
        "The logger's depth exceeds the driller's by some metres: no cause for any row.",
        ledger(readings=33),
        readings=read("N12", "2966", f"{temperature_at(2966):.1f}", "equilibrium", "", ""),
    ),
    case(
        "total_depth_with_text",
        "The total depth, which is optional, holds a remark instead.",
        ledger({("wells", "total_depth_dropped", 4): 1}),
        wells=with_cell(WELLS, 4, "total_depth", "see file"),
    ),
]

TEMPERATURES = [
    case(
        "temperature_below_absolute_zero",
        "A digit or a sign went wrong.",
        one("temperature_impossible"),
        readings=read("N12", "1200", "-300", "equilibrium", "", ""),
    ),
    case(
        "temperature_above_the_hottest",
        "A decimal point was lost: 459 for 45.9.",
        one("temperature_impossible|temperature_unit_suspect"),
        readings=read("N12", "1200", "459", "equilibrium", "", ""),
    ),
    case(
        "temperature_in_fahrenheit_among_celsius",
        "One row was copied from a log in degrees Fahrenheit.",
        one("temperature_unit_suspect"),
        readings=read("N12", "2700", "196", "equilibrium", "", ""),
    ),
    case(
        "temperature_of_the_mud_pit",
        "The temperature of the mud at the surface was typed instead.",
        one("not_above_surface_temperature"),
        readings=read("N12", "1200", "11.5", "equilibrium", "", ""),
    ),
    case(
        "temperature_copied_down_the_column",
        "A spreadsheet filled one run's temperature into the deeper runs below it.",
        Ledger(
            {("readings", "copied_temperature|repeated_temperature", None): None},
            {"wells": 16},
            exact=False,
        ),
        readings=plus(
            READINGS,
            "N12,1200,45.9,bht,6,3",
            "N12,1900,45.9,bht,6,3",
            "N12,2600,45.9,bht,6,3",
        ),
    ),
    case(
        "temperature_of_three_hundred_digits",
        "A formula left a number with 300 digits.",
        one("temperature_impossible|not_a_number"),
        readings=read("N12", "1200", "9" * 300, "equilibrium", "", ""),
    ),
]

NEW_WELL = ledger(wells=17)
CASES = [
    *PLACES,
    *DEPTHS,
    *TEMPERATURES,
    case(
        "well_without_any_reading",
        "The list of wells is longer than the list of temperatures.",
        NEW_WELL,
        wells=plus(WELLS, "Dry 1,640100,5741500,30,35,1500"),
    ),
    case(
        "well_with_required_values_only",
        f"The old well in line {NEXT_WELL_LINE} has a name and a place and nothing else.",
        NEW_WELL,
        wells=plus(WELLS, "Old 1,640100,5741500,,,"),
    ),
]
