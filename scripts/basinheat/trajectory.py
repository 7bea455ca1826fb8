"""Deviated holes: from measured depth, inclination and azimuth to true vertical depth.

Minimum curvature: between two stations the hole is the arc of a circle, tangent to both. Taylor
and Mason (1972), "A systematic approach to well surveying calculations", SPE Journal 12; Sawaryn
and Thorogood (2005), "A compendium of directional calculations based on the minimum curvature
method", SPE 84246 (formulas from memory; checked against a published example in the tests).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Index = NDArray[np.int64]

_SMALL_ANGLE = 1e-4  # rad; below, the ratio factor is taken from its series


@dataclass(frozen=True)
class Surveys:
    """Stations of many holes, with the position of each.

    Parameters
    ----------
    hole : ndarray of int, (n,)
        Number of the hole, ascending; depths ascend within a hole.
    depth_m : ndarray, (n,)
        Measured depth, m; the first of each hole is 0.
    tangent : ndarray, (n, 3)
        Unit vector along the hole: north, east, down.
    position_m : ndarray, (n, 3)
        North, east and down from the datum, m.
    """

    hole: Index
    depth_m: Array
    tangent: Array
    position_m: Array


def tangents(inclination_deg: Array, azimuth_deg: Array) -> Array:
    """Return unit vectors (n, 3), north east down, from inclination and azimuth in degrees.

    Examples
    --------
    >>> tangents(np.array([90.0]), np.array([90.0])).round(12).tolist()
    [[0.0, 1.0, 0.0]]
    """
    tilt, heading = np.radians(inclination_deg), np.radians(azimuth_deg)
    flat = np.sin(tilt)
    return np.stack([flat * np.cos(heading), flat * np.sin(heading), np.cos(tilt)], axis=-1)


def dogleg(first: Array, second: Array) -> Array:
    """Return the angle between tangents (n, 3), rad.

    From half the chord, because the arc cosine loses half its digits at small angles.
    """
    chord = np.linalg.norm(second - first, axis=-1)
    return 2.0 * np.arcsin(np.clip(chord / 2.0, 0.0, 1.0))


def ratio_factor(angle_rad: Array) -> Array:
    """Return (2 / angle) tan(angle / 2): how much longer the arc's chord polygon is.

    Examples
    --------
    >>> float(ratio_factor(np.array(0.0)))
    1.0
    """
    angle = np.asarray(angle_rad, float)
    small = angle < _SMALL_ANGLE
    safe = np.where(small, 1.0, angle)
    series = 1.0 + angle**2 / 12.0 + angle**4 / 120.0
    return np.where(small, series, 2.0 / safe * np.tan(safe / 2.0))


def displacement(length_m: Array, first: Array, second: Array) -> Array:
    """Return the way along an arc (n, 3): north, east, down, m.

    Parameters
    ----------
    length_m : ndarray, (n,)
        Length of the arc, m.
    first, second : ndarray, (n, 3)
        Tangents at its ends.
    """
    factor = 0.5 * length_m * ratio_factor(dogleg(first, second))
    return factor[..., None] * (first + second)


def survey(hole: Index, depth_m: Array, inclination_deg: Array, azimuth_deg: Array) -> Surveys:
    """Return the surveys of many holes at once.

    Parameters
    ----------
    hole : ndarray of int, (n,)
        Number of the hole, ascending.
    depth_m : ndarray, (n,)
        Measured depth of the stations, m, ascending within a hole, above 0 or 0.
    inclination_deg, azimuth_deg : ndarray, (n,)
        Degrees; azimuth NaN is taken from the station above (a vertical hole has none).

    Returns
    -------
    Surveys
        With a vertical station at depth 0 in front of each hole that has none.
    """
    starts = np.flatnonzero(np.r_[True, hole[1:] != hole[:-1]]) if len(hole) else np.empty(0, int)
    missing = starts[depth_m[starts] > 0.0]
    hole = np.insert(hole, missing, hole[missing])
    azimuth = np.insert(azimuth_deg, missing, azimuth_deg[missing])
    depth = np.insert(depth_m, missing, 0.0)
    tilt = np.insert(inclination_deg, missing, 0.0)
    tangent = tangents(tilt, _filled(azimuth, hole))
    new = np.r_[True, hole[1:] != hole[:-1]] if len(hole) else np.empty(0, bool)
    step = np.zeros((len(hole), 3))
    step[1:] = displacement(np.diff(depth), tangent[:-1], tangent[1:])
    step[new] = 0.0
    total = np.cumsum(step, axis=0)
    first = np.flatnonzero(new)[np.cumsum(new) - 1] if len(hole) else np.empty(0, int)
    return Surveys(hole, depth, tangent, total - total[first])


def position(surveys: Surveys, hole: Index, depth_m: Array) -> tuple[Array, NDArray[np.bool_]]:
    """Return where points of measured depth lie, along the arcs.

    Parameters
    ----------
    surveys : Surveys
        Stations.
    hole : ndarray of int, (m,)
        Hole of each point; all must have stations.
    depth_m : ndarray, (m,)
        Measured depth, m.

    Returns
    -------
    position_m : ndarray, (m, 3)
        North, east, down from the datum, m. Below the last station the hole goes on straight.
    beyond : ndarray of bool, (m,)
        Whether the point lies below the last station.
    """
    above = _station_above(surveys, hole, depth_m)
    below = np.minimum(above + 1, len(surveys.hole) - 1)
    beyond = surveys.hole[below] != hole
    beyond |= below == above
    length = surveys.depth_m[below] - surveys.depth_m[above]
    along = depth_m - surveys.depth_m[above]
    with np.errstate(divide="ignore", invalid="ignore"):
        share = np.where(beyond | (length <= 0.0), 0.0, along / length)
    first = surveys.tangent[above]
    here = _turned(first, surveys.tangent[below], share)
    return surveys.position_m[above] + displacement(along, first, here), beyond


def _station_above(surveys: Surveys, hole: Index, depth_m: Array) -> Index:
    """Return the last station of the hole at or above each point (a search in both keys)."""
    order = np.lexsort((depth_m, hole))
    span = float(max(surveys.depth_m.max(initial=0.0), np.max(depth_m, initial=0.0)) + 1.0)
    # One ascending key for hole and depth; depths differ by far more than its rounding.
    keys = surveys.hole * span + surveys.depth_m
    wanted = hole[order] * span + np.maximum(depth_m[order], 0.0)
    found = np.empty(len(order), np.int64)
    found[order] = np.searchsorted(keys, wanted + span * 1e-12, side="right") - 1
    return found


def _turned(first: Array, second: Array, share: Array) -> Array:
    """Return the tangent a share of the way along an arc: it turns evenly from first to second."""
    angle = dogleg(first, second)
    small = angle < _SMALL_ANGLE
    safe = np.where(small, 1.0, angle)
    a = np.where(small, 1.0 - share, np.sin((1.0 - share) * safe) / np.sin(safe))
    b = np.where(small, share, np.sin(share * safe) / np.sin(safe))
    turned = a[:, None] * first + b[:, None] * second
    return turned / np.linalg.norm(turned, axis=1, keepdims=True)


def _filled(azimuth_deg: Array, hole: Index) -> Array:
    """Return azimuths with gaps filled from the station above in the same hole, else 0."""
    known = np.isfinite(azimuth_deg)
    last = np.maximum.accumulate(np.where(known, np.arange(len(hole)), -1))
    usable = (last >= 0) & (hole[last] == hole)
    return np.where(usable, azimuth_deg[last], 0.0)
