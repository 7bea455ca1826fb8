"""Kriging tile by tile, compiled: one elimination gives all places of a tile.

Each tile takes the data around it that hold the nearest of every one of its places. The drift and
the shared sources are known before, from all data (``effects``); how much of each the data of a
tile leave open comes out of the same elimination, as further right-hand sides.
"""

from __future__ import annotations

import math
from functools import partial

import numpy as np
from numpy.typing import NDArray

from basinheat.geostat.compiled import compiled
from basinheat.geostat.elimination import eliminate
from basinheat.geostat.kernels import covariances
from basinheat.geostat.search_tree import nearest, within
from basinheat.geostat.threads import run_tasks
from basinheat.geostat.tile_parts import PLACES, Data, Reach, Space, Squares, Told

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

_EVERY_RANK = 1


def krige(data: Data, squares: Squares, reach: Reach, told: Told) -> int:
    """Krige all squares; return -1, or a datum that others determine."""
    fault = np.full(len(squares.half), -1, np.int64)
    run_tasks(partial(_krige_some, data, squares, reach, told, fault), len(fault))
    return int(fault.max(initial=-1))


@compiled
def _krige_some(
    data: Data, squares: Squares, reach: Reach, told: Told, fault: Whole, start: int, step: int
) -> None:
    """Krige the squares start, start + step, ..."""
    extra = data.columns.shape[1]
    data_at_most = reach.most + reach.beyond
    high, wide = data_at_most + extra, data_at_most + extra + PLACES
    space = Space(
        np.empty((high, wide)),
        np.empty(wide),
        np.empty(wide),
        np.empty(max(reach.most, reach.beyond)),
        np.empty(data_at_most, np.int64),
        np.empty(reach.beyond, np.int64),
    )
    for s in range(start, len(fault), step):
        fault[s] = _krige_square(data, squares, s, reach, told, space)


@compiled
def _krige_square(
    data: Data, squares: Squares, s: int, reach: Reach, told: Told, space: Space
) -> int:
    """Krige a square, cut in four as often as its data need."""
    stack = [(squares.centre[s, 0], squares.centre[s, 1], squares.half[s])]
    runs = [(squares.first[s], squares.first[s + 1])]
    label = squares.label[s]
    while len(stack):
        x, y, half = stack.pop()
        low, high = runs.pop()
        m = _data_around(data, x, y, half, reach, label, space)
        if m < 0 and half <= reach.smallest:
            fault = _krige_one_by_one(data, squares, low, high, label, reach, told, space)
            if fault >= 0:
                return fault
            continue
        if m < 0:
            cuts = _quarter(squares, x, y, low, high)
            for quarter in range(4):
                if cuts[quarter] < cuts[quarter + 1]:
                    east = 0.5 * half if quarter % 2 else -0.5 * half
                    north = 0.5 * half if quarter // 2 else -0.5 * half
                    stack.append((x + east, y + north, 0.5 * half))
                    runs.append((cuts[quarter], cuts[quarter + 1]))
            continue
        for start in range(low, high, PLACES):
            fault = _krige_places(data, squares, start, min(start + PLACES, high), m, told, space)
            if fault >= 0:
                return space.found[fault]
    return -1


@compiled
def _data_around(
    data: Data, x: float, y: float, half: float, reach: Reach, label: int, space: Space
) -> int:
    """Find the data of a square; -1 when they are too many."""
    k = nearest(
        *(data.tree, x, y, reach.nearest, -1.0, _EVERY_RANK, label, space.square, space.found)
    )
    if k == 0:
        return 0
    radius = math.sqrt(space.square[0])
    m = k
    if half > 0.0:
        # the k nearest of a place in the corner lie no farther from the centre than this
        radius = (radius + 2.0 * math.sqrt(2.0) * half) * (1.0 + 1e-12)
        m = within(data.tree, x, y, radius, label, reach.most, space.found)
    return m + _add_beyond(data, x, y, radius, reach, label, m, space) if m <= reach.most else -1


@compiled
def _add_beyond(
    data: Data,
    x: float,
    y: float,
    radius: float,
    reach: Reach,
    label: int,
    m: int,
    space: Space,
) -> int:
    """Write the nearest of the spread few that lie beyond a radius after the m data found."""
    k = nearest(
        *(data.few, x, y, reach.beyond, radius * radius, _EVERY_RANK, label),
        *(space.square, space.beyond),
    )
    for i in range(k):
        space.found[m + i] = data.row_of_few[space.beyond[i]]
    return k


