"""Smooth random fields that can be asked at any place."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

# Root of (1 + x) exp(-x) = 0.05: where a Matern-1.5 correlation has fallen to 5 %.
_MATERN15_AT_5_PERCENT = 4.743864518
_MODES = 300
_BLOCK = 4096


@dataclass(frozen=True)
class Field:
    """A Gaussian random field of Matern-1.5 covariance, as a sum of plane waves.

    Parameters
    ----------
    wave_x, wave_y : (m,) array, rad/m
        Wave numbers.
    phase : (m,) array, rad
        Phases.
    std : float
        Standard deviation of the field, in its own unit.
    """

    wave_x: Array
    wave_y: Array
    phase: Array
    std: float

    @classmethod
    def draw(cls, rng: np.random.Generator, std: float, practical_range_m: float) -> Field:
        """Draw a field of mean zero.

        The spectral density of a Matern-1.5 covariance in the plane is a bivariate Student
        density with 3 degrees of freedom; wave numbers drawn from it give the covariance exactly
        on average over draws.

        Parameters
        ----------
        rng : numpy.random.Generator
            Source of randomness.
        std : float
            Standard deviation.
        practical_range_m : float, m
            Distance at which the correlation is 5 %.

        References
        ----------
        Rasmussen, C. E. and Williams, C. K. I. (2006), Gaussian Processes for Machine Learning,
        eq. 4.15 (spectral density of the Matern class).
        """
        length = np.sqrt(3.0) * practical_range_m / _MATERN15_AT_5_PERCENT
        stretch = np.sqrt(3.0 / rng.chisquare(3.0, _MODES)) / length
        waves = rng.standard_normal((2, _MODES)) * stretch
        return cls(waves[0], waves[1], rng.uniform(0.0, 2.0 * np.pi, _MODES), std)

    def at(self, easting_m: Array, northing_m: Array) -> Array:
        """Return the field at places.

        Parameters
        ----------
        easting_m, northing_m : (n,) array, m
            Places.

        Returns
        -------
        (n,) array
            The field.
        """
        x, y = np.asarray(easting_m, float), np.asarray(northing_m, float)
        out = np.empty(x.size)
        for start in range(0, x.size, _BLOCK):
            part = slice(start, start + _BLOCK)
            angle = np.outer(x[part], self.wave_x) + np.outer(y[part], self.wave_y) + self.phase
            out[part] = np.cos(angle).sum(axis=1)
        return self.std * np.sqrt(2.0 / self.phase.size) * out
