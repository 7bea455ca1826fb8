"""Compiled loops against the plain code, and against scipy's tree."""

import numpy as np
import pytest
from scipy.spatial import cKDTree

from basinheat.geostat import engine_global
from basinheat.geostat.dual_kernel import covariance_times
from basinheat.geostat.elimination import eliminate
from basinheat.geostat.engine_global import GlobalKriging
from basinheat.geostat.kernels import covariances, exp2_of_negative, numbers_of
from basinheat.geostat.models import MODELS, Covariance
from basinheat.geostat.search_tree import nearest, plant, within
from basinheat.geostat.squares import in_squares, spacing

NO_LABEL = -1


def test_powers_of_two():
    exponents = -np.linspace(0, 900, 4001)
    powers = [exp2_of_negative(x) for x in exponents]
    np.testing.assert_allclose(powers, np.exp2(exponents), rtol=2e-15)
    assert exp2_of_negative(-1e9) < 1e-300


@pytest.mark.parametrize("model", MODELS)
def test_covariance_along_a_row(model):
    places = np.random.default_rng(0).uniform(0, 1e5, (333, 2))
    covariance = Covariance(model, 7.0, 4e4)
    row = np.empty(len(places))
    x, y = np.ascontiguousarray(places.T)
    covariances(row, x, y, 3e4, 5e4, *numbers_of(covariance))
    plain = covariance.between(places, [(3e4, 5e4)])[:, 0]
    np.testing.assert_allclose(row, plain, rtol=1e-13, atol=1e-13)


@pytest.mark.parametrize(("pivots", "more"), [(1, 2), (6, 3), (37, 5), (64, 1)])
def test_elimination_solves_the_system(pivots, more):
    rng = np.random.default_rng(pivots)
    root = rng.normal(size=(pivots, pivots))
    k, a, b = (
        root @ root.T + np.eye(pivots),
        rng.normal(size=(pivots, more)),
        rng.normal(size=(pivots, 9)),
    )
    d = rng.normal(size=(more, 9))
    table = np.block([[k, a, b], [a.T, np.zeros((more, more)), d]])
    assert eliminate(table, pivots, pivots + more, table.shape[1], 0.0) == -1
    right = table[:, pivots + more :]
    np.testing.assert_allclose(right[pivots:], d - a.T @ np.linalg.solve(k, b), atol=1e-9)
    explained = (right[:pivots] ** 2).sum(0)
    np.testing.assert_allclose(explained, (b * np.linalg.solve(k, b)).sum(0), rtol=1e-9)


def test_elimination_names_the_row_that_others_determine():
    places = np.array([[0.0, 0], [1, 0], [2, 0], [1, 0], [5, 5]])
    table = Covariance("exponential", 1.0, 10.0).between(places, places)
    assert eliminate(table, 5, 5, 5, 1e-13) == 3


@pytest.mark.parametrize("n", [1, 5, 40, 3000])
def test_the_nearest_are_those_of_another_tree(n):
    rng = np.random.default_rng(n)
    xy = np.vstack([rng.normal(0, 1e3, (n // 2, 2)), rng.uniform(-1e5, 1e5, (n - n // 2, 2))])
    tree, order = plant(xy)
    other, k = cKDTree(xy), min(17, n)
    square, found = np.empty(k), np.empty(n, np.int64)
    for place in rng.uniform(-1.2e5, 1.2e5, (50, 2)):
        assert nearest(tree, *place, k, -1.0, 1, NO_LABEL, square, found) == k
        distance = np.atleast_1d(other.query(place, k=k)[0])
        np.testing.assert_allclose(np.sort(np.sqrt(square)), distance, rtol=1e-12)
        radius = 1.001 * distance.max()
        count = within(tree, *place, radius, NO_LABEL, n, found)
        assert sorted(order[found[:count]]) == sorted(other.query_ball_point(place, radius))


def test_a_search_passes_over_a_label_and_what_is_near():
    xy = np.random.default_rng(0).uniform(0, 1e5, (500, 2))
    tree, order = plant(xy)
    label = np.arange(500) % 3
    square, found = np.empty(20), np.empty(20, np.int64)
    nearest(tree._replace(label=label[order]), 5e4, 5e4, 20, 1e8, 1, 2, square, found)
    distance = np.hypot(*(xy - 5e4).T)
    allowed = np.flatnonzero((label != 2) & (distance > 1e4))
    expected = allowed[np.argsort(distance[allowed])[:20]]
    assert sorted(order[found]) == sorted(expected)


def test_every_place_lies_in_one_square():
    east, north = np.meshgrid(np.arange(70) * 500.0, np.arange(45) * 500.0)
    places = np.column_stack([east.ravel(), north.ravel()])
    assert spacing(places) == pytest.approx(500, rel=0.1)
    squares = in_squares(places, np.ones((len(places), 1)), 500.0, np.array([-130.0, 77.0]))
    assert sorted(squares.order) == list(range(len(places)))
    assert np.diff(squares.first).max() == 256
    for s in range(len(squares.half)):
        inside = places[squares.order[squares.first[s] : squares.first[s + 1]]]
        assert (np.abs(inside - squares.centre[s]) <= squares.half[s] * (1 + 1e-9)).all()


def test_sums_over_all_data_are_a_product():
    rng = np.random.default_rng(1)
    xy, places = rng.uniform(0, 1e5, (90, 2)), rng.uniform(0, 1e5, (700, 2))
    covariance, columns = Covariance("matern25", 3.0, 5e4, ratio=0.5), rng.normal(size=(90, 4))
    sums = covariance_times(covariance, places, xy, columns)
    np.testing.assert_allclose(sums, covariance.between(places, xy) @ columns, atol=1e-11)


@pytest.mark.parametrize("target", ["point", "signal"])
def test_a_large_map_has_the_same_mean(monkeypatch, target):
    rng = np.random.default_rng(2)
    xy, places = rng.uniform(0, 1e5, (700, 2)), rng.uniform(0, 1e5, (800, 2))
    covariance, loadings = Covariance("matern15", 9.0, 4e4, 1.0), rng.normal(size=(700, 2))
    engine = GlobalKriging(xy, covariance, 1.0, xy[:, 0] ** 2, loadings)
    engine.solve(rng.normal(size=700))
    exact = engine.predict(places, places[:, 0] ** 2, target=target, nearest=0)
    monkeypatch.setattr(engine_global, "COMPILED", 1)
    large = engine.predict(places, places[:, 0] ** 2, target=target)
    np.testing.assert_allclose(large.mean, exact.mean, rtol=1e-9, atol=1e-10)
    np.testing.assert_allclose(large.cross, exact.cross, atol=1e-10)
    np.testing.assert_allclose(np.sqrt(large.variance), np.sqrt(exact.variance), rtol=0.01)
