"""Learn a basin's cooling law from its own repeated readings."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import minimize
from scipy.stats import chi2

from basinheat.corrections.recovery.cooling import Block, CoolingLaw, deviance, recover

Floats = NDArray[np.float64]

# Priors of (offset over the region's typical rise, slope, ln scatter, ln noise): weak, centred on
# the starting values of METHODS A13 (common practice, no source).
_CENTRE = np.array([0.0, 0.35, np.log(0.12), 0.0])
_WIDTH = np.array([0.13, 0.12, 0.7, 0.4])
_FARTHEST = 6.0
# Beyond this share of the misfits that chance allows, readings contradict each other.
_CHANCE = 0.999
_MOST_SETS = 5000
# Far wider than any basin's law: what contradicts even this is left out before anything is
# learned, or a few gross errors would bend the law to themselves.
_SCREEN = CoolingLaw(offset_k=0.0, slope=0.35, scatter=0.25, noise=2.0)


@dataclass(frozen=True)
class Learned:
    """A cooling law and how well the basin knows it.

    Parameters
    ----------
    law : CoolingLaw
        Posterior mode.
    position : (4,) array
        The same in prior standard deviations from the prior's centre.
    level_std : float
        Standard uncertainty of the logarithm of the expected cooling at the typical rise.
    taught : (n,) array of int
        Numbers of the sets that taught.
    n_contradicting : int
        Sets left out because their readings contradict each other.
    """

    law: CoolingLaw
    position: Floats
    level_std: float
    taught: NDArray[np.int64]
    n_contradicting: int


def misfit_limit(n: int) -> float:
    """Return the misfit of a set of n readings that chance exceeds once in a thousand."""
    return float(chi2.ppf(_CHANCE, max(n - 1, 1)))


def thin(blocks: list[Block]) -> list[Block]:
    """Keep at most five thousand sets, evenly spread over their numbers."""
    total = sum(block.index.size for block in blocks)
    if total <= _MOST_SETS:
        return blocks
    index = np.sort(np.concatenate([block.index for block in blocks]))
    kept = index[np.linspace(0, total - 1, _MOST_SETS).round().astype(int)]
    return [block.take(np.isin(block.index, kept)) for block in blocks]


def learn_law(blocks: list[Block], rise_ref_k: Floats, typical_k: float) -> Learned:
    """Find the cooling law that makes the basin's repeated readings most likely.

    Parameters
    ----------
    blocks : list of Block
        Repeated timed sets.
    rise_ref_k : (sets,) array, K
        Expected rise above the surface of every set (by number).
    typical_k : float, K
        Typical rise in the region: the offset is judged against it.

    Returns
    -------
    Learned
        Posterior mode under weak priors, so that ten sets, or none, do as well. Sets whose
        readings contradict each other are left out, and the law is learned again.
    """
    total, position = sum(block.index.size for block in blocks), np.zeros(4)
    for law in (_SCREEN, None):
        consistent_with = law or _law(position, typical_k)
        blocks = [_consistent(block, rise_ref_k, consistent_with) for block in blocks]
        position = _mode(blocks, rise_ref_k, typical_k, position)
    taught = np.sort(np.concatenate([np.zeros(0, np.int64), *(block.index for block in blocks)]))
    spread = _level_std(position, lambda p: _objective(p, blocks, rise_ref_k, typical_k))
    return Learned(_law(position, typical_k), position, spread, taught, total - taught.size)


def relearn_law(
    blocks: list[Block], rise_ref_k: Floats, typical_k: float, learned: Learned
) -> CoolingLaw:
    """Learn the law from the same sets under other assumptions, starting from what is known.

    Parameters
    ----------
    blocks, rise_ref_k, typical_k
        As in `learn_law`, worked out under the other assumptions.
    learned : Learned
        The law under the first assumptions.
    """
    same = [block.take(np.isin(block.index, learned.taught)) for block in blocks]
    return _law(_mode(same, rise_ref_k, typical_k, learned.position), typical_k)


def _law(position: Floats, typical_k: float) -> CoolingLaw:
    offset, slope, scatter, noise = _CENTRE + _WIDTH * position
    return CoolingLaw(
        float(offset * typical_k), float(slope), float(np.exp(scatter)), float(np.exp(noise))
    )


def _objective(position: Floats, blocks: list[Block], rise: Floats, typical_k: float) -> float:
    law = _law(position, typical_k)
    data = sum(deviance(block, rise[block.index], law) for block in blocks)
    return float(data + position @ position)


def _mode(blocks: list[Block], rise: Floats, typical_k: float, start: Floats) -> Floats:
    """Return the posterior mode; in prior standard deviations every parameter moves as freely."""
    if not sum(block.index.size for block in blocks):
        return np.zeros(4)
    found = minimize(
        _objective,
        start,
        args=(blocks, rise, typical_k),
        method="L-BFGS-B",
        bounds=[(-_FARTHEST, _FARTHEST)] * 4,
        options={"eps": 1e-5, "ftol": 1e-11, "gtol": 1e-3},
    )
    return np.asarray(found.x, dtype=np.float64)


def _consistent(block: Block, rise: Floats, law: CoolingLaw) -> Block:
    fit = recover(block, rise[block.index], law)
    return block.take(fit.misfit <= misfit_limit(block.left.shape[1]))


def _level_std(position: Floats, objective: Callable[[Floats], float]) -> float:
    """Return the standard uncertainty of ln(expected cooling) from the curvature at the mode."""
    step, eye = 0.05, np.eye(4)
    hessian = np.empty((4, 4))
    for i in range(4):
        for j in range(i, 4):
            corners = [
                a * b * objective(position + step * (a * eye[i] + b * eye[j]))
                for a in (1, -1)
                for b in (1, -1)
            ]
            hessian[i, j] = hessian[j, i] = sum(corners) / (4 * step**2)
    rate, axes = np.linalg.eigh(hessian / 2.0)
    covariance = (axes / np.maximum(rate, 1.0)) @ axes.T
    level = _CENTRE[:2] + _WIDTH[:2] * position[:2]
    slope = np.append(_WIDTH[:2] / max(level.sum(), 0.05), [0.0, 0.0])
    return float(np.sqrt(slope @ covariance @ slope))
