"""The page itself: one file, no outside link, every text from the data escaped."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from basinheat import documents
from basinheat.delivery import cautions, metadata
from basinheat.delivery.manifest import without_folders
from basinheat.firstlook import wording
from basinheat.report import (
    attention,
    calibration,
    captions,
    comparison,
    figures,
    mapfigures,
    overview,
    residuals,
    sheet,
    summary,
    template,
)
from basinheat.report.contents import Contents

LONGEST_SETTINGS = 200_000


def write(path: str | Path, contents: Contents) -> None:
    """Write report.html, whole or not at all.

    Parameters
    ----------
    path : str or Path
        The page.
    contents : Contents
        Everything it shows.
    """
    documents.write_text(html(contents), path)


def html(contents: Contents) -> str:
    """Return the page as text."""
    environment = template.environment()
    return environment.get_template("report.html.j2").render(
        about=contents.about,
        grid=contents.grid,
        program=metadata.PROGRAM,
        version=metadata.VERSION,
        depth_reference=metadata.DEPTH_REFERENCE,
        sigma=metadata.SIGMA,
        short_caution=cautions.SHORT,
        cautions=cautions.CAUTIONS,
        order=[(name, captions.of_method(name)) for name in contents.about.methods],
        how=_how(contents.settings),
        calibrated=calibration.found(contents),
        calibration=calibration.introduction(contents),
        example_order=comparison.example_order(contents),
        settings=_settings(contents.settings),
        key_figures=overview.key_figures(contents),
        attention=attention.points(contents),
        unseen=attention.unseen(contents),
        maps=mapfigures.map_pictures(contents),
        pictures=_pictures(contents),
        sheets=_sheets(contents),
    )


def _pictures(contents: Contents) -> dict[str, Any]:
    return {
        "trust": mapfigures.trust_picture(contents),
        "corrections": figures.correction_picture(contents),
        "residuals": residuals.residual_picture(contents),
        "comparison": comparison.comparison_picture(contents),
        "variograms": figures.variogram_picture(contents),
        "validation": figures.validation_picture(contents),
    }


def _sheets(contents: Contents) -> dict[str, sheet.Sheet]:
    made = {
        "trust": overview.trust_sheet,
        "quantiles": overview.quantiles_sheet,
        "by_depth": overview.by_depth_sheet,
        "by_method": overview.by_method_sheet,
        "temperatures_to_look_at": overview.temperatures_to_look_at,
        "heat_flow_to_look_at": overview.heat_flow_to_look_at,
        "rows": summary.rows_sheet,
        "reasons": summary.reasons_sheet,
        "flags": summary.flags_sheet,
        "passed_over": summary.passed_over_sheet,
        "learned": summary.learned_sheet,
        "ladder": calibration.ladder_sheet,
        "calibrated_by_depth": calibration.by_depth_sheet,
        "recovered": calibration.recovery_sheet,
        "comparison": comparison.comparison_sheet,
        "anchors": comparison.anchors_sheet,
        "intercepts": comparison.intercepts_sheet,
        "sigmas": comparison.sigmas_sheet,
        "sigma_sources": comparison.sigma_sources_sheet,
        "sources": summary.sources_sheet,
        "origins": summary.origins_sheet,
        "rocks": summary.rocks_sheet,
        "covariance": summary.covariance_sheet,
        "scores": summary.scores_sheet,
        "baselines": summary.baselines_sheet,
    }
    sheets = {name: make(contents) for name, make in made.items()}
    return {
        **sheets,
        "files": wording.files_sheet(contents.first_look),
        "questions": wording.questions_sheet(contents.first_look),
        "versions": summary.versions_sheet(contents.versions),
    }


def _how(settings: dict[str, Any]) -> dict[str, Any]:
    """Return the choices that change how the method is told."""
    kriging = settings["kriging"]
    return {
        "temperature_law": settings["conductivity"]["temperature_law"],
        "laws": ", ".join(sorted(set(settings["conductivity"]["laws"].values()))),
        "catalogue": settings["conductivity"]["catalogue"],
        "fluid_mixing": settings["conductivity"]["fluid_mixing"].replace("_", " "),
        "beds": settings["conductivity"]["mixing"]["beds"],
        "pressure": settings["conductivity"]["pressure"],
        "engine": kriging["engine"],
        "drift": kriging["drift"],
        "pinned": kriging["variogram"]["pinned"],
    }


def _settings(settings: dict[str, Any]) -> str:
    """Return the settings as YAML, nothing hidden in it; folders of the machine are left out."""
    import yaml

    text = yaml.safe_dump(without_folders(settings), sort_keys=False, allow_unicode=True, width=100)
    return "\n".join(sheet.shown(line) for line in text[:LONGEST_SETTINGS].splitlines())
