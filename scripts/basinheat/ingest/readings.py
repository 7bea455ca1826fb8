"""Readings: complete, one each, attributed to a well, at a depth below its ground."""

from __future__ import annotations

import re
from collections.abc import Sequence
from typing import get_args

import numpy as np
import pandas as pd

from basinheat import duplicates, trajectory
from basinheat.flags import mark
from basinheat.ingest import depths
from basinheat.ingest.decisions import Decisions
from basinheat.ledger import Ledger
from basinheat.readers import InputTable
from basinheat.readers.cells import dates
from basinheat.screening.one_record import ESTIMATED
from basinheat.settings.inputs import Kind, ReadingsFile

OPTIONAL = (
    "temperature_std",
    "since_circulation",
    "circulation",
    "hole_diameter",
    "mud_temperature",
)
KINDS = get_args(Kind)
DEEPEST_M = 15_000.0  # along the hole: 12,262 m at Kola, 15 km in extended reach (from memory)
_PLACE = (
    "easting_m",
    "northing_m",
    "total_depth_m",
)


def clean_readings(
    table: InputTable, ledger: Ledger, specs: Sequence[ReadingsFile], decisions: Decisions
) -> InputTable:
    """Return complete readings, one of each, with ``reading_id``.

    Parameters
    ----------
    table : InputTable
        Readings as read.
    ledger : Ledger
        Takes refused and merged rows.
    specs : sequence of ReadingsFile
        Kinds and date formats of the files.
    decisions : Decisions
        Reviewer's decisions.
    """
    _name_kinds(table, specs)
    _read_dates(table, specs)
    table.frame["reading_id"] = duplicates.reading_ids(table.frame)
    decisions.set_values(table)
    decisions.regrade(table)
    decisions.mark_kept(table)
    wrong_date = (table.frame["date"] == "?").to_numpy()
    ledger.drop(
        table,
        wrong_date,
        "date",
        "date_dropped",
        "the date is written in no form that is known; state date_format. Used without it.",
    )
    for name in OPTIONAL:
        ledger.drop(
            table,
            table.frame[f"wrong:{name}"].to_numpy(),
            name,
            f"{name}_dropped",
            '"{written}" in column "{header}" is not a number; the reading is used without it.',
        )
    table = _complete(table, ledger)
    table = duplicates.merged(table, ledger)
    return decisions.reject(table, ledger)


def attribute(
    table: InputTable, ledger: Ledger, wells: pd.DataFrame, refused: set[str]
) -> InputTable:
    """Refuse rows of wells that are not known or were refused; ``row`` is that of the well."""
    names = table.frame["well"]
    nameless = (names == "").to_numpy()
    table = ledger.refuse(table, nameless, "well", "no_well", "the row names no well.")
    table.frame["row"] = _rows(table.frame["well"], wells["well"])
    of_refused = table.frame["well"].isin(sorted(refused)).to_numpy()
    table = ledger.refuse(
        table, of_refused, "well", "well_rejected", "the well was refused: see its own line."
    )
    frame = table.frame
    unknown = (frame["row"] < 0).to_numpy()
    if unknown.any():
        frame["_near"] = _similar(frame["well"].where(unknown, ""), wells["well"])
    return ledger.refuse(
        table, unknown, "well", "unknown_well", "the wells hold no such name{_near}."
    )


def place_readings(
    readings: InputTable, stations: InputTable, ledger: Ledger, wells: pd.DataFrame
) -> tuple[InputTable, trajectory.Surveys, InputTable]:
    """Return readings with depth below ground or sea floor, the surveys and their used stations."""
    surveys, stations = depths.surveys_of(stations, ledger)
    frame = readings.frame
    well = frame["row"].to_numpy()
    measured, noted = (frame[name].to_numpy(float) for name in ("depth", "vertical_depth"))
    found = depths.vertical(measured, noted, well, wells, surveys)
    frame["depth_m"], frame["depth_std_m"] = found.depth_m, found.depth_std_m
    frame["vertical_m"] = found.vertical_m
    for name in _PLACE:
        frame[name] = wells[name].to_numpy()[well]
    frame["surface_temperature_degc"] = wells["screening_degc"].to_numpy()[well]
    frame["height_m"] = wells["height_m"].to_numpy()[well]
    mark(frame, found.assumed, "assumed_vertical")
    mark(frame, found.beyond, "beyond_survey")
    mark(frame, found.crossed, "vertical_depth_below_measured")
    readings = ledger.refuse(
        readings,
        found.depth_m <= 0.0,
        "depth",
        "depth_above_ground",
        "the depth of {vertical_m:.1f} m below the datum lies above ground or sea floor, which is "
        "{height_m:.1f} m below the datum. Check the datum, the water depth and the units.",
    )
    return readings, surveys, stations


