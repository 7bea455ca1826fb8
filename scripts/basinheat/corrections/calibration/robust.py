"""Robust regression of corrections on what is known of each pair, and what it leaves unsure."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import brentq

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

# Huber (1964), Robust estimation of a location parameter: 95 % efficiency.
HUBER = 1.345
# E[min(|x|, 1.345)²] of a unit normal x: Huber (1981), Robust statistics, proposal 2.
_HUBER_SQUARE = 0.7101645
_MAD = 0.6745
# Scatter is sought down to this share of ten times the largest residual.
_LOWEST, _NOTHING = 1e-9, 1e-100
# When the coefficients stay, and how exact ln(scatter) must be.
_ROUNDS, _SAME, _FINE = 30, 1e-8, 1e-9


@dataclass(frozen=True)
class Errors:
    """What is known of the errors of n pairs beforehand.

    Parameters
    ----------
    known_k2 : (n,) array, K2
        Variance of the anchors at the readings' places.
    growth : (n,) array
        Standard deviation of the corrections' own scatter, relative to its scale.
    group, group_std_k : (n,) array of int, (n,) array, K
        Anchored log of each pair; the part of the known error that its pairs have in common.
    well : (n,) array of int
        Well of the mud-cooled reading.
    well_share : float
        Share of the scatter's variance that readings of one well have in common.
    """

    known_k2: Floats
    growth: Floats
    group: Ints
    group_std_k: Floats
    well: Ints
    well_share: float

    def std_k(self, scatter_k: float) -> Floats:
        """Return the standard deviation of every pair's correction, (n,) in K."""
        variance = (scatter_k * self.growth) ** 2 + self.known_k2
        return np.asarray(np.sqrt(np.maximum(variance, np.finfo(float).tiny)))


@dataclass(frozen=True)
class Regression:
    """A robust fit ``y = X b + e``.

    Parameters
    ----------
    coefficients : (p,) array
        b.
    covariance : (p, p) array
        Of b, pairs of one well and of one log not being independent.
    scatter_k : float, K
        Scale of the corrections' own scatter, the anchors' errors taken out; not below 0.
    weights : (n,) array, 1/K2
        Weight of every pair: inverse variance times Huber's.
    normal : (p, p) array
        ``X' W X``.
    """

    coefficients: Floats
    covariance: Floats
    scatter_k: float
    weights: Floats
    normal: Floats


def fit(design: Floats, value: Floats, errors: Errors, limit: float = HUBER) -> Regression:
    """Fit by reweighted least squares (Huber), the scatter being what the anchors leave over.

    Parameters
    ----------
    design : (n, p) array
        X, n > p.
    value : (n,) array, K
        y.
    errors : Errors
        What is known of the errors.
    limit : float
        Residuals beyond so many standard deviations lose weight; infinite: least squares.

    Returns
    -------
    Regression
        The scale behind the weights is the median absolute residual over 0.6745; the scatter
        stated is Huber's second proposal, so that without outliers it is the usual
        ``sum of squares/(n − p)``.

    Examples
    --------
    >>> import numpy as np
    >>> n = np.zeros(4)
    >>> errors = Errors(n, n + 1, np.arange(4), n, np.arange(4), 0.0)
    >>> found = fit(np.ones((4, 1)), np.array([1.0, 2.0, 4.0, 5.0]), errors, np.inf)
    >>> found.coefficients.round(6), round(found.scatter_k**2, 4)
    (array([3.]), 3.3333)
    """
    n, p = design.shape
    coefficients: Floats = np.linalg.lstsq(design, value, rcond=None)[0].astype(np.float64)
    for _ in range(_ROUNDS):
        residual = value - design @ coefficients
        scale = scatter_at(residual, errors, lambda z: float(np.median(np.abs(z))) / _MAD, 1.0)
        weights = _huber(residual, errors.std_k(scale), limit) / errors.std_k(scale) ** 2
        normal = design.T @ (design * weights[:, None])
        before = coefficients
        coefficients = np.asarray(np.linalg.solve(normal, design.T @ (weights * value)), float)
        if np.abs(coefficients - before).max() <= _SAME * np.abs(coefficients).max():
            break
    residual = value - design @ coefficients
    square = _HUBER_SQUARE if np.isfinite(limit) else 1.0
    scatter = scatter_at(
        residual, errors, lambda z: float((np.minimum(np.abs(z), limit) ** 2).sum()) / square, n - p
    )
    return Regression(
        coefficients,
        _covariance(design, weights, normal, scatter, errors),
        scatter,
        weights,
        normal,
    )


def _huber(residual: Floats, std: Floats, limit: float) -> Floats:
    size = np.maximum(np.abs(residual) / std, np.finfo(float).tiny)
    return np.minimum(1.0, limit / size)


def scatter_at(
    residual: Floats, errors: Errors, measure: Callable[[Floats], float], target: float
) -> float:
    """Return the scatter at which a falling measure of standardised residuals is as expected."""
    high = 10.0 * float(np.abs(residual / errors.growth).max()) + _NOTHING
    low = high * _LOWEST

    def excess(ln_scatter: float) -> float:
        return measure(residual / errors.std_k(float(np.exp(ln_scatter)))) - target

    if excess(float(np.log(low))) <= 0.0:
        return low
    return float(np.exp(brentq(excess, np.log(low), np.log(high), xtol=_FINE)))


def _covariance(
    design: Floats, weights: Floats, normal: Floats, scatter: float, errors: Errors
) -> Floats:
    """Return the covariance of the coefficients, common errors of wells and logs included."""
    own = (scatter * errors.growth) ** 2
    alone = own * (1.0 - errors.well_share) + errors.known_k2 - errors.group_std_k**2
    weighted = design * weights[:, None]
    middle = weighted.T @ (weighted * alone[:, None])
    for member, std in (
        (errors.well, np.sqrt(errors.well_share * own)),
        (errors.group, errors.group_std_k),
    ):
        sums = summed(weighted * std[:, None], np.unique(member, return_inverse=True)[1])
        middle += sums.T @ sums
    inverse = np.linalg.inv(normal)
    covariance = inverse @ middle @ inverse
    return 0.5 * (covariance + covariance.T)


def summed(values: Floats, member: Ints) -> Floats:
    """Return the sums of rows by group, (groups, p)."""
    return np.stack([np.bincount(member, weights=column) for column in values.T], axis=1)
