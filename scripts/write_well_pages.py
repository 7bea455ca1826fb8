"""Write the page of the wells: each drawn with its readings, its column and its recovery."""

from basinheat import documents, tables
from basinheat.conductivity.overrides import load_overridden
from basinheat.logs import log_to
from basinheat.wellpages import page
from basinheat.wellpages.contents import Contents

log_to(snakemake.log[0])
contents = Contents(
    run=snakemake.wildcards.run,
    scenario=snakemake.wildcards.scenario,
    wells=tables.Wells.load(snakemake.input.wells),
    readings=tables.Readings.load(snakemake.input.readings),
    layers=tables.Layers.load(snakemake.input.layers),
    rejected=tables.Rejected.load(snakemake.input.rejected),
    rejected_later=tables.Rejected.load_all(snakemake.input.rejected_later),
    estimates=tables.Estimates.load(snakemake.input.estimates),
    temperatures=tables.Temperatures.load(snakemake.input.temperatures),
    closure=tables.Closure.load(snakemake.input.closure),
    columns=tables.WellColumns.load(snakemake.input.columns),
    sources=tables.Sources.load(snakemake.input.sources),
    recovery=documents.load(snakemake.input.recovery),
    rocks=load_overridden(snakemake.input.catalogue, snakemake.params.settings["conductivity"]),
    settings=snakemake.params.settings,
)
page.write(snakemake.output.page, contents)
