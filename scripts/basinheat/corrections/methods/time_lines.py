"""Least-squares lines through the readings of many sets at once."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from basinheat.corrections.sets import Floats


@dataclass(frozen=True)
class Line:
    """Least-squares lines, one per row: intercept, slope and what their errors need, (sets,)."""

    intercept: Floats
    slope: Floats
    residual_std: Floats
    lever: Floats
    spread: Floats
    n: NDArray[np.int64]

    @property
    def intercept_factor(self) -> Floats:
        """Return s.e.(intercept) per unit standard deviation of the readings."""
        return np.sqrt((1.0 + self.lever**2) / self.n)


def fit_line(x: Floats, y: Floats) -> Line:
    """Fit ``y = intercept + slope x`` in every row, NaN left out.

    Parameters
    ----------
    x, y : (sets, n) array
        Points.

    Examples
    --------
    >>> import numpy as np
    >>> line = fit_line(np.array([[0.5, 1.0]]), np.array([[90.0, 80.0]]))
    >>> line.intercept.round(6), line.slope.round(6)
    (array([100.]), array([-20.]))
    """
    use = np.isfinite(x) & np.isfinite(y)
    n = use.sum(1)
    with np.errstate(invalid="ignore", divide="ignore"):
        x_mean = np.where(use, x, 0.0).sum(1) / n
        y_mean = np.where(use, y, 0.0).sum(1) / n
        dx = np.where(use, x - x_mean[:, None], 0.0)
        dy = np.where(use, y - y_mean[:, None], 0.0)
        sxx = (dx**2).sum(1)
        slope = (dx * dy).sum(1) / sxx
        squares = ((dy - slope[:, None] * dx) ** 2).sum(1)
        residual = np.sqrt(np.where(n > 2, squares / (n - 2), np.nan))
        lever = x_mean / np.sqrt(sxx / n)
        spread = np.max(x, axis=1, where=use, initial=-np.inf) - np.min(
            x, axis=1, where=use, initial=np.inf
        )
    return Line(y_mean - slope * x_mean, slope, residual, lever, spread, n)
