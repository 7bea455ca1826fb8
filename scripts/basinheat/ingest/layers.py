"""Layers: true vertical depths below ground, one level of the rock column."""

from __future__ import annotations

import numpy as np
import pandas as pd

from basinheat import trajectory
from basinheat.conductivity.heat_production import from_gamma_ray
from basinheat.ingest import depths
from basinheat.ledger import Ledger
from basinheat.readers import InputTable
from basinheat.tables import Layers

OVERLAP_M = 0.5  # tops and bases noted this far apart are the same surface
# Largest conductivity of a rock (pure quartzite, salt) and heat production (uranium-rich granite),
# with room (common practice, no source).
OPTIONAL = {
    "conductivity": (0.05, 15.0),
    "conductivity_std": (0.0, 10.0),
    "porosity": (0.0, 1.0),
    "heat_production": (0.0, 50.0),
    "gamma_ray": (0.0, 2000.0),
}


def prepare_layers(
    table: InputTable, ledger: Ledger, wells: pd.DataFrame, surveys: trajectory.Surveys
) -> pd.DataFrame:
    """Return the layers below ground or sea floor, none of them overlapping.

    Where a layer contains others (a group its formations), the finer ones stay.

    Parameters
    ----------
    table : InputTable
        Layers of known wells.
    ledger : Ledger
        Takes refused rows.
    wells : DataFrame
        With ``height_m, height_std_m``.
    surveys : trajectory.Surveys
        ``hole`` counts rows of ``wells``.

    Returns
    -------
    DataFrame
        ``tables.Layers``.
    """
    table = _complete(table, ledger)
    frame = table.frame
    well = frame["row"].to_numpy()
    nothing = np.full(len(frame), np.nan)
    for name in ("top", "base"):
        measured = frame[name].to_numpy(float)
        frame[f"{name}_m"] = depths.vertical(measured, nothing, well, wells, surveys).depth_m
    table = ledger.refuse(
        table,
        ~(frame["base_m"] > np.maximum(frame["top_m"], 0.0)).to_numpy(),
        "base",
        "no_thickness",
        "the layer from {top:g} to {base:g} m below the datum has no thickness below ground.",
    )
    table.frame["top_m"] = np.maximum(table.frame["top_m"], 0.0)
    table = _one_level(table, ledger)
    frame = table.frame
    told = frame["heat_production"]
    heat = told.where(told.notna(), from_gamma_ray(frame["gamma_ray"]))
    return Layers.conform(
        pd.DataFrame(
            {
                "well": frame["well"],
                "top_m": frame["top_m"],
                "base_m": frame["base_m"],
                "lithology": frame["lithology"],
                "conductivity_w_mk": frame["conductivity"],
                "conductivity_std_w_mk": frame["conductivity_std"],
                "porosity": frame["porosity"],
                "heat_production_uw_m3": heat,
            }
        )
    )


def _complete(table: InputTable, ledger: Ledger) -> InputTable:
    """Refuse layers without depths or rock; drop measured values that can't be."""
    for name in ("top", "base"):
        table = ledger.refuse(
            table,
            table.frame[f"wrong:{name}"].to_numpy(),
            name,
            "not_a_number",
            '"{written}" in column "{header}" is not a number.',
        )
        table = ledger.refuse(
            table, table.frame[name].isna().to_numpy(), name, "no_depth", f"the {name} is blank."
        )
    for name, (lowest, highest) in OPTIONAL.items():
        values = table.frame[name]
        ledger.drop(
            table,
            (table.frame[f"wrong:{name}"] | (values < lowest) | (values > highest)).to_numpy(),
            name,
            f"{name}_dropped",
            f'"{{written}}" in column "{{header}}" must be a number from {lowest:g} to '
            f"{highest:g} in the unit of the tables; the layer is used without it.",
        )
    no_rock = ((table.frame["lithology"] == "") & table.frame["conductivity"].isna()).to_numpy()
    return ledger.refuse(
        table, no_rock, "lithology", "no_rock", "the layer states neither rock nor conductivity."
    )


def _one_level(table: InputTable, ledger: Ledger) -> InputTable:
    """Refuse layers that lie over others of their well, the coarser ones first."""
    while True:
        frame = table.frame
        thickness = frame["base_m"] - frame["top_m"]
        keys = ["row", "top_m", "_thin", "lithology", "source_file", "source_line"]
        frame = frame.assign(_thin=-thickness).sort_values(keys, kind="stable")
        table = table.with_frame(frame.drop(columns="_thin").reset_index(drop=True))
        frame = table.frame
        same = frame["row"] == frame["row"].shift(-1)
        overlap = same & (frame["base_m"] > frame["top_m"].shift(-1) + OVERLAP_M)
        if not overlap.any():
            return table
        contains = overlap & (frame["base_m"] >= frame["base_m"].shift(-1) - OVERLAP_M)
        sentence = "it contains thinner layers of the well from {top:g} m on, which are used."
        if contains.any():
            table = ledger.refuse(table, contains.to_numpy(), "top", "layer_overlap", sentence)
            continue
        second = overlap.shift(1, fill_value=False).to_numpy(bool)
        # Of a run of overlaps only the first is judged: without it the next may fit.
        second = second & ~np.r_[False, second[:-1]]
        sentence = "its top at {top:g} m lies above the base of the layer before; mend one of them."
        table = ledger.refuse(table, second, "top", "layer_overlap", sentence)
