"""Kehle and others (1970-72), Gregory and others (1980): a cubic of depth from many US wells."""

from __future__ import annotations

import numpy as np

from basinheat.corrections.method import Context, Floats, Method, Outcome, Reference, Uncertainty
from basinheat.corrections.methods.depth_formula import add_correction
from basinheat.corrections.sets import ReadingSets

# As published: °F of a temperature difference, depth in feet; cubic, quadratic, linear, constant.
_CUBIC_F_FT = (-8.819e-12, -2.143e-8, 4.375e-3, -1.018)
_FEET_PER_METRE = 1.0 / 0.3048
_KELVIN_PER_FAHRENHEIT = 1.0 / 1.8
# Where the cubic turns: the positive root of its derivative.
SUMMIT_FT = float(np.roots(np.polyder(np.array(_CUBIC_F_FT))).max())

# METHODS A12.
UNCERTAINTY = Uncertainty(
    8.0,
    4.0,
    "common practice, no source: 8 K in the region; shared part: a quarter of the variance",
)


def cubic_f(depth_ft: Floats) -> Floats:
    """Return the published cubic, °F of depth in feet, as it stands."""
    return np.asarray(np.polyval(_CUBIC_F_FT, depth_ft), dtype=np.float64)


def correction_k(depth_m: Floats) -> Floats:
    """Return what to add to a reading, K.

    Parameters
    ----------
    depth_m : (n,) array, m
        Depth below ground.

    Returns
    -------
    (n,) array, K
        The cubic, never below 0 (above 71 m) and held beyond its summit (3,680 m).

    References
    ----------
    Kehle, Schoeppel & DeFord (1970), The AAPG geothermal survey of North America; polynomial in
    Gregory and others (1980).

    Examples
    --------
    >>> import numpy as np
    >>> correction_k(np.array([3048.0])).round(2)
    array([17.65])
    """
    depth_ft = np.minimum(depth_m * _FEET_PER_METRE, SUMMIT_FT)
    return np.maximum(0.0, cubic_f(depth_ft) * _KELVIN_PER_FAHRENHEIT)


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Add the correction to the warmest reading of every set."""
    return add_correction(sets, context, METHOD, correction_k(sets.depth_m))


METHOD = Method(
    name="kehle_gregory",
    title="Average correction of a survey of North American wells",
    kind="bht",
    reference=Reference(
        "Kehle, Schoeppel & DeFord; Gregory and others",
        1980,
        "The AAPG geothermal survey of North America (1970); polynomial: Gregory and others (1980)",
        "ΔT(°F) = −8.819e-12 D³ − 2.143e-8 D² + 4.375e-3 D − 1.018, D in feet, held beyond its "
        "summit",
        "coefficients from memory",
    ),
    needs=("depth_m", "temperature_degc"),
    validity="average of wells of the United States, to its summit at 3680 m; held below",
    uncertainty=UNCERTAINTY,
    reasons=(),
    regions=("united_states", "oklahoma", "kansas_southeast"),
    depth_range_m=(71.0, 3680.0),
    estimate=estimate,
)
