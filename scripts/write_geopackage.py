"""Write wells, temperatures, rejects and contours as a GeoPackage."""

from basinheat import tables
from basinheat.delivery import vector
from basinheat.delivery.metadata import About
from basinheat.grid import Grid
from basinheat.logs import log_to
from basinheat.settings.model import Settings

log_to(snakemake.log[0])
vector.write(
    snakemake.output.geopackage,
    Grid.from_json(snakemake.input.grid),
    tables.Maps.load(snakemake.input.maps),
    tables.Wells.load(snakemake.input.wells),
    tables.Temperatures.load(snakemake.input.temperatures),
    tables.Gradients.load(snakemake.input.gradients),
    tables.HeatFlow.load(snakemake.input.heat_flow),
    tables.Rejected.load_all(snakemake.input.rejected),
    About.of(Settings(**snakemake.params.settings), snakemake.wildcards.scenario),
)
