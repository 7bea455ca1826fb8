"""Read, check and clean the wells, readings and layers of the config."""

from basinheat import ingest, tables
from basinheat.logs import log_to
from basinheat.settings.model import Settings

log_to(snakemake.log[0])
prepared = ingest.prepare(Settings(**snakemake.params.settings), snakemake.params.folder)
tables.Wells.save(prepared.wells, snakemake.output.wells)
tables.Readings.save(prepared.readings, snakemake.output.readings)
tables.Layers.save(prepared.layers, snakemake.output.layers)
tables.Rejected.save(prepared.rejected, snakemake.output.rejected)
tables.Rejected.save_csv(prepared.rejected, snakemake.output.rejected_csv)
