"""Formation temperature by simulated recovery and a cooling law learned from the basin."""

from __future__ import annotations

from dataclasses import asdict

import numpy as np

from basinheat.corrections.method import Context, Method, Outcome, Reference, Uncertainty
from basinheat.corrections.recovery.fit import Case, Fit, fit_basin
from basinheat.corrections.recovery.learning import misfit_limit
from basinheat.corrections.recovery.sources import MUD, sources
from basinheat.corrections.recovery.times import TimePrior, learn_times
from basinheat.corrections.sets import ReadingSets

# A correction below zero by more than this many standard uncertainties of the reading is refused.
_COOLER = 3.0


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Estimate formation temperatures from readings with all, some or no times.

    A reading is ``T_i = T∞ − D_i c + e_i``: D the share of the cooling left, simulated; c the
    cooling at the end of circulation, whose law is learned from the basin's repeated readings.

    Parameters
    ----------
    sets : ReadingSets
        Mud-cooled sets.
    context : Context
        Settings and trend.

    Returns
    -------
    Outcome
        One estimate per set, and what the shared sources do to it.
    """
    prior = learn_times(sets, context.circulation_h, context.circulation_factor)
    base = Case(MUD, context.diffusivity_m2_s)
    fit = fit_basin(sets, prior, base, context.trend)
    temperature = sets.surface_temperature_degc + fit.rise_k
    limits = np.array([misfit_limit(n) for n in range(int(sets.count.max(initial=0)) + 1)])
    excess = np.maximum(1.0, fit.misfit / limits[sets.count])
    well_own = context.well_share * fit.scatter_k2
    surface = (1.0 - fit.weight_sum) * np.nan_to_num(sets.surface_std_k)
    cooler = temperature < sets.warmest_degc - _COOLER * sets.warmest_std_k
    untimed = sets.timed == 0
    return Outcome(
        temperature_degc=temperature,
        reason=np.select([np.isnan(temperature), cooler], [1, 2], 0),
        independent_std_k=np.sqrt(excess * np.maximum(fit.variance_k2 - well_own, 0.0)),
        well_std_k=np.hypot(np.sqrt(well_own), surface),
        variance_class=np.where(
            untimed,
            "recovery:untimed",
            np.where(sets.timed > 1, "recovery:repeated", "recovery:single"),
        ),
        loadings=sources(sets, fit, prior, base, context.surface_shared_std_k),
        flags={
            "times_assumed": untimed,
            "circulation_assumed": ~untimed & ~np.isfinite(sets.circulation_h),
            "readings_contradict": excess > 1.0,
        },
        learned=_summary(fit, prior, sets),
    )


def _summary(fit: Fit, prior: TimePrior, sets: ReadingSets) -> dict[str, object]:
    """Return what was learned, as plain numbers for the report."""
    gradient = fit.expected_k / np.maximum(sets.depth_m, 1.0) * 1000.0
    return {
        "law": asdict(fit.learned.law),
        "law_level_std_ln": fit.learned.level_std,
        "sets_that_taught": int(fit.learned.taught.size),
        "sets_contradicting": int(fit.learned.n_contradicting),
        "circulation_median_h": float(np.exp(prior.circulation_ln_mean)),
        "circulation_factor": float(np.exp(prior.circulation_ln_std)),
        "circulation_times_noted": int(prior.n_circulation),
        "sets_with_all_times": int(prior.since_h.shape[0]),
        "expected_gradient_k_km": float(np.median(gradient)),
        "mud": {"capacity": MUD.capacity, "conductivity": MUD.conductivity},
    }


METHOD = Method(
    name="conductive_recovery",
    title="Simulated conductive recovery with the basin's own cooling law",
    kind="bht",
    reference=Reference(
        author="Luheshi; Shen & Beck",
        year=1983,
        title="Estimation of formation temperature from borehole measurements, Geophys. J. R. "
        "astr. Soc. 74; 1986, Geophys. J. R. astr. Soc. 86 (recovery with mud and rock of "
        "different properties)",
        equation="∂(ρc T)/∂t = (1/r) ∂(r k ∂T/∂r)/∂r, wall held during circulation; T = T∞ − D c",
        status="derived here and simulated; no published coefficient",
    ),
    needs=("depth_m", "temperature_degc", "surface_temperature_degc"),
    helps=("since_circulation_h", "circulation_h", "hole_radius_m", "temperature_std_k"),
    validity="recovery by conduction: no gas, no losses; far from the bottom by ten hole radii",
    uncertainty=Uncertainty(
        np.nan, np.nan, "worked out set by set; common practice where nothing is noted"
    ),
    reasons=(
        "the well has no surface temperature",
        "the formation would be cooler than the reading by more than the reading's error",
    ),
    estimate=estimate,
)