@compiled
def _krige_one_by_one(
    data: Data,
    squares: Squares,
    low: int,
    high: int,
    label: int,
    reach: Reach,
    told: Told,
    space: Space,
) -> int:
    """Krige a run of places, each from its own nearest data."""
    for i in range(low, high):
        place = squares.order[i]
        x, y = squares.x[place], squares.y[place]
        m = _data_around(data, x, y, 0.0, reach, label, space)
        fault = _krige_places(data, squares, i, i + 1, m, told, space)
        if fault >= 0:
            return space.found[fault]
    return -1


@compiled
def _quarter(squares: Squares, x: float, y: float, low: int, high: int) -> Whole:
    """Sort the places of a square by quarter; return where each quarter starts, (5,)."""
    cuts = np.zeros(5, np.int64)
    quarter = np.empty(high - low, np.int64)
    old = squares.order[low:high].copy()
    for i in range(high - low):
        place = old[i]
        quarter[i] = (1 if squares.x[place] >= x else 0) + (2 if squares.y[place] >= y else 0)
        cuts[quarter[i] + 1] += 1
    cuts[0] = low
    for q in range(4):
        cuts[q + 1] += cuts[q]
    following = cuts[:4].copy()
    for i in range(high - low):
        squares.order[following[quarter[i]]] = old[i]
        following[quarter[i]] += 1
    return cuts


@compiled
def _krige_places(
    data: Data, squares: Squares, low: int, high: int, m: int, told: Told, space: Space
) -> int:
    """Krige a run of places from the m data found; return -1 or a row that others determine."""
    extra = data.columns.shape[1]
    first, rows = m + extra, m + extra
    count = high - low
    width = first + count
    _fill(data, squares, low, high, m, space)
    fault = eliminate(space.table, m, rows, width, 1e-13 * data.sill)
    if fault >= 0:
        return fault
    left = space.x[:count]  # the coordinates are done with
    step = space.y[:count]
    for i in range(count):
        left[i] = data.sill
    for a in range(m):
        white = space.table[a, first:width]
        for i in range(count):
            left[i] -= white[i] * white[i]
    effects = len(data.root)
    values = extra - effects
    for a in range(effects):
        for i in range(count):
            step[i] = 0.0
        for b in range(effects):
            opened = space.table[m + values + b, first:width]
            g = data.root[a, b]
            for i in range(count):
                step[i] += g * opened[i]
        for i in range(count):
            left[i] += step[i] * step[i]
    for i in range(count):
        place = squares.order[low + i]
        for b in range(values):
            told.mean[place, b] = -space.table[m + b, first + i]
        told.variance[place] = left[i]
    if len(told.used):
        for i in range(low, high):
            told.used[squares.order[i]] = m
    if len(told.open):
        for i in range(count):
            place = squares.order[low + i]
            for b in range(effects):
                told.open[place, b] = space.table[m + values + b, first + i]
    return -1


@compiled
def _fill(data: Data, squares: Squares, low: int, high: int, m: int, space: Space) -> None:
    """Write the covariances of data and places, and what the effects are at both."""
    tree, extra = data.tree, data.columns.shape[1]
    first = m + extra
    width = first + high - low
    for a in range(m):
        i = space.found[a]
        space.x[a], space.y[a] = tree.x[i], tree.y[i]
    for a in range(m, first):
        space.x[a], space.y[a] = space.x[0], space.y[0]
    for i in range(low, high):
        place = squares.order[i]
        space.x[first + i - low], space.y[first + i - low] = squares.x[place], squares.y[place]
    for a in range(m):
        i = space.found[a]
        covariances(
            space.table[a, a:width],
            space.x[a:width],
            space.y[a:width],
            space.x[a],
            space.y[a],
            data.model,
            data.scale,
            data.sill,
        )
        space.table[a, a] += data.noise[i]
        for b in range(extra):
            space.table[a, m + b] = data.columns[i, b]
    values = extra - len(data.root)
    for b in range(extra):
        space.table[m + b, m:width] = 0.0
    for b in range(squares.drift.shape[1]):
        row = space.table[m + values + b]
        for i in range(low, high):
            row[first + i - low] = squares.drift[squares.order[i], b]
