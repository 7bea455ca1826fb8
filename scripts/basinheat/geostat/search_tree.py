"""The nearest data of a place, found by a tree that compiled loops can walk."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from basinheat.geostat.compiled import compiled

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

_LEAF = 12  # data a leaf holds at most: fewer cost steps, more cost distances
_DEEP = 128  # twice the levels that any number of data could need


class Tree(NamedTuple):
    """Data sorted so that each node of a binary tree is a run of them; leaves come last.

    Node i has the children 2 i + 1 and 2 i + 2.

    Parameters
    ----------
    x, y : arrays, shape (n,), m
        Sorted.
    start, stop : arrays, shape (nodes,)
        Run of each node.
    box : array, shape (nodes, 4), m
        West, south, east, north.
    rank, label : arrays, shape (n,)
        A search passes over data whose rank is not below the asked one, or of the asked label.
    """

    x: Array
    y: Array
    start: Whole
    stop: Whole
    box: Array
    rank: Whole
    label: Whole


def plant(xy: Array) -> tuple[Tree, Whole]:
    """Build the tree of places, shape (n, 2); with it the row of each of its data."""
    x, y = np.ascontiguousarray(xy[:, 0]), np.ascontiguousarray(xy[:, 1])
    levels = 0
    while len(xy) > _LEAF << levels:
        levels += 1
    nodes = (2 << levels) - 1
    order = np.arange(len(xy))
    start, stop, box = np.zeros(nodes, np.int64), np.zeros(nodes, np.int64), np.zeros((nodes, 4))
    _split_nodes(x, y, order, start, stop, box)
    nothing = np.zeros(len(xy), np.int64)
    return Tree(x[order], y[order], start, stop, box, nothing, nothing), order


def blocks(tree: Tree) -> tuple[Whole, Whole]:
    """Return where runs of close data start and stop: the nodes two levels above the leaves."""
    last = len(tree.start) // 4 if len(tree.start) >= 7 else 1
    first = last // 2
    return tree.start[first:last], tree.stop[first:last]


@compiled
def _split_nodes(x: Array, y: Array, order: Whole, start: Whole, stop: Whole, box: Array) -> None:
    """Sort ``order`` and fill in the nodes, each cut at the median of its longer side."""
    nodes = len(start)
    stop[0] = len(x)
    for node in range(nodes):
        low, high = start[node], stop[node]
        west, south, east, north = np.inf, np.inf, -np.inf, -np.inf
        for i in range(low, high):
            west, east = min(west, x[order[i]]), max(east, x[order[i]])
            south, north = min(south, y[order[i]]), max(north, y[order[i]])
        box[node, 0], box[node, 1], box[node, 2], box[node, 3] = west, south, east, north
        left = 2 * node + 1
        if left >= nodes:
            continue
        middle = (low + high) // 2
        _halve(x if east - west >= north - south else y, order, low, high - 1, middle)
        start[left], stop[left] = low, middle
        start[left + 1], stop[left + 1] = middle, high


@compiled
def _halve(key: Array, order: Whole, low: int, high: int, middle: int) -> None:
    """Sort so far that what lies before ``middle`` is not above what lies after (Hoare 1961)."""
    while low < high:
        pivot = key[order[(low + high) // 2]]
        i, j = low, high
        while i <= j:
            while key[order[i]] < pivot:
                i += 1
            while key[order[j]] > pivot:
                j -= 1
            if i <= j:
                order[i], order[j] = order[j], order[i]
                i += 1
                j -= 1
        if middle <= j:
            high = j
        elif middle >= i:
            low = i
        else:
            return


@compiled
def _off_box(box: Array, node: int, x: float, y: float) -> float:
    """Square of the distance from a place to a node's box."""
    dx = max(box[node, 0] - x, 0.0, x - box[node, 2])
    dy = max(box[node, 1] - y, 0.0, y - box[node, 3])
    return dx * dx + dy * dy


@compiled
def nearest(
    tree: Tree,
    x: float,
    y: float,
    k: int,
    beyond: float,
    before: int,
    label: int,
    square: Array,
    found: Whole,
) -> int:
    """Find the k nearest data of a place.

    Parameters
    ----------
    tree : Tree
    x, y : float, m
    k : int
    beyond : float, m2
        Square of a radius: what lies within is passed over; -1 for nothing.
    before, label : int
        Data of a rank from ``before`` on, and data of this label, are passed over.
    square, found : arrays, shape (>= k,)
        Written: squares of the distances, and places in the tree; a heap, the farthest first.

    Returns
    -------
    int
        Data found: k, or fewer where there are fewer.
    """
    held = 0
    nodes = len(tree.start)
    stack = np.empty(_DEEP, np.int64)
    stack[0] = 0
    depth = 1
    while depth:
        depth -= 1
        node = stack[depth]
        if held == k and _off_box(tree.box, node, x, y) >= square[0]:
            continue
        left = 2 * node + 1
        if left < nodes:
            near, far = left, left + 1
            if _off_box(tree.box, far, x, y) < _off_box(tree.box, near, x, y):
                near, far = far, near
            stack[depth], stack[depth + 1] = far, near
            depth += 2
            continue
        for i in range(tree.start[node], tree.stop[node]):
            if tree.rank[i] >= before or tree.label[i] == label:
                continue
            dx, dy = tree.x[i] - x, tree.y[i] - y
            distance = dx * dx + dy * dy
            if distance <= beyond:
                continue
            if held < k:
                held += 1
                _sift_up(square, found, held - 1, distance, i)
            elif distance < square[0]:
                _sift_down(square, found, held, distance, i)
    return held


@compiled
def _sift_up(square: Array, found: Whole, place: int, distance: float, i: int) -> None:
    while place > 0:
        parent = (place - 1) // 2
        if square[parent] >= distance:
            break
        square[place], found[place] = square[parent], found[parent]
        place = parent
    square[place], found[place] = distance, i


@compiled
def _sift_down(square: Array, found: Whole, held: int, distance: float, i: int) -> None:
    place = 0
    while True:
        child = 2 * place + 1
        if child >= held:
            break
        if child + 1 < held and square[child + 1] > square[child]:
            child += 1
        if square[child] <= distance:
            break
        square[place], found[place] = square[child], found[child]
        place = child
    square[place], found[place] = distance, i


@compiled
def within(
    tree: Tree, x: float, y: float, radius: float, label: int, most: int, found: Whole
) -> int:
    """Find all data within a radius; return their number, or most + 1 when there are more."""
    held = 0
    nodes = len(tree.start)
    limit = radius * radius
    stack = np.empty(_DEEP, np.int64)
    stack[0] = 0
    depth = 1
    while depth:
        depth -= 1
        node = stack[depth]
        if _off_box(tree.box, node, x, y) > limit:
            continue
        left = 2 * node + 1
        if left < nodes:
            stack[depth], stack[depth + 1] = left + 1, left
            depth += 2
            continue
        for i in range(tree.start[node], tree.stop[node]):
            dx, dy = tree.x[i] - x, tree.y[i] - y
            if dx * dx + dy * dy > limit or tree.label[i] == label:
                continue
            if held == most:
                return most + 1
            found[held] = i
            held += 1
    return held
