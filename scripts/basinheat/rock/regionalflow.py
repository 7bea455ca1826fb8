"""Heat flow good enough to say how hot the rock is: regional, and smoothed over neighbours.

Conductivity at depth needs a temperature. Taken from the well's own readings it would tie the
resistance to their errors, so each well gets its neighbours' heat flow.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.spatial import cKDTree

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

NEIGHBOURS = 12
WIDEST = 2.0  # smoothed values stay within this factor of the regional one


def of_wells(count: int, well: Whole, heat_flow: Array) -> Array:
    """Return the median heat flow of each well, NaN where it has none.

    Parameters
    ----------
    count : int
        Number of wells n.
    well : ndarray, shape (r,)
        Well of each value.
    heat_flow : ndarray, shape (r,)

    Returns
    -------
    ndarray, shape (n,)

    Examples
    --------
    >>> of_wells(3, np.array([0, 0, 0, 2, 2]), np.array([1.0, 9.0, 2.0, 4.0, 6.0])).tolist()
    [2.0, nan, 5.0]
    """
    good = np.isfinite(heat_flow)
    order = np.lexsort((heat_flow[good], well[good]))
    values, wells = heat_flow[good][order], well[good][order]
    start = np.searchsorted(wells, np.arange(count + 1))
    size = np.diff(start)
    out = np.full(count, np.nan)
    some = size > 0
    first = start[:-1][some]
    upper, lower = first + size[some] // 2, first + (size[some] - 1) // 2
    out[some] = 0.5 * (values[upper] + values[lower])
    return out


def smoothed(xy_m: Array, heat_flow: Array, regional: float) -> Array:
    """Average the nearest other wells by inverse squared distance.

    Parameters
    ----------
    xy_m : ndarray, shape (n, 2), m
    heat_flow : ndarray, shape (n,)
        Of the wells, NaN where not known.
    regional : float
        Value where there are no neighbours; the others stay within a factor of ``WIDEST``.

    Returns
    -------
    ndarray, shape (n,)
        Free of the well's own value.
    """
    known = np.flatnonzero(np.isfinite(heat_flow))
    if len(known) < 3:
        return np.full(len(xy_m), regional)
    k = min(NEIGHBOURS + 1, len(known))
    distance, index = cKDTree(xy_m[known]).query(xy_m, k=k)
    neighbour = known[index]
    # the typical distance tames wells that stand on one pad
    scale = np.maximum(np.median(distance, axis=1, keepdims=True), 1.0)
    weight = (neighbour != np.arange(len(xy_m))[:, None]) / (distance**2 + scale**2)
    limited = np.clip(heat_flow[neighbour], regional / WIDEST, regional * WIDEST)
    return (weight * limited).sum(1) / weight.sum(1)
