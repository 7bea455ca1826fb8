"""Drift and shared sources, estimated once for the whole map from any number of data.

With all data in one system the estimate needs K^-1, of n x n numbers. Here the data follow one
another in blocks, each conditioned on the nearest data of the blocks before it: a product of small
Gaussian densities that stands for the likelihood (Vecchia 1988; in blocks: Katzfuss & Guinness
2021), whose normal equations are summed block by block. It is a proper density for any number of
conditioning data, and exact when they are all.
"""

from __future__ import annotations

from functools import partial
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from basinheat.geostat.compiled import compiled
from basinheat.geostat.elimination import eliminate
from basinheat.geostat.kernels import covariances
from basinheat.geostat.search_tree import Tree, blocks, nearest
from basinheat.geostat.threads import TASKS, run_tasks

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

CONDITIONING = 128  # earlier data that a block knows of
_NO_LABEL = -1


class Effects(NamedTuple):
    """Posterior of the q effects: means (q, v), for each of v values, and covariance (q, q)."""

    mean: Array
    covariance: Array


def estimate(
    tree: Tree,
    noise: Array,
    values: Array,
    columns: Array,
    model: tuple[int, float, float],
    unknown: int,
    conditioning: int = CONDITIONING,
) -> tuple[Effects | None, int]:
    """Estimate the effects of data by generalised least squares over blocks of neighbours.

    Parameters
    ----------
    tree : Tree
        Of the data; its ranks and labels are not used.
    noise : array, shape (n,), value units squared
        Nugget and error variance, in the tree's order.
    values, columns : arrays, shapes (n, v) and (n, q), value units
        Values, and what a unit of each effect is at each datum.
    model : int, float, float
        Model, scale and sill of ``kernels.covariances``.
    unknown : int
        The first so many effects, the drift, are unknown; the others have a unit normal prior.
    conditioning : int
        Earlier data that a block is conditioned on.

    Returns
    -------
    Effects or None, int
        None, and a datum that others determine; otherwise the effects, and -1.

    References
    ----------
    Vecchia (1988), J. R. Stat. Soc. B 50, 297-312. Katzfuss & Guinness (2021), Statistical
    Science 36, 124-141. Guinness (2018), Technometrics 60, 415-429 (orders that start coarse).
    """
    start, stop = blocks(tree)
    order = coarse_to_fine(len(start))
    rank = np.empty(len(tree.x), np.int64)
    place_of = np.argsort(order)
    rank[:] = np.repeat(place_of, stop - start)
    both = np.column_stack([columns, values])
    sums = np.zeros((TASKS, both.shape[1], both.shape[1]))
    faults = np.full(TASKS, -1, np.int64)
    ranked = tree._replace(rank=rank, label=np.zeros(len(rank), np.int64))
    runs = start[order], stop[order]
    task = partial(_sum_blocks, ranked, noise, both, model, *runs, conditioning, sums, faults)
    run_tasks(task, len(order))
    if faults.max() >= 0:
        return None, int(faults.max())
    return _solve(sums.sum(0), columns.shape[1], unknown), -1


def coarse_to_fine(count: int) -> Whole:
    """Return an order of 0 .. count - 1 (a power of 2) whose beginnings are spread evenly."""
    order = np.zeros(1, np.int64)
    while len(order) < count:
        order = np.concatenate([2 * order, 2 * order + 1])
    return order


def _solve(normal: Array, q: int, unknown: int) -> Effects:
    precision = normal[:q, :q] + np.diag(np.arange(q) >= unknown)
    size = np.sqrt(np.diag(precision))
    scaled = np.linalg.inv(precision / np.outer(size, size))
    covariance = scaled / np.outer(size, size)
    covariance = 0.5 * (covariance + covariance.T)
    return Effects(covariance @ normal[:q, q:], covariance)


@compiled
def _sum_blocks(
    tree: Tree,
    noise: Array,
    columns: Array,
    model: tuple[int, float, float],
    start: Whole,
    stop: Whole,
    conditioning: int,
    sums: Array,
    faults: Whole,
    first: int,
    step: int,
) -> None:
    """Sum the whitened products of the columns over the blocks first, first + step, ..."""
    extra = columns.shape[1]
    high = conditioning + (stop - start).max()
    table = np.empty((high, high + extra))
    x, y = np.empty(high + extra), np.empty(high + extra)
    square, found = np.empty(conditioning), np.empty(high, np.int64)
    for block in range(first, len(start), step):
        low, end = start[block], stop[block]
        middle_x, middle_y = tree.x[low:end].mean(), tree.y[low:end].mean()
        known = nearest(
            *(tree, middle_x, middle_y, conditioning, -1.0, block, _NO_LABEL, square, found)
        )
        rows = known + end - low
        for i in range(low, end):
            found[known + i - low] = i
        _fill(tree, noise, columns, model, found, rows, table, x, y)
        fault = eliminate(table, rows, rows, rows + extra, 1e-13 * model[2])
        if fault >= 0:
            faults[first] = found[fault]
            break
        for a in range(known, rows):
            for b in range(extra):
                for c in range(extra):
                    sums[first, b, c] += table[a, rows + b] * table[a, rows + c]


@compiled
def _fill(
    tree: Tree,
    noise: Array,
    columns: Array,
    model: tuple[int, float, float],
    found: Whole,
    rows: int,
    table: Array,
    x: Array,
    y: Array,
) -> None:
    for a in range(rows):
        x[a], y[a] = tree.x[found[a]], tree.y[found[a]]
    for a in range(rows):
        covariances(table[a, a:rows], x[a:rows], y[a:rows], x[a], y[a], *model)
        table[a, a] += noise[found[a]]
        for b in range(columns.shape[1]):
            table[a, rows + b] = columns[found[a], b]
