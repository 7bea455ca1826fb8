"""What kriging is judged against: blocks that are left out together, and plain baselines."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.spatial import cKDTree

from basinheat.geostat.data import as_places, as_values

Array = NDArray[np.float64]


def blocks(xy: ArrayLike, size_m: float) -> NDArray[np.int64]:
    """Label the square block that each place lies in.

    Parameters
    ----------
    xy : array, shape (n, 2), m
        Easting, northing.
    size_m : float, m
        Side of the blocks, counted from the south-west corner of the data.

    Returns
    -------
    array of int, shape (n,)
        Labels from 0, for ``GlobalKriging.leave_block_out``.
    """
    places = as_places(xy)
    squares = np.floor((places - places.min(0)) / size_m).astype(np.int64)
    _, labels = np.unique(squares, axis=0, return_inverse=True)
    return np.asarray(labels, np.int64).ravel()


def baselines(
    xy: ArrayLike, values: ArrayLike, neighbours: int = 8, power: float = 2.0
) -> dict[str, float | None]:
    """Leave-one-out RMSE of predictors that kriging must beat.

    Parameters
    ----------
    xy : array, shape (n, 2), m
        Easting, northing.
    values : array, shape (n,), value units
        Data.
    neighbours, power : int, float
        Of inverse-distance weighting.

    Returns
    -------
    dict
        RMSE of ``mean``, ``nearest_well``, ``inverse_distance``, ``linear_trend``; None where
        there are too few wells for a predictor.
    """
    data = as_values(values, len(as_places(xy)))
    predicted = predict_plainly(xy, data, neighbours, power)
    return {name: _rmse(guess - data) for name, guess in predicted.items()}


def predict_plainly(
    xy: ArrayLike, values: ArrayLike, neighbours: int = 8, power: float = 2.0
) -> dict[str, Array]:
    """Return each datum as the plain predictors make it from the others, NaN where they cannot."""
    places = as_places(xy)
    data = as_values(values, len(places))
    distance, others = _nearest(places, min(neighbours, len(places) - 1))
    return {
        "mean": _left_out(data, np.ones((len(data), 1))),
        "nearest_well": _weighted(data, distance[:, :1], others[:, :1], power),
        "inverse_distance": _weighted(data, distance, others, power),
        "linear_trend": _left_out(data, _plane(places)),
    }


def _nearest(xy: Array, k: int) -> tuple[Array, NDArray[np.int64]]:
    """Return distances and rows of the k nearest others; a well is never its own neighbour."""
    rows = np.arange(len(xy))[:, None]
    if k < 1:
        return np.empty((len(xy), 0)), np.empty((len(xy), 0), np.int64)
    distance, near = cKDTree(xy).query(xy, k=k + 1)
    # among wells that share a place the well itself need not come first, or at all
    own = near == rows
    own[~own.any(1), -1] = True
    return distance[~own].reshape(len(xy), k), near[~own].reshape(len(xy), k)


def _weighted(data: Array, distance: Array, others: NDArray[np.int64], power: float) -> Array:
    if not distance.shape[1]:
        return np.full(len(data), np.nan)
    nearest = distance.min(1, keepdims=True)
    # relative to the nearest: no overflow, and wells at the very place take all the weight
    with np.errstate(divide="ignore", invalid="ignore"):
        weights = np.where(nearest > 0, (nearest / distance) ** power, distance == 0)
    return np.asarray((weights * data[others]).sum(1) / weights.sum(1))


def _plane(xy: Array) -> Array:
    centred = xy - xy.mean(0)
    return np.column_stack([np.ones(len(xy)), centred / max(np.abs(centred).max(), 1e-300)])


def _left_out(data: Array, columns: Array) -> Array:
    """Leave-one-out prediction by least squares, closed form e_i / (1 - leverage_i)."""
    if np.linalg.matrix_rank(columns) < columns.shape[1]:
        return np.full(len(data), np.nan)
    basis, _ = np.linalg.qr(columns)
    free = 1.0 - (basis**2).sum(1)
    told = free > 1e-9
    left = np.where(told, data - basis @ (basis.T @ data), np.nan)
    return np.asarray(data - left / np.where(told, free, 1.0))


def _rmse(left: Array) -> float | None:
    finite = left[np.isfinite(left)]
    return float(np.sqrt((finite**2).mean())) if len(finite) else None
