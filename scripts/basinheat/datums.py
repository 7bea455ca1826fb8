"""Depth datums: from depth below the rig floor to depth below ground or sea floor."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]

# Rig floor above the ground, and above sea level offshore, where nobody noted it (common
# practice: 3-8 m onshore, about 25 m offshore; METHODS B).
ONSHORE_M, ONSHORE_STD_M = 5.0, 5.0
OFFSHORE_M, OFFSHORE_STD_M = 25.0, 10.0
# Beyond these a noted height is taken for a slip of unit or datum (common practice, no source).
TALLEST_ONSHORE_M = 30.0
TALLEST_OFFSHORE_M = 100.0
ROUNDING_M = 1.0  # a floor noted this far below the ground is rounding


@dataclass(frozen=True)
class Datums:
    """Height of the depth datums of wells.

    Parameters
    ----------
    height_m : ndarray, (n,)
        Datum above ground onshore, above the sea floor offshore, m.
    std_m : ndarray, (n,)
        Its standard uncertainty, m: 0 where noted.
    ground_m, datum_m : ndarray, (n,)
        Ground (sea floor) and datum above sea level, m; NaN where neither was noted.
    water_m : ndarray, (n,)
        Water depth, m; 0 onshore.
    assumed, suspect, from_ground : ndarray of bool, (n,)
        Height assumed; noted but not credible, so assumed; water depth taken from the ground.
    """

    height_m: Array
    std_m: Array
    ground_m: Array
    datum_m: Array
    water_m: Array
    assumed: Flags
    suspect: Flags
    from_ground: Flags


def heights(ground_m: Array, datum_m: Array, water_m: Array) -> Datums:
    """Return the height of depth datums above ground or sea floor.

    Onshore KB - GL; offshore KB + water depth. So depth below ground or sea floor is the true
    vertical depth below the datum less this height.

    Parameters
    ----------
    ground_m, datum_m : ndarray, (n,)
        Ground and depth datum above sea level, m; NaN where not noted.
    water_m : ndarray, (n,)
        Water depth, m, positive; 0 or NaN onshore.

    Returns
    -------
    Datums

    Notes
    -----
    A ground below sea level more than a mast's height below its rig floor lies under water: no
    rig on land stands so tall. Where only the sea floor is noted, the water depth follows from it.

    Examples
    --------
    >>> one = heights(np.array([305.0]), np.array([312.0]), np.array([np.nan]))
    >>> float(2510.0 - one.height_m[0])
    2503.0
    >>> one = heights(np.array([np.nan]), np.array([25.0]), np.array([340.0]))
    >>> float(3200.0 - one.height_m[0])
    2835.0
    """
    water = np.where(water_m > 0.0, water_m, 0.0)
    sunken = (water == 0.0) & (ground_m < 0.0) & (datum_m - ground_m > TALLEST_ONSHORE_M)
    water = np.where(sunken, -ground_m, water)
    offshore = water > 0.0
    ground = np.where(offshore, -water, ground_m)
    floor = np.where(offshore, 0.0, ground)  # what the rig floor is measured from
    tallest = np.where(offshore, TALLEST_OFFSHORE_M, TALLEST_ONSHORE_M)
    usual = np.where(offshore, OFFSHORE_M, ONSHORE_M)
    above = datum_m - floor
    suspect = np.isfinite(above) & ((above < -ROUNDING_M) | (above > tallest))
    assumed = suspect | ~np.isfinite(above)
    above = np.where(assumed, usual, above)
    # The datum is what is doubted; with no ground noted, the ground follows from it.
    no_ground = ~np.isfinite(ground)
    ground = np.where(no_ground, datum_m - usual, ground)
    datum = np.where(assumed & ~no_ground, np.where(offshore, 0.0, ground) + above, datum_m)
    std = np.where(assumed, np.where(offshore, OFFSHORE_STD_M, ONSHORE_STD_M), 0.0)
    return Datums(above + water, std, ground, datum, water, assumed & ~suspect, suspect, sunken)
