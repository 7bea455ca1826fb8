"""The region's rise of temperature with depth: what may be expected before a set is looked at."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

# The residuals of shallow readings are mostly the surface's; they count as if from this depth.
_LEAST_DEPTH_M = 500.0
# Huber's constant for 95 % efficiency: Huber (1964), Robust estimation of a location parameter.
_HUBER = 1.345
_ROUNDS = 30
# How much the gradient may change over the range of the data before the bend counts as noise.
_BEND = (0.4, 2.5)
# Continental mean, where there is nothing to learn from (common practice, no source).
_ORDINARY_K_M = 0.030
_FEW = 10


@dataclass(frozen=True)
class RegionalTrend:
    """Temperature above the surface, ``slope z + bend z²``, straight below the deepest reading.

    Parameters
    ----------
    slope_k_m : float, K/m
        Gradient at the surface.
    bend_k_m2 : float, K/m2
        Half the change of gradient with depth.
    deepest_m : float, m
        Where the curve goes on straight.
    """

    slope_k_m: float
    bend_k_m2: float
    deepest_m: float

    def gradient_k_m(self, depth_m: Floats) -> Floats:
        """Return the gradient at depths, (n,) in K/m."""
        return self.slope_k_m + 2.0 * self.bend_k_m2 * np.minimum(depth_m, self.deepest_m)

    def rise_k(self, depth_m: Floats) -> Floats:
        """Return the temperature above the surface at depths, (n,) in K."""
        inside = np.minimum(depth_m, self.deepest_m)
        curve = self.slope_k_m * inside + self.bend_k_m2 * inside**2
        return curve + self.gradient_k_m(depth_m) * (depth_m - inside)


def fit_trend(depth_m: Floats, rise_k: Floats) -> RegionalTrend:
    """Fit the region's trend robustly (Huber), through the surface.

    Parameters
    ----------
    depth_m, rise_k : (n,) array, m, K
        Depth, and temperature above the surface; NaN are left out.

    Returns
    -------
    RegionalTrend
        A bend only with ten data or more, and only where the gradient stays within 0.4 to 2.5
        times that at the surface; 30 K/km where there are no data.

    Examples
    --------
    >>> import numpy as np
    >>> z = np.array([500.0, 1000.0, 2000.0])
    >>> round(fit_trend(z, 0.03 * z).slope_k_m, 6)
    0.03
    """
    use = np.isfinite(depth_m) & np.isfinite(rise_k) & (depth_m > 0)
    depth, rise = depth_m[use], rise_k[use]
    if depth.size == 0:
        return RegionalTrend(_ORDINARY_K_M, 0.0, np.inf)
    deepest = float(depth.max())
    straight = float(_huber(depth[:, None], rise, depth)[0])
    if straight <= 0.0:
        return RegionalTrend(_ORDINARY_K_M, 0.0, np.inf)
    if depth.size >= _FEW and np.ptp(depth) > 0.2 * deepest:
        slope, bend = _huber(np.column_stack([depth, depth**2 / deepest]), rise, depth)
        trend = RegionalTrend(float(slope), float(bend) / deepest, deepest)
        low, high = (limit * trend.slope_k_m for limit in _BEND)
        if trend.slope_k_m > 0.0 and low <= trend.gradient_k_m(np.array([deepest]))[0] <= high:
            return trend
    return RegionalTrend(straight, 0.0, deepest)


def _huber(design: Floats, rise: Floats, depth: Floats) -> Floats:
    """Return the coefficients by reweighted least squares; errors grow with depth."""
    scale = np.maximum(depth, _LEAST_DEPTH_M)
    X, y, weight = design / scale[:, None], rise / scale, np.ones(depth.size)
    for _ in range(_ROUNDS):
        weighted = X * weight[:, None]
        coefficients = np.linalg.lstsq(weighted.T @ X, weighted.T @ y, rcond=None)[0]
        residual = np.abs(y - X @ coefficients)
        spread = max(np.median(residual) / 0.6745, 1e-9 * np.abs(y).max(), 1e-300)
        weight = np.minimum(1.0, _HUBER * spread / np.maximum(residual, 1e-300))
    return np.asarray(coefficients, dtype=np.float64)
