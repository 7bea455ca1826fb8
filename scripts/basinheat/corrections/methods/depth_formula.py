"""What corrections that know only the depth have in common."""

from __future__ import annotations

import numpy as np

from basinheat.corrections.method import Context, Floats, Loading, Method, Outcome
from basinheat.corrections.sets import ReadingSets

# Outside the region a formula was made for (METHODS A12, common practice). Half the variance is
# then the region's own, common to all its wells.
OUTSIDE_TOTAL_K, OUTSIDE_SHARED_K = 12.0, 8.0
# A formula errs by more than one constant: published curves differ by 5 K at 2 km and cross at
# others. So its error also has a slope about the middle of its depths (common practice, no source).
SLOPE_K_KM, OUTSIDE_SLOPE_K_KM = 2.0, 6.0
OUTSIDE_REGION, OUTSIDE_DEPTHS = "outside_formula_region", "outside_formula_depths"


def add_correction(
    sets: ReadingSets, context: Context, method: Method, correction_k: Floats
) -> Outcome:
    """Add a correction of depth to the warmest reading of every set.

    Parameters
    ----------
    sets : ReadingSets
        Mud-cooled sets.
    context : Context
        Settings.
    method : Method
        The formula: its region and depths, its uncertainty there.
    correction_k : (sets,) array, K
        What to add.
    """
    at_home, uncertainty = context.region in method.regions, method.uncertainty
    low, high = method.depth_range_m
    total_k = uncertainty.total_k if at_home else OUTSIDE_TOTAL_K
    shared_k = uncertainty.shared_k if at_home else OUTSIDE_SHARED_K
    slope_k_km = SLOPE_K_KM if at_home else OUTSIDE_SLOPE_K_KM
    shared = np.full(len(sets), shared_k)
    about_km = (sets.depth_m - 0.5 * (low + high)) / 1000.0
    independent, well = uncertainty.split(np.full(len(sets), total_k), shared, context.well_share)
    return Outcome(
        temperature_degc=sets.warmest_degc + correction_k,
        reason=np.zeros(len(sets), np.int64),
        independent_std_k=independent,
        well_std_k=well,
        variance_class=np.full(len(sets), f"method:{method.name}"),
        loadings={
            f"method:{method.name}": Loading(shared, shared_k, "K"),
            f"method:{method.name}_slope": Loading(slope_k_km * about_km, slope_k_km, "K/km"),
        },
        flags={
            OUTSIDE_REGION: np.full(len(sets), not at_home),
            OUTSIDE_DEPTHS: ~((sets.depth_m >= low) & (sets.depth_m <= high)),
        },
    )
