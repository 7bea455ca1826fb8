"""Generalised least squares by one Cholesky: the algebra that kriging and REML share.

With K = L L^T and L^-1 F = Q R, everything needed is a triangular solve and a projection.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray
from scipy.linalg import blas, lapack

Array = NDArray[np.float64]

# A pivot is the variance of a datum given those before it; below this share of its own
# variance only rounding is left of it.
_SMALLEST_PIVOT = 1e-13
# Root of the share of a datum's conditional precision that the drift leaves; below it the
# others cannot tell the drift without that datum.
_UNTOLD = 1e-6


class NotPositiveDefiniteError(ArithmeticError):
    """The matrix is no covariance; ``row`` is the first datum that others determine."""

    def __init__(self, row: int) -> None:
        super().__init__(f"row {row} is determined by the rows before it")
        self.row = row


@dataclass(frozen=True)
class Factor:
    """Cholesky factor of K and the whitened drift.

    Parameters
    ----------
    lower : array, shape (n, n)
        L, lower triangle, Fortran order.
    basis : array, shape (n, p)
        Q, orthonormal.
    triangle : array, shape (p, p)
        R, upper triangle.
    """

    lower: Array
    basis: Array
    triangle: Array

    def whiten(self, columns: Array, overwrite: bool = False) -> Array:
        """Return L^-1 B; with ``overwrite`` a Fortran-ordered B holds the answer."""
        return _solve(self.lower, columns, lower=1, overwrite_b=int(overwrite))

    def unwhiten(self, columns: Array) -> Array:
        """Return L^-T B."""
        return _solve(self.lower, columns, lower=1, trans_a=1)

    def remove_drift(self, white: Array) -> Array:
        """Return (I - Q Q^T) B."""
        return np.asarray(white - self.basis @ (self.basis.T @ white))

    def coefficients(self, white: Array) -> Array:
        """Return R^-1 Q^T B, the generalised least-squares coefficients."""
        return _solve(self.triangle, self.basis.T @ white)

    def solve_triangle(self, columns: Array) -> Array:
        """Return R^-T B: its squares are the variance that the drift adds."""
        return _solve(self.triangle, columns, trans_a=1)

    def log_determinants(self) -> float:
        """Return ln|K| + ln|F^T K^-1 F|."""
        logs = np.log(np.diag(self.lower)).sum() + np.log(np.abs(np.diag(self.triangle))).sum()
        return float(2.0 * logs)


def _solve(triangle: Array, columns: Array, **flags: int) -> Array:
    if columns.shape[1] == 0:  # BLAS refuses what has no columns
        return columns
    return blas.dtrsm(1.0, triangle, columns, **flags)


def factorise(covariance: Array, drift: Array) -> Factor:
    """Factor a covariance matrix; its lower triangle is overwritten.

    Parameters
    ----------
    covariance : array, shape (n, n), symmetric
        K.
    drift : array, shape (n, p)
        F, of full rank.

    Raises
    ------
    NotPositiveDefiniteError
        When a datum is determined by those before it.
    """
    own = np.diag(covariance).copy()
    # the transpose of a C-ordered symmetric matrix is itself, in the order LAPACK overwrites
    lower, info = lapack.dpotrf(covariance.T, lower=1, overwrite_a=1, clean=1)
    if info > 0:
        raise NotPositiveDefiniteError(info - 1)
    pivots = np.diag(lower) ** 2
    lost = ~(pivots > _SMALLEST_PIVOT * own)
    if lost.any():
        raise NotPositiveDefiniteError(int(np.argmax(lost)))
    white = _solve(lower, drift, lower=1)
    basis, triangle = np.linalg.qr(white)
    return Factor(lower, np.asfortranarray(basis), np.asfortranarray(triangle))


def deviance(factor: Factor, values: Array) -> float:
    """Return -2 log REML without constants: ln|K| + ln|F^T K^-1 F| + y^T P y."""
    left = factor.remove_drift(factor.whiten(values[:, None]))
    return factor.log_determinants() + float(np.sum(left * left))


def left_out(factor: Factor, dual: Array, labels: NDArray[Any]) -> tuple[Array, Array]:
    """Return each datum less what the data of other labels say, and the variance of that.

    With Q = K^-1 less its drift part and dual = Q y, these residuals of a block I are
    Q_II^-1 (Q y)_I, with covariance Q_II^-1 (Dubrule 1983, Mathematical Geology 15, 687-699).

    Parameters
    ----------
    factor : Factor
    dual : array, shape (n,)
    labels : array, shape (n,)
        Data of one label are left out together.

    Returns
    -------
    residual, variance : arrays, shape (n,)
        NaN and infinite where the others cannot tell the drift.
    """
    inverse, _ = lapack.dtrtri(factor.lower, lower=1)
    spent = inverse.T @ factor.basis
    order = np.argsort(labels, kind="stable")
    _, starts = np.unique(labels[order], return_index=True)
    residual, variance = np.full(len(dual), np.nan), np.full(len(dual), np.inf)
    for rows in np.split(order, starts[1:]):
        precision = inverse[:, rows].T @ inverse[:, rows]
        own = np.sqrt(np.diag(precision))  # scales the pivots: small in any unit
        precision -= spent[rows] @ spent[rows].T
        root, info = lapack.dpotrf(precision / np.outer(own, own), lower=1, clean=1)
        if info or np.diag(root).min() < _UNTOLD:
            continue
        half = lapack.dtrtri(root, lower=1)[0] / own
        residual[rows] = half.T @ (half @ dual[rows])
        variance[rows] = np.einsum("ij,ij->j", half, half)
    return residual, variance
