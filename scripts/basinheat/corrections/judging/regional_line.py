"""A line through the temperatures of a whole region that is not tied to the surface."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import nnls

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

# Huber (1964), Robust estimation of a location parameter: 95 % efficiency.
_HUBER = 1.345
_ROUNDS = 20
# The slope varies from place to place as a constant, a plane or a parabola, with at least so many
# wells for each of its terms (no source).
_WELLS_PER_TERM = 10
_FEWEST_WELLS = 8
# Wells of one block share their heat flow beyond what the line knows: so many blocks along the
# longer side of the region; with fewer than so many in all, wells are the clusters (no source).
_BLOCKS, _FEWEST_BLOCKS = 12, 20
# Beyond this many parts of a well's own variance a squared residual says no more of variances.
_LARGEST_RATIO = 9.0
_LARGEST_PULL = 0.8


@dataclass(frozen=True)
class Line:
    """A regional line ``y = intercept + slope(place) x``.

    Parameters
    ----------
    intercept, intercept_std : float, unit of y
        Value at x = 0 and its standard uncertainty.
    slope : float, unit of y / unit of x
        Slope at the centre of the wells.
    influence : (n,) array
        What one unit of each datum adds to the intercept.
    """

    intercept: float
    intercept_std: float
    slope: float
    influence: Floats


def fit_line(x: Floats, y: Floats, well: Ints, xy: Floats) -> Line | None:
    """Fit a regional line robustly, its slope free to change with place.

    ``y = b0 + (s0 + s1 e + s2 n + s3 e² + s4 e n + s5 n²) x`` with e, n the place of the well.
    Huber weights on residuals over their own spread; variance grows with x as what the slope does
    from well to well; a well's data count together as one. The standard uncertainty is the
    sandwich of clustered least squares: whatever the data of a cluster share, it stays right. The
    clusters are square blocks of wells, or the wells themselves where blocks would be few.
    Nothing is random in it.

    Parameters
    ----------
    x, y : (n,) array
        Thermal resistance; temperature above the surface.
    well : (n,) array of int
        Well of each datum.
    xy : (n, 2) array, m
        Its place.

    Returns
    -------
    Line or None
        None with fewer than eight wells, or where x hardly varies.

    References
    ----------
    Huber (1964), Robust estimation of a location parameter. Liang & Zeger (1986), Longitudinal
    data analysis using generalized linear models, Biometrika 73 (variance of clustered data; from
    memory).

    Examples
    --------
    >>> import numpy as np
    >>> x = np.linspace(1.0, 3.0, 40)
    >>> line = fit_line(x, 2.0 + 30.0 * x, np.arange(40), np.zeros((40, 2)))
    >>> round(line.intercept, 6), round(line.slope, 6)
    (2.0, 30.0)
    """
    _, well = np.unique(well, return_inverse=True)
    wells = int(well.max(initial=-1)) + 1
    if wells < _FEWEST_WELLS or np.ptp(x) < 0.1 * np.abs(x).max():
        return None
    design = _design(x, xy, wells)
    share = 1.0 / np.bincount(well)[well]
    weight = share / np.maximum(x, np.median(x) * 0.25) ** 2
    for _ in range(_ROUNDS):
        coefficients = _solve(design, y, weight)
        residual = y - design @ coefficients
        variance = _variance(residual, x, share)
        limit = _HUBER * np.sqrt(variance)
        robust = np.minimum(1.0, limit / np.maximum(np.abs(residual), 1e-300))
        weight = share * robust / variance
    weighted = design * weight[:, None]
    hat = np.linalg.pinv(weighted.T @ design) @ weighted.T
    return Line(
        intercept=float(coefficients[0]),
        intercept_std=_std(design, residual, share / variance, limit, _blocks(xy, well)),
        slope=float(coefficients[1]),
        influence=hat[0],
    )


def _design(x: Floats, xy: Floats, wells: int) -> Floats:
    """Return the columns: one, x, and x times place."""
    centred = xy - xy.mean(0)
    e, n = (centred / max(np.abs(centred).max(), 1.0)).T
    terms = [np.ones_like(x), e, n, e * e, e * n, n * n]
    fits = [count for count in (1, 3, 6) if wells >= _WELLS_PER_TERM * count] or [1]
    kept = [term for term in terms[1 : fits[-1]] if np.ptp(term) > 0.0]
    return np.column_stack([np.ones_like(x), x, *(x * term for term in kept)])


def _blocks(xy: Floats, well: Ints) -> Ints:
    """Return the cluster of every datum."""
    side = max(float(np.ptp(xy, axis=0).max()) / _BLOCKS, 1.0)
    place = np.floor((xy - xy.min(0)) / side)
    blocks = np.unique(place, axis=0, return_inverse=True)[1].ravel()
    return blocks if blocks.max() + 1 >= _FEWEST_BLOCKS else well


def _std(design: Floats, residual: Floats, weight: Floats, limit: Floats, cluster: Ints) -> float:
    """Return the sandwich's standard uncertainty of the first coefficient.

    Huber's estimate answers to data inside the limit only, and a cluster of large leverage pulls
    the line towards itself: its part is raised by what it hides (as in the jackknife).
    """
    inside = weight * (np.abs(residual) <= limit)
    bread = np.linalg.pinv((design * inside[:, None]).T @ design)
    influence = (design * weight[:, None]) @ bread
    pull = np.bincount(
        cluster, weights=np.einsum("ij,ij->i", design * inside[:, None] @ bread, design)
    )
    scores = np.bincount(cluster, weights=influence[:, 0] * np.clip(residual, -limit, limit))
    raised = scores / (1.0 - np.minimum(pull, _LARGEST_PULL))
    return float(np.sqrt((raised**2).sum()))


def _solve(design: Floats, y: Floats, weight: Floats) -> Floats:
    root = np.sqrt(weight)
    return np.asarray(np.linalg.lstsq(design * root[:, None], y * root, rcond=None)[0])


def _variance(residual: Floats, x: Floats, share: Floats) -> Floats:
    """Return the variance of every datum, ``a + b x²``, from residuals that are not wild."""
    middle = np.median(residual**2 / 0.4549 / np.maximum(x, 0.25 * np.median(x)) ** 2)
    expected = middle * np.maximum(x, 0.25 * np.median(x)) ** 2
    squared = np.minimum(residual**2, _LARGEST_RATIO * expected)
    root = np.sqrt(share) / np.maximum(expected, 1e-300)
    columns = np.column_stack([np.ones_like(x), x * x])
    parts = nnls(columns * root[:, None], squared * root)[0]
    return np.asarray(np.maximum(columns @ parts, 1e-6 * expected + 1e-12))
