"""Kriging against a worked set, gstat's numbers on open data, PyKrige, GSTools, gstlearn."""

import json
import subprocess
import sys

import numpy as np
import pytest
from shared import shared_file

from basinheat.geostat.engine_global import GlobalKriging
from basinheat.geostat.engine_pykrige import PyKrigeKriging
from basinheat.geostat.engine_tiles import TileKriging
from basinheat.geostat.models import MODELS, Covariance
from basinheat.geostat.scores import scores

# Worked set of six data; check values computed independently of this code (a dense solution of
# the kriging system, written out in the project's reference of methods, rows J1 to J6).
XY = np.array([(0, 0), (3, 1), (1, 4), (5, 5), (6, 2), (2, 2.5)])
Y = np.array([28, 31, 26, 34, 35, 30.0])
ERROR = np.array([1, 0.25, 4, 1, 0.25, 2.25])
COVARIATE = np.array([1.2, 0.8, 1.5, 0.4, 0.3, 1.0])
MODEL = Covariance.from_natural("exponential", 9.0, 5.0)


def close(expected, rel=1e-7):
    return pytest.approx(expected, rel=rel)


def test_j1_ordinary_kriging_filters_the_errors():
    kriging = GlobalKriging(XY, MODEL, ERROR).solve(Y)
    place, datum = kriging.predict([(4, 3)]), kriging.predict([(1, 4)])
    assert place.mean[0] == close(32.42985, 1e-6)
    assert place.variance[0] == close(3.2623106)
    assert kriging.coefficients()[0][0] == close(31.141768)
    assert datum.mean[0] == close(28.11014, 1e-6)
    assert datum.variance[0] == close(2.2686326)


def test_j1_without_errors_kriging_is_exact():
    prediction = GlobalKriging(XY, MODEL).solve(Y).predict([(4, 3), *XY])
    assert prediction.mean[0] == close(32.467861)
    assert prediction.variance[0] == close(3.0406829)
    np.testing.assert_allclose(prediction.mean[1:], Y, rtol=1e-13)
    np.testing.assert_allclose(prediction.variance[1:], 0, atol=1e-13)


def test_j2_external_drift():
    kriging = GlobalKriging(XY, MODEL, ERROR, trend=COVARIATE).solve(Y)
    prediction = kriging.predict([(4, 3)], drift0=[0.7])
    assert prediction.mean[0] == close(31.92435, 1e-6)
    assert prediction.variance[0] == close(3.3018635)
    assert kriging.coefficients()[0][1] == close(-7.4642144)


def test_j3_linear_drift():
    prediction = GlobalKriging(XY, MODEL, ERROR, trend="linear").solve(Y).predict([(4, 3)])
    assert prediction.mean[0] == close(32.253801)
    assert prediction.variance[0] == close(3.28650, 1e-5)


def test_j4_j5_leave_one_out():
    predicted, variance = GlobalKriging(XY, MODEL, ERROR).solve(Y).leave_one_out()
    residuals = [-2.4958835, -0.074499287, -4.87509, 2.2868973, 3.1689146, 0.22382327]
    np.testing.assert_allclose(Y - predicted, residuals, rtol=1e-6)
    np.testing.assert_allclose(
        variance, [7.95456, 4.5097017, 9.2412505, 7.4078146, 6.21209, 5.7407518], rtol=1e-6
    )
    judged = scores(predicted - Y, np.sqrt(variance))
    assert judged["msdr"] == close(0.94789844)
    assert judged["pit_mean"] == pytest.approx(0.494, abs=5e-4)
    assert judged["crps"] == close(1.53616, 1e-5)


def test_j6_restricted_likelihood():
    assert GlobalKriging(XY, MODEL, ERROR).solve(Y).deviance() == close(26.283526)


