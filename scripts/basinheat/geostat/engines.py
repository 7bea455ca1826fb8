"""Which engine serves which setting of ``kriging.engine``."""

from basinheat.geostat.engine_global import GlobalKriging
from basinheat.geostat.engine_pykrige import PyKrigeKriging

ENGINES: dict[str, type[GlobalKriging] | type[PyKrigeKriging]] = {
    "auto": GlobalKriging,
    "global": GlobalKriging,
    "pykrige": PyKrigeKriging,
}
