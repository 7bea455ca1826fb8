"""Rock layers of the wells."""

from basinheat.tables.contract import Table, number, text
from basinheat.tables.contract import count as whole


class Layers(Table):
    """One row per interval of a well."""

    columns = {
        "well": text("well of the layer"),
        "top_m": number("m", "top, true vertical, below ground or sea floor"),
        "base_m": number("m", "base, true vertical, below ground or sea floor"),
        "lithology": text("rock as the layers name it: lithology, mixture or formation"),
        "formation": text("formation, where one is named beside the lithology"),
        "net_to_gross": number("", "share of the layer that is this rock, NaN for all of it"),
        "conductivity_w_mk": number("W/(m K)", "measured, at 25 degC, NaN where not measured"),
        "conductivity_std_w_mk": number("W/(m K)", "its standard uncertainty"),
        "porosity": number("", "measured porosity, 0 to 1, NaN where not measured"),
        "heat_production_uw_m3": number(
            "uW/m3", "measured heat production, NaN where not measured"
        ),
        "dip_deg": number("deg", "dip of the bedding, NaN where not noted"),
        "source_file": text("input file"),
        "source_line": whole("line in the input file"),
    }
