"""Temperatures that stand more than once in a well: copied, or read the same by chance."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.flags import mark
from basinheat.ledger import Ledger
from basinheat.readers import InputTable
from basinheat.screening.depth_sets import depth_sets
from basinheat.settings.wells import Screening

Array = NDArray[np.float64]

CIRCULATION_H = 4.0  # where none is noted: a few hours (common practice, METHODS A1)
# Rise of the mud per unit of the recovery's shape and per kelvin above the surface, where a region
# has too few repeated logs to tell: 12 K at 3 km, 8 h after 4 h of circulation (common practice).
ORDINARY_RISE = 0.35
FEWEST_PAIRS = 30


def refuse_repeated(table: InputTable, ledger: Ledger, gap_m: float) -> InputTable:
    """Refuse the shallower of equal temperatures at depths too far apart to be equal.

    A thermometer that holds its maximum and was not reset shows the same, and so does a header that
    was copied. Readings with times of their own that differ were each read: mud may cool a deep
    rock to the temperature that a shallow one has later.

    Parameters
    ----------
    table : InputTable
        Readings with ``row, depth_m``.
    ledger : Ledger
        Takes refused readings.
    gap_m : float
        Depths further apart can't be of one temperature, m.
    """
    frame = table.frame
    logged = (frame["kind"] == "bht").to_numpy()
    keys = [frame["row"].to_numpy(), logged, frame["temperature"].round(4).to_numpy()]
    depth, since = (frame[name].to_numpy() for name in ("depth_m", "since_circulation"))
    order = np.lexsort((-depth, *keys))
    steps = [key[order][1:] != key[order][:-1] for key in keys]
    new = np.r_[True, np.logical_or.reduce(steps)][: len(order)]
    group, deepest = (np.empty(len(order), np.int64) for _ in range(2))
    group[order] = np.cumsum(new) - 1
    deepest[order] = order[new][group[order]]
    read_apart = np.isfinite(since) & np.isfinite(since[deepest]) & (since != since[deepest])
    repeated = logged & (depth[deepest] - depth > gap_m) & ~read_apart
    mark(frame, np.isin(group, group[repeated]) & ~repeated, "repeated_temperature")
    frame["_deepest"] = depth[deepest]
    out = ledger.screen(
        table,
        repeated,
        "temperature",
        "repeated_temperature",
        "the same {temperature:.1f} degC stands at {depth_m:.0f} m and at {_deepest:.0f} m of this "
        "well; a header was copied or a thermometer not reset, and the deepest reading is kept.",
    )
    del out.frame["_deepest"]
    return out


def refuse_copied(
    table: InputTable, ledger: Ledger, rules: Screening, std_k: float, same_depth_m: float
) -> InputTable:
    """Keep the earliest of equal temperatures at one depth, and those that time explains.

    Two runs a little apart in time often read the same, because the mud warmed by less than the
    thermometer and its rounding tell. So a later reading is a copy only where the rise expected
    from the region's other repeated logs is beyond ``same_temperature_score`` errors of the
    difference, and beyond that many steps of rounding. A copy that stays below does no more harm
    than the error of an honest reading; to refuse honest ones would leave only the runs that
    happened to rise, and make the recovery look faster than it is.

    Parameters
    ----------
    table : InputTable
        Readings with ``row, depth_m, step_k, surface_temperature_degc``.
    ledger : Ledger
        Takes refused readings.
    rules : Screening
        ``same_temperature_score``.
    std_k : float
        Standard uncertainty of a reading that states none, K.
    same_depth_m : float
        Readings of one well closer than this are one set, m.
    """
    frame = table.frame
    number = depth_sets(frame, same_depth_m)
    keys = {
        "set": number,
        "degc": frame["temperature"].round(4),
        "since": frame["since_circulation"].fillna(np.inf),
        "run": frame["log_run"],
        "id": frame["reading_id"],
    }
    logged = (frame["kind"] == "bht").to_numpy()
    order = pd.DataFrame(keys)
    twins = order.duplicated(["set", "degc"], keep=False).to_numpy() & logged
    if not twins.any():
        return table
    order = order[twins].sort_values(["set", "degc", "since", "run", "id"], kind="stable")
    rows = order.index.to_numpy()
    later = order.duplicated(["set", "degc"]).to_numpy()
    # Each is held against the earliest of its value.
    first = rows[~later][np.cumsum(~later) - 1]
    rise = _expected_rise(frame, rows, first, _rise_factor(frame, number, logged))
    own = _error(frame, std_k)
    error = np.hypot(own[rows], own[first])
    step = frame["step_k"].to_numpy()[rows]
    # Equal or unknown times leave nothing to explain: then it is one reading, noted twice.
    explained = later & (rise > 0.0) & (rise <= rules.same_temperature_score * np.fmax(error, step))
    copy, same = (np.zeros(len(frame), bool) for _ in range(2))
    copy[rows[later & ~explained]] = True
    same[rows[explained]] = True
    copied_from = np.zeros(len(frame), bool)
    copied_from[first[later & ~explained]] = True
    mark(frame, copied_from & ~copy, "copied_temperature")
    mark(frame, same, "same_temperature")
    told = [f", and {r:.1f} K warmer were expected" if r > 0.0 else "" for r in rise]
    frame["_told"] = pd.Series(told, index=rows).reindex(frame.index, fill_value="")
    out = ledger.screen(
        table,
        copy,
        "temperature",
        "copied_temperature",
        "the same {temperature:.1f} degC was noted in an earlier run at this depth{_told}: the "
        "value was copied or the thermometer not reset, and the earliest counts.",
    )
    return out.with_frame(out.frame.drop(columns="_told"))


def _error(frame: pd.DataFrame, std_k: float) -> Array:
    """Return the standard uncertainty of readings with their rounding, (n,) in K."""
    stated = frame["temperature_std"].to_numpy(float)
    return np.hypot(
        np.where(np.isfinite(stated), stated, std_k), frame["step_k"].to_numpy() / np.sqrt(12.0)
    )


def _expected_rise(
    frame: pd.DataFrame, late: NDArray[np.int64], early: NDArray[np.int64], factor: float
) -> Array:
    """Return by how much later readings should be warmer than earlier ones, K; NaN without times.

    The cooling left at time t goes as ``ln(1 + t_c / t)``, the line source (Bullard 1947, METHODS
    A2), times the height above the surface temperature: deep rock is cooled more.
    """
    since, circulation = (
        frame[name].to_numpy(float) for name in ("since_circulation", "circulation")
    )
    above = (frame["temperature"] - frame["surface_temperature_degc"]).to_numpy(float)[early]
    lasted = np.fmax(circulation[early], circulation[late])
    lasted = np.where(np.isfinite(lasted), lasted, CIRCULATION_H)
    return factor * above * (np.log1p(lasted / since[early]) - np.log1p(lasted / since[late]))


def _rise_factor(
    frame: pd.DataFrame, number: NDArray[np.int64], logged: NDArray[np.bool_]
) -> float:
    """Return the region's rise of repeated logs per unit of the shape: the median over pairs.

    The few copies among the pairs hardly move a median.
    """
    since = frame["since_circulation"].to_numpy(float)
    timed = np.flatnonzero(logged & np.isfinite(since))
    timed = timed[np.lexsort((since[timed], number[timed]))]
    early, late = timed[:-1], timed[1:]
    pair = (number[early] == number[late]) & (since[late] > since[early])
    early, late = early[pair], late[pair]
    if len(early) < FEWEST_PAIRS:
        return ORDINARY_RISE
    degc = frame["temperature"].to_numpy(float)
    expected = _expected_rise(frame, late, early, 1.0)
    known = expected > 0.0
    return float(max(np.median((degc[late] - degc[early])[known] / expected[known]), 0.0))
