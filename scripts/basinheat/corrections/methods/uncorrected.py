"""Mud-cooled readings as they are: lower bounds."""

from __future__ import annotations

import numpy as np

from basinheat.corrections.method import Context, Loading, Method, Outcome, Reference, Uncertainty
from basinheat.corrections.sets import ReadingSets

UNCERTAINTY = Uncertainty(
    float(np.hypot(8.0, 8.0)),
    8.0,
    "common practice, no source: corrections are 5 to 20 K, of either part about as much",
    known_bias="low by the missing correction; nothing is added, so it is a lower bound",
)


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Take the warmest reading as a lower bound of the formation temperature."""
    shared = np.full(len(sets), UNCERTAINTY.shared_k)
    total = np.full(len(sets), UNCERTAINTY.total_k)
    independent, well = UNCERTAINTY.split(total, shared, context.well_share)
    return Outcome(
        temperature_degc=sets.warmest_degc,
        reason=np.zeros(len(sets), np.int64),
        independent_std_k=independent,
        well_std_k=well,
        variance_class=np.full(len(sets), "method:uncorrected"),
        loadings={"method:uncorrected": Loading(shared, UNCERTAINTY.shared_k, "K")},
        flags={"lower_bound": np.ones(len(sets), bool)},
    )


METHOD = Method(
    name="uncorrected",
    title="Uncorrected reading, a lower bound",
    kind="bht",
    reference=Reference(
        "common practice", 2026, "no publication: the reading itself", "T∞ ≥ T", "no coefficient"
    ),
    needs=("temperature_degc",),
    validity="a lower bound only: mud cools deep rock",
    uncertainty=UNCERTAINTY,
    reasons=(),
    estimate=estimate,
)
