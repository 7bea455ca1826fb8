"""Heat flow determined elsewhere, as read from the inputs."""

from basinheat.tables.contract import Table, number, text
from basinheat.tables.contract import count as whole


class HeatFlowPoints(Table):
    """One row per place."""

    columns = {
        "well": text("name of the place, unlike that of any well"),
        "easting_m": number("m", "easting in the CRS of the map"),
        "northing_m": number("m", "northing in the CRS of the map"),
        "heat_flow_mw_m2": number("mW/m2", "surface heat flow, positive up"),
        "heat_flow_std_mw_m2": number("mW/m2", "standard uncertainty, the place's own part"),
        "conductivity_w_mk": number("W/(m K)", "conductivity it was determined with"),
        "quality": text("quality code or method, as published"),
        "flags": text("codes of what was assumed or doubted, ;-joined"),
        "source_file": text("file"),
        "source_line": whole("line in the file"),
    }
