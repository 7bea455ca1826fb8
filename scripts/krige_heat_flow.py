"""Krige surface heat flow onto the cells, the shared sources of error with it."""

from basinheat import documents, tables
from basinheat.interpolation import krige_heat_flow_parts
from basinheat.logs import log_to

log_to(snakemake.log[0])
heat_flow = krige_heat_flow_parts(
    tables.MapPoints.load(snakemake.input.map_points),
    tables.SourceCovariance.load(snakemake.input.source_information),
    documents.load(snakemake.input.variogram),
    tables.Cells.load(snakemake.input.cells),
    snakemake.params.engine,
    snakemake.params.drift,
)
tables.HeatFlowGrid.save_parts(heat_flow, snakemake.output.heat_flow)
