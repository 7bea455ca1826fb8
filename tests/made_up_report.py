"""A made-up run for tests of the report: few cells, few wells, numbers one can reckon by hand."""

import numpy as np
import pandas as pd

from basinheat import tables
from basinheat.conductivity import catalogue
from basinheat.delivery.metadata import About
from basinheat.grid import Grid
from basinheat.report.contents import Contents
from basinheat.settings.model import Settings

ROWS, COLS = 40, 60
WELLS = 60  # enough to be no reason for a warning


def settings(**changes):
    """Return complete settings as the rule hands them over."""
    config = {
        "run": "made_up",
        "crs": "EPSG:32631",
        "inputs": {"wells": [{"file": "wells.csv"}], "readings": [{"file": "readings.csv"}]},
        "maps": {"depths_m": [1000.0, 2000.0], "isotherms_degc": [100.0]},
        **changes,
    }
    return Settings(**config).model_dump(mode="json", exclude={"scenarios"})


def contents(names=None, **changes):
    """Return a run in which nothing calls for a look; the wells may be given names."""
    grid = Grid("EPSG:32631", 500_000.0, 5_840_000.0, 1000.0, ROWS, COLS)
    names = list(names or [])
    names += [f"W-{i:02d}" for i in range(WELLS - len(names))]
    made = {
        "about": About("made_up", "base", ("equilibrium", "conductive_recovery"), 2000.0, 6000.0),
        "grid": grid,
        "maps": _maps(),
        **_tables(names),
        **_records(),
        "rocks": catalogue.load(),
        "settings": settings(),
        "versions": {"python": "3.11.0", "numpy": "2.0.0"},
    }
    return Contents(**{**made, **changes})


def _maps():
    """The westernmost column has no basis; from column 50 on readings are shallow."""
    row, col = (a.ravel() for a in np.meshgrid(np.arange(ROWS), np.arange(1, COLS), indexing="ij"))
    flow = 50.0 + 20.0 * col / COLS
    maps = pd.DataFrame({"row": row, "col": col, "well_distance": 500.0 * (1 + row)})
    maps["deepest_reading"] = np.where(col < 50, 2500.0, 1500.0)
    maps["heat_flow"], maps["heat_flow_std"] = flow, 4.0
    maps["gradient"], maps["gradient_std"] = flow / 2.0, 2.0
    for depth in (1000.0, 2000.0):
        maps[f"temperature_{depth:g}m"] = 10.0 + flow / 2.0 * depth / 1000.0
        maps[f"temperature_{depth:g}m_std"] = 2.0 * depth / 1000.0
    maps["isotherm_100c"] = np.select([col < 30, col < 55], [np.nan, 2400.0], 1400.0)
    maps["isotherm_100c_std"] = np.where(col < 30, np.nan, 150.0)
    maps["status"] = 1
    return tables.Maps.conform(maps)


