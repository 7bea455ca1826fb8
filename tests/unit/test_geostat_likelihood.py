"""REML: against its definition, on known truths, and on the cases that break fits."""

import json

import numpy as np
import pytest
from scipy.linalg import null_space

from basinheat.errors import UserError
from basinheat.geostat.engine_global import GlobalKriging
from basinheat.geostat.likelihood import fit, search
from basinheat.geostat.models import Covariance
from basinheat.geostat.reml import pose
from basinheat.geostat.thinning import spread

TRUTH = Covariance("matern15", 60.0, 8e4, 4.0)


def basin(n, seed=0, truth=TRUTH, errors=True, side=4e5):
    rng = np.random.default_rng(seed)
    xy = rng.uniform(0, side, (n, 2))
    error = rng.uniform(1, 9, n) if errors else np.zeros(n)
    matrix = truth.between(xy, xy) + np.diag(error + truth.nugget + 1e-9)
    return xy, 62 + np.linalg.cholesky(matrix) @ rng.normal(size=n), error


@pytest.mark.parametrize("trend", ["none", "linear"])
def test_deviance_is_the_likelihood_of_contrasts(trend):
    """Patterson & Thompson (1971): the density of A^T y with A^T F = 0, up to ln|F^T F|."""
    xy, values, error = basin(40)
    rng = np.random.default_rng(1)
    h, mean, prior = rng.normal(size=(40, 3)), rng.normal(size=3), np.diag([1.0, 0.5, 2.0])
    kriging = GlobalKriging(xy, TRUTH, error, trend, h, mean, prior).solve(values)
    f = np.ones((40, 1)) if trend == "none" else np.column_stack([np.ones(40), xy])
    k = TRUTH.between(xy, xy) + np.diag(error + TRUTH.nugget) + h @ prior @ h.T
    scale = np.r_[1.0, np.full(f.shape[1] - 1, 1e5)]  # keeps the null space clean
    a = null_space((f / scale).T)
    contrasts, spread_of = a.T @ (values - h @ mean), a.T @ k @ a
    expected = np.linalg.slogdet(spread_of)[1] + np.linalg.slogdet((f / scale).T @ (f / scale))[1]
    expected += 2 * np.log(scale).sum()
    expected += contrasts @ np.linalg.solve(spread_of, contrasts) + len(contrasts) * np.log(
        2 * np.pi
    )
    assert kriging.deviance() == pytest.approx(expected, rel=1e-9)
    constant = len(contrasts) * np.log(2 * np.pi)
    assert kriging.deviance(constants=False) == pytest.approx(expected - constant, rel=1e-9)


def test_the_fit_is_the_best_of_its_neighbourhood():
    xy, values, error = basin(120)
    found, details = fit(xy, values, error, models=("matern15",))
    problem = pose(xy, values, error, None, None, "none", np.arange(120))
    place = problem.place(found)
    best = problem.objective(place, "matern15")
    assert best == pytest.approx(details["deviance"]["matern15"], abs=1e-6)
    for move in 0.15 * np.vstack([np.eye(3), -np.eye(3)]):
        assert problem.objective(place + move, "matern15") > best - 0.01
    # what is minimised is the engine's deviance
    engine = GlobalKriging(xy, found, error).solve(values)
    assert best == pytest.approx(engine.deviance(constants=False), rel=1e-9)


def test_a_known_truth_is_found_within_its_stated_errors():
    misses = []
    for seed in range(4):
        xy, values, error = basin(160, seed)
        found, details = fit(xy, values, error, models=("matern15",))
        for name in ("sill", "range_m", "nugget"):
            std = details["ln_std"][name]
            if std is not None:
                misses.append(np.log(getattr(found, name) / getattr(TRUTH, name)) / std)
    assert len(misses) >= 9
    assert np.sqrt(np.mean(np.square(misses))) < 2.0
    assert max(np.abs(misses)) < 4.0


