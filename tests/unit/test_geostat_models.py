"""Covariance models: axes, storage, refusals."""

import json

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from basinheat.errors import UserError
from basinheat.geostat.models import MODELS, Covariance, correlation


@pytest.mark.parametrize("model", MODELS)
def test_correlation_falls_from_one(model):
    shares = np.linspace(0, 4, 400)
    rho = correlation(shares, model)
    assert rho[0] == 1
    assert (np.diff(rho) <= 1e-15).all()
    assert (rho >= 0).all()
    assert correlation(0.999, model) <= 0.051


@pytest.mark.parametrize("model", MODELS)
def test_every_model_is_positive_definite_in_the_plane(model):
    xy = np.random.default_rng(0).uniform(0, 1e5, (150, 2))
    matrix = Covariance(model, 2.0, 4e4, azimuth_deg=70, ratio=0.3).between(xy, xy)
    assert np.linalg.eigvalsh(matrix).min() > -1e-10


def test_major_axis_is_clockwise_from_north():
    covariance = Covariance("spherical", 1.0, 1000.0, azimuth_deg=90, ratio=0.5)
    east, north = covariance.between([(0, 0)], [(400, 0), (0, 400)])[0]
    assert east == pytest.approx(correlation(0.4, "spherical"))
    assert north == pytest.approx(correlation(0.8, "spherical"))


@given(
    st.sampled_from(MODELS),
    st.floats(0, 1e6),
    st.floats(1e-3, 1e7),
    st.floats(0, 1e6),
    st.floats(-360, 360),
    st.floats(0.01, 1),
)
def test_survives_json(model, sill, range_m, nugget, azimuth, ratio):
    covariance = Covariance(model, sill, range_m, nugget, azimuth, ratio)
    stored = json.loads(json.dumps({**covariance.to_dict(), "wells": 12}))
    assert Covariance.from_dict(stored) == covariance
    again = Covariance.from_natural(model, sill, covariance.natural_range_m, nugget)
    assert again.range_m == pytest.approx(range_m, rel=1e-12)


def test_all_faults_are_named_at_once():
    with pytest.raises(UserError) as refused:
        Covariance("exponental", -1.0, 0.0, float("nan"), ratio=2.0)
    assert len(refused.value.faults) == 5


@pytest.mark.parametrize(
    "change",
    [{"sill": None}, {"sill": "many"}, {"range_convention": "natural"}, {"model": "hole"}],
)
def test_a_faulty_stored_model_is_refused(change):
    with pytest.raises(UserError):
        Covariance.from_dict({**Covariance("exponential", 1.0, 2.0).to_dict(), **change})


def test_a_stored_model_without_range_is_refused():
    with pytest.raises(UserError, match="range_m"):
        Covariance.from_dict({"model": "exponential", "sill": 1, "nugget": 0})
