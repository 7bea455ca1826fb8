"""Heat flow determined elsewhere: data of the map beside the wells' own."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from basinheat.heatflow.reduction import Floats, Reduced


@dataclass(frozen=True)
class Points:
    """Published heat flow at p places.

    ``heat_flow = true heat flow (1 + shared_share a) + N(0, std²)`` with one unit-normal a for all:
    corrections and conductivities of a compilation err alike.

    Parameters
    ----------
    xy : (p, 2) array, m
        Places.
    heat_flow, std : (p,) array, mW/m2
        Value, and its own standard uncertainty.
    shared_share : (s,) array
        Share of the value that all may be off by alike; s is 1, or 0 where there are no points.
    """

    xy: Floats
    heat_flow: Floats
    std: Floats
    shared_share: Floats

    def take(self, rows: NDArray[np.int64]) -> Points:
        """Return some of the points."""
        return replace(self, xy=self.xy[rows], heat_flow=self.heat_flow[rows], std=self.std[rows])


def beside_wells(reduced: Reduced, points: Points, regional_mw_m2: float) -> Reduced:
    """Append the points to the reduced wells.

    Parameters
    ----------
    reduced : Reduced
        Wells, with m amplitudes, the last of them the points' shared one.
    points : Points
        Points; their loadings rest on one regional heat flow, as those of the wells do.
    regional_mw_m2 : float, mW/m2
        Regional heat flow.
    """
    if len(points.heat_flow) == 0:
        return reduced
    loadings = np.zeros((len(points.heat_flow), reduced.loadings.shape[1]))
    loadings[:, -1] = regional_mw_m2 * points.shared_share[0]
    return replace(
        reduced,
        heat_flow=np.append(reduced.heat_flow, points.heat_flow),
        variance=np.append(reduced.variance, points.std**2),
        loadings=np.vstack([reduced.loadings, loadings]),
    )
