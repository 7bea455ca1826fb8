"""The basin's own correction: how it was found, how it fares, and what recovery learned."""

from __future__ import annotations

import itertools
from typing import Any

import numpy as np
import pandas as pd

from basinheat.corrections.calibration.ladder import STEPS
from basinheat.corrections.methods.local_calibration import NAME
from basinheat.corrections.recovery.sources import MUD
from basinheat.report import captions
from basinheat.report.contents import Contents
from basinheat.report.sheet import Sheet, number, percent

BINS, IN_A_BIN = 4, 5  # depth bins at most, and pairs that each has at least
UNLEARNED = 0.1  # resolved share of a variance below which nothing was learned (no source)
_FORMS = {
    "constant": "the same at every depth",
    "linear": "a line in depth",
    "quadratic": "a parabola of depth",
    "quadratic_with_time": "a parabola of depth, and the logarithm of the time",
    "scaled_with_time": "a parabola of depth, times the cooling left at that time",
}
_TERMS = {
    "constant": "#constant (K)",
    "depth": "#u (K)",
    "depth_squared": "#u² (K)",
    "ln_time": "#ln(Δt/12 h) (K)",
}
_ANCHORS = {"equilibrium": "equilibrium logs", "dst": "drill-stem tests"}
# What it means when more of a source is found than was assumed, and when less.
_LEARNED = {
    "recovery:cooling": ("mud cooled the holes", "more", "less"),
    "method:untimed": ("readings without a time were cooled", "more", "less"),
    "recovery:diffusivity": ("temperature spreads in the rock", "faster", "more slowly"),
    "recovery:mud_capacity": ("mud stores", "more heat", "less heat"),
    "recovery:mud_conductivity": ("mud conducts heat", "better", "less well"),
}


def found(contents: Contents) -> bool:
    """Return whether there is a calibration."""
    return any(step["chosen"] for step in _record(contents).get("steps", {}).values())


def introduction(contents: Contents) -> str:
    """Say what the calibration rests on and where it counts, or why there is none."""
    record, rules = _record(contents), contents.settings["correction"]["calibration"]
    anchors = " or ".join(_ANCHORS[kind] for kind in rules["anchors"])
    near = f"in the same well or one at most {rules['distance_km']:g} km away"
    if not record.get("pairs"):
        return (
            f"These wells have no correction of their own: nowhere does a direct temperature "
            f"({anchors}) lie at the depth of a mud-cooled reading {near}."
        )
    if not found(contents):
        model = rules["model"]
        name = STEPS[0] if model == "auto" else model
        which = "even the simplest form" if model == "auto" else "the form asked for"
        return (
            f"These wells have no correction of their own: {which}, {_FORMS[name]}, is refused "
            f"({record['steps'][name]['refused']})."
        )
    return (
        f"Where direct temperatures ({anchors}) lie at the depth of mud-cooled readings, {near}, "
        f"they say what has to be added here: {number(record['pairs'])} pairs of "
        f"{number(record['wells'])} wells, {number(record['pairs_in_one_well'])} of them within "
        f"one well. Forms of the correction were tried from plain to rich, each judged by its "
        f"predictions for wells left out. {_held_out(contents)}{_role(contents)}"
    )


def _held_out(contents: Contents) -> str:
    own, wells = own_rows(contents), contents.holdout
    count = int((own["well"].isin(wells) | own["anchor_well"].isin(wells)).sum())
    return f"Wells held out taught nothing: pairs with them, {count}, judge only. " if count else ""


def _role(contents: Contents) -> str:
    """Say for how many temperatures the calibration counts."""
    count = int(contents.temperatures["method"].eq(NAME).sum())
    if count:
        return f"The one chosen counts for {number(count)} temperatures."
    if NAME in contents.about.methods:
        return "It counts nowhere here: earlier methods of correction.order treat every reading."
    return f"It counts nowhere: {NAME} is not in correction.order. It is shown to compare."


def ladder_sheet(contents: Contents) -> Sheet:
    """List every form of the correction: what it rests on, how it predicts, what became of it."""
    steps = _record(contents).get("steps", {})
    best: dict[str, Any] = next((step for step in steps.values() if step["chosen"]), {})
    model = contents.settings["correction"]["calibration"]["model"]
    terms = [t for t in _TERMS if any(t in s.get("coefficients_k", {}) for s in steps.values())]
    rows = [
        [
            _FORMS[name],
            number(steps[name]["pairs"]),
            number(steps[name]["wells"]),
            number(steps[name].get("left_out_rmse_k"), 1),
            number(steps[name].get("left_out_bias_k"), 1, sign=True),
            *_coefficients(steps[name], terms),
            _fate(steps[name], best, model),
        ]
        for name in STEPS
        if name in steps
    ]
    headers = ["correction", "#pairs", "#wells", "#RMSE, left out (K)", "#bias, left out (K)",
               *(_TERMS[term] for term in terms), "verdict"]  # fmt: skip
    return Sheet("Forms of the correction", headers, rows, _ladder_note(steps, best, terms))


def _ladder_note(steps: dict[str, Any], best: dict[str, Any], terms: list[str]) -> str:
    """Explain what the table holds, and no more."""
    if not best:
        return ""
    note = "Pairs: those that have what the form needs. RMSE: of every form over all pairs, the "
    note += "usual time taken where none is known. "
    note += "Left out: predicted without the pair's own well and log, gross errors cut at three σ; "
    note += "the direct temperatures' own errors are in it. A richer form is taken only if it "
    note += "predicts better by 1 %. Readings scatter about the chosen one by "
    note += f"{number(best['scatter_k'], 1)} K."
    if "depth" in terms:
        note += f" u counts from −1 at {number(best['top_m'])} m, the shallowest pair, to 1 at "
        note += f"{number(best['base_m'])} m, the deepest."
    if "ln_time" in terms:
        note += " Δt: time since circulation."
    if "coefficients_k" in steps[STEPS[-1]]:
        note += " The last form is its parabola times ln(1 + t/Δt)/ln(1 + t/12 h), with t the time "
        note += "of circulation."
    return note


