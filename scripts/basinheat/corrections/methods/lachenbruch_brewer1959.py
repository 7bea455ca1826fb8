"""Lachenbruch and Brewer (1959): one timed reading after long drilling, and the mud."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from basinheat.corrections.method import Context, Method, Outcome, Reference
from basinheat.corrections.methods import bullard1947
from basinheat.corrections.methods.time_plot import refuse_more
from basinheat.corrections.sets import ReadingSets

NAME = "lachenbruch_brewer1959"


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Estimate formation temperatures where drilling, not circulation alone, cooled the rock.

    ``T∞ − T(Δt) = (q/4πk) ln(1 + s/Δt)`` with s the whole time from the bit's passing the depth to
    the last circulation; scaled by the cooling at its end as in Bullard's method.
    """
    drilled = np.isfinite(sets.drilling_h)
    outcome = bullard1947.from_mud(replace(sets, circulation_h=sets.drilling_h), context, NAME)
    flags = {name: here for name, here in outcome.flags.items() if name != "circulation_assumed"}
    return refuse_more(replace(outcome, flags=flags), len(bullard1947.METHOD.reasons), ~drilled)


METHOD = Method(
    name=NAME,
    title="One reading after long drilling, and the mud's temperature",
    kind="bht",
    reference=Reference(
        "Lachenbruch & Brewer",
        1959,
        "Dissipation of the temperature effect of drilling a well in Arctic Alaska, U.S. "
        "Geological Survey Bulletin 1083-C",
        "T∞ = (T − F T_m)/(1 − F), F = ln(1 + s/Δt) / E₁(a²/4κs)",
        "no coefficient; equation derived; citation from memory; mud's guess is common practice",
    ),
    needs=("depth_m", "temperature_degc", "since_circulation_h", "drilling_h"),
    helps=bullard1947.METHOD.helps,
    validity="one timed reading, κ Δt / a² ≥ 1, less than half of the cooling left; drilling long "
    "beside circulation",
    uncertainty=bullard1947.UNCERTAINTY,
    reasons=(*bullard1947.METHOD.reasons, "the time of drilling is not noted"),
    estimate=estimate,
)
