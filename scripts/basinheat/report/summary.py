"""Numbers and tables of the report."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
import pandas as pd

from basinheat.corrections.registry import METHODS
from basinheat.delivery.metadata import quantity
from basinheat.report.contents import Contents


@dataclass(frozen=True)
class Sheet:
    """A small table of the page: title, headers, rows of text."""

    title: str
    headers: list[str]
    rows: list[list[str]]


def key_figures(contents: Contents) -> list[tuple[str, str]]:
    """Return the figures a reader looks for first, as (label, value)."""
    flow = contents.maps["heat_flow"]
    deepest = max(
        (c for c in contents.maps if c.startswith("temperature_") and not c.endswith("_std")),
        key=lambda c: float(c.removeprefix("temperature_").removesuffix("m")),
    )
    left_out = contents.scores["temperature_left_out"]
    title = quantity(deepest, contents.about).title
    return [
        ("wells mapped", f"{len(contents.heat_flow):,}"),
        ("temperatures used", f"{len(contents.temperatures):,}"),
        ("median heat flow", f"{flow.median():.0f} mW/m²"),
        (f"median {title.lower()}", f"{contents.maps[deepest].median():.0f} °C"),
        ("its median uncertainty", f"± {contents.maps[f'{deepest}_std'].median():.1f} K"),
        ("left-out error of temperature", f"{_number(left_out['rmse'], 1)} K"),
    ]


def rows_sheet(contents: Contents) -> Sheet:
    """Count rows in, kept, merged and refused, by table."""
    ledger = contents.rejected
    kept = {
        "wells": len(contents.wells),
        "readings": len(contents.readings),
        "layers": len(contents.layers),
    }
    merged = ledger["code"].eq("merged")
    rows = []
    for name, count in kept.items():
        here = ledger["table"].eq(name)
        n_merged, n_refused = int((here & merged).sum()), int((here & ~merged).sum())
        late = int((here & ledger["code"].eq("no_method")).sum())
        total = count - late + n_merged + n_refused
        rows.append([name, f"{total:,}", f"{count - late:,}", f"{n_merged:,}", f"{n_refused:,}"])
    return Sheet("Rows in, kept and refused", ["table", "in", "kept", "merged", "refused"], rows)


def reasons_sheet(contents: Contents) -> Sheet:
    """Count refused rows by reason, with an example each."""
    rows = []
    for (table, code), part in contents.rejected.groupby(["table", "code"], sort=True):
        first = part.iloc[0]
        where = f"{first['source_file']}, line {first['source_line']}: {first['sentence']}"
        rows.append([table, code, f"{len(part):,}", where])
    return Sheet("Refused and merged rows by reason", ["table", "code", "rows", "example"], rows)


def flags_sheet(contents: Contents) -> Sheet:
    """Count what was assumed or doubted about wells and readings that were kept."""
    rows = []
    for name, table in (("wells", contents.wells), ("readings", contents.readings)):
        flags = table["flags"].str.split(";").explode()
        counts = flags[flags.ne("") & flags.notna()].value_counts().sort_index()
        rows += [[name, str(code), f"{count:,}"] for code, count in counts.items()]
    return Sheet("Kept, but flagged", ["table", "flag", "rows"], rows)


def methods_sheet(contents: Contents) -> Sheet:
    """List the correction methods that were used, with their source and size."""
    rows = []
    for name, part in contents.temperatures.groupby("method", sort=True):
        method = METHODS[str(name)]
        reference = method.reference
        rows.append(
            [
                method.title,
                f"{len(part):,}",
                f"{part['correction_k'].median():+.1f}",
                f"{np.hypot(part['temperature_std_k'], part['well_std_k']).median():.1f}",
                f"{part['shared_std_k'].median():.1f}",
                f"{reference.author} ({reference.year}), {reference.title}",
            ]
        )
    headers = ["method", "temperatures", "median correction (K)", "own σ (K)", "shared σ (K)",
               "source"]
    return Sheet("Corrections used", headers, rows)


def sources_sheet(contents: Contents) -> Sheet:
    """List the shared sources of error: what was expected and what the data say."""
    rows = [
        [
            row.source,
            f"± {row.prior_std:.3g} {row.unit}",
            f"{row.mean:+.3g} ± {row.std:.3g} {row.unit}",
            f"{row.n_wells:,}",
        ]
        for row in contents.sources.itertuples()
    ]
    return Sheet(
        "Shared sources of error", ["source", "expected", "found", "wells that carry it"], rows
    )


def scores_sheet(contents: Contents) -> Sheet:
    """List the scores of cross-validation."""
    titles = {
        "heat_flow_left_out": "heat flow, well left out (mW/m²)",
        "heat_flow_block_left_out": "heat flow, block of wells left out (mW/m²)",
        "temperature_closure": "temperature, well in the maps (K)",
        "temperature_left_out": "temperature, well left out (K)",
        "temperature_holdout": "temperature, wells held out (K)",
    }
    rows = [
        [
            title,
            *(_number(contents.scores[key].get(name), 2) for name in ("bias", "rmse", "msdr")),
            *(
                _percent(contents.scores[key].get(f"coverage_{share}"))
                for share in (50, 80, 90, 95)
            ),
        ]
        for key, title in titles.items()
        if key in contents.scores
    ]
    headers = ["what", "bias", "RMSE", "mean squared standardised error", "in 50 %", "in 80 %",
               "in 90 %", "in 95 %"]
    return Sheet("Cross-validation", headers, rows)


def baselines_sheet(contents: Contents) -> Sheet:
    """Compare with simple predictors of heat flow."""
    ours = contents.scores["heat_flow_left_out"]["rmse"]
    others = contents.scores["heat_flow_baselines_rmse"]
    rows = [["this map", _number(ours, 2)]]
    rows += [[name.replace("_", " "), _number(value, 2)] for name, value in others.items()]
    return Sheet("Heat flow of wells left out, against plain predictors",
                 ["predictor", "RMSE (mW/m²)"], rows)


def scales_sheet(contents: Contents) -> Sheet:
    """List by how much stated variances had to be scaled, with a word where it is a lot."""
    rows = [
        [name, f"{scale:.2f}", "" if 0.5 <= scale <= 2.0 else "outside 0.5 to 2: look at these"]
        for name, scale in contents.heat_flow_model["variance_scales"].items()
    ]
    return Sheet("Scale on the stated variance", ["readings", "scale", ""], rows)


def origins_sheet(contents: Contents) -> Sheet:
    """Count temperatures by what their thermal resistance rests on."""
    counts = contents.resistances["origin"].value_counts().sort_index()
    rows = [[str(origin), f"{count:,}"] for origin, count in counts.items()]
    return Sheet("What the conductivity rests on", ["origin", "temperatures"], rows)


def covariance_sheet(contents: Contents) -> Sheet:
    """Describe the covariance of heat flow."""
    covariance = contents.heat_flow_model["covariance"]
    rows = [
        ["model", str(covariance["model"])],
        ["sill", f"{covariance['sill']:.1f} mW²/m⁴"],
        ["practical range (95 %)", f"{covariance['range_m'] / 1000:.0f} km"],
        ["micro-scale nugget", f"{covariance['nugget']:.2f} mW²/m⁴"],
    ]
    return Sheet("Covariance of heat flow", ["", ""], rows)


def versions_sheet(versions: dict[str, str]) -> Sheet:
    """List the versions of what computed the maps."""
    rows = [[name, version] for name, version in sorted(versions.items())]
    return Sheet("Versions", ["package", "version"], rows)


def _number(value: Any, digits: int) -> str:
    return "–" if value is None or not np.isfinite(value) else f"{value:.{digits}f}"


def _percent(value: Any) -> str:
    return "–" if value is None or pd.isna(value) else f"{100 * value:.0f} %"
