"""The page itself: one file, no outside link, every text from the data escaped."""

from __future__ import annotations

import os
from pathlib import Path

from basinheat.delivery import cautions, metadata
from basinheat.report import figures, mapfigures, summary
from basinheat.report.contents import Contents

TEMPLATES = Path(__file__).parent / "templates"


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
    import yaml

    environment = jinja2.Environment(
        loader=jinja2.FileSystemLoader(TEMPLATES),
        autoescape=True,
        undefined=jinja2.StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    return environment.get_template("report.html.j2").render(
        about=contents.about,
        grid=contents.grid,
        cautions=cautions.CAUTIONS,
        depth_reference=metadata.DEPTH_REFERENCE,
        sigma=metadata.SIGMA,
        key_figures=summary.key_figures(contents),
        maps=mapfigures.map_pictures(contents),
        corrections=figures.correction_picture(contents),
        variograms=figures.variogram_picture(contents),
        validation=figures.validation_picture(contents),
        rows=summary.rows_sheet(contents),
        reasons=summary.reasons_sheet(contents),
        flags=summary.flags_sheet(contents),
        methods=summary.methods_sheet(contents),
        sources=summary.sources_sheet(contents),
        scales=summary.scales_sheet(contents),
        origins=summary.origins_sheet(contents),
        covariance=summary.covariance_sheet(contents),
        scores=summary.scores_sheet(contents),
        baselines=summary.baselines_sheet(contents),
        versions=summary.versions_sheet(contents.versions),
        settings=yaml.safe_dump(contents.settings, sort_keys=False, allow_unicode=True),
        program=metadata.PROGRAM,
        version=metadata.VERSION,
    )
