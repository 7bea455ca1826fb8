"""Gather the table of readings into sets of one well, one depth and one kind."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat import tables
from basinheat.corrections.sets import (
    Floats,
    Ints,
    ReadingSets,
    group_by_depth,
    largest,
    mean_noted,
    pad,
    spread,
)

if TYPE_CHECKING:
    from basinheat.settings.heat import Correction

KINDS = ("equilibrium", "dst", "corrected", "bht")
# Runs of logs that stopped a little apart belong together up to three gaps (45 m by default, below
# the 50 m of METHODS A1); a continuous log is cut at every gap.
_LONGEST = {"bht": 3.0, "dst": 1.0, "corrected": 1.0, "equilibrium": 1.0}
COPIED = "copied"


@dataclass(frozen=True)
class Gathered:
    """Readings in sets.

    Parameters
    ----------
    readings : DataFrame
        Readings in canonical order; the sets' rows point into it.
    well_names : (wells,) array of text
        Names by the sets' well numbers.
    sets : dict of str to ReadingSets
        Sets of each kind that is there.
    rejected : DataFrame
        Readings that no set holds.
    """

    readings: pd.DataFrame
    well_names: NDArray[np.object_]
    sets: dict[str, ReadingSets]
    rejected: pd.DataFrame

    def warmest_degc(self, sets: ReadingSets) -> Floats:
        """Return the warmest reading as read, (sets,) in degC."""
        return largest(spread(self.readings["temperature_degc"].to_numpy(), sets.row))

    def joined_ids(self, sets: ReadingSets) -> NDArray[np.object_]:
        """Return the sorted ``;``-joined identities of the readings, (sets,)."""
        ids = self.readings["reading_id"].to_numpy(object)
        position = np.argsort(np.argsort(ids.astype(str), kind="stable"))
        key = np.where(sets.row >= 0, position[sets.row], np.iinfo(np.int64).max)
        row = np.take_along_axis(sets.row, np.argsort(key, axis=1, kind="stable"), axis=1)
        out = ids[row[:, 0]].copy() if len(sets) else np.zeros(0, object)
        for column in row.T[1:]:
            more = column >= 0
            out[more] = out[more] + ";" + ids[column[more]]
        return out


def gather(
    readings: pd.DataFrame, wells: pd.DataFrame, settings: Correction, holdout: Iterable[str] = ()
) -> Gathered:
    """Gather readings into sets.

    Parameters
    ----------
    readings, wells : DataFrame
        Tables by the contracts Readings and Wells, in any order.
    settings : basinheat.settings.heat.Correction
        Gap between sets and what stands in for values not noted.
    holdout : iterable of str
        Wells that teach nothing.

    Returns
    -------
    Gathered
        Sets, and the readings refused: those of unknown wells and copies of an earlier reading.
    """
    wells = wells.sort_values("well", ignore_index=True)
    names = wells["well"].to_numpy(object)
    order = ["well", "kind", "depth_m", "since_circulation_h", "temperature_degc", "reading_id"]
    readings = readings.sort_values(order, ignore_index=True, kind="stable")
    number = pd.Index(names).get_indexer(readings["well"])
    unknown = np.flatnonzero(number < 0)
    ledger = [
        refuse(readings, unknown, "well_rejected", "the well is not among the accepted wells.")
    ]
    learn = ~np.isin(names.astype(str), sorted(holdout))
    sets = {}
    for kind in KINDS:
        rows = np.flatnonzero((readings["kind"].to_numpy(object) == kind) & (number >= 0))
        if rows.size == 0:
            continue
        gap = settings.same_depth_m
        group = group_by_depth(
            number[rows], readings["depth_m"].to_numpy()[rows], gap, gap * _LONGEST[kind]
        )
        rows, group, copies = _drop_copies(readings, rows, group)
        ledger.append(
            refuse(
                readings,
                copies,
                COPIED,
                "the temperature repeats an earlier reading at this depth, which counts.",
            )
        )
        sets[kind] = _arrays(readings, wells, rows, group, number, learn, settings)
    return Gathered(readings, names, sets, pd.concat(ledger, ignore_index=True))


def _drop_copies(readings: pd.DataFrame, rows: Ints, group: Ints) -> tuple[Ints, Ints, Ints]:
    """Order readings by set and time; take out those flagged as copies of an earlier one."""
    since = readings["since_circulation_h"].to_numpy()[rows]
    temperature = readings["temperature_degc"].to_numpy()[rows]
    flagged = readings["flags"].iloc[rows].str.contains(rf"\b{COPIED}\b").to_numpy(bool)
    by_value = np.lexsort((rows, since, temperature, group))
    repeat = np.zeros(rows.size, bool)
    g, t = group[by_value], temperature[by_value]
    repeat[by_value[1:]] = (g[1:] == g[:-1]) & (t[1:] == t[:-1])
    kept = ~(flagged & repeat)
    order = np.lexsort((rows, temperature, since, group))
    order = order[kept[order]]
    return rows[order], group[order], rows[~kept]


def _arrays(
    readings: pd.DataFrame,
    wells: pd.DataFrame,
    rows: Ints,
    group: Ints,
    number: NDArray[np.intp],
    learn: NDArray[np.bool_],
    settings: Correction,
) -> ReadingSets:
    """Arrange the readings of sets as padded arrays."""
    place = pad(group, int(group[-1]) + 1)
    row = np.where(place >= 0, rows[place], -1)

    def padded(column: str) -> Floats:
        return spread(readings[column].to_numpy(np.float64), row)

    since, depth, std = (
        padded("since_circulation_h"),
        padded("depth_m"),
        padded("temperature_std_k"),
    )
    timed, count = np.isfinite(since).sum(1), (row >= 0).sum(1)
    latest = np.where(timed > 0, timed, count) - 1
    radius = largest(padded("hole_radius_m"))
    well = number[row[:, 0]]
    surface = wells["surface_temperature_degc"].to_numpy(np.float64)[well]
    return ReadingSets(
        row=row,
        well=well.astype(np.int64),
        depth_m=np.take_along_axis(depth, latest[:, None], 1)[:, 0],
        reading_depth_m=depth,
        temperature_degc=padded("temperature_degc"),
        temperature_std_k=np.where((row >= 0) & ~(std > 0), settings.reading_std_k, std),
        since_circulation_h=since,
        depth_std_m=np.nan_to_num(largest(padded("depth_std_m"))),
        circulation_h=largest(padded("circulation_h")),
        drilling_h=largest(padded("drilling_h")),
        hole_radius_m=np.where(radius > 0, radius, settings.hole_radius_m),
        surface_temperature_degc=surface,
        surface_std_k=wells["surface_temperature_std_k"].to_numpy(np.float64)[well],
        mud_temperature_degc=mean_noted(padded("mud_temperature_degc")),
        std_stated=np.asarray(np.isfinite(std).any(1), dtype=bool),
        learn=learn[well],
    )


def refuse(
    readings: pd.DataFrame, rows: Ints, code: str, sentence: str | pd.Series
) -> pd.DataFrame:
    """Return ledger rows for some readings."""
    refused = readings.iloc[rows].reset_index(drop=True)
    return tables.Rejected.conform(
        pd.DataFrame(
            {
                "table": pd.Series(["readings"] * len(refused), dtype=object),
                "source_file": refused["source_file"],
                "source_line": refused["source_line"],
                "well": refused["well"],
                "reading_id": refused["reading_id"],
                "column": pd.Series(["temperature"] * len(refused), dtype=object),
                "value": refused["temperature_degc"].map("{:g} degC".format).astype(object),
                "code": pd.Series([code] * len(refused), dtype=object),
                "sentence": sentence
                if isinstance(sentence, pd.Series)
                else pd.Series([sentence] * len(refused), dtype=object),
            }
        )
    )
