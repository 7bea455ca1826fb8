"""All pairs of wells by distance, some at a time: memory does not grow with their number."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

import numpy as np
from numpy.typing import NDArray
from scipy.spatial.distance import cdist

Array = NDArray[np.float64]
# places (n, 2); values (n,); error variances (n,); shared parts (n, m) in units of value
Table = tuple[Array, Array, Array, Array]

_PAIRS_AT_A_TIME = 1_000_000
_COMPILED = 20_000_000  # pairs from which a compiled loop repays loading the compiler
_FEWEST_PAIRS = 30  # Journel & Huijbregts (1978), Mining Geostatistics, section III.A


def pairs_within(table: Table, edges: Array) -> Iterator[tuple[Array, ...]]:
    """Yield lag, distance, absolute difference and known semivariance of the pairs, in blocks.

    The places must be sorted by easting: pairs too far east are never looked at. Lags are open
    below and closed above, as is common; wells that share a place go to the first lag.
    """
    xy, values, errors, shared = table
    n, start = len(xy), 0
    while start < n - 1:
        stop = min(n, start + max(1, _PAIRS_AT_A_TIME // (n - start)))
        end = int(np.searchsorted(xy[:, 0], xy[stop - 1, 0] + edges[-1], side="right"))
        distance = cdist(xy[start:stop], xy[start:end])
        near = (distance <= edges[-1]) & (distance >= edges[0])
        near &= np.arange(start, end) > np.arange(start, stop)[:, None]
        i, j = np.nonzero(near)
        h = distance[i, j]
        i, j = i + start, j + start
        known = 0.5 * (errors[i] + errors[j])
        if shared.shape[1]:
            known += 0.5 * cdist(shared[start:stop], shared[start:end], "sqeuclidean")[near]
        lag = np.maximum(np.searchsorted(edges, h, side="left") - 1, 0)
        yield lag, h, np.abs(values[i] - values[j]), known
        start = stop


def accumulate(table: Table, edges: Array, root: bool) -> tuple[Array, Array, Array, Array]:
    """Sum pairs, distance, core and known semivariance by lag.

    The core is the square of the difference, or with ``root`` the root of its absolute value.
    """
    if len(table[0]) ** 2 // 2 > _COMPILED:
        from basinheat.geostat.pair_kernel import sum_pairs

        pairs, distance, core, known = sum_pairs(*table, edges, root)
        return pairs, distance, core, known
    total = np.zeros((4, len(edges) - 1))
    for lag, h, difference, known in pairs_within(table, edges):
        core = np.sqrt(difference) if root else difference**2
        for row, weight in enumerate((None, h, core, known)):
            total[row] += np.bincount(lag, weight, total.shape[1])
    return total[0], total[1], total[2], total[3]


def groups_of(pairs: NDArray[Any]) -> NDArray[np.int64]:
    """Return the group of each lag: neighbours with few pairs go together."""
    groups, group, held = np.zeros(len(pairs), int), 0, 0.0
    for k, count in enumerate(pairs):
        if held >= _FEWEST_PAIRS:
            group, held = group + 1, 0.0
        groups[k] = group
        held += count
    if held < _FEWEST_PAIRS and group > 0:  # the last lags join the group before them
        groups[groups == group] = group - 1
    return groups