def _coefficients(step: dict[str, Any], terms: list[str]) -> list[str]:
    """Return the coefficients with their sigma, a dash where a form has none."""
    values, stds = step.get("coefficients_k", {}), step.get("coefficients_std_k", {})
    return [
        f"{number(values[term], 1, sign=True)} ± {number(stds[term], 1)}" if term in values else "–"
        for term in terms
    ]


def _fate(step: dict[str, Any], best: dict[str, Any], model: str) -> str:
    """Say what became of a form."""
    if step["chosen"]:
        return "chosen"
    if "refused" in step:
        return f"refused: {step['refused']}"
    if model != "auto":
        return "not asked for"
    better = bool(best) and step["left_out_rmse_k"] < best["left_out_rmse_k"]
    return "better by less than 1 %" if better else "predicts less well"


def own_rows(contents: Contents) -> pd.DataFrame:
    """Return the pairs as the calibration predicts them, those that taught it left out."""
    return contents.calibration[contents.calibration["method"].eq(NAME)]


def other_rows(contents: Contents) -> pd.DataFrame:
    """Return the pairs as other methods of the order treat them, where these count."""
    table = contents.calibration
    return table[table["chosen"] & table["method"].ne(NAME)]


def by_depth_sheet(contents: Contents) -> Sheet:
    """Compare the calibration, and what counts in its place, with the pairs by depth."""
    own, other = own_rows(contents), other_rows(contents)
    depth = own["depth_m"].to_numpy()
    bins = int(np.clip(depth.size // IN_A_BIN, 1, BINS))
    edges = np.unique(np.quantile(depth, np.linspace(0.0, 1.0, bins + 1))) if depth.size else []
    rows = []
    for k, (top, base) in enumerate(itertools.pairwise(edges)):
        last = "both" if k == len(edges) - 2 else "left"
        inside = [part[part["depth_m"].between(top, base, last)] for part in (own, other)]
        rows.append([f"{number(top)} to {number(base)}", *_fares(inside[0]), *_fares(inside[1])])
    if depth.size:
        rows.append(["all", *_fares(own), *_fares(other)])
    headers = ["depth (m)", "#pairs", "#calibration, left out: bias (K)", "#spread (K)",
               "#pairs", "#what counts there: bias (K)", "#spread (K)"]  # fmt: skip
    note = "Median of the residuals with its σ, the pairs taken for independent; spread from the "
    note += "median of the distances to it."
    if other.empty:
        headers, rows = headers[:4], [row[:4] for row in rows]
    return Sheet("Residuals by depth", headers, rows, note)


def _fares(part: pd.DataFrame) -> list[str]:
    """Return count, median with its sigma, and spread of the residuals."""
    error = part["residual_k"].to_numpy()
    if error.size == 0:
        return ["0", "–", "–"]
    middle = float(np.median(error))
    # Of a normal distribution: σ from the median distance, and of the median (textbook).
    spread = 1.4826 * float(np.median(np.abs(error - middle)))
    std = np.sqrt(np.pi / 2.0) * spread / np.sqrt(error.size)
    bias = f"{number(middle, 1, sign=True)} ± {number(std, 1)}" if error.size > 1 else "–"
    return [number(error.size), bias, number(spread, 1) if error.size > 1 else "–"]


def recovery_sheet(contents: Contents) -> Sheet:
    """List what was assumed of conductive recovery, and what these wells say of it."""
    known = contents.sources.set_index("source")
    used = known.index.str.startswith("recovery:").any()
    rows = [
        [
            captions.of_source(name),
            f"{number(row.mean / row.prior_std, 1, sign=True)} ± "
            f"{number(row.std / row.prior_std, 1)}",
            _meaning(name, row.mean, row.std, row.prior_std),
        ]
        for name in _LEARNED
        if used and name in known.index
        for row in known.loc[[name]].itertuples()
    ]
    headers = ["assumed of", "#found, in σ of what was assumed", "that is"]
    note = "Conductive recovery has no calibration of its own: the joint fit of heat flow learns "
    note += "from the same direct temperatures, from neighbours and repeated readings, and takes "
    note += "this out of every temperature it gives. ± 1: nothing was learned."
    return Sheet("What these wells teach of conductive recovery", headers, rows, note)


def _meaning(name: str, mean: float, std: float, prior_std: float) -> str:
    """Say in words what was found of a source."""
    if 1.0 - (std / prior_std) ** 2 < UNLEARNED:
        return "these wells hardly tell: the assumption stands"
    if name == "recovery:mud_capacity":
        change, error = mean / MUD.capacity, std / MUD.capacity
    else:  # of a logarithm
        change, error = float(np.expm1(mean)), float(np.exp(mean) * std)
    if abs(mean) <= std:
        return f"as assumed, to ± {percent(error)}"
    who, more, less = _LEARNED[name]
    word = more if change > 0.0 else less
    return f"{who} {percent(abs(change))} {word} than assumed (± {percent(error)})"


def _record(contents: Contents) -> dict[str, Any]:
    return contents.recovery.get("calibration", {})
