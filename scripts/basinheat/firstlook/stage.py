"""From inputs and cleaned tables to one record of what a person should know before the run."""

from __future__ import annotations

import os
from collections.abc import Iterator
from dataclasses import asdict
from typing import Any

import numpy as np
import pandas as pd

from basinheat import surface
from basinheat.conductivity.catalogue import Catalogue
from basinheat.firstlook import (
    cell_questions,
    layer_questions,
    place_questions,
    questions,
    unit_questions,
)
from basinheat.firstlook.answers import stated
from basinheat.firstlook.files import describe, read_files, reasons, with_fate
from basinheat.firstlook.gradients import Raw, median_gradient, raw_readings
from basinheat.firstlook.inputfile import InputFile
from basinheat.firstlook.merge import merged
from basinheat.firstlook.places import small_map
from basinheat.ingest.identity import keys
from basinheat.readers.cells import dates
from basinheat.settings.model import Settings


def look(
    settings: Settings,
    folder: str,
    wells: pd.DataFrame,
    readings: pd.DataFrame,
    rejected: pd.DataFrame,
    rocks: Catalogue,
) -> dict[str, Any]:
    """Return what the inputs hold, what became of their rows, and what looks wrong.

    The files are read once more, since ranges and words are told as they were before any rule.

    Parameters
    ----------
    settings : Settings
        The config.
    folder : str
        Where its relative paths start.
    wells, readings, rejected : DataFrame
        ``tables.Wells, Readings, Rejected`` as ``ingest.prepare`` made them.
    rocks : Catalogue
        Of conductivities.

    Returns
    -------
    dict
        ``run, crs, stated, files, questions, decisions, map``, plain values in an order that
        content alone decides: ``first_look.json``.
    """
    files = read_files(settings, folder)
    names = sorted(
        {name for one in files if one.table == "wells" for name in one.frame["well"].unique()}
    )
    warm = _with_surface(wells, settings, folder)
    entries: list[dict[str, Any]] = []
    readings_rows = sum(len(file.frame) for file in files if file.table == "readings")
    asked = list(unit_questions.about_surface(settings.surface_temperature, readings_rows))
    for file in files:
        kept = {"wells": wells, "readings": readings}.get(file.table)
        flags = _flags(kept, file)
        entry = describe(file, files, settings, rocks)
        entry = with_fate(entry, file, rejected, flags)
        raw = None
        if file.table == "readings":
            raw = raw_readings(file, warm, settings.inputs.well_names)
            entry["gradient_k_km"] = _gradient(file, raw)
        entries.append(entry)
        asked += _asked(file, entry, names, raw, settings)
        if file.table == "layers":
            asked += layer_questions.about_tops(file, wells, settings.inputs.well_names)
    with_readings = wells["well"].isin(readings["well"].unique()).to_numpy(bool)
    return {
        "run": settings.run,
        "crs": settings.crs,
        "files": entries,
        "stated": stated(settings),
        "questions": [asdict(each) for each in merged(asked)],
        "decisions": reasons(rejected[rejected["table"] == "decisions"], "decision"),
        "map": small_map(wells, with_readings, settings.crs),
    }


def _asked(
    file: InputFile,
    entry: dict[str, Any],
    names: list[str],
    raw: Raw | None,
    settings: Settings,
) -> Iterator[questions.Question]:
    """Yield the questions about one file; ``names`` are all of the files of wells."""
    rule = settings.inputs.well_names
    yield from unit_questions.about_header_units(file, entry)
    if file.table == "wells":
        yield from place_questions.about_places(file, settings.crs)
        yield from place_questions.about_datum(file, settings.crs)
    if raw is not None:
        yield from unit_questions.about_gradient(file, raw, settings.screening)
        yield from unit_questions.about_total_depth(file, raw)
        yield from questions.about_kinds(file, entry)
        yield from cell_questions.about_dates(file, entry, _unread_dates(file))
    yield from unit_questions.about_medians(file, entry)
    yield from cell_questions.about_cells(file, entry)
    yield from layer_questions.about_rocks(file, entry)
    if file.table == "layers":
        yield from layer_questions.about_formations(file, entry)
    if file.table not in ("wells", "heat_flow"):
        yield from questions.about_names(file, rule, names, _unknown(file, names, rule))
    yield from questions.about_rows(file, entry)
    yield from unit_questions.about_flags(file, entry)
    yield from questions.about_headers(file, entry)


def _with_surface(wells: pd.DataFrame, settings: Settings, folder: str) -> pd.DataFrame:
    """Return the wells with the surface temperature that screening used."""
    if wells.empty:
        return wells
    raster = settings.inputs.rasters.surface_temperature
    path = None if raster is None else os.path.join(folder, raster)
    return surface.at_wells(wells, settings.surface_temperature, path, settings.crs)


def _gradient(file: InputFile, raw: Raw) -> float | None:
    """Return the raw median gradient of a file of readings, K/km; None with too few."""
    units = (file.unit("temperature"),) * 2, (file.unit("depth"),) * 2
    value = median_gradient(raw, *units)[0]
    return value if np.isfinite(value) else None


def _flags(kept: pd.DataFrame | None, file: InputFile) -> pd.Series:
    """Return the flags of the kept rows of a file; layers and surveys carry none."""
    if kept is None:
        return pd.Series([], dtype=object)
    return kept.loc[kept["source_file"].isin(sorted(file.sources)), "flags"]


def _unread_dates(file: InputFile) -> list[str]:
    """Return the cells of a file that are no dates, in the order of the lines."""
    code, unique = pd.factorize(file.frame["date"])
    _, wrong = dates(pd.Series(unique, dtype="str"), file.spec.date_format)
    return file.frame["date"][np.append(wrong, False)[code]].astype(str).tolist()


def _unknown(file: InputFile, known: list[str], rule: str) -> dict[str, int]:
    """Return the names of a file that no well has, and their rows."""
    counts = file.frame.loc[file.frame["well"] != "", "well"].value_counts()
    names = [str(name) for name in counts.index]
    there = set(keys(known, rule))
    return {
        name: int(rows)
        for name, key, rows in zip(names, keys(names, rule), counts, strict=True)
        if key not in there
    }
