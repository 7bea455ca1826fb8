"""Fit a basin's readings under one set of assumptions about mud, rock and surface."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from basinheat.corrections.recovery.cooling import Block, recover
from basinheat.corrections.recovery.learning import Learned, learn_law, thin
from basinheat.corrections.recovery.response import Mud, response
from basinheat.corrections.recovery.times import TimePrior, cooling_left
from basinheat.corrections.sets import Floats, ReadingSets
from basinheat.corrections.trend import RegionalTrend

_RESCALINGS = 2
# The least expected rise, over the typical one: widths must not vanish at the surface.
_LEAST_RISE = 0.1
# Typical rise where there is nothing to learn from: 2 km at 30 K/km.
_ORDINARY_K = 60.0


@dataclass(frozen=True)
class Case:
    """One set of assumptions.

    Parameters
    ----------
    mud : Mud
        Mud over rock.
    diffusivity_m2_s : float, m2/s
        Of the rock.
    surface_k : float, K
        How much warmer the surface is than stated.
    """

    mud: Mud
    diffusivity_m2_s: float
    surface_k: float = 0.0


@dataclass(frozen=True)
class Fit:
    """Estimates of all sets under one case; (sets,) arrays, NaN where nothing can be said.

    Parameters
    ----------
    learned : Learned
        Cooling law.
    expected_k, typical_k : (sets,) array, float, K
        Rise above the surface that the region lets expect for each set, and typically.
    rise_k, variance_k2, scatter_k2, misfit : (sets,) array
        As in Recovered.
    weight_sum : (sets,) array
        Change of the estimated rise per kelvin of all readings.
    blocks : list of Block
        Sets by their number of readings.
    weights, cooling : list of (b, n) array
        By block: weight of every reading, and the cooling expected to be left in it (K).
    """

    learned: Learned
    expected_k: Floats
    typical_k: float
    rise_k: Floats
    variance_k2: Floats
    scatter_k2: Floats
    misfit: Floats
    weight_sum: Floats
    blocks: list[Block]
    weights: list[Floats]
    cooling: list[Floats]


def least_rise(expected_k: Floats, typical_k: float) -> Floats:
    """Return the expected rise, nowhere less than a tenth of the typical one, K."""
    return np.maximum(expected_k, _LEAST_RISE * typical_k)


def fit_basin(sets: ReadingSets, prior: TimePrior, case: Case, trend: RegionalTrend) -> Fit:
    """Learn the cooling law and estimate every set with a surface temperature.

    Parameters
    ----------
    sets : ReadingSets
        Mud-cooled sets.
    prior : TimePrior
        Times.
    case : Case
        Assumptions.
    trend : RegionalTrend
        Trend of the raw readings; twice rescaled by the median of the estimates over it, so that
        the widths rest on the region and not on a set's own readings.
    """
    index = np.flatnonzero(np.isfinite(sets.surface_temperature_degc))
    blocks = arrange(sets, index, prior, case)
    teachers = index[sets.learn[index]]
    expected = trend.rise_k(sets.depth_m)
    for _ in range(_RESCALINGS):
        fit = _fit_once(sets, blocks, expected, teachers)
        if teachers.size:
            over = fit.rise_k[teachers] / fit.expected_k[teachers]
            expected = fit.expected_k * float(np.median(over))
    return _fit_once(sets, blocks, expected, teachers)


def _fit_once(
    sets: ReadingSets, blocks: list[Block], expected: Floats, teachers: NDArray[np.int64]
) -> Fit:
    typical = float(np.median(expected[teachers])) if teachers.size else _ORDINARY_K
    expected = least_rise(expected, typical)
    learned = learn_law(thin(_teaching(blocks, sets)), expected, typical)
    names = ("rise_k", "variance_k2", "scatter_k2", "misfit", "weight_sum")
    out = {name: np.full(len(sets), np.nan) for name in names}
    weights, cooling = [], []
    for block in blocks:
        found = recover(block, expected[block.index], learned.law)
        for name in names[:-1]:
            out[name][block.index] = getattr(found, name)
        out["weight_sum"][block.index] = found.weights.sum(1)
        weights.append(found.weights)
        cooling.append(learned.law.expected_k(expected[block.index])[:, None] * block.left)
    return Fit(learned, expected, typical, blocks=blocks, weights=weights, cooling=cooling, **out)


def arrange(
    sets: ReadingSets, index: NDArray[np.int64], prior: TimePrior, case: Case
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
