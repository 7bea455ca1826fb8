"""Steady temperature down layered columns, with heat production and k of depth and temperature.

Solves d/dz (k dT/dz) = -A with T and the heat flow given at the top, many columns at once.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]
Conductivity = Callable[[int, Array, Array], Array]
Production = Callable[[int, Array], Array]


def march(
    surface_degc: ArrayLike,
    heat_flow_w_m2: ArrayLike,
    thickness_m: ArrayLike,
    conductivity: Conductivity,
    produced: Production | None = None,
    step_m: float = 25.0,
) -> tuple[Array, Array]:
    """March temperature down the layers: dT/dz = (q_top - produced(z)) / k(z, T).

    Fourth-order Runge-Kutta within each layer, layers stepped top down, all columns at once.

    Parameters
    ----------
    surface_degc : array_like, shape (n,), degC
        Temperature at the top.
    heat_flow_w_m2 : array_like, shape (n,), W/m2
        Heat flow at the top, positive up.
    thickness_m : array_like, shape (m,) or (n, m), m
        Thickness of the layers.
    conductivity : callable
        ``(layer, depth below the layer's top (n,) m, temperature (n,) degC)`` to W/(m K), (n,).
    produced : callable, optional
        ``(layer, depth below the layer's top (n,) m)`` to the heat produced between the layer's
        top and there, (n,) W/m2; default none.
    step_m : float, m
        Largest step.

    Returns
    -------
    temperature_degc : ndarray, shape (n, m + 1)
        At the tops of the layers and the base of the last.
    heat_flow_w_m2 : ndarray, shape (n, m + 1)

    Examples
    --------
    Two kilometres of salt below a heat flow of 65 mW/m2 (k 6, no heat production):

    >>> temperature, _ = march([10.0], [0.065], [2000.0], lambda i, z, t: np.full(1, 6.0))
    >>> round(float(temperature[0, 1]), 3)
    31.667
    """
    top, flow = np.broadcast_arrays(
        np.atleast_1d(np.asarray(surface_degc, float)), np.asarray(heat_flow_w_m2, float)
    )
    thickness = np.broadcast_to(
        np.asarray(thickness_m, float), (len(top), np.shape(thickness_m)[-1])
    )
    temperatures, flows = [top], [flow]
    for layer in range(thickness.shape[1]):
        h = thickness[:, layer]
        below = np.zeros_like(h) if produced is None else produced(layer, h)
        temperatures.append(
            _layer(layer, temperatures[-1], flows[-1], h, conductivity, produced, step_m)
        )
        flows.append(flows[-1] - below)
    return np.stack(temperatures, axis=1), np.stack(flows, axis=1)


def isotherm_depth(depth_m: Array, temperature_degc: Array, isotherm_degc: float) -> Array:
    """Find the depth where columns first reach a temperature, linear between the given depths.

    Parameters
    ----------
    depth_m : ndarray, shape (m,), m
        Increasing.
    temperature_degc : ndarray, shape (n, m), degC
    isotherm_degc : float, degC

    Returns
    -------
    ndarray, shape (n,), m
        NaN where the column is nowhere as hot, or hotter already at the top.
    """
    reached = temperature_degc >= isotherm_degc
    found = reached.any(axis=1) & ~reached[:, 0]
    below = np.clip(reached.argmax(axis=1), 1, len(depth_m) - 1)
    row = np.arange(len(temperature_degc))
    upper, lower = temperature_degc[row, below - 1], temperature_degc[row, below]
    with np.errstate(divide="ignore", invalid="ignore"):
        share = (isotherm_degc - upper) / (lower - upper)
        depth = depth_m[below - 1] + share * (depth_m[below] - depth_m[below - 1])
    return np.where(found, depth, np.nan)


def _layer(
    layer: int,
    top: Array,
    flow: Array,
    thickness: Array,
    conductivity: Conductivity,
    produced: Production | None,
    step_m: float,
) -> Array:
    """Return the temperature at the base of one layer."""

    def slope(z: Array, t: Array) -> Array:
        lost = 0.0 if produced is None else produced(layer, z)
        return (flow - lost) / conductivity(layer, z, t)

    steps = max(int(np.ceil(thickness.max(initial=0.0) / step_m)), 1)
    dz = thickness / steps
    temperature = top
    for i in range(steps):
        z = i * dz
        a = slope(z, temperature)
        b = slope(z + 0.5 * dz, temperature + 0.5 * dz * a)
        c = slope(z + 0.5 * dz, temperature + 0.5 * dz * b)
        d = slope(z + dz, temperature + dz * c)
        temperature = temperature + dz / 6.0 * (a + 2.0 * b + 2.0 * c + d)
    return temperature
