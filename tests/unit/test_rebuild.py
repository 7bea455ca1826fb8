"""Rebuilt columns against conduction solved another way, and their variance against sampling."""

from dataclasses import replace

import numpy as np
import pytest
from scipy.integrate import solve_ivp

from basinheat.rebuild import (
    HeatFlow,
    Sources,
    Structure,
    at_depths,
    isotherm_depths,
    rebuild_columns,
)

EDGES = np.arange(0.0, 4001.0, 250.0)
NONE = Sources(np.zeros(1), np.zeros((1, 1)), np.zeros(1), np.zeros(1), np.zeros(0, int))


def structure(n_cells=1, slope=0.0, heat=1.0, k=2.5, std=0.0, sources=0):
    shape = (n_cells, len(EDGES) - 1)
    return Structure(
        edges=EDGES,
        ln_conductivity=np.full(shape, np.log(k)),
        variance=np.full(shape, std**2),
        heat_production=np.full(shape, heat),
        reference_temperature=np.full(shape, 25.0),
        temperature_slope=np.full(shape, slope),
        loadings=np.zeros((*shape, sources)),
        vertical_correlation=np.full(len(EDGES) - 1, np.exp(-0.5)),
    )


def flow(value=65.0, variance=0.0, m=1):
    value = np.atleast_1d(value)
    return HeatFlow(value, np.full(len(value), variance), np.zeros((len(value), m)))


def test_constant_conductivity_is_the_closed_form():
    # T = T0 + (q z - A z^2 / 2) / k: Carslaw & Jaeger (1959); Turcotte & Schubert, Geodynamics
    columns = rebuild_columns(np.array([10.0]), np.zeros(1), flow(), structure(), NONE)
    z = EDGES
    expected = 10 + (65e-3 * z - 1e-6 * z**2 / 2) / 2.5
    assert columns.temperature[0] == pytest.approx(expected, rel=1e-12)


def test_conductivity_that_falls_with_temperature_agrees_with_an_ode_solver():
    def rate(z, t):
        return (65e-3 - 1e-6 * z) / (2.5 * np.exp(-1e-3 * (t - 25.0)))

    solved = solve_ivp(rate, (0, 4000), [10.0], t_eval=EDGES, rtol=1e-10, atol=1e-10).y[0]
    columns = rebuild_columns(np.array([10.0]), np.zeros(1), flow(), structure(slope=-1e-3), NONE)
    assert columns.temperature[0] == pytest.approx(solved, abs=0.01)


def test_variance_agrees_with_sampling_the_column():
    rng = np.random.default_rng(3)
    n, m = 40_000, 4
    root = rng.normal(0, 1, (m + 1, m + 1)) * 0.5
    joint = root @ root.T + 0.1 * np.eye(m + 1)
    joint[0] *= 5.0  # heat flow varies by mW/m2, amplitudes by about 1
    joint[:, 0] *= 5.0
    shift = np.array([0.7, 0.0, 0.0, 0.0])
    share = np.array([0.0, 0.0, 0.0, 0.3])
    rock = np.array([1, 2])
    base = structure(slope=-1e-3, std=0.08, sources=2)
    base = replace(base, loadings=rng.uniform(0, 0.1, base.loadings.shape))
    heat_flow = HeatFlow(np.array([65.0]), joint[:1, 0], joint[:1, 1:])
    sources = Sources(np.array([0.3, -0.2, 0.4, 0.1]), joint[1:, 1:], shift, share, rock)
    columns = rebuild_columns(np.array([10.0]), np.array([0.5]), heat_flow, base, sources)

    draw = rng.multivariate_normal(np.zeros(m + 1), joint, n)
    amplitude = sources.mean + draw[:, 1:]
    lag = np.abs(np.subtract.outer(np.arange(len(EDGES) - 1), np.arange(len(EDGES) - 1)))
    error = rng.multivariate_normal(np.zeros(len(EDGES) - 1), 0.08**2 * np.exp(-0.5 * lag), n)
    ln_k = base.ln_conductivity + amplitude[:, rock] @ base.loadings[0].T + error
    surface = 10.0 + amplitude[:, 0] * 0.7 + rng.normal(0, np.sqrt(0.5), n)
    sampled = rebuild_columns(
        surface,
        np.zeros(n),
        flow(65.0 + draw[:, 0]),
        replace(
            structure(n, slope=-1e-3),
            ln_conductivity=ln_k,
            heat_production=np.tile(1.0 + 0.3 * amplitude[:, 3:], len(EDGES) - 1),
        ),
        NONE,
    )
    assert np.sqrt(columns.variance[0]) == pytest.approx(sampled.temperature.std(0), rel=0.03)
    rise = (sampled.temperature - sampled.temperature[:, :1]).std(0)
    assert np.sqrt(columns.variance_above_surface[0]) == pytest.approx(rise, rel=0.03)


def test_isotherm_and_slice_agree():
    columns = rebuild_columns(np.array([10.0]), np.ones(1), flow(), structure(), NONE)
    depth, std = isotherm_depths(columns, 80.0)
    assert at_depths(columns, columns.temperature, depth[:, None])[0, 0] == pytest.approx(80.0)
    # sigma of depth = sigma of temperature over the gradient: 1 K over about 24 K/km
    assert std[0] == pytest.approx(1.0 / (65e-3 - 1e-6 * depth[0]) * 2.5, rel=0.01)


def test_an_isotherm_out_of_reach_has_no_depth():
    columns = rebuild_columns(np.array([10.0]), np.ones(1), flow(), structure(), NONE)
    for degc in (5.0, 500.0):
        assert np.isnan(isotherm_depths(columns, degc)).all()


def test_slices_never_cross():
    rng = np.random.default_rng(5)
    n = 200
    rock = structure(n, slope=-1e-3)
    rock = replace(rock, ln_conductivity=rng.normal(np.log(2.5), 0.6, rock.ln_conductivity.shape))
    columns = rebuild_columns(
        np.full(n, 10.0), np.zeros(n), flow(rng.uniform(30, 120, n)), rock, NONE
    )
    assert (np.diff(columns.temperature, axis=1) > 0).all()
