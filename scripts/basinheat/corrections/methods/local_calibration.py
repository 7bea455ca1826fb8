"""The basin's own correction, learned where direct temperatures lie beside mud-cooled ones."""

from __future__ import annotations

import numpy as np

from basinheat.corrections.calibration.learned import SLOPE_K_KM, Calibration, Prediction
from basinheat.corrections.method import Context, Loading, Method, Outcome, Reference, Uncertainty
from basinheat.corrections.recovery.sources import UNTIMED_LN_STD
from basinheat.corrections.sets import Floats, ReadingSets

# METHODS A12 (common practice): no correction of a disturbed reading is better than this.
_LEAST_K = 3.0
NAME = "local_calibration"
BEYOND = "outside_calibration_depths"


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Add to the warmest reading what the basin's pairs say of its depth and time.

    The pairs' scatter, less the anchors' own errors, is the reading's own part of the uncertainty,
    some of it common to its well. What the pairs leave open of the fit is common to all results:
    sources ``method:local_calibration_1`` on, independent of each other, whose loadings are the
    columns of ``X L`` with ``L Lᵀ`` the covariance of the coefficients. A shared error of the
    anchors (``method:dst``) is carried with their weight in the fit. Above and below the pairs the
    correction stays what it is there, and may err by a slope: ``method:local_calibration_slope``.

    Notes
    -----
    The joint fit of heat flow sees the direct temperatures once more, as themselves, and takes
    them for independent of this correction. The anchor of a pair so counts twice, which is of
    second order: its weight in the calibration is one of many.
    """
    known = context.calibration
    if known is None or known.rung is None:
        return _nothing(sets)
    said = known.predict(sets)
    temperature = sets.warmest_degc + said.correction_k
    own = np.maximum(said.scatter_k, np.maximum(_LEAST_K, sets.warmest_std_k))
    return Outcome(
        temperature_degc=temperature,
        reason=np.zeros(len(sets), np.int64),
        independent_std_k=own * np.sqrt(1.0 - context.well_share),
        well_std_k=own * np.sqrt(context.well_share),
        variance_class=np.full(len(sets), f"method:{NAME}"),
        loadings=_loadings(said, known, sets),
        flags={BEYOND: said.beyond},
        learned={"step": known.rung.step.name},
    )


def _loadings(said: Prediction, known: Calibration, sets: ReadingSets) -> dict[str, Loading]:
    """Return the shared sources: of the fit, of its anchors, and of the slope beyond them."""
    out = {}
    for number, values in enumerate(said.fit_k.T, start=1):
        out[f"method:{NAME}_{number}"] = Loading(values, _typical(values), "K")
    for name, values in zip(known.sources, said.carried_k.T, strict=True):
        if (values != 0.0).any():
            out[name] = Loading(values, known.sources[name], "K")
    # The same share, and the same source, by which conductive recovery may be wrong without times.
    untimed = np.where(sets.timed == 0, -UNTIMED_LN_STD * said.correction_k, 0.0)
    out["method:untimed"] = Loading(untimed, UNTIMED_LN_STD, "ln K")
    out[f"method:{NAME}_slope"] = Loading(said.slope_k, SLOPE_K_KM, "K/km")
    return out


def _typical(values: Floats) -> float:
    """Return the size of a source's effect, K: its own unit."""
    return max(float(np.sqrt(np.mean(values**2))), 1e-6) if values.size else 1.0


def _nothing(sets: ReadingSets) -> Outcome:
    """Say of every set that there is no calibration."""
    missing = np.full(len(sets), np.nan)
    return Outcome(
        temperature_degc=missing,
        reason=np.ones(len(sets), np.int64),
        independent_std_k=missing,
        well_std_k=missing,
        variance_class=np.full(len(sets), f"method:{NAME}"),
    )


METHOD = Method(
    name=NAME,
    title="The basin's own correction, from pairs with direct temperatures",
    kind="bht",
    reference=Reference(
        "Huber",
        1964,
        "Robust estimation of a location parameter, Annals of Mathematical Statistics 35, 73-101 "
        "(the fit; the forms of the correction are common practice)",
        "ΔT = β0; + β1 z; + β2 z²; + γ ln(Δt/12 h); or the parabola × ln(1 + t_c/Δt)/ln(1 + t_c/"
        "12 h)",
        "no published coefficient: all are fitted to the basin's pairs",
    ),
    needs=("depth_m", "temperature_degc"),
    helps=(
        "since_circulation_h",
        "circulation_h",
        "easting_m",
        "northing_m",
        "surface_temperature_degc",
        "temperature_std_k",
    ),
    validity="within the depths and times of the pairs; further it is held and its error grows",
    uncertainty=Uncertainty(
        np.nan, np.nan, "worked out from the pairs; not below 3 K (common practice, no source)"
    ),
    reasons=("fewer pairs with equilibrium logs or tests than correction.calibration needs",),
    estimate=estimate,
)
