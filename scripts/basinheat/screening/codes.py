"""The codes of screening: how grave each is, and what it means in one sentence."""

from __future__ import annotations

from dataclasses import dataclass

REFUSED, DOUBT, NOTE = "refused", "doubt", "note"
SEVERITIES = (REFUSED, DOUBT, NOTE)


@dataclass(frozen=True)
class Flag:
    """A flag of screening.

    Parameters
    ----------
    severity : str
        "doubt": a person should look; "note": known, and allowed for where it can be.
    value : str
        The value found fault with, with fields of the record.
    sentence : str
        What it means, with fields of the record and settings of ``screening``.
    """

    severity: str
    value: str
    sentence: str


_DEGC, _HOURS = "{temperature:.1f} degC", "{since_circulation:.2f} h"
_UNIT = (
    "{temperature:.1f} degC at {depth_m:.0f} m is {gradient_k_km:.1f} K/km from the surface and an "
    "ordinary gradient if column {_column} were in another unit; the wells around do not decide it."
)
_SAID = 'the remarks say "{remarks}"; '

READINGS = {
    "gradient_low": Flag(
        DOUBT,
        _DEGC,
        "the gradient from the surface is {gradient_k_km:.1f} K/km, below "
        "{gradient_low_k_km:g} K/km (screening.gradient_low_k_km).",
    ),
    "gradient_high": Flag(
        DOUBT,
        _DEGC,
        "the gradient from the surface is {gradient_k_km:.1f} K/km, above "
        "{gradient_high_k_km:g} K/km (screening.gradient_high_k_km).",
    ),
    "spatial_outlier": Flag(
        DOUBT,
        _DEGC,
        "the wells around lead to expect {expected_degc:.1f} degC at {depth_m:.0f} m: it lies "
        "{score:+.1f} times their scatter off, more than {outlier_score:g} "
        "(screening.outlier_score).",
    ),
    "temperature_unit_suspect": Flag(DOUBT, _DEGC, _UNIT.replace("{_column}", "temperature")),
    "depth_unit_suspect": Flag(DOUBT, "{depth:.0f} m", _UNIT.replace("{_column}", "depth")),
    "deeper_than_total_depth": Flag(
        DOUBT,
        "{depth:.0f} m",
        "the reading is at {depth:.0f} m and the well ends at {total_depth_m:.0f} m, more than "
        "{deeper_than_total_m:g} m above (screening.deeper_than_total_m).",
    ),
    "vertical_depth_below_measured": Flag(
        DOUBT,
        "{vertical_depth:.0f} m",
        "the vertical depth is larger than the measured depth of {depth:.0f} m: they were "
        "exchanged, or count from different datums.",
    ),
    "repeated_temperature": Flag(
        DOUBT,
        _DEGC,
        "the same temperature stands at a shallower depth of this well, more than "
        "{inconsistent_gap_m:g} m away (screening.inconsistent_gap_m); this one counts.",
    ),
    "copied_temperature": Flag(
        NOTE, _DEGC, "the same temperature is noted for later runs of this depth; it counts once."
    ),
    "same_temperature": Flag(
        NOTE,
        _DEGC,
        "an earlier run at this depth reads the same; between the two times no more was to be "
        "expected than {same_temperature_score:g} errors of the readings "
        "(screening.same_temperature_score).",
    ),
    "cooling_with_time": Flag(
        NOTE,
        _DEGC,
        "among the runs of this depth a later one is cooler: the times or the readings are wrong, "
        "or the mud was circulated again.",
    ),
    "inconsistent_gradient": Flag(
        NOTE,
        _DEGC,
        "with the next depth of this well, {inconsistent_gap_m:g} m or more away "
        "(screening.inconsistent_gap_m), the gradient is below half of {gradient_low_k_km:g} K/km "
        "or above {gradient_high_k_km:g} K/km.",
    ),
    "surface_heat_possible": Flag(
        NOTE,
        _DEGC,
        "a maximum thermometer may have met as much in the sun: it is the hot season, and the "
        "reading is below {hottest_air_degc:g} degC (screening.hottest_air_degc).",
    ),
    "above_boiling_point": Flag(
        DOUBT,
        _DEGC,
        "water under its own weight would boil at {depth_m:.0f} m: steam, or a value or depth that "
        "is wrong.",
    ),
    "inside_casing": Flag(
        NOTE, "{depth:.0f} m", "the reading is above the casing shoe at {casing_shoe:.0f} m."
    ),
    "circulation_long": Flag(
        NOTE,
        "{circulation:.1f} h",
        "circulation of {circulation:.1f} h is longer than {longest_circulation_h:g} h "
        "(screening.longest_circulation_h).",
    ),
    "circulation_exceeds_rest": Flag(
        NOTE,
        "{circulation:.1f} h",
        "mud circulated for {circulation:.1f} h and rested for {since_circulation:.1f} h only.",
    ),
    "time_across_midnight": Flag(
        NOTE,
        _HOURS,
        "the logger was on bottom at {logger_on_bottom}, before circulation stopped at "
        "{circulation_stopped}: the next day is meant.",
    ),
    "old_reading": Flag(
        NOTE,
        "{date}",
        "read before {vintage_year:g} (screening.vintage_year): {vintage_std_k:g} K less certain "
        "(screening.vintage_std_k).",
    ),
    "gas_cooled": Flag(
        DOUBT,
        _DEGC,
        _SAID + "gas cools where it expands, so the rock is warmer than read. A test gets "
        "{gas_std_k:g} K (screening.gas_std_k).",
    ),
    "only_mud_recovered": Flag(
        DOUBT, _DEGC, _SAID + "a test that brought up mud only is a log: decide on regrade, bht."
    ),
    "lost_circulation": Flag(
        NOTE, _DEGC, _SAID + "mud lost into the rock cools it for longer than any correction knows."
    ),
    "injected": Flag(NOTE, _DEGC, _SAID + "the rock was not in its natural state."),
    "permafrost": Flag(NOTE, _DEGC, _SAID + "a gradient from the surface is none of the rock's."),
    "salt_nearby": Flag(NOTE, _DEGC, _SAID + "heat flow beside salt is not that of the region."),
    "moving_water": Flag(NOTE, _DEGC, _SAID + "moving water carries heat: heat flow is local."),
}

