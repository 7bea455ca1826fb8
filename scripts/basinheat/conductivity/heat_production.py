"""Heat produced by radioactive decay in rock."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]

_SLOPE_UW_M3, _ZERO_API, _REACH_API = 0.0158, 0.8, 350.0  # above, the relation was not seen to hold


def from_gamma_ray(gamma_ray_api: ArrayLike) -> Array:
    """Return heat production from a gamma-ray log: A = 0.0158 (GR - 0.8).

    Parameters
    ----------
    gamma_ray_api : array_like, API units

    Returns
    -------
    ndarray, uW/m3
        Not below 0; beyond 350 API that of 350.

    Notes
    -----
    0-350 API, about 10 %; too low in basalt.

    References
    ----------
    Bücker & Rybach (1996), "A simple method to determine heat production from gamma-ray logs",
    Marine and Petroleum Geology 13, 373-375; constants read in the abstract of a later study.

    Examples
    --------
    >>> round(float(from_gamma_ray(100.0)), 3)
    1.567
    """
    above = np.asarray(gamma_ray_api, float) - _ZERO_API
    return _SLOPE_UW_M3 * np.clip(above, 0.0, _REACH_API)


def from_elements(
    density_kg_m3: ArrayLike,
    uranium_ppm: ArrayLike,
    thorium_ppm: ArrayLike,
    potassium_pct: ArrayLike,
) -> Array:
    """Return heat production: A = 1e-5 rho (9.52 U + 2.56 Th + 3.48 K).

    Parameters
    ----------
    density_kg_m3, uranium_ppm, thorium_ppm, potassium_pct : array_like

    Returns
    -------
    ndarray, uW/m3

    References
    ----------
    Rybach (1976, 1988); coefficients from memory, within 3 % of Wangen (2010), who was read.

    Examples
    --------
    >>> round(float(from_elements(2700.0, 3.0, 10.0, 2.5)), 3)
    1.697
    """
    rates = (
        9.52 * np.asarray(uranium_ppm, float)
        + 2.56 * np.asarray(thorium_ppm, float)
        + 3.48 * np.asarray(potassium_pct, float)
    )
    return 1e-5 * np.asarray(density_kg_m3, float) * rates