def test_the_likelier_model_is_chosen():
    rough = Covariance("exponential", 60.0, 1.5e5, 0.0)
    found, details = fit(*basin(200, 3, rough, errors=False))
    assert found.model == "exponential"
    assert details["deviance"]["exponential"] < details["deviance"]["matern15"]


def test_shared_sources_do_not_pass_for_field():
    """A common source of a third of the wells is no short-range sill."""
    xy, values, error = basin(150, 2)
    load = np.where(np.arange(150) % 3 == 0, 15.0, 0.0)[:, None]
    plain, _ = fit(xy, values, error)
    told, _ = fit(xy, values + load[:, 0] * 0.9, error, load, (np.zeros(1), np.eye(1)))
    blind, _ = fit(xy, values + load[:, 0] * 0.9, error)
    assert told.nugget == pytest.approx(plain.nugget, abs=1.0)
    assert blind.nugget > plain.nugget + 10


@pytest.mark.parametrize("power", [-3, 0, 7])
def test_units_of_place_and_value_do_not_matter(power):
    xy, values, error = basin(60, 4)
    unit = 10.0**power
    plain, _ = fit(xy, values, error)
    placed, _ = fit(xy * unit / 1e5 + unit, values, error)
    valued, _ = fit(xy, values * unit, error * unit**2)
    assert placed.range_m * 1e5 / unit == pytest.approx(plain.range_m, rel=0.05)
    assert placed.sill == pytest.approx(plain.sill, rel=0.05)
    assert valued.sill / unit**2 == pytest.approx(plain.sill, rel=0.05)
    assert valued.range_m == pytest.approx(plain.range_m, rel=0.05)


def test_details_are_plain_and_the_fit_repeats():
    xy, values, error = basin(80)
    one, two = fit(xy, values, error), fit(xy, values, error)
    assert one == two
    assert json.loads(json.dumps(one[1])) == one[1]
    assert one[1]["prior"] == "none"


def test_few_wells_get_a_weak_prior_and_say_so():
    xy, values, error = basin(5)
    found, details = fit(xy, values, error)
    diagonal = np.hypot(*np.ptp(xy, axis=0))
    assert "fewer than 15 wells" in details["prior"]
    assert 0.1 * diagonal < found.range_m < 1.5 * diagonal
    regional, _ = fit(xy, values, error, regional_range_m=3e4)
    assert regional.range_m < found.range_m


@pytest.mark.parametrize("as_covariates", [True, False])
def test_a_plane_added_to_the_values_is_drift_and_no_field(as_covariates):
    xy, values, error = basin(60)
    trend = xy if as_covariates else "linear"
    plain, _ = fit(xy, values, error, models=("exponential",), trend=trend)
    tilted, _ = fit(xy, values + xy @ [3e-4, -2e-4], error, models=("exponential",), trend=trend)
    assert tilted.sill == pytest.approx(plain.sill, rel=0.01)
    assert tilted.range_m == pytest.approx(plain.range_m, rel=0.01)


def test_many_wells_are_thinned_and_the_details_say_so():
    xy, values, error = basin(600, 1)
    found, details = fit(xy, values, error, models=("matern15",), n_max=200)
    assert (details["wells"], details["wells_used"]) == (600, 200)
    assert abs(np.log(found.range_m / TRUTH.range_m)) < 4 * details["ln_std"]["range_m"]


def test_pure_nugget_predicts_the_mean():
    rng = np.random.default_rng(6)
    xy, values = rng.uniform(0, 1e5, (150, 2)), rng.normal(60, 3, 150)
    found, _ = fit(xy, values)
    prediction = GlobalKriging(xy, found).solve(values).predict(rng.uniform(0, 1e5, (50, 2)))
    assert np.sqrt(np.mean((prediction.mean - values.mean()) ** 2)) < 0.3 * 3
    assert np.sqrt(prediction.variance).mean() == pytest.approx(3, rel=0.15)


