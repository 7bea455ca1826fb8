"""The page itself: one file, no outside link, every text from the data escaped."""

from __future__ import annotations

import os
from pathlib import Path
from typing import Any

from basinheat.delivery import cautions, metadata
from basinheat.delivery.manifest import without_folders
from basinheat.report import attention, captions, figures, mapfigures, overview, sheet, summary
from basinheat.report.contents import Contents

TEMPLATES = Path(__file__).parent / "templates"
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
    part = Path(f"{path}.part")
    part.parent.mkdir(parents=True, exist_ok=True)
    part.write_text(html(contents), encoding="utf-8", newline="\n")
    os.replace(part, path)


def html(contents: Contents) -> str:
    """Return the page as text."""
    import jinja2

    environment = jinja2.Environment(
        loader=jinja2.FileSystemLoader(TEMPLATES),
        autoescape=True,
        undefined=jinja2.StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    environment.filters["shown"] = sheet.shown
    return environment.get_template("report.html.j2").render(
        about=contents.about,
        grid=contents.grid,
        program=metadata.PROGRAM,
        version=metadata.VERSION,
        depth_reference=metadata.DEPTH_REFERENCE,
        sigma=metadata.SIGMA,
        short_caution=cautions.SHORT,
        cautions=cautions.CAUTIONS,
        order=[captions.of_method(name) for name in contents.about.methods],
        how=_how(contents.settings),
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
        "methods": summary.methods_sheet,
        "passed_over": summary.passed_over_sheet,
        "learned": summary.learned_sheet,
        "scales": summary.scales_sheet,
        "sources": summary.sources_sheet,
        "origins": summary.origins_sheet,
        "rocks": summary.rocks_sheet,
        "covariance": summary.covariance_sheet,
        "scores": summary.scores_sheet,
        "baselines": summary.baselines_sheet,
    }
    sheets = {name: make(contents) for name, make in made.items()}
    return {**sheets, "versions": summary.versions_sheet(contents.versions)}


def _how(settings: dict[str, Any]) -> dict[str, Any]:
    """Return the choices that change how the method is told."""
    kriging = settings["kriging"]
    return {
        "temperature_law": settings["conductivity"]["temperature_law"],
        "engine": kriging["engine"],
        "drift": kriging["drift"],
        "pinned": kriging["variogram"]["pinned"],
    }


def _settings(settings: dict[str, Any]) -> str:
    """Return the settings as YAML, nothing hidden in it; folders of the machine are left out."""
    import yaml

    text = yaml.safe_dump(without_folders(settings), sort_keys=False, allow_unicode=True, width=100)
    return "\n".join(sheet.shown(line) for line in text[:LONGEST_SETTINGS].splitlines())
