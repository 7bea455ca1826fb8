"""Drift: the smooth part of the mean, with a constant that is always there."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from basinheat.errors import UserError

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Drift:
    """A constant and covariates, centred and scaled by their values at the data.

    Parameters
    ----------
    kind : {"none", "linear", "covariates"}
        ``linear`` takes the coordinates as covariates.
    centre, scale : array, shape (p - 1,), units of the covariates
        Taken off and divided by: keeps the normal matrix well conditioned at any unit.
    """

    kind: str
    centre: Array
    scale: Array

    @classmethod
    def of(cls, xy: Array, trend: str | ArrayLike) -> tuple[Drift, Array]:
        """Return the drift and its matrix at the data, shape (n, p).

        Raises
        ------
        UserError
            When the covariates are constant, collinear or more than the data can tell.
        """
        kind, covariates = _covariates(xy, trend)
        if len(xy) < 1 + covariates.shape[1]:
            raise UserError(
                f"kriging with drift {kind}: {len(xy)} wells cannot tell "
                f"{1 + covariates.shape[1]} coefficients. Use drift none or more wells."
            )
        scale = covariates.std(0)
        flat = scale <= 1e-12 * np.abs(covariates).max(0, initial=0.0)
        drift = cls(kind, covariates.mean(0), np.where(flat, 1.0, scale))
        matrix = drift._standard(covariates)
        if flat.any() or np.linalg.matrix_rank(matrix, tol=1e-9 * len(xy)) < matrix.shape[1]:
            raise UserError(
                f"kriging with drift {kind}: the covariates are constant or collinear at the "
                "wells. Use drift none or other covariates."
            )
        return drift, matrix

    def matrix(self, xy: Array, covariates: ArrayLike | None = None) -> Array:
        """Return the drift matrix at other places, shape (cells, p)."""
        if self.kind == "none":
            return np.ones((len(xy), 1))
        if self.kind == "linear":
            return self._standard(xy)
        if covariates is None:
            raise ValueError("drift0: covariates of the places are needed")
        return self._standard(np.asarray(covariates, float).reshape(len(xy), -1))

    def _standard(self, covariates: Array) -> Array:
        scaled = (covariates - self.centre) / self.scale
        return np.column_stack([np.ones(len(covariates)), scaled])

    @property
    def to_raw(self) -> Array:
        """Matrix that turns coefficients into those of (1, covariates as given), (p, p)."""
        turn = np.diag(np.concatenate([[1.0], 1.0 / self.scale]))
        turn[0, 1:] = -self.centre / self.scale
        return turn


def _covariates(xy: Array, trend: str | ArrayLike) -> tuple[str, Array]:
    if isinstance(trend, str):
        if trend not in ("none", "linear"):
            raise UserError(f'kriging.drift: "{trend}" is not one of none, linear')
        return trend, xy if trend == "linear" else np.empty((len(xy), 0))
    covariates = np.asarray(trend, float).reshape(len(xy), -1)
    if not np.isfinite(covariates).all():
        raise UserError("kriging: a drift covariate is missing at a well")
    return "covariates", covariates
