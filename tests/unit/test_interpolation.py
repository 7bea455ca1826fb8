"""Heat flow kriged part by part is the heat flow kriged at once, by any engine."""

import numpy as np
import pandas as pd
import pytest

from basinheat import interpolation
from basinheat.geostat.models import Covariance


@pytest.fixture
def case():
    rng = np.random.default_rng(0)
    xy = rng.uniform(0, 1e5, (60, 2))
    points = pd.DataFrame({"easting_m": xy[:, 0], "northing_m": xy[:, 1]})
    points["value"], points["value_std"] = rng.normal(60, 8, 60), rng.uniform(1, 4, 60)
    points["loading_a"], points["loading_b"] = rng.normal(size=(2, 60))
    information = pd.DataFrame({"source": ["a", "b"], "mean": [0.2, -0.1]})
    information["covariance_a"], information["covariance_b"] = [1.0, 0.2], [0.2, 0.5]
    fitted = {"covariance": Covariance("exponential", 40.0, 5e4, 2.0).to_dict()}
    row, col = (index.ravel() for index in np.indices((9, 11)))
    cells = pd.DataFrame({"row": row, "col": col})
    cells["easting_m"], cells["northing_m"] = 1e4 * col, 9e4 - 1e4 * row
    return points, information, fitted, cells


@pytest.mark.parametrize("engine", ["auto", "global", "tiles", "pykrige"])
def test_parts_are_the_whole(monkeypatch, case, engine):
    whole = interpolation.krige_heat_flow(*case, engine)
    monkeypatch.setattr(interpolation, "PART", 40)
    parts = list(interpolation.krige_heat_flow_parts(*case, engine))
    assert [len(part) for part in parts] == [40, 40, 19]
    joined = pd.concat(parts, ignore_index=True)
    pd.testing.assert_frame_equal(joined, whole, rtol=1e-10)
    assert {"cross_a", "cross_b"} <= set(whole.columns)


def test_all_wells_around_each_tile_give_the_map_of_all_wells(case):
    exact, tiles = (interpolation.krige_heat_flow(*case, engine) for engine in ("global", "tiles"))
    pd.testing.assert_frame_equal(tiles, exact, rtol=1e-8)


def test_no_cells_give_an_empty_map(case):
    points, information, fitted, cells = case
    for engine in ("global", "tiles"):
        nothing = interpolation.krige_heat_flow(points, information, fitted, cells[:0], engine)
        assert list(nothing) == list(interpolation.krige_heat_flow(*case, engine))
        assert nothing.empty
