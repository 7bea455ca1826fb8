"""Write the report: what was done, how far the maps can be trusted, pictures."""

from basinheat import documents, provenance, tables
from basinheat.conductivity.overrides import load_overridden
from basinheat.delivery.metadata import About
from basinheat.grid import Grid
from basinheat.logs import log_to
from basinheat.report import page
from basinheat.report.contents import Contents
from basinheat.settings.model import Settings

log_to(snakemake.log[0])
contents = Contents(
    about=About.of(Settings(**snakemake.params.settings), snakemake.wildcards.scenario),
    grid=Grid.from_json(snakemake.input.grid),
    maps=tables.Maps.load(snakemake.input.maps),
    wells=tables.Wells.load(snakemake.input.wells),
    readings=tables.Readings.load(snakemake.input.readings),
    layers=tables.Layers.load(snakemake.input.layers),
    rejected=tables.Rejected.load(snakemake.input.rejected),
    rejected_later=tables.Rejected.load_all(snakemake.input.rejected_later),
    first_look=documents.load(snakemake.input.first_look),
    temperatures=tables.Temperatures.load(snakemake.input.temperatures),
    correction_summary=tables.CorrectionSummary.load(snakemake.input.correction_summary),
    anchor_differences=tables.AnchorDifferences.load(snakemake.input.anchor_differences),
    intercepts=tables.Intercepts.load(snakemake.input.intercepts),
    method_sigmas=tables.MethodSigmas.load(snakemake.input.method_sigmas),
    resistances=tables.Resistances.load(snakemake.input.resistances),
    heat_flow=tables.HeatFlow.load(snakemake.input.heat_flow),
    sources=tables.Sources.load(snakemake.input.sources),
    crossval_heat_flow=tables.CrossValidation.load(snakemake.input.crossval_heat_flow),
    crossval_temperature=tables.Closure.load(snakemake.input.crossval_temperature),
    scores=documents.load(snakemake.input.scores),
    heat_flow_model=documents.load(snakemake.input.heat_flow_model),
    structure_model=documents.load(snakemake.input.structure_model),
    recovery=documents.load(snakemake.input.recovery),
    calibration=tables.Calibration.load(snakemake.input.calibration),
    rocks=load_overridden(snakemake.input.catalogue, snakemake.params.settings["conductivity"]),
    settings=snakemake.params.settings,
    versions=provenance.versions(),
)
page.write(snakemake.output.report, contents)
