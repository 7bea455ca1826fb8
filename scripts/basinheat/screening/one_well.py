"""Rules that compare the readings of one well."""

from __future__ import annotations

import numpy as np
import pandas as pd

from basinheat.flags import mark
from basinheat.ledger import Ledger
from basinheat.readers import InputTable
from basinheat.screening.copies import refuse_copied, refuse_repeated
from basinheat.screening.depth_sets import depth_sets
from basinheat.screening.stops import drop_times_of_another_stop
from basinheat.settings.wells import Screening

COOLING_K = 0.5  # a fall with time below this is rounding


def screen_wells(
    table: InputTable, ledger: Ledger, rules: Screening, std_k: float, same_depth_m: float
) -> InputTable:
    """Apply the rules that compare the readings of one well.

    Parameters
    ----------
    table : InputTable
        Readings with ``depth_m, step_k``.
    ledger : Ledger
        Takes refused readings.
    rules : Screening
        Thresholds.
    std_k : float
        Standard uncertainty of a reading that states none, K.
    same_depth_m : float
        Readings of one well closer than this are one set, m.
    """
    if not len(table):
        return table
    drop_times_of_another_stop(table, ledger, same_depth_m)
    table = refuse_repeated(table, ledger, rules.inconsistent_gap_m)
    table = refuse_copied(table, ledger, rules, std_k, same_depth_m)
    mark(table.frame, _cooling(table.frame, same_depth_m), "cooling_with_time")
    mark(table.frame, _inconsistent(table.frame, rules, same_depth_m), "inconsistent_gradient")
    return table


def _cooling(frame: pd.DataFrame, same_depth_m: float) -> np.ndarray:
    """Tell which sets hold a temperature that falls with time since circulation."""
    since = frame["since_circulation"].to_numpy(float)
    timed = np.flatnonzero(np.isfinite(since) & (frame["kind"] == "bht").to_numpy())
    out = np.zeros(len(frame), bool)
    if len(timed) < 2:
        return out
    number = depth_sets(frame[["row", "kind", "depth_m"]].iloc[timed], same_depth_m)
    order = np.lexsort((since[timed], number))
    number, degc = number[order], frame["temperature"].to_numpy(float)[timed[order]]
    # Sets are told apart by an offset above any temperature, so that one running maximum will do.
    apart = number * 10_000.0
    cooler = np.maximum.accumulate(degc + apart) - apart - degc
    out[timed[order]] = np.isin(number, number[cooler > COOLING_K])
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
