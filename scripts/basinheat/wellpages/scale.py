"""From values to places in a picture: limits, ticks, thinning."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

_STEPS = (1.0, 2.0, 5.0, 10.0)


@dataclass(frozen=True)
class Scale:
    """A straight scale between values and places.

    Parameters
    ----------
    low, high : float
        Values at its two ends, ``low < high``.
    start, end : float, px
        Their places; ``start > end`` turns the scale round.
    """

    low: float
    high: float
    start: float
    end: float

    def __call__(self, values: Floats | float) -> Floats:
        """Return the places of values, px; values beyond the ends lie beyond the ends."""
        share = (np.asarray(values, float) - self.low) / (self.high - self.low)
        return self.start + share * (self.end - self.start)

    def ticks(self, about: int) -> Floats:
        """Return round values on the scale, some ``about`` of them."""
        step = nice_step(self.high - self.low, about)
        slack = 1e-9 * (self.high - self.low)
        first = np.ceil((self.low - slack) / step)
        last = np.floor((self.high + slack) / step)
        return np.arange(first, last + 1) * step + 0.0  # no -0


def nice_step(span: float, about: int) -> float:
    """Return the step of 1, 2 or 5 times a power of ten that cuts a span into at most ``about``.

    Parameters
    ----------
    span : float
        Above zero.
    about : int
        Intervals, at most.

    Examples
    --------
    >>> nice_step(90.0, 6), nice_step(3100.0, 6), nice_step(0.9, 4)
    (20.0, 1000.0, 0.5)
    """
    rough = span / about
    power = 10.0 ** np.floor(np.log10(rough))
    return float(next(step * power for step in _STEPS if step * power >= rough * (1 - 1e-9)))


def limits(values: Floats, margin: float = 0.05, least: float = 1.0) -> tuple[float, float]:
    """Return limits around values, with a margin as a share of their span.

    Parameters
    ----------
    values : (n,) array
        NaN and infinite ones are left out.
    margin : float
        Share of the span added at both ends.
    least : float
        Smallest span.

    Returns
    -------
    (float, float)
        (0, least) where there is no value.
    """
    values = np.asarray(values, float)
    values = values[np.isfinite(values)]
    if values.size == 0:
        return 0.0, least
    low, high = float(values.min()), float(values.max())
    widen = max(least - (high - low), 0.0) / 2.0 + margin * max(high - low, least)
    return low - widen, high + widen


def thinned(n: int, most: int) -> NDArray[np.int64]:
    """Return which of n points to draw where at most so many are wanted: evenly, both ends.

    Examples
    --------
    >>> thinned(3, 10).tolist(), thinned(100, 4).tolist()
    ([0, 1, 2], [0, 33, 66, 99])
    """
    if n <= most:
        return np.arange(n)
    return np.unique(np.linspace(0, n - 1, most).round().astype(np.int64))
