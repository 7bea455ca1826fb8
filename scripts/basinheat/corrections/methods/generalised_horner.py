"""Generalised Horner plot of Kutasov & Eppelbaum (2005): a hole of finite width."""

from __future__ import annotations

import numpy as np

from basinheat.corrections.method import Context, Floats, Method, Outcome, Reference, Uncertainty
from basinheat.corrections.methods.time_plot import (
    COOLER,
    REASONS,
    SHARED_K,
    Plot,
    carry_to_rest,
    cooler,
    refuse_more,
    rest,
)
from basinheat.corrections.sets import ReadingSets

# Kutasov & Eppelbaum (2005), from memory, then checked against exact solutions: the wall of a
# cylinder of constant flux to 0.15 %, the heat of one of constant temperature to 1 %.
_A, _C = 2.7010505, 1.4986055
_SEVEN_EIGHTHS, _DECAY, _LONG = 7.0 / 8.0, 0.236, 10.0
# METHODS A12: 7 K from two readings on; a warning 2 K more (no source).
_FLOORS_K = (7.0, 7.0, 9.0, 9.0)
# The wall function holds from κ t / a² = 0.5 on.
_EARLY = (0.5, 1.0)

# METHODS A6, A12.
UNCERTAINTY = Uncertainty(
    _FLOORS_K[0],
    SHARED_K,
    "common practice, no source: 7 K; diffusivity 30 % (shared) and hole radius 10 %",
    known_bias="high by 1 to 4 % of the cooling where the thermometer reads mud, as simulated: the "
    "share simulated for the set's own times is taken out; half of it is shared error, for the "
    "wall has 0.1 to 0.8 %",
)


def wall_temperature(t: Floats) -> Floats:
    """Return the wall's temperature after constant flux, ``T_D = ln{1 + [c − 1/(a + √t)]√t}``.

    Parameters
    ----------
    t : (n,) array
        Dimensionless time ``κ t / r_w²``.

    References
    ----------
    Kutasov & Eppelbaum (2005), Determination of formation temperature from bottom-hole
    temperature logs - a generalized Horner method, J. Geophys. Eng. 2, 90-96.

    Examples
    --------
    >>> import numpy as np
    >>> wall_temperature(np.array([1.0])).round(4)
    array([0.8013])
    """
    root = np.sqrt(t)
    return np.asarray(np.log1p((_C - 1.0 / (_A + root)) * root))


def adjusted_share(t: Floats) -> Floats:
    """Return G: how much longer a constant last rate of heat would flow to give the same heat.

    Parameters
    ----------
    t : (n,) array
        Dimensionless circulation time ``κ t_c / r_w²``.

    Examples
    --------
    >>> import numpy as np
    >>> adjusted_share(np.array([1.0, 50.0])).round(4)
    array([1.5934, 1.2787])
    """
    short = 1.0 + 1.0 / (1.0 + _SEVEN_EIGHTHS * np.log1p(t) ** (2.0 / 3.0))
    log = np.log(np.maximum(t, _LONG))
    long = (log - np.exp(-_DECAY * np.sqrt(t))) / (log - 1.0)
    return np.where(t <= _LONG, short, long)


def generalised_time(
    circulation_h: Floats, since_h: Floats, radius_m: Floats, diffusivity_m2_s: float
) -> Floats:
    """Return ln X, the difference of the wall functions of both times."""
    circulated = rest(circulation_h, radius_m, diffusivity_m2_s)
    rested = rest(since_h, radius_m, diffusivity_m2_s)
    both = adjusted_share(circulated) * circulated + rested
    return wall_temperature(both) - wall_temperature(rested)


PLOT = Plot("generalised_horner", generalised_time, _FLOORS_K, early=_EARLY, rock_matters=True)


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Estimate formation temperatures by the generalised Horner plot.

    ``T(Δt) = T∞ + m ln X``: a cylinder held at the mud's temperature for t_c. It is made for the
    wall; thermometers read mud, which lags. An unknown t_c is integrated over its prior.
    """
    outcome = carry_to_rest(PLOT, sets, context, UNCERTAINTY)
    return refuse_more(outcome, len(REASONS), cooler(sets, outcome))


METHOD = Method(
    name="generalised_horner",
    title="Generalised Horner plot",
    kind="bht",
    reference=Reference(
        "Kutasov & Eppelbaum",
        2005,
        "Determination of formation temperature from bottom-hole temperature logs - a generalized "
        "Horner method, J. Geophys. Eng. 2, 90-96",
        "T(Δt) = T∞ + m ln X, ln X = T_D(G t_cD + t_sD) − T_D(t_sD)",
        "coefficients from memory, then verified against exact solutions (0.15 % and 1 %)",
    ),
    needs=("depth_m", "temperature_degc", "since_circulation_h"),
    helps=("circulation_h", "hole_radius_m", "temperature_std_k", "surface_temperature_degc"),
    validity="two or more readings of one stop, κ Δt / a² ≥ 0.5, hole radius known",
    uncertainty=UNCERTAINTY,
    reasons=(*REASONS, COOLER),
    estimate=estimate,
)
