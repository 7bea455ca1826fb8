"""What corrections have in common that carry a line through timed readings to endless rest."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray
from scipy.stats import t as student

from basinheat.corrections.method import Context, Flags, Floats, Loading, Outcome, Uncertainty
from basinheat.corrections.methods.time_lines import Line, fit_line
from basinheat.corrections.recovery.response import Mud, response
from basinheat.corrections.recovery.times import NODES, WEIGHTS
from basinheat.corrections.sets import ReadingSets

# Thresholds of METHODS A1 (common practice, supported by the simulations A6).
_FARTHEST_M, _FARTHEST_SHARE = 50.0, 0.01
_LONGEST_LEVER, _GOOD_LEVER = 6.0, 4.0
_LARGE = 0.5
# Formation less mud over formation less surface, where METHODS A13 starts.
COOLING_SLOPE = 0.35
# A plot's intercept is never off by more than this share of the cooling (METHODS A6: 0.19).
_LARGEST_BIAS = 0.3
# What is left of the bias: 2 K for wrong times (field data are 2 to 10 K low), half of what was
# taken out.
SHARED_K, SHARED_OF_BIAS = 2.0, 0.5
# METHODS A6: what diffusivity and hole radius are uncertain by.
_DIFFUSIVITY_SHARE, _RADIUS_SHARE = 0.3, 0.1

REASONS = (
    "fewer than 2 timed readings",
    "readings too far apart in depth",
    "temperature falls with time",
    "times too close to each other",
    "no rise with time",
    "the way to the intercept is too long",
    "first reading too early for a line source",
)
COOLER = "the formation would be cooler than the warmest reading"


@dataclass(frozen=True)
class Plot:
    """A way to draw readings so that they lie on a line that ends at the formation's temperature.

    Parameters
    ----------
    name : str
        Method.
    abscissa : callable
        ``abscissa(circulation_h, since_h, radius_m, diffusivity_m2_s)``, 0 after endless rest.
    floors_k : (good, two points, warned, two points warned), K
        What the total standard uncertainty is never below.
    early : (float, float)
        ``κ Δt / a²`` of the first reading below which it is refused, and below which it warns.
    bias_until : float
        ``κ Δt / a²`` of the first reading up to which the simulated bias counts.
    bias_known : bool
        Whether the size of the bias is published: then it is taken out, else it is shared error.
    spread : (float, float)
        Spread of the abscissa below which a set is refused, and below which it warns.
    rock_matters : bool
        Whether diffusivity and hole radius are part of the abscissa.
    """

    name: str
    abscissa: Callable[[Floats, Floats, Floats, float], Floats]
    floors_k: tuple[float, float, float, float]
    early: tuple[float, float] = (1.0, 4.0)
    bias_until: float = np.inf
    bias_known: bool = True
    spread: tuple[float, float] = (0.0, 0.0)
    rock_matters: bool = False

    def line(
        self, sets: ReadingSets, circulation_h: Floats, radius_m: Floats, diffusivity_m2_s: float
    ) -> Line:
        """Return the lines through the readings of every set; circulation and radius (sets,)."""
        x = self.abscissa(
            circulation_h[:, None], sets.since_circulation_h, radius_m[:, None], diffusivity_m2_s
        )
        return fit_line(x, sets.temperature_degc)


def carry_to_rest(
    plot: Plot, sets: ReadingSets, context: Context, uncertainty: Uncertainty
) -> Outcome:
    """Estimate formation temperatures by the intercept of a plot.

    An unknown circulation time is integrated over its prior. What a hole of finite width makes
    the intercept err by is simulated for the set's own times. Where its size is published it is
    taken out and half of it stays as shared error; else all of it does.

    Parameters
    ----------
    plot : Plot
        What to draw.
    sets : ReadingSets
        Mud-cooled sets.
    context : Context
        Settings.
    uncertainty : Uncertainty
        Of the method.

    Returns
    -------
    Outcome
        Reasons by their places in REASONS.
    """
    noted = np.isfinite(sets.circulation_h)
    radius, kappa = sets.hole_radius_m, context.diffusivity_m2_s
    lines = [
        plot.line(sets, circulation_of(sets, context.circulation_h * factor), radius, kappa)
        for factor in context.circulation_factor**NODES
    ]
    nodes = np.stack([line.intercept for line in lines])
    middle, intercept = lines[len(lines) // 2], WEIGHTS @ nodes
    bias = _bias_k(plot, sets, context, intercept)
    warned = _warnings(plot, sets, context, middle, intercept)
    known_time_std = _half_change(
        *(plot.line(sets, f * sets.circulation_h, radius, kappa) for f in (0.5, 2.0))
    )
    time_std = np.where(noted, known_time_std, np.sqrt(WEIGHTS @ (nodes - intercept) ** 2))
    rock_std, radius_std = _from_rock_and_radius(plot, sets, context)
    total = _total_k(plot, sets, middle, [time_std, np.hypot(rock_std, radius_std)], warned)
    shared = np.hypot(
        np.hypot(SHARED_K, bias * (SHARED_OF_BIAS if plot.bias_known else 1.0)), rock_std
    )
    if not plot.bias_known:
        total = np.hypot(total, bias)
    independent, well = uncertainty.split(total, shared, context.well_share)
    return Outcome(
        temperature_degc=intercept + bias if plot.bias_known else intercept,
        reason=_reason(plot, sets, context, middle),
        independent_std_k=independent,
        well_std_k=well,
        variance_class=np.full(len(sets), f"method:{plot.name}"),
        loadings={f"method:{plot.name}": Loading(shared, SHARED_K, "K")},
        flags={
            "graded_down": warned | (middle.n == 2),
            "circulation_assumed": ~noted,
            "untimed_left_out": sets.timed < sets.count,
        },
    )


def refuse_more(outcome: Outcome, known: int, *tests: Flags) -> Outcome:
    """Return the outcome with more tests, the reasons of which stand after the known ones."""
    more = np.select([np.asarray(test) for test in tests], range(known + 1, known + len(tests) + 1))
    return replace(outcome, reason=np.where(outcome.reason == 0, more, outcome.reason))


def cooler(sets: ReadingSets, outcome: Outcome) -> Flags:
    """Return where a correction would cool the warmest reading (METHODS Q21)."""
    return np.asarray(outcome.temperature_degc < sets.warmest_degc)


def circulation_of(sets: ReadingSets, otherwise_h: float) -> Floats:
    """Return noted circulation times, (sets,) in h, and something else where none is noted."""
    return np.where(np.isfinite(sets.circulation_h), sets.circulation_h, otherwise_h)


def rest(since_h: Floats, radius_m: Floats, diffusivity_m2_s: float) -> Floats:
    """Return the dimensionless time ``κ Δt / a²``."""
    return 3600.0 * diffusivity_m2_s * since_h / radius_m**2


def _bias_k(plot: Plot, sets: ReadingSets, context: Context, intercept: Floats) -> Floats:
    """Return what the plot falls short by, K: its error on a simulated hole with the same times.

    Formation less mud is taken as 0.35 times formation less surface.
    """
    circulation = circulation_of(sets, context.circulation_h)[:, None]
    since, radius = sets.since_circulation_h, sets.hole_radius_m[:, None]
    left = response(Mud(1.0, 1.0))(circulation, since, radius, context.diffusivity_m2_s)
    x = plot.abscissa(circulation, since, radius, context.diffusivity_m2_s)
    short = np.clip(1.0 - fit_line(x, 1.0 - left).intercept, -_LARGEST_BIAS, _LARGEST_BIAS)
    rise = np.maximum(intercept - sets.surface_temperature_degc, 0.0)
    bias = COOLING_SLOPE * short * rise / (1.0 - COOLING_SLOPE * short)
    return np.where(_earliest(sets, context) < plot.bias_until, np.nan_to_num(bias), 0.0)


def _earliest(sets: ReadingSets, context: Context) -> Floats:
    return rest(sets.since_circulation_h[:, 0], sets.hole_radius_m, context.diffusivity_m2_s)


def _steps(sets: ReadingSets) -> tuple[Floats, Floats]:
    """Return the smallest rise and the smallest size of a step between timed readings, K."""
    timed = np.isfinite(sets.since_circulation_h)
    step = np.diff(sets.temperature_degc, axis=1)
    both = timed[:, 1:] & timed[:, :-1]
    return (
        np.min(step, axis=1, where=both, initial=np.inf),
        np.min(np.abs(step), axis=1, where=both, initial=np.inf),
    )


def _reason(plot: Plot, sets: ReadingSets, context: Context, line: Line) -> NDArray[np.int64]:
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
        ~(line.spread >= plot.spread[0]),
        ~(line.slope < 0.0),
        ~(line.lever <= _LONGEST_LEVER),
        ~(_earliest(sets, context) >= plot.early[0]),
    ]
    return np.select(tests, np.arange(1, len(tests) + 1), 0).astype(np.int64)


def _warnings(
    plot: Plot, sets: ReadingSets, context: Context, line: Line, intercept: Floats
) -> Flags:
    """Return whether any test warns; two readings alone are judged elsewhere."""
    latest = np.max(
        sets.since_circulation_h,
        axis=1,
        where=np.isfinite(sets.since_circulation_h),
        initial=0.0,
    )
    raw = sets.warmest_degc - sets.surface_temperature_degc
    return np.asarray(
        (_steps(sets)[1] == 0.0)
        | (line.spread < plot.spread[1])
        | (line.lever > _GOOD_LEVER)
        | (intercept - sets.warmest_degc > _LARGE * raw)
        | (_earliest(sets, context) < plot.early[1])
        | (circulation_of(sets, context.circulation_h) > latest)
    )


def _half_change(one: Line, other: Line) -> Floats:
    """Return half the change of the intercept from one case to the other, K."""
    return np.asarray(np.abs(other.intercept - one.intercept) / 2.0)


def _from_rock_and_radius(plot: Plot, sets: ReadingSets, context: Context) -> tuple[Floats, Floats]:
    """Return what uncertain diffusivity and radius make of the intercept, K."""
    if not plot.rock_matters:
        return np.zeros(len(sets)), np.zeros(len(sets))
    circulation = circulation_of(sets, context.circulation_h)
    radius, kappa = sets.hole_radius_m, context.diffusivity_m2_s
    rock, hole = (
        np.nan_to_num(
            _half_change(
                *(
                    plot.line(sets, circulation, radius * (1 + s * hole), kappa * (1 + s * rock))
                    for s in (-1, 1)
                )
            )
        )
        for rock, hole in ((_DIFFUSIVITY_SHARE, 0.0), (0.0, _RADIUS_SHARE))
    )
    return rock, hole


def _total_k(
    plot: Plot, sets: ReadingSets, line: Line, more_std: list[Floats], warned: Flags
) -> Floats:
    """Return the largest of the standard uncertainties of METHODS A1, K."""
    factor = line.intercept_factor
    quantile = student.ppf(0.8413447, np.maximum(line.n - 2, 1))
    regression = np.nan_to_num(line.residual_std * factor * quantile)
    reading = sets.warmest_std_k * factor
    two = line.n == 2
    good, of_two, of_warned, of_both = plot.floors_k
    floor = np.select([two & warned, warned, two], [of_both, of_warned, of_two], good)
    return np.asarray(np.nanmax(np.stack([regression, reading, *more_std, floor]), axis=0))
