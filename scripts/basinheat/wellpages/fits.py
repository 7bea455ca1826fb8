"""Which readings stand behind which temperature, and how well their recovery fits."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.corrections.recovery.sources import MUD
from basinheat.corrections.registry import METHODS
from basinheat.corrections.sets import largest, pad, spread
from basinheat.corrections.trend import RegionalTrend
from basinheat.wellpages.contents import Contents
from basinheat.wellpages.cooling import Cooled, TimedSets, fit_cooling

Ints = NDArray[np.int64]
_TIME = "since_circulation_h"
# Methods that go by the time since circulation.
TIMED_METHODS = frozenset(
    name for name, method in METHODS.items() if _TIME in (*method.needs, *method.helps)
)


@dataclass(frozen=True)
class Members:
    """Pairs of a row of estimates or temperatures and a row of the readings behind it."""

    estimate: Ints
    reading: Ints


@dataclass(frozen=True)
class Fits:
    """Time-corrected sets and how they fit.

    Parameters
    ----------
    row : (s,) array of int
        Row of each set in the temperatures.
    sets : TimedSets
        Their timed readings, by time.
    noted : (s,) array of bool
        Whether the circulation time is noted.
    cooled : Cooled
        Cooling and misfit.
    """

    row: Ints
    sets: TimedSets
    noted: NDArray[np.bool_]
    cooled: Cooled


def members(estimates: pd.DataFrame, readings: pd.DataFrame) -> Members:
    """Return the readings behind each estimate, by estimate and then as listed.

    Parameters
    ----------
    estimates, readings : DataFrame
        Tables by the contracts Estimates (or Temperatures) and Readings.
    """
    lists = estimates["reading_ids"].str.split(";")
    row = np.repeat(np.arange(len(estimates)), lists.str.len().fillna(0).astype(int))
    names = lists.explode().to_numpy(object)[: len(row)]
    place = pd.Index(readings["reading_id"]).get_indexer(names)
    return Members(row[place >= 0], place[place >= 0].astype(np.int64))


def fit_sets(contents: Contents) -> Fits:
    """Arrange the timed readings of all time-corrected sets and fit their recovery.

    Readings are carried to the depth of their set with the region's gradient, as the correction
    does; the formation temperature is what the whole basin made of it.
    """
    temperatures, readings = contents.temperatures, contents.readings
    both = members(temperatures, readings)
    since = readings[_TIME].to_numpy()[both.reading]
    by_time = temperatures["method"].isin(TIMED_METHODS).to_numpy()
    keep = np.isfinite(since) & by_time[both.estimate]
    row, reading, since = both.estimate[keep], both.reading[keep], since[keep]
    order = np.lexsort((reading, since, row))
    row, reading = row[order], reading[order]
    rows, group = np.unique(row, return_inverse=True)
    place = pad(group.astype(np.int64), len(rows))
    picked = readings.iloc[reading]
    depth = temperatures["depth_m"].to_numpy()[row]
    shift = _gradient_k_m(contents, depth) * (depth - picked["depth_m"].to_numpy())
    circulation = _largest_of(contents, both, "circulation_h")[rows]
    radius = _largest_of(contents, both, "hole_radius_m")[rows]
    std = picked["temperature_std_k"].to_numpy()
    assumed = contents.settings["correction"]
    sets = TimedSets(
        since_h=spread(picked[_TIME].to_numpy(), place),
        temperature_degc=spread(picked["temperature_degc"].to_numpy() + shift, place),
        std_k=spread(np.where(std > 0, std, assumed["reading_std_k"]), place),
        circulation_h=np.where(circulation > 0, circulation, contents.circulation_h),
        radius_m=np.where(radius > 0, radius, assumed["hole_radius_m"]),
        formation_degc=temperatures["temperature_degc"].to_numpy()[rows],
    )
    cooled = fit_cooling(sets, MUD, contents.diffusivity_m2_s)
    return Fits(rows, sets, np.asarray(circulation > 0, dtype=bool), cooled)


def _gradient_k_m(contents: Contents, depth_m: NDArray[np.float64]) -> NDArray[np.float64]:
    """Return the gradient by which the correction carried readings to one depth, K/m."""
    learned = contents.recovery["raw_trend"]
    trend = RegionalTrend(
        learned["surface_gradient_k_km"] * 1e-3,
        learned["bend_k_km2"] * 1e-6,
        learned["straight_below_m"],
    )
    return trend.gradient_k_m(depth_m)


def _largest_of(contents: Contents, both: Members, column: str) -> NDArray[np.float64]:
    """Return the largest value among each temperature's readings, NaN for none."""
    values = contents.readings[column].to_numpy()[both.reading]
    out = np.full(len(contents.temperatures), -np.inf)
    np.maximum.at(out, both.estimate, np.where(np.isfinite(values), values, -np.inf))
    return largest(out[:, None])
