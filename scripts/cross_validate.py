"""Judge the maps by wells left out, and by every temperature they were made from."""

from basinheat import documents, tables, validation
from basinheat.logs import log_to
from basinheat.settings.heat import Conductivity
from basinheat.settings.maps import Maps, Validation

log_to(snakemake.log[0])
mapped = validation.Mapped(
    points=tables.MapPoints.load(snakemake.input.map_points),
    information=tables.SourceCovariance.load(snakemake.input.source_information),
    heat_flow_model=documents.load(snakemake.input.heat_flow_model),
    structure=tables.StructurePoints.load(snakemake.input.structure),
    structure_model=documents.load(snakemake.input.structure_model),
    sources=tables.Sources.load(snakemake.input.sources),
    source_covariance=tables.SourceCovariance.load(snakemake.input.source_covariance),
    trend=snakemake.params.drift,
)
judged = validation.cross_validate(
    mapped,
    tables.Temperatures.load(snakemake.input.temperatures),
    tables.Wells.load(snakemake.input.wells),
    Conductivity(**snakemake.params.conductivity),
    Maps(**snakemake.params.maps),
    Validation(**snakemake.params.validation),
)
tables.CrossValidation.save(judged.heat_flow, snakemake.output.heat_flow)
tables.Closure.save(judged.temperature, snakemake.output.temperature)
tables.WellColumns.save(judged.columns, snakemake.output.columns)
documents.save(judged.scores, snakemake.output.scores)
