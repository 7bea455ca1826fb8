"""A table in the borehole temperature model of the US network: rows invented."""

from .base import case
from .model import ledger

FIELDS = (
    *("OBJECTID", "APINo", "WellName", "State", "LatDegree", "LongDegree", "SRS"),
    *("ElevationGL", "ElevationKB", "DrillerTotalDepth", "LengthUnits", "DepthOfMeasurement"),
    *("TrueVerticalDepth", "MeasuredTemperature", "CorrectedTemperature", "TemperatureUnits"),
    *("TimeSinceCirculation", "CirculationDuration", "BitDiameterTD", "DiameterUnits"),
    *("MeasurementDateTime", "MeasurementProcedure", "Notes"),
)
NIL = "nil:missing"
DATA = {"file": "boreholes.csv", "schema": "ngds_borehole_temperature"}
CONFIG = {"crs": "EPSG:26914", "inputs": {"wells": [DATA], "readings": [DATA]}}


def row(i: int, **changed) -> dict:
    """An invented well in Kansas, 3000 to 7500 ft deep, with one temperature in Fahrenheit."""
    depth = 3000 + 300 * i
    return {
        "OBJECTID": i + 1,
        "APINo": f"15{100 + i:03}{20001 + 7 * i}0000",
        "WellName": f"Invented {i + 1}",
        "State": "Kansas",
        "LatDegree": round(37.1 + 0.13 * (i // 4), 2),
        "LongDegree": round(-98.6 + 0.15 * (i % 4), 2),
        "SRS": ("EPSG:4267", "4269", "NAD27", "WGS84")[i % 4],
        "ElevationGL": 1400 + 10 * i,
        "ElevationKB": 1412 + 10 * i,
        "DrillerTotalDepth": depth + 15,
        "LengthUnits": "ft",
        "DepthOfMeasurement": depth,
        "TrueVerticalDepth": NIL,
        "MeasuredTemperature": round(58 + 0.0165 * depth + (i * 7) % 5 * 0.5, 1),
        "CorrectedTemperature": "",
        "TemperatureUnits": "F",
        "TimeSinceCirculation": 6 + i % 5,
        "CirculationDuration": NIL,
        "BitDiameterTD": "7.875",
        "DiameterUnits": "in",
        "MeasurementDateTime": f"19{60 + i}-05-11T00:00:00",
        "MeasurementProcedure": "nil:unknown",
        "Notes": "",
    } | changed


def written(changes: dict[int, dict], *more: dict) -> str:
    """Sixteen rows, some changed, and further ones; a byte order mark as downloads have it."""
    lines = [row(i, **changes.get(i, {})) for i in range(16)] + list(more)
    text = "\n".join(",".join(str(line[name]) for name in FIELDS) for line in lines)
    return "\ufeff" + ",".join(FIELDS) + "\r\n" + text.replace("\n", "\r\n") + "\r\n"


def state(name: str, why: str, expected, changes=None, *more):
    return case(
        name,
        why,
        expected,
        files={"boreholes.csv": written(changes or {}, *more)},
        config=CONFIG,
    )


METRES = {
    "LengthUnits": "m",
    "DepthOfMeasurement": 1200,
    "DrillerTotalDepth": 1250,
    "ElevationGL": 430,
    "ElevationKB": 434,
    "TemperatureUnits": "C",
    "MeasuredTemperature": 51.3,
}
SECOND = row(3, OBJECTID=17, DepthOfMeasurement=2500, MeasuredTemperature=99.6)
GAPS = {
    4: {"MeasuredTemperature": NIL},
    5: {"DepthOfMeasurement": NIL},
    6: {"LatDegree": NIL},
    7: {"TemperatureUnits": "Rankline"},
    8: {"SRS": "local"},
}

CASES = [
    state(
        "schema_as_a_state_delivers_it",
        "A state's table follows the model, in feet and Fahrenheit, nil:missing for blanks.",
        ledger(
            readings=16,
            values={(None, "measured_depth_m"): 914.4, (None, "hole_diameter_m"): 0.200025},
        ),
    ),
    state(
        "schema_with_units_that_differ_by_row",
        "States were joined: one row is in metres and Celsius.",
        ledger(
            readings=16,
            values={
                (None, "measured_depth_m"): 1200,
                (None, "temperature_degc"): 51.3,
                (None, "total_depth_m"): 1250,
            },
        ),
        {3: METRES},
    ),
    state(
        "schema_with_two_temperatures_of_one_well",
        "The model has a row per temperature, so that a well stands in several rows.",
        ledger({("wells", "merged", None): 1}, readings=17),
        {},
        SECOND,
    ),
    state(
        "schema_with_what_is_required_missing",
        "Rows lack temperature, depth or place, or name a unit or datum that is none.",
        ledger(
            {
                ("readings", "no_temperature", 6): 1,
                ("readings", "no_depth", 7): 1,
                ("wells", "no_coordinates", 8): 1,
                ("readings", "unit_unknown", 9): 1,
                ("wells", "crs_unknown", 10): 1,
                ("readings", "well_rejected", None): 2,
            },
            14,
            11,
        ),
        GAPS,
    ),
]
