"""Tables of the report on data, corrections, heat flow and validation."""

from __future__ import annotations

from typing import Any

import numpy as np
import pandas as pd

from basinheat.corrections.registry import METHODS
from basinheat.report import captions
from basinheat.report.contents import Contents
from basinheat.report.sheet import Sheet, number, percent, words


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
        rows += [[name, words(code), number(count)] for code, count in counts.items()]
    return Sheet("Kept, but assumed or doubted", ["table", "flag", "#rows"], rows)


def methods_sheet(contents: Contents) -> Sheet:
    """List the correction methods that were used, with their size and source."""
    rows = []
    for name, part in contents.temperatures.groupby("method", sort=True):
        reference = METHODS[str(name)].reference
        own = np.hypot(part["temperature_std_k"], part["well_std_k"])
        rows.append(
            [
                captions.of_method(str(name)),
                number(len(part)),
                number(part["correction_k"].median(), 1, sign=True),
                number(own.median(), 1),
                number(part["shared_std_k"].median(), 1),
                f"{reference.author} ({reference.year}), {reference.title}. "
                f"Numbers: {reference.status}",
            ]
        )
    headers = ["method", "#temperatures", "#median correction (K)", "#median own σ (K)",
               "#median shared σ (K)", "source, and how its numbers came here"]  # fmt: skip
    return Sheet("Corrections used", headers, rows)


def passed_over_sheet(contents: Contents) -> Sheet:
    """Count why methods that come earlier in the order were not used."""
    counts = _counted(contents.temperatures["passed_over"])
    rows = []
    for reason, count in counts.items():
        method, _, why = reason.partition(": ")
        rows.append([captions.of_method(method), why, number(count)])
    headers = ["method", "not used, because it", "#temperatures"]
    return Sheet("Why an earlier method was passed over", headers, rows)


def learned_sheet(contents: Contents) -> Sheet:
    """List what the corrections learned from these wells."""
    rows = [[" / ".join(words(part) for part in path), value] for path, value in
            _flat(contents.recovery)]  # fmt: skip
    return Sheet("What the corrections learned from these wells", ["quantity", "#value"], rows)


def scales_sheet(contents: Contents) -> Sheet:
    """List by how much stated variances had to be scaled."""
    counts = contents.temperatures["variance_class"].value_counts()
    rows = [
        [captions.of_class(name), number(counts.get(name, 0)), number(scale, 2)]
        for name, scale in contents.heat_flow_model["variance_scales"].items()
    ]
    note = "1: their scatter among neighbours is as their σ says. Already in every σ of this page."
    headers = ["readings", "#temperatures", "#scale"]
    return Sheet("Scale on the stated variance", headers, rows, note)


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


def _flat(record: dict[str, Any], path: tuple[str, ...] = ()) -> list[tuple[tuple[str, ...], str]]:
    """Return the numbers of a nested record with the names that lead to each."""
    found = []
    for key, value in record.items():
        here = (*path, str(key))
        if isinstance(value, dict):
            found += _flat(value, here)
        else:
            found.append((here, f"{value:.4g}" if isinstance(value, float) else str(value)))
    return found
