"""Tables of the report on data, corrections, heat flow and validation."""

from __future__ import annotations

from typing import Any

import numpy as np
import pandas as pd

from basinheat.report import captions
from basinheat.report.contents import Contents
from basinheat.report.sheet import Sheet, number, percent, words

# A depth that stands for none: the trend of these readings has no depth below which it is straight.
_WITHOUT_LIMIT = 1e5
# What is told of what the corrections learned: words, digits, with a sign or not, unit.
_LEARNED = {
    "raw_trend/surface_gradient_k_km": ("rise of raw readings, at the surface", 1, False, "K/km"),
    "raw_trend/bend_k_km2": ("its change with depth", 1, True, "K/km per km"),
    "raw_trend/straight_below_m": ("straight below", 0, False, "m"),
    "conductive_recovery/expected_gradient_k_km": (
        "gradient expected at the sets, median", 1, False, "K/km",
    ),
    "conductive_recovery/law/offset_k": (
        "cooling of the hole while mud circulates: fixed part", 1, True, "K",
    ),
    "conductive_recovery/law/slope": (
        "its part in proportion to the rock's rise above the surface", 2, False, "K per K",
    ),
    "conductive_recovery/law/scatter": (
        "its scatter from set to set, for a usual rise", 2, False, "K per K",
    ),
    "conductive_recovery/law_level_std_ln": (
        "σ of the expected cooling, as a share of it", 2, False, "1",
    ),
    "conductive_recovery/law/noise": ("errors of readings, in their stated σ", 1, False, "1"),
    "conductive_recovery/sets_that_taught": (
        "sets of repeated readings that taught this", 0, False, "sets",
    ),
    "conductive_recovery/sets_contradicting": (
        "sets left out, their readings contradict each other", 0, False, "sets",
    ),
    "conductive_recovery/sets_with_all_times": ("sets with all times noted", 0, False, "sets"),
    "conductive_recovery/circulation_times_noted": (
        "times of circulation noted", 0, False, "times",
    ),
    "conductive_recovery/circulation_median_h": ("usual time of circulation", 1, False, "h"),
    "conductive_recovery/circulation_factor": (
        "its spread, one σ up or down: a factor of", 1, False, "1",
    ),
}  # fmt: skip


def rows_sheet(contents: Contents) -> Sheet:
    """Count rows in, kept, merged and refused, by table."""
    early, late = contents.rejected, contents.rejected_later
    kept = {"wells": contents.wells, "readings": contents.readings, "layers": contents.layers}
    rows = []
    for name, table in kept.items():
        lines = early.loc[early["table"].eq(name), "code"]
        merged, refused = lines.eq("merged").sum(), lines.ne("merged").sum()
        later = late["table"].eq(name).sum()
        counts = (len(table) + len(lines), len(table) - later, merged, refused + later)
        rows.append([name, *(number(count) for count in counts)])
    headers = ["table", "#rows in", "#kept", "#merged", "#refused"]
    return Sheet("Rows in, kept and refused", headers, rows)


def reasons_sheet(contents: Contents) -> Sheet:
    """Count refused rows by reason, with an example each."""
    ledger = pd.concat([contents.rejected, contents.rejected_later], ignore_index=True)
    rows = []
    for (table, code), part in ledger.groupby(["table", "code"], sort=True):
        first = part.sort_values(["source_file", "source_line"], kind="stable").iloc[0]
        where = f"{first['source_file']}, line {first['source_line']}: "
        example = (where if first["source_file"] else "") + first["sentence"]
        rows.append([table, words(code), number(len(part)), example])
    note = "values: a cell was dropped, its row is kept. All rows: rejected.csv."
    headers = ["table", "reason", "#rows", "example"]
    return Sheet("Refused and merged rows, by reason", headers, rows, note)


def flags_sheet(contents: Contents) -> Sheet:
    """Count what was assumed or doubted about rows that were kept."""
    rows = []
    for name in ("wells", "readings", "temperatures"):
        counts = _counted(getattr(contents, name)["flags"])
        rows += [[name, captions.of_flag(code), number(count)] for code, count in counts.items()]
    return Sheet("Kept, but assumed or doubted", ["table", "flag", "#rows"], rows)


def passed_over_sheet(contents: Contents) -> Sheet:
    """Count why methods that come earlier in the order were not used."""
    counts = _counted(contents.temperatures["passed_over"])
    rows = []
    for reason, count in counts.items():
        method, _, why = reason.partition(": ")
        rows.append([f"{method}: {captions.of_method(method)}", why, number(count)])
    headers = ["`method", "not used, because it", "#temperatures"]
    return Sheet("Why an earlier method was passed over", headers, rows)


def learned_sheet(contents: Contents) -> Sheet:
    """List what the corrections learned from these wells; calibration has a part of its own."""
    found = dict(_flat(contents.recovery))
    rows = [
        [text, number(found[path], digits, sign=sign), unit]
        for path, (text, digits, sign, unit) in _LEARNED.items()
        if path in found and abs(found[path]) < _WITHOUT_LIMIT
    ]
    headers = ["quantity", "#value", "unit"]
    return Sheet("What the corrections learned from these wells", headers, rows)


