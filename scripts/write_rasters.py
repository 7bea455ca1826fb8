"""Write the maps as rasters."""

from pathlib import Path

from basinheat import tables
from basinheat.delivery import raster
from basinheat.delivery.metadata import About
from basinheat.grid import Grid
from basinheat.logs import log_to
from basinheat.settings.model import Settings

log_to(snakemake.log[0])
about = About.of(Settings(**snakemake.params.settings), snakemake.wildcards.scenario)
maps = tables.Maps.load(snakemake.input.maps)
grid = Grid.from_json(snakemake.input.grid)
raster.write_all(maps, grid, Path(snakemake.output.rasters[0]).parent, about)
