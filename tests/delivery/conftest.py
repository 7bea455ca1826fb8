"""A small made-up delivery, and names that would break out of a careless writer."""

import numpy as np
import pandas as pd
import pytest

from basinheat import tables
from basinheat.delivery.metadata import About
from basinheat.grid import Grid

HOSTILE = (
    "../../etc/passwd",
    '=HYPERLINK("http://example.org";"x")',
    "<script>alert(1)</script>",
    "'; DROP TABLE wells; --",
    "Brønn Ø-7 ☃",
    'say "hi", twice\nand again',
)


@pytest.fixture(scope="session")
def grid():
    """More than one tile, so that there are overviews."""
    return Grid("EPSG:32631", 500_000.0, 5_800_000.0, 1000.0, 700, 600)


@pytest.fixture(scope="session")
def maps(grid):
    """Smooth fields with a hole in the middle and a blank margin."""
    east, north = np.meshgrid(*grid.centres)
    x, y = (east - 800_000.0) / 1e5, (north - 5_450_000.0) / 1e5
    inside = (np.hypot(x, y) < 2.8) & (np.hypot(x - 1, y - 1) > 0.4)
    rows, cols = np.nonzero(inside)
    x, y = x[inside], y[inside]
    flow = 60.0 + 10.0 * np.sin(x) + 5.0 * y
    frame = pd.DataFrame({"row": rows, "col": cols})
    frame["well_distance"] = 1e4 * np.hypot(x, y)
    frame["deepest_reading"] = 2500.0
    frame["heat_flow"], frame["heat_flow_std"] = flow, 4.0 + 0.1 * x
    frame["gradient"], frame["gradient_std"] = flow / 2.2, 2.0
    frame["status"] = np.where(x > 0.0, 2, 1)
    for depth in (1000.0, 2000.0):
        frame[f"temperature_{depth:g}m"] = 10.0 + flow / 2.2 * depth / 1000.0
        frame[f"temperature_{depth:g}m_std"] = 3.0
    frame["isotherm_100c"] = np.where(flow > 60.0, 90.0 / flow * 2200.0, np.nan)
    frame["isotherm_100c_std"] = np.where(flow > 60.0, 150.0, np.nan)
    frame["isotherm_400c"] = np.nan
    return tables.Maps.conform(frame)


@pytest.fixture(scope="session")
def about():
    """Say where the delivery comes from."""
    return About("demo", "base", ("equilibrium", "harrison1983"), 2000.0, 6000.0, "CC BY, nobody")


@pytest.fixture(scope="session")
def wells():
    """Wells whose names are an attack; two of them have results."""
    count = len(HOSTILE)
    return tables.Wells.conform(
        pd.DataFrame(
            {
                "well": HOSTILE,
                "easting_m": 600_000.0 + 1000.0 * np.arange(count),
                "northing_m": 5_500_000.0,
                "ground_elevation_m": 12.0,
                "surface_temperature_degc": 10.0,
            }
        )
    )


@pytest.fixture(scope="session")
def results(wells):
    """Temperatures, gradients, heat flow and rejects of the wells."""
    names = wells["well"]
    temperatures = pd.DataFrame(
        {"well": [names[0], names[0], names[1]], "depth_m": [1000.0, 2000.0, 1500.0]}
    ).assign(temperature_degc=[40.0, 70.0, 55.0], method="dst", n_readings=1)
    slope = pd.DataFrame({"well": names[:2], "gradient_k_km": [30.0, 31.0], "n_points": [2, 1]})
    flow = pd.DataFrame({"well": names[:2], "heat_flow_mw_m2": [60.0, 61.0], "n_points": [2, 1]})
    rejected = pd.DataFrame(
        {
            "table": "readings",
            "source_file": "readings.csv",
            "source_line": [7, 3, 5],
            "well": [names[0], "of no known place", names[1]],
            "column": "temperature",
            "value": ["-999.25", "=1+1", "@SUM(A1)"],
            "code": "missing",
            "sentence": "no number",
        }
    )
    return {
        "temperatures": tables.Temperatures.conform(temperatures),
        "gradients": tables.Gradients.conform(slope),
        "heat_flow": tables.HeatFlow.conform(flow),
        "rejected": tables.Rejected.conform(rejected),
    }
