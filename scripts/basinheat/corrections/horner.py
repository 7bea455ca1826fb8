"""Horner plot: readings against ln(1 + circulation / time since), carried to endless rest."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.stats import t as student

from basinheat.corrections.method import (
    Context,
    Flags,
    Floats,
    Loading,
    Method,
    Outcome,
    Reference,
    Uncertainty,
)
from basinheat.corrections.response import Mud, response
from basinheat.corrections.sets import ReadingSets
from basinheat.corrections.times import NODES, WEIGHTS

# Thresholds of METHODS A1 (common practice, supported by the simulations A6).
_FARTHEST_M, _FARTHEST_SHARE = 50.0, 0.01
_LEAST_SPREAD, _GOOD_SPREAD = 0.15, 0.3
_LONGEST_LEVER, _GOOD_LEVER = 6.0, 4.0
_EARLIEST, _LATE = 1.0, 4.0
_LARGE = 0.5
# METHODS A12: three good points, two points or a warning, two points and a warning (the last: no
# source).
_FLOOR_K, _FLOOR_WARNED_K, _FLOOR_WORST_K = 6.0, 8.0, 10.0
# Formation less mud over formation less surface, where METHODS A13 starts.
_COOLING_SLOPE = 0.35
# What is left of the bias: 2 K for wrong times (field data are 2 to 10 K low), half of what was
# taken out.
_SHARED_K, _SHARED_OF_BIAS = 2.0, 0.5

UNCERTAINTY = Uncertainty(
    _FLOOR_K,
    _SHARED_K,
    "METHODS A1: largest of regression, reading, circulation time and a floor; A12: 6 K for three "
    "good points, 8 K for two",
    known_bias="low: the share of the cooling simulated for the set's own times is added where "
    "κ Δt / a² < 4",
)

REASONS = (
    "fewer than 2 timed readings",
    "readings too far apart in depth",
    "temperature falls with time",
    "times too close to each other",
    "no rise with time",
    "the way to the intercept is too long",
    "first reading too early for a line source",
)


@dataclass(frozen=True)
class Line:
    """Least-squares lines, one per row: intercept, slope and what their errors need, (sets,)."""

    intercept: Floats
    slope: Floats
    residual_std: Floats
    lever: Floats
    spread: Floats
    n: NDArray[np.int64]

    @property
    def intercept_factor(self) -> Floats:
        """Return s.e.(intercept) per unit standard deviation of the readings."""
        return np.sqrt((1.0 + self.lever**2) / self.n)


def horner_time(circulation_h: Floats, since_h: Floats) -> Floats:
    """Return ln((t_c + Δt) / Δt)."""
    return np.log1p(circulation_h / since_h)


def fit_line(x: Floats, y: Floats) -> Line:
    """Fit ``y = intercept + slope x`` in every row, NaN left out.

    Parameters
    ----------
    x, y : (sets, n) array
        Points.

    Examples
    --------
    >>> import numpy as np
    >>> line = fit_line(np.array([[0.5, 1.0]]), np.array([[90.0, 80.0]]))
    >>> line.intercept.round(6), line.slope.round(6)
    (array([100.]), array([-20.]))
    """
    use = np.isfinite(x) & np.isfinite(y)
    n = use.sum(1)
    with np.errstate(invalid="ignore", divide="ignore"):
        x_mean = np.where(use, x, 0.0).sum(1) / n
        y_mean = np.where(use, y, 0.0).sum(1) / n
        dx = np.where(use, x - x_mean[:, None], 0.0)
        dy = np.where(use, y - y_mean[:, None], 0.0)
        sxx = (dx**2).sum(1)
        slope = (dx * dy).sum(1) / sxx
        squares = ((dy - slope[:, None] * dx) ** 2).sum(1)
        residual = np.sqrt(np.where(n > 2, squares / (n - 2), np.nan))
        lever = x_mean / np.sqrt(sxx / n)
        spread = np.max(x, axis=1, where=use, initial=-np.inf) - np.min(
            x, axis=1, where=use, initial=np.inf
        )
    return Line(y_mean - slope * x_mean, slope, residual, lever, spread, n)


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Estimate formation temperatures by the Horner plot.

    ``T(Δt) = T∞ + m ln((t_c + Δt)/Δt)``: a line source that ran for the circulation time t_c. An
    unknown t_c is integrated over its prior. What a hole of finite width is known to fall short
    by is added; what is not known of it is the shared source ``method:horner``.
    """
    since = sets.since_circulation_h
    noted = np.isfinite(sets.circulation_h)
    spread = context.circulation_factor**NODES
    lines = [
        fit_line(
            horner_time(_or(sets.circulation_h, context.circulation_h * f)[:, None], since),
            sets.temperature_degc,
        )
        for f in spread
    ]
    nodes = np.stack([line.intercept for line in lines])
    middle, intercept = lines[len(lines) // 2], WEIGHTS @ nodes
    bias = _bias_k(sets, context, intercept)
    temperature = intercept + bias
    warned = _warnings(sets, context, middle, intercept)
    known_time_std = _from_circulation(sets, context)
    time_std = np.where(noted, known_time_std, np.sqrt(WEIGHTS @ (nodes - intercept) ** 2))
    total = _total_k(sets, middle, time_std, warned)
    shared = np.hypot(_SHARED_K, _SHARED_OF_BIAS * bias)
    independent, well = UNCERTAINTY.split(total, shared, context.well_share)
    return Outcome(
        temperature_degc=temperature,
        reason=_reason(sets, context, middle),
        independent_std_k=independent,
        well_std_k=well,
        variance_class=np.full(len(sets), "method:horner"),
        loadings={"method:horner": Loading(shared, _SHARED_K, "K")},
        flags={
            "graded_down": warned | (middle.n == 2),
            "circulation_assumed": ~noted,
            "untimed_left_out": sets.timed < sets.count,
        },
    )


def _or(values: Floats, otherwise: float) -> Floats:
    return np.where(np.isfinite(values), values, otherwise)


def _bias_k(sets: ReadingSets, context: Context, intercept: Floats) -> Floats:
    """Return what the plot falls short by, K: its error on a simulated hole with the same times.

    Formation less mud is taken as 0.35 times formation less surface. Later than κΔt/a² = 4 the
    error is small and nothing is added.
    """
    circulation = _or(sets.circulation_h, context.circulation_h)[:, None]
    since = sets.since_circulation_h
    left = response(Mud(1.0, 1.0))(
        circulation, since, sets.hole_radius_m[:, None], context.diffusivity_m2_s
    )
    short = np.clip(1.0 - fit_line(horner_time(circulation, since), 1.0 - left).intercept, 0.0, 0.3)
    rise = intercept - sets.surface_temperature_degc
    bias = _COOLING_SLOPE * short * rise / (1.0 - _COOLING_SLOPE * short)
    return np.where(_earliest(sets, context) < _LATE, np.nan_to_num(np.maximum(bias, 0.0)), 0.0)


def _earliest(sets: ReadingSets, context: Context) -> Floats:
    """Return κ Δt / a² of the first reading."""
    first = sets.since_circulation_h[:, 0]
    return 3600.0 * context.diffusivity_m2_s * first / sets.hole_radius_m**2


def _steps(sets: ReadingSets) -> tuple[Floats, Floats]:
    """Return the smallest rise and the smallest size of a step between timed readings, K."""
    timed = np.isfinite(sets.since_circulation_h)
    step = np.diff(sets.temperature_degc, axis=1)
    both = timed[:, 1:] & timed[:, :-1]
    return (
        np.min(step, axis=1, where=both, initial=np.inf),
        np.min(np.abs(step), axis=1, where=both, initial=np.inf),
    )


def _reason(sets: ReadingSets, context: Context, line: Line) -> NDArray[np.int64]:
    """Return 1 + the place in REASONS of the first test that fails, else 0."""
    depth = np.where(np.isfinite(sets.since_circulation_h), sets.reading_depth_m, np.nan)
    use = np.isfinite(depth)
    apart = np.max(depth, axis=1, where=use, initial=-np.inf) - np.min(
        depth, axis=1, where=use, initial=np.inf
    )
    tests = [
        line.n < 2,
        apart > np.maximum(_FARTHEST_M, _FARTHEST_SHARE * sets.depth_m),
        _steps(sets)[0] < 0.0,
        ~(line.spread >= _LEAST_SPREAD),
        ~(line.slope < 0.0),
        ~(line.lever <= _LONGEST_LEVER),
        ~(_earliest(sets, context) >= _EARLIEST),
    ]
    return np.select(tests, np.arange(1, len(tests) + 1), 0).astype(np.int64)


def _warnings(sets: ReadingSets, context: Context, line: Line, intercept: Floats) -> Flags:
    """Return whether any test warns; two readings alone are judged elsewhere."""
    latest = np.max(
        sets.since_circulation_h,
        axis=1,
        where=np.isfinite(sets.since_circulation_h),
        initial=0.0,
    )
    raw = sets.warmest_degc - sets.surface_temperature_degc
    return (
        (_steps(sets)[1] == 0.0)
        | (line.spread < _GOOD_SPREAD)
        | (line.lever > _GOOD_LEVER)
        | (intercept - sets.warmest_degc > _LARGE * raw)
        | (_earliest(sets, context) < _LATE)
        | (_or(sets.circulation_h, context.circulation_h) > latest)
    )


def _from_circulation(sets: ReadingSets, context: Context) -> Floats:
    """Return half the change of the intercept between half and twice the noted circulation, K."""
    ends = [
        fit_line(
            horner_time(factor * sets.circulation_h[:, None], sets.since_circulation_h),
            sets.temperature_degc,
        ).intercept
        for factor in (0.5, 2.0)
    ]
    return np.abs(ends[1] - ends[0]) / 2.0


def _total_k(sets: ReadingSets, line: Line, time_std: Floats, warned: Flags) -> Floats:
    """Return the largest of the standard uncertainties of METHODS A1, K."""
    factor = line.intercept_factor
    quantile = student.ppf(0.8413447, np.maximum(line.n - 2, 1))
    regression = np.nan_to_num(line.residual_std * factor * quantile)
    reading = sets.warmest_std_k * factor
    two = line.n == 2
    floor = np.select([two & warned, two | warned], [_FLOOR_WORST_K, _FLOOR_WARNED_K], _FLOOR_K)
    return np.nanmax(np.stack([regression, reading, time_std, floor]), axis=0)


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
