"""The steps of the calibration: from a constant to depth and time, and which one is taken."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from basinheat.corrections.calibration.robust import Errors, Regression, fit, scatter_at

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

# METHODS A10 (common practice): the fewest pairs of each step.
FEWEST = {
    "constant": 5,
    "linear": 10,
    "quadratic": 20,
    "quadratic_with_time": 30,
    "scaled_with_time": 30,
}
STEPS = tuple(FEWEST)
_TERMS = {"constant": 1, "linear": 2, "quadratic": 3, "quadratic_with_time": 4}
WITH_TIME = ("quadratic_with_time", "scaled_with_time")
# Two more wells than terms, or leaving one out says nothing (common practice, no source).
_SPARE_WELLS = 2
# A further step must predict better than the simpler by so much (common practice, no source).
_GAIN = 0.01
# A residual counts for no more than so many standard deviations when steps are compared.
_MOST = 3.0
_USUAL_H = 12.0
# Of the variance of corrections three quarters grow with their square (mud, times), one quarter is
# the same for all (readings): no source.
_GROWING = 0.75
_LEAST_K, _ROUNDS = 1e-6, 2
# Fewer pairs tell nothing of tails; nine of ten of a normal distribution lie within this.
_FEW_FOR_TAILS, _NORMAL_90 = 20, 1.6449


@dataclass(frozen=True)
class Data:
    """What a step sees of n places.

    Parameters
    ----------
    depth_m : (n,) array, m
        Depth.
    since_h, circulation_h : (n,) array, h
        Time since circulation, NaN where unknown; circulation time, known or assumed.
    """

    depth_m: Floats
    since_h: Floats
    circulation_h: Floats


@dataclass(frozen=True)
class Step:
    """A form of the correction, over the range of depths and times it was learned on.

    Parameters
    ----------
    name : str
        One of STEPS.
    top_m, base_m : float, m
        Depths of the pairs; further up or down the correction stays what it is there.
    low, high, usual, spread : float
        Range of the term of time among the pairs; mean and standard deviation of what stands for
        unknown times.
    """

    name: str
    top_m: float
    base_m: float
    low: float = 0.0
    high: float = 0.0
    usual: float = 0.0
    spread: float = 0.0

    def design(self, data: Data) -> Floats:
        """Return the terms at places, (n, p): depth counts from -1 to 1 over the pairs' range."""
        half = max(0.5 * (self.base_m - self.top_m), 1.0)
        u = (np.clip(data.depth_m, self.top_m, self.base_m) - self.top_m) / half - 1.0
        terms = np.stack([np.ones_like(u), u, u**2], axis=1)
        if self.name not in WITH_TIME:
            return terms[:, : _TERMS[self.name]]
        time = time_term(self.name, data)
        time = np.where(np.isnan(time), self.usual, np.clip(time, self.low, self.high))
        if self.name == "scaled_with_time":
            return terms * time[:, None]
        return np.column_stack([terms, time])

    def unknown_time_k(self, data: Data, coefficients: Floats) -> Floats:
        """Return what unknown times add to the scatter, (n,) in K; 0 where they are known."""
        if self.name not in WITH_TIME:
            return np.zeros(data.depth_m.size)
        per_unit = np.abs(coefficients[-1])
        if self.name == "scaled_with_time":
            per_unit = np.abs(self.design(data) @ coefficients) / self.usual
        return np.where(np.isnan(data.since_h), per_unit * self.spread, 0.0)


@dataclass(frozen=True)
class Rung:
    """What became of one step.

    Parameters
    ----------
    step : Step
        Its form.
    n_pairs, n_wells : int
        Pairs, and wells of their readings, that it can use.
    refused : str
        Why it cannot be used, "" where it can.
    found : Regression or None
        Its fit.
    left_out_k : (n,) array, K
        Correction predicted at every pair from the other wells.
    scatter_k, usual_k : float, K
        Scatter of a usual correction about the fit, and the size of a usual one.
    score_k : float, K
        Root mean square error of these predictions, gross errors cut to three sigma.
    """

    step: Step
    n_pairs: int
    n_wells: int
    refused: str
    found: Regression | None
    left_out_k: Floats
    scatter_k: float = np.nan
    usual_k: float = 1.0
    score_k: float = np.nan

    def growth(self, correction_k: Floats) -> Floats:
        """Return the scatter of corrections, (n,), relative to that of a usual one."""
        share = np.maximum(correction_k, 0.0) / self.usual_k
        return np.asarray(np.sqrt(1.0 - _GROWING + _GROWING * share**2))


def time_term(name: str, data: Data) -> Floats:
    """Return the term of time at places, (n,), NaN where the time is unknown.

    ``ln(Δt/12 h)``, or the line source's ``ln(1 + t_c/Δt)/ln(1 + t_c/12 h)``: both say how the
    correction compares with that at twelve hours.
    """
    if name == "quadratic_with_time":
        return np.log(data.since_h / _USUAL_H)
    return np.asarray(
        np.log1p(data.circulation_h / data.since_h) / np.log1p(data.circulation_h / _USUAL_H)
    )


def climb(data: Data, correction_k: Floats, errors: Errors, times: Data) -> list[Rung]:
    """Fit every step for which there are pairs enough.

    Parameters
    ----------
    data : Data
        The pairs that may teach.
    correction_k : (n,) array, K
        Anchor less the warmest reading.
    errors : Errors
        What is known of their errors, the scatter taken as the same for all.
    times : Data
        Places whose times stand for those unknown.

    Returns
    -------
    list of Rung
        In the order of STEPS. Scores are comparable: all are over the same pairs.
    """
    rungs = [_rung(name, data, correction_k, errors, times) for name in STEPS]
    fitted = [rung.found for rung in rungs if rung.found is not None]
    if not fitted:
        return rungs
    # One yardstick for all steps, or each would be judged by its own.
    std = errors.std_k(min(found.scatter_k for found in fitted))
    return [replace(r, score_k=_score(r.left_out_k - correction_k, std)) for r in rungs]


