"""Fit the covariance of heat flow together with all shared sources of error."""

from basinheat import documents, heatflow, tables
from basinheat.logs import log_to

log_to(snakemake.log[0])
fit = heatflow.fit(
    tables.Estimates.load(snakemake.input.estimates),
    tables.Resistances.load(snakemake.input.resistances),
    tables.Sources.load_all(snakemake.input.sources),
    tables.Wells.load(snakemake.input.wells),
    published=tables.HeatFlowPoints.load(snakemake.input.published),
    pinned=documents.load(snakemake.input.pinned),
    **snakemake.params.options,
)
tables.Sources.save(fit.sources, snakemake.output.sources)
tables.SourceCovariance.save(fit.source_covariance, snakemake.output.source_covariance)
tables.SourceCovariance.save(fit.source_information, snakemake.output.source_information)
tables.Temperatures.save(fit.temperatures, snakemake.output.temperatures)
tables.HeatFlow.save(fit.heat_flow, snakemake.output.heat_flow)
tables.MapPoints.save(fit.map_points, snakemake.output.map_points)
documents.save(fit.variogram, snakemake.output.variogram)
