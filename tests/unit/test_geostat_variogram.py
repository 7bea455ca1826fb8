"""Experimental variogram: all pairs, errors and shared sources taken out; its fit."""

import numpy as np
import pytest

from basinheat.errors import UserError
from basinheat.geostat import pairs as pairs_module
from basinheat.geostat.models import Covariance
from basinheat.geostat.variogram import Experimental, experimental, fit_wls


def brute(xy, values, edges, known):
    """Loop over pairs: Matheron's estimator by its definition."""
    sums = np.zeros((3, len(edges) - 1))
    for i in range(len(xy)):
        for j in range(i):
            h = np.hypot(*(xy[i] - xy[j]))
            lag = max(np.searchsorted(edges, h) - 1, 0)
            if h <= edges[-1]:
                sums[:, lag] += 1, h, 0.5 * (values[i] - values[j]) ** 2 - known[i, j]
    return sums[0], sums[1] / sums[0], np.maximum(sums[2] / sums[0], 0)


def test_all_pairs_with_errors_and_sources_taken_out(monkeypatch):
    monkeypatch.setattr(pairs_module, "_PAIRS_AT_A_TIME", 200)  # many blocks
    rng = np.random.default_rng(0)
    xy, values = rng.uniform(0, 1e5, (70, 2)), rng.normal(0, 9, 70)
    error, h = rng.uniform(1, 9, 70), rng.normal(size=(70, 2))
    prior = np.array([[2.0, 0.4], [0.4, 1.0]])
    apart = h[:, None] - h
    known = 0.5 * (error[:, None] + error) + 0.5 * np.einsum("ijk,kl,ijl->ij", apart, prior, apart)
    edges = np.linspace(0, 6e4, 8)
    found = experimental(xy, values, error, None, edges, "matheron", h, prior)
    count, lag, gamma = brute(xy, values, edges, known)
    np.testing.assert_array_equal(found.pairs, count)
    np.testing.assert_allclose(found.lag_m, lag, rtol=1e-12)
    np.testing.assert_allclose(found.gamma, gamma, rtol=1e-9)


@pytest.mark.parametrize("estimator", ["cressie", "matheron"])
@pytest.mark.parametrize("edges", [np.linspace(0, 6e4, 8), np.array([500.0, 900, 7e3, 8e3, 2e5])])
def test_the_compiled_loop_sums_the_same_pairs(monkeypatch, estimator, edges):
    rng = np.random.default_rng(5)
    xy = np.vstack([rng.uniform(0, 1e5, (600, 2)), rng.normal(3e4, 300, (200, 2))])
    xy[5] = xy[3]  # no distance at all
    xy[7] = xy[3] + [edges[-1], 0]  # just in reach
    errors, loadings = rng.uniform(1, 9, 800), rng.normal(size=(800, 2))
    given = (xy, rng.normal(0, 9, 800), errors, None, edges, estimator, loadings)
    plain = experimental(*given)
    monkeypatch.setattr(pairs_module, "_COMPILED", 0)
    fast = experimental(*given)
    np.testing.assert_array_equal(fast.pairs, plain.pairs)
    np.testing.assert_allclose(fast.lag_m, plain.lag_m, rtol=1e-12)
    np.testing.assert_allclose(fast.gamma, plain.gamma, rtol=1e-9)


@pytest.mark.parametrize("estimator", ["cressie", "matheron", "dowd"])
def test_a_known_truth_on_average(estimator):
    truth, rng, ratios = Covariance("exponential", 20.0, 6e4, 5.0), np.random.default_rng(1), []
    xy, error = rng.uniform(0, 1.5e5, (150, 2)), rng.uniform(0, 6, 150)
    root = np.linalg.cholesky(truth.between(xy, xy) + np.diag(5 + error))
    for values in (root @ rng.normal(size=(150, 40))).T:
        found = experimental(xy, values, error, max_lag=5e4, bins=5, estimator=estimator)
        ratios.append(found.gamma / truth.semivariance(found.lag_m))
    np.testing.assert_allclose(np.mean(ratios, axis=0), 1, atol=0.2)


def test_the_robust_estimators_stand_a_wrong_datum():
    rng = np.random.default_rng(2)
    xy, values = rng.uniform(0, 1e5, (200, 2)), rng.normal(0, 1, 200)
    values[:4] += 30
    sills = {e: experimental(xy, values, estimator=e).gamma.mean() for e in ("cressie", "dowd")}
    assert experimental(xy, values, estimator="matheron").gamma.mean() > 10
    assert sills["cressie"] < 2
    assert sills["dowd"] < 1.5


def test_default_lags_have_pairs_and_are_no_narrower_than_wells_lie_apart():
    rng = np.random.default_rng(3)
    for n in (4, 12, 40, 300):
        xy = rng.uniform(0, 1e5, (n, 2))
        found = experimental(xy, rng.normal(size=n))
        assert len(found.pairs) <= 15
        assert found.lag_m.max() <= 0.5 * np.hypot(*np.ptp(xy, axis=0))
        assert (found.pairs >= 30).all() or len(found.pairs) == 1
        median = experimental(xy, rng.normal(size=n), estimator="dowd")
        np.testing.assert_array_equal(median.pairs, found.pairs)


def test_wells_at_one_place_count_in_the_first_lag():
    found = experimental([(0, 0), (0, 0), (100, 0)], [1.0, 3.0, 9.0], None, 200, 2, "matheron")
    np.testing.assert_array_equal(found.pairs, [3])
    assert found.gamma[0] == pytest.approx((4 + 64 + 36) / 6)


@pytest.mark.parametrize("model", ["exponential", "spherical", "gaussian", "matern15", "cubic"])
@pytest.mark.parametrize("weights", ["cressie", "pairs_over_lag", "pairs"])
def test_the_fit_returns_the_model_that_made_the_points(model, weights):
    truth = Covariance(model, 3e-3, 7e4, 5e-4)
    h = np.linspace(4e3, 1.2e5, 15)
    points = Experimental(h, truth.semivariance(h), np.arange(100, 1600, 100))
    found = fit_wls(points, model, weights)
    assert found.sill == pytest.approx(truth.sill, rel=1e-4)
    assert found.range_m == pytest.approx(truth.range_m, rel=1e-4)
    assert found.nugget == pytest.approx(truth.nugget, rel=1e-4)


def test_hard_cases():
    flat = experimental([(0, 0), (1, 0), (5, 5)], [2.0, 2.0, 2.0])
    assert fit_wls(flat).sill == 0
    one = experimental([(0, 0), (100, 0)], [1.0, 3.0], max_lag=200, estimator="matheron")
    assert one.gamma[0] == 2
    fitted = fit_wls(one)
    assert fitted.semivariance(100.0) == pytest.approx(2, rel=1e-3)
    with pytest.raises(UserError, match="one place"):
        experimental([(3, 3), (3, 3)], [1.0, 2.0])
    with pytest.raises(UserError, match="longest lag"):
        fit_wls(experimental([(0, 0), (100, 0)], [1.0, 3.0], max_lag=50))
