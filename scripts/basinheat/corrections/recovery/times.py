"""What noted and missing times say of the cooling left: its mean and covariance, set by set."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from basinheat.corrections.recovery.response import Response
from basinheat.corrections.sets import ReadingSets

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

# Five-point Gauss-Hermite rule for a standard normal.
_NODE, _WEIGHT = np.polynomial.hermite_e.hermegauss(5)
NODES, WEIGHTS = _NODE, _WEIGHT / _WEIGHT.sum()
# Noted times needed before the basin's own replace the stated prior.
_ENOUGH_CIRCULATION, _ENOUGH_SETS = 20, 8
# The basin's times that stand for an unknown one, and the radii at which they are worked out.
_POOL, _RADII = 60, 24
# Without any noted time: first log 8 h after circulation within a factor 1.8, each later log
# half as long again after the one before (common practice, no source).
_FIRST_H, _FIRST_FACTOR, _LATER = 8.0, 1.8, 1.5
_BATCH = 200_000


@dataclass(frozen=True)
class TimePrior:
    """Times of circulation and logging in this basin.

    Parameters
    ----------
    circulation_ln_mean, circulation_ln_std : float
        Of the logarithm of circulation time in hours.
    circulation_h : (sets,) array, h
        Circulation of the sets all of whose readings are timed; those without stand in with
        quantiles of the prior.
    since_h : (sets, n) array, h
        Times since circulation of the same sets, NaN beyond the last.
    n_circulation : int
        Noted circulation times.
    """

    circulation_ln_mean: float
    circulation_ln_std: float
    circulation_h: Floats
    since_h: Floats
    n_circulation: int

    def circulation_nodes(self) -> Floats:
        """Return the five times that stand for an unknown circulation, h."""
        return np.exp(self.circulation_ln_mean + self.circulation_ln_std * NODES)

    def pool(self, n: int) -> tuple[Floats, Floats]:
        """Return times that stand for those of n untimed readings: (p,) and (p, n), h."""
        size = np.isfinite(self.since_h).sum(1)
        rows = np.flatnonzero(size == n)
        if rows.size < _ENOUGH_SETS:
            rows = np.flatnonzero(size >= n)
        if rows.size < _ENOUGH_SETS:
            return self._assumed(n)
        order = rows[np.lexsort((self.circulation_h[rows], self.since_h[rows, 0]))]
        picked = order[np.unique(np.linspace(0, order.size - 1, _POOL).round().astype(int))]
        return self.circulation_h[picked], self.since_h[picked, :n]

    def _assumed(self, n: int) -> tuple[Floats, Floats]:
        first = _FIRST_H * _FIRST_FACTOR ** _normal_quantiles(_POOL)
        return self._quantiles(_POOL), first[:, None] * _LATER ** np.arange(n)

    def _quantiles(self, n: int) -> Floats:
        """Return n circulation times spread like the prior, in an order tied to nothing else."""
        spread = self.circulation_ln_std * _shuffled_quantiles(n)
        return np.exp(self.circulation_ln_mean + spread)


def _normal_quantiles(n: int) -> Floats:
    return np.asarray(ndtri((np.arange(n) + 0.5) / n), dtype=np.float64)


def _shuffled_quantiles(n: int) -> Floats:
    """Return normal quantiles in the order of the golden ratio, so that neighbours differ."""
    order = np.argsort((np.arange(n) * 0.6180339887498949) % 1.0)
    return _normal_quantiles(n)[np.argsort(order)]


def learn_times(sets: ReadingSets, circulation_h: float, circulation_factor: float) -> TimePrior:
    """Learn the basin's times from the wells that may teach.

    Parameters
    ----------
    sets : ReadingSets
        Mud-cooled sets.
    circulation_h, circulation_factor : float, h and 1
        Median and one-sigma factor until twenty circulation times are noted.
    """
    noted = sets.circulation_h[sets.learn & np.isfinite(sets.circulation_h)]
    mean, std = np.log(circulation_h), np.log(circulation_factor)
    if noted.size > _ENOUGH_CIRCULATION:
        mean, std = np.log(noted).mean(), max(np.log(noted).std(), 0.05)
    rows = np.flatnonzero(sets.learn & (sets.timed == sets.count) & (sets.count > 0))
    prior = TimePrior(float(mean), float(std), np.zeros(0), np.zeros((0, 1)), int(noted.size))
    own = sets.circulation_h[rows]
    own = np.where(np.isfinite(own), own, prior._quantiles(rows.size))
    return TimePrior(float(mean), float(std), own, sets.since_circulation_h[rows], noted.size)


def cooling_left(
    circulation_h: Floats,
    since_h: Floats,
    radius_m: Floats,
    prior: TimePrior,
    response: Response,
    diffusivity_m2_s: float,
) -> tuple[Floats, Floats]:
    """Return mean and covariance of the share of cooling left, over what is not known.

    Noted times count as noted. An unknown circulation time is integrated over its prior; times
    of readings without any are integrated over those the basin noted for as many readings.

    Parameters
    ----------
    circulation_h, radius_m : (sets,) array, h, m
        NaN where circulation is not noted.
    since_h : (sets, n) array, h
        NaN where not noted; every set has n readings.
    prior : TimePrior
        What the basin noted.
    response : Response
        Response of the hole.
    diffusivity_m2_s : float, m2/s
        Of the rock.

    Returns
    -------
    (sets, n) array, (sets, n, n) array
        Mean and covariance.
    """
    n = since_h.shape[1]
    mean, cov = np.zeros(since_h.shape), np.zeros((*since_h.shape, n))
    timed = np.isfinite(since_h)
    known = np.isfinite(circulation_h)
    for rows, nodes, weights in (
        (np.flatnonzero(timed.any(1) & known), None, np.ones(1)),
        (np.flatnonzero(timed.any(1) & ~known), prior.circulation_nodes(), WEIGHTS),
    ):
        for part in _batches(rows, n * weights.size):
            hours = circulation_h[part][:, None] if nodes is None else nodes[None, :]
            left = response(
                hours[:, :, None],
                since_h[part][:, None, :],
                radius_m[part][:, None, None],
                diffusivity_m2_s,
            )
            mean[part], cov[part] = _moments(left, weights)
    none = np.flatnonzero(~timed.any(1))
    if none.size:
        mean[none], cov[none] = _untimed(radius_m[none], n, prior, response, diffusivity_m2_s)
    mixed = np.flatnonzero(timed.any(1) & ~timed.all(1))
    if mixed.size:
        _fill_mixed(mean, cov, mixed, timed, radius_m, prior, response, diffusivity_m2_s)
    return mean, cov


def _batches(rows: Ints, values_per_row: int) -> list[Ints]:
    return [] if rows.size == 0 else np.array_split(rows, 1 + rows.size * values_per_row // _BATCH)


def _moments(left: Floats, weights: Floats) -> tuple[Floats, Floats]:
    """Return weighted mean (sets, n) and covariance (sets, n, n) over the nodes (sets, p, n)."""
    mean = np.einsum("p,spn->sn", weights, left)
    off = left - mean[:, None, :]
    return mean, np.einsum("p,spn,spm->snm", weights, off, off)


def _untimed(
    radius_m: Floats, n: int, prior: TimePrior, response: Response, diffusivity_m2_s: float
) -> tuple[Floats, Floats]:
    """Return the moments of n untimed readings: they depend on the radius alone."""
    circulation, since = prior.pool(n)
    radii = np.unique(radius_m)
    if radii.size > _RADII:
        radii = np.geomspace(radii[0], radii[-1], _RADII)
    left = response(circulation[None, :, None], since[None], radii[:, None, None], diffusivity_m2_s)
    mean, cov = _moments(left, np.full(circulation.size, 1.0 / circulation.size))
    at = np.interp(np.log(radius_m), np.log(radii), np.arange(radii.size, dtype=float))
    low = np.minimum(np.floor(at).astype(int), max(radii.size - 2, 0))
    high = np.minimum(low + 1, radii.size - 1)
    part = at - low
    return (
        mean[low] + part[:, None] * (mean[high] - mean[low]),
        cov[low] + part[:, None, None] * (cov[high] - cov[low]),
    )


def _fill_mixed(
    mean: Floats,
    cov: Floats,
    rows: Ints,
    timed: NDArray[np.bool_],
    radius_m: Floats,
    prior: TimePrior,
    response: Response,
    diffusivity_m2_s: float,
) -> None:
    """Give the untimed readings of partly timed sets the moments of single untimed readings."""
    one, one_cov = _untimed(radius_m[rows], 1, prior, response, diffusivity_m2_s)
    gap = ~timed[rows]
    mean[rows] = np.where(gap, one, mean[rows])
    either = gap[:, :, None] | gap[:, None, :]
    both = gap[:, :, None] & np.eye(gap.shape[1], dtype=bool)
    cov[rows] = np.where(either, np.where(both, one_cov, 0.0), cov[rows])