def _tables(names):
    count = len(names)
    east, north = 501_000.0 + 900.0 * np.arange(count), 5_805_000.0 + 500.0 * np.arange(count)
    depth = np.linspace(800.0, 2600.0, count)
    z = np.resize([0.5, -0.5, 1.2, -1.2, 0.1], count)
    wells = pd.DataFrame({"well": names, "easting_m": east, "northing_m": north, "flags": ""})
    readings = pd.DataFrame({"well": names, "depth_m": depth, "flags": "assumed_vertical"})
    temperatures = pd.DataFrame(
        {"well": names, "depth_m": depth, "temperature_degc": 10.0 + 0.03 * depth}
    ).assign(
        temperature_std_k=3.0,
        well_std_k=1.0,
        shared_std_k=0.5,
        raw_temperature_degc=0.03 * depth,
        correction_k=10.0,
        method="conductive_recovery",
        variance_class="recovery:single",
        passed_over="horner: fewer than 2 timed readings",
    )
    left_out = temperatures[["well", "depth_m", "temperature_degc", "method"]].assign(
        left_out_k=-4.0 * z, left_out_std_k=4.0, predicted_degc=temperatures.temperature_degc
    )
    flow = pd.DataFrame({"well": names, "value": 60.0 + 5.0 * z, "value_std": 3.0})
    rejected = pd.DataFrame(
        {
            "table": ["wells", "readings", "readings"],
            "source_file": ["wells.csv", "readings.csv", "readings.csv"],
            "source_line": [3, 5, 9],
            "well": names[0],
            "code": ["no_coordinates", "merged", "depth_negative"],
            "sentence": ["the well has no place on the map.", "twice.", f"{names[0]}: negative."],
        }
    )
    later = rejected.tail(1).assign(code="no_method")
    return {
        "wells": tables.Wells.conform(wells),
        "readings": tables.Readings.conform(readings),
        "layers": tables.Layers.empty(),
        "rejected": tables.Rejected.conform(rejected),
        "rejected_later": tables.Rejected.conform(later),
        "first_look": {"files": [], "questions": []},
        "temperatures": tables.Temperatures.conform(temperatures),
        **_compared(count),
        "resistances": tables.Resistances.conform(
            temperatures[["well", "depth_m"]].assign(origin="catalogue")
        ),
        "heat_flow": tables.HeatFlow.conform(
            pd.DataFrame({"well": names, "heat_flow_mw_m2": 60.0})
        ),
        "sources": tables.Sources.conform(
            pd.DataFrame(
                {
                    "source": ["surface_temperature", "conductivity:shale"],
                    "prior_std": [1.0, 0.2],
                    "mean": [0.3, -0.1],
                    "std": [0.6, 0.1],
                    "unit": ["K", "ln"],
                    "n_wells": count,
                }
            )
        ),
        "calibration": _pairs(),
        "crossval_heat_flow": tables.CrossValidation.conform(
            flow.assign(predicted=60.0, predicted_std=5.0, z_score=z)
        ),
        "crossval_temperature": tables.Closure.conform(left_out),
    }


PAIRS = 10


