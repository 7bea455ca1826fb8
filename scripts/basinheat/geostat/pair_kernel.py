"""Sums over all pairs of wells by lag, compiled: for so many pairs that no list holds them."""

from __future__ import annotations

import math
from functools import partial

import numpy as np
from numpy.typing import NDArray

from basinheat.geostat.compiled import compiled
from basinheat.geostat.threads import TASKS, run_tasks

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

_RUN = 512  # partners of a well at a time
_STEPS = 4096  # of the table that guesses the lag of a distance
_STRIPS = 8  # a reach: narrow strips leave few pairs to be looked at in vain


def sum_pairs(
    xy: Array, values: Array, errors: Array, shared: Array, edges: Array, root: bool
) -> Array:
    """Sum pairs, distance, core and known semivariance by lag, as ``pairs.accumulate``.

    Parameters
    ----------
    xy : array, shape (n, 2), m
    values, errors, shared : arrays, shapes (n,), (n,), (n, m)
    edges : array, shape (lags + 1,), m
        Lags, open below and closed above.
    root : bool
        The core is the root of the absolute difference, not its square.

    Returns
    -------
    array, shape (4, lags)
    """
    reach = float(edges[-1])
    west = float(xy[:, 0].min())
    strip = np.floor((xy[:, 0] - west) * (_STRIPS / reach)).astype(np.int64)
    order = np.lexsort([xy[:, 1], strip])
    first = np.searchsorted(strip[order], np.arange(strip.max() + 2))
    edge = west + np.arange(strip.max() + 2) * (reach / _STRIPS)
    guess = np.maximum(np.searchsorted(edges, np.linspace(0.0, reach, _STEPS + 1)) - 1, 0)
    sums = np.zeros((TASKS, 2, len(edges) - 1, 4))
    x, y = np.ascontiguousarray(xy[order, 0]), np.ascontiguousarray(xy[order, 1])
    data = (x, y, values[order], errors[order], np.ascontiguousarray(shared[order]))
    strips = (strip[order], first, edge)
    run_tasks(partial(_sum_some, *data, *strips, edges, guess, root, sums), TASKS)
    return np.asarray(sums.sum((0, 1)).T)


@compiled
def _sum_some(
    x: Array,
    y: Array,
    values: Array,
    errors: Array,
    shared: Array,
    strip: Whole,
    first: Whole,
    edge: Array,
    edges: Array,
    guess: Whole,
    root: bool,
    sums: Array,
    task: int,
    step: int,
) -> None:
    """Sum the pairs of the wells task, task + step, ... with those north or east of them."""
    reach = edges[-1]
    work = np.empty((3, _RUN))
    place = np.empty(_RUN, np.int32)
    for i in range(task, len(x), step):
        for s in range(strip[i], min(strip[i] + _STRIPS + 2, len(first) - 1)):
            off = max(edge[s] - x[i], 0.0)
            if off > reach:
                break
            # a metre more than the circle is wide here: rounding loses no pair
            half = math.sqrt(reach * reach - off * off) + 1.0
            start = first[s] + np.searchsorted(y[first[s] : first[s + 1]], y[i] - half)
            start = max(start, i + 1)
            stop = first[s] + np.searchsorted(y[first[s] : first[s + 1]], y[i] + half)
            for low in range(start, stop, _RUN):
                count = min(low + _RUN, stop) - low
                _compare(x, y, values, errors, i, low, count, root, _STEPS / reach, work, place)
                for c in range(shared.shape[1]):
                    for k in range(count):
                        apart = shared[i, c] - shared[low + k, c]
                        work[2, k] += 0.5 * apart * apart
                _add(work, place, count, edges, guess, sums[task])


@compiled
def _compare(
    x: Array,
    y: Array,
    values: Array,
    errors: Array,
    i: int,
    low: int,
    count: int,
    root: bool,
    per_m: float,
    work: Array,
    place: NDArray[np.int32],
) -> None:
    """Write distance, core and mean error of a well and ``count`` wells from ``low`` on."""
    high = low + count
    px, py, pv, pe = x[low:high], y[low:high], values[low:high], errors[low:high]
    h, core, known = work[0, :count], work[1, :count], work[2, :count]
    x_i, y_i, v_i, e_i = x[i], y[i], values[i], errors[i]
    most = float(_STEPS)
    for k in range(count):
        dx = px[k] - x_i
        dy = py[k] - y_i
        distance = math.sqrt(dx * dx + dy * dy)
        h[k] = distance
        scaled = distance * per_m
        place[k] = np.int32(scaled if scaled < most else most)
        known[k] = 0.5 * (e_i + pe[k])
    if root:
        for k in range(count):
            core[k] = math.sqrt(abs(pv[k] - v_i))
    else:
        for k in range(count):
            core[k] = (pv[k] - v_i) * (pv[k] - v_i)


@compiled
def _add(
    work: Array, place: NDArray[np.int32], count: int, edges: Array, guess: Whole, sums: Array
) -> None:
    """Add the pairs of a well to their lags, in two sums by turns: none waits for the last."""
    reach, least = edges[-1], edges[0]
    for k in range(count):
        h = work[0, k]
        if h > reach or h < least:
            continue
        lag = guess[place[k]]
        while h > edges[lag + 1]:
            lag += 1
        turn = k & 1
        sums[turn, lag, 0] += 1.0
        sums[turn, lag, 1] += h
        sums[turn, lag, 2] += work[1, k]
        sums[turn, lag, 3] += work[2, k]
