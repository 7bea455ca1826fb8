"""Horner plot: readings against ln(1 + circulation / time since), carried to endless rest."""

from __future__ import annotations

import numpy as np

from basinheat.corrections.method import Context, Floats, Method, Outcome, Reference, Uncertainty
from basinheat.corrections.methods.time_plot import REASONS, SHARED_K, Plot, carry_to_rest
from basinheat.corrections.sets import ReadingSets

# METHODS A12: three good points, two points or a warning, two points and a warning (the last: no
# source).
_FLOORS_K = (6.0, 8.0, 8.0, 10.0)
# METHODS A1 (common practice, supported by the simulations A6).
_SPREAD, _LATE = (0.15, 0.3), 4.0

# METHODS A1, A12.
UNCERTAINTY = Uncertainty(
    _FLOORS_K[0],
    SHARED_K,
    "largest of regression, reading, circulation time and a floor of 6 K for three good points, "
    "8 K for two (common practice, no source)",
    known_bias="low: the share of the cooling simulated for the set's own times is added where "
    "κ Δt / a² < 4",
)


def horner_time(circulation_h: Floats, since_h: Floats) -> Floats:
    """Return ln((t_c + Δt) / Δt)."""
    return np.log1p(circulation_h / since_h)


def _abscissa(circulation_h: Floats, since_h: Floats, _radius: Floats, _kappa: float) -> Floats:
    return horner_time(circulation_h, since_h)


PLOT = Plot("horner", _abscissa, _FLOORS_K, bias_until=_LATE, spread=_SPREAD)


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Estimate formation temperatures by the Horner plot.

    ``T(Δt) = T∞ + m ln((t_c + Δt)/Δt)``: a line source that ran for the circulation time t_c. An
    unknown t_c is integrated over its prior. What a hole of finite width is known to fall short
    by is added; what is not known of it is the shared source ``method:horner``.
    """
    return carry_to_rest(PLOT, sets, context, UNCERTAINTY)


METHOD = Method(
    name="horner",
    title="Horner plot",
    kind="bht",
    reference=Reference(
        "Timko & Fertl; Dowdle & Cobb",
        1975,
        "Static formation temperature from well logs: an empirical method, J. Pet. Tech. 27, "
        "1326-1330 (after Horner 1951)",
        "T(Δt) = T∞ + m ln((t_c + Δt)/Δt)",
        "no coefficient; tests are common practice",
    ),
    needs=("depth_m", "temperature_degc", "since_circulation_h"),
    helps=("circulation_h", "hole_radius_m", "temperature_std_k", "surface_temperature_degc"),
    validity="two or more readings of one stop, κ Δt / a² ≥ 1, circulation short beside Δt",
    uncertainty=UNCERTAINTY,
    reasons=REASONS,
    estimate=estimate,
)
