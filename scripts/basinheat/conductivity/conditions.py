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


def sekiguchi1984(conductivity_25: ArrayLike, temperature_degc: ArrayLike) -> Array:
    """Return the conductivity by k = Tm T0 / (Tm - T0) (k0 - kinf) (1/T - 1/Tm) + kinf, in kelvin.

    Parameters and return as for :func:`vosteen2003_sed`; Tm = 1473 K, kinf = 1.8418 W/(m K), and
    T0 any temperature at which k is known, here 25 degC.

    References
    ----------
    Sekiguchi (1984), Tectonophysics 103; constants from memory.
    """
    k25, t = np.asarray(conductivity_25, float), np.asarray(temperature_degc, float)
    at_25 = 1.0 / (REFERENCE_DEGC + 273.15) - 1.0 / 1473.0
    return (k25 - 1.8418) / at_25 * (1.0 / (t + 273.15) - 1.0 / 1473.0) + 1.8418


def chapman1984(conductivity_25: ArrayLike, temperature_degc: ArrayLike) -> Array:
    """Return the conductivity by k = k20 293 / (273 + T): the strongest fall of all laws.

    Parameters and return as for :func:`vosteen2003_sed`.

    References
    ----------
    Chapman, Keho, Bauer & Picard (1984), Geophysics 49, 453-466; from memory.
    """
    k, t = np.asarray(conductivity_25, float), np.asarray(temperature_degc, float)
    return k * (273.0 + REFERENCE_DEGC) / (273.0 + t)


def sass1992(conductivity_25: ArrayLike, temperature_degc: ArrayLike) -> Array:
    """Return the conductivity by k = k0 / (1.007 + T (0.0036 - 0.0072/k0)).

    Parameters and return as for :func:`vosteen2003_sed`, and k0 too is the exact inverse.

    References
    ----------
    Sass et al. (1992), J. Geophys. Res. 97, 5017-5030; from memory.
    """
    return _vosteen(conductivity_25, temperature_degc, 0.0036, 0.0072, 1.007)


def kola2008(conductivity_25: ArrayLike, temperature_degc: ArrayLike) -> Array:
    """Return the conductivity of crystalline rock: k = k0 / (1.001 + T (a - b/k0)).

    As :func:`vosteen2003_sed`, with a = 0.0013, b = 0.0029.

    References
    ----------
    Mottaghy et al. (2008), Int. J. Earth Sci. 97, 435-442; coefficients read in open code.
    """
    return _vosteen(conductivity_25, temperature_degc, 0.0013, 0.0029, 1.001)


LAWS: dict[str, Callable[[ArrayLike, ArrayLike], Array]] = {
    "none": none,
    "vosteen2003_sed": vosteen2003_sed,
    "vosteen2003_cryst": vosteen2003_cryst,
    "halite": halite,
    "sekiguchi_waples": sekiguchi_waples,
    "sekiguchi1984": sekiguchi1984,
    "chapman1984": chapman1984,
    "sass1992": sass1992,
    "kola2008": kola2008,
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


def at_pressure(conductivity: ArrayLike, pressure_mpa: ArrayLike) -> Array:
    """Return conductivity under pressure: (1.095 k - 0.172) p^(0.0088 k - 0.0067).

    Parameters
    ----------
    conductivity : array_like, W/(m K)
        Under no load, 0.5 to 6.
    pressure_mpa : array_like, MPa
        Below 0.1 (the air's) taken as 0.1.

    Returns
    -------
    ndarray, W/(m K)
        Never less than without load.

    References
    ----------
    Fuchs & Förster (2014), Geophys. J. Int., saturated sandstone; coefficients from memory.

    Examples
    --------
    >>> round(float(at_pressure(2.5, 30.0)), 4)
    2.7025
    """
    k = np.asarray(conductivity, float)
    p = np.maximum(np.asarray(pressure_mpa, float), 0.1)
    return np.maximum((1.095 * k - 0.172) * p ** (0.0088 * k - 0.0067), k)


def tilted(dip_deg: ArrayLike, anisotropy: ArrayLike) -> Array:
    """Return vertical conductivity over that across the bedding: cos2 + a sin2.

    Parameters
    ----------
    dip_deg : array_like, degrees
        Of the bedding, 0 where it is flat.
    anisotropy : array_like
        Conductivity along over across the bedding.

    Returns
    -------
    ndarray

    Examples
    --------
    >>> round(float(1.6 * tilted(30.0, 2.4 / 1.6)), 6)
    1.8
    """
    along = np.sin(np.radians(np.asarray(dip_deg, float))) ** 2
    return 1.0 + (np.asarray(anisotropy, float) - 1.0) * along


def _vosteen(
    conductivity_25: ArrayLike, temperature_degc: ArrayLike, a: float, b: float, at_0: float = 0.99
) -> Array:
    k25, t = np.asarray(conductivity_25, float), np.asarray(temperature_degc, float)
    c = at_0 + REFERENCE_DEGC * a
    root = (c * k25) ** 2 - 4.0 * REFERENCE_DEGC * b * k25
    known = root > 0.0  # of very poor conductors the law has no k0: k stays as it is
    k0 = np.where(known, 0.5 * (c * k25 + np.sqrt(np.maximum(root, 0.0))), 1.0)
    slope = a - b / k0
    at_25 = at_0 + REFERENCE_DEGC * slope
    below = np.maximum(at_0 + t * slope, np.where(slope < 0.0, at_25 / LARGEST_RISE, 0.0))
    return np.where(known, k25 * at_25 / np.where(known, below, 1.0), k25 + 0.0 * t)
