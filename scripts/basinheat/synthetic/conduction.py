"""Steady heat conduction down a column, by integration from the top."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Conductivity = Callable[[int, Array, Array], Array]


def conduct_down(
    surface_degc: Array,
    heat_flow_w_m2: Array,
    nodes_m: Array,
    conductivity: Conductivity,
    production_w_m3: Array,
    step_m: float = 50.0,
) -> Array:
    """Return the temperature at the nodes of columns.

    Integrates dT/dz = q(z) / k(z, T) with q falling by the heat produced above, by the classical
    fourth-order Runge-Kutta rule. Rock changes only at nodes, so no step crosses a contact.

    Parameters
    ----------
    surface_degc : (n,) array, degC
        Temperature at depth 0.
    heat_flow_w_m2 : (n,) array, W/m2
        Heat flow at depth 0, positive upward.
    nodes_m : (n, m) array, m
        Depths, rising along each row.
    conductivity : callable
        ``conductivity(j, depth_m, temperature_degc)`` for the interval that ends at node j.
    production_w_m3 : (n, m) array, W/m3
        Heat production of the interval that ends at each node.
    step_m : float, m
        Longest step.

    Returns
    -------
    (n, m) array, degC
        Temperature at the nodes.
    """
    out = np.empty(nodes_m.shape)
    temperature = np.array(surface_degc, float)
    flow = np.array(heat_flow_w_m2, float)
    top = np.zeros(len(nodes_m))
    for j in range(nodes_m.shape[1]):
        gap = nodes_m[:, j] - top
        heat = production_w_m3[:, j]
        steps = max(1, int(np.ceil(gap.max() / step_m)))
        step = gap / steps

        def slope(below: Array, t: Array, j=j, top=top, flow=flow, heat=heat) -> Array:
            return (flow - heat * below) / conductivity(j, top + below, t)

        for i in range(steps):
            below = i * step
            a = slope(below, temperature)
            b = slope(below + step / 2, temperature + step / 2 * a)
            c = slope(below + step / 2, temperature + step / 2 * b)
            d = slope(below + step, temperature + step * c)
            temperature = temperature + step / 6 * (a + 2 * b + 2 * c + d)
        flow = flow - heat * gap
        top = nodes_m[:, j]
        out[:, j] = temperature
    return out
