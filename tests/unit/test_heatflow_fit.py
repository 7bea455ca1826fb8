"""The joint fit on basins that are drawn from its own model: it must find what was put in."""

import numpy as np
import pandas as pd
import pytest

from basinheat import heatflow, tables
from basinheat.errors import UserError
from basinheat.geostat.models import Covariance

FIELD = Covariance("matern15", 49.0, 70_000.0, 0.5)
LN_STD = 0.12
BIAS_STD = 3.0


PUBLISHED_STD = 4.0


def draw(seed, n_wells=70, bias=0.0, ln_k=0.0, paired=25, published=0):
    """Wells with one biased log each, some with an equilibrium log, over shale of unknown k.

    Published heat flow lies 500 m beside the first wells, right but for its own error.
    """
    rng = np.random.default_rng(seed)
    xy = rng.uniform(0.0, 120_000.0, (n_wells, 2))
    field = FIELD.between(xy, xy) + FIELD.nugget * np.eye(n_wells)
    flow = 60.0 + np.linalg.cholesky(field) @ rng.normal(size=n_wells)
    names = [f"W{i:03d}" for i in range(n_wells)]
    wells = tables.Wells.conform(
        pd.DataFrame(
            {
                "well": names,
                "easting_m": xy[:, 0],
                "northing_m": xy[:, 1],
                "surface_temperature_degc": 10.0,
                "surface_temperature_std_k": 0.3,
            }
        )
    )
    log = pd.DataFrame({"i": range(n_wells), "method": "horner", "loading_method:horner": BIAS_STD})
    truth = pd.DataFrame(
        {"i": range(paired), "method": "equilibrium", "loading_method:horner": 0.0}
    )
    rows = pd.concat([log, truth], ignore_index=True)
    depth = rng.uniform(1500.0, 3500.0, len(rows))
    resistance = depth / 2.0  # the catalogue's k
    true = 10.0 + flow[rows["i"]] * resistance * np.exp(-ln_k) / 1e3
    std = np.where(rows["method"] == "horner", 2.0, 0.5)
    noise = rng.normal(0.0, std) + np.where(rows["method"] == "horner", bias, 0.0)
    estimates = tables.Estimates.conform(
        rows.assign(
            well=np.array(names)[rows["i"]],
            depth_m=depth,
            temperature_degc=true + noise,
            temperature_std_k=std,
            well_std_k=0.0,
            variance_class=np.where(rows["method"] == "horner", "method:horner", "direct"),
            used=True,
        ).drop(columns="i")
    )
    rock = tables.Resistances.conform(
        pd.DataFrame(
            {
                "well": estimates["well"],
                "depth_m": depth,
                "resistance_m2k_w": resistance,
                "resistance_std_m2k_w": 0.0,
                "radiogenic_k": 0.0,
                "origin": "catalogue",
                "resistance_shale": resistance,
                "radiogenic_shale": 0.0,
            }
        )
    )
    sources = pd.DataFrame(
        {
            "source": ["method:horner", "conductivity:shale"],
            "prior_std": [BIAS_STD, LN_STD],
            "unit": ["K", "ln"],
        }
    )
    points = tables.HeatFlowPoints.conform(
        pd.DataFrame(
            {
                "well": [f"P{i:03d}" for i in range(published)],
                "easting_m": xy[:published, 0] + 500.0,
                "northing_m": xy[:published, 1],
                "heat_flow_mw_m2": flow[:published] + rng.normal(0.0, PUBLISHED_STD, published),
                "heat_flow_std_mw_m2": PUBLISHED_STD,
            }
        )
    )
    fitted = heatflow.fit(
        estimates,
        rock,
        sources,
        wells,
        ("matern15",),
        0.5,
        published=points,
        published_shared_share=0.02,
    )
    return fitted, flow, true


