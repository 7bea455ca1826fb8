"""What means missing: numbers that can't be, words in every spelling, zeros."""

from .base import (
    case,
    good_readings,
    good_wells,
    inputs,
    plus,
    with_cell,
    with_depths,
    with_temperatures,
)
from .model import ledger, rows

WELLS = good_wells()
READINGS = good_readings()
SENTINELS = ("-999.25", "-999.2500", "-9999", "-9999.0", "-99999", "-99999.00")
WORDS = (
    *("", "NA", "n/a", "NaN", "NULL", "None", "nil", "nil:missing", "NIL:Unknown"),
    *("nil:inapplicable", "[unspecified]", "Unspecified", "UNKNOWN", "-", "--", "?", "#N/A"),
)


CASES = [
    case(
        "missing_sentinel_temperatures",
        "Logging software writes a number that can't be for a value it does not have.",
        ledger(rows("readings", "no_temperature", 34, len(SENTINELS))),
        readings=with_temperatures(*SENTINELS),
    ),
    case(
        "missing_sentinel_depths",
        "The depth is what was not noted.",
        ledger(rows("readings", "no_depth", 34, len(SENTINELS))),
        readings=with_depths(*SENTINELS),
    ),
    case(
        "missing_sentinels_where_values_are_optional",
        "Elevations that were never surveyed are written as -9999.",
        # Corrected: the expectation was a blank ground elevation. The table of wells completes it
        # from the datum (rig floor 5 m up where it is not known), and flags that; the manual says
        # of missing words only that the cell counts as blank.
        ledger(
            values={("N02", "ground_elevation_m"): 26, ("N02", "total_depth_m"): None},
            flags={("wells", "N02"): ("rig_floor_assumed",)},
        ),
        wells=with_cell(
            with_cell(WELLS, 4, "ground_elevation", "-9999"), 4, "total_depth", "-999.250"
        ),
    ),
    case(
        "missing_sentinel_coordinates",
        "A well that was never located has -9999 for its easting.",
        ledger({("wells", "no_coordinates", 4): 1, ("readings", "well_rejected", None): 2}, 15, 30),
        wells=with_cell(WELLS, 4, "x", "-9999.00"),
    ),
    case(
        "missing_words_in_every_spelling",
        "Each clerk wrote 'not known' in his own way.",
        ledger(rows("readings", "no_temperature", 34, len(WORDS))),
        readings=with_temperatures(*WORDS),
    ),
    case(
        "missing_words_of_ones_own",
        "A survey writes n.d. and 'not measured'; the config says so.",
        ledger(rows("readings", "no_temperature", 34, 3)),
        readings=with_temperatures("n.d.", "N.D.", "Not Measured"),
        config=inputs(readings={"file": "readings.csv", "missing": ["n.d.", "not measured"]}),
    ),
    case(
        "missing_words_that_nobody_stated",
        "Words and numbers that look like 'missing' but are not among those that mean it.",
        ledger(
            {
                ("readings", "not_a_number", 34): 1,
                ("readings", "not_a_number", 35): 1,
                ("readings", "temperature_impossible", 36): 1,
            }
        ),
        readings=with_temperatures("n.d.", "xx", "-999"),
    ),
    case(
        "missing_names_of_wells",
        "The name is blank, a dash or a word for missing; -9999 is a name like any other.",
        ledger(rows("readings", "no_well", 34, 3) | {("readings", "unknown_well", 37): 1}),
        readings=plus(READINGS, *(f"{name},2500,84.9,,," for name in ("", "-", "N/A", "-9999"))),
    ),
    case(
        "zero_where_zero_is_impossible",
        "Zeros stand for what was not noted: times, circulation and the total depth.",
        ledger(
            readings=33,
            values={
                ("N15", "since_circulation_h"): None,
                ("N15", "circulation_h"): None,
                ("N02", "total_depth_m"): None,
            },
        ),
        wells=with_cell(WELLS, 4, "total_depth", "0"),
        readings=plus(READINGS, "N15,2500,78,bht,0,0.0"),
    ),
    case(
        "zero_depth",
        "Readings whose depth was not noted have 0.",
        ledger(rows("readings", "no_depth", 34, 2)),
        readings=with_depths("0", "0.00"),
    ),
    case(
        "zero_stated_as_missing",
        "Zero is a good elevation, but in this file it means not surveyed.",
        # Corrected as in missing_sentinels_where_values_are_optional: 5 m below the datum at 31 m.
        ledger(
            values={("N02", "ground_elevation_m"): 26},
            flags={("wells", "N02"): ("rig_floor_assumed",)},
        ),
        wells=with_cell(WELLS, 4, "ground_elevation", "0"),
        config=inputs(wells={"file": "wells.csv", "zero_is_missing": ["ground_elevation"]}),
    ),
    case(
        "zero_not_stated_as_missing",
        "Zero is the ground elevation of a well on the beach; zero degrees is a reading.",
        ledger(
            {("readings", "not_above_surface_temperature", 34): 1},
            values={("N02", "ground_elevation_m"): 0},
        ),
        wells=with_cell(with_cell(WELLS, 4, "ground_elevation", "0"), 4, "datum_elevation", "5"),
        readings=with_temperatures("0"),
    ),
]
