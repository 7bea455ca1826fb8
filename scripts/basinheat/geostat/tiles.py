"""Kriging variance from the nearest data, tile by tile: far data hardly change it.

The mean needs every datum and is cheap (one product with the dual weights); the variance costs n^2
a place, and what lies behind the nearest data is screened. So the variance of a tile of places is
taken from the data around the tile, all of its places in one system.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray
from scipy.spatial import cKDTree

from basinheat.geostat.gls import factorise
from basinheat.geostat.models import Covariance

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

NEAREST = 96  # data that every place of a tile sees, at least
WELLS_A_TILE = 6.0  # tiles hold about so many data: smaller ones repeat work, larger cost n^3
PLACES_A_TILE = 1024


def local_variance(
    xy: Array,
    covariance: Covariance,
    noise: Array,
    drift: Array,
    places: Array,
    drift_there: Array,
    nearest: int = NEAREST,
) -> Array:
    """Return the kriging variance of the structured part at places, from the nearest data.

    Parameters
    ----------
    xy : array, shape (n, 2), m
        Data.
    covariance : Covariance
        Structured covariance.
    noise : array, shape (n,), value units squared
        Nugget and error variance of each datum.
    drift, drift_there : arrays, shapes (n, p) and (places, p)
        Drift at data and places.
    places : array, shape (places, 2), m
        Where the variance is wanted.
    nearest : int
        Data that every place sees, at least.

    Returns
    -------
    array, shape (places,), value units squared
        Never below what all data would give; equal to it where n is not above ``nearest``.

    Raises
    ------
    NotPositiveDefiniteError
        When data determine one another exactly.

    Notes
    -----
    Shared sources are not in it: they are estimated once for the whole map.
    """
    scaled, wanted = covariance.isotropic(xy), covariance.isotropic(places)
    tree = cKDTree(scaled)
    variance = np.empty(len(places))
    for rows in _tiles(scaled, wanted):
        inside = wanted[rows]
        centre = 0.5 * (inside.min(0) + inside.max(0))
        reach = float(np.sqrt(((inside - centre) ** 2).sum(1).max()))
        near = _around(tree, centre, reach, min(nearest, len(xy)))
        variance[rows] = _one_tile(
            covariance, xy[near], noise[near], drift[near], places[rows], drift_there[rows]
        )
    return variance


def _around(tree: cKDTree, centre: Array, reach: float, nearest: int) -> Whole:
    """Return data that hold the ``nearest`` of every place within ``reach`` of the centre."""
    distance, _ = tree.query(centre, k=nearest)
    radius = float(np.max(distance)) + 2.0 * reach
    return np.sort(np.asarray(tree.query_ball_point(centre, radius * (1 + 1e-12)), np.int64))


def _one_tile(
    covariance: Covariance,
    xy: Array,
    noise: Array,
    drift: Array,
    places: Array,
    drift_there: Array,
) -> Array:
    matrix = covariance.between(xy, xy)
    matrix[np.diag_indices_from(matrix)] += noise
    columns = _told_apart(drift)
    factor = factorise(matrix, drift[:, columns])
    white = factor.whiten(covariance.between(places, xy).T, overwrite=True)
    open_drift = factor.solve_triangle(drift_there[:, columns].T) - factor.basis.T @ white
    variance = covariance.sill - np.einsum("ij,ij->j", white, white)
    return np.asarray(variance + np.einsum("ij,ij->j", open_drift, open_drift))


def _told_apart(drift: Array) -> Whole:
    """Return the drift's columns that these data can tell apart; the constant always."""
    varies = np.ptp(drift, axis=0) > 1e-9 * np.abs(drift).max(axis=0)
    varies[0] = True
    return np.flatnonzero(varies)


def _tiles(xy: Array, places: Array) -> Iterator[Whole]:
    """Cut places into squares that hold about as many data as a tile should."""
    low = places.min(0)
    area = float(np.prod(np.maximum(np.ptp(xy, axis=0), 1.0)))
    side = np.sqrt(area * WELLS_A_TILE / len(xy))
    square = np.floor((places - low) / side).astype(np.int64)
    order = np.lexsort([square[:, 0], square[:, 1]])
    ordered = square[order]
    new = np.flatnonzero((ordered[1:] != ordered[:-1]).any(axis=1)) + 1
    for rows in np.split(order, new):
        for start in range(0, len(rows), PLACES_A_TILE):
            yield rows[start : start + PLACES_A_TILE]
