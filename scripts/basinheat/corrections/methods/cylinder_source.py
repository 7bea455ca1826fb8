"""Cylinder source: a hole filled at once with mud of one temperature, and of the rock's kind."""

from __future__ import annotations

import numpy as np

from basinheat.corrections.method import Context, Floats, Method, Outcome, Reference, Uncertainty
from basinheat.corrections.methods.time_plot import (
    COOLER,
    REASONS,
    SHARED_K,
    Plot,
    carry_to_rest,
    circulation_of,
    cooler,
    refuse_more,
    rest,
)
from basinheat.corrections.sets import ReadingSets

# METHODS A12: 7 K from two readings on; a warning 2 K more (no source).
_FLOORS_K = (7.0, 7.0, 9.0, 9.0)
# No line source: early readings are as good as late ones, but warn where recovery hardly began.
_EARLY = (0.0, 1.0)

# METHODS A1, A6, A12.
UNCERTAINTY = Uncertainty(
    _FLOORS_K[0],
    SHARED_K,
    "common practice, no source: 7 K; regression, reading, diffusivity 30 %, radius 10 %",
    known_bias="low, for it leaves circulation out (1 to 19 % of the cooling, as simulated): the "
    "share simulated for the set's own times is added",
)


def share_left(since_h: Floats, radius_m: Floats, diffusivity_m2_s: float) -> Floats:
    """Return the share of the cooling left on the axis, ``1 − exp(−a²/4κΔt)``.

    References
    ----------
    Carslaw & Jaeger (1959), Conduction of heat in solids, section 10.3.

    Examples
    --------
    >>> import numpy as np
    >>> share_left(np.array([2.0]), np.array([0.108]), 1e-6).round(4)
    array([0.333])
    """
    return np.asarray(-np.expm1(-0.25 / rest(since_h, radius_m, diffusivity_m2_s)))


def _abscissa(_circulation: Floats, since_h: Floats, radius_m: Floats, kappa: float) -> Floats:
    return share_left(since_h, radius_m, kappa)


PLOT = Plot("cylinder_source", _abscissa, _FLOORS_K, early=_EARLY, rock_matters=True)


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Estimate formation temperatures by the instantaneous cylinder source.

    ``T(Δt) = T_m + (T∞ − T_m) exp(−a²/4κΔt)``: readings lie on a line of the share of the cooling
    left, which ends at T∞ where nothing is left and at the mud's T_m where all is. A T_m below
    the surface's temperature or above the readings shows that the model does not hold.
    """
    outcome = carry_to_rest(PLOT, sets, context, UNCERTAINTY)
    line = PLOT.line(
        sets,
        circulation_of(sets, context.circulation_h),
        sets.hole_radius_m,
        context.diffusivity_m2_s,
    )
    mud = line.intercept + line.slope
    surface = sets.surface_temperature_degc
    possible = (mud >= surface) & (mud <= sets.warmest_degc)
    return refuse_more(
        outcome, len(REASONS), ~np.isfinite(surface), ~possible, cooler(sets, outcome)
    )


METHOD = Method(
    name="cylinder_source",
    title="Instantaneous cylinder source",
    kind="bht",
    reference=Reference(
        "Leblanc and others; Middleton",
        1981,
        "Geophysical Prospecting 29 (1981) and 30 (1982); Middleton 1979, Geophysics 44 (a square "
        "hole); equation: Carslaw & Jaeger 1959, Conduction of heat in solids, section 10.3",
        "T(Δt) = T_m + (T∞ − T_m) exp(−a²/4κΔt)",
        "no coefficient; equation derived and simulated; citations from memory",
    ),
    needs=("depth_m", "temperature_degc", "since_circulation_h", "surface_temperature_degc"),
    helps=("circulation_h", "hole_radius_m", "temperature_std_k"),
    validity="two or more readings of one stop, circulation short; middle of the hole, not its end",
    uncertainty=UNCERTAINTY,
    reasons=(
        *REASONS,
        "the well has no surface temperature",
        "the mud would be cooler than the surface or warmer than the readings",
        COOLER,
    ),
    estimate=estimate,
)
