"""Kriging by tiles against kriging with all data at once."""

import numpy as np
import pytest

from basinheat.geostat.bands import predict_bands
from basinheat.geostat.engine_global import GlobalKriging
from basinheat.geostat.engine_tiles import TileKriging
from basinheat.geostat.engines import engine_class
from basinheat.geostat.models import MODELS, Covariance
from basinheat.geostat.threads import threads_granted

SIDE = 4e5
EXPONENTIAL = Covariance.from_natural("exponential", 25.0, 3e4, 4.0)  # range a quarter of the map


def clustered(n, seed=1):
    """Four wells of five in fields of 6 km, the others spread; errors of a factor two."""
    rng = np.random.default_rng(seed)
    centres = rng.uniform(0, SIDE, (max(4, n // 60), 2))
    held = int(0.8 * n)
    fields = centres[rng.integers(0, len(centres), held)] + rng.normal(0, 6e3, (held, 2))
    xy = np.mod(np.vstack([fields, rng.uniform(0, SIDE, (n - held, 2))]), SIDE)
    wave = 8 * np.sin(xy[:, 0] / 2e4) + 6 * np.cos(xy[:, 1] / 3e4)
    error = np.exp(rng.normal(np.log(4.0), 0.7, n))
    values = 60 + wave + rng.normal(size=n) * np.sqrt(4.0 + error)
    loadings = np.column_stack(
        [
            2 + 0.5 * rng.normal(size=n),  # a common bias
            2 * np.sin(xy[:, 0] / 8e4),  # smooth: takes after the field
            rng.normal(size=n),
            3.0 * (rng.random(n) < 0.3),  # of some wells
        ]
    )
    return xy, values + loadings @ [0.8, -1.0, 0.5, -0.4], error, loadings


@pytest.mark.parametrize("trend", ["none", "linear"])
@pytest.mark.parametrize("model", MODELS)
@pytest.mark.parametrize("ratio", [1.0, 0.4])
def test_with_all_data_around_each_tile_it_is_global_kriging(model, trend, ratio):
    rng = np.random.default_rng(3)
    xy, values, error = rng.uniform(0, 1e5, (90, 2)), rng.normal(60, 8, 90), rng.uniform(1, 9, 90)
    prior = np.cov(rng.normal(size=(3, 9)))
    given = (xy, Covariance(model, 25.0, 6e4, 1.0, 30.0, ratio), error, trend)
    sources = (rng.normal(2, 1, (90, 3)), rng.normal(size=3), prior)
    places = rng.uniform(-2e4, 1.2e5, (1000, 2))
    exact = GlobalKriging(*given, *sources).solve(values)
    tiles = TileKriging(*given, *sources, nearest=90, most=90).solve(values)
    ours, theirs = tiles.predict(places), exact.predict(places, nearest=0)
    np.testing.assert_allclose(ours.mean, theirs.mean, rtol=1e-10)
    np.testing.assert_allclose(ours.variance, theirs.variance, rtol=1e-9)
    np.testing.assert_allclose(ours.cross, theirs.cross, atol=1e-10)
    for told, expected in zip(tiles.amplitudes(), exact.amplitudes(), strict=True):
        np.testing.assert_allclose(told, expected, atol=1e-10)
    for told, expected in zip(tiles.coefficients(), exact.coefficients(), strict=True):
        np.testing.assert_allclose(told, expected, rtol=1e-7, atol=1e-12)
    columns = rng.normal(size=(90, 2))
    carried = tiles.carry(columns, places), exact.carry(columns, places)
    np.testing.assert_allclose(*carried, atol=1e-9)


def test_an_external_drift_of_places():
    rng = np.random.default_rng(4)
    xy, places = rng.uniform(0, 1e5, (80, 2)), rng.uniform(0, 1e5, (50, 2))
    values, covariate, there = rng.normal(size=80), rng.normal(size=80), rng.normal(size=50)
    exact = GlobalKriging(xy, EXPONENTIAL, 1.0, covariate).solve(values)
    tiles = TileKriging(xy, EXPONENTIAL, 1.0, covariate, nearest=80).solve(values)
    ours, theirs = tiles.predict(places, there), exact.predict(places, there)
    np.testing.assert_allclose(ours.mean, theirs.mean, atol=1e-10)
    np.testing.assert_allclose(ours.variance, theirs.variance, rtol=1e-10)


@pytest.fixture(scope="module")
def large():
    """5,000 wells, the exact answer without and with shared sources, and places."""
    xy, values, error, loadings = clustered(5000)
    places = np.random.default_rng(6).uniform(0, SIDE, (1500, 2))
    exact = {
        name: GlobalKriging(xy, EXPONENTIAL, error, loadings=given).solve(values)
        for name, given in (("plain", None), ("sources", loadings))
    }
    told = {name: engine.predict(places, nearest=0) for name, engine in exact.items()}
    return (xy, values, error, loadings), places, exact, told


@pytest.mark.parametrize("cell_m", [20.0, 400.0, 2000.0])
@pytest.mark.parametrize("name", ["plain", "sources"])
def test_tiles_equal_all_data_to_a_twentieth_of_sigma(large, name, cell_m):
    """The project's own promise: mean off by 0.03 sigma rms, 0.05 at most, for cells as a rule."""
    (xy, values, error, loadings), places, _, told = large
    given = loadings if name == "sources" else None
    tiles = TileKriging(xy, EXPONENTIAL, error, loadings=given).solve(values)
    prediction, exact = tiles.predict(places, apart_m=cell_m), told[name]
    off = (prediction.mean - exact.mean) / np.sqrt(exact.variance)
    assert np.sqrt(np.mean(off**2)) < 0.03
    assert np.abs(off).max() < 0.05
    sigma = np.sqrt(prediction.variance / exact.variance)
    assert 0.99 < sigma.min() <= sigma.max() < 1.01
    np.testing.assert_allclose(prediction.cross, exact.cross, atol=0.05)


def test_sources_are_estimated_as_by_all_data(large):
    (xy, values, error, loadings), _, exact, _ = large
    tiles = TileKriging(xy, EXPONENTIAL, error, loadings=loadings).solve(values)
    (mean, covariance), (told, expected) = tiles.amplitudes(), exact["sources"].amplitudes()
    sigma = np.sqrt(np.diag(expected))
    assert np.abs((mean - told) / sigma).max() < 0.1
    np.testing.assert_allclose(np.sqrt(np.diag(covariance)), sigma, rtol=0.03)


@pytest.mark.parametrize("sources", [False, True])
def test_no_seams_between_tiles(large, sources):
    """Jumps between neighbouring cells are no larger across the edges of tiles than inside."""
    (xy, values, error, loadings), _, _, _ = large
    given = loadings if sources else None
    tiles = TileKriging(xy, EXPONENTIAL, error, loadings=given).solve(values)
    cell, count = 300.0, 192
    # cells that begin where a tile does: edges lie at every 16th cell, and at cuts of tiles too
    corner = tiles._tree.box[0, :2] + 16 * cell * np.round(
        (2e5 - tiles._tree.box[0, :2]) / 16 / cell
    )
    east, north = (c + (np.arange(count) + 0.5) * cell for c in corner)
    places = np.dstack(np.meshgrid(east, north)).reshape(-1, 2)
    prediction = tiles.predict(places, apart_m=cell)
    sigma = np.sqrt(prediction.variance).reshape(count, count)
    jumps = np.abs(np.diff(prediction.mean.reshape(count, count), axis=1)) / sigma[:, 1:]
    edge = np.arange(1, count) % 16 == 0
    at, inside = jumps[:, edge], jumps[:, ~edge]
    assert np.quantile(at, 0.99) < 1.15 * np.quantile(inside, 0.99)
    assert at.max() < 1.15 * inside.max()


def test_leaving_out_equals_all_data():
    xy, values, error, loadings = clustered(1500, seed=2)
    exact = GlobalKriging(xy, EXPONENTIAL, error, "none", loadings).solve(values)
    tiles = TileKriging(xy, EXPONENTIAL, error, "none", loadings).solve(values)
    _, labels = np.unique((xy // 4e4).astype(int), axis=0, return_inverse=True)
    for ours, theirs in (
        (tiles.leave_one_out(), exact.leave_one_out()),
        (tiles.leave_block_out(labels), exact.leave_block_out(labels)),
    ):
        off = (ours[0] - theirs[0]) / np.sqrt(theirs[1])
        assert np.sqrt(np.mean(off**2)) < 0.03
        np.testing.assert_allclose(np.sqrt(ours[1]), np.sqrt(theirs[1]), rtol=0.03)


def test_one_label_leaves_nothing_to_predict_from():
    xy, values, error, _ = clustered(100)
    tiles = TileKriging(xy, EXPONENTIAL, error).solve(values)
    predicted, variance = tiles.leave_block_out(np.zeros(100))
    assert np.isnan(predicted).all()
    assert np.isinf(variance).all()


def test_every_place_sees_its_nearest():
    xy, values, error, _ = clustered(3000)
    tiles = TileKriging(xy, EXPONENTIAL, error, nearest=40, most=80, beyond=8).solve(values)
    used = tiles.data_used(np.random.default_rng(0).uniform(0, SIDE, (2000, 2)))
    assert used.min() >= 40
    assert used.max() <= 88


def test_same_bytes_on_any_number_of_threads(monkeypatch):
    xy, values, error, loadings = clustered(2500)
    places = np.random.default_rng(0).uniform(0, SIDE, (4000, 2))
    found = []
    for count in (1, 2, 5):
        monkeypatch.setenv("OMP_NUM_THREADS", str(count))
        assert threads_granted() == count
        engine = TileKriging(xy, EXPONENTIAL, error, "linear", loadings).solve(values)
        told = vars(engine.predict(places)).values()
        parts = (*told, *engine.amplitudes(), *engine.leave_one_out())
        found.append(b"".join(part.tobytes() for part in parts))
    assert found[0] == found[1] == found[2]


def test_bands_are_the_whole_map():
    xy, values, error, loadings = clustered(1200)
    engine = TileKriging(xy, EXPONENTIAL, error, "linear", loadings).solve(values)
    east, north = np.arange(130) * 2e3 + 1e3, 3e5 - np.arange(150) * 2e3
    whole = engine.predict(np.dstack(np.meshgrid(east, north)).reshape(-1, 2), apart_m=2e3)
    bands = list(predict_bands(engine, east, north, rows=48))
    assert [row for row, _ in bands] == [0, 48, 96, 144]
    for name in ("mean", "variance", "cross"):
        parts = np.concatenate([getattr(band, name) for _, band in bands])
        np.testing.assert_allclose(parts, getattr(whole, name), rtol=1e-9, atol=1e-12)


def test_the_number_of_data_chooses_the_engine():
    assert engine_class("auto", 5000) is GlobalKriging
    assert engine_class("auto", 5001) is TileKriging
    assert engine_class("global", 9999) is GlobalKriging
    assert engine_class("tiles", 10) is TileKriging
