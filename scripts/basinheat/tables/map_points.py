"""The only tables that geostatistics sees."""

from basinheat.tables.contract import Table, number, text


class MapPoints(Table):
    """One row per well: a value to map, its own variance and its loadings on shared sources."""

    columns = {
        "well": text("well"),
        "easting_m": number("m", "easting in the map CRS"),
        "northing_m": number("m", "northing in the map CRS"),
        "value": number("", "value to map, in the quantity's unit"),
        "value_std": number("", "independent part of its standard uncertainty"),
    }
    open_columns = {
        "loading_": number("", "change of the value per unit standard deviation of a source"),
        "drift_": number("", "drift covariate"),
    }


class StructurePoints(Table):
    """One row per well and depth interval: ln of the mean conductivity, and what it depends on."""

    columns = {
        **MapPoints.columns,
        "top_m": number("m", "top of the depth interval"),
        "base_m": number("m", "base of the depth interval"),
        "heat_production_uw_m3": number("uW/m3", "mean heat production of the interval"),
        "reference_temperature_degc": number("degC", "temperature the conductivity is given at"),
        "temperature_slope_per_k": number("1/K", "d ln k / dT at that temperature"),
    }
    open_columns = MapPoints.open_columns
