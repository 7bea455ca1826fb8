"""Formation temperature by simulated recovery and a cooling law learned from the basin."""

from __future__ import annotations

from dataclasses import asdict, dataclass, replace

import numpy as np
from numpy.typing import NDArray

from basinheat.corrections.learning import Learned, learn_law, misfit_limit, relearn_law, thin
from basinheat.corrections.method import (
    Context,
    Floats,
    Loading,
    Method,
    Outcome,
    Reference,
    Uncertainty,
)
from basinheat.corrections.recovery import Block, recover
from basinheat.corrections.response import Mud, response
from basinheat.corrections.sets import ReadingSets
from basinheat.corrections.times import TimePrior, cooling_left, learn_times

# Mud over rock: water-based mud 3.8 of 2.5 to 4.0, rock 2.3 of 2.0 to 2.5 MJ/(m3 K); mud 0.7 of
# 0.6 to 0.8, rock 2.3 W/(m K), which is what the diffusivity asks for (METHODS A7, common practice).
MUD, MUD_STD = Mud(1.65, 0.30), Mud(0.2, 0.1)
# Diffusivity of rocks 0.5 to 1.6e-6 m2/s (METHODS 0): ln sigma between basins.
DIFFUSIVITY_LN_STD = 0.25
# What the physics leaves out of the cooling law and of unknown times (prototype, measured).
COOLING_LN_STD, UNTIMED_LN_STD = 0.10, 0.10
_RESCALINGS = 2
# A correction below zero by more than this many standard uncertainties of the reading is refused.
_COOLER = 3.0
# The least expected rise, over the typical one: widths must not vanish at the surface.
_LEAST_RISE = 0.1


@dataclass(frozen=True)
class _Case:
    """One set of assumptions: physics, and surface temperature too low by so much."""

    mud: Mud
    diffusivity_m2_s: float
    surface_k: float = 0.0


@dataclass(frozen=True)
class _Fit:
    """Estimates of all sets, (sets,), and the cooling expected of every reading by block."""

    learned: Learned
    rise_k: Floats
    variance_k2: Floats
    scatter_k2: Floats
    weight_sum: Floats
    misfit: Floats
    weights: list[Floats]
    cooling: list[Floats]
    blocks: list[Block]


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
        One estimate per set. Loadings come from the cooling *expected* for a set, never from its
        own readings, which would let the sources explain scatter.
    """
    usable = np.isfinite(sets.surface_temperature_degc)
    index = np.flatnonzero(usable)
    prior = learn_times(sets, context.circulation_h, context.circulation_factor)
    base = _Case(MUD, context.diffusivity_m2_s)
    fit, rise_ref = _fit(sets, index, prior, base, context)
    loadings = _loadings(sets, fit, prior, base, rise_ref, context)
    temperature = sets.surface_temperature_degc + fit.rise_k
    limits = np.array([misfit_limit(n) for n in range(int(sets.count.max(initial=0)) + 1)])
    excess = np.maximum(1.0, fit.misfit / limits[sets.count])
    well_own = context.well_share * fit.scatter_k2
    surface = (1.0 - fit.weight_sum) * np.nan_to_num(sets.surface_std_k)
    cooler = temperature < sets.warmest_degc - _COOLER * sets.warmest_std_k
    untimed = sets.timed == 0
    return Outcome(
        temperature_degc=temperature,
        reason=np.select([~usable, cooler], [1, 2], 0),
        independent_std_k=np.sqrt(excess * np.maximum(fit.variance_k2 - well_own, 0.0)),
        well_std_k=np.hypot(np.sqrt(well_own), surface),
        variance_class=np.where(
            untimed,
            "recovery:untimed",
            np.where(sets.timed > 1, "recovery:repeated", "recovery:single"),
        ),
        loadings=loadings,
        flags={
            "times_assumed": untimed,
            "circulation_assumed": ~untimed & ~np.isfinite(sets.circulation_h),
            "readings_contradict": excess > 1.0,
        },
        learned=_summary(fit.learned, prior, rise_ref, sets),
    )


def _fit(
    sets: ReadingSets, index: NDArray[np.int64], prior: TimePrior, case: _Case, context: Context
) -> tuple[_Fit, Floats]:
    """Learn and estimate; the expected rise is rescaled by the sets' own median in between."""
    blocks = _blocks(sets, index, prior, case)
    rise_ref = context.trend.rise_k(sets.depth_m)
    teachers = index[sets.learn[index]]
    teachers = teachers if teachers.size else index
    for turn in range(_RESCALINGS + 1):
        typical = float(np.median(rise_ref[teachers])) if teachers.size else 60.0
        rise_ref = np.maximum(rise_ref, _LEAST_RISE * typical)
        learned = learn_law(thin(_teaching(blocks, sets)), rise_ref, typical)
        fit = _estimates(sets, blocks, learned, rise_ref)
        if turn < _RESCALINGS and teachers.size:
            rise_ref = rise_ref * float(np.median(fit.rise_k[teachers] / rise_ref[teachers]))
    return fit, rise_ref


