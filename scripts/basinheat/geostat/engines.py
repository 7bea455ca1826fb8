"""Which engine serves which setting of ``kriging.engine``."""

from __future__ import annotations

from typing import Any

from basinheat.geostat.engine_global import GlobalKriging

# One system of n data holds n^2 numbers and takes n^3 / 3 operations: 200 MB and seconds here.
# From tiles the mean differs from it by some thousandths of sigma.
ALL_AT_ONCE = 5000


def engine_class(name: str, data: int) -> Any:
    """Return the class of an engine for so many data.

    What is slow to import is loaded only where it is asked for.

    Parameters
    ----------
    name : {"auto", "global", "tiles", "pykrige"}
        ``auto`` takes all data at once up to 5,000, and tiles beyond.
    data : int
        Number of data.
    """
    if name == "pykrige":
        from basinheat.geostat.engine_pykrige import PyKrigeKriging

        return PyKrigeKriging
    if name == "tiles" or (name == "auto" and data > ALL_AT_ONCE):
        from basinheat.geostat.engine_tiles import TileKriging

        return TileKriging
    return GlobalKriging
