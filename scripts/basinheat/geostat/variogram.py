"""Experimental variogram over all pairs of wells."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.optimize import least_squares
from scipy.spatial import cKDTree

from basinheat.errors import UserError
from basinheat.geostat.data import Modes, as_error_variance, as_places, as_values
from basinheat.geostat.models import Covariance, correlation
from basinheat.geostat.pairs import Table, accumulate, groups_of, pairs_within
from basinheat.geostat.thinning import spread

Array = NDArray[np.float64]
Estimator = Literal["cressie", "matheron", "dowd"]
Weights = Literal["cressie", "pairs_over_lag", "pairs"]

_RANGES = 8
_SHARES = (0.05, 0.4)

_MEDIAN_POINTS = 4000  # a median needs all pairs of a lag at once: 8 million at most
_LAGS = 15


@dataclass(frozen=True)
class Experimental:
    """Experimental variogram: mean distance, semivariance and number of pairs of each lag.

    Parameters
    ----------
    lag_m : array, shape (lags,), m
    gamma : array, shape (lags,), value units squared
        Measurement error and shared sources taken out, never below 0.
    pairs : array of int, shape (lags,)
    """

    lag_m: Array
    gamma: Array
    pairs: NDArray[np.int64]

    def to_dict(self) -> dict[str, list[float]]:
        """Return plain values for JSON."""
        return {
            "lag_m": self.lag_m.tolist(),
            "gamma": self.gamma.tolist(),
            "pairs": self.pairs.tolist(),
        }


def experimental(
    xy: ArrayLike,
    values: ArrayLike,
    error_variance: ArrayLike | None = None,
    max_lag: float | None = None,
    bins: int | ArrayLike | None = None,
    estimator: Estimator = "cressie",
    loadings: ArrayLike | None = None,
    prior_covariance: ArrayLike | None = None,
) -> Experimental:
    """Compute the experimental variogram, errors taken out.

    With known errors E[gamma] = gamma_S + (tau_i^2 + tau_j^2) / 2, and the shared sources add
    (h_i - h_j)^T S (h_i - h_j) / 2: the mean of both over the pairs of a lag is subtracted.

    Parameters
    ----------
    xy : array, shape (n, 2), m
        Easting, northing (``Covariance.isotropic`` of them for anisotropic distance).
    values : array, shape (n,), value units
        Data.
    error_variance : array, shape (n,), value units squared, optional
        Independent error of each datum.
    max_lag : float, m, optional
        Longest distance; default half the diagonal of the area.
    bins : int or array of edges, m, optional
        Lags, each open below and closed above. Default at most 15, none narrower than the
        median distance to the nearest well, each with at least 30 pairs where there are any.
    estimator : {"cressie", "matheron", "dowd"}
        Cressie & Hawkins' fourth power of the mean root difference (robust), half the mean
        square, or Dowd's median (of 4,000 spread points at most).
    loadings, prior_covariance : arrays, shapes (n, m) and (m, m), optional
        Shared sources; default independent and unit normal.

    References
    ----------
    Cressie & Hawkins (1980), Mathematical Geology 12, 115-125. Dowd (1984), in Geostatistics for
    Natural Resources Characterization, 91-106. Journel & Huijbregts (1978).
    """
    places = as_places(xy)
    data = as_values(values, len(places))
    errors = as_error_variance(error_variance, len(places))
    modes = Modes.of(len(places), loadings, None, prior_covariance)
    if estimator not in ("cressie", "matheron", "dowd"):
        raise ValueError(f"estimator: {estimator}")
    rows = spread(places, _MEDIAN_POINTS if estimator == "dowd" else len(places))
    rows = rows[np.argsort(places[rows, 0], kind="stable")]  # pairs too far east are skipped
    edges, merge = _edges(places, max_lag, bins)
    table = (places[rows], data[rows], errors[rows], modes.loadings[rows] @ _root(modes.covariance))
    if estimator == "dowd":
        return _by_median(table, edges, merge)
    sums = accumulate(table, edges, root=estimator == "cressie")
    groups = groups_of(sums[0]) if merge else np.arange(len(edges) - 1)
    pairs, distance, core, known = (np.bincount(groups, part) for part in sums)
    with np.errstate(invalid="ignore", divide="ignore"):
        gamma = semivariance(core / pairs, pairs, estimator) - known / pairs
        lag = distance / pairs
    return _tidy(lag, gamma, pairs)


def semivariance(mean: ArrayLike, pairs: ArrayLike, estimator: Estimator) -> Array:
    """Turn a mean over pairs into a semivariance.

    Parameters
    ----------
    mean : array
        Of the squared differences (matheron), of the square roots of the absolute differences
        (cressie), or the median absolute difference (dowd).
    pairs : array
        Number of pairs.

    Examples
    --------
    >>> float(semivariance(2.0, 10, "matheron"))
    1.0
    """
    middle, n = np.asarray(mean, float), np.asarray(pairs, float)
    if estimator == "matheron":
        return np.asarray(0.5 * middle)
    if estimator == "cressie":
        return np.asarray(0.5 * middle**4 / (0.457 + 0.494 / n))
    return np.asarray(0.5 * 2.198 * middle**2)


def _root(covariance: Array) -> Array:
    """Return U with U U^T = S: differences of H U are shared differences in plain distance."""
    values, vectors = np.linalg.eigh(covariance)
    return vectors * np.sqrt(np.maximum(values, 0.0))


def _edges(xy: Array, max_lag: float | None, bins: int | ArrayLike | None) -> tuple[Array, bool]:
    if bins is not None and not isinstance(bins, int | np.integer):
        return np.asarray(bins, float), False
    diagonal = float(np.hypot(*np.ptp(xy, axis=0))) if len(xy) else 0.0
    if diagonal == 0.0:
        raise UserError("variogram: all wells lie at one place; there are no distances to bin")
    reach = 0.5 * diagonal if max_lag is None else float(max_lag)
    if bins is not None:
        return np.linspace(0.0, reach, int(bins) + 1), False
    unique = np.unique(xy, axis=0)
    nearest = float(np.median(cKDTree(unique).query(unique, k=2)[0][:, 1]))
    return np.linspace(0.0, reach, int(np.clip(reach / nearest, 1, _LAGS)) + 1), True


def _by_median(table: Table, edges: Array, merge: bool) -> Experimental:
    lag, h, difference, known = (
        np.concatenate(part) for part in zip(*pairs_within(table, edges), strict=True)
    )
    if merge:
        lag = groups_of(np.bincount(lag, minlength=len(edges) - 1))[lag]
    pairs = np.bincount(lag)
    gamma, distance = np.full((2, len(pairs)), np.nan)
    for k in np.flatnonzero(pairs):
        rows = lag == k
        median = np.median(difference[rows])
        gamma[k] = semivariance(median, pairs[k], "dowd") - known[rows].mean()
        distance[k] = h[rows].mean()
    return _tidy(distance, gamma, pairs)


def _tidy(lag: Array, gamma: Array, pairs: ArrayLike) -> Experimental:
    counts = np.asarray(pairs).astype(np.int64)
    some = counts > 0
    return Experimental(lag[some], np.maximum(gamma[some], 0.0), counts[some])


def fit_wls(
    variogram: Experimental, model: str = "exponential", weights: Weights = "cressie"
) -> Covariance:
    """Fit sill, range and nugget to an experimental variogram.

    Parameters
    ----------
    variogram : Experimental
    model : str
        One of ``models.MODELS``.
    weights : {"cressie", "pairs_over_lag", "pairs"}
        N / gamma(h)^2 with the fitted gamma (Cressie 1985: minimise N (g / gamma - 1)^2),
        N / h^2 (the usual choice of an open geostatistics package), or N.

    Returns
    -------
    Covariance
        The best of sixteen bounded starts. Fewer than three lags leave the range near its start.

    References
    ----------
    Cressie (1985), Mathematical Geology 17, 563-586.
    """
    some = (variogram.pairs > 0) & (variogram.lag_m > 0)
    h, gamma, pairs = variogram.lag_m[some], variogram.gamma[some], variogram.pairs[some]
    if not len(h):
        raise UserError("variogram: no pair of wells lies within the longest lag")
    unit = float(gamma.max())
    if unit == 0.0:
        return Covariance(model, 0.0, float(h.max()), 0.0)
    steady = np.sqrt(pairs / pairs.max()) * (h.min() / h if weights == "pairs_over_lag" else 1.0)

    def residuals(place: Array) -> Array:
        fitted = place[0] + place[1] * (1.0 - correlation(h / np.exp(place[2]), model))
        if weights == "cressie":
            return np.asarray(steady * (gamma / unit / fitted - 1.0))
        return np.asarray(steady * (fitted - gamma / unit))

    low = np.array([0.0, 1e-6, np.log(0.5 * h.min())])
    high = np.array([10.0, 100.0, np.log(3.0 * h.max())])
    ranges = np.linspace(low[2], high[2], _RANGES + 2)[1:-1]
    starts = [np.array([s, 1.0 - s, r]) for r in ranges for s in _SHARES]
    limits = {"bounds": (low, high), "xtol": 1e-13, "ftol": 1e-13, "gtol": 1e-13}
    ends = [least_squares(residuals, start, **limits) for start in starts]
    best = min(ends, key=lambda end: float(end.cost)).x
    return Covariance(model, float(best[1] * unit), float(np.exp(best[2])), float(best[0] * unit))
