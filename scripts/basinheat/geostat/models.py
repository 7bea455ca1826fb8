"""Covariance models against the practical range, the one range convention that is stored."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import asdict, dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.spatial.distance import cdist

from basinheat.errors import UserError

Array = NDArray[np.float64]

# Practical range (correlation 0.05) over the natural one: e^(-h/a), e^(-(h/a)^2),
# (1 + h/a) e^(-h/a) and (1 + h/a + (h/a)^2 / 3) e^(-h/a) fall to 0.05 there; spherical and cubic
# end at their range.
PRACTICAL_OVER_NATURAL = {
    "exponential": float(np.log(20.0)),
    "gaussian": float(np.sqrt(np.log(20.0))),
    "matern15": 4.743864518390591,  # root of (1 + x) e^(-x) = 0.05
    "matern25": 5.918649346310188,  # root of (1 + x + x^2 / 3) e^(-x) = 0.05
    "spherical": 1.0,
    "cubic": 1.0,
}
RANGE_CONVENTION = "practical, 95 %"


def _exponential(x: Array) -> Array:
    np.negative(x, out=x)
    return np.exp(x, out=x)


def _gaussian(x: Array) -> Array:
    np.multiply(x, x, out=x)
    return _exponential(x)


def _matern15(x: Array) -> Array:
    decay = np.exp(-x)
    x += 1.0
    x *= decay
    return x


def _matern25(x: Array) -> Array:
    decay = np.exp(-x)
    square = x * x
    square /= 3.0
    x += 1.0
    x += square
    x *= decay
    return x


def _spherical(x: Array) -> Array:
    np.minimum(x, 1.0, out=x)
    slope = x * x
    slope *= 0.5
    slope -= 1.5
    x *= slope
    x += 1.0
    return x


def _cubic(x: Array) -> Array:
    np.minimum(x, 1.0, out=x)
    square = x * x
    x *= 8.75 + square * (-3.5 + 0.75 * square)
    x -= 7.0
    x *= square
    x += 1.0
    return x


_OVERWRITING: dict[str, Callable[[Array], Array]] = {
    "exponential": _exponential,
    "gaussian": _gaussian,
    "matern15": _matern15,
    "matern25": _matern25,
    "spherical": _spherical,
    "cubic": _cubic,
}
MODELS = tuple(_OVERWRITING)


def correlation(h_over_range: ArrayLike, model: str) -> Array:
    """Correlation at distances given as shares of the practical range.

    Parameters
    ----------
    h_over_range : array, any shape, dimensionless
        Distance over practical range, not negative.
    model : str
        One of ``MODELS``.

    Returns
    -------
    array, same shape
        Correlation: 1 at 0; 0.05 at 1 for exponential, gaussian, matern15, matern25, and 0 at 1
        for spherical, cubic.

    References
    ----------
    Chiles & Delfiner (2012), Geostatistics, 2nd ed., section 2.5.

    Examples
    --------
    >>> float(correlation(1.0, "exponential").round(6))
    0.05
    """
    natural = np.array(h_over_range, float)
    natural *= PRACTICAL_OVER_NATURAL[model]
    return _OVERWRITING[model](natural)


@dataclass(frozen=True)
class Covariance:
    """A stationary covariance: sill x correlation, and a micro-scale nugget beside it.

    Parameters
    ----------
    model : str
        One of ``MODELS``.
    sill : float, value units squared
        Variance of the structured part.
    range_m : float, m
        Practical range (95 %), along the major axis.
    nugget : float, value units squared
        Micro-scale variance: real, unresolved; measurement error is never in it.
    azimuth_deg : float, degrees
        Direction of the major axis, clockwise from north.
    ratio : float
        Minor over major range, 0 < ratio <= 1.
    """

    model: str
    sill: float
    range_m: float
    nugget: float = 0.0
    azimuth_deg: float = 0.0
    ratio: float = 1.0

    def __post_init__(self) -> None:
        """Refuse what is no covariance, all faults at once."""
        faults = []
        if self.model not in _OVERWRITING:
            faults.append(f'model: "{self.model}" is not one of {", ".join(MODELS)}')
        for name in ("sill", "nugget"):
            if not 0.0 <= getattr(self, name) < np.inf:
                faults.append(f"{name}: must be finite, not negative (got {getattr(self, name)})")
        if not 0.0 < self.range_m < np.inf:
            faults.append(f"range_m: must be finite and positive (got {self.range_m})")
        if not np.isfinite(self.azimuth_deg):
            faults.append(f"azimuth_deg: must be finite (got {self.azimuth_deg})")
        if not 0.0 < self.ratio <= 1.0:
            faults.append(f"ratio: must be above 0 and at most 1 (got {self.ratio})")
        if faults:
            raise UserError(faults, "the covariance model is not valid:")

    @classmethod
    def from_natural(
        cls, model: str, sill: float, natural_range_m: float, nugget: float = 0.0, **axes: float
    ) -> Covariance:
        """Make a model from the natural range a: e^(-h/a), e^(-(h/a)^2), (1 + h/a) e^(-h/a) ..."""
        return cls(model, sill, natural_range_m * PRACTICAL_OVER_NATURAL[model], nugget, **axes)

    @classmethod
    def from_dict(cls, stored: Mapping[str, Any]) -> Covariance:
        """Read what ``to_dict`` wrote; other keys (how it was fitted) are passed over."""
        missing = [k for k in ("model", "sill", "range_m", "nugget") if k not in stored]
        if missing:
            raise UserError(f"the stored variogram lacks {', '.join(missing)}")
        convention = stored.get("range_convention", RANGE_CONVENTION)
        if convention != RANGE_CONVENTION:
            raise UserError(
                f'the stored variogram says range_convention "{convention}"; '
                f'only "{RANGE_CONVENTION}" is read'
            )
        numbers = [k for k in cls.__dataclass_fields__ if k != "model" and k in stored]
        try:
            return cls(model=str(stored["model"]), **{k: float(stored[k]) for k in numbers})
        except (TypeError, ValueError) as fault:
            raise UserError(f"the stored variogram holds something not a number: {fault}") from None

    def to_dict(self) -> dict[str, Any]:
        """Return plain values for JSON."""
        return {**asdict(self), "range_convention": RANGE_CONVENTION}

    @property
    def natural_range_m(self) -> float:
        """Range a of the natural form, m."""
        return self.range_m / PRACTICAL_OVER_NATURAL[self.model]

    def isotropic(self, xy: ArrayLike) -> Array:
        """Turn and stretch coordinates so that plain distance is the anisotropic distance.

        Parameters
        ----------
        xy : array, shape (n, 2), m
            Easting, northing.

        Returns
        -------
        array, shape (n, 2), m
            Along the major axis, and across it divided by the ratio.
        """
        places = np.asarray(xy, float)
        if self.ratio == 1.0:
            return places
        azimuth = np.deg2rad(self.azimuth_deg)
        along = places @ np.array([np.sin(azimuth), np.cos(azimuth)])
        across = places @ np.array([np.cos(azimuth), -np.sin(azimuth)])
        return np.column_stack([along, across / self.ratio])

    def between(self, xy_a: ArrayLike, xy_b: ArrayLike) -> Array:
        """Return the structured covariance between places, without the nugget.

        Parameters
        ----------
        xy_a, xy_b : array, shapes (n, 2) and (m, 2), m
            Easting, northing.

        Returns
        -------
        array, shape (n, m), value units squared
            Built in place: one such block and at most one scratch block are held.
        """
        block = cdist(self.isotropic(xy_a), self.isotropic(xy_b))
        return self.at_distance(block, overwrite=True)

    def at_distance(self, distance_m: Array, overwrite: bool = False) -> Array:
        """Return the structured covariance at (anisotropic) distances, m."""
        block = distance_m if overwrite else np.array(distance_m, float)
        block *= PRACTICAL_OVER_NATURAL[self.model] / self.range_m
        block = _OVERWRITING[self.model](block)
        block *= self.sill
        return block

    def semivariance(self, distance_m: ArrayLike) -> Array:
        """Return the semivariance at distances in m, nugget included beyond distance 0."""
        h = np.array(distance_m, float)
        return np.where(h > 0, self.nugget + self.sill - self.at_distance(h), 0.0)
