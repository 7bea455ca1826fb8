"""Temperatures that somebody has corrected before."""

from __future__ import annotations

import numpy as np

from basinheat.corrections.method import Context, Loading, Method, Outcome, Reference, Uncertainty
from basinheat.corrections.sets import ReadingSets

# No correction of a disturbed reading is better than this (METHODS A12, common practice).
_LEAST_K = 3.0

UNCERTAINTY = Uncertainty(5.0, 2.0, "common practice, no source: a correction of unknown kind")


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Take the mean of the values as the formation temperature.

    A stated uncertainty counts as the total, but not below 3 K: what is stated may be that of the
    thermometer alone.
    """
    shared = np.full(len(sets), UNCERTAINTY.shared_k)
    stated = np.maximum(sets.warmest_std_k, _LEAST_K)
    total = np.where(sets.std_stated, stated, UNCERTAINTY.total_k)
    independent, well = UNCERTAINTY.split(total, shared, context.well_share)
    return Outcome(
        temperature_degc=sets.mean_degc,
        reason=np.zeros(len(sets), np.int64),
        independent_std_k=independent,
        well_std_k=well,
        variance_class=np.full(len(sets), "method:corrected"),
        loadings={"method:corrected": Loading(shared, UNCERTAINTY.shared_k, "K")},
    )


METHOD = Method(
    name="corrected",
    title="Corrected before, taken as given",
    kind="corrected",
    reference=Reference(
        "common practice",
        2026,
        "no publication: whoever delivered the value corrected it",
        "T∞ = T",
        "no coefficient",
    ),
    needs=("temperature_degc",),
    helps=("temperature_std_k",),
    validity="as good as the correction it came with",
    uncertainty=UNCERTAINTY,
    reasons=(),
    estimate=estimate,
)
