"""The conductivity structure: what is put into the wells must come out of the map."""

import numpy as np
import pandas as pd
import pytest

from basinheat import structure
from basinheat.geostat.models import Covariance
from basinheat.settings.heat import BelowLayers

FIELD = Covariance("matern15", 0.03, 60_000.0, 0.001)
STEP = 250.0


def points(n_wells=60, intervals=8, length_m=100.0, seed=0):
    """Draw ln k over wells and depth: a smooth field, tied down the column over a length."""
    rng = np.random.default_rng(seed)
    xy = rng.uniform(0, 100_000, (n_wells, 2))
    root = np.linalg.cholesky(FIELD.between(xy, xy) + FIELD.nugget * np.eye(n_wells))
    tie = np.exp(-STEP / length_m)
    layer = root @ rng.normal(size=n_wells)
    frames = []
    for i in range(intervals):
        frames.append(
            pd.DataFrame(
                {
                    "well": [f"W{j:02d}" for j in range(n_wells)],
                    "easting_m": xy[:, 0],
                    "northing_m": xy[:, 1],
                    "value": np.log(2.5) + layer,
                    "value_std": 0.02,
                    "top_m": i * STEP,
                    "base_m": (i + 1) * STEP,
                    "heat_production_uw_m3": 1.0,
                    "reference_temperature_degc": 20.0 + 10 * i,
                    "temperature_slope_per_k": -0.001,
                    "loading_conductivity:shale": rng.uniform(0, 0.12, n_wells),
                }
            )
        )
        layer = tie * layer + np.sqrt(1 - tie**2) * (root @ rng.normal(size=n_wells))
    return pd.concat(frames, ignore_index=True)


def cells_of(frame):
    wells = frame.drop_duplicates("well")
    return wells[["easting_m", "northing_m"]].assign(row=np.arange(len(wells)), col=0)


def test_covariance_and_vertical_tie_are_found():
    loose = structure.fit_structure(points(length_m=100.0), 5, ("matern15",))
    tied = structure.fit_structure(points(length_m=3000.0), 5, ("matern15",))
    assert loose["vertical_correlation_m"] < 250.0 < tied["vertical_correlation_m"]
    for group in loose["groups"]:
        covariance = Covariance.from_dict(group["covariance"])
        total = covariance.sill + covariance.nugget
        assert FIELD.sill / 3 < total < 3 * FIELD.sill


def test_the_map_agrees_with_the_wells_within_their_own_sigma():
    frame = points()
    fitted = structure.fit_structure(frame, 5, ("matern15",))
    cells = cells_of(frame)
    grid = structure.krige_conductivity(frame, fitted, cells, STEP, 3000.0, 5, BelowLayers())
    known = grid[grid["top_m"] < 2000.0]
    wells = frame.sort_values(["well", "top_m"])
    error = known["ln_conductivity"].to_numpy() - wells["value"].to_numpy()
    assert np.sqrt(np.mean(error**2)) < 0.06
    assert (known["heat_production_uw_m3"] - 1.0).abs().max() < 1e-9
    # loadings ride on the same weights, which sum to one
    assert known["loading_conductivity:shale"].between(-0.05, 0.17).all()


def test_below_the_layers_the_stated_rock_with_growing_doubt():
    frame = points()
    fitted = structure.fit_structure(frame, 5, ("matern15",))
    below = BelowLayers(conductivity_w_mk=3.2, std_ln=0.2, growth_ln_per_km=0.1)
    grid = structure.krige_conductivity(frame, fitted, cells_of(frame), STEP, 4000.0, 5, below)
    deep = grid[(grid["row"] == 0) & (grid["top_m"] >= 2000.0)]
    assert np.exp(deep["ln_conductivity"].to_numpy()) == pytest.approx(3.2)
    std = np.sqrt(deep["variance"].to_numpy())
    assert std == pytest.approx(0.2 + 0.1 * (deep["top_m"].to_numpy() - 2000.0) / 1000.0)
    assert (deep["loading_conductivity:shale"] == 0.0).all()


@pytest.mark.parametrize("n_wells", [1, 2, 4])
def test_few_wells_with_layers_still_give_a_map(n_wells):
    frame = points(n_wells=n_wells)
    fitted = structure.fit_structure(frame, 5, ("exponential", "matern15"))
    grid = structure.krige_conductivity(
        frame, fitted, cells_of(points(n_wells=6)), STEP, 2000.0, 5, BelowLayers()
    )
    assert np.isfinite(grid[["ln_conductivity", "variance"]].to_numpy()).all()


def test_rock_that_was_assumed_is_as_uncertain_between_wells_as_at_them():
    # one rock for all wells: their values agree, and that tells nothing of the rock
    frame = points().assign(value=np.log(2.5), value_std=0.15)
    fitted = structure.fit_structure(frame, 5, ("matern15",))
    grid = structure.krige_conductivity(
        frame, fitted, cells_of(frame), STEP, 2000.0, 5, BelowLayers()
    )
    assert np.allclose(grid["ln_conductivity"], np.log(2.5))
    # the mean of 60 wells adds a little to the variance of any one place
    assert grid["variance"].between(0.15**2, 1.05 * 0.15**2).all()
    assert fitted["vertical_correlation_m"] == structure.GROUP_M
