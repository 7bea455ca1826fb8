"""Fit and krige the conductivity of every depth interval."""

from basinheat import documents, structure, tables
from basinheat.logs import log_to
from basinheat.settings.heat import Conductivity

log_to(snakemake.log[0])
rock = Conductivity(**snakemake.params.conductivity)
points = tables.StructurePoints.load(snakemake.input.map_points)
fitted = structure.fit_structure(points, rock.wells_per_interval, snakemake.params.models)
grid = structure.krige_conductivity(
    points,
    fitted,
    tables.Cells.load(snakemake.input.cells),
    rock.interval_m,
    snakemake.params.deepest_m,
    rock.wells_per_interval,
    rock.below_layers,
)
documents.save(fitted, snakemake.output.variogram)
tables.StructureGrid.save(grid, snakemake.output.structure)
