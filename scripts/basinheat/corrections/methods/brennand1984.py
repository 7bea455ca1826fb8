"""Brennand (1984): readings against the inverse of time since circulation and part of it."""

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

# Brennand (1984), 6th New Zealand Geothermal Workshop; the coefficient is from memory.
PART_OF_CIRCULATION = 0.785
# METHODS A12 has none for this method: as for the cylinder source; a warning 2 K more (no source).
_FLOORS_K = (7.0, 7.0, 9.0, 9.0)

UNCERTAINTY = Uncertainty(
    _FLOORS_K[0],
    SHARED_K,
    "common practice, no source: 7 K as for the cylinder source, and the simulated bias",
    known_bias="no size is published, so nothing is taken out and the bias simulated for the set's "
    "own times is shared error",
)


def brennand_time(circulation_h: Floats, since_h: Floats) -> Floats:
    """Return 1/(Δt + 0.785 t_c), 1/h."""
    return 1.0 / (since_h + PART_OF_CIRCULATION * circulation_h)


def _abscissa(circulation_h: Floats, since_h: Floats, _radius: Floats, _kappa: float) -> Floats:
    return brennand_time(circulation_h, since_h)


PLOT = Plot("brennand1984", _abscissa, _FLOORS_K, bias_known=False)


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Estimate formation temperatures by Brennand's plot.

    ``T(Δt) = T∞ − m/(Δt + p t_c)``, p = 0.785. An unknown t_c is integrated over its prior.
    """
    outcome = carry_to_rest(PLOT, sets, context, UNCERTAINTY)
    return refuse_more(outcome, len(REASONS), cooler(sets, outcome))


METHOD = Method(
    name="brennand1984",
    title="Brennand's plot",
    kind="bht",
    reference=Reference(
        "Brennand",
        1984,
        "A new method for the analysis of static formation temperature tests, Proceedings of the "
        "6th New Zealand Geothermal Workshop",
        "T(Δt) = T∞ − m/(Δt + 0.785 t_c)",
        "coefficient from memory, therefore never a default",
    ),
    needs=("depth_m", "temperature_degc", "since_circulation_h"),
    helps=("circulation_h", "hole_radius_m", "temperature_std_k", "surface_temperature_degc"),
    validity="two or more readings of one stop, κ Δt / a² ≥ 1; made for geothermal wells",
    uncertainty=UNCERTAINTY,
    reasons=(*REASONS, COOLER),
    estimate=estimate,
)
