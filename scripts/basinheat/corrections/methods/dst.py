"""Temperatures of liquids recovered in drill-stem tests."""

from __future__ import annotations

import numpy as np

from basinheat.corrections.method import Context, Loading, Method, Outcome, Reference, Uncertainty
from basinheat.corrections.sets import ReadingSets

# METHODS A11, A12.
UNCERTAINTY = Uncertainty(3.0, 0.5, "common practice, no source: liquid recovered, 3 K")


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Take the mean of the test's readings as the formation temperature.

    Gas cools on expansion and a deeper inflow warms: errors of the single test, so that all but
    the shared part is independent.
    """
    shared = np.full(len(sets), UNCERTAINTY.shared_k)
    total = np.maximum(UNCERTAINTY.total_k, sets.warmest_std_k)
    independent, well = UNCERTAINTY.split(total, shared, 0.0)
    return Outcome(
        temperature_degc=sets.mean_degc,
        reason=np.zeros(len(sets), np.int64),
        independent_std_k=independent,
        well_std_k=well,
        variance_class=np.full(len(sets), "direct"),
        loadings={"method:dst": Loading(shared, UNCERTAINTY.shared_k, "K")},
    )


METHOD = Method(
    name="dst",
    title="Drill-stem test, taken as it is",
    kind="dst",
    reference=Reference(
        "Hermanrud, Cao & Lerche",
        1990,
        "Estimates of virgin rock temperature derived from BHT measurements, Geophysics 55",
        "T∞ = T",
        "no coefficient; citation from memory; handling is common practice",
    ),
    needs=("temperature_degc",),
    helps=("temperature_std_k",),
    validity="liquid recovered, several hole volumes, gauge near the perforations; not gas",
    uncertainty=UNCERTAINTY,
    reasons=(),
    estimate=estimate,
)
