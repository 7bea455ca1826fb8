"""What kriging by tiles takes, writes and works with, as compiled loops can hand it on."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from basinheat.geostat.search_tree import Tree

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

PLACES = 256  # places of one elimination at most: its table then stays in the fast memory


class Data(NamedTuple):
    """What is known: data in the order of the tree, and the covariance.

    Parameters
    ----------
    tree : Tree
    few : Tree
        Of some of the data, spread evenly.
    row_of_few : array, shape (few,)
        Place of each of these in the tree.
    noise : array, shape (n,), value units squared
        Nugget and error variance.
    columns : array, shape (n, v + q), value units
        What is left of v values, then the q effects: drift, and loadings of shared sources.
    root : array, shape (q, q)
        R with R^T R the posterior covariance of the effects.
    model, scale, sill : int, float, float
        As ``kernels.covariances`` takes them.
    """

    tree: Tree
    few: Tree
    row_of_few: Whole
    noise: Array
    columns: Array
    root: Array
    model: int
    scale: float
    sill: float


class Squares(NamedTuple):
    """Places in squares: those of square s are ``order[first[s]:first[s + 1]]``.

    Parameters
    ----------
    x, y : arrays, shape (places,), m
    drift : array, shape (places, p)
        The first p of the q effects there; shared sources have none.
    order, first : arrays, shapes (places,) and (squares + 1,)
    centre : array, shape (squares, 2), m
    half : array, shape (squares,), m
        Half the side.
    label : array, shape (squares,)
        Data of this label are not to be used.
    """

    x: Array
    y: Array
    drift: Array
    order: Whole
    first: Whole
    centre: Array
    half: Array
    label: Whole


class Reach(NamedTuple):
    """Which data a tile takes: every place's ``nearest``, ``most`` at most, and some beyond.

    The ``beyond`` are the nearest of the evenly spread few that are not among those: where wells
    cluster, the nearest all lie on one side, and noise keeps them from screening the rest. A
    square whose data are more is cut in four, down to ``smallest`` (half a side, m); then each of
    its places is kriged by itself, from its own ``nearest``.
    """

    nearest: int
    most: int
    beyond: int
    smallest: float


class Told(NamedTuple):
    """What is written for each place.

    Parameters
    ----------
    mean, variance : arrays, shapes (places, v) and (places,)
    open : array, shape (places, q) or (0, q)
        Open effects, if wanted.
    used : array, shape (places,) or (0,)
        Number of data, if wanted.
    """

    mean: Array
    variance: Array
    open: Array
    used: Whole


class Space(NamedTuple):
    """Memory of a task, used again for each of its tiles."""

    table: Array
    x: Array
    y: Array
    square: Array
    found: Whole
    beyond: Whole
