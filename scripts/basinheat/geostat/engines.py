"""Which engine serves which setting of ``kriging.engine``."""

from __future__ import annotations

from typing import Any

from basinheat.geostat.engine_global import GlobalKriging


def engine_class(name: str) -> Any:
    """Return the engine's class; PyKrige, slow to import, is loaded only where it is asked for."""
    if name != "pykrige":
        return GlobalKriging
    from basinheat.geostat.engine_pykrige import PyKrigeKriging

    return PyKrigeKriging