@pytest.mark.parametrize("error", [0.0, 4.0])
@pytest.mark.parametrize("level", [0.0, 1.0, 62.0, 1e7])
def test_constant_values_give_a_constant_map(level, error):
    xy, values = basin(20)[0], np.full(20, level)
    found, details = fit(xy, values, np.full(20, error))
    prediction = GlobalKriging(xy, found, np.full(20, error)).solve(values).predict(xy + 1e3)
    assert "equal" in details["method"]
    np.testing.assert_allclose(prediction.mean, level, rtol=1e-9, atol=1e-9)
    assert (prediction.variance < max(1e-3 * level**2, error + 1e-3)).all()


@pytest.mark.parametrize("equal", [True, False])
def test_exact_wells_at_one_place_are_fitted(equal):
    """Their difference can only be micro-scale: the nugget takes it up, and kriging works."""
    xy, values, _ = basin(60, 7, errors=False)
    twice, doubled = np.vstack([xy, xy[:5]]), np.r_[values, values[:5] + (0.0 if equal else 4.0)]
    found, _ = fit(twice, doubled)
    assert found.nugget > 0
    prediction = GlobalKriging(twice, found).solve(doubled).predict(xy)
    assert np.isfinite(prediction.mean).all()
    assert (prediction.variance > 0).all()


@pytest.mark.parametrize(
    ("xy", "values", "words"),
    [
        ([(0, 0), (1e4, 0)], [1.0, 2.0], "2 wells"),
        ([(7, 7)] * 4, [1.0, 2.0, 3.0, 4.0], "one place"),
        ([(0, 0), (1e4, 0), (0, 1e4)], [1.0, np.nan, 2.0], "value of a well is missing"),
    ],
)
def test_what_cannot_be_fitted_is_a_line(xy, values, words):
    with pytest.raises(UserError, match=words):
        fit(xy, values)


def test_as_many_wells_as_drift_coefficients_are_a_line():
    with pytest.raises(UserError, match="3 wells tell the 3 coefficients"):
        fit([(0, 0), (1e4, 0), (0, 1e4)], [1.0, 2.0, 4.0], trend="linear")


def test_wells_on_a_line_and_exactly_linear_values():
    x = np.linspace(0, 1e5, 30)
    xy = np.column_stack([x, np.zeros(30)])
    found, _ = fit(xy, 50 + x / 1e4)
    middle = GlobalKriging(xy, found).solve(50 + x / 1e4).predict([(5.2e4, 0)])
    assert middle.mean[0] == pytest.approx(55.2, abs=0.1)


def test_an_own_first_simplex_moves_a_parameter_that_starts_at_zero():
    end = search(lambda p: (p[0] - 3) ** 2 + (p[1] + 40) ** 2, [0, 0], [1, 1])
    np.testing.assert_allclose(end.place, [3, -40], atol=0.1)
    assert end.value < 0.02


def test_thinning_covers_the_area_and_keeps_close_pairs():
    rng = np.random.default_rng(0)
    xy = rng.uniform(0, 1e5, (1000, 2))
    rows = spread(xy, 100)
    assert len(np.unique(rows)) == 100
    assert np.all(np.diff(rows) > 0)
    gap = np.sqrt(((xy[:, None] - xy[rows]) ** 2).sum(-1)).min(1)
    assert gap.max() < 1.5e4
    own = np.sqrt(((xy[rows][:, None] - xy[rows]) ** 2).sum(-1)) + 1e9 * np.eye(100)
    # farthest points alone lie at least the largest gap apart (Gonzalez 1985)
    assert np.median(own.min(1)) < 0.5 * gap.max()
    np.testing.assert_array_equal(rows, spread(xy.copy(), 100))
    np.testing.assert_array_equal(spread(xy[:7], 100), np.arange(7))
    assert len(spread(np.zeros((50, 2)), 20)) == 20
