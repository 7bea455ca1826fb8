"""The calibration as a stage: its anchors, the table of its pairs, and its record."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
import pandas as pd

from basinheat import tables
from basinheat.corrections.calibration.ladder import FEWEST, Rung
from basinheat.corrections.calibration.learned import Calibration, calibrate
from basinheat.corrections.calibration.pairs import Anchors, Reach
from basinheat.corrections.choose import Choice, choose
from basinheat.corrections.method import Context, Floats, Method, Outcome
from basinheat.corrections.methods import local_calibration
from basinheat.corrections.sets import ReadingSets

if TYPE_CHECKING:
    from basinheat.settings.heat import Correction

DIRECT = ("equilibrium", "dst")
LOCAL = local_calibration.NAME
# Only a log in a hole at rest may be read between its points: a test says nothing of its way.
_BETWEEN = "equilibrium"
_BINS = 4
# Of a depth that counts from -1 at the top of the pairs to 1 at their base.
_TERMS = ("constant", "depth", "depth_squared", "ln_time")


def learn(
    sets: dict[str, ReadingSets],
    order: list[Method],
    context: Context,
    place_m: Floats,
    settings: Correction,
) -> Calibration | None:
    """Learn the basin's own correction; None without mud-cooled sets or anchors.

    Parameters
    ----------
    sets : dict of str to ReadingSets
        By kind, each carried to one depth.
    order : list of Method
        Methods; anchors are what they say of equilibrium logs and tests.
    context : Context
        Settings and trend.
    place_m : (wells, 2) array, m
        Places by the number of the well.
    settings : basinheat.settings.heat.Correction
        Section ``correction`` of the config.
    """
    rules = settings.calibration
    kinds = [kind for kind in DIRECT if kind in rules.anchors and kind in sets]
    direct = {kind: (sets[kind], choose(sets[kind], kind, order, context)) for kind in kinds}
    sources = {
        name: loading.prior_std
        for _, choice in direct.values()
        for name, loading in choice.loadings.items()
    }
    parts = [
        _anchors(kind, level, choice, list(sources)) for kind, (level, choice) in direct.items()
    ]
    if "bht" not in sets or not any(part.log.size for part in parts):
        return None
    anchors = Anchors(
        **{name: np.concatenate([vars(part)[name] for part in parts]) for name in vars(parts[0])}
    )
    return calibrate(
        sets["bht"],
        anchors,
        sources,
        place_m,
        context.trend,
        Reach(rules.depth_m, rules.log_step_m, rules.distance_km * 1e3, rules.neighbour_share),
        rules.model,
        context.well_share,
        context.circulation_h,
    )


def _anchors(kind: str, sets: ReadingSets, choice: Choice, sources: list[str]) -> Anchors:
    """Return the direct temperatures of one kind."""
    kept = np.flatnonzero(choice.rank >= 0)
    shared = [
        choice.loadings[name].values[kept] if name in choice.loadings else np.zeros(kept.size)
        for name in sources
    ]
    well = sets.well[kept]
    return Anchors(
        log=well * len(DIRECT) + DIRECT.index(kind),
        well=well,
        depth_m=sets.depth_m[kept],
        temperature_degc=choice.temperature_degc[kept],
        std_k=choice.independent_std_k[kept],
        log_std_k=choice.well_std_k[kept],
        surface_degc=sets.surface_temperature_degc[kept],
        interpolated=np.full(kept.size, kind == _BETWEEN),
        learn=sets.learn[kept],
        shared_k=np.stack(shared, axis=1) if shared else np.zeros((kept.size, 0)),
    )


def table(
    calibration: Calibration | None,
    sets: ReadingSets | None,
    choice: Choice | None,
    order: list[Method],
    context: Context,
    well_names: np.ndarray,
) -> pd.DataFrame:
    """Return one row per pair and method of the order that applies.

    Parameters
    ----------
    calibration : Calibration or None
        Pairs.
    sets, choice : ReadingSets or None, Choice or None
        Mud-cooled sets, and what was chosen for them.
    order : list of Method
        Methods.
    context : Context
        What they are given.
    well_names : (wells,) array of text
        Names by number.
    """
    if calibration is None or sets is None or choice is None or not len(calibration.pairs):
        return tables.Calibration.empty()
    parts = []
    for place, method in enumerate(order):
        if method.kind != "bht":
            continue
        outcome = choice.outcomes.get(place) or method.estimate(sets, context)
        parts.append(_rows(calibration, sets, outcome, method.name, choice.rank == place))
    if local_calibration.METHOD not in order:
        outcome = local_calibration.estimate(sets, context)
        parts.append(_rows(calibration, sets, outcome, LOCAL, np.zeros(len(sets), bool)))
    rows = pd.concat(parts, ignore_index=True) if parts else tables.Calibration.empty()
    for column in ("well", "anchor_well"):
        rows[column] = well_names[rows[column].to_numpy(np.int64)]
    rows = rows.sort_values(["well", "depth_m", "method"], kind="stable", ignore_index=True)
    return tables.Calibration.conform(rows)


def _rows(
    calibration: Calibration,
    sets: ReadingSets,
    outcome: Outcome,
    method: str,
    chosen: np.ndarray,
) -> pd.DataFrame:
    """Return the rows of one method, wells by number."""
    pairs = calibration.pairs
    at, anchors = pairs.index, calibration.anchors
    estimate = outcome.temperature_degc[at].copy()
    if method == LOCAL and calibration.rung is not None:
        left_out = sets.warmest_degc[at[pairs.learn]] + calibration.rung.left_out_k
        estimate[pairs.learn] = left_out
    shared = sum(
        (loading.values[at] ** 2 for loading in outcome.loadings.values()), np.zeros(at.size)
    )
    own = outcome.independent_std_k[at] ** 2 + outcome.well_std_k[at] ** 2
    frame = pd.DataFrame(
        {
            "well": pairs.well,
            "depth_m": pairs.depth_m,
            "anchor_well": anchors.well[pairs.anchor],
            "anchor_depth_m": anchors.depth_m[pairs.anchor],
            "anchor_kind": np.array(DIRECT, object)[anchors.log[pairs.anchor] % len(DIRECT)],
            "distance_m": pairs.distance_m,
            "anchor_temperature_degc": pairs.anchor_degc,
            "anchor_std_k": pairs.anchor_std_k,
            "since_circulation_h": sets.at(sets.since_circulation_h, sets.latest)[at],
            "raw_temperature_degc": sets.warmest_degc[at],
            "method": method,
            "chosen": chosen[at],
            "taught": pairs.learn,
            "estimate_degc": estimate,
            "residual_k": estimate - pairs.anchor_degc,
            "residual_std_k": np.sqrt(own + shared + pairs.anchor_std_k**2),
        }
    )
    return frame[(outcome.reason == 0)[at]]


def record(calibration: Calibration | None, rows: pd.DataFrame) -> dict[str, Any]:
    """Return what was learned, step by step, and how the methods fare at the pairs.

    Parameters
    ----------
    calibration : Calibration or None
        Steps and pairs.
    rows : DataFrame
        The table Calibration.
    """
    if calibration is None:
        return {"pairs": 0, "step": "none: no direct temperature beside a mud-cooled reading"}
    pairs, rung = calibration.pairs, calibration.rung
    taught = pairs.learn
    return {
        "pairs": len(pairs),
        "pairs_that_taught": int(taught.sum()),
        "pairs_in_one_well": int((pairs.distance_m == 0.0).sum()),
        "wells": int(np.unique(pairs.well).size),
        "step": "none: too few pairs" if rung is None else rung.step.name,
        "steps": {step.step.name: _step(step, calibration) for step in calibration.rungs},
        "methods": {str(name): _fares(part) for name, part in rows.groupby("method", sort=True)},
        "conductive_recovery_note": "its scale on these pairs is not a step of its own: the joint "
        "fit of heat flow learns it as the sources recovery:cooling and those of the mud, from the "
        "same direct temperatures (table sources).",
    }


def _step(rung: Rung, calibration: Calibration) -> dict[str, Any]:
    """Return one step: what it had, what it found, or why it was refused."""
    out: dict[str, Any] = {
        "pairs": rung.n_pairs,
        "pairs_needed": FEWEST[rung.step.name],
        "wells": rung.n_wells,
        "chosen": rung is calibration.rung,
    }
    if rung.refused:
        out["refused"] = rung.refused
    if rung.found is None:
        return out
    pairs = calibration.pairs
    error = rung.left_out_k - pairs.correction_k[pairs.learn]
    return out | {
        "top_m": rung.step.top_m,
        "base_m": rung.step.base_m,
        "coefficients_k": dict(zip(_TERMS, rung.found.coefficients.tolist(), strict=False)),
        "coefficients_std_k": dict(
            zip(_TERMS, np.sqrt(np.diag(rung.found.covariance)).tolist(), strict=False)
        ),
        "scatter_k": rung.scatter_k,
        "left_out_rmse_k": rung.score_k,
        "left_out_bias_k": float(np.mean(error)),
        "left_out_bias_by_depth_k": _by_depth(error, pairs.depth_m[pairs.learn]),
    }


def _by_depth(error: Floats, depth_m: Floats) -> dict[str, float]:
    """Return the median error in depth bins with equally many pairs."""
    edges = np.unique(np.quantile(depth_m, np.linspace(0.0, 1.0, _BINS + 1)))
    place = np.clip(np.searchsorted(edges, depth_m, side="right") - 1, 0, max(edges.size - 2, 0))
    return {
        f"{k + 1}: {edges[k]:.0f} to {edges[min(k + 1, edges.size - 1)]:.0f} m": float(
            np.median(error[place == k])
        )
        for k in np.unique(place)
    }


def _fares(part: pd.DataFrame) -> dict[str, Any]:
    """Return how far one method is from the anchors: medians, which gross errors do not move."""
    error = part["residual_k"].to_numpy()
    return {
        "pairs": len(part),
        "median_k": float(np.median(error)),
        "spread_k": float(1.4826 * np.median(np.abs(error - np.median(error)))),
        "median_by_depth_k": _by_depth(error, part["depth_m"].to_numpy()),
    }
