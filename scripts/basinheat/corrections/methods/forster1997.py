"""Förster, Merriam & Davis (1997): a line of depth from south-east Kansas."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from basinheat.corrections.method import Context, Floats, Method, Outcome, Reference, Uncertainty
from basinheat.corrections.methods.depth_formula import (
    OUTSIDE_DEPTHS,
    OUTSIDE_REGION,
    add_correction,
)
from basinheat.corrections.sets import ReadingSets

# Förster, Merriam & Davis (1997), Geol. Rundsch. 86, read in open code: K/m and K.
_LINEAR_K_M, _CONSTANT_K = 0.017, -6.58

# METHODS A9.
UNCERTAINTY = Uncertainty(
    7.0,
    3.5,
    "common practice, no source: 5 to 7 K in the region; shared part: a quarter of the variance",
)


def correction_k(depth_m: Floats) -> Floats:
    """Return what to add to a reading, K; the published line as it stands.

    Parameters
    ----------
    depth_m : (n,) array, m
        Depth below ground.

    References
    ----------
    Förster, Merriam & Davis (1997), Spatial analysis of temperature (BHT/DST) data and
    consequences for heat-flow determination in sedimentary basins, Geol. Rundsch. 86, 252-261.

    Examples
    --------
    >>> import numpy as np
    >>> correction_k(np.array([1000.0])).round(2)
    array([10.42])
    """
    return _LINEAR_K_M * depth_m + _CONSTANT_K


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Add the correction to the warmest reading of every set, inside region and depths only."""
    outcome = add_correction(sets, context, METHOD, correction_k(sets.depth_m))
    away, beyond = (outcome.flags[name] for name in (OUTSIDE_REGION, OUTSIDE_DEPTHS))
    return replace(outcome, reason=np.select([away, beyond], [1, 2], 0))


METHOD = Method(
    name="forster1997",
    title="Line of depth from south-east Kansas",
    kind="bht",
    reference=Reference(
        "Förster, Merriam & Davis",
        1997,
        "Spatial analysis of temperature (BHT/DST) data and consequences for heat-flow "
        "determination in sedimentary basins, Geol. Rundsch. 86, 252-261",
        "ΔT = 0.017 z − 6.58 (K, m)",
        "both coefficients seen in open code",
    ),
    needs=("depth_m", "temperature_degc"),
    validity="south-east Kansas, 400 to 1800 m; refused elsewhere (27 K at 2 km)",
    uncertainty=UNCERTAINTY,
    reasons=(
        "correction.region is not kansas_southeast",
        "the depth is outside 400 to 1800 m",
    ),
    regions=("kansas_southeast",),
    depth_range_m=(400.0, 1800.0),
    estimate=estimate,
)
