"""Find formation temperatures: the first correction of the order that applies."""

from basinheat import corrections, documents, tables
from basinheat.logs import log_to
from basinheat.settings.heat import Correction

log_to(snakemake.log[0])
corrected = corrections.correct(
    tables.Readings.load(snakemake.input.readings),
    tables.Wells.load(snakemake.input.wells),
    Correction(**snakemake.params.correction),
    snakemake.params.holdout,
    snakemake.params.surface_shared_std_k,
)
tables.Estimates.save(corrected.estimates, snakemake.output.estimates)
tables.Sources.save(corrected.sources, snakemake.output.sources)
tables.Rejected.save(corrected.rejected, snakemake.output.rejected)
tables.Calibration.save(corrected.calibration, snakemake.output.calibration)
documents.save(corrected.recovery, snakemake.output.recovery)
