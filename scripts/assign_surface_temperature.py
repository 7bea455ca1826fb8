"""Give every well the temperature of its ground or sea floor."""

from basinheat import surface, tables
from basinheat.logs import log_to
from basinheat.settings.wells import surface_temperature

log_to(snakemake.log[0])
wells = surface.at_wells(
    tables.Wells.load(snakemake.input.wells),
    surface_temperature(snakemake.params.surface_temperature),
    snakemake.input.raster or None,
    snakemake.params.crs,
)
tables.Wells.save(wells, snakemake.output.wells)