def chosen(rungs: list[Rung], model: str) -> Rung | None:
    """Return the step that is taken, None where there is none.

    ``auto`` takes the best predictions of wells left out; a further step counts only if it
    predicts by one per cent better than the simpler.
    """
    usable = [rung for rung in rungs if not rung.refused and model in ("auto", rung.step.name)]
    best = None
    for rung in usable:
        if best is None or rung.score_k < (1.0 - _GAIN) * best.score_k:
            best = rung
    return best


def _rung(name: str, data: Data, correction_k: Floats, errors: Errors, times: Data) -> Rung:
    timed = np.isfinite(data.since_h) if name in WITH_TIME else np.ones(data.depth_m.size, bool)
    n_pairs, n_wells = int(timed.sum()), np.unique(errors.well[timed]).size
    nothing = np.full(timed.size, np.nan)
    few = _too_few(name, n_pairs, min(n_wells, np.unique(errors.group[timed]).size))
    step = _step(name, data, times) if data.depth_m.size else Step(name, 0.0, 0.0)
    if few:
        return Rung(step, n_pairs, n_wells, few, None, nothing)
    design = step.design(data)
    rung = Rung(step, n_pairs, n_wells, few, None, nothing)
    found = fit(design, correction_k, errors)
    for _ in range(_ROUNDS):
        fitted = design @ found.coefficients
        rung = replace(rung, usual_k=max(float(np.median(fitted)), _LEAST_K))
        unknown = step.unknown_time_k(data, found.coefficients)
        now = replace(errors, growth=rung.growth(fitted), known_k2=errors.known_k2 + unknown**2)
        found = fit(design, correction_k, now)
    refused = ""
    if name == "quadratic_with_time" and found.coefficients[-1] > 0.0:
        refused = "the correction would grow with time"
    left_out = design @ found.coefficients - correction_k
    left_out = correction_k + _without_own_wells(design, left_out, found, errors)
    fit_k2 = np.einsum("np,pq,nq->n", design, found.covariance, design)
    now = replace(now, known_k2=now.known_k2 + fit_k2)
    scatter = _scatter(left_out - correction_k, now, found.scatter_k)
    return replace(rung, refused=refused, found=found, left_out_k=left_out, scatter_k=scatter)


def _too_few(name: str, n_pairs: int, n_wells: int) -> str:
    """Return in words that there are too few pairs or wells, or ""."""
    timed = " with a time" if name in WITH_TIME else ""
    if n_pairs < FEWEST[name]:
        return f"{n_pairs} pairs{timed}, it needs {FEWEST[name]}"
    wells = _TERMS.get(name, 3) + _SPARE_WELLS
    if n_wells < wells:
        return f"pairs{timed} of {n_wells} wells, it needs {wells}"
    return ""


def _step(name: str, data: Data, times: Data) -> Step:
    top, base = float(data.depth_m.min()), float(data.depth_m.max())
    if name not in WITH_TIME:
        return Step(name, top, base)
    time = time_term(name, data)
    if not np.isfinite(time).any():
        return Step(name, top, base)
    low, high = float(np.nanmin(time)), float(np.nanmax(time))
    usual = np.clip(time_term(name, times), low, high)
    return Step(name, top, base, low, high, float(usual.mean()), float(usual.std()))


def _without_own_wells(
    design: Floats, residual: Floats, found: Regression, errors: Errors
) -> Floats:
    """Return fit less correction at every pair with its well and its log left out, (n,).

    All pairs that share the well of the reading or the log of an anchor of that well are left
    out; the weights stay.
    """
    n, p = design.shape
    wells, well = np.unique(errors.well, return_inverse=True)
    logs, log = np.unique(errors.group, return_inverse=True)
    ones, rows = np.ones(n), np.arange(n)
    of_well = sparse.csr_matrix((ones, (well, rows)), shape=(wells.size, n))
    of_log = sparse.csr_matrix((ones, (log, rows)), shape=(logs.size, n))
    apart = of_well + (of_well @ of_log.T) @ of_log
    apart.data[:] = 1.0
    weighted = design * found.weights[:, None]
    outer = (weighted[:, :, None] * design[:, None, :]).reshape(n, p * p)
    normal = found.normal - (apart @ outer).reshape(-1, p, p)
    # From the residuals of the full fit: b without them = b − N⁻¹ Σ w x (y − x b).
    pull = apart @ (weighted * residual[:, None])
    with np.errstate(invalid="ignore", divide="ignore"):
        change = np.einsum("wpq,wq->wp", np.linalg.pinv(normal, hermitian=True), pull)
    return residual + np.einsum("np,np->n", design, change[well])


def _scatter(error: Floats, errors: Errors, within_k: float) -> float:
    """Return the scatter with which nine of ten left-out predictions hold their interval.

    Corrections have longer tails than a robust scale tells of: it is the least that is taken.
    """
    if error.size < _FEW_FOR_TAILS:
        return within_k
    tail = scatter_at(error, errors, lambda z: float(np.quantile(np.abs(z), 0.9)), _NORMAL_90)
    return max(within_k, tail)


def _score(error: Floats, std: Floats) -> float:
    """Return the root mean square error, gross errors cut, good anchors counting for more."""
    weight = 1.0 / std**2
    cut = np.clip(error, -_MOST * std, _MOST * std)
    return float(np.sqrt((weight * cut**2).sum() / weight.sum()))
