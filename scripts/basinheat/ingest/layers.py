"""Layers: true vertical depths below ground, one level of the rock column."""

from __future__ import annotations

import numpy as np
import pandas as pd

from basinheat import trajectory
from basinheat.conductivity.heat_production import from_elements, from_gamma_ray
from basinheat.ingest import depths
from basinheat.ingest.readings import DEEPEST_M
from basinheat.ingest.tops import with_bases
from basinheat.ingest.unreadable import drop_unit_unknown, refuse_unreadable
from basinheat.ledger import Ledger
from basinheat.readers import InputTable
from basinheat.tables import Layers

# Tops and bases noted this far apart are the same surface (rounding to feet or whole metres).
OVERLAP_M = 0.5
# Largest conductivity of a rock (pure quartzite, salt) and heat production (uranium-rich granite),
# with room (common practice, no source).
OPTIONAL = {
    "conductivity": (0.05, 15.0),
    "conductivity_std": (0.0, 10.0),
    "porosity": (0.0, 1.0),
    "net_to_gross": (0.0, 1.0),
    "heat_production": (0.0, 50.0),
    "gamma_ray": (0.0, 2000.0),
    "uranium": (0.0, 1000.0),
    "thorium": (0.0, 1000.0),
    "potassium": (0.0, 15.0),
    "density": (900.0, 5500.0),
    "dip": (0.0, 90.0),
}
# Of sediment, where layers state uranium, thorium and potassium but no density (common practice).
DENSITY_KG_M3 = 2400.0


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
    table = _below_ground(table, ledger, wells, surveys)
    frame = table.frame
    table = ledger.refuse(
        table,
        ~(frame["base_m"] > np.maximum(frame["top_m"], 0.0)).to_numpy(),
        "base",
        "no_thickness",
        "the layer from {top:g} to {base:g} m has no thickness below ground.",
    )
    table.frame["top_m"] = np.maximum(table.frame["top_m"], 0.0)
    table = _one_level(table, ledger)
    frame = table.frame
    return Layers.conform(
        pd.DataFrame(
            {
                "well": frame["well"],
                "top_m": frame["top_m"],
                "base_m": frame["base_m"],
                "lithology": frame["lithology"],
                "formation": frame["formation"],
                "net_to_gross": frame["net_to_gross"],
                "conductivity_w_mk": frame["conductivity"],
                "conductivity_std_w_mk": frame["conductivity_std"],
                "porosity": frame["porosity"],
                "heat_production_uw_m3": _heat_production(frame),
                "dip_deg": frame["dip"],
                "source_file": frame["source_file"],
                "source_line": frame["source_line"],
            }
        )
    )


def _heat_production(frame: pd.DataFrame) -> pd.Series:
    """Return heat production in uW/m3: as told, else from the elements, else from gamma ray."""
    density = frame["density"].fillna(DENSITY_KG_M3)
    elements = from_elements(density, frame["uranium"], frame["thorium"], frame["potassium"])
    told: pd.Series = frame["heat_production"]
    told = told.where(told.notna(), elements)
    return told.where(told.notna(), from_gamma_ray(frame["gamma_ray"]))


def _below_ground(
    table: InputTable, ledger: Ledger, wells: pd.DataFrame, surveys: trajectory.Surveys
) -> InputTable:
    """Add ``top_m, base_m`` below ground or sea floor, the bases of tops among them."""
    frame = table.frame
    well = frame["row"].to_numpy()
    ground = wells["ground_elevation_m"].to_numpy(float)[well]
    reference = frame["depth_reference"].to_numpy(object)
    measured = reference == "measured"
    sign = np.where(reference == "subsea_elevation", -1.0, 1.0)
    frame["_ground"] = np.where(measured, 0.0, ground)
    for name in ("top", "base"):
        noted = frame[name].to_numpy(float)
        along = _vertical(noted, well, wells, surveys)
        frame[f"{name}_m"] = np.where(measured, along, ground + sign * noted)
    sentence = "the {top:g} m count from sea level, and the well has no ground elevation."
    floating = frame["_ground"].isna().to_numpy()
    table = ledger.refuse(table, floating, "top", "no_depth", sentence)
    well = table.frame["row"].to_numpy()
    total = wells["total_depth_m"].to_numpy(float)[well]
    table, without = with_bases(table, total, _vertical(total, well, wells, surveys))
    sentence = "the deepest top of the well, at {top:g} m, has no total depth below it."
    table = ledger.refuse(table, without, "top", "no_base", sentence)
    frame = table.frame
    deep = frame["base_m"].to_numpy(float) > DEEPEST_M
    sentence = f"the base at {{base_m:.0f}} m is deeper than any hole ({DEEPEST_M:g} m)."
    return ledger.refuse(table, deep, "base", "depth_impossible", sentence)


def _vertical(
    measured_m: np.ndarray, well: np.ndarray, wells: pd.DataFrame, surveys: trajectory.Surveys
) -> np.ndarray:
    """Return true vertical depths below ground or sea floor of depths along holes."""
    nothing = np.full(len(measured_m), np.nan)
    return depths.vertical(measured_m, nothing, well, wells, surveys).depth_m


def _complete(table: InputTable, ledger: Ledger) -> InputTable:
    """Refuse layers without depths or rock; drop measured values that can't be."""
    for name in ("top", "base"):
        table = refuse_unreadable(table, ledger, name, bounds=True)
        blank = table.frame[name].isna()
        if name == "base":
            blank &= table.frame["shape"] == "intervals"
        table = ledger.refuse(table, blank.to_numpy(), name, "no_depth", f"the {name} is blank.")
    for name, (lowest, highest) in OPTIONAL.items():
        drop_unit_unknown(table, ledger, name)
        values = table.frame[name]
        ledger.drop(
            table,
            (table.frame[f"wrong:{name}"] | (values < lowest) | (values > highest)).to_numpy(),
            name,
            f"{name}_dropped",
            f'"{{written}}" in column "{{header}}" must be a number from {lowest:g} to '
            f"{highest:g} in the unit of the tables; the layer is used without it.",
        )
    named = (table.frame["lithology"] != "") | (table.frame["formation"] != "")
    no_rock = (~named & table.frame["conductivity"].isna()).to_numpy()
    return ledger.refuse(
        table, no_rock, "lithology", "no_rock", "the layer states neither rock nor conductivity."
    )


def _one_level(table: InputTable, ledger: Ledger) -> InputTable:
    """Refuse layers that lie over others of their well, the coarser ones first."""
    while True:
        frame = table.frame
        thickness = frame["base_m"] - frame["top_m"]
        keys = ["row", "top_m", "_thin", "lithology", "formation", "source_file", "source_line"]
        frame = frame.assign(_thin=-thickness).sort_values(keys, kind="stable")
        table = table.with_frame(frame.drop(columns="_thin").reset_index(drop=True))
        frame = table.frame
        same = frame["row"] == frame["row"].shift(-1)
        overlap = same & (frame["base_m"] > frame["top_m"].shift(-1) + OVERLAP_M)
        if not overlap.any():
            # What is left of overlaps is rounding: the next layer's top is the truth.
            below = frame["top_m"].shift(-1).where(same, np.inf)
            frame["base_m"] = np.minimum(frame["base_m"], below)
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
