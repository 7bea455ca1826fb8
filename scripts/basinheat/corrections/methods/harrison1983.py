"""Harrison and others (1983): a parabola of depth from Oklahoma."""

from __future__ import annotations

import numpy as np

from basinheat.corrections.method import Context, Floats, Method, Outcome, Reference, Uncertainty
from basinheat.corrections.methods.depth_formula import add_correction
from basinheat.corrections.sets import ReadingSets

# Harrison, Luza, Prater & Cheung (1983): constant, linear and quadratic term, K and metres. Read
# to five digits in open research code; further digits from memory.
_CONSTANT_K, _LINEAR, _QUADRATIC = -16.51213476, 0.01826842109, -2.344936959e-6
VERTEX_M = -_LINEAR / (2.0 * _QUADRATIC)

# METHODS A12.
UNCERTAINTY = Uncertainty(
    8.0,
    4.0,
    "common practice, no source: 8 K in the region; shared part: a quarter of the variance",
)


def parabola_k(depth_m: Floats) -> Floats:
    """Return the published parabola, K, as it stands."""
    return _CONSTANT_K + _LINEAR * depth_m + _QUADRATIC * depth_m**2


def correction_k(depth_m: Floats) -> Floats:
    """Return what to add to a reading, K.

    Parameters
    ----------
    depth_m : (n,) array, m
        Depth below ground.

    Returns
    -------
    (n,) array, K
        The parabola, never below 0 (above 1,044 m) and held beyond its vertex (3,895 m).

    References
    ----------
    Harrison, Luza, Prater & Cheung (1983), Geothermal resource assessment in Oklahoma.

    Examples
    --------
    >>> import numpy as np
    >>> correction_k(np.array([500.0, 2000.0, 6000.0])).round(2)
    array([ 0.  , 10.64, 19.07])
    """
    return np.maximum(0.0, parabola_k(np.minimum(depth_m, VERTEX_M)))


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Add the correction to the warmest reading of every set."""
    return add_correction(sets, context, METHOD, correction_k(sets.depth_m))


METHOD = Method(
    name="harrison1983",
    title="Harrison's parabola of depth",
    kind="bht",
    reference=Reference(
        "Harrison, Luza, Prater & Cheung",
        1983,
        "Geothermal resource assessment in Oklahoma, Oklahoma Geological Survey",
        "ΔT = −16.512 + 0.018268 z − 2.3449e-6 z² (K, m), held beyond its vertex, never negative",
        "all three coefficients seen to five digits in open research code; the rest from memory",
    ),
    needs=("depth_m", "temperature_degc"),
    validity="Oklahoma, 900 to 3000 m; flagged elsewhere",
    uncertainty=UNCERTAINTY,
    reasons=(),
    regions=("oklahoma",),
    depth_range_m=(900.0, 3000.0),
    estimate=estimate,
)
