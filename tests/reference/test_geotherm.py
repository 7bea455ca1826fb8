"""Heat flow and geotherms against closed forms and outside values.

Rows named F.., G.. are rows of the method notes' check values: numbers computed apart from this
code from the closed form that is written out beside each.
"""

import numpy as np
import pytest

from basinheat import geotherm
from basinheat.conductivity import conditions
from basinheat.gradient import fit_lines
from basinheat.rock.columns import Columns, Parts, at_depths, integrate
from basinheat.rock.slabs import cut

UW = 1e-6


def _one(q_mw, top, h, conductivity, produced=None, step=25.0):
    temperature, flow = geotherm.march([top], [q_mw / 1000], [h], conductivity, produced, step)
    return float(temperature[0, -1]), float(flow[0, -1])


def test_constant_conductivity_and_production():
    """G1: T0 + (q z - A z^2/2)/k; 86.200 degC, and the flux left."""
    t, q = _one(65.0, 10.0, 3000.0, lambda i, z, t: 0 * t + 2.5, lambda i, z: UW * z)
    assert t == pytest.approx(10 + (0.065 * 3000 - UW * 3000**2 / 2) / 2.5, rel=1e-9)
    assert q == pytest.approx(0.062)
    assert t == pytest.approx(86.200, abs=5e-4)  # G1 as printed


def test_exponential_production():
    """G2: A0 2 uW/m3, D 10 km, k 2.5, q 65, T0 10, z 5 km: A(z) = A0 exp(-z/D)."""
    closed = 10 + (0.065 - 2e-6 * 1e4) * 5000 / 2.5 + 2e-6 * 1e8 * (1 - np.exp(-0.5)) / 2.5
    t, _ = _one(
        65.0, 10.0, 5000.0, lambda i, z, t: 0 * t + 2.5, lambda i, z: 0.02 * -np.expm1(-z / 1e4)
    )
    assert closed == pytest.approx(131.47755, rel=1e-7)
    assert t == pytest.approx(131.47755, rel=1e-7)


def test_conductivity_falling_with_temperature():
    """G3: k = 3/(1 + 1.5e-3 T), A 1, q 65, T0 10, z 5 km."""
    t, _ = _one(65.0, 10.0, 5000.0, lambda i, z, t: 3 / (1 + 1.5e-3 * t), lambda i, z: UW * z)
    assert t == pytest.approx(124.43682, rel=1e-7)


def test_conductivity_of_depth_and_temperature():
    """G4: Chapman (1986), k = 3 (1 + 1.5e-6 z)/(1 + 1.5e-3 T), A 1, q 65, T0 10, z 20 km."""
    t, _ = _one(
        65.0,
        10.0,
        20000.0,
        lambda i, z, t: 3 * (1 + 1.5e-6 * z) / (1 + 1.5e-3 * t),
        lambda i, z: UW * z,
    )
    assert t == pytest.approx(497.28436, rel=1e-7)


def test_chapman_1984():
    """G5: k = 2.8 293/(273 + T), q 70, T0 12, z 4 km."""
    t, _ = _one(70.0, 12.0, 4000.0, lambda i, z, t: 2.8 * 293 / (273 + t))
    assert t == pytest.approx(127.9297, rel=1e-6)


def test_sekiguchi_waples():
    """G6: Kirchhoff root of the same law, k20 2.8, q 70, T0 12, z 4 km."""
    k25 = 358 * (1.0227 * 2.8 - 1.882) * (1 / 298.15 - 0.00068) + 1.84
    t, _ = _one(70.0, 12.0, 4000.0, lambda i, z, t: conditions.sekiguchi_waples(k25, t))
    assert t == pytest.approx(117.68808, rel=1e-6)


