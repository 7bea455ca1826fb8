"""Tell what the inputs hold, what was refused, and what looks wrong."""

from basinheat import documents, tables
from basinheat.conductivity.overrides import load_overridden
from basinheat.firstlook import console, page, stage
from basinheat.logs import log_to
from basinheat.settings.model import Settings

log_to(snakemake.log[0])
record = stage.look(
    Settings(**snakemake.params.settings),
    snakemake.params.folder,
    tables.Wells.load(snakemake.input.wells),
    tables.Readings.load(snakemake.input.readings),
    tables.Rejected.load(snakemake.input.rejected),
    load_overridden(snakemake.input.catalogue, snakemake.params.settings["conductivity"]),
)
documents.save(record, snakemake.output.record)
page.write(snakemake.output.page, record)
console.write(snakemake.output.text, record)