def _blocks(
    sets: ReadingSets, index: NDArray[np.int64], prior: TimePrior, case: _Case
) -> list[Block]:
    """Arrange sets by their number of readings, with the share of cooling left."""
    blocks, table = [], response(case.mud)
    for n in np.unique(sets.count[index]):
        rows = index[sets.count[index] == n]
        left, cov = cooling_left(
            sets.circulation_h[rows],
            sets.since_circulation_h[rows, :n],
            sets.hole_radius_m[rows],
            prior,
            table,
            case.diffusivity_m2_s,
        )
        rise = sets.temperature_degc[rows, :n] - sets.surface_temperature_degc[rows, None]
        std = sets.temperature_std_k[rows, :n]
        blocks.append(Block(rows, rise - case.surface_k, std, left, cov))
    return blocks


def _teaching(blocks: list[Block], sets: ReadingSets) -> list[Block]:
    """Return the sets that teach: two or more readings, all timed, at different times."""
    first, last = sets.since_circulation_h[:, 0], sets.since_circulation_h.copy()
    spread = np.max(last, axis=1, where=np.isfinite(last), initial=-np.inf) > first
    repeated = sets.learn & (sets.timed == sets.count) & (sets.count > 1) & spread
    return [block.take(repeated[block.index]) for block in blocks if block.left.shape[1] > 1]


def _estimates(sets: ReadingSets, blocks: list[Block], learned: Learned, rise_ref: Floats) -> _Fit:
    out = {
        name: np.full(len(sets), np.nan)
        for name in ("rise_k", "variance_k2", "scatter_k2", "weight_sum", "misfit")
    }
    weights, cooling = [], []
    for block in blocks:
        found = recover(block, rise_ref[block.index], learned.law)
        for name in ("rise_k", "variance_k2", "scatter_k2", "misfit"):
            out[name][block.index] = getattr(found, name)
        out["weight_sum"][block.index] = found.weights.sum(1)
        weights.append(found.weights)
        cooling.append(learned.law.expected_k(rise_ref[block.index])[:, None] * block.left)
    return _Fit(learned=learned, weights=weights, cooling=cooling, blocks=blocks, **out)


def _loadings(
    sets: ReadingSets, fit: _Fit, prior: TimePrior, base: _Case, rise_ref: Floats, context: Context
) -> dict[str, Loading]:
    """Return what each shared source does: the basin's law is learned anew under each change."""
    kappa, surface = base.diffusivity_m2_s, context.surface_shared_std_k
    more = replace(MUD, capacity=MUD.capacity + MUD_STD.capacity)
    better = replace(MUD, conductivity=MUD.conductivity + MUD_STD.conductivity)
    changes = {
        "recovery:diffusivity": (
            replace(base, diffusivity_m2_s=kappa * float(np.exp(DIFFUSIVITY_LN_STD))),
            DIFFUSIVITY_LN_STD,
            "ln m2/s",
        ),
        "recovery:mud_capacity": (replace(base, mud=more), MUD_STD.capacity, "1"),
        "recovery:mud_conductivity": (replace(base, mud=better), MUD_STD.conductivity, "1"),
    }
    if surface > 0.0:
        changes["surface_temperature"] = (replace(base, surface_k=surface), surface, "K")
    loadings = {
        source: Loading(_shift(sets, fit, prior, case, rise_ref), std, unit)
        for source, (case, std, unit) in changes.items()
    }
    level = np.zeros(len(sets))
    for block, weights, cooling in zip(fit.blocks, fit.weights, fit.cooling, strict=True):
        level[block.index] = -(weights * cooling).sum(1)
    std = float(np.hypot(COOLING_LN_STD, fit.learned.level_std))
    untimed = np.where(sets.timed == 0, level * UNTIMED_LN_STD, 0.0)
    loadings["recovery:cooling"] = Loading(level * std, std, "ln K")
    loadings["method:untimed"] = Loading(untimed, UNTIMED_LN_STD, "ln K")
    return loadings


def _shift(sets: ReadingSets, fit: _Fit, prior: TimePrior, case: _Case, rise_ref: Floats) -> Floats:
    """Return estimate less truth, K, if the case were true: (sets,)."""
    index = np.sort(np.concatenate([np.zeros(0, np.int64), *(b.index for b in fit.blocks)]))
    blocks = _blocks(sets, index, prior, case)
    typical = float(np.median(rise_ref[index])) if index.size else 60.0
    shifted_ref = np.maximum(rise_ref - case.surface_k, _LEAST_RISE * typical)
    law = relearn_law(blocks, shifted_ref, typical, fit.learned)
    out = np.zeros(len(sets))
    for block, weights, cooling in zip(blocks, fit.weights, fit.cooling, strict=True):
        changed = law.expected_k(shifted_ref[block.index])[:, None] * block.left
        out[block.index] = -(weights * (changed - cooling)).sum(1)
    return out


def _summary(
    learned: Learned, prior: TimePrior, rise_ref: Floats, sets: ReadingSets
) -> dict[str, object]:
    """Return what was learned, as plain numbers for the report."""
    km = float(np.median(rise_ref / np.maximum(sets.depth_m, 1.0)) * 1000) if len(sets) else None
    return {
        "law": asdict(learned.law),
        "law_level_std_ln": learned.level_std,
        "sets_that_taught": int(learned.taught.size),
        "sets_contradicting": int(learned.n_contradicting),
        "circulation_median_h": float(np.exp(prior.circulation_ln_mean)),
        "circulation_factor": float(np.exp(prior.circulation_ln_std)),
        "circulation_times_noted": int(prior.n_circulation),
        "sets_with_all_times": int(prior.since_h.shape[0]),
        "expected_gradient_k_km": km,
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
