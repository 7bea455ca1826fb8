"""Pairs of a mud-cooled reading and a direct temperature in the same well or close by."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.spatial import cKDTree

from basinheat.corrections.calibration.distance import growth_per_m
from basinheat.corrections.sets import ReadingSets
from basinheat.corrections.trend import RegionalTrend

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]
Flags = NDArray[np.bool_]

# Two anchors further apart are never of one log and depth.
_STRIDE_M = 1.0e6
# The gradient between a reading and its anchor is the region's to a fifth (common practice).
_GRADIENT_SHARE = 0.2
# Wells around a reading that are looked at.
_NEIGHBOURS = 8
# Half the variance of distance is the anchor's own difference from the region (no source).
_ANCHOR_SHARE = 0.5
# Shallower temperatures tell of the surface rather than of the region (no source).
_LEAST_DEPTH_M = 500.0


@dataclass(frozen=True)
class Anchors:
    """Direct temperatures.

    Parameters
    ----------
    log : (n,) array of int
        Well and kind together: what was measured by one way in one well.
    well : (n,) array of int
        Well.
    depth_m, temperature_degc : (n,) array, m, degC
        Depth and formation temperature.
    std_k, log_std_k : (n,) array, K
        Independent and well-common part of the standard uncertainty.
    surface_degc : (n,) array, degC
        Surface temperature of the well.
    interpolated : (n,) array of bool
        Whether temperatures between two of the log may be read off it.
    learn : (n,) array of bool
        Whether they may teach.
    shared_k : (n, m) array, K
        Loadings on the shared sources that anchors carry.
    """

    log: Ints
    well: Ints
    depth_m: Floats
    temperature_degc: Floats
    std_k: Floats
    log_std_k: Floats
    surface_degc: Floats
    interpolated: Flags
    learn: Flags
    shared_k: Floats

    def take(self, index: Ints) -> Anchors:
        """Return some of the anchors."""
        return Anchors(**{name: values[index] for name, values in vars(self).items()})


@dataclass(frozen=True)
class Reach:
    """How far apart the two of a pair may be.

    Parameters
    ----------
    depth_m, log_step_m, distance_m : float, m
        Largest way up or down to an anchor, largest step of a log that is interpolated, largest
        distance of the wells.
    share : float
        Assumed difference of two wells that far apart, relative to the rise above the surface.
    """

    depth_m: float
    log_step_m: float
    distance_m: float
    share: float


@dataclass(frozen=True)
class Pairs:
    """One row per mud-cooled set with an anchor, by set.

    Parameters
    ----------
    index, anchor : (n,) array of int
        Set, and the nearest anchor of its log.
    log, well : (n,) array of int
        Log of the anchor; well of the set.
    depth_m, distance_m : (n,) array, m
        Depth of the set, distance of the wells.
    anchor_degc : (n,) array, degC
        The anchor carried to the set's depth.
    correction_k : (n,) array, K
        That less the set's warmest reading.
    anchor_std_k, log_std_k : (n,) array, K
        Standard uncertainty of the anchor there, distance included; its part common to a log.
    learn : (n,) array of bool
        Whether both wells may teach.
    """

    index: Ints
    anchor: Ints
    log: Ints
    well: Ints
    depth_m: Floats
    distance_m: Floats
    anchor_degc: Floats
    correction_k: Floats
    anchor_std_k: Floats
    log_std_k: Floats
    learn: Flags

    def __len__(self) -> int:
        """Return the number of pairs."""
        return int(self.index.size)


def find_pairs(
    sets: ReadingSets, anchors: Anchors, place_m: Floats, trend: RegionalTrend, reach: Reach
) -> Pairs:
    """Find the best anchor of every mud-cooled set.

    Anchors are carried along the region's trend: between two points of a log the difference from
    the trend is interpolated, otherwise held. Of several anchors the one with the smallest error
    counts, one that may teach before one that may not.

    Parameters
    ----------
    sets : ReadingSets
        Mud-cooled sets.
    anchors : Anchors
        Direct temperatures, in any order.
    place_m : (wells, 2) array, m
        Places by the number of the well; NaN for unknown.
    trend : RegionalTrend
        Rise above the surface with depth.
    reach : Reach
        How far apart they may be.
    """
    order = np.lexsort([anchors.temperature_degc, anchors.depth_m, anchors.log])
    sorted_anchors = anchors.take(order)
    growth = _growth_per_m(sorted_anchors, place_m, trend, reach)
    at, log, distance = _candidates(sets, sorted_anchors, place_m, reach.distance_m)
    depth = sets.depth_m[at]
    place, away = _nearest(sorted_anchors, log, depth)
    value, gap = _carried(sorted_anchors, log, depth, place, trend, reach)
    rise, gradient = trend.rise_k(depth), trend.gradient_k_m(depth)
    apart = growth * distance * rise**2
    own = sorted_anchors.std_k[place] ** 2 + (_GRADIENT_SHARE * gradient * np.abs(away)) ** 2
    common = sorted_anchors.log_std_k[place] ** 2 + _ANCHOR_SHARE * apart
    variance = own + common + (1.0 - _ANCHOR_SHARE) * apart
    learn = sets.learn[at] & sorted_anchors.learn[place]
    near = (np.abs(away) <= reach.depth_m) | gap
    best = _first_of_each(at, np.lexsort([log, variance, ~learn, at]), near)
    at, place = at[best], place[best]
    return Pairs(
        index=at,
        anchor=order[place],
        log=log[best],
        well=sets.well[at],
        depth_m=depth[best],
        distance_m=distance[best],
        anchor_degc=value[best],
        correction_k=value[best] - sets.warmest_degc[at],
        anchor_std_k=np.sqrt(variance[best]),
        log_std_k=np.sqrt(common[best]),
        learn=learn[best],
    )


def _growth_per_m(anchors: Anchors, place_m: Floats, trend: RegionalTrend, reach: Reach) -> float:
    """Learn from the deepest anchors of the logs how temperature differs from well to well."""
    last = np.append(np.diff(anchors.log) != 0, True)
    last = np.flatnonzero(last & anchors.learn & (anchors.depth_m >= _LEAST_DEPTH_M))
    rise = trend.rise_k(anchors.depth_m[last])
    error = anchors.std_k[last] ** 2 + anchors.log_std_k[last] ** 2
    return growth_per_m(
        place_m[anchors.well[last]],
        (anchors.temperature_degc - anchors.surface_degc)[last] / rise,
        error / rise**2,
        reach.distance_m,
        reach.share,
    )


def _candidates(
    sets: ReadingSets, anchors: Anchors, place_m: Floats, distance_m: float
) -> tuple[Ints, Ints, Floats]:
    """Return sets, logs and distances of all couples of wells close enough."""
    logs, first = np.unique(anchors.log, return_index=True)
    log_well = anchors.well[first]
    wells = np.unique(sets.well)
    by_well = np.argsort(log_well, kind="stable")
    low, high = (np.searchsorted(log_well[by_well], wells, side) for side in ("left", "right"))
    row, number = _ranges(low, high)
    well, log, distance = [wells[row]], [by_well[number]], [np.zeros(row.size)]
    placed = np.flatnonzero(np.isfinite(place_m[log_well]).all(1))
    known = wells[np.isfinite(place_m[wells]).all(1)]
    if placed.size and known.size:
        near, which = cKDTree(place_m[log_well[placed]]).query(
            place_m[known],
            k=min(_NEIGHBOURS, placed.size),
            distance_upper_bound=distance_m * (1.0 + 1e-12),
        )
        near, which = near.reshape(known.size, -1), which.reshape(known.size, -1)
        row, column = np.nonzero(np.isfinite(near))
        found = placed[which[row, column]]
        other = log_well[found] != known[row]
        well.append(known[row][other])
        log.append(found[other])
        distance.append(near[row, column][other])
    return _by_set(sets, np.concatenate(well), logs[np.concatenate(log)], np.concatenate(distance))


def _by_set(
    sets: ReadingSets, well: Ints, log: Ints, distance: Floats
) -> tuple[Ints, Ints, Floats]:
    order = np.argsort(sets.well, kind="stable")
    low, high = (np.searchsorted(sets.well[order], well, side) for side in ("left", "right"))
    row, number = _ranges(low, high)
    return order[number], log[row], distance[row]


def _ranges(low: Ints, high: Ints) -> tuple[Ints, Ints]:
    """Return the rows and the numbers of all ``range(low, high)``."""
    size = high - low
    row = np.repeat(np.arange(low.size), size)
    return row, np.arange(row.size) - np.repeat(np.cumsum(size) - size, size) + low[row]


def _nearest(anchors: Anchors, log: Ints, depth: Floats) -> tuple[Ints, Floats]:
    """Return the anchor of the log nearest in depth, and how much deeper the set lies, m."""
    below, above = _around(anchors, log, depth)
    up = np.where(anchors.log[above] == log, depth - anchors.depth_m[above], np.inf)
    down = np.where(anchors.log[below] == log, depth - anchors.depth_m[below], -np.inf)
    upper = np.abs(up) <= np.abs(down)
    return np.where(upper, above, below), np.where(upper, up, down)


def _around(anchors: Anchors, log: Ints, depth: Floats) -> tuple[Ints, Ints]:
    """Return the places of the anchors just below and just above, of any log."""
    rank = np.searchsorted(np.unique(anchors.log), anchors.log)
    key = rank * _STRIDE_M + anchors.depth_m
    right = np.searchsorted(key, np.searchsorted(np.unique(anchors.log), log) * _STRIDE_M + depth)
    return np.minimum(right, key.size - 1), np.maximum(right - 1, 0)


def _carried(
    anchors: Anchors, log: Ints, depth: Floats, nearest: Ints, trend: RegionalTrend, reach: Reach
) -> tuple[Floats, Flags]:
    """Return the anchors at the sets' depths, and where they were read off between two points."""
    below, above = _around(anchors, log, depth)
    excess = anchors.temperature_degc - trend.rise_k(anchors.depth_m)
    step = anchors.depth_m[below] - anchors.depth_m[above]
    inside = (anchors.log[below] == log) & (anchors.log[above] == log) & (step > 0.0)
    inside &= anchors.interpolated[below] & (step <= reach.log_step_m)
    share = np.where(inside, (depth - anchors.depth_m[above]) / np.where(inside, step, 1.0), 0.0)
    between = (1.0 - share) * excess[above] + share * excess[below]
    return trend.rise_k(depth) + np.where(inside, between, excess[nearest]), inside


def _first_of_each(member: Ints, order: Ints, allowed: Flags) -> Ints:
    """Return the first allowed row of every member, in the order given."""
    order = order[allowed[order]]
    return order[np.unique(member[order], return_index=True)[1]]