def _pairs():
    """Ten pairs: the calibration is off by -2 above and +2 K below, Horner always by -3 K."""
    anchors = np.resize(["equilibrium", "dst"], PAIRS)
    place = pd.DataFrame(
        {
            "well": [f"W-{i:02d}" for i in range(PAIRS)],
            "depth_m": np.linspace(1000.0, 2800.0, PAIRS),
            "anchor_well": [f"W-{i:02d}" for i in range(PAIRS)],
            "anchor_kind": anchors,
            "anchor_temperature_degc": 60.0,
            "anchor_std_k": 1.5,
            "since_circulation_h": np.where(anchors == "dst", np.nan, 10.0),
            "taught": True,
        }
    )
    own = np.where(np.arange(PAIRS) < PAIRS // 2, -2.0, 2.0)
    return tables.Calibration.conform(
        pd.concat(
            [
                place.assign(method="local_calibration", chosen=False, residual_k=own),
                place.assign(method="horner", chosen=True, residual_k=-3.0),
            ]
        )
    )


def _calibration():
    """A constant is chosen, a line predicts no better, the rest is refused."""
    found = {"pairs": PAIRS, "wells": PAIRS, "left_out_bias_k": 0.0, "scatter_k": 2.1}
    found |= {"top_m": 1000.0, "base_m": 2800.0}
    one, line = {"constant": 10.0}, {"constant": 10.0, "depth": 1.0}
    refused = {"pairs": PAIRS, "wells": PAIRS, "chosen": False, "refused": "10 pairs, it needs 20"}
    return {
        "pairs": PAIRS,
        "wells": PAIRS,
        "pairs_in_one_well": PAIRS,
        "steps": {
            "constant": found
            | {"chosen": True, "left_out_rmse_k": 2.3, "coefficients_k": one}
            | {"coefficients_std_k": {"constant": 0.7}},
            "linear": found
            | {"chosen": False, "left_out_rmse_k": 2.29, "coefficients_k": line}
            | {"coefficients_std_k": {"constant": 0.7, "depth": 1.2}},
            **{
                name: dict(refused)
                for name in ("quadratic", "quadratic_with_time", "scaled_with_time")
            },
        },
    }


def _compared(count):
    """Two methods and the chosen one in two depth intervals; nothing stands out."""
    parts = [
        pd.DataFrame({"top_m": [np.nan, 500.0, 1000.0], "base_m": [np.nan, 1000.0, 1500.0]}).assign(
            method=method, sets=sets, n_sets=count, n_treated=count // share,
            share_treated=1.0 / share, correction_k=9.0 + share, correction_low_k=8.0,
            correction_high_k=13.0, difference_k=share - 1.0, total_std_k=5.0,
        )
        for method, share in (("horner", 4), ("conductive_recovery", 1), ("chosen", 1))
        for sets in ("own", "common")
    ]  # fmt: skip
    line = {"n_sets": count, "n_wells": count, "top_m": 800.0, "base_m": 2600.0}
    line |= {"slope_mw_m2": 60.0, "intercept_k": 0.4, "intercept_std_k": 0.8, "expected_std_k": 1.1}
    groups = [("raw", "", False), ("method", "horner", False), ("class", "recovery:single", True),
              ("final", "", True)]  # fmt: skip
    return {
        "correction_summary": tables.CorrectionSummary.conform(pd.concat(parts)),
        "anchor_differences": tables.AnchorDifferences.conform(
            pd.DataFrame(
                {
                    "method": ["raw", "horner"],
                    "anchor": "equilibrium",
                    "n_pairs": 9,
                    "n_wells": 8,
                    "difference_k": [-9.0, -1.0],
                    "difference_std_k": 0.7,
                    "spread_k": 2.0,
                    "chosen_difference_k": 0.3,
                }
            )
        ),
        "intercepts": tables.Intercepts.conform(
            pd.DataFrame([{"group": g, "subject": s, "in_use": u, **line} for g, s, u in groups])
        ),
        "method_sigmas": tables.MethodSigmas.conform(
            pd.DataFrame(
                {
                    "method": ["horner", "conductive_recovery"],
                    "title": ["Horner plot", "Recovery"],
                    "kind": "bht",
                    "variance_class": ["method:horner", "recovery:single"],
                    "n_estimates": [0, count],
                    "known_bias": "low",
                    "temperature_std_k": 5.0,
                    "scale": [np.nan, 1.2],
                    "base_m": np.inf,
                }
            )
        ),
    }


def _records():
    score = {"n": WELLS, "bias": 0.1, "rmse": 4.0, "msdr": 1.0}
    score |= {f"coverage_{share}": share / 100 for share in (50, 80, 90, 95)}
    covariance = {
        "model": "exponential", "sill": 60.0, "range_m": 40_000.0, "nugget": 1.0,
        "azimuth_deg": 0.0, "ratio": 1.0,
    }  # fmt: skip
    measured = {"lag_m": [1e3, 2e4, 4e4], "gamma": [2.0, 40.0, 58.0], "pairs": [30, 90, 120]}
    group = {
        "top_m": 0.0, "base_m": 1000.0, "wells": 40, "experimental": measured,
        "covariance": {**covariance, "sill": 0.03, "nugget": 0.001},
    }  # fmt: skip
    names = ("heat_flow_left_out", "heat_flow_block_left_out", "temperature_closure",
             "temperature_left_out")  # fmt: skip
    return {
        "scores": {
            **{name: dict(score) for name in names},
            "heat_flow_baselines_rmse": {"mean": 8.0, "nearest_well": 6.0},
        },
        "heat_flow_model": {
            "covariance": covariance,
            "experimental": measured,
            "variance_scales": {"recovery:single": 1.2},
        },
        "structure_model": {"groups": [group], "vertical_correlation_m": 500.0},
        "recovery": {
            "conductive_recovery": {"law": {"slope": 0.35}, "sets_that_taught": 12},
            "calibration": _calibration(),
        },
    }
