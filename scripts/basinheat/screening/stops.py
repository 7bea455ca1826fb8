"""Times that belong to another stop of circulation than the run they are noted with."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.flags import mark
from basinheat.ledger import Ledger
from basinheat.readers import InputTable
from basinheat.screening.depth_sets import depth_sets

RISE_K = 0.5  # less is rounding


def drop_times_of_another_stop(table: InputTable, ledger: Ledger, same_depth_m: float) -> None:
    """Drop times of runs that can't have been counted from one stop of circulation.

    In the runs of one depth and day, time goes on. Where the noted times fall while the order of
    the runs rises, or are all the same while the temperatures rise, they are of another stop or of
    one run only. The time of the first run stays.

    Parameters
    ----------
    table : InputTable
        Readings with ``row, depth_m, kind, log_run, date, since_circulation, temperature``.
    ledger : Ledger
        Takes the dropped times.
    same_depth_m : float
        Readings of one well closer than this are at one depth, m.
    """
    frame = table.frame
    since = frame["since_circulation"].to_numpy(float)
    use = np.isfinite(since) & (frame["kind"] == "bht").to_numpy()
    use &= (frame["log_run"] != "").to_numpy()
    if not use.any():
        return
    rows = np.flatnonzero(use)
    runs = pd.DataFrame(
        {
            "set": depth_sets(frame, same_depth_m)[rows],
            "day": pd.factorize(frame["date"].iloc[rows].str.slice(0, 10), sort=True)[0],
            "run": run_order(frame["log_run"].iloc[rows]),
            "since": since[rows],
            "degc": frame["temperature"].to_numpy(float)[rows],
        },
        index=rows,
    )
    runs = runs[np.isfinite(runs["run"].to_numpy())]
    if runs.empty:
        return
    runs = runs.sort_values(["set", "day", "run", "since"], kind="stable")
    wrong, doubted = _out_of_order(runs)
    drop, flag = (np.zeros(len(frame), bool) for _ in range(2))
    drop[runs.index[wrong]] = True
    flag[runs.index[doubted]] = True
    mark(frame, flag, "times_of_another_stop")
    ledger.drop(
        table,
        drop,
        "since_circulation",
        "times_of_another_stop",
        "the times of the runs at this depth and day do not go on as the runs do: "
        "{since_circulation:.2f} h of run {log_run} was counted from another stop or belongs to "
        "another run. The reading is used without it; only the earliest run keeps its time.",
    )


def run_order(text: pd.Series) -> NDArray[np.float64]:
    """Return the place of log runs by number, then letter; NaN for a name without either.

    Examples
    --------
    >>> run_order(pd.Series(["1A", "1B", "Run 2", "10", "C", "last"])).tolist()
    [1.01, 1.02, 2.0, 10.0, 0.03, nan]
    """
    codes, names = pd.factorize(text)
    parts = (
        pd.Series(names, dtype="str")
        .str.upper()
        .str.extract(r"^\W*(?:RUN\W*)?(?:NO\W*)?(\d+)?\W*([A-Z])?\W*$")
    )
    number = pd.to_numeric(parts[0], errors="coerce")
    letter = parts[1].map({chr(65 + i): (i + 1) / 100.0 for i in range(26)})
    place = (number.fillna(0.0) + letter.fillna(0.0)).to_numpy(float)
    return np.where(parts.notna().any(axis=1).to_numpy(), place, np.nan)[codes]


def _out_of_order(runs: pd.DataFrame) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
    """Return which times to drop, and which runs stand in such a group."""
    place = runs[["set", "day"]].to_numpy()
    same = np.r_[False, (place[1:] == place[:-1]).all(axis=1)]
    group = np.cumsum(~same)
    step = {name: np.diff(runs[name].to_numpy(), prepend=np.nan) for name in runs}
    # Two tools of one run share its time by right.
    next_run = same & (step["run"] > 0.0)
    falls = next_run & (step["since"] < 0.0)
    members = np.bincount(group, minlength=len(runs) + 1)[group]

    def all_of(mask: NDArray[np.bool_]) -> NDArray[np.bool_]:
        return np.bincount(group, mask, minlength=len(runs) + 1)[group] >= members - 1

    rises = next_run & (step["since"] == 0.0) & (step["degc"] > RISE_K)
    held = all_of(rises) & (members > 1)
    doubted = held | (np.bincount(group, falls, minlength=len(runs) + 1)[group] > 0)
    return doubted & same, doubted
