"""Heat flow that others found: one value a place, with its uncertainty, on the map."""

from __future__ import annotations

import numpy as np
import pandas as pd

from basinheat.flags import joined, mark
from basinheat.ingest.places import NOWHERE, placed, with_crs
from basinheat.ingest.unreadable import drop_unit_unknown, refuse_unreadable
from basinheat.ledger import Ledger
from basinheat.readers import InputTable
from basinheat.settings.model import Settings
from basinheat.tables import HeatFlowPoints

# Determinations closer than this are of one hole (common practice, no source).
SAME_PLACE_M = 10.0
_BLANK = ("no_heat_flow", "the row states no heat flow.")


def prepare_heat_flow(
    table: InputTable, ledger: Ledger, settings: Settings, wells: pd.DataFrame
) -> pd.DataFrame:
    """Return heat flow determined elsewhere.

    Parameters
    ----------
    table : InputTable
        Heat flow as read.
    ledger : Ledger
        Takes refused and merged rows.
    settings : Settings
        Of these ``crs``, ``inputs.heat_flow`` and the limits in ``heat_flow``.
    wells : DataFrame
        ``well, easting_m, northing_m`` of the wells: no place may bear the name of one, and those
        far from all are no business of the map.

    Returns
    -------
    DataFrame
        ``tables.HeatFlowPoints``.
    """
    table = _complete(table, ledger, settings)
    table = placed(with_crs(table, ledger, settings.inputs.heat_flow, settings.crs), settings.crs)
    off = ~np.isfinite(table.frame[["easting_m", "northing_m"]]).all(axis=1).to_numpy()
    table = ledger.refuse(
        table,
        off,
        "x",
        "coordinates_impossible",
        "x {x:g}, y {y:g} lie nowhere in {crs}. Check the columns of x and y and the file's crs.",
    )
    table = _near(table, ledger, settings.heat_flow.published_within_km, wells)
    table = _one_a_place(table, ledger)
    frame = table.frame
    points = frame.assign(
        well=_unlike(frame["well"], wells["well"]),
        heat_flow_mw_m2=frame["heat_flow"],
        heat_flow_std_mw_m2=frame["heat_flow_std"],
        conductivity_w_mk=frame["conductivity"],
        quality=frame["quality"].where(frame["quality"] != "", frame["method"]),
        flags=joined(frame),
    )
    return HeatFlowPoints.conform(
        points[list(HeatFlowPoints.columns)].sort_values("well", ignore_index=True)
    )


def _complete(table: InputTable, ledger: Ledger, settings: Settings) -> InputTable:
    """Refuse rows without name, place or a heat flow that can be; assume what sigma is missing."""
    limits = settings.heat_flow
    table = ledger.refuse(
        table, (table.frame["well"] == "").to_numpy(), "well", "no_well", "the row names no place."
    )
    for name in ("x", "y", "heat_flow"):
        table = refuse_unreadable(table, ledger, name)
        code, sentence = _BLANK if name == "heat_flow" else ("no_coordinates", NOWHERE)
        table = ledger.refuse(table, table.frame[name].isna().to_numpy(), name, code, sentence)
    value = table.frame["heat_flow"].to_numpy(float)
    low, high = limits.published_low_mw_m2, limits.published_high_mw_m2
    table = ledger.refuse(
        table,
        (value < low) | (value > high),
        "heat_flow",
        "heat_flow_outside",
        f"{{heat_flow:g}} mW/m2 lies outside {low:g} to {high:g} (heat_flow.published_low_mw_m2, "
        "published_high_mw_m2): not heat conducted through a continent, or another unit.",
    )
    for name in ("heat_flow_std", "conductivity"):
        drop_unit_unknown(table, ledger, name)
        values = table.frame[name]
        ledger.drop(
            table,
            (table.frame[f"wrong:{name}"] | (values <= 0.0)).to_numpy(),
            name,
            f"{name}_dropped",
            '"{written}" in column "{header}" is no number above 0; used without it.',
        )
    frame = table.frame
    unknown = frame["heat_flow_std"].isna().to_numpy()
    mark(frame, unknown, "heat_flow_std_assumed")
    assumed = limits.published_std_share * frame["heat_flow"]
    frame["heat_flow_std"] = frame["heat_flow_std"].fillna(assumed)
    return table


def _near(table: InputTable, ledger: Ledger, farthest_km: float, wells: pd.DataFrame) -> InputTable:
    """Refuse places far from every well: a compilation of the world is read for one basin."""
    from scipy.spatial import cKDTree

    if not len(wells) or not len(table):
        return table
    columns = ["easting_m", "northing_m"]
    distance, _ = cKDTree(wells[columns].to_numpy()).query(table.frame[columns].to_numpy())
    table.frame["_km"] = distance / 1000.0
    table = ledger.refuse(
        table,
        distance > 1000.0 * farthest_km,
        "x",
        "far_from_wells",
        f"the nearest well is {{_km:.0f}} km away, more than {farthest_km:g} km "
        "(heat_flow.published_within_km).",
    )
    return table.with_frame(table.frame.drop(columns="_km"))


def _one_a_place(table: InputTable, ledger: Ledger) -> InputTable:
    """Keep one value a place: of one name the first, of one hole the deepest."""
    frame = table.frame
    order = (
        frame.assign(_deep=-frame["base"].fillna(0.0)).sort_values(
            ["config", "well", "_deep", "heat_flow_std", "heat_flow", "source_file", "source_line"],
            kind="stable",
        )
        if len(frame)
        else frame
    )
    table = table.with_frame(order.drop(columns="_deep", errors="ignore").reset_index(drop=True))
    twice = table.frame.duplicated("well").to_numpy()
    table = ledger.refuse(
        table,
        twice,
        "well",
        "merged",
        "the place {well} stands in another row, that reaches deeper or is surer.",
    )
    near = (table.frame[["easting_m", "northing_m"]] / SAME_PLACE_M).round()
    return ledger.refuse(
        table,
        near.duplicated().to_numpy(),
        "x",
        "merged",
        f"another determination stands within {SAME_PLACE_M:g} m, and one hole counts once.",
    )


def _unlike(names: pd.Series, wells: pd.Series) -> pd.Series:
    """Return names that no well has: a place of a well's name becomes "name (published)"."""
    return names.where(~names.isin(wells), names + " (published)")
