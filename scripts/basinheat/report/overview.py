"""What a reader looks for first: how sure the maps are, where, and which wells stand out."""

from __future__ import annotations

import itertools

import numpy as np
import pandas as pd

from basinheat.delivery.metadata import quantity
from basinheat.mapnames import temperature_name
from basinheat.report import basis, captions
from basinheat.report.contents import Contents
from basinheat.report.sheet import Sheet, number, percent

LOOK_AT = 3.0  # |z| beyond which a well is listed: 3 in 1,000 by chance
LISTED = 25
_DIGITS = {"isotherm": 0}


def key_figures(contents: Contents) -> list[tuple[str, str]]:
    """Return the figures a reader looks for first, as (label, value)."""
    depths = contents.depths_m
    column = temperature_name(depths[len(depths) // 2])
    values, std = contents.maps[column], contents.maps[f"{column}_std"]
    left_out = contents.scores["temperature_left_out"]
    title = quantity(column, contents.about).title
    return [
        ("wells mapped", number(len(contents.heat_flow))),
        ("temperatures used", number(len(contents.temperatures))),
        ("median heat flow", f"{number(contents.maps['heat_flow'].median())} mW/m²"),
        (f"median {title.lower()}", f"{number(values.median())} °C"),
        ("its median σ", f"{number(std.median(), 1)} K"),
        ("typical error, well left out", f"{number(left_out['rmse'], 1)} K"),
        ("left-out errors inside 90 % interval", percent(left_out["coverage_90"])),
    ]


def trust_sheet(contents: Contents) -> Sheet:
    """Say for each depth how much of the map rests on readings, and how sure it is there."""
    maps = contents.maps
    deepest = contents.temperatures.groupby("well")["depth_m"].max()
    rows = []
    for depth in contents.depths_m:
        name = temperature_name(depth)
        below = basis.below_readings(name, contents)
        std = maps[f"{name}_std"].to_numpy()
        rows.append(
            [
                number(depth),
                number((deepest >= depth).sum()),
                percent((~below).mean()),
                number(_median(std[~below]), 1),
                percent(below.mean()),
                number(_median(std[below]), 1),
            ]
        )
    headers = [
        "#depth (m)",
        "#wells that reach it",
        "#of the map: readings as deep nearby",
        "#median σ there (K)",
        "#of the map: below all readings nearby",
        "#median σ there (K)",
    ]
    note = "Below all readings nearby (hatched on the maps), temperature hangs on heat flow and on "
    note += "the assumed rock. Use it as an outlook, not as a measurement."
    return Sheet("By depth: how much of the temperature map rests on readings", headers, rows, note)


def quantiles_sheet(contents: Contents) -> Sheet:
    """Sum up every map: its values over the cells, its uncertainty, its basis."""
    rows = []
    for name in basis.mapped(contents):
        what = quantity(name, contents.about)
        digits = _DIGITS.get(what.family, 1)
        values = contents.maps[name]
        low, middle, high = np.nanpercentile(values.to_numpy(), [10.0, 50.0, 90.0])
        rows.append(
            [
                what.label,
                *(number(value, digits) for value in (low, middle, high)),
                number(contents.maps[f"{name}_std"].median(), digits),
                "K" if what.family == "temperature" else what.unit,
                percent(values.notna().mean()),
                percent(basis.share_below(name, contents)),
            ]
        )
    headers = ["map", "#10 % of cells below", "#median", "#90 % of cells below", "#median σ",
               "unit of σ", "#cells with a value", "#of them below readings"]  # fmt: skip
    note = f"Over {number(len(contents.maps))} cells with a basis. The columns tell how the map "
    note += "varies from place to place; σ tells how sure it is in one place."
    return Sheet("Every map in figures", headers, rows, note)


def by_depth_sheet(contents: Contents) -> Sheet:
    """Score the temperature of wells left out, by depth."""
    table = contents.crossval_temperature
    edges = [0.0, *contents.depths_m, np.inf]
    rows = []
    for top, base in itertools.pairwise(edges):
        part = table[table["depth_m"].between(top, base, inclusive="left")]
        title = f"{top:,.0f} to {base:,.0f}" if np.isfinite(base) else f"below {top:,.0f}"
        rows.append([title, *_errors(part)])
    headers = ["depth (m)", *_ERRORS]
    return Sheet("Temperature of wells left out, by depth", headers, rows)


def by_method_sheet(contents: Contents) -> Sheet:
    """Score the temperature of wells left out, by correction method."""
    groups = contents.crossval_temperature.groupby("method", sort=True)
    rows = [
        [f"{method}: {captions.of_method(str(method))}", *_errors(part)] for method, part in groups
    ]
    note = "A method whose bias stands out against measured formation temperatures is off, or its "
    note += "wells lie where the map is."
    return Sheet(
        "Temperature of wells left out, by correction", ["`correction", *_ERRORS], rows, note
    )


def temperatures_to_look_at(contents: Contents) -> Sheet:
    """List temperatures that the other wells contradict by more than 3 σ."""
    table = contents.crossval_temperature
    z = table["left_out_k"] / table["left_out_std_k"]
    far = _farthest(table.assign(z=z))
    rows = [
        [
            row.well,
            number(row.depth_m),
            number(row.temperature_degc, 1),
            number(row.predicted_degc, 1),
            number(-row.z, 1, sign=True),
            captions.of_method(row.method),
        ]
        for row in far.head(LISTED).itertuples()
    ]
    headers = ["well", "#depth (m)", "#temperature (°C)", "#others say (°C)", "#z", "correction"]
    return Sheet("Wells to look at: temperature", headers, rows, _listed(len(far), len(table)))


def heat_flow_to_look_at(contents: Contents) -> Sheet:
    """List wells whose heat flow the others contradict by more than 3 σ."""
    table = contents.crossval_heat_flow
    far = _farthest(table.assign(z=table["z_score"]))
    methods = contents.temperatures.groupby("well")["method"].agg(lambda names: sorted({*names}))
    rows = [
        [
            row.well,
            number(row.value, 1),
            number(row.predicted, 1),
            number(row.z, 1, sign=True),
            "; ".join(captions.of_method(name) for name in methods.get(row.well, [])),
        ]
        for row in far.head(LISTED).itertuples()
    ]
    headers = ["well", "#heat flow (mW/m²)", "#others say (mW/m²)", "#z", "correction"]
    return Sheet("Wells to look at: heat flow", headers, rows, _listed(len(far), len(table)))


_ERRORS = ["#temperatures", "#bias, prediction − well (K)", "#RMSE (K)",
           "#mean squared error / σ²"]  # fmt: skip


def _errors(part: pd.DataFrame) -> list[str]:
    error = part["left_out_k"].to_numpy()
    z = error / part["left_out_std_k"].to_numpy()
    good = np.isfinite(z)
    if not good.any():
        return ["0", "–", "–", "–"]
    error, z = error[good], z[good]
    return [
        number(good.sum()),
        number(error.mean(), 1, sign=True),
        number(np.sqrt((error**2).mean()), 1),
        number((z**2).mean(), 2),
    ]


def _farthest(table: pd.DataFrame) -> pd.DataFrame:
    far = table[table["z"].abs() > LOOK_AT]
    order = far["z"].abs().sort_values(ascending=False, kind="stable").index
    return far.loc[order]


def _listed(found: int, judged: int) -> str:
    text = f"{number(found)} of {number(judged)} lie more than {LOOK_AT:g} σ from what the other "
    text += "wells say; z is the difference (well less others) over its σ. Look for a slip in the "
    text += "depth, the unit or the time first, then for geology: salt, faults, moving water."
    return text if found <= LISTED else f"{text} The {LISTED} farthest are listed."


def _median(values: np.ndarray) -> float:
    values = values[np.isfinite(values)]
    return float(np.median(values)) if values.size else np.nan
