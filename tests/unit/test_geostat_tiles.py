"""Global kriging's variance from the data around each place against that from all data."""

import numpy as np
import pytest

from basinheat.geostat.engine_global import GlobalKriging
from basinheat.geostat.models import Covariance


def clustered(n, rng):
    """Half the wells in fields, half spread."""
    centres = rng.uniform(0, 3e5, (max(n // 15, 1), 2))
    fields = centres[rng.integers(0, len(centres), n // 2)] + rng.normal(0, 6e3, (n // 2, 2))
    return np.vstack([fields, rng.uniform(0, 3e5, (n - n // 2, 2))])


def solved(n, model, trend="none", ratio=1.0, seed=0):
    rng = np.random.default_rng(seed)
    xy = clustered(n, rng)
    covariance = Covariance(model, 25.0, 8e4, 0.5, 30.0, ratio)
    errors = np.exp(rng.normal(1.0, 0.7, n))
    loadings = 2.0 + rng.normal(0, 1, (n, 3))
    engine = GlobalKriging(xy, covariance, errors, trend=trend, loadings=loadings)
    return engine.solve(rng.normal(60, 5, n)), rng.uniform(-2e4, 3.2e5, (900, 2))


@pytest.mark.parametrize("trend", ["none", "linear"])
def test_with_all_data_near_it_is_the_exact_variance(trend):
    engine, places = solved(60, "matern15", trend)
    exact, near = engine.predict(places, nearest=0), engine.predict(places, nearest=60)
    assert near.variance == pytest.approx(exact.variance, rel=1e-8)
    assert near.mean == pytest.approx(exact.mean, rel=1e-12)


@pytest.mark.parametrize("model", ["exponential", "spherical", "matern15"])
@pytest.mark.parametrize("ratio", [1.0, 0.4])
def test_data_around_a_place_tell_its_sigma_to_one_percent(model, ratio):
    engine, places = solved(700, model, ratio=ratio)
    exact, near = engine.predict(places, nearest=0), engine.predict(places)
    sigma = np.sqrt(near.variance / exact.variance)
    assert sigma.min() > 0.99
    assert sigma.max() < 1.01
    assert sigma.mean() == pytest.approx(1.0, abs=0.002)
    assert near.mean == pytest.approx(exact.mean, rel=1e-12)
    assert near.cross == pytest.approx(exact.cross, rel=1e-9, abs=1e-12)


def test_few_data_take_the_exact_way():
    engine, places = solved(80, "exponential")
    assert (engine.predict(places).variance == engine.predict(places, nearest=0).variance).all()
