"""Rebuild the temperature column of every cell and read all maps from it."""

from basinheat import documents, products, tables
from basinheat.logs import log_to

log_to(snakemake.log[0])
maps = products.derive(
    tables.Cells.load(snakemake.input.cells),
    tables.HeatFlowGrid.load(snakemake.input.heat_flow),
    tables.StructureGrid.load(snakemake.input.structure),
    tables.Sources.load(snakemake.input.sources),
    tables.SourceCovariance.load(snakemake.input.source_covariance),
    documents.load(snakemake.input.variogram)["vertical_correlation_m"],
    snakemake.params.depths_m,
    snakemake.params.isotherms_degc,
    snakemake.params.reference_depth_m,
)
tables.Maps.save(maps, snakemake.output.maps)
