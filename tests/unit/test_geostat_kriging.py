"""Kriging with shared sources: against dense joint conditioning, limits, invariance, refusals."""

import tracemalloc

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from threadpoolctl import threadpool_limits

from basinheat.errors import UserError
from basinheat.geostat.drift import Drift
from basinheat.geostat.engine_global import GlobalKriging
from basinheat.geostat.engine_pykrige import PyKrigeKriging
from basinheat.geostat.models import Covariance

COVARIANCE = Covariance("matern15", 60.0, 6e4, 5.0, azimuth_deg=20, ratio=0.7)


def basin(n=30, cells=12, m=3, seed=0):
    rng = np.random.default_rng(seed)
    return {
        "xy": rng.uniform(0, 1e5, (n, 2)),
        "y": rng.normal(62, 9, n),
        "error": rng.uniform(1, 9, n),
        "h": rng.normal(0, 4, (n, m)),
        "mean": rng.normal(0, 1, m),
        "prior": np.cov(rng.normal(size=(m, 9))),
        "xy0": rng.uniform(-2e4, 1.2e5, (cells, 2)),
    }


def engine(b, trend="none", covariance=COVARIANCE):
    return GlobalKriging(b["xy"], covariance, b["error"], trend, b["h"], b["mean"], b["prior"])


def joint_blup(b, trend):
    """Best linear unbiased prediction of (field at cells, amplitudes), written out densely.

    Weights solve the bordered system [[K, F], [F^T, 0]]; the error covariance is then
    T - W C - C^T W^T + W K W^T. Chiles & Delfiner (2012), section 3.4.
    """
    n, cells, m = len(b["xy"]), len(b["xy0"]), len(b["mean"])
    _, f = Drift.of(b["xy"], trend)
    f0 = Drift.of(b["xy"], trend)[0].matrix(b["xy0"])
    nugget = COVARIANCE.nugget
    k = COVARIANCE.between(b["xy"], b["xy"]) + np.diag(b["error"] + nugget)
    k += b["h"] @ b["prior"] @ b["h"].T
    targets = np.vstack([COVARIANCE.between(b["xy0"], b["xy"]), b["prior"] @ b["h"].T])
    own = np.zeros((cells + m, cells + m))
    own[:cells, :cells] = COVARIANCE.between(b["xy0"], b["xy0"]) + nugget * np.eye(cells)
    own[cells:, cells:] = b["prior"]
    p = f.shape[1]
    bordered = np.block([[k, f], [f.T, np.zeros((p, p))]])
    right = np.hstack([targets, np.vstack([f0, np.zeros((m, p))])])
    w = np.linalg.solve(bordered, right.T)[:n].T
    mean = w @ (b["y"] - b["h"] @ b["mean"]) + np.r_[np.zeros(cells), b["mean"]]
    return mean, own - w @ targets.T - targets @ w.T + w @ k @ w.T


@pytest.mark.parametrize("trend", ["none", "linear"])
def test_field_and_amplitudes_equal_joint_conditioning(trend):
    b = basin()
    kriging = engine(b, trend).solve(b["y"])
    prediction, (mean, covariance) = kriging.predict(b["xy0"]), kriging.amplitudes()
    expected, errors = joint_blup(b, trend)
    cells = len(b["xy0"])
    np.testing.assert_allclose(prediction.mean, expected[:cells], rtol=1e-9)
    np.testing.assert_allclose(mean, expected[cells:], rtol=1e-9)
    np.testing.assert_allclose(prediction.variance, np.diag(errors)[:cells], rtol=1e-9)
    np.testing.assert_allclose(prediction.cross, errors[:cells, cells:], atol=1e-9)
    np.testing.assert_allclose(covariance, errors[cells:, cells:], atol=1e-9)


def test_sources_known_exactly_are_a_known_shift():
    b = basin()
    known = {**b, "prior": np.zeros((3, 3))}
    shifted = GlobalKriging(b["xy"], COVARIANCE, b["error"]).solve(b["y"] - b["h"] @ b["mean"])
    prediction, plain = engine(known).solve(b["y"]).predict(b["xy0"]), shifted.predict(b["xy0"])
    np.testing.assert_allclose(prediction.mean, plain.mean, rtol=1e-12)
    np.testing.assert_allclose(prediction.variance, plain.variance, rtol=1e-12)
    np.testing.assert_array_equal(prediction.cross, 0)


