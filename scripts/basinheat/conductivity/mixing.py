"""Conductivity of a mixture from the conductivities of its parts."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]


def arithmetic(fractions: ArrayLike, conductivities: ArrayLike) -> Array:
    """Mix parts side by side along the flow: sum of f k, the upper bound.

    Parameters
    ----------
    fractions : array_like, shape (..., m)
        Volume fractions, sum 1 along the last axis.
    conductivities : array_like, shape (..., m), W/(m K)

    Returns
    -------
    ndarray, shape (...), W/(m K)

    Examples
    --------
    >>> round(float(arithmetic([0.8, 0.2], [4.0, 0.6])), 3)
    3.32
    """
    return np.sum(np.asarray(fractions, float) * np.asarray(conductivities, float), axis=-1)


def harmonic(fractions: ArrayLike, conductivities: ArrayLike) -> Array:
    """Mix parts in series: 1 / sum of f/k, the lower bound; layers under vertical heat flow.

    Parameters and return as for :func:`arithmetic`.

    Examples
    --------
    >>> round(float(harmonic([0.5, 0.3, 0.2], [2.0, 3.2, 5.0])), 3)
    2.606
    """
    return 1.0 / np.sum(np.asarray(fractions, float) / np.asarray(conductivities, float), axis=-1)


def geometric(fractions: ArrayLike, conductivities: ArrayLike) -> Array:
    """Mix parts without preferred direction: product of k^f; matrix and pore water.

    Parameters and return as for :func:`arithmetic`.

    Notes
    -----
    Valid for contrasts up to about 20.

    References
    ----------
    Woodside & Messmer (1961), J. Appl. Phys. 32, 1688.

    Examples
    --------
    >>> round(float(geometric([0.8, 0.2], [4.0, 0.6])), 3)
    2.737
    """
    logs = np.log(np.asarray(conductivities, float))
    return np.exp(np.sum(np.asarray(fractions, float) * logs, axis=-1))


def square_root(fractions: ArrayLike, conductivities: ArrayLike) -> Array:
    """Mix parts by their roots: (sum of f sqrt(k))^2.

    Parameters and return as for :func:`arithmetic`.

    References
    ----------
    Roy et al. (1981); Beck (1988).
    """
    roots = np.sqrt(np.asarray(conductivities, float))
    return np.sum(np.asarray(fractions, float) * roots, axis=-1) ** 2


def hashin_shtrikman(fractions: ArrayLike, conductivities: ArrayLike) -> tuple[Array, Array]:
    """Return the narrowest bounds of an isotropic mixture: k = 1 / sum(f/(k_i + 2 k*)) - 2 k*.

    Parameters as for :func:`arithmetic`.

    Returns
    -------
    lower, upper : ndarray, shape (...), W/(m K)
        k* the smallest and the largest conductivity among the parts.

    References
    ----------
    Hashin & Shtrikman (1962), J. Appl. Phys. 33, 3125.
    """
    f, k = np.asarray(fractions, float), np.asarray(conductivities, float)

    def bound(reference: Array) -> Array:
        return 1.0 / np.sum(f / (k + 2.0 * reference), axis=-1) - 2.0 * reference[..., 0]

    return bound(k.min(-1, keepdims=True)), bound(k.max(-1, keepdims=True))


def with_fluid(matrix: Array, fluid: Array, porosity: Array, rule: str) -> Array:
    """Return the conductivity of rock from that of its matrix and of the fluid in its pores.

    Parameters
    ----------
    matrix, fluid : ndarray, shape (n,), W/(m K)
    porosity : ndarray, shape (n,)
    rule : str
        One of ``FLUID_RULES``.

    Returns
    -------
    ndarray, shape (n,), W/(m K)

    Examples
    --------
    >>> rock = [np.array([value]) for value in (4.0, 0.6, 0.2)]
    >>> round(float(with_fluid(*rock, "hashin_shtrikman_lower")[0]), 3)
    2.574
    """
    if rule == "geometric":
        return matrix * (fluid / matrix) ** porosity
    solid = 1.0 - porosity
    if rule == "arithmetic":
        return solid * matrix + porosity * fluid
    if rule == "harmonic":
        return 1.0 / (solid / matrix + porosity / fluid)
    if rule == "square_root":
        return (solid * np.sqrt(matrix) + porosity * np.sqrt(fluid)) ** 2
    bound = np.maximum if rule == "hashin_shtrikman_upper" else np.minimum
    more = 2.0 * bound(matrix, fluid)
    return 1.0 / (solid / (matrix + more) + porosity / (fluid + more)) - more


FLUID_RULES = (
    "geometric",
    "arithmetic",
    "harmonic",
    "square_root",
    "hashin_shtrikman_upper",
    "hashin_shtrikman_lower",
)
