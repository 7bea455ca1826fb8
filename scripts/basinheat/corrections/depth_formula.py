"""What corrections that know only the depth have in common."""

from __future__ import annotations

import numpy as np

from basinheat.corrections.method import Context, Flags, Floats, Loading, Outcome, Uncertainty
from basinheat.corrections.sets import ReadingSets

# Outside the region a formula was made for (METHODS A12, common practice). Half the variance is
# then the region's own, common to all its wells.
OUTSIDE_TOTAL_K, OUTSIDE_SHARED_K = 12.0, 8.0


def add_correction(
    sets: ReadingSets,
    context: Context,
    name: str,
    uncertainty: Uncertainty,
    correction_k: Floats,
    at_home: bool,
    in_range: Flags,
) -> Outcome:
    """Add a correction of depth to the warmest reading of every set.

    Parameters
    ----------
    sets : ReadingSets
        Mud-cooled sets.
    context : Context
        Settings.
    name : str
        Method.
    uncertainty : Uncertainty
        Inside the region.
    correction_k : (sets,) array, K
        What to add.
    at_home : bool
        Whether the wells lie in the formula's region.
    in_range : (sets,) array of bool
        Whether depths are those it was made for.
    """
    total_k = uncertainty.total_k if at_home else OUTSIDE_TOTAL_K
    shared_k = uncertainty.shared_k if at_home else OUTSIDE_SHARED_K
    shared = np.full(len(sets), shared_k)
    independent, well = uncertainty.split(np.full(len(sets), total_k), shared, context.well_share)
    return Outcome(
        temperature_degc=sets.warmest_degc + correction_k,
        reason=np.zeros(len(sets), np.int64),
        independent_std_k=independent,
        well_std_k=well,
        variance_class=np.full(len(sets), f"method:{name}"),
        loadings={f"method:{name}": Loading(shared, shared_k, "K")},
        flags={
            "outside_formula_region": np.full(len(sets), not at_home),
            "outside_formula_depths": ~in_range,
        },
    )
