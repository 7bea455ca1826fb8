"""The columns an input table may have: the one place that names them."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class InputColumn:
    """One column of an input table.

    Parameters
    ----------
    unit : str
        Unit assumed where the config states none, as pint spells it; "" for text and ratios.
        Any unit of the same dimension may be stated under ``units``.
    description : str
        What the column means, in one line.
    required : bool, optional
        Whether every row needs it.
    text : bool, optional
        Whether cells hold words (names, dates, kinds) and not numbers.
    """

    unit: str
    description: str
    required: bool = False
    text: bool = False


def _text(description: str, required: bool = False) -> InputColumn:
    return InputColumn("", description, required, text=True)


WELLS = {
    "well": _text("name of the well, always text", required=True),
    "x": InputColumn(
        "", "easting or longitude, in the file's crs (metres, or degrees east)", required=True
    ),
    "y": InputColumn(
        "", "northing or latitude, in the file's crs (metres, or degrees north)", required=True
    ),
    "ground_elevation": InputColumn("m", "ground above sea level; sea floor negative offshore"),
    "datum_elevation": InputColumn(
        "m", "depth datum (rig floor, kelly bushing) above sea level; depths count from it"
    ),
    "water_depth": InputColumn("m", "water depth, blank or 0 onshore"),
    "total_depth": InputColumn("m", "total measured depth below the datum"),
    "surface_temperature": InputColumn(
        "degC", "ground or sea-floor temperature, for surface_temperature.model: column"
    ),
}

READINGS = {
    "well": _text("name of the well, as in the wells", required=True),
    "depth": InputColumn("m", "measured depth below the datum, positive down", required=True),
    "vertical_depth": InputColumn(
        "m", "true vertical depth below the datum; counts before depth where both are there"
    ),
    "temperature": InputColumn("degC", "temperature as read", required=True),
    "kind": _text("kind of reading: bht, dst, equilibrium, corrected, or a word under kinds"),
    "temperature_std": InputColumn("K", "standard uncertainty of the reading, thermometer only"),
    "since_circulation": InputColumn("h", "time since circulation stopped"),
    "circulation": InputColumn("h", "how long mud circulated before it stopped"),
    "hole_diameter": InputColumn("m", "diameter of the hole (bit size) at the reading"),
    "mud_temperature": InputColumn("degC", "mud temperature at the bottom of the hole"),
    "date": _text("date of the reading, ISO 8601 (a year alone will do)"),
    "log_run": _text("number or name of the log run"),
}

LAYERS = {
    "well": _text("name of the well, as in the wells", required=True),
    "top": InputColumn("m", "top of the layer, measured depth below the datum", required=True),
    "base": InputColumn("m", "base of the layer, measured depth below the datum", required=True),
    "lithology": _text("rock, a name of the catalogue or of conductivity.lithologies"),
    "conductivity": InputColumn("W/(m K)", "measured thermal conductivity at 25 degC"),
    "conductivity_std": InputColumn("W/(m K)", "its standard uncertainty"),
    "porosity": InputColumn("", "porosity, 0 to 1 (unit: percent where it is 0 to 100)"),
    "heat_production": InputColumn("uW/m3", "radiogenic heat production"),
    "gamma_ray": InputColumn("", "gamma ray, API units, from which heat production is estimated"),
}

SURVEYS = {
    "well": _text("name of the well, as in the wells", required=True),
    "depth": InputColumn("m", "measured depth below the datum", required=True),
    "inclination": InputColumn("deg", "angle from the vertical", required=True),
    "azimuth": InputColumn("deg", "direction of the hole, from grid north, clockwise"),
}

INPUT_COLUMNS = {"wells": WELLS, "readings": READINGS, "layers": LAYERS, "surveys": SURVEYS}

# Of each group of these a table needs one, beside its required columns.
ONE_OF = {"layers": (("lithology", "conductivity"),)}
