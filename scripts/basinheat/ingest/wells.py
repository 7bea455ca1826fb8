"""Wells: on the map, one row each, with the height of their depth datum."""

from __future__ import annotations

import os
from pathlib import Path

import numpy as np
import pandas as pd

from basinheat import datums, rasters, surface
from basinheat.flags import mark
from basinheat.ingest.conflicts import HEADER, one_row_a_well
from basinheat.ingest.decisions import Decisions
from basinheat.ingest.identity import Identity, identity_of, joined_wells
from basinheat.ingest.places import placed, with_crs, without_owner, without_place
from basinheat.ingest.unreadable import drop_unit_unknown, refuse_unreadable
from basinheat.ledger import Ledger
from basinheat.readers import InputTable
from basinheat.screening import screen_locations
from basinheat.settings.model import Settings
from basinheat.settings.wells import ColumnSurface
from basinheat.tables import Wells

# Highest and deepest ground on Earth, with room for rig floors.
LOWEST_M, HIGHEST_M = -11_500.0, 9_000.0
OPTIONAL = {
    "ground_elevation": (LOWEST_M, HIGHEST_M),
    "datum_elevation": (LOWEST_M, HIGHEST_M),
    "total_depth": (0.0, 15_000.0),
    "surface_temperature": (-60.0, 100.0),
}


def prepare_wells(
    table: InputTable, ledger: Ledger, settings: Settings, folder: str | Path, decisions: Decisions
) -> tuple[pd.DataFrame, set[str], Identity]:
    """Return the wells that can be mapped, those that were refused, and how names are joined.

    Parameters
    ----------
    table : InputTable
        Wells as read.
    ledger : Ledger
        Takes refused rows.
    settings : Settings
        The config.
    folder : str or Path
        Where relative paths start.
    decisions : Decisions
        Reviewer's decisions.

    Returns
    -------
    wells : DataFrame
        Columns of ``tables.Wells`` without flags, ``flag:<code>``, ``height_m, height_std_m`` of
        the datum above ground or sea floor, ``screening_degc`` (surface temperature).
    refused : set of str
        Final names.
    identity : Identity
    """
    rule, distance_m = settings.inputs.well_names, settings.screening.same_well_distance_m
    spellings = table.frame["well"].drop_duplicates().tolist()
    if HEADER not in table.frame:
        table.frame[HEADER] = False
    decisions.set_values(table)
    table = _complete(table, ledger)
    table = with_crs(table, ledger, settings.inputs.wells, settings.crs)
    table = without_place(table, ledger, rule)
    table = placed(table, settings.crs)
    table = without_owner(joined_wells(table, rule, distance_m), ledger)
    identity = identity_of(table, rule, spellings)
    decisions.mark_kept(table)
    table = decisions.reject(table, ledger)
    elevation = settings.inputs.rasters.elevation
    dem = None
    if elevation is not None and len(table):
        frame = table.frame
        places = (frame[name].to_numpy(float) for name in ("easting_m", "northing_m"))
        dem = rasters.sample(os.path.join(folder, elevation), settings.crs, *places)
        table.frame["_dem"] = dem
    table = screen_locations(table, ledger, settings.screening, settings.crs, dem)
    table = one_row_a_well(table, ledger, distance_m)
    ordered = table.frame.sort_values("well", kind="stable").reset_index(drop=True)
    table = table.with_frame(ordered)
    table, surface_degc = _with_surface(table, ledger, settings, folder)
    wells = _finished(table)
    wells["screening_degc"] = surface_degc
    return wells, set(identity.names.values()).difference(wells["well"]), identity


def _complete(table: InputTable, ledger: Ledger) -> InputTable:
    """Refuse rows without a name; drop other cells that are no numbers or can't be."""
    nameless = (table.frame["well"] == "").to_numpy()
    table = ledger.refuse(table, nameless, "well", "no_well", "the row names no well.")
    drop_unit_unknown(table, ledger, "water_depth")
    for name in ("x", "y", "water_depth"):
        table = refuse_unreadable(table, ledger, name)
    table = ledger.refuse(
        table,
        (table.frame["water_depth"] < 0.0).to_numpy(),
        "water_depth",
        "water_depth_negative",
        "water depth is {water_depth:g} m; write it positive, and 0 or blank onshore.",
    )
    for name, (lowest, highest) in OPTIONAL.items():
        drop_unit_unknown(table, ledger, name)
        values = table.frame[name]
        ledger.drop(
            table,
            (table.frame[f"wrong:{name}"] | (values < lowest) | (values > highest)).to_numpy(),
            name,
            f"{name}_dropped",
            f'"{{written}}" in column "{{header}}" must be a number from {lowest:g} to {highest:g} '
            "in the unit of the tables; the well is used without it.",
        )
    return table


def _with_surface(
    table: InputTable, ledger: Ledger, settings: Settings, folder: str | Path
) -> tuple[InputTable, np.ndarray]:
    """Refuse wells whose surface temperature is asked from where there is none."""
    model, raster = settings.surface_temperature, settings.inputs.rasters.surface_temperature
    path = None if raster is None else os.path.join(folder, raster)
    frame = table.frame
    missing = np.zeros(len(frame), bool)
    if isinstance(model, ColumnSurface):
        missing = frame["surface_temperature"].isna().to_numpy()
    elif model.model == "raster" and path is not None:
        places = (frame[name].to_numpy(float) for name in ("easting_m", "northing_m"))
        missing = ~np.isfinite(rasters.sample(path, settings.crs, *places))
    table = ledger.refuse(
        table,
        missing,
        "surface_temperature",
        "no_surface_temperature",
        f"surface_temperature.model is {model.model}, and it has no value for this well.",
    )
    wells = Wells.conform(_finished(table)[_columns()])
    warm = surface.at_wells(wells, model, path, settings.crs) if len(wells) else wells
    return table, warm["surface_temperature_degc"].to_numpy(float)


def _finished(table: InputTable) -> pd.DataFrame:
    """Return the wells with the columns of their contract and the height of the datum."""
    frame = table.frame
    noted = (
        frame[n].to_numpy(float) for n in ("ground_elevation", "datum_elevation", "water_depth")
    )
    datum = datums.heights(*noted)
    out = frame.copy()
    out["ground_elevation_m"] = datum.ground_m
    out["datum_elevation_m"] = datum.datum_m
    out["water_depth_m"] = datum.water_m
    out["height_m"], out["height_std_m"] = datum.height_m, datum.std_m
    out["total_depth_m"] = frame["total_depth"]
    out["surface_temperature_degc"] = frame["surface_temperature"]
    mark(out, datum.assumed, "rig_floor_assumed")
    mark(out, datum.suspect, "rig_floor_suspect")
    mark(out, datum.from_ground, "water_depth_from_ground")
    if "_dem" in frame:
        onshore = ~(datum.water_m > 0.0)
        filled = onshore & frame["ground_elevation"].isna().to_numpy() & frame["_dem"].notna()
        out["ground_elevation_m"] = np.where(filled, frame["_dem"], out["ground_elevation_m"])
        mark(out, filled.to_numpy(), "ground_elevation_from_raster")
    keep = [*_columns(), "height_m", "height_std_m"]
    return out[[*keep, *(name for name in out if str(name).startswith("flag:"))]]


def _columns() -> list[str]:
    """Return the columns of the wells that are known here."""
    later = ("surface_temperature_std_k", "flags")
    return [name for name in Wells.columns if name not in later]
