"""Reducing wells loses nothing: against dense Gaussian conditioning on every single reading."""

import numpy as np
import pytest

from basinheat.geostat.engine_global import GlobalKriging
from basinheat.geostat.models import Covariance
from basinheat.heatflow.reduction import Column, amplitudes_within_wells, reduce_wells

COVARIANCE = Covariance("matern15", 60.0, 60_000.0, 2.0)


@pytest.fixture
def basin():
    rng = np.random.default_rng(4)
    n_wells, n, m = 9, 24, 3
    well = np.sort(np.concatenate([np.arange(n_wells), rng.integers(0, n_wells, n - n_wells)]))
    column = Column(
        well=well,
        resistance=rng.uniform(0.4, 1.4, n),
        excess=rng.normal(60, 20, n),
        loadings=rng.normal(0, 2, (n, m)),
        variance=rng.uniform(1, 9, n),
        common=rng.normal(0, 2, (n, 2)),
    )
    return column, rng.uniform(0, 1e5, (n_wells, 2)), rng.uniform(0, 1e5, (5, 2))


def dense(column, xy, places):
    """Condition everything on every reading at once, an unknown level given a huge variance."""
    n_wells, m = len(xy), column.loadings.shape[1]
    of_well = np.eye(n_wells)[column.well] * column.resistance[:, None]
    everywhere = np.vstack([xy, places])
    field = COVARIANCE.between(everywhere, everywhere) + COVARIANCE.nugget * np.eye(len(everywhere))
    field += 1e6
    prior = np.zeros((len(everywhere) + m,) * 2)
    prior[: len(everywhere), : len(everywhere)] = field
    prior[len(everywhere) :, len(everywhere) :] = np.eye(m)
    design = np.hstack([of_well, np.zeros((len(column.well), len(places))), column.loadings])
    same = column.well[:, None] == column.well[None, :]
    noise = np.diag(column.variance) + same * (column.common @ column.common.T)
    gain = prior @ design.T @ np.linalg.inv(design @ prior @ design.T + noise)
    return gain @ column.excess, prior - gain @ design @ prior


def test_reduced_wells_give_the_dense_posterior(basin):
    column, xy, places = basin
    mean, covariance = dense(column, xy, places)
    reduced = reduce_wells(column)
    m1, s1, _ = amplitudes_within_wells(reduced, np.zeros(3))
    engine = GlobalKriging(
        xy,
        COVARIANCE,
        reduced.variance,
        loadings=reduced.loadings,
        prior_mean=m1,
        prior_covariance=s1,
    ).solve(reduced.heat_flow)
    amplitude, posterior = engine.amplitudes()
    prediction = engine.predict(places)
    assert amplitude == pytest.approx(mean[-3:], abs=1e-4)
    assert posterior == pytest.approx(covariance[-3:, -3:], abs=1e-4)
    cells = slice(len(xy), len(xy) + len(places))
    assert prediction.mean == pytest.approx(mean[cells], rel=2e-5)
    assert prediction.variance == pytest.approx(np.diag(covariance)[cells], rel=2e-4)
    assert prediction.cross == pytest.approx(covariance[cells, -3:], abs=1e-3)


def test_one_reading_a_well_holds_no_information_on_the_sources():
    column = Column(
        well=np.arange(3),
        resistance=np.array([1.0, 0.8, 1.2]),
        excess=np.array([60.0, 55.0, 70.0]),
        loadings=np.ones((3, 1)),
        variance=np.full(3, 4.0),
        common=np.zeros((3, 1)),
    )
    reduced = reduce_wells(column)
    assert reduced.information == pytest.approx(np.zeros((1, 1)), abs=1e-12)
    assert reduced.heat_flow == pytest.approx(column.excess / column.resistance)
    assert np.sqrt(reduced.variance) == pytest.approx(2.0 / column.resistance)
