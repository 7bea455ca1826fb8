"""Fit of a covariance model by restricted maximum likelihood (REML)."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any, NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.optimize import minimize

from basinheat.errors import UserError
from basinheat.geostat.data import as_error_variance, as_places, as_values
from basinheat.geostat.models import Covariance
from basinheat.geostat.reml import Problem, pose
from basinheat.geostat.thinning import spread
from basinheat.geostat.threads import one_blas_thread

Array = NDArray[np.float64]
Prior = tuple[ArrayLike, ArrayLike]

_COARSE = 150  # points of the first search: an evaluation costs half a millisecond
_FIRST_STEPS = (0.5, 0.5, 1.0)
_NEAR = (0.7, 0.02, 0.7)  # of a bound: a nugget of one or two millionths is none
_LAST_STEPS = (0.2, -0.2, 0.4)


class Search(NamedTuple):
    """Where a search ended: the place, the value there, evaluations."""

    place: Array
    value: float
    evaluations: int


def search(
    function: Callable[[Array], float],
    start: ArrayLike,
    steps: ArrayLike,
    evaluations: int = 300,
    tolerance: float = 0.005,
) -> Search:
    """Minimise by Nelder-Mead from an explicit first simplex.

    The usual first simplex hardly moves a parameter that starts at 0 and so freezes it.

    Parameters
    ----------
    function : callable
        Of one array.
    start, steps : array, shape (k,)
        First place, and how far each parameter is moved at first.
    evaluations : int
        At most.
    tolerance : float
        Of log-parameters (half a percent by default) and of -2 log likelihood, where the default
        is far below what data can tell.
    """
    first = np.asarray(start, float)
    options = {
        "initial_simplex": np.vstack([first, first + np.diag(np.asarray(steps, float))]),
        "maxfev": evaluations,
        "xatol": tolerance,
        "fatol": tolerance,
    }
    end = minimize(function, first, method="Nelder-Mead", options=options)
    return Search(np.asarray(end.x, float), float(end.fun), int(end.nfev))


@one_blas_thread
def fit(
    xy: ArrayLike,
    values: ArrayLike,
    error_variance: ArrayLike | None = None,
    loadings: ArrayLike | None = None,
    prior: Prior | None = None,
    models: Sequence[str] = ("exponential", "matern15"),
    start: Covariance | None = None,
    n_max: int = 800,
    trend: str | ArrayLike = "none",
    regional_range_m: float | None = None,
) -> tuple[Covariance, dict[str, Any]]:
    """Fit sill, range and nugget of the likeliest model.

    Sigma = C + nugget I + diag(error_variance) + H S H^T, and -2 log REML = ln|Sigma| +
    ln|F^T Sigma^-1 F| + y^T P y is minimised over log-parameters: many starts on some hundred
    spread points, then the best of them on all.

    Parameters
    ----------
    xy : array, shape (n, 2), m
        Easting, northing.
    values : array, shape (n,), value units
        Data.
    error_variance : array, shape (n,), value units squared, optional
        Independent error of each datum, held as given.
    loadings : array, shape (n, m), value units, optional
        Of the shared sources.
    prior : (mean (m,), covariance (m, m)), optional
        Of their amplitudes; default independent and unit normal.
    models : sequence of str
        Models to compare.
    start : Covariance, optional
        A further start; its anisotropy is kept as given.
    n_max : int
        Points used, thinned so that the area stays covered and close pairs stay in.
    trend : {"none", "linear"} or array, shape (n, p)
        Drift beside the constant.
    regional_range_m : float, m, optional
        Centre of the weak prior that few wells get; default half the diagonal of the area.

    Returns
    -------
    covariance : Covariance
    details : dict
        Plain values: method, wells used, deviance per model, prior, bounds that were hit, and
        standard errors of the log-parameters.

    Raises
    ------
    UserError
        When there are fewer than three wells, or all lie at one place.

    References
    ----------
    Patterson & Thompson (1971), Biometrika 58, 545-554; Kitanidis (1983), Water Resources
    Research 19, 909-921.
    """
    places, data = as_places(xy), as_values(values, len(as_places(xy)))
    errors = as_error_variance(error_variance, len(places))
    if len(places) < 3:
        raise UserError(
            f"variogram: {len(places)} wells cannot tell a covariance model, at least 3 are "
            "needed. Add wells or pin a reviewed model (kriging.variogram.pinned)."
        )
    turned = places if start is None else start.isotropic(places)
    given = (turned, data, errors, loadings, prior, trend)
    rows = spread(turned, n_max)
    full = pose(*given, rows=rows, regional_range_m=regional_range_m)
    if full.constant:
        return _constant(full, models[0], len(places))
    coarse = full
    if len(rows) > _COARSE:
        coarse = pose(
            *given, rows=spread(turned, _COARSE), regional_range_m=regional_range_m, like=full
        )
    ends = {model: _fit_model(coarse, full, model, start) for model in models}
    best = min(ends, key=lambda model: ends[model].value)
    axes = {} if start is None else {"azimuth_deg": start.azimuth_deg, "ratio": start.ratio}
    covariance = full.covariance(ends[best].place, best, **axes)
    return covariance, {
        **_describe(full, ends[best].place, best),
        "wells": len(places),
        "deviance": {model: end.value for model, end in ends.items()},
        "evaluations": sum(end.evaluations for end in ends.values()),
    }


def _fit_model(coarse: Problem, full: Problem, model: str, start: Covariance | None) -> Search:
    def rough(place: Array) -> float:
        return coarse.objective(place, model)

    def exact(place: Array) -> float:
        return full.objective(place, model)

    starts = coarse.starts()
    if start is not None:
        starts.append(full.place(start))
    ranked = sorted(((rough(place), i) for i, place in enumerate(starts)), key=lambda pair: pair)
    ends = [search(rough, starts[i], _FIRST_STEPS, 150) for _, i in ranked[:2]]
    best = min(ends, key=lambda end: end.value)
    last = search(exact, full.inside(best.place), _LAST_STEPS, 120)
    spent = len(starts) + sum(end.evaluations for end in ends) + last.evaluations
    return Search(full.inside(last.place), last.value, spent)


def _describe(problem: Problem, place: Array, model: str) -> dict[str, Any]:
    names = ("sill", "range_m", "nugget")
    low, high = problem.bounds
    hit = [
        f"{name} at its {side} bound"
        for name, at, bottom, top, near in zip(names, place, low, high, _NEAR, strict=True)
        for side, edge in (("lower", bottom), ("upper", top))
        if abs(at - edge) < near
    ]
    return {
        "method": "REML",
        "wells_used": len(problem.values),
        "prior": problem.prior_words(),
        "bounds_hit": hit,
        "ln_std": dict(zip(names, _standard_errors(problem, place, model), strict=True)),
    }


def _standard_errors(problem: Problem, place: Array, model: str) -> list[float | None]:
    """Return standard errors of the log-parameters by the curvature; None where it tells none."""
    low, high = problem.bounds
    step = 0.2
    free = np.flatnonzero((place - low > step) & (high - place > step))
    moves = step * np.eye(len(place))[free]
    curvature = np.empty((len(free), len(free)))

    def at(change: Array) -> float:
        return problem.objective(place + change, model)

    middle = at(np.zeros(len(place)))
    single = [(at(move), at(-move)) for move in moves]
    for i, a in enumerate(moves):
        curvature[i, i] = (single[i][0] + single[i][1] - 2 * middle) / step**2
        for j, b in enumerate(moves[:i]):
            crossed = at(a + b) + at(-a - b) - at(a - b) - at(b - a)
            curvature[i, j] = curvature[j, i] = crossed / (4 * step**2)
    errors: list[float | None] = [None] * len(place)
    if len(free) and np.linalg.eigvalsh(curvature).min() > 0.02:
        for row, variance in zip(free, np.diag(np.linalg.inv(curvature / 2)), strict=True):
            errors[row] = float(np.sqrt(variance))
    return errors


def _constant(problem: Problem, model: str, wells: int) -> tuple[Covariance, dict[str, Any]]:
    small = problem.scale
    covariance = Covariance(model, small, problem.regional_range_m, small)
    return covariance, {
        "method": "all values equal: nothing to fit, sill and nugget set near 0",
        "wells": wells,
        "wells_used": len(problem.values),
        "prior": "none",
        "deviance": {},
        "bounds_hit": ["sill at its lower bound", "nugget at its lower bound"],
        "ln_std": {"sill": None, "range_m": None, "nugget": None},
        "evaluations": 0,
    }
