"""The maps, derived cell by cell."""

from basinheat.tables.contract import Table, number
from basinheat.tables.contract import count as whole

# Codes of the status maps: where several hold, the highest counts.
STATUS = {"no_basis": 0, "interpolated": 1, "below_readings": 2, "isotherm_too_deep": 3}


class Maps(Table):
    """One row per cell: every quantity that is delivered, and its standard uncertainty.

    Named as the rasters, see ``basinheat.mapnames``.
    """

    columns = {
        "row": whole("row of the grid, 0 at the north edge"),
        "col": whole("column of the grid, 0 at the west edge"),
        "well_distance": number("m", "distance to the nearest well"),
        "deepest_reading": number("m", "deepest temperature among the nearest wells"),
        "heat_flow": number("mW/m2", "surface heat flow"),
        "heat_flow_std": number("mW/m2", "its standard uncertainty"),
        "gradient": number("K/km", "mean gradient from the surface to the reference depth"),
        "gradient_std": number("K/km", "its standard uncertainty"),
        "status": whole("what the cell rests on: see ``STATUS``"),
    }
    open_columns = {
        "temperature_": number("degC or K", "temperature at a depth, and its standard uncertainty"),
        "isotherm_": number("m", "depth of an isotherm, and its standard uncertainty"),
    }
