"""The basin's mean section: what is assumed where a well's own layers are silent."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

FEWEST_PAIRS = 5
UNKNOWN_SPREAD = 0.15  # of mean 1/k between wells where too few show it; common practice, no source
UNKNOWN_LENGTH_M = 1000.0  # and its correlation down the column, likewise


@dataclass(frozen=True)
class Section:
    """Mean section of the basin, in b bins of depth.

    ``share`` (b, m): share of each lithology, sum 1; ``step_m``: thickness of a bin; ``known_m``:
    depth that enough wells' layers reach, below it other rock is assumed; ``blend`` (b, m): by how
    much a lithology conducts better than in series, for being mixed within layers; None: not.
    """

    share: Array
    step_m: float
    known_m: float
    blend: Array | None = None

    def at(self, depth_m: Array) -> Array:
        """Return the shares at depths, (s, m); below the last bin those of the last."""
        return self.share[self._bin(depth_m)]

    def blend_at(self, depth_m: Array, lithology: Whole) -> Array:
        """Return what mixing within layers makes of conductivities, (s,), at depths."""
        if self.blend is None:
            return np.ones(len(lithology))
        return self.blend[self._bin(depth_m), lithology]

    def _bin(self, depth_m: Array) -> Whole:
        place = np.floor(np.asarray(depth_m) / self.step_m).astype(int)
        return np.clip(place, 0, len(self.share) - 1)


def uniform(lithology: int, count: int) -> Section:
    """Return a section of one lithology of ``count`` all the way down."""
    return Section(np.eye(count)[[lithology]], 1.0, np.inf)


def mean_section(
    top_m: Array,
    base_m: Array,
    lithology: Whole,
    count: int,
    step_m: float,
    enough: int,
    share: Array | None = None,
    resistive: Array | None = None,
) -> Section:
    """Average the layers of all wells by depth.

    Parameters
    ----------
    top_m, base_m : ndarray, shape (l,), m
        Layers of all wells, l > 0; those of one well do not overlap.
    lithology : ndarray, shape (l,)
        Place of the lithology, 0 to count - 1.
    count : int
        Number of lithologies m.
    step_m : float, m
        Thickness of the bins.
    enough : int
        Wells that must reach a bin for it to be known.
    share : ndarray, shape (l,), optional
        Of a layer's thickness, where a layer stands once for each of its lithologies; default 1.
    resistive : ndarray, shape (l,), optional
        Resistance over that in series, where lithologies of a layer are mixed otherwise.

    Returns
    -------
    Section
        Bins that no layer reaches have the shares of the nearest that one does.
    """
    first = np.floor(top_m / step_m).astype(np.int64)
    bins = np.maximum(np.ceil(base_m / step_m).astype(np.int64) - first, 1)
    layer = np.repeat(np.arange(len(bins)), bins)
    place = first[layer] + np.arange(len(layer)) - np.repeat(np.cumsum(bins) - bins, bins)
    upper = np.maximum(top_m[layer], place * step_m)
    inside = np.maximum(np.minimum(base_m[layer], (place + 1) * step_m) - upper, 0.0)
    inside = inside if share is None else inside * share[layer]
    depth_bins = int(place.max()) + 1
    thickness = np.bincount(place * count + lithology[layer], inside, depth_bins * count)
    thickness = thickness.reshape(depth_bins, count)
    total = thickness.sum(1)
    known = np.flatnonzero(total > 0.0)
    nearest = known[np.abs(np.arange(depth_bins)[:, None] - known).argmin(1)]
    reached = np.flatnonzero(total >= (enough - 0.5) * step_m)
    known_m = (reached.max() + 1) * step_m if len(reached) else 0.0
    blend = None
    if resistive is not None:
        flat = place * count + lithology[layer]
        mixed = np.bincount(flat, inside * resistive[layer], depth_bins * count)
        mixed = mixed.reshape(depth_bins, count)[nearest]
        blend = np.where(mixed > 0.0, thickness[nearest] / np.where(mixed > 0.0, mixed, 1.0), 1.0)
    share_of = thickness[nearest] / total[nearest][:, None]
    return Section(share_of, step_m, float(known_m), blend)


def spread(own_slowness: Array, mean_slowness: Array, interval_m: float) -> Array:
    """Estimate how 1/k of depth intervals varies from well to well.

    Parameters
    ----------
    own_slowness : ndarray, shape (n, i), m K/W
        Mean 1/k of each interval from the well's own layers, NaN where they do not show it.
    mean_slowness : ndarray, shape (i,), m K/W
        Mean 1/k of the section, for intervals that too few wells show.
    interval_m : float, m

    Returns
    -------
    ndarray, shape (i, i), (m K/W)^2
        Covariance between intervals, without negative eigenvalues.
    """
    intervals = np.arange(len(mean_slowness)) * interval_m
    apart = np.abs(intervals[:, None] - intervals[None, :])
    guess = UNKNOWN_SPREAD**2 * np.outer(mean_slowness, mean_slowness)
    guess *= np.exp(-apart / UNKNOWN_LENGTH_M)
    here = np.isfinite(own_slowness)
    count = here.sum(0)
    centre = np.where(here, own_slowness, 0.0).sum(0) / np.maximum(count, 1)
    centred = np.where(here, own_slowness - centre, 0.0)
    pairs = here.T.astype(float) @ here
    measured = centred.T @ centred / np.maximum(pairs - 1.0, 1.0)
    covariance = np.where(pairs >= FEWEST_PAIRS, measured, guess)
    values, vectors = np.linalg.eigh(covariance)
    return (vectors * np.maximum(values, 0.0)) @ vectors.T
