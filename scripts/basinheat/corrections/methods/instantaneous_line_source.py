"""Instantaneous line source: readings against the inverse of the time since circulation."""

from __future__ import annotations

from basinheat.corrections.method import Context, Floats, Method, Outcome, Reference, Uncertainty
from basinheat.corrections.methods.time_plot import (
    COOLER,
    REASONS,
    SHARED_K,
    Plot,
    carry_to_rest,
    cooler,
    refuse_more,
)
from basinheat.corrections.sets import ReadingSets

# METHODS A12 has none for this method: as for the cylinder source; a warning 2 K more (no source).
_FLOORS_K = (7.0, 7.0, 9.0, 9.0)

UNCERTAINTY = Uncertainty(
    _FLOORS_K[0],
    SHARED_K,
    "common practice, no source: 7 K as for the cylinder source, and the simulated bias",
    known_bias="low, more than Horner's plot; no size is published, so nothing is added and the "
    "bias simulated for the set's own times is shared error",
)


def inverse_time(since_h: Floats) -> Floats:
    """Return 1/Δt, 1/h."""
    return 1.0 / since_h


def _abscissa(_circulation: Floats, since_h: Floats, _radius: Floats, _kappa: float) -> Floats:
    return inverse_time(since_h)


PLOT = Plot("instantaneous_line_source", _abscissa, _FLOORS_K, bias_known=False)


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Estimate formation temperatures by the instantaneous line source.

    ``T(Δt) = T∞ − Q/(4πk Δt)``: all heat is taken out at once, along a line. It needs no
    circulation time, which must be short; where it is noted and is not, the set is refused.
    """
    outcome = carry_to_rest(PLOT, sets, context, UNCERTAINTY)
    long = sets.circulation_h >= sets.since_circulation_h[:, 0]
    return refuse_more(outcome, len(REASONS), long, cooler(sets, outcome))


METHOD = Method(
    name="instantaneous_line_source",
    title="Instantaneous line source",
    kind="bht",
    reference=Reference(
        "Carslaw & Jaeger",
        1959,
        "Conduction of heat in solids, Oxford University Press, section 10.3 (as a plot for wells: "
        "Goutorbe, Lucazeau & Bonneville 2007, Geophys. J. Int. 170, 913-922)",
        "T(Δt) = T∞ − Q/(4πk Δt)",
        "no coefficient; equation derived; citations from memory",
    ),
    needs=("depth_m", "temperature_degc", "since_circulation_h"),
    helps=("circulation_h", "hole_radius_m", "temperature_std_k", "surface_temperature_degc"),
    validity="two or more readings of one stop, κ Δt / a² ≥ 1, circulation far shorter than Δt",
    uncertainty=UNCERTAINTY,
    reasons=(*REASONS, "circulation lasted as long as the first reading came after it", COOLER),
    estimate=estimate,
)
