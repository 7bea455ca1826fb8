"""Every correction method on every mud-cooled set, side by side: tables in, tables out."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

import numpy as np
import pandas as pd

from basinheat import tables
from basinheat.corrections.judging.verdicts import Verdict, common_sets
from basinheat.corrections.method import Floats
from basinheat.corrections.registry import METHODS
from basinheat.corrections.stage import Basis

BIN_M = 500.0
# Anchors further up or down than this say little of a set (as far as METHODS A1 allows readings
# of one set to lie apart).
NEAR_M = 50.0
CHOSEN = "chosen"
# To make a median deviation a standard deviation, and its standard error that of a median: normal
# distribution.
_MAD, _MEDIAN = 1.4826, np.sqrt(np.pi / 2.0)


def describe_sets(
    basis: Basis, estimates: pd.DataFrame, temperatures: pd.DataFrame
) -> pd.DataFrame:
    """Return what is the same for all methods, a row per mud-cooled set.

    Parameters
    ----------
    basis : Basis
        Sets and context.
    estimates, temperatures : DataFrame
        Tables by the contracts Estimates and Temperatures of the same run.

    Returns
    -------
    DataFrame
        ``well``, ``depth_m``, ``raw_temperature_degc``, ``n_readings``, ``n_timed``,
        ``since_circulation_h``; of the method that counts ``chosen`` (its name, empty for none),
        ``chosen_degc``, ``final_temperature_degc`` and ``estimate`` (its row, -1 for none);
        ``learn``: the well is not held out.
    """
    sets, gathered = basis.sets["bht"], basis.gathered
    ids = gathered.joined_ids(sets)
    row = pd.Index(estimates["reading_ids"]).get_indexer(ids)
    final = pd.Index(temperatures["reading_ids"]).get_indexer(ids)
    return pd.DataFrame(
        {
            "well": gathered.well_names[sets.well],
            "depth_m": sets.depth_m,
            "raw_temperature_degc": gathered.warmest_degc(sets),
            "n_readings": sets.count,
            "n_timed": sets.timed,
            "since_circulation_h": sets.at(sets.since_circulation_h, sets.latest),
            "chosen": _at(estimates["method"], row, ""),
            "chosen_degc": _at(estimates["temperature_degc"], row, np.nan),
            "final_temperature_degc": _at(temperatures["temperature_degc"], final, np.nan),
            "estimate": row,
            "learn": sets.learn,
        }
    )


def _at(values: pd.Series, place: np.ndarray, missing: Any) -> np.ndarray:
    """Return values at places, something else where the place is -1."""
    if values.empty:
        return np.full(place.size, missing, dtype=object if missing == "" else float)
    return np.where(place >= 0, values.to_numpy()[place], missing)


def side_by_side(described: pd.DataFrame, verdicts: list[Verdict]) -> Iterator[pd.DataFrame]:
    """Yield the comparison one method at a time, by the contract CorrectionComparison.

    Parameters
    ----------
    described : DataFrame
        Of ``describe_sets``.
    verdicts : list of Verdict
        One a method.
    """
    if not verdicts:
        yield tables.CorrectionComparison.empty()
    order = np.lexsort([described["depth_m"].to_numpy(), described["well"].to_numpy(str)])
    same = described.drop(columns=["chosen", "chosen_degc", "estimate", "learn"]).iloc[order]
    for verdict in verdicts:
        part = same.assign(
            method=verdict.method.name,
            applies=verdict.applies[order],
            reason=np.array(verdict.words(), object)[verdict.reason[order]],
            chosen=described["chosen"].to_numpy()[order] == verdict.method.name,
            temperature_degc=verdict.temperature_degc[order],
            correction_k=verdict.temperature_degc[order] - same["raw_temperature_degc"],
            temperature_std_k=verdict.independent_std_k[order],
            well_std_k=verdict.well_std_k[order],
            shared_std_k=verdict.shared_std_k[order],
            total_std_k=verdict.total_std_k[order],
        )
        yield tables.CorrectionComparison.conform(part)


def summarise(described: pd.DataFrame, verdicts: list[Verdict]) -> pd.DataFrame:
    """Sum up methods by depth, by the contract CorrectionSummary: own sets, and common ones.

    The methods that count, whichever they are, stand last under the name ``chosen``.
    """
    compared, common = common_sets(verdicts, described["n_timed"].to_numpy())
    parts = []
    for verdict in verdicts:
        name, values = verdict.method.name, (verdict.temperature_degc, verdict.total_std_k)
        parts += _summary(described, name, *values, verdict.applies, "own")
        if name in compared:
            parts += _summary(described, name, *values, common, "common")
    if not parts:
        return tables.CorrectionSummary.empty()
    chosen = described["chosen_degc"].to_numpy()
    std = chosen_std_k(described, verdicts)
    parts += _summary(described, CHOSEN, chosen, std, np.isfinite(chosen), "own")
    if compared:
        parts += _summary(described, CHOSEN, chosen, std, common & np.isfinite(chosen), "common")
    return tables.CorrectionSummary.conform(pd.concat(parts, ignore_index=True))


def chosen_std_k(described: pd.DataFrame, verdicts: list[Verdict]) -> Floats:
    """Return the total standard uncertainty by the method that counts, (sets,) in K."""
    out = np.full(len(described), np.nan)
    for verdict in verdicts:
        rows = (described["chosen"] == verdict.method.name).to_numpy()
        out[rows] = verdict.total_std_k[rows]
    return out


def _summary(
    described: pd.DataFrame,
    name: str,
    temperature_degc: Floats,
    total_std_k: Floats,
    counted: np.ndarray,
    sets: str,
) -> list[pd.DataFrame]:
    """Return the rows of one method: all depths, then every interval that holds a set."""
    values = pd.DataFrame(
        {
            "top_m": np.floor(described["depth_m"] / BIN_M) * BIN_M,
            "treated": np.where(counted, 1.0, np.nan),
            "correction_k": temperature_degc - described["raw_temperature_degc"],
            "difference_k": temperature_degc - described["chosen_degc"],
            "total_std_k": total_std_k,
        }
    )
    values.loc[~counted, ["correction_k", "difference_k", "total_std_k"]] = np.nan
    every = _medians(values.groupby(np.zeros(len(values)))).assign(top_m=np.nan)
    bins = _medians(values.groupby("top_m", sort=True)).reset_index()
    return [
        part.assign(method=name, sets=sets, base_m=part["top_m"] + BIN_M) for part in (every, bins)
    ]


def _medians(groups: Any) -> pd.DataFrame:
    count, sizes = groups["treated"].count(), groups.size()
    return pd.DataFrame(
        {
            "n_sets": sizes,
            "n_treated": count,
            "share_treated": count / sizes,
            "correction_k": groups["correction_k"].median(),
            "correction_low_k": groups["correction_k"].quantile(0.25),
            "correction_high_k": groups["correction_k"].quantile(0.75),
            "difference_k": groups["difference_k"].median(),
            "total_std_k": groups["total_std_k"].median(),
        }
    )


def against_anchors(basis: Basis, described: pd.DataFrame, verdicts: list[Verdict]) -> pd.DataFrame:
    """Compare methods with formation temperatures measured nearby, by AnchorDifferences.

    An anchor is an equilibrium log or drill-stem test in the same well within 50 m; its
    temperature is carried to the set's depth with the region's gradient. Several differences of
    one well count as one, their median.
    """
    parts = []
    for kind in ("equilibrium", "dst"):
        anchor = _nearest_anchor_degc(basis, kind)
        told = np.isfinite(anchor) & described["learn"].to_numpy()
        chosen = described["chosen_degc"].to_numpy()
        for verdict in verdicts:
            name, value = verdict.method.name, verdict.temperature_degc
            rows = told & np.isfinite(value)
            if rows.any():
                wells = described["well"].to_numpy()[rows]
                found = _by_wells(wells, (value - anchor)[rows])
                beside = _by_wells(wells, (chosen - anchor)[rows])["difference_k"]
                parts.append({"method": name, "anchor": kind, **found,
                              "chosen_difference_k": beside})  # fmt: skip
    return tables.AnchorDifferences.conform(
        pd.DataFrame(parts, columns=list(tables.AnchorDifferences.columns))
    )


def _nearest_anchor_degc(basis: Basis, kind: str) -> Floats:
    """Return the temperature of the nearest anchor, (sets,) in degC; NaN where none is near."""
    sets = basis.sets["bht"]
    out = np.full(len(sets), np.nan)
    if kind not in basis.sets:
        return out
    anchors, context = basis.sets[kind], basis.context
    outcome = METHODS[kind].estimate(anchors, context)
    good = outcome.reason == 0
    if not good.any():
        return out
    # Wells a million metres apart on one line: the nearest on it is the nearest of the well.
    line = anchors.well[good] * 1.0e6 + anchors.depth_m[good]
    order = np.argsort(line, kind="stable")
    line, value = line[order], outcome.temperature_degc[good][order]
    at = sets.well * 1.0e6 + sets.depth_m
    right = np.searchsorted(line, at).clip(1, max(line.size - 1, 1)).clip(max=line.size - 1)
    left = np.maximum(right - 1, 0)
    nearest = np.where(np.abs(line[left] - at) <= np.abs(line[right] - at), left, right)
    away = at - line[nearest]
    carried = value[nearest] + context.trend.gradient_k_m(sets.depth_m) * away
    return np.asarray(np.where(np.abs(away) <= NEAR_M, carried, np.nan))


def _by_wells(well: np.ndarray, difference: np.ndarray) -> dict[str, float]:
    """Return counts, median, its standard error and the robust spread of differences."""
    per_well = pd.Series(difference).groupby(well).median().dropna().to_numpy()
    if per_well.size == 0:
        return {"n_pairs": 0, "n_wells": 0, "difference_k": np.nan}
    middle = float(np.median(per_well))
    spread = float(_MAD * np.median(np.abs(per_well - middle))) if per_well.size > 1 else np.nan
    return {
        "n_pairs": int(difference.size),
        "n_wells": int(per_well.size),
        "difference_k": middle,
        "difference_std_k": float(_MEDIAN * spread / np.sqrt(per_well.size)),
        "spread_k": spread,
    }
