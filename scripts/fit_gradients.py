"""Fit one temperature gradient per well."""

from basinheat import gradient, tables
from basinheat.logs import log_to

log_to(snakemake.log[0])
gradients = gradient.fit_wells(
    tables.Temperatures.load(snakemake.input.temperatures),
    tables.Wells.load(snakemake.input.wells),
)
tables.Gradients.save(gradients, snakemake.output.gradients)
