"""Maps read from rebuilt columns: names, closed forms, and agreement with each other."""

import numpy as np
import pandas as pd
import pytest

from basinheat import mapnames, products, tables
from basinheat.tables.maps import STATUS

K, A, FLOW, SURFACE = 2.5, 1.2, 62.0, 9.0
STEP, DEEPEST = 250.0, 5000.0


@pytest.fixture
def maps():
    """Four cells over one rock: no temperature law, heat production A."""
    n = 4
    place = {"row": np.arange(n), "col": np.zeros(n, int)}
    cells = pd.DataFrame(
        {
            **place,
            "surface_temperature_degc": SURFACE,
            "surface_temperature_std_k": 1.0,
            "well_distance_m": 1000.0,
            "deepest_reading_m": [1500.0, 2500.0, 3500.0, 3500.0],
        }
    )
    heat_flow = pd.DataFrame(
        {
            **place,
            "heat_flow_mw_m2": FLOW,
            "variance_mw2_m4": 9.0,
            "cross_surface_temperature": 0.0,
        }
    )
    tops = np.arange(0.0, DEEPEST, STEP)
    structure = pd.DataFrame(
        {
            "row": np.repeat(place["row"], len(tops)),
            "col": 0,
            "top_m": np.tile(tops, n),
            "base_m": np.tile(tops + STEP, n),
            "ln_conductivity": np.log(K),
            "variance": 0.0,
            "heat_production_uw_m3": A,
            "reference_temperature_degc": 25.0,
            "temperature_slope_per_k": 0.0,
        }
    )
    sources = pd.DataFrame({"source": ["surface_temperature"], "prior_std": [0.7]})
    covariance = pd.DataFrame(
        {
            "source": ["surface_temperature"],
            "mean": [0.0],
            "covariance_surface_temperature": [1.0],
        }
    )
    frame = products.derive(
        cells,
        heat_flow,
        structure,
        sources,
        covariance,
        500.0,
        [1000.0, 3000.0],
        [60.0, 200.0],
        2000.0,
    )
    return tables.Maps.conform(frame)


def test_the_maps_are_those_that_the_rule_promises(maps):
    promised = mapnames.map_names([1000.0, 3000.0], [60.0, 200.0])
    assert sorted(maps.columns.drop(["row", "col"])) == promised


def closed_form(depth):
    # T0 + (q z - A z^2 / 2) / k: Carslaw & Jaeger (1959), section 3.2
    return SURFACE + (FLOW * 1e-3 * depth - A * 1e-6 * depth**2 / 2) / K


def test_slices_are_the_closed_form(maps):
    for depth in (1000.0, 3000.0):
        assert maps[f"temperature_{depth:g}m"].to_numpy() == pytest.approx(closed_form(depth))


def test_sigma_adds_surface_and_heat_flow_once(maps):
    # d T / d q = z / k; surface: own 1 K and shared 0.7 K
    expected = np.sqrt((3.0 * 1.0 / K) ** 2 + 1.0 + 0.7**2)
    assert maps["temperature_1000m_std"].to_numpy() == pytest.approx(expected, rel=1e-6)
    assert maps["gradient_std"].to_numpy() == pytest.approx(3.0 / K, rel=1e-6)


def test_gradient_is_the_mean_to_the_reference_depth(maps):
    expected = (closed_form(2000.0) - SURFACE) / 2.0
    assert maps["gradient"].to_numpy() == pytest.approx(expected)


def test_isotherms_agree_with_the_column_and_are_blank_out_of_reach(maps):
    assert closed_form(maps["isotherm_60c"].to_numpy()) == pytest.approx(60.0, abs=0.01)
    assert maps["isotherm_200c"].isna().all()


def test_status_says_the_worst_that_holds(maps):
    # 200 degC lies below the deepest depth of the model everywhere
    assert (maps["status"] == STATUS["isotherm_too_deep"]).all()
