"""Read, check and clean the wells, readings and layers of the config."""

from basinheat import ingest, tables
from basinheat.logs import log_to
from basinheat.settings.model import Settings

log_to(snakemake.log[0])
prepared = ingest.prepare(Settings(**snakemake.params.settings), snakemake.params.folder)
tables.Wells.save(prepared.wells, snakemake.output.wells)
tables.Readings.save(prepared.readings, snakemake.output.readings)
tables.Layers.save(prepared.layers, snakemake.output.layers)
tables.HeatFlowPoints.save(prepared.heat_flow, snakemake.output.heat_flow)
tables.Rejected.save(prepared.rejected, snakemake.output.rejected)
tables.Rejected.save_csv(prepared.rejected, snakemake.output.rejected_csv)
tables.Findings.save(prepared.findings, snakemake.output.findings)
tables.Findings.save_csv(prepared.findings, snakemake.output.findings_csv)
tables.DecisionsTemplate.save_csv(prepared.decisions_template, snakemake.output.decisions_template)
