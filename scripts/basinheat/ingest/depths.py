"""Depths of readings and layers: true vertical, below ground or sea floor, with uncertainty."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pandas as pd

from basinheat import trajectory
from basinheat.ingest.unreadable import drop_unit_unknown, refuse_unreadable
from basinheat.ledger import Ledger
from basinheat.readers import InputTable

# Standard uncertainty as a share of depth. Without a survey the hole is taken for vertical, which
# old wells are within about 1 % (METHODS B); with one, about 2 in 1000 is left (common practice).
UNSURVEYED_SHARE = 0.01
SURVEYED_SHARE = 0.002


@dataclass(frozen=True)
class Vertical:
    """True vertical depths of points.

    Parameters
    ----------
    depth_m : ndarray, (n,)
        Below ground or sea floor, m.
    depth_std_m : ndarray, (n,)
        Standard uncertainty, m.
    vertical_m : ndarray, (n,)
        Below the datum, m.
    assumed, beyond, crossed : ndarray of bool, (n,)
        Hole taken for vertical; point below the last station; vertical depth above measured depth.
    """

    depth_m: np.ndarray
    depth_std_m: np.ndarray
    vertical_m: np.ndarray
    assumed: np.ndarray
    beyond: np.ndarray
    crossed: np.ndarray


def vertical(
    measured_m: np.ndarray,
    vertical_m: np.ndarray,
    well: np.ndarray,
    wells: pd.DataFrame,
    surveys: trajectory.Surveys,
) -> Vertical:
    """Return true vertical depths below ground or sea floor.

    A vertical depth that was noted counts first, then the survey, then the hole as vertical.

    Parameters
    ----------
    measured_m, vertical_m : ndarray, (n,)
        Below the datum, along the hole and vertical, m; NaN where not noted.
    well : ndarray of int, (n,)
        Row of each point's well in ``wells``.
    wells : DataFrame
        With ``height_m, height_std_m`` of the datum.
    surveys : trajectory.Surveys
        ``hole`` counts rows of ``wells``.
    """
    noted = np.isfinite(vertical_m)
    surveyed = ~noted & np.isin(well, surveys.hole) & (measured_m >= 0.0)
    below = np.where(noted, vertical_m, measured_m)
    beyond = np.zeros(len(below), bool)
    if surveyed.any():
        place, beyond[surveyed] = trajectory.position(
            surveys, well[surveyed].astype(np.int64), measured_m[surveyed]
        )
        below[surveyed] = place[:, 2]
    share = np.where(noted | (surveyed & ~beyond), SURVEYED_SHARE, UNSURVEYED_SHARE)
    extent = np.where(np.isfinite(measured_m), measured_m, below)
    crossed = noted & (below > measured_m * (1.0 + SURVEYED_SHARE) + 1.0)
    std = np.where(crossed, below - measured_m, share * np.abs(extent))
    height, height_std = (
        wells[name].to_numpy(float)[well] for name in ("height_m", "height_std_m")
    )
    return Vertical(
        below - height, np.hypot(std, height_std), below, ~noted & ~surveyed, beyond, crossed
    )


def surveys_of(table: InputTable, ledger: Ledger) -> tuple[trajectory.Surveys, InputTable]:
    """Return the surveys of the wells, and the stations that were used.

    Parameters
    ----------
    table : InputTable
        Surveys of known wells; ``row`` of the well becomes its ``hole``.
    ledger : Ledger
        Takes stations that cannot stand.
    """
    for name in ("depth", "inclination"):
        table = refuse_unreadable(table, ledger, name, bounds=name == "depth")
    drop_unit_unknown(table, ledger, "azimuth")
    ledger.drop(
        table,
        table.frame["wrong:azimuth"].to_numpy(bool),
        "azimuth",
        "azimuth_dropped",
        '"{written}" in column "{header}" is not a number; the station is used without it.',
    )
    low = ~(table.frame["depth"] >= 0.0).to_numpy()
    table = ledger.refuse(
        table, low, "depth", "no_depth", "the station has no depth of 0 m or more; give one."
    )
    tilt = table.frame["inclination"]
    table = ledger.refuse(
        table,
        ~((tilt >= 0.0) & (tilt <= 180.0)).to_numpy(),
        "inclination",
        "inclination_impossible",
        "the inclination must lie between 0 and 180 degrees from the vertical.",
    )
    keys = ["row", "depth", "inclination", "azimuth", "source_file", "source_line"]
    frame = table.frame.sort_values(keys, kind="stable").reset_index(drop=True)
    table = table.with_frame(frame)
    same = frame.duplicated(["row", "depth", "inclination", "azimuth"]).to_numpy()
    table = ledger.refuse(table, same, "", "merged", "the same station stands in another row.")
    twice = table.frame.duplicated(["row", "depth"], keep=False).to_numpy()
    table = ledger.refuse(
        table, twice, "depth", "station_conflict", "stations of the well at this depth differ."
    )
    frame = table.frame
    columns = (frame[name].to_numpy(float) for name in ("depth", "inclination", "azimuth"))
    return trajectory.survey(frame["row"].to_numpy(np.int64), *columns), table
