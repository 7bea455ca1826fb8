"""Lay the grid of the maps and describe the cells that have a basis."""

from basinheat import grid, tables
from basinheat.logs import log_to
from basinheat.settings.model import Settings

log_to(snakemake.log[0])
lattice, cells = grid.define(
    tables.Wells.load(snakemake.input.wells),
    tables.Readings.load(snakemake.input.readings),
    Settings(**snakemake.params.settings),
    tables.HeatFlowPoints.load(snakemake.input.published),
)
lattice.to_json(snakemake.output.grid)
tables.Cells.save(cells, snakemake.output.cells)