def test_vosteen_sedimentary():
    """G7: closed form with the printed, rounded k0; ours with the exact one must meet its own."""
    k25, a, b = 2.8, 0.0034, 0.0039
    t, _ = _one(70.0, 12.0, 4000.0, lambda i, z, t: conditions.vosteen2003_sed(k25 + 0 * t, t))
    k0 = np.roots([1.0, -(0.99 + 25 * a) * k25, 25 * b * k25]).max()
    k, slope = k0 / 0.99, (a - b / k0) / 0.99
    closed = ((1 + slope * 12) * np.exp(slope * 0.070 * 4000 / k) - 1) / slope
    assert t == pytest.approx(closed, rel=1e-9)
    assert t == pytest.approx(119.3653, rel=0.004)  # G7
    rounded = 0.54 * k25 + 0.5 * np.sqrt(1.16 * k25**2 - 0.39 * k25)
    t, _ = _one(70.0, 12.0, 4000.0, lambda i, z, t: rounded / (0.99 + t * (a - b / rounded)))
    assert t == pytest.approx(119.3653, rel=1e-7)


def test_salt_leaves_the_rock_below_cool():
    """G8, at 65 mW/m2: 10.83 K/km in salt, 21.67 in sandstone; 2 km of salt: 21.67 K less."""
    base, _ = geotherm.march(
        [10.0, 10.0], [0.065, 0.065], [1000.0, 1000.0], lambda i, z, t: np.array([6.0, 3.0])
    )
    assert np.diff(base[:, :2])[:, 0] == pytest.approx([10.833333, 21.666667], rel=1e-7)
    assert base[1, 2] - base[0, 2] == pytest.approx(21.666667, rel=1e-7)


def test_isotherm_depth():
    """G9: z = (q - sqrt(q^2 - 2 A k dT))/A; k 2.5, A 1, q 65, T0 10: 150 degC at 5628.2896 m."""
    edges = np.arange(0.0, 7001.0, 10.0)
    layers = np.diff(edges)
    temperature, _ = geotherm.march(
        [10.0], [0.065], layers, lambda i, z, t: 0 * t + 2.5, lambda i, z: UW * z
    )
    depth = geotherm.isotherm_depth(edges, temperature, 150.0)
    assert depth == pytest.approx(5628.2896, rel=1e-6)
    assert np.isnan(geotherm.isotherm_depth(edges, temperature, 400.0)).all()


def test_three_layers_sediment_salt_sediment():
    """G10: 1500 m k25 1.8 A 1.3 | 1000 m salt k20 5.5 | 1500 m k25 3.0 A 0.8; q 65, T0 10.

    The rows use the printed, rounded k0 of Vosteen & Schellschmidt and salt k20/(1 + c (T - 20))
    or its like, hence the tolerance; the march itself must meet the closed form of each layer.
    """
    a, b = 0.0034, 0.0039

    def rounded(k25):
        k0 = 0.54 * k25 + 0.5 * np.sqrt(1.16 * k25**2 - 0.39 * k25)
        return k0 / 0.99, (a - b / k0) / 0.99

    salt0 = 5.5 * (1 + 0.00485 * 20)
    laws = [rounded(1.8), (salt0, 0.00485), rounded(3.0)]
    heat = np.array([1.3, 0.0, 0.8]) * UW
    h = np.array([1500.0, 1000.0, 1500.0])
    marched, _ = geotherm.march(
        [10.0],
        [0.065],
        h,
        lambda i, z, t: laws[i][0] / (1 + laws[i][1] * t),
        lambda i, z: heat[i] * z,
    )
    top, flow, closed = 10.0, 0.065, []
    for (k, slope), source, thick in zip(laws, heat, h, strict=True):
        driven = flow * thick - source * thick**2 / 2
        top = ((1 + slope * top) * np.exp(slope * driven / k) - 1) / slope
        flow -= source * thick
        closed.append(top)
    assert marched[0, 1:] == pytest.approx(closed, rel=1e-9)
    assert marched[0, 1:] == pytest.approx([63.9573, 78.001721, 113.66972], rel=1e-6)


