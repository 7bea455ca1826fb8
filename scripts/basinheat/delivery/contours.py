"""Contour lines of the maps, at round numbers."""

from __future__ import annotations

import numpy as np

STEPS = (1.0, 2.0, 2.5, 5.0, 10.0)  # common practice: steps a reader can count in


def step(low: float, high: float, wanted: int = 10) -> float:
    """Return a round step that cuts a range into at most ``wanted`` parts.

    Examples
    --------
    >>> step(52.0, 88.0), step(0.0, 5200.0)
    (5.0, 1000.0)
    """
    rough = (high - low) / wanted
    if not np.isfinite(rough) or rough <= 0.0:
        return 1.0
    power = 10.0 ** np.floor(np.log10(rough))
    return float(next(size for size in STEPS if size * power >= rough * (1 - 1e-9)) * power)


def levels(low: float, high: float, step_size: float) -> np.ndarray:
    """Return the multiples of a step inside a range, (n,).

    Examples
    --------
    >>> levels(52.0, 71.0, 5.0)
    array([55., 60., 65., 70.])
    """
    first, last = np.ceil(low / step_size - 1e-9), np.floor(high / step_size + 1e-9)
    return np.arange(first, last + 1) * step_size


def lines(
    field: np.ndarray, eastings: np.ndarray, northings: np.ndarray, at: np.ndarray
) -> tuple[list[np.ndarray], np.ndarray]:
    """Trace contour lines of a field given at cell centres.

    Parameters
    ----------
    field : ndarray, (rows, cols)
        Values, NaN where blank; no line crosses a blank cell.
    eastings : ndarray, (cols,)
        Of the centres, m.
    northings : ndarray, (rows,)
        Of the centres, m.
    at : ndarray, (n,)
        Levels.

    Returns
    -------
    list of ndarray, (points, 2)
        Each line's easting and northing, rounded to 1 cm; m.
    ndarray
        The level of each line.
    """
    from contourpy import contour_generator

    if min(field.shape) < 2:
        return [], np.empty(0)
    masked = np.ma.masked_invalid(field)
    tracer = contour_generator(eastings, northings, masked, name="serial", corner_mask=True)
    found, owner = [], []
    for level in at:
        for line in tracer.lines(float(level)):
            found.append(np.round(line, 2))
            owner.append(level)
    return found, np.array(owner, float)
