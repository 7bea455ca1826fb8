"""Conductivity under the conditions at depth: rock and pore water at temperature.

Every law takes the conductivity at 25 degC and returns it at another temperature, so that
``law(k, 25) == k`` exactly and laws can be exchanged.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]

REFERENCE_DEGC = 25.0
LARGEST_RISE = 1.05  # poor conductors conduct better when hot; the laws are not trusted further
_HALITE_PER_K = 48.5e-4  # Wangen (2010) tab. 2.4 after Clauser & Huenges (1995), read
_WATER_RANGE_DEGC = (0.0, 300.0)


def none(conductivity_25: ArrayLike, temperature_degc: ArrayLike) -> Array:
    """Leave the conductivity as at 25 degC."""
    k, _ = np.broadcast_arrays(np.asarray(conductivity_25, float), temperature_degc)
    return k.copy()


def vosteen2003_sed(conductivity_25: ArrayLike, temperature_degc: ArrayLike) -> Array:
    """Return the conductivity of sedimentary rock: k = k0 / (0.99 + T (a - b/k0)).

    Parameters
    ----------
    conductivity_25 : array_like, W/(m K)
        At 25 degC.
    temperature_degc : array_like, degC

    Returns
    -------
    ndarray, W/(m K)

    Notes
    -----
    0-300 degC. k0 is the exact inverse at 25 degC (the printed 0.54, 1.16, 0.39 are it, rounded).
    Rocks below about 1.2 W/(m K) conduct better when hot, here by no more than 5 %.

    References
    ----------
    Vosteen & Schellschmidt (2003), Phys. Chem. Earth 28, 499-509; a = 0.0034, b = 0.0039 (read in
    independent open code).
    """
    return _vosteen(conductivity_25, temperature_degc, 0.0034, 0.0039)


def vosteen2003_cryst(conductivity_25: ArrayLike, temperature_degc: ArrayLike) -> Array:
    """Return the conductivity of crystalline rock: k = k0 / (0.99 + T (a - b/k0)).

    As :func:`vosteen2003_sed`, with a = 0.0030, b = 0.0042; 0-500 degC.
    """
    return _vosteen(conductivity_25, temperature_degc, 0.0030, 0.0042)


def halite(conductivity_25: ArrayLike, temperature_degc: ArrayLike) -> Array:
    """Return the conductivity of rock salt: k = k0 / (1 + 0.00485 T).

    Parameters and return as for :func:`vosteen2003_sed`.

    References
    ----------
    Clauser & Huenges (1995), with k0 = 6.2 W/(m K), as tabulated by Wangen (2010), table 2.4.
    """
    k, t = np.asarray(conductivity_25, float), np.asarray(temperature_degc, float)
    return k * (1.0 + REFERENCE_DEGC * _HALITE_PER_K) / (1.0 + t * _HALITE_PER_K)


def sekiguchi_waples(conductivity_25: ArrayLike, temperature_degc: ArrayLike) -> Array:
    """Return the conductivity by k = 358 (1.0227 k20 - 1.882) (1/T - 0.00068) + 1.84, T in kelvin.

    Parameters and return as for :func:`vosteen2003_sed`; k20 follows from k25 by the law itself.

    References
    ----------
    Sekiguchi (1984), Tectonophysics 103, in Waples's form; coefficients read in three open codes.
    """
    k25, t = np.asarray(conductivity_25, float), np.asarray(temperature_degc, float)
    at_25 = 1.0 / (REFERENCE_DEGC + 273.15) - 0.00068
    return (k25 - 1.84) / at_25 * (1.0 / (t + 273.15) - 0.00068) + 1.84


LAWS: dict[str, Callable[[ArrayLike, ArrayLike], Array]] = {
    "none": none,
    "vosteen2003_sed": vosteen2003_sed,
    "vosteen2003_cryst": vosteen2003_cryst,
    "halite": halite,
    "sekiguchi_waples": sekiguchi_waples,
}
LAW_NAMES = tuple(LAWS)


def at_temperature(
    conductivity_25: Array, temperature_degc: Array, law: NDArray[np.int64]
) -> Array:
    """Return conductivities at temperature, each by its own law.

    Parameters
    ----------
    conductivity_25 : ndarray, shape (n,), W/(m K)
    temperature_degc : ndarray, shape (n,), degC
    law : ndarray, shape (n,)
        Place of the law in ``LAW_NAMES``.

    Returns
    -------
    ndarray, shape (n,), W/(m K)
    """
    out = np.array(conductivity_25, float)
    for code, function in enumerate(LAWS.values()):
        here = law == code
        if function is not none and here.any():
            out[here] = function(conductivity_25[here], temperature_degc[here])
    return out


def water(temperature_degc: ArrayLike) -> Array:
    """Return the conductivity of pore water.

    Parameters
    ----------
    temperature_degc : array_like, degC

    Returns
    -------
    ndarray, W/(m K)

    Notes
    -----
    Fitted to 0-100 degC; used to 300 degC, where it stays within about 1 % of water at saturation
    (from memory of the steam tables). Salt lowers it by 1-3 %, which is neglected.

    References
    ----------
    Popiel & Wojtkowiak (1998), Heat Transfer Eng. 19, 87-101; coefficients read in open
    documentation.

    Examples
    --------
    >>> round(float(water(20.0)), 4)
    0.6017
    """
    t = np.clip(np.asarray(temperature_degc, float), *_WATER_RANGE_DEGC)
    root = np.sqrt(t)
    return (
        0.5650285
        - 0.0009412945 * root
        + t * (0.0026363895 - 0.00012516934 * root - 1.5154918e-6 * t)
    )


def _vosteen(conductivity_25: ArrayLike, temperature_degc: ArrayLike, a: float, b: float) -> Array:
    k25, t = np.asarray(conductivity_25, float), np.asarray(temperature_degc, float)
    c = 0.99 + REFERENCE_DEGC * a
    root = (c * k25) ** 2 - 4.0 * REFERENCE_DEGC * b * k25
    known = root > 0.0  # below 0.34 (0.37) W/(m K) the law has no k0: k stays as it is
    k0 = np.where(known, 0.5 * (c * k25 + np.sqrt(np.maximum(root, 0.0))), 1.0)
    slope = a - b / k0
    at_25 = 0.99 + REFERENCE_DEGC * slope
    below = np.maximum(0.99 + t * slope, np.where(slope < 0.0, at_25 / LARGEST_RISE, 0.0))
    return np.where(known, k25 * at_25 / np.where(known, below, 1.0), k25 + 0.0 * t)