# --- heat flow ---

F2_THICKNESS = np.array([500.0, 400.0, 600.0, 500.0])
F2_CONDUCTIVITY = np.array([1.8, 2.5, 3.1, 2.2])


def _layered(heat_uw=(0.0, 0.0, 0.0, 0.0)):
    base = np.cumsum(F2_THICKNESS)
    slabs = cut(np.array([2000.0]), 50.0, np.zeros(4, int), base - F2_THICKNESS, base)
    layer = slabs.layer
    parts = Parts(
        slab=np.arange(len(layer)),
        share=np.ones(len(layer)),
        conductivity_w_mk=F2_CONDUCTIVITY[layer],
        porosity=np.zeros(len(layer)),
        law=np.zeros(len(layer), int),
        heat_production_w_m3=np.asarray(heat_uw)[layer] * UW,
        group=layer,
    )
    return Columns(slabs, parts, 4), base


def test_layered_resistance_and_bullard_slope():
    """F2: h 500, 400, 600, 500 m, k 1.8, 2.5, 3.1, 2.2; noise .4, -.6, .5, -.2 K on q 65, T0 12."""
    columns, base = _layered()
    integrals = integrate(columns, np.array([12.0]), np.array([0.065]))
    resistance, _ = at_depths(columns, integrals, np.zeros(4, int), base)
    total = resistance.sum(1)
    # as printed in the notes; F2R2 is the third
    assert total == pytest.approx([277.778, 437.778, 631.32616, 858.599], rel=1e-6)
    temperature = 12 + 0.065 * total + np.array([0.4, -0.6, 0.5, -0.2])
    line = fit_lines(np.zeros(4, int), 1, total, temperature, np.ones(4))
    residual = temperature - line.intercept - line.slope * total
    scale = np.sqrt((residual**2).sum() / 2)
    assert line.slope * 1000 == pytest.approx(64.667181, rel=1e-6)  # F2a
    assert line.intercept == pytest.approx(12.208507, rel=1e-6)  # F2c
    std = np.sqrt(np.diagonal(line.covariance[0])) * scale
    assert std == pytest.approx([0.85587189, 1.4443297e-3], rel=1e-4)  # F2d, F2b


def test_layered_temperature_with_heat_production():
    """F3: A 1.2, 1.0, 0.6, 1.5 uW/m3, T0 12, q 65; the flux that is left below is 62.89 mW/m2."""
    columns, base = _layered((1.2, 1.0, 0.6, 1.5))
    integrals = integrate(columns, np.array([12.0]), np.array([0.065]))
    resistance, radiogenic = at_depths(columns, integrals, np.zeros(4, int), base)
    temperature = 12 + 0.065 * resistance.sum(1) - radiogenic.sum(1)
    assert temperature == pytest.approx([29.972222, 40.244222, 52.59648, 66.9749], rel=1e-6)
    left = 0.065 - integrals.production.sum()
    assert left * 1000 == pytest.approx(62.89)  # F3q
    assert integrals.production.sum() * 1000 == pytest.approx(2.11)  # F3d


def test_interval_heat_flow_error():
    """F1: (s_q/q)^2 = (s_G/G)^2 + (s_k/k)^2; 33.3 K over 1090 m at k 2.6: 79.43 mW/m2, 21.2 %."""
    each = 0.175 * 33.3 / np.sqrt(2)  # so that s_G/G is 0.175, as in row F1s
    line = fit_lines(
        np.zeros(2, int), 1, np.array([1.42, 2.51]), np.array([0.0, 33.3]), np.full(2, each)
    )
    assert 2.6 * line.slope == pytest.approx(79.43, abs=0.005)
    relative = np.sqrt(line.covariance[0, 1, 1]) / line.slope
    assert np.hypot(0.12, relative[0]) == pytest.approx(0.21219095, rel=1e-7)
