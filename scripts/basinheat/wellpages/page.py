"""The page itself: one file, no outside link, every text from the data escaped."""

from __future__ import annotations

import base64
import hashlib
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd

from basinheat import documents
from basinheat.delivery import cautions, metadata
from basinheat.report import template
from basinheat.report.sheet import number, shown, words
from basinheat.wellpages.contents import Contents
from basinheat.wellpages.fits import fit_sets
from basinheat.wellpages.ranking import rank_wells
from basinheat.wellpages.views import MOST_SETS, anchor, well_views

TEMPLATES = Path(__file__).parent / "templates"
MOST_LISTED = 20_000  # rows of the list: a browser still searches them at once
_LONGEST_NAME = 80


def write(path: str | Path, contents: Contents) -> None:
    """Write wells.html, whole or not at all.

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
    script = (TEMPLATES / "wells.js").read_text(encoding="utf-8")
    ranked = rank_wells(contents, fit_sets(contents))
    drawn = ranked["well"].head(contents.wells_drawn).to_list()
    methods, flags = _choices(ranked, "methods"), _choices(ranked, "flags")
    environment = template.environment(TEMPLATES)
    return environment.get_template("wells.html.j2").render(
        run=contents.run,
        scenario=contents.scenario,
        program=metadata.PROGRAM,
        version=metadata.VERSION,
        depth_reference=metadata.DEPTH_REFERENCE,
        short_caution=cautions.SHORT,
        script=script,
        script_hash=base64.b64encode(hashlib.sha256(script.encode()).digest()).decode(),
        methods=[words(name) for name in methods],
        flags=[words(name) for name in flags],
        listed=_listed(ranked.head(MOST_LISTED), len(drawn), methods, flags),
        wells=well_views(contents, drawn),
        count=len(ranked),
        count_drawn=len(drawn),
        count_listed=min(len(ranked), MOST_LISTED),
        most_sets=MOST_SETS,
        diffusivity=f"{contents.diffusivity_m2_s * 1e6:.2g}",
        number=number,
    )


def _choices(ranked: pd.DataFrame, column: str) -> list[str]:
    """Return every word of a ``;``-joined column, sorted."""
    return sorted({word for text in ranked[column].unique() for word in text.split(";") if word})


def _listed(
    ranked: pd.DataFrame, drawn: int, methods: list[str], flags: list[str]
) -> list[dict[str, Any]]:
    """Return the rows of the list, as text; methods and flags as their places, for the filters."""
    at_method = {name: str(i) for i, name in enumerate(methods)}
    at_flag = {name: str(i) for i, name in enumerate(flags)}
    return [
        {
            "name": shown(row.well, _LONGEST_NAME),
            "anchor": anchor(row.well),
            "drawn": place < drawn,
            "size": "" if np.isnan(row.z) else f"{abs(row.z):.2f}",
            "methods_at": " ".join(at_method[name] for name in row.methods.split(";") if name),
            "flags_at": " ".join(at_flag[name] for name in row.flags.split(";") if name),
            "cells": [
                number(row.z, 1, sign=True),
                number(row.residual_k, 1, sign=True),
                number(row.depth_m),
                number(row.misfit, 1),
                number(row.temperatures),
                number(row.readings),
            ],
            "methods": ", ".join(words(name) for name in row.methods.split(";") if name),
            "flags": ", ".join(words(name) for name in row.flags.split(";") if name),
        }
        for place, row in enumerate(ranked.itertuples())
    ]
