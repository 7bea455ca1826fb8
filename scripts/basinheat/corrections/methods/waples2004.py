"""Waples, Pacheco & Vera (2004): a factor of time from the deep wells of Campeche."""

from __future__ import annotations

import numpy as np

from basinheat.corrections.method import Context, Floats, Method, Outcome, Reference, Uncertainty
from basinheat.corrections.methods.rise_factor import multiply_rise
from basinheat.corrections.sets import ReadingSets

# Waples, Pacheco & Vera (2004), Petrol. Geosci. 10, 239-245; seen in the abstract.
_CONSTANT, _PER_HOUR, _PER_METRE, _MIDDLE_M = 1.32866, -0.005289, -0.001391, 4498.0
# The paper prints the factor's own standard uncertainty, which was not seen (common practice).
_FACTOR_STD = 0.06

# METHODS A8, A12.
UNCERTAINTY = Uncertainty(
    8.0,
    4.0,
    "common practice, no source: 8 K in the region, or a factor uncertain by 0.06 if more; "
    "shared part: a quarter of the variance",
)


def factor(since_h: Floats) -> Floats:
    """Return what the rise above the surface is multiplied by, 1 from 62.1 h on.

    Parameters
    ----------
    since_h : (n,) array, h
        Time since circulation.

    References
    ----------
    Waples, Pacheco & Vera (2004), A method for correcting log-derived temperatures in deep wells,
    calibrated in the Gulf of Mexico, Petrol. Geosci. 10, 239-245.

    Examples
    --------
    >>> import numpy as np
    >>> factor(np.array([12.0, 70.0])).round(5)
    array([1.26519, 1.     ])
    """
    return np.maximum(1.0, _CONSTANT + _PER_HOUR * since_h)


def added_k(depth_m: Floats) -> Floats:
    """Return what depth below the sea floor adds, K: nothing at 4498 m, less below."""
    return _PER_METRE * (depth_m - _MIDDLE_M)


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Multiply the rise of the latest timed reading above the surface, in region and depths only.

    ``T∞ = T_0 + f (T − T_0) − 0.001391 (z − 4498)``, f = 1.32866 − 0.005289 Δt.
    """
    share = factor(sets.at(sets.since_circulation_h, sets.latest))
    rise = sets.at(sets.temperature_degc, sets.latest) - sets.surface_temperature_degc
    reading = sets.at(sets.temperature_std_k, sets.latest)
    own = np.hypot(_FACTOR_STD * np.abs(rise), share * reading)
    total = np.maximum(UNCERTAINTY.total_k, own)
    return multiply_rise(METHOD, sets, context, share, total, added_k(sets.depth_m))


METHOD = Method(
    name="waples2004",
    title="Factor of time from deep wells of Campeche",
    kind="bht",
    reference=Reference(
        "Waples, Pacheco & Vera",
        2004,
        "A method for correcting log-derived temperatures in deep wells, calibrated in the Gulf of "
        "Mexico, Petrol. Geosci. 10, 239-245",
        "T∞ = T_0 + f (T − T_0) − 0.001391 (z − 4498), f = 1.32866 − 0.005289 Δt (h, m), f ≥ 1",
        "all coefficients seen in the abstract; the factor's uncertainty is common practice",
    ),
    needs=("depth_m", "temperature_degc", "since_circulation_h", "surface_temperature_degc"),
    helps=("temperature_std_k",),
    validity="Gulf of Campeche, 3500 to 6500 m below the sea floor; refused elsewhere",
    uncertainty=UNCERTAINTY,
    reasons=(
        "correction.region is not campeche",
        "the depth is outside 3500 to 6500 m",
        "no timed reading",
        "the well has no surface temperature",
        "the formation would be cooler than the warmest reading",
    ),
    regions=("campeche",),
    depth_range_m=(3500.0, 6500.0),
    estimate=estimate,
)
