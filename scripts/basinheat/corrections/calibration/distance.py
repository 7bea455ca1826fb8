"""How unlike the temperatures of two wells are, by the distance between them."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.spatial import cKDTree

Floats = NDArray[np.float64]

# Pairs of anchored wells up to three times the reach of the calibration tell of its growth.
_REACH = 3.0
# What is assumed counts as so many pairs of anchored wells; none counts for more than 3 sigma.
_PRIOR_PAIRS, _MOST = 5.0, 9.0


def growth_per_m(
    place_m: Floats, rise_ratio: Floats, variance: Floats, reach_m: float, share: float
) -> float:
    """Return by how much the relative variance of a difference of two wells grows per metre.

    Close to each other, half the mean squared difference grows in proportion to distance, as in
    the exponential and the spherical covariance.

    Parameters
    ----------
    place_m : (n, 2) array, m
        Places of anchored wells.
    rise_ratio : (n,) array
        Rise above the surface over the region's at that depth.
    variance : (n,) array
        Its variance from the anchors' own errors.
    reach_m : float, m
        Largest distance of a pair.
    share : float
        What is assumed: standard deviation at the reach, relative to the rise.

    Examples
    --------
    >>> import numpy as np
    >>> growth = growth_per_m(np.zeros((0, 2)), np.zeros(0), np.zeros(0), 5000.0, 0.05)
    >>> round(float(np.sqrt(growth * 5000.0)), 6)
    0.05
    """
    assumed = share**2 / reach_m
    use = np.isfinite(place_m).all(1) & np.isfinite(rise_ratio)
    if use.sum() < 2 or assumed == 0.0:
        return assumed
    place, ratio, noise = place_m[use], rise_ratio[use] / np.median(rise_ratio[use]), variance[use]
    pairs = cKDTree(place).query_pairs(_REACH * reach_m, output_type="ndarray")
    first, second = pairs[np.lexsort(pairs.T[::-1])].T
    distance = np.hypot(*(place[first] - place[second]).T)
    # Of two wells at one place the difference is all error: nothing to learn from.
    far = distance > 0.1 * reach_m
    first, second, distance = first[far], second[far], distance[far]
    expected = assumed * distance + noise[first] + noise[second]
    square = np.minimum((ratio[first] - ratio[second]) ** 2, _MOST * expected)
    # By weights of the expected squares: short ways and poor anchors tell little.
    weight = (assumed * distance / expected) ** 2
    seen = (weight * (square - noise[first] - noise[second]) / distance).sum()
    found = (_PRIOR_PAIRS * assumed + seen) / (_PRIOR_PAIRS + weight.sum())
    return float(max(found, 0.1 * assumed))
