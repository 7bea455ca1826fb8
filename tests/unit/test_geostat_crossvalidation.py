"""Scores of stated uncertainties, blocks, and the baselines kriging must beat."""

import json

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.stats import kstest, norm

from basinheat.geostat.crossvalidation import baselines, blocks, predict_plainly
from basinheat.geostat.scores import scores


def test_right_uncertainties_score_as_they_should():
    """Expected values of standard normal residuals."""
    rng = np.random.default_rng(0)
    std = rng.uniform(1, 9, 100_000)
    judged = scores(std * rng.normal(size=100_000), std)
    assert judged["msdr"] == pytest.approx(1, abs=0.02)
    assert judged["median_sdr"] == pytest.approx(0.455, abs=0.01)
    assert judged["pit_mean"] == pytest.approx(0.5, abs=0.005)
    for share in (50, 80, 90, 95):
        assert judged[f"coverage_{share}"] == pytest.approx(share / 100, abs=0.006)


def test_scores_by_their_definitions():
    rng = np.random.default_rng(1)
    left, std = rng.normal(1, 3, 12), rng.uniform(1, 4, 12)
    judged = scores(left, std)
    assert judged["bias"] == pytest.approx(left.mean())
    assert judged["rmse"] == pytest.approx(np.sqrt((left**2).mean()))
    assert judged["mae"] == pytest.approx(np.abs(left).mean())
    assert judged["pit_ks"] == pytest.approx(kstest(left / std, "norm").statistic)
    limit = kstest(left / std, "norm", method="asymp").pvalue
    assert judged["pit_ks_p"] == pytest.approx(limit, rel=1e-9)
    # the CRPS is the integral of (forecast CDF - step at the observation)^2
    gaps = [
        quad(lambda t, s=s: norm.cdf(t, 0, s) ** 2, -np.inf, r)[0]
        + quad(lambda t, s=s: norm.sf(t, 0, s) ** 2, r, np.inf)[0]
        for r, s in zip(left, std, strict=True)
    ]
    assert judged["crps"] == pytest.approx(np.mean(gaps), rel=1e-6)


def test_what_cannot_be_judged_is_left_out_and_counted():
    judged = scores([1.0, np.nan, 2.0, 3.0], [1.0, 1.0, np.inf, 0.0])
    assert judged["n"] == 1
    empty = scores([], [])
    assert empty["n"] == 0
    assert set(empty) == set(judged)
    assert json.loads(json.dumps(empty))["rmse"] is None


def test_blocks_are_squares():
    labels = blocks([(0, 0), (9, 9), (11, 0), (0, 25), (8, 3)], 10)
    assert labels[0] == labels[1] == labels[4]
    assert len(set(labels[[0, 2, 3]])) == 3
    moved = blocks(np.array([(0, 0), (9, 9), (11, 0), (0, 25), (8, 3)]) + 5e5, 10)
    np.testing.assert_array_equal(labels, moved)


def test_baselines_equal_leaving_out_one_by_one():
    rng = np.random.default_rng(2)
    xy, values = rng.uniform(0, 1e5, (25, 2)), rng.normal(60, 5, 25)
    found = predict_plainly(xy, values, neighbours=6)
    for i in range(25):
        rest = np.delete(np.arange(25), i)
        distance = np.hypot(*(xy[rest] - xy[i]).T)
        order = np.argsort(distance)[:6]
        weights = distance[order] ** -2.0
        plane = np.column_stack([np.ones(24), xy[rest]])
        level = np.linalg.lstsq(plane, values[rest], rcond=None)[0]
        expected = {
            "mean": values[rest].mean(),
            "nearest_well": values[rest][order[0]],
            "inverse_distance": weights @ values[rest][order] / weights.sum(),
            "linear_trend": level @ [1, *xy[i]],
        }
        for name, value in expected.items():
            assert found[name][i] == pytest.approx(value, rel=1e-9)
    judged = baselines(xy, values, 6)
    assert judged["mean"] == pytest.approx(np.sqrt(np.mean((values - found["mean"]) ** 2)))


def test_wells_that_share_a_place_predict_one_another():
    xy = np.array([(0, 0), (0, 0), (0, 0), (1e4, 0), (0, 1e4)])
    found = predict_plainly(xy, [1.0, 2.0, 3.0, 9.0, 9.0])
    assert found["inverse_distance"][0] == pytest.approx(2.5)
    assert found["nearest_well"][0] in (2.0, 3.0)
    crowd = predict_plainly(np.zeros((30, 2)), np.arange(30.0), neighbours=4)
    assert np.isfinite(crowd["nearest_well"]).all()
    assert (crowd["nearest_well"] != np.arange(30.0)).all()


def test_few_wells():
    assert baselines([(0, 0)], [5.0]) == {
        "mean": None,
        "nearest_well": None,
        "inverse_distance": None,
        "linear_trend": None,
    }
    two = baselines([(0, 0), (1, 0)], [5.0, 7.0])
    assert two["nearest_well"] == pytest.approx(2)
    assert two["linear_trend"] is None
    line = baselines([(0, 0), (1, 1), (2, 2), (3, 3)], [1.0, 2.0, 3.0, 4.0])
    assert line["linear_trend"] is None
