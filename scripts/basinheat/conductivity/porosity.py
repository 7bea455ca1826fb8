"""Porosity of sediments by burial."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]


def athy(depth_m: ArrayLike, surface: ArrayLike, compaction_per_m: ArrayLike) -> Array:
    """Return the porosity at a depth: phi = phi0 exp(-c z).

    Parameters
    ----------
    depth_m : array_like, m
        Depth below ground or sea floor (the deepest burial of uplifted rock).
    surface : array_like
        Porosity at depth 0.
    compaction_per_m : array_like, 1/m

    Returns
    -------
    ndarray

    References
    ----------
    Athy (1930), AAPG Bull. 14, 1-24.

    Examples
    --------
    >>> round(float(athy(2000.0, 0.49, 0.27e-3)), 4)
    0.2855
    """
    return np.asarray(surface, float) * np.exp(
        -np.asarray(compaction_per_m, float) * np.asarray(depth_m, float)
    )


def athy_mean(
    top_m: ArrayLike, base_m: ArrayLike, surface: ArrayLike, compaction_per_m: ArrayLike
) -> Array:
    """Return the mean porosity between two depths: phi0 / (c h) (exp(-c z1) - exp(-c z2)).

    Parameters
    ----------
    top_m, base_m : array_like, m
        Depths, base below top.
    surface, compaction_per_m
        As for :func:`athy`; without compaction the mean is ``surface``.

    Returns
    -------
    ndarray
    """
    x = np.asarray(compaction_per_m, float) * (np.asarray(base_m, float) - np.asarray(top_m, float))
    small = np.abs(x) < 1e-9
    share = np.where(small, 1.0, -np.expm1(-x) / np.where(small, 1.0, x))
    return athy(top_m, surface, compaction_per_m) * share