# ---- gstat 2.1-0 on the Meuse data (R package sp): fixed models, no fitting; 12 digits ----
SPHERICAL = Covariance("spherical", 0.59, 897, 0.05)
EXPONENTIAL = Covariance.from_natural("exponential", 0.15, 340, 0.057)
GSTAT = {
    "ok_sph": (SPHERICAL, 0.0),
    "ok_exp": (EXPONENTIAL, 0.0),
    "ok_gau": (Covariance.from_natural("gaussian", 0.5, 350, 0.10), 0.0),
    "ok_mat15": (Covariance.from_natural("matern15", 0.55, 300, 0.05), 0.0),
    "ok_err": (Covariance("spherical", 0.59, 897), 0.05),
    "ok_nug_plus_err": (Covariance("spherical", 0.59, 897, 0.03), 0.02),
    "ok_aniso": (Covariance("spherical", 0.59, 1200, 0.05, azimuth_deg=45, ratio=0.5), 0.0),
}


def meuse(name):
    return np.genfromtxt(
        shared_file("data", "gstat_meuse", f"{name}.csv"), delimiter=",", names=True, dtype=None
    )


def places(table):
    return np.column_stack([table["x"], table["y"]]).astype(float)


def assert_same(prediction, expected):
    np.testing.assert_allclose(prediction.mean, expected["pred"], rtol=1e-9)
    np.testing.assert_allclose(prediction.variance, expected["var"], rtol=1e-9, atol=1e-11)


def tiles_with_all_data(*given):
    """Make tiles that take all of some hundred data."""
    return TileKriging(*given, nearest=200)


ENGINES = pytest.mark.parametrize("engine", [GlobalKriging, tiles_with_all_data])


@ENGINES
@pytest.mark.parametrize("name", GSTAT)
def test_grid_equals_gstat(name, engine):
    data, expected = meuse("meuse"), meuse(f"{name}_grid")
    covariance, error = GSTAT[name]
    kriging = engine(places(data), covariance, error).solve(data["logzn"])
    assert_same(kriging.predict(places(expected)), expected)


@ENGINES
def test_own_error_of_each_datum_equals_gstat_weights(engine):
    data, expected = meuse("hetero_input"), meuse("ok_sph_hetero_weights_grid")
    kriging = engine(places(data), SPHERICAL, data["err_var"]).solve(data["logzn"])
    assert_same(kriging.predict(places(expected)), expected)


@ENGINES
def test_linear_drift_equals_gstat(engine):
    data, expected = meuse("meuse"), meuse("uk_xy_exp_grid")
    kriging = engine(places(data), EXPONENTIAL, 0.0, "linear").solve(data["logzn"])
    assert_same(kriging.predict(places(expected)), expected)


@ENGINES
def test_external_drift_equals_gstat(engine):
    data, grid, expected = meuse("meuse"), meuse("meuse_grid"), meuse("uk_sqrtdist_exp_grid")
    kriging = engine(places(data), EXPONENTIAL, 0.0, data["sqrtdist"])
    prediction = kriging.solve(data["logzn"]).predict(places(expected), drift0=grid["sqrtdist"])
    assert_same(prediction, expected)


@pytest.mark.parametrize(
    ("tag", "covariance", "error"),
    [
        ("ok_nug", SPHERICAL, 0.0),
        ("ok_err", Covariance("spherical", 0.59, 897), 0.05),
        ("mix", Covariance("spherical", 0.59, 897, 0.03), 0.02),
    ],
)
def test_at_the_data_equals_gstat(tag, covariance, error):
    expected = meuse("at_data_points")
    at = GlobalKriging(places(expected), covariance, error).solve(expected["obs"]).at_data()
    np.testing.assert_allclose(at.mean, expected[f"{tag}_pred"], rtol=1e-9)
    np.testing.assert_allclose(at.variance, expected[f"{tag}_var"], rtol=1e-9, atol=1e-11)


