"""Map cells that have a basis, and what was kriged at them."""

from basinheat.tables.contract import Table, number
from basinheat.tables.contract import count as whole

_CELL = {
    "row": whole("row of the grid, 0 at the north edge"),
    "col": whole("column of the grid, 0 at the west edge"),
}


class Cells(Table):
    """One row per cell inside the mask, by row and column."""

    columns = {
        **_CELL,
        "easting_m": number("m", "cell centre"),
        "northing_m": number("m", "cell centre"),
        "elevation_m": number("m", "ground above sea level"),
        "water_depth_m": number("m", "water depth, 0 onshore"),
        "surface_temperature_degc": number("degC", "temperature at ground or sea floor"),
        "surface_temperature_std_k": number("K", "its standard uncertainty, the cell's own part"),
        "well_distance_m": number("m", "distance to the nearest well"),
        "deepest_reading_m": number("m", "deepest temperature among the nearest wells"),
    }


class HeatFlowGrid(Table):
    """Kriged surface heat flow, one row per cell."""

    columns = {
        **_CELL,
        "heat_flow_mw_m2": number("mW/m2", "kriged surface heat flow"),
        "variance_mw2_m4": number("mW2/m4", "its total variance, shared sources included"),
    }
    open_columns = {
        "cross_": number("mW/m2", "covariance with the amplitude of a source (unit prior)")
    }


class StructureGrid(Table):
    """Kriged ln of mean conductivity by depth interval, one row per cell and interval."""

    columns = {
        **_CELL,
        "top_m": number("m", "top of the depth interval"),
        "base_m": number("m", "base of the depth interval"),
        "ln_conductivity": number("", "ln of mean conductivity in W/(m K)"),
        "variance": number("", "its variance, shared sources apart"),
        "heat_production_uw_m3": number("uW/m3", "mean heat production"),
        "reference_temperature_degc": number("degC", "temperature the conductivity is given at"),
        "temperature_slope_per_k": number("1/K", "d ln k / dT at that temperature"),
    }
    open_columns = {
        "loading_": number("", "change of ln k per unit standard deviation of a source")
    }