def _complete(table: InputTable, ledger: Ledger) -> InputTable:
    """Refuse readings without a depth, a temperature or a kind that is known."""
    frame = table.frame
    estimated = frame["kind_word"].str.contains(ESTIMATED) & ~frame["kind"].isin(KINDS)
    estimated |= frame["as_written:temperature"].str.contains(ESTIMATED)
    table = ledger.refuse(
        table,
        estimated.to_numpy(bool),
        "kind",
        "estimated_value",
        "the temperature was estimated or calculated, not read.",
    )
    for name in ("temperature", "depth", "vertical_depth"):
        table = ledger.refuse(
            table,
            table.frame[f"wrong:{name}"].to_numpy(),
            name,
            "not_a_number",
            '"{written}" in column "{header}" is not a number. A decimal comma or separators of '
            "thousands are stated under `decimal` and `thousands`.",
        )
    # A log that reads 0 in any unit was not read; an equilibrium log in frozen ground may be 0.
    frame = table.frame
    zero = frame["as_written:temperature"].str.fullmatch(r"[-+]?0*[.,]?0+") & (
        frame["kind"] == "bht"
    )
    blank = frame["temperature"].isna() | (zero & ~_set(frame))
    table = ledger.refuse(
        table, blank.to_numpy(), "temperature", "no_temperature", "the row states no temperature."
    )
    none = table.frame[["depth", "vertical_depth"]].isna().all(axis=1).to_numpy()
    table = ledger.refuse(table, none, "depth", "no_depth", "the row states no depth.")
    deep = table.frame["vertical_depth"].fillna(table.frame["depth"]).to_numpy()
    table = ledger.refuse(
        table,
        deep < 0.0,
        "depth",
        "depth_negative",
        "depth is {depth:g} m, must be positive down. Check its sign or the unit of column "
        '"{header}".',
    )
    deep = table.frame["vertical_depth"].fillna(table.frame["depth"]).to_numpy()
    table = ledger.refuse(
        table,
        np.fmax(deep, table.frame["depth"].to_numpy()) > DEEPEST_M,
        "depth",
        "depth_impossible",
        f"depth is {{depth:g}} m, deeper than any hole ({DEEPEST_M:g} m). Check the value and the "
        'unit of column "{header}".',
    )
    unknown = ~table.frame["kind"].isin(KINDS).to_numpy()
    return ledger.refuse(
        table,
        unknown,
        "kind",
        "unknown_kind",
        'kind "{kind_word}" is not known; say under `kinds` which of bht, dst, equilibrium or '
        "corrected it is.",
    )


def _rows(names: pd.Series, wells: pd.Series) -> np.ndarray:
    """Return the row of each name among the wells, -1 where it is not there."""
    codes, unique = pd.factorize(names)
    return pd.Index(wells).get_indexer(unique)[codes] if len(unique) else codes


def _set(frame: pd.DataFrame) -> pd.Series:
    """Tell which temperatures a reviewer set."""
    reviewed = frame.get("flag:reviewed_set", pd.Series(False, index=frame.index))
    return reviewed & (frame["temperature"] != 0.0)


def _name_kinds(table: InputTable, specs: Sequence[ReadingsFile]) -> None:
    """Turn the words of the kind column into kinds; a word that is none stays."""
    frame = table.frame
    frame["kind_word"] = frame["kind"]
    for number, spec in enumerate(specs):
        rows = (frame["config"] == number) if "config" in frame else np.zeros(len(frame), bool)
        known = {kind: kind for kind in KINDS} | {"": spec.kind}
        known |= {word.strip().lower(): kind for word, kind in spec.kinds.items()}
        found = frame.loc[rows, "kind_word"].str.lower().map(known)
        frame.loc[rows, "kind"] = found.fillna(frame.loc[rows, "kind_word"])


def _read_dates(table: InputTable, specs: Sequence[ReadingsFile]) -> None:
    """Turn dates into ISO 8601; what is none becomes "?"."""
    frame = table.frame
    frame["as_written:date"] = frame["date"]
    for number, spec in enumerate(specs):
        rows = (frame["config"] == number) if "config" in frame else np.zeros(len(frame), bool)
        found, wrong = dates(frame.loc[rows, "date"], spec.date_format)
        frame.loc[rows, "date"] = found.mask(wrong, "?")


def _similar(names: pd.Series, wells: pd.Series) -> pd.Series:
    """Return where a well of a similar name is: letters and digits alike, case and marks not."""
    simple = {re.sub(r"\W|_", "", name).casefold(): name for name in sorted(wells, reverse=True)}
    texts = {}
    for name in names.unique():
        near = simple.get(re.sub(r"\W|_", "", name).casefold()) if name else None
        texts[name] = f'; there is "{near}"' if near else ""
    return names.map(texts)
