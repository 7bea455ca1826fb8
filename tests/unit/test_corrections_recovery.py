"""Physics and algebra of the recovery: limits, closed forms, and what the basin teaches."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from mud_cooling import left_on_axis

from basinheat.corrections.recovery.cooling import Block, CoolingLaw, deviance, recover
from basinheat.corrections.recovery.learning import learn_law
from basinheat.corrections.recovery.response import Mud, Response, response, simulate
from basinheat.corrections.recovery.times import TimePrior, cooling_left

MUD = Mud(1.65, 0.30)
LAW = CoolingLaw(2.0, 0.35, 0.12, 1.0)


def test_two_simulations_agree():
    """Steps of time on cells equal in ln r (tests) against modes on other cells (library)."""
    since = np.array([5.0, 12.0, 26.0])
    for capacity, conductivity in ((1.0, 1.0), (1.65, 0.3), (1.4, 0.4)):
        steps = left_on_axis(4.0, since, 0.108, 1.2e-6, capacity, conductivity)
        table = Response(Mud(capacity, conductivity))(np.array(4.0), since, np.array(0.108), 1.2e-6)
        assert table == pytest.approx(steps, abs=2e-3)


def test_late_recovery_is_that_of_a_line_source():
    """Long after, what is left falls as 1/Δt (Carslaw & Jaeger 1959, instantaneous line source)."""
    left = simulate(MUD, np.array([0.1]), np.array([400.0, 800.0]))[0]
    assert left[1] / left[0] == pytest.approx(0.5, rel=0.01)


@given(st.floats(0.5, 20.0), st.floats(3.0, 100.0), st.floats(1.05, 2.0))
def test_less_is_left_later_and_more_after_longer_circulation(t_c, since, factor):
    left = response(MUD)
    base = left(np.array(t_c), np.array(since), np.array(0.108), 1e-6)
    assert 0.0 < base < 1.0
    assert left(np.array(t_c), np.array(since * factor), np.array(0.108), 1e-6) < base
    assert left(np.array(t_c * factor), np.array(since), np.array(0.108), 1e-6) > base
    assert left(np.array(t_c), np.array(since), np.array(0.108 * factor), 1e-6) > base


def test_only_dimensionless_times_matter():
    left = response(MUD)
    one = left(np.array(4.0), np.array(10.0), np.array(0.1), 1e-6)
    assert left(np.array(16.0), np.array(40.0), np.array(0.2), 1e-6) == pytest.approx(one)
    assert left(np.array(2.0), np.array(5.0), np.array(0.1), 2e-6) == pytest.approx(one)


def block(rise, left, cov=None, std=1.0):
    """Block of sets from lists."""
    rise, left = np.atleast_2d(rise).astype(float), np.atleast_2d(left).astype(float)
    cov = np.zeros((*left.shape, left.shape[1])) if cov is None else cov
    return Block(np.arange(len(left)), rise, np.full(left.shape, std), left, cov)


def test_closed_form_against_dense_algebra():
    """The GLS of a set, written with full matrices (Aitken 1936)."""
    rng = np.random.default_rng(0)
    left = np.sort(rng.uniform(0.1, 0.9, (5, 3)), axis=1)[:, ::-1]
    root = 0.03 * rng.normal(size=(5, 3, 3))
    sets = block(rng.uniform(40.0, 90.0, (5, 3)), left, root @ root.transpose(0, 2, 1))
    ref = rng.uniform(50.0, 100.0, 5)
    found = recover(sets, ref, LAW)
    total = 0.0
    for i in range(5):
        D, K = left[i], sets.left_cov[i]
        c2 = (LAW.offset_k + LAW.slope * ref[i]) ** 2
        V = (LAW.scatter * ref[i]) ** 2 * (np.outer(D, D) + K) + c2 * K + np.eye(3)
        X, z, P = 1 - LAW.slope * D, sets.rise_k[i] + LAW.offset_k * D, np.linalg.inv(V)
        assert found.rise_k[i] == pytest.approx(X @ P @ z / (X @ P @ X))
        assert found.variance_k2[i] == pytest.approx(1 / (X @ P @ X))
        assert found.weights[i] == pytest.approx(P @ X / (X @ P @ X))
        r = z - X * found.rise_k[i]
        assert found.misfit[i] == pytest.approx(r @ P @ r)
        total += np.linalg.slogdet(V)[1] + np.log(P.sum()) + r @ P @ r
    assert deviance(sets, ref, LAW) == pytest.approx(total)


def test_exact_readings_are_recovered_exactly():
    """Readings made by the law itself give the formation temperature back, for any number."""
    rise, left = 80.0, np.array([0.6, 0.4, 0.3])
    readings = rise - left * (LAW.offset_k + LAW.slope * rise)
    for n in (1, 2, 3):
        found = recover(block(readings[:n], left[:n]), np.array([75.0]), LAW)
        assert found.rise_k[0] == pytest.approx(rise)
        assert found.scatter_k2[0] < found.variance_k2[0]


@given(st.lists(st.floats(0.02, 0.95), min_size=1, max_size=5, unique=True), st.floats(0.05, 0.5))
def test_a_hotter_last_reading_never_cools_the_estimate(left, scatter):
    law = CoolingLaw(2.0, 0.35, scatter, 1.0)
    left = np.sort(np.array(left))[::-1]
    found = recover(block(np.full(left.size, 60.0), left), np.array([80.0]), law)
    assert found.weights[0, -1] > 0.0
    assert found.weights[0] @ (1 - law.slope * left) == pytest.approx(1.0)


@given(st.floats(0.05, 0.9), st.floats(0.01, 0.3))
def test_the_same_single_reading_later_needs_less(left, less):
    both = recover(block([[60.0], [60.0]], [[left], [left * (1 - less)]]), np.full(2, 70.0), LAW)
    assert both.rise_k[0] > both.rise_k[1] > 60.0


PRIOR = TimePrior(
    float(np.log(4.0)), float(np.log(1.8)), np.full(30, 4.0),
    np.linspace(4.0, 20.0, 30)[:, None] * np.array([1.0, 1.5]), 30,
)  # fmt: skip


def left_of(circulation_h, since_h, prior=PRIOR):
    """Mean and covariance of the share left in an 8 1/2 inch hole."""
    since = np.atleast_2d(since_h).astype(float)
    radius = np.full(len(since), 0.108)
    return cooling_left(
        np.full(len(since), circulation_h), since, radius, prior, response(MUD), 1e-6
    )


def test_unknown_times_widen():
    nan = np.nan
    known, no_spread = left_of(4.0, [8.0, 14.0])
    assert (no_spread == 0.0).all()
    guessed, spread = left_of(nan, [8.0, 14.0])
    assert (np.diagonal(spread[0]) > 0).all()
    assert guessed[0] == pytest.approx(known[0], abs=0.05)
    untimed, wide = left_of(nan, [nan, nan])
    assert (np.diagonal(wide[0]) > np.diagonal(spread[0])).all()
    expected = response(MUD)(np.array(4.0), PRIOR.since_h, np.array(0.108), 1e-6)
    assert untimed[0] == pytest.approx(expected.mean(0)), "the mean over the basin's own times"
    assert wide[0] == pytest.approx(np.cov(expected.T, bias=True))


def test_without_any_noted_time_a_prior_serves():
    nothing = TimePrior(float(np.log(4.0)), 0.6, np.zeros(0), np.zeros((0, 1)), 0)
    mean, cov = left_of(np.nan, [np.nan, np.nan], nothing)
    assert 0.2 < mean[0, 1] < mean[0, 0] < 0.8
    assert (np.linalg.eigvalsh(cov[0]) > -1e-12).all()


def test_partly_timed_sets_use_both():
    mean, cov = left_of(4.0, [8.0, np.nan])
    assert mean[0, 0] == pytest.approx(left_of(4.0, [8.0])[0][0, 0])
    assert cov[0, 0, 0] == cov[0, 0, 1] == 0.0
    assert cov[0, 1, 1] > 0.0


@pytest.mark.parametrize("n", [0, 5, 400])
def test_learning_with_none_few_and_many_sets(n):
    rng = np.random.default_rng(3)
    truth = CoolingLaw(6.0, 0.28, 0.08, 0.7)
    rise = rng.uniform(30.0, 110.0, n)
    left = np.column_stack([rng.uniform(0.5, 0.8, n), rng.uniform(0.2, 0.45, n)])
    cooling = truth.offset_k + truth.slope * rise + truth.scatter * rise * rng.normal(size=n)
    readings = rise[:, None] - left * cooling[:, None] + 0.7 * rng.normal(size=(n, 2))
    learned = learn_law([block(readings, left)] if n else [], rise, 60.0)
    level = learned.law.expected_k(np.array([60.0]))[0] / (6.0 + 0.28 * 60.0)
    assert abs(np.log(level)) < 3 * learned.level_std
    assert learned.taught.size >= 0.98 * n
    limits = {0: (0.3, 0.8), 5: (0.05, 0.5), 400: (0.0, 0.04)}[n]
    assert limits[0] <= learned.level_std <= limits[1], "the less was learned, the less is known"


def test_contradicting_sets_do_not_teach():
    rng = np.random.default_rng(5)
    left = np.tile([0.6, 0.3], (60, 1))
    readings = 80.0 - left * 30.0 + rng.normal(size=(60, 2))
    readings[::12, 1] -= 40.0  # falls with time: wrong times or depth
    learned = learn_law([block(readings, left)], np.full(60, 80.0), 80.0)
    assert learned.n_contradicting == 5
    assert learned.law.expected_k(np.array([80.0]))[0] == pytest.approx(30.0, rel=0.1)
