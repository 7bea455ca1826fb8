"""Find the thermal resistance of the rock above every temperature."""

from basinheat import tables
from basinheat.logs import log_to
from basinheat.rock import resistances
from basinheat.settings.heat import Conductivity, HeatFlow

log_to(snakemake.log[0])
rocks = resistances.estimate(
    tables.Estimates.load(snakemake.input.estimates),
    tables.Wells.load(snakemake.input.wells),
    tables.Layers.load(snakemake.input.layers),
    Conductivity(**snakemake.params.conductivity),
    HeatFlow(**snakemake.params.heat_flow),
    snakemake.params.holdout,
)
tables.Resistances.save(rocks.resistances, snakemake.output.resistances)
tables.StructurePoints.save(rocks.structure, snakemake.output.structure)
tables.Sources.save(rocks.sources, snakemake.output.sources)
tables.Rejected.save(rocks.rejected, snakemake.output.rejected)
