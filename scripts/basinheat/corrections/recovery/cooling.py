"""Formation temperature of sets of readings under a cooling law, in closed form."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class CoolingLaw:
    """How much cooler than the rock the mud is when circulation stops.

    ``c = offset + slope u + N(0, (scatter u_ref)²)`` with u the formation temperature above the
    surface; readings err by ``noise`` times their stated standard uncertainty.

    Parameters
    ----------
    offset_k, slope, scatter, noise : float, K, 1, 1, 1
        See above.
    """

    offset_k: float
    slope: float
    scatter: float
    noise: float

    def expected_k(self, rise_k: Floats) -> Floats:
        """Return the cooling expected where the rock is so much above the surface, K."""
        return self.offset_k + self.slope * rise_k


@dataclass(frozen=True)
class Block:
    """Sets with the same number n of readings.

    Parameters
    ----------
    index : (b,) array of int
        Number of each set.
    rise_k, std_k : (b, n) array, K
        Readings above the surface temperature, and their standard uncertainty.
    left : (b, n) array
        Mean share of the cooling left.
    left_cov : (b, n, n) array
        Its covariance over what is not known of the times.
    """

    index: NDArray[np.int64]
    rise_k: Floats
    std_k: Floats
    left: Floats
    left_cov: Floats

    def take(self, rows: NDArray[np.bool_]) -> Block:
        """Return some of the sets."""
        return Block(**{name: value[rows] for name, value in vars(self).items()})


@dataclass(frozen=True)
class Recovered:
    """Formation temperature above the surface, and what it rests on.

    Parameters
    ----------
    rise_k, variance_k2, scatter_k2 : (b,) array
        Estimate, its variance, and the part of that due to the scatter of cooling and to times.
    weights : (b, n) array
        Change of the estimate per kelvin of each reading.
    misfit : (b,) array
        Squared standardised residuals, n - 1 degrees of freedom.
    """

    rise_k: Floats
    variance_k2: Floats
    scatter_k2: Floats
    weights: Floats
    misfit: Floats


def recover(block: Block, rise_ref_k: Floats, law: CoolingLaw) -> Recovered:
    """Estimate formation temperatures by generalised least squares.

    A reading is ``y_i = u − D_i c + e_i`` with u the formation temperature above the surface and
    c the cooling at the end of circulation.

    Parameters
    ----------
    block : Block
        Sets.
    rise_ref_k : (b,) array, K
        What the region lets expect for u. Widths use it, never the set's own estimate, which
        would favour cool answers.
    law : CoolingLaw
        Cooling law.

    Returns
    -------
    Recovered
        Estimates.
    """
    scatter = _scatter(block, rise_ref_k, law)
    X, z = 1.0 - law.slope * block.left, block.rise_k + law.offset_k * block.left
    L, _ = _factor(_with_noise(scatter, block, law))
    WX, Wz = _forward(L, X), _forward(L, z)
    precision = (WX**2).sum(0)
    rise = (WX * Wz).sum(0) / precision
    weights = (_backward(L, WX) / precision).T
    return Recovered(
        rise_k=rise,
        variance_k2=1.0 / precision,
        scatter_k2=np.einsum("bi,bij,bj->b", weights, scatter, weights),
        weights=weights,
        misfit=((Wz - rise * WX) ** 2).sum(0),
    )


def deviance(block: Block, rise_ref_k: Floats, law: CoolingLaw) -> float:
    """Return −2 ln of the restricted likelihood of all sets.

    Sets are weighted by the likelihood of their readings (ln 1ᵀV⁻¹1), not with the Jacobian of
    the estimate, which would reward cooling laws that amplify errors.
    """
    X, z = 1.0 - law.slope * block.left, block.rise_k + law.offset_k * block.left
    L, log_det = _factor(_with_noise(_scatter(block, rise_ref_k, law), block, law))
    WX, Wz, W1 = _forward(L, X), _forward(L, z), _forward(L, np.ones_like(z))
    fit = (Wz**2).sum(0) - (WX * Wz).sum(0) ** 2 / (WX**2).sum(0)
    return float((log_det + np.log((W1**2).sum(0)) + fit).sum())


def _scatter(block: Block, rise_ref_k: Floats, law: CoolingLaw) -> Floats:
    """Return the covariance of the readings that cooling and times cause, (b, n, n)."""
    width = ((law.scatter * rise_ref_k) ** 2)[:, None, None]
    expected = (law.expected_k(rise_ref_k) ** 2)[:, None, None]
    outer = block.left[:, :, None] * block.left[:, None, :]
    return width * (outer + block.left_cov) + expected * block.left_cov


def _with_noise(scatter: Floats, block: Block, law: CoolingLaw) -> Floats:
    out = scatter.copy()
    diagonal = np.arange(block.left.shape[1])
    out[:, diagonal, diagonal] += (law.noise * block.std_k) ** 2
    return out


def _factor(V: Floats) -> tuple[Floats, Floats]:
    """Return Cholesky factors (n, n, b) of small matrices (b, n, n) and their ln determinants.

    Written out over the few columns: thousands of library calls on 2 × 2 matrices take longer.
    """
    L = np.ascontiguousarray(V.transpose(1, 2, 0))
    log_det = np.zeros(L.shape[2])
    for j in range(L.shape[0]):
        for k in range(j):
            L[j:, j] -= L[j:, k] * L[j, k]
        pivot = L[j, j].copy()
        log_det += np.log(pivot)
        L[j:, j] /= np.sqrt(pivot)
    return L, log_det


def _forward(L: Floats, right: Floats) -> Floats:
    """Solve L w = right, (b, n) to (n, b)."""
    w = np.array(right.T)
    for j in range(w.shape[0]):
        for k in range(j):
            w[j] -= L[j, k] * w[k]
        w[j] /= L[j, j]
    return w


def _backward(L: Floats, right: Floats) -> Floats:
    """Solve Lᵀ w = right, (n, b)."""
    w = right.copy()
    for j in range(w.shape[0] - 1, -1, -1):
        for k in range(j + 1, w.shape[0]):
            w[j] -= L[k, j] * w[k]
        w[j] /= L[j, j]
    return w
