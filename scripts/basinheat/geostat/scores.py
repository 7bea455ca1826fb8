"""How good predictions and their stated uncertainties are."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.special import kolmogorov, ndtr, ndtri

Array = NDArray[np.float64]
Scores = dict[str, float | int | None]

_INTERVALS = (50, 80, 90, 95)


def scores(residual: ArrayLike, std: ArrayLike) -> Scores:
    """Score residuals against their stated standard uncertainties.

    Parameters
    ----------
    residual : array, shape (n,), value units
        Predicted less observed.
    std : array, shape (n,), value units
        Standard uncertainty of the residual, the observation's own error included.

    Returns
    -------
    dict
        ``n`` (rows with a finite residual and a positive finite std), ``bias``, ``rmse``,
        ``mae``, ``msdr`` (mean squared standardised residual, 1 when the std is right),
        ``median_sdr`` (0.455 then), ``coverage_50`` ... ``coverage_95`` (shares inside the
        central interval), ``pit_mean`` (0.5), ``pit_ks`` and ``pit_ks_p`` (largest distance of
        the probability integral transform from uniform, and its p value by the limit law),
        ``crps`` (value units). None where no row can be judged.

    References
    ----------
    Gneiting & Raftery (2007), J. American Statistical Association 102, 359-378, eq. 21 (CRPS of
    a normal forecast).
    """
    left, spread = np.asarray(residual, float).ravel(), np.asarray(std, float).ravel()
    judged = np.isfinite(left) & np.isfinite(spread) & (spread > 0)
    left, spread = left[judged], spread[judged]
    if not len(left):
        return {"n": 0, **dict.fromkeys(_NAMES)}
    z = left / spread
    transform = ndtr(-z)  # where the observation lies in its forecast
    distance = _distance_from_uniform(transform)
    numbers = {
        "bias": left.mean(),
        "rmse": np.sqrt((left**2).mean()),
        "mae": np.abs(left).mean(),
        "msdr": (z**2).mean(),
        "median_sdr": np.median(z**2),
        **{f"coverage_{p}": (np.abs(z) <= ndtri(0.5 + p / 200)).mean() for p in _INTERVALS},
        "pit_mean": transform.mean(),
        "pit_ks": distance,
        "pit_ks_p": kolmogorov(np.sqrt(len(z)) * distance),
        "crps": (spread * _standard_crps(z)).mean(),
    }
    return {"n": len(left), **{name: float(number) for name, number in numbers.items()}}


_NAMES = (
    *("bias", "rmse", "mae", "msdr", "median_sdr"),
    *(f"coverage_{p}" for p in _INTERVALS),
    *("pit_mean", "pit_ks", "pit_ks_p", "crps"),
)


def _standard_crps(z: Array) -> Array:
    density = np.exp(-0.5 * z**2) / np.sqrt(2 * np.pi)
    return np.asarray(z * (2 * ndtr(z) - 1) + 2 * density - 1 / np.sqrt(np.pi))


def _distance_from_uniform(share: Array) -> float:
    ordered, n = np.sort(share), len(share)
    above = np.arange(1, n + 1) / n - ordered
    return float(max(above.max(), (ordered - np.arange(n) / n).max()))
