"""Rules that compare the readings of one well."""

from __future__ import annotations

import numpy as np
import pandas as pd

from basinheat.flags import mark
from basinheat.ledger import Ledger
from basinheat.readers import InputTable
from basinheat.settings.wells import Screening

COOLING_K = 0.5  # a fall with time below this is rounding


def screen_wells(
    table: InputTable, ledger: Ledger, rules: Screening, same_depth_m: float
) -> InputTable:
    """Apply the rules that compare the readings of one well.

    Parameters
    ----------
    table : InputTable
        Readings with ``depth_m``.
    ledger : Ledger
        Takes refused readings.
    rules : Screening
        Thresholds.
    same_depth_m : float
        Readings of one well closer than this are one set, m.
    """
    table = _repeated(table, ledger, rules.inconsistent_gap_m)
    table = _copied(table, ledger, same_depth_m)
    if len(table):
        mark(table.frame, _cooling(table.frame, same_depth_m), "cooling_with_time")
        mark(table.frame, _inconsistent(table.frame, rules, same_depth_m), "inconsistent_gradient")
    return table


def depth_sets(frame: pd.DataFrame, same_depth_m: float) -> np.ndarray:
    """Return the number of the set of each reading: same well and kind, depths without a gap.

    Parameters
    ----------
    frame : DataFrame, (n,)
        Columns ``row`` (of the well), ``kind, depth_m``.
    same_depth_m : float
        Gap that parts sets, m.

    Returns
    -------
    ndarray of int, (n,)
    """
    depth, row = frame["depth_m"].to_numpy(), frame["row"].to_numpy()
    kind = pd.factorize(frame["kind"], sort=True)[0]
    order = np.lexsort((depth, kind, row))
    step = [np.diff(values[order], prepend=np.nan) for values in (row, kind, depth)]
    new = (step[0] != 0) | (step[1] != 0) | (step[2] > same_depth_m)
    number = np.empty(len(order), np.int64)
    number[order] = np.cumsum(new)
    return number


def _repeated(table: InputTable, ledger: Ledger, gap_m: float) -> InputTable:
    """Refuse the shallower of equal temperatures at depths too far apart to be equal.

    Readings with times of their own that differ were each read: mud may cool a deep rock to the
    temperature that a shallow one has later.
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
        "well; a header was copied, and the deepest reading is kept.",
    )
    del out.frame["_deepest"]
    return out


def _copied(table: InputTable, ledger: Ledger, same_depth_m: float) -> InputTable:
    """Keep the earliest of equal temperatures at one depth: they count once."""
    frame = table.frame
    keys = {
        "set": depth_sets(frame, same_depth_m),
        "degc": frame["temperature"].round(4),
        "since": frame["since_circulation"].fillna(np.inf),
        "run": frame["log_run"],
        "id": frame["reading_id"],
    }
    order = pd.DataFrame(keys)
    logged = (frame["kind"] == "bht").to_numpy()
    twins = order.duplicated(["set", "degc"], keep=False).to_numpy() & logged
    order = order.sort_values(["set", "degc", "since", "run", "id"], kind="stable")
    later = order.duplicated(["set", "degc"]).loc[frame.index].to_numpy() & logged
    mark(frame, twins & ~later, "copied_temperature")
    return ledger.screen(
        table,
        later,
        "temperature",
        "copied_temperature",
        "the same {temperature:.1f} degC was noted in an earlier run at this depth: the value was "
        "copied or the thermometer not reset, and the earliest counts.",
    )


def _cooling(frame: pd.DataFrame, same_depth_m: float) -> np.ndarray:
    """Tell which sets hold a temperature that falls with time since circulation."""
    timed = frame[frame["since_circulation"].notna() & (frame["kind"] == "bht")]
    out = np.zeros(len(frame), bool)
    if len(timed) < 2:
        return out
    number = depth_sets(timed, same_depth_m)
    ordered = timed.assign(_set=number).sort_values(["_set", "since_circulation"], kind="stable")
    warmest = ordered.groupby("_set")["temperature"].cummax()
    falls = (warmest - ordered["temperature"] > COOLING_K).groupby(ordered["_set"]).transform("any")
    out[falls.index[falls.to_numpy()]] = True
    return out


def _inconsistent(frame: pd.DataFrame, rules: Screening, same_depth_m: float) -> np.ndarray:
    """Tell which readings give an impossible gradient with the next set of their well."""
    number = depth_sets(frame, same_depth_m)
    sets = (
        frame.assign(_set=number)
        .groupby("_set")
        .agg(
            row=("row", "first"),
            kind=("kind", "first"),
            z=("depth_m", "mean"),
            t=("temperature", "max"),
        )
    )
    same = (sets[["row", "kind"]] == sets[["row", "kind"]].shift()).all(axis=1)
    step = sets["z"].diff()
    with np.errstate(divide="ignore", invalid="ignore"):
        gradient = 1000.0 * sets["t"].diff() / step
    low, high = rules.gradient_low_k_km / 2.0, rules.gradient_high_k_km
    bad = same & (step >= rules.inconsistent_gap_m) & ((gradient < low) | (gradient > high))
    both = bad | bad.shift(-1, fill_value=False)
    return both.loc[number].to_numpy()
