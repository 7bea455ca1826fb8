"""Table contracts: one class per table, one line per column."""

from basinheat.tables.cells import Cells, HeatFlowGrid, StructureGrid
from basinheat.tables.crossval import Closure, CrossValidation
from basinheat.tables.estimates import Estimates
from basinheat.tables.gradients import Gradients
from basinheat.tables.heat_flow import HeatFlow
from basinheat.tables.layers import Layers
from basinheat.tables.map_points import MapPoints, StructurePoints
from basinheat.tables.maps import Maps
from basinheat.tables.readings import Readings
from basinheat.tables.rejected import Rejected
from basinheat.tables.resistances import Resistances
from basinheat.tables.sources import SourceCovariance, Sources
from basinheat.tables.temperatures import Temperatures
from basinheat.tables.wells import Wells

__all__ = [
    "Cells",
    "Closure",
    "CrossValidation",
    "Estimates",
    "Gradients",
    "HeatFlow",
    "HeatFlowGrid",
    "Layers",
    "MapPoints",
    "Maps",
    "Readings",
    "Rejected",
    "Resistances",
    "SourceCovariance",
    "Sources",
    "StructureGrid",
    "StructurePoints",
    "Temperatures",
    "Wells",
]
