"""Compare all correction methods: with each other, measured temperatures and the surface."""

from basinheat import documents, tables
from basinheat.corrections.judging.stage import Fitted, judge
from basinheat.logs import log_to
from basinheat.settings.heat import Correction

log_to(snakemake.log[0])
judged = judge(
    tables.Readings.load(snakemake.input.readings),
    tables.Wells.load(snakemake.input.wells),
    Fitted(
        tables.Estimates.load(snakemake.input.estimates),
        tables.Temperatures.load(snakemake.input.temperatures),
        tables.Resistances.load(snakemake.input.resistances),
        tables.Sources.load(snakemake.input.sources),
        tables.SourceCovariance.load(snakemake.input.source_covariance),
        documents.load(snakemake.input.variogram),
    ),
    Correction(**snakemake.params.correction),
    snakemake.params.holdout,
    snakemake.params.surface_shared_std_k,
)
tables.CorrectionComparison.save_parts(judged.comparison, snakemake.output.comparison)
tables.CorrectionSummary.save(judged.summary, snakemake.output.summary)
tables.AnchorDifferences.save(judged.anchors, snakemake.output.anchors)
tables.Intercepts.save(judged.intercepts, snakemake.output.intercepts)
tables.MethodSigmas.save(judged.sigmas, snakemake.output.sigmas)
