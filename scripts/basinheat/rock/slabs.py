"""Rock columns of all wells, cut into thin slabs: ragged arrays without a loop over wells.

Each well's column runs from depth 0 to a multiple of the step, with cuts at every multiple of the
step and at every top and base of its layers, so a slab lies in one layer (or in a gap) and in one
depth interval of the maps.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

_MM = 1000  # depths are compared in whole millimetres: cuts of different origin meet exactly
_WELL = 10**9


@dataclass(frozen=True)
class Slabs:
    """The s slabs of n wells, by well and depth.

    ``start`` (n + 1,): first slab of each well; ``well`` (s,): place of the well; ``top_m``,
    ``base_m`` (s,); ``layer`` (s,): place of the layer among those given, -1 in a gap.
    """

    start: Whole
    well: Whole
    top_m: Array
    base_m: Array
    layer: Whole

    @property
    def thickness_m(self) -> Array:
        """Thickness, (s,) m."""
        return self.base_m - self.top_m

    @property
    def middle_m(self) -> Array:
        """Depth of the middle, (s,) m."""
        return 0.5 * (self.base_m + self.top_m)

    def above(self, values: Array) -> Array:
        """Sum the values, (s, ...), of all slabs of the well above each slab."""
        total = np.cumsum(values, axis=0) - values
        return total - total[self.start[self.well]]

    def at(self, well: Whole, depth_m: Array) -> Whole:
        """Return the slab that holds a depth of a well; a cut belongs to the slab above it."""
        key = _key(self.well, self.top_m)
        wanted = _key(well, depth_m)
        return np.maximum(np.searchsorted(key, wanted, side="left") - 1, self.start[well])


def cut(
    deepest_m: Array, step_m: float, layer_well: Whole, layer_top_m: Array, layer_base_m: Array
) -> Slabs:
    """Cut the columns of all wells into slabs.

    Parameters
    ----------
    deepest_m : ndarray, shape (n,), m
        Depth each column must reach.
    step_m : float, m
        Largest thickness of a slab.
    layer_well : ndarray, shape (l,)
        Well of each layer; layers are sorted by well and top and do not overlap.
    layer_top_m, layer_base_m : ndarray, shape (l,), m

    Returns
    -------
    Slabs

    Examples
    --------
    >>> one = cut(np.array([120.0]), 50.0, np.array([0]), np.array([20.0]), np.array([70.0]))
    >>> one.top_m.tolist(), one.layer.tolist()
    ([0.0, 20.0, 50.0, 70.0, 100.0], [-1, 0, 0, -1, -1])
    """
    wells = np.arange(len(deepest_m))
    steps = np.maximum(np.ceil(np.asarray(deepest_m) / step_m - 1e-9), 1).astype(np.int64)
    counted = np.arange((steps + 1).sum()) - np.repeat(np.cumsum(steps + 1) - steps - 1, steps + 1)
    floor = steps * step_m
    grid = _key(np.repeat(wells, steps + 1), counted * step_m)
    tops = _key(layer_well, np.minimum(layer_top_m, floor[layer_well]))
    bases = _key(layer_well, np.minimum(layer_base_m, floor[layer_well]))
    key = np.sort(np.concatenate([grid, tops, bases]))
    key = key[np.r_[True, np.diff(key) > 0]]  # np.unique hashes whole numbers: three times slower
    well, depth = key // _WELL, (key % _WELL) / _MM
    here = well[1:] == well[:-1]
    top_key, base_key = key[:-1][here], key[1:][here]
    slab_well = well[:-1][here]
    layer = np.full(len(top_key), -1, np.int64)
    if len(tops):
        candidate = np.maximum(np.searchsorted(tops, top_key, side="right") - 1, 0)
        inside = (tops[candidate] <= top_key) & (base_key <= bases[candidate])
        layer = np.where(inside, candidate, -1)
    start = np.searchsorted(slab_well, np.arange(len(deepest_m) + 1))
    return Slabs(start, slab_well, depth[:-1][here], depth[1:][here], layer)


def overlapping(
    well: Whole, top_m: Array, base_m: Array, tolerance_m: float = 0.01
) -> NDArray[np.bool_]:
    """Find the layers that must go so that no two of a well overlap; the upper one stays.

    Parameters
    ----------
    well : ndarray, shape (l,)
        Well of each layer, sorted by well and top.
    top_m, base_m : ndarray, shape (l,), m

    Returns
    -------
    ndarray of bool, shape (l,)
    """
    kept = np.arange(len(well))
    while len(kept) > 1:
        follows = well[kept][1:] == well[kept][:-1]
        over = np.r_[False, follows & (top_m[kept][1:] < base_m[kept][:-1] - tolerance_m)]
        if not over.any():
            break
        # a layer that overlaps one that goes itself may stay: take the first of each run only
        first = over & ~np.r_[False, over[:-1]]
        kept = kept[~first]
    out = np.ones(len(well), bool)
    out[kept] = False
    return out


def _key(well: Whole, depth_m: Array) -> Whole:
    """Return whole numbers that order wells and, within a well, depths."""
    return np.asarray(well, np.int64) * _WELL + np.rint(np.asarray(depth_m) * _MM).astype(np.int64)
