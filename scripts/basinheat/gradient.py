"""Temperature gradients of the wells: a straight line through surface and readings."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.tables import Gradients

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

SMALLEST_STD_K = 0.01


@dataclass(frozen=True)
class Lines:
    """Straight lines T = b + G z of n groups.

    ``intercept``, ``slope`` (n,); ``covariance`` (n, 2, 2) of both; ``response`` (n, 2, m): change
    of both per unit amplitude of each of m shared errors, which ``covariance`` includes.
    """

    intercept: Array
    slope: Array
    covariance: Array
    response: Array


def fit_wells(temperatures: pd.DataFrame, wells: pd.DataFrame) -> pd.DataFrame:
    """Fit one gradient per well, softly tied to the surface temperature.

    Generalised least squares of temperature on depth, with the surface as one more datum. Errors
    are independent, common to the well (same mud, same noted times) and common to all
    temperatures by one method; all three make the weights, none of them the well's own residuals.

    Parameters
    ----------
    temperatures : DataFrame
        Table ``Temperatures``.
    wells : DataFrame
        Table ``Wells`` with surface temperatures.

    Returns
    -------
    DataFrame
        Table ``Gradients``, by well; ``gradient_std_k_km`` leaves out what methods have in common,
        ``gradient_shared_std_k_km`` is that part.

    Notes
    -----
    The line is a summary over the depths measured, not a model of the rock: wells measured over
    different depths do not compare. The surface's part common to the basin is in neither sigma.
    """
    data = temperatures.sort_values(["well", "depth_m", "method"], ignore_index=True)
    if data.empty:
        return Gradients.empty()
    names, group = np.unique(data["well"].to_numpy(str), return_inverse=True)
    methods = sorted(data["method"].unique())
    of_method = data["method"].to_numpy()[:, None] == np.array(methods, dtype=object)
    common = data["well_std_k"].fillna(0.0).to_numpy()
    shared = of_method * data["shared_std_k"].fillna(0.0).to_numpy()[:, None]
    surface = wells.set_index("well").loc[names]
    n, m = len(names), len(methods)
    lines = fit_lines(
        np.concatenate([group, np.arange(n)]),
        n,
        np.concatenate([data["depth_m"].to_numpy() / 1000.0, np.zeros(n)]),
        np.concatenate(
            [data["temperature_degc"].to_numpy(), surface["surface_temperature_degc"].to_numpy()]
        ),
        np.concatenate(
            [data["temperature_std_k"].to_numpy(), surface["surface_temperature_std_k"].to_numpy()]
        ),
        np.vstack([np.column_stack([common, shared]), np.zeros((n, m + 1))]),
    )
    shared_variance = (lines.response[:, 1, 1:] ** 2).sum(1)
    by_well = data.groupby("well", sort=True)
    return Gradients.conform(
        pd.DataFrame(
            {
                "well": names,
                "gradient_k_km": lines.slope,
                "gradient_std_k_km": np.sqrt(
                    np.maximum(lines.covariance[:, 1, 1] - shared_variance, 0.0)
                ),
                "gradient_shared_std_k_km": np.sqrt(shared_variance),
                "intercept_degc": lines.intercept,
                "n_points": by_well.size().to_numpy(),
                "top_m": by_well["depth_m"].min().to_numpy(),
                "base_m": by_well["depth_m"].max().to_numpy(),
                "method": by_well["method"].agg(lambda v: ";".join(sorted(set(v)))).to_numpy(),
            }
        )
    )


def fit_lines(
    group: Whole, count: int, x: Array, y: Array, std: Array, loadings: Array | None = None
) -> Lines:
    """Fit a straight line to each group by generalised least squares.

    The covariance within a group is diag(std^2) + sum over m of loadings loadings^T. It is never
    built: its inverse follows from sums over the group (Woodbury).

    Parameters
    ----------
    group : ndarray, shape (r,)
        Group of each datum, 0 to count - 1.
    count : int
        Number of groups n; each needs two different x.
    x, y, std : ndarray, shape (r,)
        Data and their independent standard uncertainties.
    loadings : ndarray, shape (r, m), optional
        Errors common to a group: change of each datum per unit (standard normal) amplitude.

    Returns
    -------
    Lines

    References
    ----------
    Woodbury (1950); for one common error Sherman & Morrison (1950).
    """
    std = np.maximum(std, SMALLEST_STD_K)
    common = np.zeros((len(x), 0)) if loadings is None else loadings
    m = common.shape[1]
    z = np.column_stack([np.ones_like(x), x, y, common])
    gram = np.zeros((count, 3 + m, 3 + m))
    weighted = z / std[:, None] ** 2
    for i in range(3 + m):
        for j in range(i, 3 + m):
            gram[:, i, j] = gram[:, j, i] = np.bincount(group, weighted[:, i] * z[:, j], count)
    within = gram[:, 3:, 3:] + np.eye(m)
    # X' S^-1 [X, y, U], S = D + U U': the part along U is taken out of the sums
    lowered = gram[:, :2, :] - gram[:, :2, 3:] @ np.linalg.solve(within, gram[:, 3:, :])
    covariance = np.linalg.inv(lowered[:, :, :2])
    beta = (covariance @ lowered[:, :, 2:3])[..., 0]
    return Lines(beta[:, 0], beta[:, 1], covariance, covariance @ lowered[:, :, 3:])
