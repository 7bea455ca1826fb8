"""Waples & Mahadir Ramly (2001): a factor of time and depth from Malaysia."""

from __future__ import annotations

import numpy as np

from basinheat.corrections.method import Context, Floats, Method, Outcome, Reference, Uncertainty
from basinheat.corrections.methods.rise_factor import multiply_rise
from basinheat.corrections.sets import ReadingSets

# Waples & Mahadir Ramly (2001), Petrol. Geosci. 7, 231-240; all from memory, doubtful.
_LOG_TIME, _CONSTANT, _SCALE, _POWER = -0.1462, 1.699, 0.572, 0.075
# What coefficients from memory may add to the 8 K of a regional formula at home, all of it shared
# (no source). Shared part of the 8 K: a quarter of the variance (common practice, no source).
_HOME_K, _MEMORY_K = 8.0, 6.0

# METHODS A12.
UNCERTAINTY = Uncertainty(
    float(np.hypot(_HOME_K, _MEMORY_K)),
    float(np.hypot(0.5 * _HOME_K, _MEMORY_K)),
    "common practice, no source: 8 K in the region; 6 K more, shared, for coefficients from memory",
)


def factor(since_h: Floats, depth_m: Floats) -> Floats:
    """Return what the rise above the surface is multiplied by, never below 1.

    Parameters
    ----------
    since_h, depth_m : (n,) array, h, m
        Time since circulation, depth below the sea floor.

    References
    ----------
    Waples & Mahadir Ramly (2001), A statistical method for correcting log-derived temperatures,
    Petrol. Geosci. 7, 231-240.

    Examples
    --------
    >>> import numpy as np
    >>> factor(np.array([10.0]), np.array([2000.0])).round(3)
    array([1.347])
    """
    raw = (_LOG_TIME * np.log(since_h) + _CONSTANT) / (_SCALE * depth_m**_POWER)
    return np.maximum(1.0, raw)


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Multiply the rise of the latest timed reading above the surface, in region and depths only.

    ``T∞ = T_0 + f (T − T_0)``, f = (−0.1462 ln Δt + 1.699) / (0.572 z^0.075).
    """
    since = sets.at(sets.since_circulation_h, sets.latest)
    share = factor(since, np.maximum(sets.depth_m, 1.0))
    return multiply_rise(METHOD, sets, context, share, UNCERTAINTY.total_k)


METHOD = Method(
    name="waples2001",
    title="Factor of time and depth from Malaysia",
    kind="bht",
    reference=Reference(
        "Waples & Mahadir Ramly",
        2001,
        "A statistical method for correcting log-derived temperatures, Petrol. Geosci. 7, 231-240",
        "T∞ = T_0 + f (T − T_0), f = (−0.1462 ln Δt + 1.699)/(0.572 z^0.075) (h, m)",
        "all coefficients from memory and doubtful, therefore never a default",
    ),
    needs=("depth_m", "temperature_degc", "since_circulation_h", "surface_temperature_degc"),
    validity="Malay basin, shallower than 3500 m below the sea floor; refused elsewhere",
    uncertainty=UNCERTAINTY,
    reasons=(
        "correction.region is not malay_basin",
        "the depth is outside 0 to 3500 m",
        "no timed reading",
        "the well has no surface temperature",
        "the formation would be cooler than the warmest reading",
    ),
    regions=("malay_basin",),
    depth_range_m=(0.0, 3500.0),
    estimate=estimate,
)
