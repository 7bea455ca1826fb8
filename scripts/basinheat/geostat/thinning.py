"""Fewer points that still tell near from far: for fits whose cost grows with n cubed."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.spatial import cKDTree

Array = NDArray[np.float64]


def spread(xy: Array, n_max: int) -> NDArray[np.int64]:
    """Choose points that cover the area and keep close pairs.

    Half are chosen one by one, each the farthest from those chosen (Gonzalez 1985); the other
    half are their nearest neighbours: without close pairs a fit cannot tell nugget from sill.

    Parameters
    ----------
    xy : array, shape (n, 2), m
        Places.
    n_max : int
        Points to keep.

    Returns
    -------
    array of int, shape (min(n, n_max),)
        Sorted rows; the same for the same points.
    """
    if len(xy) <= n_max:
        return np.arange(len(xy))
    chosen = np.zeros(len(xy), bool)
    distance = np.full(len(xy), np.inf)
    following = int(np.argmin(((xy - xy.mean(0)) ** 2).sum(1)))
    covering = []
    for _ in range((n_max + 1) // 2):
        covering.append(following)
        np.minimum(distance, ((xy - xy[following]) ** 2).sum(1), out=distance)
        following = int(np.argmax(distance))
    chosen[covering] = True
    _, neighbours = cKDTree(xy).query(xy[covering], k=min(len(xy), 16))
    for rank in range(1, neighbours.shape[1]):
        for row in neighbours[:, rank]:
            if chosen.sum() == n_max:
                return np.flatnonzero(chosen)
            chosen[row] = True
    rest = np.flatnonzero(~chosen)[: n_max - int(chosen.sum())]
    chosen[rest] = True
    return np.flatnonzero(chosen)
