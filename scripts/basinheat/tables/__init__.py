"""Table contracts: one class per table, one line per column."""

from basinheat.tables.calibration import Calibration
from basinheat.tables.cells import Cells, HeatFlowGrid, StructureGrid
from basinheat.tables.correction_comparison import (
    AnchorDifferences,
    CorrectionComparison,
    CorrectionSummary,
)
from basinheat.tables.crossval import Closure, CrossValidation, WellColumns
from basinheat.tables.estimates import Estimates
from basinheat.tables.findings import DecisionsTemplate, Findings
from basinheat.tables.gradients import Gradients
from basinheat.tables.heat_flow import HeatFlow
from basinheat.tables.heat_flow_points import HeatFlowPoints
from basinheat.tables.intercepts import Intercepts
from basinheat.tables.layers import Layers
from basinheat.tables.map_points import MapPoints, StructurePoints
from basinheat.tables.maps import Maps
from basinheat.tables.method_sigmas import MethodSigmas
from basinheat.tables.readings import Readings
from basinheat.tables.rejected import Rejected
from basinheat.tables.resistances import Resistances
from basinheat.tables.sources import SourceCovariance, Sources
from basinheat.tables.temperatures import Temperatures
from basinheat.tables.wells import Wells

__all__ = [
    "AnchorDifferences",
    "Calibration",
    "Cells",
    "Closure",
    "CorrectionComparison",
    "CorrectionSummary",
    "CrossValidation",
    "DecisionsTemplate",
    "Estimates",
    "Findings",
    "Gradients",
    "HeatFlow",
    "HeatFlowGrid",
    "HeatFlowPoints",
    "Intercepts",
    "Layers",
    "MapPoints",
    "Maps",
    "MethodSigmas",
    "Readings",
    "Rejected",
    "Resistances",
    "SourceCovariance",
    "Sources",
    "StructureGrid",
    "StructurePoints",
    "Temperatures",
    "WellColumns",
    "Wells",
]
