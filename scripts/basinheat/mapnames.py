"""How the maps of a run are called: the one place where names are made from settings.

Plain Python, since the Snakefile needs the names too and pandas would slow every start of it.
"""

from __future__ import annotations

from collections.abc import Iterable

_CLASSES = "status"
_OF_EVERY_RUN = (
    *("heat_flow", "heat_flow_std", "gradient", "gradient_std"),
    *("well_distance", "deepest_reading", _CLASSES),
)


def temperature_name(depth_m: float) -> str:
    """Return the name of the map of temperature at a depth, m."""
    return f"temperature_{depth_m:g}m"


def isotherm_name(degc: float) -> str:
    """Return the name of the map of the depth of a temperature, degC."""
    return f"isotherm_{degc:g}c"


def map_names(depths_m: Iterable[float], isotherms_degc: Iterable[float]) -> list[str]:
    """Return the names of all maps of a run, sorted: columns of ``tables.Maps``.

    Examples
    --------
    >>> map_names([2000.0], [])[-3:]
    ['temperature_2000m', 'temperature_2000m_std', 'well_distance']
    """
    values = [*map(temperature_name, depths_m), *map(isotherm_name, isotherms_degc)]
    return sorted([*_OF_EVERY_RUN, *values, *(f"{name}_std" for name in values)])


def raster_files(names: Iterable[str]) -> list[str]:
    """Return the files that the rasters of maps make; classes have their names beside them.

    Examples
    --------
    >>> raster_files(["gradient", "status"])
    ['gradient.tif', 'status.tif', 'status.tif.aux.xml']
    """
    files = [f"{name}.tif" for name in names]
    return files + [f"{name}.tif.aux.xml" for name in names if name == _CLASSES]