def sources_sheet(contents: Contents) -> Sheet:
    """List the shared sources of error: what was expected and what the data say."""
    rows = [
        [
            captions.of_source(row.source),
            "ln" if row.unit.startswith("ln") else row.unit,
            f"0 ± {row.prior_std:.3g}",
            f"{row.mean:+.2g} ± {row.std:.2g}".replace("-", "−"),
            number(row.mean / row.prior_std, 1, sign=True) if row.prior_std > 0 else "–",
            percent(1.0 - (row.std / row.prior_std) ** 2) if row.prior_std > 0 else "–",
            number(row.n_wells),
        ]
        for row in contents.sources.itertuples()
    ]
    headers = ["source", "unit", "#expected", "#found", "#moved (σ)", "#variance resolved",
               "#wells that carry it"]  # fmt: skip
    note = "One amount each for the whole map, found by all wells together and taken out of the "
    note += "maps; what remains unknown of it is in every σ and does not shrink with more wells of "
    note += "the same kind. ln: relative change."
    return Sheet("Shared sources of error", headers, rows, note)


def origins_sheet(contents: Contents) -> Sheet:
    """Count temperatures by what their thermal resistance rests on."""
    counts = contents.resistances["origin"].value_counts().sort_index()
    rows = [[words(str(origin)), number(count)] for origin, count in counts.items()]
    return Sheet("What the conductivity above a temperature rests on",
                 ["mostly", "#temperatures"], rows)  # fmt: skip


def rocks_sheet(contents: Contents) -> Sheet:
    """List the conductivity of the rocks that occur, with its source."""
    rocks = contents.rocks
    place = {f"conductivity:{name}": i for i, name in enumerate(rocks.names)}
    rows = []
    for row in contents.sources.itertuples():
        if row.source in place:
            i = place[row.source]
            k = rocks.conductivity_w_mk[i]
            found = k * np.exp(row.mean)
            rows.append(
                [
                    words(rocks.names[i]),
                    number(k, 2),
                    percent(row.prior_std),
                    number(found, 2),
                    percent(row.std),
                    rocks.sources[i],
                ]
            )
    headers = ["rock", "#catalogue, 25 °C (W/(m K))", "#its σ", "#after the fit", "#its σ",
               "source"]  # fmt: skip
    note = "Rock matrix, pore water added by porosity (the whole rock where the catalogue gives no "
    note += "porosity). After the fit: the catalogue's value with the shared change found above; "
    note += "it stands for all that scales the resistance of that rock."
    return Sheet("Conductivity of the rocks", headers, rows, note)


def covariance_sheet(contents: Contents) -> Sheet:
    """Describe the covariance of heat flow and of conductivity."""
    rows = [_model("heat flow", "mW²/m⁴", contents.heat_flow_model["covariance"], 1)]
    for group in contents.structure_model["groups"]:
        name = f"ln conductivity, {group['top_m']:,.0f} to {group['base_m']:,.0f} m"
        rows.append(_model(name, "", group["covariance"], 4))
    headers = ["of", "model", "#sill", "#micro-scale nugget", "unit", "#practical range, 95 % (km)"]
    return Sheet("Covariance models", headers, rows)


def scores_sheet(contents: Contents) -> Sheet:
    """List the scores of cross-validation."""
    rows = []
    for key, (title, unit, difference) in captions.SCORES.items():
        score = contents.scores.get(key)
        if score:
            inside = (score.get(f"coverage_{share}") for share in (50, 80, 90, 95))
            rows.append(
                [
                    title,
                    number(score["n"]),
                    unit,
                    difference,
                    number(score["bias"], 2, sign=True),
                    number(score["rmse"], 2),
                    number(score["msdr"], 2),
                    *(percent(share) for share in inside),
                ]
            )
    headers = ["what", "#n", "unit", "error", "#bias", "#RMSE", "#mean squared error / σ²",
               "#in 50 %", "#in 80 %", "#in 90 %", "#in 95 %"]  # fmt: skip
    return Sheet("Cross-validation", headers, rows)


def baselines_sheet(contents: Contents) -> Sheet:
    """Compare with plain predictors of heat flow."""
    ours = contents.scores["heat_flow_left_out"]["rmse"]
    others = sorted(contents.scores["heat_flow_baselines_rmse"].items())
    rows = [["this map", number(ours, 2)]]
    rows += [[words(name), number(value, 2)] for name, value in others]
    return Sheet("Heat flow of wells left out, against plain predictors",
                 ["predictor", "#RMSE (mW/m²)"], rows)  # fmt: skip


def versions_sheet(versions: dict[str, str]) -> Sheet:
    """List the versions of what computed the maps."""
    rows = [[name, version] for name, version in sorted(versions.items())]
    return Sheet("Versions", ["package", "version"], rows)


def _counted(lists: pd.Series) -> pd.Series:
    """Count the entries of ;-joined lists."""
    entries = lists.str.split(";").explode()
    return entries[entries.ne("") & entries.notna()].value_counts().sort_index()


def _model(name: str, unit: str, covariance: dict[str, Any], digits: int) -> list[str]:
    sill, nugget = (number(covariance[key], digits) for key in ("sill", "nugget"))
    return [name, str(covariance["model"]), sill, nugget, unit, number(covariance["range_m"] / 1e3)]


def _flat(record: dict[str, Any], path: str = "") -> list[tuple[str, float]]:
    """Return the numbers of a nested record with the names that lead to each."""
    found = []
    for key, value in record.items():
        if isinstance(value, dict):
            found += _flat(value, f"{path}{key}/")
        elif isinstance(value, int | float):
            found.append((f"{path}{key}", float(value)))
    return found