@pytest.mark.parametrize(
    ("name", "covariance", "error", "drift"),
    [
        ("ok_sph", SPHERICAL, 0.0, "none"),
        # gstat leaves the left-out datum's own measurement error out of the variance
        ("ok_err", Covariance("spherical", 0.59, 897), 0.05, "none"),
        ("uk_sqrtdist_exp", EXPONENTIAL, 0.0, "sqrtdist"),
    ],
)
def test_leave_one_out_equals_gstat(name, covariance, error, drift):
    data, expected = meuse("meuse"), meuse(f"loocv_{name}")
    trend = "none" if drift == "none" else data[drift]
    kriging = GlobalKriging(places(data), covariance, error, trend).solve(data["logzn"])
    predicted, variance = kriging.leave_one_out()
    np.testing.assert_allclose(predicted, expected["pred"], rtol=1e-9)
    np.testing.assert_allclose(variance - error, expected["var"], rtol=1e-9)


# ---- other libraries as oracles ----
def scattered(n=40, cells=30):
    rng = np.random.default_rng(7)
    return rng.uniform(0, 1e5, (n, 2)), rng.normal(60, 8, n), rng.uniform(0, 1e5, (cells, 2))


@pytest.mark.parametrize("trend", ["none", "linear"])
@pytest.mark.parametrize("model", MODELS)
def test_pykrige_says_the_same(model, trend):
    xy, values, xy0 = scattered()
    covariance = Covariance(model, 60, 4e4, 5, azimuth_deg=30, ratio=0.6)
    ours = GlobalKriging(xy, covariance, trend=trend).solve(values).predict(xy0)
    theirs = PyKrigeKriging(xy, covariance, trend=trend).solve(values).predict(xy0)
    np.testing.assert_allclose(theirs.mean, ours.mean, rtol=1e-9)
    np.testing.assert_allclose(theirs.variance, ours.variance, rtol=1e-9)


def test_pykrige_carries_shared_sources_with_the_kriging_weights():
    """Common practice, no source: weights do not depend on the values they are applied to."""
    xy, values, xy0 = scattered()
    loadings = np.random.default_rng(8).normal(size=(len(xy), 3))
    mean, prior = np.array([0.1, -1.0, 0.3]), np.diag([0.5, 1.0, 2.0])
    covariance = Covariance("exponential", 60, 4e4, 5)
    weights = GlobalKriging(xy, covariance).weights(xy0)
    exact = GlobalKriging(xy, covariance).solve(values).predict(xy0)
    theirs = PyKrigeKriging(xy, covariance, None, "none", loadings, mean, prior).solve(values)
    prediction, carried = theirs.predict(xy0), weights @ loadings
    np.testing.assert_allclose(prediction.mean, weights @ (values - loadings @ mean), rtol=1e-9)
    np.testing.assert_allclose(prediction.cross, -carried @ prior, atol=1e-9)
    shared = np.einsum("ij,jk,ik->i", carried, prior, carried)
    np.testing.assert_allclose(prediction.variance, exact.variance + shared, rtol=1e-9)


def test_gstools_says_the_same_with_errors_of_each_datum():
    """Its mean only: its variance with given errors still holds the nugget."""
    gstools = pytest.importorskip("gstools")
    xy, values, xy0 = scattered()
    error = np.random.default_rng(9).uniform(1, 9, len(xy))
    covariance = Covariance.from_natural("exponential", 60.0, 1.5e4)
    theirs = gstools.krige.Ordinary(
        gstools.Exponential(dim=2, var=60.0, len_scale=1.5e4), xy.T, values, cond_err=error
    )
    mean, variance = theirs(xy0.T)
    ours = GlobalKriging(xy, covariance, error).solve(values).predict(xy0)
    np.testing.assert_allclose(ours.mean, mean, rtol=1e-9)
    np.testing.assert_allclose(ours.variance, variance, rtol=1e-9)


