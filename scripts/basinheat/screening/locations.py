"""Rules that judge where wells lie, among the others and on the ground."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.flags import mark
from basinheat.ledger import Ledger
from basinheat.projection import project
from basinheat.readers import InputTable
from basinheat.settings.wells import Screening

Array = NDArray[np.float64]

FEWEST_WELLS = 5  # fewer tell nothing of where the others lie
COMPANY = 3  # a well with so many others about it is not alone
CORE_WIDTHS = 5.0  # core: within this many median distances of the middle
ABSURD_WIDTHS = 3.0  # further from the core than this many of its diagonals
OUTSIDE_WIDTHS = 0.5
OWN_SHARE = 0.25  # a group apart lies together within this share of its way to the others
# Fewer wells do not tell how far apart wells usually lie; and how unusual a distance must be, in
# robust standard deviations of its logarithm (common practice, no source).
ENOUGH_WELLS, UNUSUAL = 20, 5.0
# What happens to coordinates on their way into tables (common practice).
SLIPS = {
    "x and y exchanged": lambda x, y: (y, x),
    "the sign of x turned": lambda x, y: (-x, y),
    "the sign of y turned": lambda x, y: (x, -y),
    "x and y exchanged and the sign of x turned": lambda x, y: (-y, x),
    "x and y exchanged and the sign of y turned": lambda x, y: (y, -x),
}


def screen_locations(
    table: InputTable, ledger: Ledger, rules: Screening, map_crs: str, dem_m: Array | None
) -> InputTable:
    """Refuse wells whose coordinates can't be right; doubt those on the wrong height.

    A well is refused where its coordinates name no place, are both zero, lie alone and several
    widths of the others away from them, or lie outside the others while a common slip (exchanged
    x and y, a lost sign) would put it among them. The slip is named, never mended. It is doubted
    where it lies outside the others, further from them than they usually lie apart: that takes
    twenty wells to tell.

    Parameters
    ----------
    table : InputTable
        Wells with ``x, y, crs, easting_m, northing_m, ground_elevation``.
    ledger : Ledger
        Takes refused wells.
    rules : Screening
        Thresholds.
    map_crs : str
        CRS of easting and northing.
    dem_m : ndarray, (n,), or None
        Ground above sea level at the wells from the elevation raster, m.
    """
    frame = table.frame
    if dem_m is not None:
        onshore = ~(frame["water_depth"] > 0.0).to_numpy()
        off = np.abs(frame["ground_elevation"].to_numpy(float) - dem_m)
        mark(frame, onshore & (off > rules.elevation_difference_m), "elevation_suspect")
    zero = ((frame["x"] == 0.0) & (frame["y"] == 0.0)).to_numpy()
    table = ledger.screen(
        table,
        zero,
        "x",
        "coordinates_zero",
        "both coordinates are 0, which stands for not known. Fill them in.",
    )
    slip, far = _slips(table.frame, map_crs)
    mark(table.frame, far == "outside", "far_from_others")
    # Without a place on the map not even a reviewer can keep a well.
    nowhere = ~np.isfinite(table.frame[["easting_m", "northing_m"]].to_numpy(float)).all(axis=1)
    table.frame["_slip"] = slip
    suspect = (slip != "") | (far == "absurd")
    table.frame["kept"] &= ~nowhere
    table = ledger.screen(
        table,
        suspect,
        "x",
        "coordinates_suspect",
        "x {x:g}, y {y:g} lies far from all other wells{_slip}. Mend it; to use it all the same, "
        "add to the decisions: well {well}, keep.",
    )
    nowhere = ~np.isfinite(table.frame[["easting_m", "northing_m"]].to_numpy(float)).all(axis=1)
    table = ledger.refuse(
        table,
        nowhere,
        "x",
        "coordinates_impossible",
        "x {x:g}, y {y:g} is no place in {crs}. Check the coordinates, their order and the crs.",
    )
    return table.with_frame(table.frame.drop(columns="_slip"))


def _slips(frame: pd.DataFrame, map_crs: str) -> tuple[NDArray[np.object_], NDArray[np.object_]]:
    """Return the slip that explains each well's place ("" for none), and how far it lies off."""
    slip, far = np.full(len(frame), "", object), np.full(len(frame), "", object)
    place = frame[["easting_m", "northing_m"]].to_numpy(float)
    core, width = _core(place)
    if core.sum() < FEWEST_WELLS:
        return slip, far
    off = _distance(place, place[core], 1)
    alone = _distance(place, place[np.isfinite(place).all(axis=1)], COMPANY + 1)
    # A group far away is another basin; a single well there is a slip or a typing error.
    outside = alone > np.maximum(OUTSIDE_WIDTHS * width, OWN_SHARE * off)
    far[outside & _unusual(alone)] = "outside"
    far[outside & (off > ABSURD_WIDTHS * width)] = "absurd"
    odd = np.flatnonzero((off > OUTSIDE_WIDTHS * width) | ~np.isfinite(off))
    for crs, rows in frame.iloc[odd].groupby("crs", sort=True).indices.items():
        index = odd[rows]
        x, y = (frame[name].to_numpy(float)[index] for name in ("x", "y"))
        found = _explained(x, y, str(crs), map_crs, place[core], width)
        slip[index] = [f"; with {name} it lies among them" if name else "" for name in found]
    return slip, far


def _unusual(distance: Array) -> NDArray[np.bool_]:
    """Tell which distances are far above the usual ones; none where there are few."""
    known = distance > 0.0
    if known.sum() < ENOUGH_WELLS:
        return np.zeros(distance.size, bool)
    size = np.full(distance.size, -np.inf)
    size[known] = np.log(distance[known])
    middle = np.median(size[known])
    # Of a normal distribution: the standard deviation from the median distance (textbook).
    spread = 1.4826 * np.median(np.abs(size[known] - middle))
    return np.asarray(size > middle + UNUSUAL * spread)


def _core(place: Array) -> tuple[NDArray[np.bool_], float]:
    """Return the wells that lie together, and the diagonal of their bounding box."""
    known = np.isfinite(place).all(axis=1)
    if known.sum() < FEWEST_WELLS:
        return np.zeros(len(place), bool), 0.0
    off = np.hypot(*(place - np.median(place[known], axis=0)).T)
    core = known & (off <= CORE_WIDTHS * np.median(off[known]))
    width = float(np.hypot(*np.ptp(place[core], axis=0)))
    return core & (width > 0.0), width


def _distance(place: Array, others: Array, rank: int) -> Array:
    """Return the distance of each place to the nearest, or a further, of the others."""
    from scipy.spatial import cKDTree

    out = np.full(len(place), np.nan)
    known = np.isfinite(place).all(axis=1)
    out[known] = cKDTree(others).query(place[known], k=[rank])[0][:, 0]
    return out


def _explained(
    x: Array, y: Array, crs: str, map_crs: str, core: Array, width: float
) -> NDArray[np.object_]:
    """Return the slip that puts each point among the others, "" where none does."""
    low, high = core.min(axis=0) - 0.05 * width, core.max(axis=0) + 0.05 * width
    found = np.full(len(x), "", object)
    for name, mended in SLIPS.items():
        there = project(*mended(x, y), crs, map_crs)
        point = np.column_stack([there.x, there.y])
        among = np.isfinite(point).all(axis=1) & ((point >= low) & (point <= high)).all(axis=1)
        found[among & (found == "")] = name
    return found
