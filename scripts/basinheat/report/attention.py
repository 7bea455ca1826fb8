"""What needs a look before the maps are used: found by rule from the tables."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

import numpy as np

from basinheat.delivery.metadata import quantity
from basinheat.report import basis, captions
from basinheat.report.contents import Contents
from basinheat.report.overview import LOOK_AT
from basinheat.report.sheet import number, percent

# When a number is worth a word. Common practice, no source, where none is given.
SCALES = (0.5, 2.0)  # of stated variances
HONEST = (0.7, 1.4)  # mean squared standardised error: as accepted for kriging, common practice
FEW_WELLS = 50  # fewer do not tell the nugget from the range (common practice)
BIAS_K, BIAS_ERRORS = 1.0, 3.0  # a bias of so many kelvin that is so many standard errors away
EXTRAPOLATED = 0.25  # share of a map's cells
MOVED = 2.0  # prior standard deviations between what was expected of a shared source and found
REFUSED = 0.1  # share of rows
UNLAYERED = 0.5  # share of temperatures without a conductivity of their own layers


@dataclass(frozen=True)
class Point:
    """Something to look at: in words, and the anchor of the part of the page that tells more."""

    text: str
    anchor: str


def points(contents: Contents) -> list[Point]:
    """Return what needs a look, the gravest first."""
    rules = (_few_wells, _biases, _intercepts, _honesty, _baselines, _scales, _extrapolated,
             _sources, _refused, _rocks, _wells)  # fmt: skip
    return [point for rule in rules for point in rule(contents)]


def unseen(contents: Contents) -> str:
    """Say what no rule can see."""
    if contents.holdout:
        return ""
    return (
        "No wells were held out (validation.holdout), so a bias that all wells share cannot show: "
        "hold out equilibrium logs, if there are any."
    )


def _few_wells(contents: Contents) -> Iterator[Point]:
    count = len(contents.heat_flow)
    if count < FEW_WELLS:
        yield Point(
            f"Only {count} wells carry the maps. The covariance is poorly known, and with it every "
            "σ between wells.",
            "heat",
        )


def _biases(contents: Contents) -> Iterator[Point]:
    for key in ("temperature_holdout", "temperature_left_out", "temperature_closure"):
        score = contents.scores.get(key)
        if not score or not score["n"]:
            continue
        spread = np.sqrt(max(score["rmse"] ** 2 - score["bias"] ** 2, 0.0))
        if abs(score["bias"]) > max(BIAS_K, BIAS_ERRORS * spread / np.sqrt(score["n"])):
            title, _, difference = captions.SCORES[key]
            yield Point(
                f"Bias in {title}: {number(score['bias'], 1, sign=True)} K ({difference}).", "proof"
            )


def _intercepts(contents: Contents) -> Iterator[Point]:
    final = contents.intercepts[contents.intercepts["group"].eq("final")]
    for row in final[final["alarm"].ne("")].itertuples():
        yield Point(
            f"The regional line of the mud-cooled temperatures is {row.alarm}: a bias that does "
            "not grow with depth, or rock that is wrong at shallow depth.",
            "compared",
        )


def _honesty(contents: Contents) -> Iterator[Point]:
    for key, (title, _, _) in captions.SCORES.items():
        ratio = (contents.scores.get(key) or {}).get("msdr")
        if ratio is None or key == "temperature_closure":
            continue  # wells in their own map lie closer than σ says
        if not HONEST[0] <= ratio <= HONEST[1]:
            word = "too small" if ratio > 1.0 else "too large"
            yield Point(
                f"The stated σ is {word} for {title}: squared errors are {number(ratio, 2)} times "
                "what it says.",
                "proof",
            )


def _baselines(contents: Contents) -> Iterator[Point]:
    ours = contents.scores["heat_flow_left_out"]["rmse"]
    for name, other in sorted(contents.scores["heat_flow_baselines_rmse"].items()):
        if ours is not None and other is not None and other <= ours:
            yield Point(
                f"A plain predictor ({name.replace('_', ' ')}) foretells the heat flow of wells "
                f"left out as well as the map: RMSE {number(other, 2)} against {number(ours, 2)} "
                "mW/m².",
                "proof",
            )


def _scales(contents: Contents) -> Iterator[Point]:
    for name, scale in contents.heat_flow_model["variance_scales"].items():
        if not SCALES[0] <= scale <= SCALES[1]:
            yield Point(
                f"Stated variances had to be scaled by {number(scale, 2)}: "
                f"{captions.of_class(name)}.",
                "compared",
            )


def _extrapolated(contents: Contents) -> Iterator[Point]:
    for name in basis.mapped(contents):
        share = basis.share_below(name, contents)
        if share > EXTRAPOLATED:
            title = quantity(name, contents.about).title
            yield Point(
                f"{title}: {percent(share)} of the mapped cells lie below every reading nearby.",
                "trust",
            )


def _sources(contents: Contents) -> Iterator[Point]:
    for row in contents.sources.itertuples():
        moved = row.mean / row.prior_std if row.prior_std > 0 else 0.0
        if abs(moved) > MOVED:
            yield Point(
                f"The wells contradict what was assumed of {captions.of_source(row.source)}: "
                f"{number(moved, 1, sign=True)} of its standard deviations.",
                "heat",
            )


def _refused(contents: Contents) -> Iterator[Point]:
    for name, kept in (("wells", contents.wells), ("readings", contents.readings)):
        lines = contents.rejected[contents.rejected["table"].eq(name)]
        share = lines["code"].ne("merged").sum() / max(len(kept) + len(lines), 1)
        if share > REFUSED:
            yield Point(f"{percent(share)} of the {name} were refused.", "data")


def _rocks(contents: Contents) -> Iterator[Point]:
    origin = contents.resistances["origin"]
    share = (~origin.isin(["measured", "catalogue"])).mean() if len(origin) else 0.0
    if share > UNLAYERED:
        yield Point(
            f"{percent(share)} of the temperatures lie in wells without rock layers of their own.",
            "heat",
        )


def _wells(contents: Contents) -> Iterator[Point]:
    table: Any = contents.crossval_temperature
    far = (table["left_out_k"] / table["left_out_std_k"]).abs() > LOOK_AT
    flow = contents.crossval_heat_flow
    wells = {*table["well"][far], *flow["well"][flow["z_score"].abs() > LOOK_AT]}
    if wells:
        which = "1 well stands" if len(wells) == 1 else f"{number(len(wells))} wells stand"
        yield Point(f"{which} more than {LOOK_AT:g} σ apart from the others.", "look")