def drifting(seed):
    """Wells with errors and a covariate, places with the covariate, and two ways to krige them."""
    rng = np.random.default_rng(seed)
    xy, xy0 = rng.uniform(0, 4e5, (90, 2)), rng.uniform(0, 4e5, (60, 2))

    def drift(at):
        return np.sin(at[:, 0] / 9e4) + at[:, 1] / 4e5

    error, values = np.exp(rng.normal(1.4, 0.7, 90)), 40 + 6 * drift(xy) + rng.normal(0, 5, 90)
    covariance = Covariance.from_natural("exponential", 25.0, 3e4, 4.0)
    given = (xy, covariance, error, drift(xy))
    ours = [
        engine.solve(values).predict(xy0, drift(xy0))
        for engine in (GlobalKriging(*given), TileKriging(*given, nearest=90))
    ]
    return xy, xy0, values, error, drift(xy), drift(xy0), ours


@pytest.mark.parametrize("seed", [1, 2, 3])
def test_gstools_says_the_same_with_drift_and_errors(seed):
    gstools = pytest.importorskip("gstools")
    xy, xy0, values, error, drift, drift0, ours = drifting(seed)
    theirs = gstools.krige.Krige(
        gstools.Exponential(dim=2, var=25.0, len_scale=3e4, nugget=4.0),
        xy.T,
        values,
        ext_drift=drift,
        cond_err=4.0 + error,
        pseudo_inv=False,
    )
    mean, variance = theirs(xy0.T, ext_drift=drift0)
    for told in ours:
        np.testing.assert_allclose(told.mean, mean, rtol=1e-9)
        np.testing.assert_allclose(told.variance, variance, rtol=1e-9)


GSTLEARN = """
import json, sys
import numpy as np
import gstlearn as gl
given = {name: np.array(column) for name, column in json.load(sys.stdin).items()}
table = np.column_stack([given["xy"], given["values"], given["error"], given["drift"]])
names, roles = ["x", "y", "z", "v", "f"], ["x1", "x2", "z1", "v1", "f1"]
wells = gl.Db.createFromSamples(len(table), gl.ELoadBy.SAMPLE, table.ravel(), names, roles)
table = np.column_stack([given["xy0"], given["drift0"]])
cells = gl.Db.createFromSamples(
    len(table), gl.ELoadBy.SAMPLE, table.ravel(), ["x", "y", "f"], ["x1", "x2", "f1"]
)
model = gl.Model.createFromParam(gl.ECov.EXPONENTIAL, range=3e4, sill=25.0, flagRange=False)
model.addCovFromParam(gl.ECov.NUGGET, sill=4.0)
model.setDriftIRF(0, 1)
gl.kriging(wells, cells, model, gl.NeighUnique.create(), True, True, False)
names = cells.getAllNames()
columns = [np.array(cells.getColumn(next(n for n in names if k in n))) for k in ("estim", "stdev")]
print("told " + json.dumps([column.tolist() for column in columns]))
"""


@pytest.mark.parametrize("seed", [1, 2, 3])
def test_gstlearn_says_the_same_with_drift_and_errors(seed):
    """In a process of its own: it can take Python down with it."""
    pytest.importorskip("gstlearn")
    xy, xy0, values, error, drift, drift0, ours = drifting(seed)
    names = ("xy", "xy0", "values", "error", "drift", "drift0")
    columns = (xy, xy0, values, error, drift, drift0)
    given = json.dumps({n: c.tolist() for n, c in zip(names, columns, strict=True)})
    run = subprocess.run(
        [sys.executable, "-c", GSTLEARN], input=given, capture_output=True, text=True, check=True
    )
    line = next(line for line in run.stdout.splitlines() if line.startswith("told "))
    mean, sigma = np.array(json.loads(line.removeprefix("told ")))
    for told in ours:
        np.testing.assert_allclose(told.mean, mean, rtol=1e-9)
        np.testing.assert_allclose(told.variance, sigma**2, rtol=1e-9)
