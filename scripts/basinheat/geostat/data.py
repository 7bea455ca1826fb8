"""What kriging takes in, checked once: places, values, error variances, shared sources."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from basinheat.errors import UserError

Array = NDArray[np.float64]


def as_places(xy: ArrayLike, what: str = "a well") -> Array:
    """Return coordinates of shape (n, 2), all finite."""
    places = np.asarray(xy, float).reshape(-1, 2)
    if not np.isfinite(places).all():
        row = int(np.argmax(~np.isfinite(places).all(1)))
        raise UserError(f"kriging: a coordinate of {what} is missing (row {row})")
    return places


def as_values(values: ArrayLike, n: int) -> Array:
    """Return n finite values."""
    data = np.asarray(values, float).reshape(-1)
    if len(data) != n:
        raise ValueError(f"values: {len(data)} for {n} places")
    if not np.isfinite(data).all():
        row = int(np.argmax(~np.isfinite(data)))
        raise UserError(f"kriging: the value of a well is missing (row {row})")
    return data


def as_error_variance(error_variance: ArrayLike | None, n: int) -> Array:
    """Return n finite variances, none negative; 0 for all when none are given."""
    if error_variance is None:
        return np.zeros(n)
    variance = np.broadcast_to(np.asarray(error_variance, float), (n,)).astype(float)
    faulty = ~((variance >= 0) & np.isfinite(variance))
    if faulty.any():
        row = int(np.argmax(faulty))
        raise UserError(
            f"kriging: an error variance is {variance[row]}, must be finite and not negative "
            f"(row {row})"
        )
    return variance


@dataclass(frozen=True)
class Modes:
    """Shared error sources: loadings (n, m), prior mean (m,) and covariance (m, m)."""

    loadings: Array
    mean: Array
    covariance: Array

    @classmethod
    def of(
        cls,
        n: int,
        loadings: ArrayLike | None,
        mean: ArrayLike | None,
        covariance: ArrayLike | None,
    ) -> Modes:
        """Fill in what is not given: no sources; zero mean, unit variance."""
        loads = np.empty((n, 0)) if loadings is None else np.asarray(loadings, float).reshape(n, -1)
        m = loads.shape[1]
        centre = np.zeros(m) if mean is None else np.asarray(mean, float).reshape(m)
        spread = np.eye(m) if covariance is None else np.asarray(covariance, float).reshape(m, m)
        for name, array in (("loading", loads), ("prior mean", centre), ("prior", spread)):
            if not np.isfinite(array).all():
                raise UserError(f"kriging: a {name} of a shared source is missing")
        return cls(loads, centre, spread)

    def covariance_of_data(self) -> Array:
        """Return H S H^T, shape (n, n)."""
        return (self.loadings @ self.covariance) @ self.loadings.T


def dependent(xy: Array, row: int) -> UserError:
    """Say which datum the others determine exactly, and the way out."""
    others = np.delete(np.arange(len(xy)), row)
    distance = np.hypot(*(xy[others] - xy[row]).T)
    near = int(others[np.argmin(distance)]) if len(others) else row
    gap = float(distance.min()) if len(others) else 0.0
    return UserError(
        f"kriging: wells {near} and {row} (rows from 0) at ({xy[row, 0]:.10g}, {xy[row, 1]:.10g})"
        f" lie {gap:.4g} m apart and leave no variance of their own. Give them an error variance "
        "or the model a nugget, or keep one of them."
    )
