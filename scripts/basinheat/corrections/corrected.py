"""Temperatures that somebody has corrected before."""

from __future__ import annotations

import numpy as np

from basinheat.corrections.method import Context, Loading, Method, Outcome, Reference, Uncertainty
from basinheat.corrections.sets import ReadingSets

UNCERTAINTY = Uncertainty(5.0, 2.0, "common practice, no source: a correction of unknown kind")


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Take the mean of the values as the formation temperature.

    A stated uncertainty counts as the total; it never hides the shared part, which the unknown
    correction left in all of them.
    """
    shared = np.full(len(sets), UNCERTAINTY.shared_k)
    total = np.where(sets.std_stated, sets.warmest_std_k, UNCERTAINTY.total_k)
    total = np.hypot(shared, np.sqrt(np.maximum(total**2 - shared**2, 1.0)))
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
