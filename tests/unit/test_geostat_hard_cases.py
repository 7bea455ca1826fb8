"""Data that break kriging programs: each gives a right answer, or one line that says why not."""

import numpy as np
import pytest

from basinheat.errors import UserError
from basinheat.geostat.engine_global import GlobalKriging
from basinheat.geostat.engine_tiles import TileKriging
from basinheat.geostat.models import Covariance

MODEL = Covariance("exponential", 25.0, 6e4, 2.0)
ENGINES = pytest.mark.parametrize("engine", [GlobalKriging, TileKriging])
pytestmark = ENGINES


def bordered(xy, covariance, error, values, places):
    """Ordinary kriging by its textbook system (Chiles & Delfiner 2012, section 3.4)."""
    n = len(xy)
    matrix = np.ones((n + 1, n + 1))
    matrix[:n, :n] = covariance.between(xy, xy) + np.diag(covariance.nugget + error)
    matrix[n, n] = 0
    right = np.vstack([covariance.between(xy, places), np.ones(len(places))])
    weights = np.linalg.solve(matrix, right)
    mean = weights[:n].T @ values
    return mean, covariance.sill + covariance.nugget - (weights * right).sum(0)


def assert_textbook(engine, xy, error, values, places, covariance=MODEL):
    told = engine(xy, covariance, error).solve(values).predict(places)
    mean, variance = bordered(np.asarray(xy, float), covariance, error, values, places)
    np.testing.assert_allclose(told.mean, mean, rtol=1e-8)
    np.testing.assert_allclose(told.variance, variance, rtol=1e-8)


def some(n=40, seed=0):
    rng = np.random.default_rng(seed)
    return rng.uniform(0, 1e5, (n, 2)), rng.uniform(0.5, 4, n), rng.normal(60, 8, n)


PLACES = np.random.default_rng(9).uniform(-2e4, 1.2e5, (300, 2))


@pytest.mark.parametrize("turn", [0.0, 0.7, np.pi / 2])
def test_all_wells_on_a_line(engine, turn):
    along = np.linspace(0, 1e5, 40)
    xy = np.column_stack([along * np.cos(turn), along * np.sin(turn)])
    _, error, values = some()
    assert_textbook(engine, xy, error, values, PLACES)
    with pytest.raises(UserError, match="collinear"):
        engine(xy, MODEL, error, trend="linear")


def test_two_at_one_place_with_different_values(engine):
    xy, error, values = some()
    xy[7], values[7] = xy[3], values[3] + 30
    assert_textbook(engine, xy, error, values, PLACES)
    with pytest.raises(UserError, match=r"wells \d+ and \d+ .*lie 0 m apart"):
        engine(xy, Covariance("exponential", 25.0, 6e4)).solve(values)


def test_five_wells(engine):
    assert_textbook(engine, *some(5), PLACES)


def test_one_well(engine):
    told = engine([(5.0, 5.0)], MODEL, 1.0).solve([50.0]).predict([(5.0, 5.0), (1e7, 0.0)])
    np.testing.assert_allclose(told.mean, 50)
    # the level is known to sill, nugget and error only: 25 + 2 + (25 + 2 + 1) far off
    np.testing.assert_allclose(told.variance, [2 + 3, 55], rtol=1e-9)


def test_constant_values(engine):
    xy, error, _ = some()
    told = engine(xy, MODEL, error).solve(np.full(40, 62.5)).predict(PLACES)
    np.testing.assert_allclose(told.mean, 62.5, rtol=1e-12)


def test_one_well_far_off(engine):
    xy, error, values = some()
    xy[11] = 9e6, -8e6
    assert_textbook(engine, xy, error, values, np.vstack([PLACES, [[9e6, -8e6]], [[4e6, 0]]]))


def test_nothing_but_nugget(engine):
    """Then the map is the mean of the data, weighted by their variances."""
    xy, error, values = some()
    told = engine(xy, Covariance("exponential", 0.0, 6e4, 2.0), error).solve(values)
    weights = 1 / (2.0 + error)
    level = (weights * values).sum() / weights.sum()
    prediction = told.predict(PLACES)
    np.testing.assert_allclose(prediction.mean, level, rtol=1e-10)
    np.testing.assert_allclose(prediction.variance, 2.0 + 1 / weights.sum(), rtol=1e-10)


@pytest.mark.parametrize("unit", [1e-3, 1e7])
def test_small_and_large_values(engine, unit):
    xy, error, values = some()
    scaled = Covariance("exponential", 25.0 * unit**2, 6e4, 2.0 * unit**2)
    assert_textbook(engine, xy, error * unit**2, values * unit, PLACES, scaled)


@pytest.mark.parametrize("what", ["place", "error", "value", "cell"])
def test_what_is_not_a_number_is_a_line(engine, what):
    xy, error, values = some()
    places = PLACES.copy()
    target = {"place": xy[:, 0], "error": error, "value": values, "cell": places[:, 0]}[what]
    target[5] = np.nan
    with pytest.raises(UserError, match=r"row 5"):
        engine(xy, MODEL, error).solve(values).predict(places)


@pytest.mark.parametrize("level", [0.0, 1.0, 4e6])
def test_a_constant_drift_is_a_line(engine, level):
    xy, error, _ = some()
    with pytest.raises(UserError, match="constant or collinear"):
        engine(xy, MODEL, error, trend=np.full(40, level))