WELLS = {
    "far_from_others": Flag(
        DOUBT,
        "{easting_m:.0f}, {northing_m:.0f}",
        "the well lies far from all others: check its coordinates.",
    ),
    "elevation_suspect": Flag(
        DOUBT,
        "{ground_elevation_m:.0f} m",
        "the ground differs from the elevation raster by more than {elevation_difference_m:g} m "
        "(screening.elevation_difference_m): the place or the datum is wrong.",
    ),
    "well_name_ambiguous": Flag(
        DOUBT,
        "{well}",
        "another well has a name that differs in case, blanks or marks only; they are kept apart.",
    ),
    "rig_floor_suspect": Flag(
        DOUBT,
        "{datum_elevation_m:.0f} m",
        "the depth datum is at a height above ground where no rig floor is: check "
        "datum_elevation and ground_elevation.",
    ),
}

# A file as a whole: one finding, however many its readings are.
ROUNDED = (
    "{ending} of {whole} temperatures in {unit} are multiples of {step}, {score:.1f} standard "
    "deviations more than chance, above {heaping_score:g} (screening.heaping_score): "
    "they were rounded, and {std:.2f} K is added to their error in quadrature."
)
# Remarks of the ledger on values of records that stay: these a person should look at.
DOUBTFUL_VALUES = frozenset(
    {
        "since_circulation_is_time_of_day",
        "times_of_another_stop",
        "times_disagree",
        "well_conflict",
    }
)
# Refusals that no decision on the record can mend, or that need none.
BEYOND_DECISION = frozenset(
    {
        "merged",
        "no_coordinates",
        "no_depth",
        "no_temperature",
        "no_well",
        "reviewed_reject",
        "unclosed_quote",
        "unknown_well",
        "unreadable_file",
        "well_rejected",
        "wrong_number_of_cells",
    }
)
