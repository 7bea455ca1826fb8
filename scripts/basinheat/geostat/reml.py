"""What REML minimises: data, known covariance, bounds and weak priors, posed once."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.spatial import cKDTree
from scipy.spatial.distance import cdist

from basinheat.errors import UserError
from basinheat.geostat.data import Modes
from basinheat.geostat.drift import Drift
from basinheat.geostat.gls import NotPositiveDefiniteError, deviance, factorise
from basinheat.geostat.models import Covariance

Array = NDArray[np.float64]

FEW_WELLS = 15  # below, range and nugget are not told by the data: weak priors
_IMPOSSIBLE = 1e12
# of sill and nugget, in shares of the values' variance; the floor of the nugget keeps wells
# that share a place solvable
_SILL = (1e-4, 30.0)
_NUGGET = (1e-6, 10.0)
# widths of the priors of ln sill, ln range, ln nugget: factors of about 3, 2 and 5
_PRIOR_WIDTH = np.array([1.0, 0.7, 1.5])


@dataclass(frozen=True)
class Problem:
    """Data of one fit and where its log-parameters (sill, range, nugget) may lie.

    Parameters
    ----------
    distance : array, shape (n, n), m
    known : array, shape (n, n), value units squared
        Part of the covariance that is not fitted: errors and shared sources.
    drift : array, shape (n, p)
    values : array, shape (n,), value units
        Less what the shared sources are expected to add.
    scale : float, value units squared
        Variance of the values.
    signal_share : float
        Share of it that is not error.
    ranges_m : (float, float), m
        Bounds of the practical range.
    regional_range_m : float, m
        Centre of the prior of the range.
    few : bool
        Whether the weak priors hold.
    constant : bool
        Whether the values do not vary.
    """

    distance: Array
    known: Array
    drift: Array
    values: Array
    scale: float
    signal_share: float
    ranges_m: tuple[float, float]
    regional_range_m: float
    few: bool
    constant: bool

    @property
    def bounds(self) -> tuple[Array, Array]:
        """Lower and upper bounds of the log-parameters."""
        limits = np.log(
            [
                [self.scale * _SILL[0], self.ranges_m[0], self.scale * _NUGGET[0]],
                [self.scale * _SILL[1], self.ranges_m[1], self.scale * _NUGGET[1]],
            ]
        )
        return limits[0], limits[1]

    def inside(self, place: Array) -> Array:
        """Return the log-parameters, moved inside their bounds."""
        return np.clip(place, *self.bounds)

    def covariance(self, place: Array, model: str, **axes: float) -> Covariance:
        """Return the model at log-parameters."""
        sill, range_m, nugget = np.exp(self.inside(place))
        return Covariance(model, float(sill), float(range_m), float(nugget), **axes)

    def place(self, covariance: Covariance) -> Array:
        """Return the log-parameters of a model, moved inside the bounds."""
        numbers = [covariance.sill, covariance.range_m, covariance.nugget]
        return self.inside(np.log(np.maximum(numbers, 1e-300)))

    def objective(self, place: Array, model: str) -> float:
        """Return -2 log REML and the penalty of priors and of leaving the bounds."""
        inside = self.inside(place)
        fitted = self.covariance(inside, model)
        matrix = fitted.at_distance(self.distance)
        matrix += self.known
        matrix[np.diag_indices_from(matrix)] += fitted.nugget
        try:
            value = deviance(factorise(matrix, self.drift), self.values)
        except NotPositiveDefiniteError:
            return _IMPOSSIBLE
        outside = float(((place - inside) ** 2).sum())
        return value + outside + self._penalty(inside)

    def starts(self) -> list[Array]:
        """Return starts: ranges over all that is possible, several shares of nugget."""
        ranges = np.geomspace(self.ranges_m[0] * 2, self.ranges_m[1] / 2, 5)
        signal = self.scale * self.signal_share
        return [
            self.inside(np.log([signal * (1 - share), range_m, signal * share]))
            for range_m in ranges
            for share in (0.02, 0.2, 0.7)
        ]

    def prior_words(self) -> str:
        """Say which prior held."""
        if not self.few:
            return "none"
        return (
            f"fewer than {FEW_WELLS} wells: range within a factor of 2 of "
            f"{self.regional_range_m:.4g} m, sill within 3 of the values' variance, nugget "
            "within 5 of a tenth of it"
        )

    def _penalty(self, place: Array) -> float:
        if not self.few:
            return 0.0
        signal = self.scale * self.signal_share
        centre = np.log([signal, self.regional_range_m, 0.1 * signal])
        return float((((place - centre) / _PRIOR_WIDTH) ** 2).sum())


def pose(
    xy: Array,
    values: Array,
    errors: Array,
    loadings: ArrayLike | None,
    prior: tuple[ArrayLike, ArrayLike] | None,
    trend: str | ArrayLike,
    rows: NDArray[np.int64],
    regional_range_m: float | None = None,
    like: Problem | None = None,
) -> Problem:
    """Pose the fit of some rows of the data; bounds are those of ``like`` when it is given.

    Raises
    ------
    UserError
        When all wells lie at one place, or the drift cannot be told.
    """
    modes = Modes.of(len(xy), loadings, *(prior or (None, None)))
    trend = trend if isinstance(trend, str) else np.asarray(trend, float).reshape(len(xy), -1)[rows]
    _, drift = Drift.of(xy[rows], trend)
    loads, data = modes.loadings[rows], (values - modes.loadings @ modes.mean)[rows]
    known = (loads @ modes.covariance) @ loads.T
    known[np.diag_indices_from(known)] += errors[rows]
    parts: dict[str, Any] = {
        "distance": cdist(xy[rows], xy[rows]),
        "known": known,
        "drift": drift,
        "values": data,
    }
    if like is not None:
        return Problem(**{**vars(like), **parts})
    return Problem(
        **parts, **_limits(xy, regional_range_m), **_scales(data, drift, errors[rows], len(xy))
    )


def _limits(xy: Array, regional_range_m: float | None) -> dict[str, Any]:
    places = np.unique(xy, axis=0)
    diagonal = float(np.hypot(*np.ptp(xy, axis=0)))
    if len(places) < 2 or diagonal == 0.0:
        raise UserError(
            f"variogram: all wells lie at one place ({xy[0, 0]:.10g}, {xy[0, 1]:.10g}); no range "
            "can be told. Check the coordinates or pin a reviewed model "
            "(kriging.variogram.pinned)."
        )
    nearest = float(np.median(cKDTree(places).query(places, k=2)[0][:, 1]))
    low = min(nearest, 0.2 * diagonal)
    regional = float(np.clip(regional_range_m or 0.5 * diagonal, low, 1.5 * diagonal))
    return {"ranges_m": (low, 1.5 * diagonal), "regional_range_m": regional}


def _scales(data: Array, drift: Array, errors: Array, wells: int) -> dict[str, Any]:
    freedom = len(data) - drift.shape[1]
    if freedom < 1:
        raise UserError(
            f"variogram: {len(data)} wells tell the {drift.shape[1]} coefficients of the drift and "
            "nothing more. Use drift none, add wells or pin a reviewed model "
            "(kriging.variogram.pinned)."
        )
    left = data - drift @ np.linalg.lstsq(drift, data, rcond=None)[0]
    variance = float(left @ left) / freedom
    rounding = (1e-10 * float(np.abs(data).max())) ** 2
    constant = variance <= rounding
    if constant:
        # values told by the drift alone: as near 0 as the values' own digits and errors allow
        variance = max((1e-6 * float(np.abs(data).max())) ** 2, 1e-6 * float(errors.mean()), 1e-12)
    share = float(np.clip(1.0 - errors.mean() / variance, 0.1, 1.0))
    return {
        "scale": variance,
        "signal_share": share,
        "few": wells < FEW_WELLS,
        "constant": constant,
    }
