"""Temperatures of holes that have come to rest."""

from __future__ import annotations

import numpy as np

from basinheat.corrections.method import Context, Method, Outcome, Reference, Uncertainty
from basinheat.corrections.sets import ReadingSets

# METHODS A12.
UNCERTAINTY = Uncertainty(
    0.5, 0.0, "common practice, no source: log run after 30 × the drilling time, or fibre"
)


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Take the mean of the readings as the formation temperature.

    What is left of the disturbance and the sonde's calibration are common to a log, so their
    share of the variance is the well's. A larger stated uncertainty counts instead.
    """
    total = np.maximum(UNCERTAINTY.total_k, sets.warmest_std_k)
    independent, well = UNCERTAINTY.split(total, np.zeros(len(sets)), context.well_share)
    return Outcome(
        temperature_degc=sets.mean_degc,
        reason=np.zeros(len(sets), np.int64),
        independent_std_k=independent,
        well_std_k=well,
        variance_class=np.full(len(sets), "direct"),
    )


METHOD = Method(
    name="equilibrium",
    title="Equilibrium log, taken as it is",
    kind="equilibrium",
    reference=Reference(
        "Beardsmore & Cull",
        2001,
        "Crustal heat flow, Cambridge University Press",
        "T∞ = T",
        "no coefficient; citation from memory",
    ),
    needs=("temperature_degc",),
    helps=("temperature_std_k",),
    validity="logged long after drilling, no flow in the hole",
    uncertainty=UNCERTAINTY,
    reasons=(),
    estimate=estimate,
)
