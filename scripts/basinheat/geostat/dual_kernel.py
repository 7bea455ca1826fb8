"""Covariances of places with all data times a few columns, compiled: no block of both is held."""

from __future__ import annotations

from functools import partial

import numpy as np
from numpy.typing import NDArray

from basinheat.geostat.compiled import compiled
from basinheat.geostat.kernels import covariances, numbers_of
from basinheat.geostat.models import Covariance
from basinheat.geostat.threads import run_tasks

Array = NDArray[np.float64]

_RUN = 256  # places at a time: their sums stay in the fast memory


def covariance_times(covariance: Covariance, places: Array, xy: Array, columns: Array) -> Array:
    """Return C(places, xy) @ columns.

    Parameters
    ----------
    covariance : Covariance
    places, xy : arrays, shapes (cells, 2) and (n, 2), m
    columns : array, shape (n, r)

    Returns
    -------
    array, shape (cells, r)
    """
    scaled, data = covariance.isotropic(places), covariance.isotropic(xy)
    sums = np.zeros((len(scaled), columns.shape[1]))
    px, py, x, y = (np.ascontiguousarray(column) for column in (*scaled.T, *data.T))
    columns = np.ascontiguousarray(columns)
    task = partial(_sum_some, px, py, x, y, columns, numbers_of(covariance), sums)
    run_tasks(task, -(-len(scaled) // _RUN))
    return sums


@compiled
def _sum_some(
    px: Array,
    py: Array,
    x: Array,
    y: Array,
    columns: Array,
    model: tuple[int, float, float],
    sums: Array,
    first: int,
    step: int,
) -> None:
    """Sum over all data, for the runs of places first, first + step, ..."""
    row = np.empty(_RUN)
    held = np.empty((columns.shape[1], _RUN))
    for run in range(first, (len(px) + _RUN - 1) // _RUN, step):
        low, high = run * _RUN, min((run + 1) * _RUN, len(px))
        count = high - low
        held[:] = 0.0
        for i in range(len(x)):
            covariances(row[:count], px[low:high], py[low:high], x[i], y[i], *model)
            for j in range(columns.shape[1]):
                weight = columns[i, j]
                sum_of = held[j]
                for k in range(count):
                    sum_of[k] += weight * row[k]
        for k in range(count):
            for j in range(columns.shape[1]):
                sums[low + k, j] = held[j, k]