def test_a_shared_bias_is_found_from_pairs_and_taken_out():
    fitted, _, true = draw(seed=1, bias=4.0)
    source = fitted.sources.set_index("source").loc["method:horner"]
    assert abs(source["mean"] - 4.0) < 3 * source["std"]
    assert source["std"] < 0.4 * BIAS_STD
    error = fitted.temperatures["temperature_degc"].to_numpy() - true
    logs = (fitted.temperatures["method"] == "horner").to_numpy()
    assert abs(error[logs].mean()) < 1.0


def test_pairs_tell_more_of_a_bias_than_the_spread_of_depths_does():
    """Without pairs only the regional intercept speaks of a shared bias, and sigma says so."""
    alone, _, _ = draw(seed=2, paired=0)
    paired, _, _ = draw(seed=2, paired=25)
    std = [f.sources.set_index("source").loc["method:horner", "std"] for f in (alone, paired)]
    assert std[1] < 0.5 * std[0] < 0.5 * BIAS_STD
    assert alone.temperatures["shared_std_k"].median() == pytest.approx(std[0], rel=1e-6)


def test_the_level_of_one_conductivity_cannot_be_known_from_temperatures():
    """Heat flow and conductivity trade off: the shared sigma of heat flow stays the prior's."""
    fitted, flow, _ = draw(seed=3, ln_k=0.15)
    shared = fitted.heat_flow["heat_flow_shared_std_mw_m2"] / fitted.heat_flow["heat_flow_mw_m2"]
    assert shared.median() == pytest.approx(LN_STD, rel=0.25)
    offset = (fitted.heat_flow["heat_flow_mw_m2"].to_numpy() - flow).mean()
    assert abs(offset) < 2.5 * fitted.heat_flow["heat_flow_shared_std_mw_m2"].median()


def test_published_heat_flow_tells_the_level_of_conductivity():
    """Thirty places of 4 mW/m2 know the level of q within 2 %, and so that of k."""
    alone, flow, _ = draw(seed=3, ln_k=0.15)
    helped, _, _ = draw(seed=3, ln_k=0.15, published=30)
    level = [f.sources.set_index("source").loc["conductivity:shale"] for f in (alone, helped)]
    assert level[1]["std"] < 0.4 * level[0]["std"]
    assert abs(level[1]["mean"] - 0.15) < 2.5 * level[1]["std"]
    own = helped.heat_flow[helped.heat_flow["method"] != "published"]
    offset = (own["heat_flow_mw_m2"].to_numpy() - flow).mean()
    assert abs(offset) < 2.5 * own["heat_flow_shared_std_mw_m2"].median() < 5.0


def test_published_heat_flow_is_data_of_the_map():
    helped, _, _ = draw(seed=4, published=30)
    points = helped.map_points.set_index("well")
    given = points.loc[points.index.str.startswith("P")]
    assert len(given) == 30
    np.testing.assert_allclose(given["value_std"], PUBLISHED_STD)
    assert (given["loading_conductivity:shale"] == 0.0).all()
    assert (given["loading_heat_flow:published"] > 0.0).all()
    assert (helped.heat_flow["method"] == "published").sum() == 30


def test_own_sigma_of_heat_flow_is_honest():
    scores = []
    for seed in range(5, 11):
        fitted, flow, _ = draw(seed=seed, bias=1.0)
        own = fitted.heat_flow["heat_flow_std_mw_m2"].to_numpy()
        error = fitted.heat_flow["heat_flow_mw_m2"].to_numpy() - flow
        scores.append((error - error.mean()) / own)
    # 420 wells of unit variance: their mean square is 1 within 4 / sqrt(2 x 420) x 2
    assert np.mean(np.concatenate(scores) ** 2) == pytest.approx(1.0, abs=0.28)


def test_a_basin_of_no_wells_is_refused_in_a_line():
    rows = tables.Estimates.empty()
    with pytest.raises(UserError, match="usable temperature: 0"):
        heatflow.fit(
            rows,
            tables.Resistances.empty(),
            tables.Sources.empty(),
            tables.Wells.empty(),
            ("matern15",),
            0.7,
        )
