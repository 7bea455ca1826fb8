"""Readings: complete, one each, attributed to a well, at a depth below its ground."""

from __future__ import annotations

import logging
from collections.abc import Sequence
from typing import get_args

import numpy as np
import pandas as pd

from basinheat import duplicates, trajectory
from basinheat.flags import mark
from basinheat.ingest import depths
from basinheat.ingest.decisions import Decisions
from basinheat.ingest.identity import Identity, similar
from basinheat.ingest.times import read_times
from basinheat.ingest.unreadable import drop_unit_unknown, refuse_unreadable
from basinheat.ledger import Ledger
from basinheat.readers import InputTable
from basinheat.readers.cells import dates
from basinheat.screening.remarks import ESTIMATED
from basinheat.settings.inputs import Inputs, Kind, ReadingsFile
from basinheat.settings.wells import Screening

_log = logging.getLogger(__name__)

OPTIONAL = (
    "temperature_std",
    "since_circulation",
    "circulation",
    "drilling",
    "hole_diameter",
    "mud_temperature",
    "casing_shoe",
)
KINDS = get_args(Kind)
DEEPEST_M = 15_000.0  # along the hole: 12,262 m at Kola, 15 km in extended reach (from memory)
_PLACE = (
    "easting_m",
    "northing_m",
    "total_depth_m",
)


def clean_readings(
    table: InputTable,
    ledger: Ledger,
    inputs: Inputs,
    decisions: Decisions,
    rules: Screening,
) -> InputTable:
    """Return complete readings, one of each, with ``reading_id``.

    Parameters
    ----------
    table : InputTable
        Readings as read.
    ledger : Ledger
        Takes refused and merged rows.
    inputs : Inputs
        Kinds and date formats of the files; headers of logs come after the files of readings.
    decisions : Decisions
        Reviewer's decisions.
    rules : Screening
        Thresholds of times.
    """
    _name_kinds(table, inputs.readings)
    _read_dates(table, inputs.readings)
    table.frame["reading_id"] = duplicates.reading_ids(table.frame)
    decisions.set_values(table)
    read_times(table, ledger, [*inputs.readings, *inputs.las], rules)
    decisions.regrade(table)
    decisions.mark_kept(table)
    table = _complete(table, ledger)
    wrong_date = (table.frame["date"] == "?").to_numpy()
    ledger.drop(
        table,
        wrong_date,
        "date",
        "date_dropped",
        "the date is written in no form that is known; state date_format. Used without it.",
    )
    for name in OPTIONAL:
        drop_unit_unknown(table, ledger, name)
        ledger.drop(
            table,
            table.frame[f"wrong:{name}"].to_numpy(),
            name,
            f"{name}_dropped",
            '"{written}" in column "{header}" is not a number; the reading is used without it.',
        )
    table = duplicates.merged(table, ledger)
    return decisions.reject(table, ledger)


def attribute(
    table: InputTable,
    ledger: Ledger,
    wells: pd.DataFrame,
    refused: set[str],
    identity: Identity,
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
    unknown = (table.frame["row"] < 0).to_numpy()
    if unknown.any():
        table.frame["_near"] = _near(table, unknown, wells["well"].tolist(), identity)
    return ledger.refuse(
        table, unknown, "well", "unknown_well", "the wells hold no such name{_near}."
    )


def _near(
    table: InputTable, unknown: np.ndarray, wells: list[str], identity: Identity
) -> np.ndarray:
    """Return what a name that is not known may stand for, and say how many another rule joins."""
    codes, unique = pd.factorize(table.frame["well"].where(unknown, ""))
    names = unique.tolist()
    near = similar(names, wells)
    joined = int(
        np.array([bool(name and well) for name, well in zip(names, near, strict=True)])[codes].sum()
    )
    if joined and identity.rule != "normalised":
        _log.warning(
            "%s: %d rows name no well, but would under `well_names: normalised`",
            table.name,
            joined,
        )
    texts = [
        identity.torn(name) or (f'; there is "{well}" (see `well_names`)' if well else "")
        for name, well in zip(names, near, strict=True)
    ]
    return np.array([*texts, ""], object)[codes]


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
    """Refuse readings without a well, a depth, a temperature or a kind that is known."""
    nameless = (table.frame["well"] == "").to_numpy()
    table = ledger.refuse(table, nameless, "well", "no_well", "the row names no well.")
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
    drop_unit_unknown(table, ledger, "vertical_depth")
    for name in ("temperature", "depth", "vertical_depth"):
        table = refuse_unreadable(table, ledger, name, bounds=True)
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
    for name in ("vertical_depth", "depth"):
        # Where both are noted the vertical one counts, and a negative measured one does no harm.
        counts = table.frame["vertical_depth"].isna() if name == "depth" else True
        table = ledger.refuse(
            table,
            (counts & (table.frame[name] < 0.0)).to_numpy(),
            name,
            "depth_negative",
            f"depth is {{{name}:g}} m, must be positive down. Check its sign or the unit of column "
            '"{header}".',
        )
        table = ledger.refuse(
            table,
            (table.frame[name] > DEEPEST_M).to_numpy(),
            name,
            "depth_impossible",
            f"depth is {{{name}:g}} m, deeper than any hole ({DEEPEST_M:g} m). Check the value and "
            'the unit of column "{header}".',
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
    # headers of logs come after the files of readings, and bring their dates in ISO 8601
    formats = [(frame.get("config", -1) == n, spec.date_format) for n, spec in enumerate(specs)]
    if "config" in frame:
        formats.append((frame["config"] >= len(specs), None))
    for rows, pattern in formats:
        rows = np.zeros(len(frame), bool) | rows
        found, wrong = dates(frame.loc[rows, "date"], pattern)
        frame.loc[rows, "date"] = found.mask(wrong, "?")