def test_a_source_common_to_all_wells_only_shifts_the_level():
    """The drift's constant takes it up: its amplitude stays at the prior, the map's sigma grows."""
    b = {**basin(m=1), "h": np.ones((30, 1)), "mean": np.zeros(1), "prior": np.array([[4.0]])}
    kriging = engine(b).solve(b["y"])
    mean, covariance = kriging.amplitudes()
    plain = GlobalKriging(b["xy"], COVARIANCE, b["error"]).solve(b["y"]).predict(b["xy0"])
    prediction = kriging.predict(b["xy0"])
    assert mean[0] == pytest.approx(0, abs=1e-9)
    assert covariance[0, 0] == pytest.approx(4, rel=1e-9)
    np.testing.assert_allclose(prediction.mean, plain.mean, rtol=1e-10)
    np.testing.assert_allclose(prediction.variance, plain.variance + 4, rtol=1e-9)
    np.testing.assert_allclose(prediction.cross, -4, rtol=1e-9)


def test_signal_has_no_micro_scale_variance():
    b = basin()
    kriging = engine(b).solve(b["y"])
    point, signal = kriging.predict(b["xy0"]), kriging.predict(b["xy0"], target="signal")
    np.testing.assert_allclose(point.variance - signal.variance, COVARIANCE.nugget, rtol=1e-10)


def test_exact_data_are_honoured():
    b = basin()
    smooth = Covariance("exponential", 60.0, 6e4)
    at = GlobalKriging(b["xy"], smooth).solve(b["y"]).predict(b["xy"])
    np.testing.assert_allclose(at.mean, b["y"], rtol=1e-12)
    np.testing.assert_allclose(at.variance, 0, atol=1e-10)
    own = GlobalKriging(b["xy"], COVARIANCE).solve(b["y"]).at_data()
    np.testing.assert_allclose(own.mean, b["y"], rtol=1e-12)
    np.testing.assert_allclose(own.variance, 0, atol=1e-10)


@pytest.mark.parametrize("trend", ["none", "linear"])
def test_leaving_out_equals_brute_force(trend):
    b = basin()
    labels = np.arange(30) // 4
    kriging = engine(b, trend).solve(b["y"])
    for groups, (predicted, variance) in (
        (np.arange(30), kriging.leave_one_out()),
        (labels, kriging.leave_block_out(labels)),
    ):
        for group in np.unique(groups):
            out = groups == group
            rest = {name: b[name][~out] for name in ("xy", "y", "error", "h")}
            again = engine({**b, **rest}, trend).solve(rest["y"])
            field, (mean, cov) = again.predict(b["xy"][out]), again.amplitudes()
            h = b["h"][out]
            shared = np.einsum("ij,jk,ik->i", h, cov, h) + 2 * (h * field.cross).sum(1)
            np.testing.assert_allclose(predicted[out], field.mean + h @ mean, rtol=1e-9)
            np.testing.assert_allclose(
                variance[out], field.variance + shared + b["error"][out], rtol=1e-9
            )


def test_what_the_others_cannot_tell_is_not_a_number():
    b = basin(n=3, m=0)
    kriging = GlobalKriging(b["xy"], COVARIANCE, b["error"], "linear").solve(b["y"])
    predicted, variance = kriging.leave_one_out()
    assert np.isnan(predicted).all()
    assert np.isinf(variance).all()


@settings(max_examples=25, deadline=None)
@given(
    st.floats(-3, 7),
    st.floats(0, 360),
    st.floats(-2, 2),
    st.sampled_from(["none", "linear"]),
    st.integers(0, 5),
)
def test_turning_moving_and_rescaling_the_map_changes_nothing(power, turn, move, trend, seed):
    b, size = basin(seed=seed), 10.0**power / 1e5
    a = np.deg2rad(turn)
    matrix = size * np.array([[np.cos(a), -np.sin(a)], [np.sin(a), np.cos(a)]])  # clockwise by a
    changed = {**b, "xy": b["xy"] @ matrix + move * 10.0**power}
    xy0 = b["xy0"] @ matrix + move * 10.0**power
    turned = Covariance("matern15", 60.0, 6e4 * size, 5.0, azimuth_deg=20 + turn, ratio=0.7)
    plain = engine(b, trend).solve(b["y"]).predict(b["xy0"])
    other = engine(changed, trend, turned).solve(b["y"]).predict(xy0)
    np.testing.assert_allclose(other.mean, plain.mean, rtol=1e-8)
    np.testing.assert_allclose(other.variance, plain.variance, rtol=1e-8)


