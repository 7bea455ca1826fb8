"""Places sorted into squares, the tiles that kriging begins with."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from basinheat.geostat.compiled import compiled
from basinheat.geostat.tile_parts import PLACES, Squares

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

_PATCHES = 64  # a side of the raster that tells covered from empty area
_NO_LABEL = -1


def spacing(places: Array) -> float:
    """Return the side of the square that belongs to each of some places, m; 0 for a single one.

    Area is counted where there are places, so that gaps between them do not count.
    """
    low = places.min(0)
    side = float((places.max(0) - low).max()) / _PATCHES
    if side == 0.0:
        return 0.0
    covered = np.zeros((_PATCHES, _PATCHES), np.bool_)
    _cover(places, low, 1.0 / side, covered)
    return side * float(np.sqrt(np.count_nonzero(covered) / len(places)))


@compiled
def _cover(places: Array, low: Array, per_m: float, covered: NDArray[np.bool_]) -> None:
    last = len(covered) - 1
    for i in range(len(places)):
        column = min(int((places[i, 0] - low[0]) * per_m), last)
        covered[column, min(int((places[i, 1] - low[1]) * per_m), last)] = True


def in_squares(places: Array, drift: Array, apart: float, corner: Array) -> Squares:
    """Sort places into squares of about as many places as one elimination takes.

    Parameters
    ----------
    places : array, shape (n, 2), m
    drift : array, shape (n, p)
        Drift there.
    apart : float, m
        What ``spacing`` says: of all places, when these are a band of them.
    corner : array, shape (2,), m
        A corner of the squares: with the same one, bands of a map are cut alike.
    """
    side = apart * np.sqrt(PLACES) if apart > 0.0 else 1.0
    x, y = np.ascontiguousarray(places[:, 0]), np.ascontiguousarray(places[:, 1])
    west, south = np.floor((places.min(0) - corner) / side)
    columns = int(np.floor((x.max() - corner[0]) / side) - west) + 1
    rows = int(np.floor((y.max() - corner[1]) / side) - south) + 1
    origin = corner + side * np.array([west, south])
    order, first = _sort(x, y, origin, 1.0 / side, columns, rows)
    some = np.flatnonzero(np.diff(first))
    centre = origin + side * (np.column_stack([some % columns, some // columns]) + 0.5)
    half = np.full(len(some), 0.5 * side)
    first = np.append(first[some], len(order))
    label = np.full(len(some), _NO_LABEL, np.int64)
    return Squares(x, y, np.ascontiguousarray(drift), order, first, centre, half, label)


def by_label(places: Array, drift: Array, labels: Whole) -> Squares:
    """Make one square of all places of each label, which are to be kriged without its data."""
    x, y = np.ascontiguousarray(places[:, 0]), np.ascontiguousarray(places[:, 1])
    order = np.argsort(labels, kind="stable")
    kinds, first = np.unique(labels[order], return_index=True)
    runs = [np.fmin.reduceat(c[order], first) for c in (x, y)]
    ends = [np.fmax.reduceat(c[order], first) for c in (x, y)]
    low, high = np.column_stack(runs), np.column_stack(ends)
    half = 0.5 * (high - low).max(1)
    first = np.append(first, len(order))
    return Squares(x, y, np.ascontiguousarray(drift), order, first, 0.5 * (low + high), half, kinds)


@compiled
def _sort(
    x: Array, y: Array, origin: Array, per_m: float, columns: int, rows: int
) -> tuple[Whole, Whole]:
    """Sort places by square, counting; return their order and where each square starts."""
    square = np.empty(len(x), np.int32)
    first = np.zeros(columns * rows + 1, np.int64)
    for i in range(len(x)):
        column = min(max(int((x[i] - origin[0]) * per_m), 0), columns - 1)
        row = min(max(int((y[i] - origin[1]) * per_m), 0), rows - 1)
        square[i] = row * columns + column
        first[square[i] + 1] += 1
    for s in range(columns * rows):
        first[s + 1] += first[s]
    following = first[:-1].copy()
    order = np.empty(len(x), np.int64)
    for i in range(len(x)):
        order[following[square[i]]] = i
        following[square[i]] += 1
    return order, first
