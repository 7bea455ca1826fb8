"""Wells that can be mapped."""

from basinheat.tables.contract import Table, number, text
from basinheat.tables.contract import count as whole


class Wells(Table):
    """One row per well."""

    columns = {
        "well": text("identity of the well, as text"),
        "easting_m": number("m", "easting in the map CRS"),
        "northing_m": number("m", "northing in the map CRS"),
        "longitude_deg": number("deg", "longitude, WGS 84"),
        "latitude_deg": number("deg", "latitude, WGS 84"),
        "ground_elevation_m": number("m", "ground above sea level; sea floor negative offshore"),
        "datum_elevation_m": number("m", "depth datum (rig floor) above sea level"),
        "water_depth_m": number("m", "water depth, 0 onshore"),
        "total_depth_m": number("m", "total measured depth below the datum"),
        "surface_temperature_degc": number("degC", "temperature at ground or sea floor"),
        "surface_temperature_std_k": number("K", "its standard uncertainty, the well's own part"),
        "flags": text("codes of what was assumed or doubted, ;-joined"),
        "source_file": text("input file"),
        "source_line": whole("line in the input file"),
    }