@settings(max_examples=25, deadline=None)
@given(st.floats(-3, 7), st.integers(0, 5))
def test_the_unit_of_the_values_does_not_matter(power, seed):
    b, unit = basin(seed=seed), 10.0**power
    scaled = {**b, "h": b["h"] * unit, "error": b["error"] * unit**2}
    covariance = Covariance("matern15", 60 * unit**2, 6e4, 5 * unit**2, 20, 0.7)
    plain = engine(b).solve(b["y"]).predict(b["xy0"])
    other = engine(scaled, "none", covariance).solve(b["y"] * unit).predict(b["xy0"])
    np.testing.assert_allclose(other.mean, plain.mean * unit, rtol=1e-9)
    np.testing.assert_allclose(other.variance, plain.variance * unit**2, rtol=1e-9)
    np.testing.assert_allclose(other.cross, plain.cross * unit, rtol=1e-7, atol=1e-9 * unit)


def test_weights_make_the_mean_and_sum_to_one():
    b = basin()
    kriging = engine(b).solve(b["y"])
    weights = kriging.weights(b["xy0"])
    np.testing.assert_allclose(weights.sum(1), 1, rtol=1e-12)
    mean = weights @ (b["y"] - b["h"] @ b["mean"])
    np.testing.assert_allclose(mean, kriging.predict(b["xy0"]).mean, rtol=1e-12)


def test_wells_at_one_place_act_as_their_mean():
    """Two data with errors 2 s^2 at one place = one datum, their mean, with s^2."""
    b = basin(m=1)
    smooth = Covariance("exponential", 60.0, 6e4)
    twice = np.vstack([b["xy"], b["xy"][:1]])
    values, error = np.r_[b["y"], 70.0], np.r_[b["error"], b["error"][0]]
    merged, half = b["y"].copy(), b["error"].copy()
    merged[0], half[0] = (b["y"][0] + 70) / 2, b["error"][0] / 2
    two = GlobalKriging(twice, smooth, error).solve(values).predict(b["xy0"])
    one = GlobalKriging(b["xy"], smooth, half).solve(merged).predict(b["xy0"])
    np.testing.assert_allclose(two.mean, one.mean, rtol=1e-10)
    np.testing.assert_allclose(two.variance, one.variance, rtol=1e-9)


def test_exact_wells_at_one_place_are_named():
    xy = np.array([(0, 0), (1e4, 0), (500123.25, 9.0), (500123.25, 9.0)])
    with pytest.raises(UserError, match=r"wells 2 and 3 .*500123\.25.*error variance"):
        GlobalKriging(xy, Covariance("exponential", 9.0, 1e5))


def test_gaussian_without_nugget_is_refused_rather_than_wrong():
    xy = np.random.default_rng(0).uniform(0, 1e4, (60, 2))
    with pytest.raises(UserError, match="nugget"):
        GlobalKriging(xy, Covariance("gaussian", 9.0, 1e5))


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"xy": [(0, 0), (np.nan, 1), (5, 5)]}, "coordinate"),
        ({"error_variance": [1, -1, 1]}, "error variance"),
        ({"error_variance": [1, np.nan, 1]}, "error variance"),
        ({"trend": "quadratic"}, "kriging.drift"),
        ({"trend": [1.0, 1.0, 1.0]}, "constant or collinear"),
        ({"trend": [1.0, np.nan, 1.0]}, "missing at a well"),
        ({"trend": "linear", "xy": [(0, 0), (1, 1), (2, 2)]}, "collinear"),
        ({"trend": "linear", "xy": [(0, 0), (1, 1)], "error_variance": None}, "2 wells"),
        ({"xy": np.empty((0, 2)), "error_variance": None}, "0 wells"),
        ({"loadings": [[1.0], [np.inf], [0.0]]}, "loading"),
    ],
)
def test_faults_are_lines(change, words):
    good = {"xy": [(0, 0), (9, 1), (5, 5)], "error_variance": [1, 1, 1]}
    with pytest.raises(UserError, match=words):
        GlobalKriging(covariance=Covariance("exponential", 1.0, 10.0), **{**good, **change})


def test_a_missing_value_is_a_line():
    kriging = GlobalKriging([(0, 0), (9, 1)], Covariance("exponential", 1.0, 10.0))
    with pytest.raises(UserError, match="value of a well is missing"):
        kriging.solve([1.0, np.nan])


