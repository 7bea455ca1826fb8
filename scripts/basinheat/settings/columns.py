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
    "drilling": InputColumn(
        "h", "time from the bit's passing this depth until circulation stopped for the log"
    ),
    "hole_diameter": InputColumn("m", "diameter of the hole (bit size) at the reading"),
    "mud_temperature": InputColumn("degC", "mud temperature at the bottom of the hole"),
    "date": _text("date of the reading, ISO 8601 (a year alone will do)"),
    "log_run": _text("number or name of the log run"),
    "circulation_stopped": _text("when circulation stopped: hh:mm, hhmm, or a date and time"),
    "logger_on_bottom": _text("when the logger was on bottom, in the same way"),
    "casing_shoe": InputColumn("m", "depth of the casing shoe below the datum, at that time"),
    "remarks": _text("what was remarked: gas, lost circulation, air drilled, permafrost, ..."),
}

LAYERS = {
    "well": _text("name of the well, as in the wells", required=True),
    "top": InputColumn("m", "top of the layer, measured depth below the datum", required=True),
    "base": InputColumn("m", "base of the layer, measured depth below the datum", required=True),
    "lithology": _text(
        "rock: a name of the catalogue, of conductivity.lithologies or conductivity.formations, or "
        "a mixture with percentages (sandstone 60 shale 40)"
    ),
    "formation": _text("formation, a name of conductivity.formations; where lithology is blank"),
    "net_to_gross": InputColumn(
        "", "share of the layer that is the rock named, 0 to 1; the rest is non_net_lithology"
    ),
    "conductivity": InputColumn("W/(m K)", "measured thermal conductivity at 25 degC"),
    "conductivity_std": InputColumn("W/(m K)", "its standard uncertainty"),
    "porosity": InputColumn("", "porosity, 0 to 1 (unit: percent where it is 0 to 100)"),
    "heat_production": InputColumn("uW/m3", "radiogenic heat production"),
    "gamma_ray": InputColumn("", "gamma ray, API units, from which heat production is estimated"),
    "uranium": InputColumn("ppm", "uranium; with thorium and potassium: heat production"),
    "thorium": InputColumn("ppm", "thorium"),
    "potassium": InputColumn("percent", "potassium, by mass"),
    "density": InputColumn(
        "kg/m3", "bulk density, for heat from uranium, thorium, potassium; blank: 2400"
    ),
    "dip": InputColumn("deg", "dip of the bedding, for overrides.<lithology>.anisotropy"),
}

SURVEYS = {
    "well": _text("name of the well, as in the wells", required=True),
    "depth": InputColumn("m", "measured depth below the datum", required=True),
    "inclination": InputColumn("deg", "angle from the vertical", required=True),
    "azimuth": InputColumn("deg", "direction of the hole, from grid north, clockwise"),
}

HEAT_FLOW = {
    "well": _text("name or number of the place, always text", required=True),
    "site": _text("a second name, for people"),
    "x": InputColumn(
        "", "easting or longitude, in the file's crs (metres, or degrees east)", required=True
    ),
    "y": InputColumn(
        "", "northing or latitude, in the file's crs (metres, or degrees north)", required=True
    ),
    "heat_flow": InputColumn("mW/m2", "heat flow, positive up", required=True),
    "heat_flow_std": InputColumn("mW/m2", "its standard uncertainty"),
    "gradient": InputColumn("K/km", "gradient of temperature it rests on"),
    "gradient_std": InputColumn("K/km", "its standard uncertainty"),
    "conductivity": InputColumn("W/(m K)", "thermal conductivity it rests on"),
    "conductivity_std": InputColumn("W/(m K)", "its standard uncertainty"),
    "top": InputColumn("m", "top of the interval it was found in, below the ground"),
    "base": InputColumn("m", "base of the interval"),
    "ground_elevation": InputColumn("m", "ground above sea level; sea floor negative offshore"),
    "environment": _text("onshore, offshore, and of what kind"),
    "method": _text("how heat flow was found"),
    "temperature_method": _text("how temperatures were measured"),
    "quality": _text("code of quality"),
    "date": _text("date of the measurement, ISO 8601 (a year alone will do)"),
    "reference": _text("publication"),
}

INPUT_COLUMNS = {
    "wells": WELLS,
    "readings": READINGS,
    "layers": LAYERS,
    "surveys": SURVEYS,
    "heat_flow": HEAT_FLOW,
}

# Of each group of these a table needs one, beside its required columns.
ONE_OF = {"layers": (("lithology", "formation", "conductivity"),)}
