"""Close the delivery: rejects as CSV, README.txt and the manifest of all files."""

from pathlib import Path

from basinheat import provenance, tables
from basinheat.delivery import manifest
from basinheat.delivery.metadata import About
from basinheat.grid import Grid
from basinheat.logs import log_to
from basinheat.settings.model import Settings

log_to(snakemake.log[0])
manifest.write(
    Path(snakemake.output.manifest).parent,
    Grid.from_json(snakemake.input.grid),
    tables.Rejected.load_all(snakemake.input.rejected),
    About.of(Settings(**snakemake.params.settings), snakemake.wildcards.scenario),
    snakemake.params.settings,
    provenance.file_digests(snakemake.input.files, snakemake.params.folder),
    snakemake.params.code,
)