def test_one_well_and_constant_values():
    one = GlobalKriging([(0, 0)], Covariance("exponential", 4.0, 10.0)).solve([50.0])
    far = one.predict([(0, 0), (1e6, 0)])
    np.testing.assert_allclose(far.mean, 50)
    np.testing.assert_allclose(far.variance, [0, 8])  # the level itself is known to sill only
    b = basin()
    flat = GlobalKriging(b["xy"], COVARIANCE, b["error"]).solve(np.full(30, 62.0))
    np.testing.assert_allclose(flat.predict(b["xy0"]).mean, 62, rtol=1e-13)


def test_no_cells():
    b = basin()
    prediction = engine(b).solve(b["y"]).predict(np.empty((0, 2)))
    assert prediction.mean.shape == (0,)
    assert prediction.cross.shape == (0, 3)


def test_blocks_change_nothing_and_bound_the_memory():
    b = basin(n=200, cells=20_000)
    kriging = engine(b).solve(b["y"])
    whole = kriging.predict(b["xy0"], block=20_000)
    tracemalloc.start()
    parts = kriging.predict(b["xy0"], block=500)
    _, peak = tracemalloc.get_traced_memory()
    tracemalloc.stop()
    np.testing.assert_allclose(parts.mean, whole.mean, rtol=1e-12)
    np.testing.assert_allclose(parts.variance, whole.variance, rtol=1e-10)
    outputs, block = 8 * 20_000 * (1 + 1 + 3), 8 * 500 * 200
    assert peak < 2 * outputs + 5 * block  # n x cells would be 40 blocks


def test_same_bytes_on_one_core_and_two():
    b = basin(n=400, cells=3000)

    def everything():
        kriging = engine(b).solve(b["y"])
        prediction = kriging.predict(b["xy0"])
        parts = (*vars(prediction).values(), *kriging.leave_one_out(), *kriging.amplitudes())
        return b"".join(part.tobytes() for part in parts)

    with threadpool_limits(1):
        one = everything()
    with threadpool_limits(2):
        two = everything()
    assert one == two


def test_stated_uncertainty_is_right_on_a_known_truth():
    """Field, amplitudes and errors drawn from the model itself: standardised errors are unit."""
    rng, z, za = np.random.default_rng(5), [], []
    for _ in range(60):
        b = basin(n=40, cells=10, seed=rng.integers(1 << 30))
        everywhere = np.vstack([b["xy"], b["xy0"]])
        root = np.linalg.cholesky(COVARIANCE.between(everywhere, everywhere) + 5 * np.eye(50))
        field = 60 + root @ rng.normal(size=50)
        a = b["mean"] + np.linalg.cholesky(b["prior"]) @ rng.normal(size=3)
        y = field[:40] + b["h"] @ a + rng.normal(size=40) * np.sqrt(b["error"])
        kriging = engine(b).solve(y)
        prediction, (mean, covariance) = kriging.predict(b["xy0"]), kriging.amplitudes()
        z.extend((field[40:] - prediction.mean) / np.sqrt(prediction.variance))
        za.extend((a - mean) / np.sqrt(np.diag(covariance)))
    assert np.mean(np.square(z)) == pytest.approx(1, abs=0.25)
    assert np.mean(np.square(za)) == pytest.approx(1, abs=0.4)
    assert abs(np.mean(z)) < 0.25


def test_pykrige_refuses_what_it_cannot_do():
    xy, covariance = [(0, 0), (0, 0), (5, 5)], Covariance("exponential", 1.0, 10.0)
    with pytest.raises(UserError, match="one well at a place"):
        PyKrigeKriging(xy, covariance)
    with pytest.raises(UserError, match="drift none or linear"):
        PyKrigeKriging(xy, covariance, trend=[1.0, 2.0, 3.0])


def test_columns_carried_ride_on_the_weights():
    rng = np.random.default_rng(11)
    xy, places = rng.uniform(0, 1e5, (40, 2)), rng.uniform(0, 1e5, (7, 2))
    engine = GlobalKriging(xy, Covariance("matern15", 4.0, 5e4, 0.3), rng.uniform(0.1, 1, 40))
    columns = rng.normal(size=(40, 3))
    assert engine.carry(columns, places) == pytest.approx(engine.weights(places) @ columns)
