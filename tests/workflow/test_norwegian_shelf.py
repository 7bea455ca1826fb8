"""Real wells through the same workflow: the Norwegian shelf, from a config of its own.

Data: Sodir FactPages, exploration wellbores (NLOD), beside the project. The temperature is an
estimate at total depth, so of kind ``corrected``; 0 stands for missing.
"""

import csv
import json
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pytest
import rasterio
import yaml
from runs import ROOT, snakemake
from shared import shared_file

from basinheat import tables

# Counts and the raw gradient as the source's own notes state them (SOURCE.md of the data).
ROWS, WITH_VALUE, RAW_GRADIENT_K_KM = 2066, 1412, 36.9


@dataclass
class Shelf:
    """The source's rows, and the results."""

    rows: list
    results: Path

    def table(self, contract, name):
        """Return a table of the run."""
        return contract.load(self.results / name)

    def raster(self, name):
        """Return the cells of a delivered raster."""
        with rasterio.open(self.results / f"base/delivery/rasters/{name}.tif") as raster:
            return raster.read(1)

    def scores(self):
        """Return the scores of cross-validation."""
        text = (self.results / "base/tables/crossval/scores.json").read_text(encoding="utf-8")
        return json.loads(text)


def config(source):
    """Return the shelf's config; cells of 5 km, as wells stand tens of kilometres apart."""
    return {
        "run": "norway",
        "crs": "EPSG:23032",  # ED50 / UTM zone 32N
        "inputs": {
            "wells": [
                {
                    "file": str(source),
                    "crs": "EPSG:4230",  # ED50
                    "columns": {
                        "well": "wlbWellboreName",
                        "x": "wlbEwDesDeg",
                        "y": "wlbNsDecDeg",
                        "datum_elevation": "wlbKellyBushElevation",
                        "water_depth": "wlbWaterDepth",
                        "total_depth": "wlbTotalDepth",
                    },
                }
            ],
            "readings": [
                {
                    "file": str(source),
                    "columns": {
                        "well": "wlbWellboreName",
                        "depth": "wlbTotalDepth",
                        "vertical_depth": "wlbFinalVerticalDepth",
                        "temperature": "wlbBottomHoleTemperature",
                        "date": "wlbCompletionDate",
                    },
                    "kind": "corrected",
                    "missing": ["0"],
                }
            ],
        },
        # Sea floor at 5 degC, -0.5 degC in deep water (SOURCE.md), a smooth step between.
        "surface_temperature": {"model": "linear", "at_sea_level_degc": 5.0, "std_k": 1.5},
        "maps": {"cell_size_m": 5000, "depths_m": [1000, 2000, 3000], "isotherms_degc": [100]},
    }


@pytest.fixture(scope="module")
def shelf(tmp_path_factory):
    """Return a run of the shelf."""
    source = shared_file("data", "norwegian_shelf", "wellbore_exploration_all_2023.csv")
    folder = tmp_path_factory.mktemp("shelf")
    (folder / "norway.yaml").write_text(yaml.safe_dump(config(source)), encoding="utf-8")
    snakemake(ROOT, folder, "--configfile", "norway.yaml", "--cores", 2)
    with source.open(encoding="utf-8-sig", newline="") as file:
        return Shelf(list(csv.DictReader(file)), folder / "results" / "norway")


def test_wells_and_readings_kept_and_refused(shelf):
    assert len(shelf.rows) == ROWS
    stated = sum(float(row["wlbBottomHoleTemperature"] or 0) > 0 for row in shelf.rows)
    assert stated == WITH_VALUE
    wells = shelf.table(tables.Wells, "wells/wells.parquet")
    readings = shelf.table(tables.Readings, "wells/readings.parquet")
    refused = shelf.table(tables.Rejected, "wells/rejected.parquet")
    assert len(wells) == ROWS
    assert len(readings) + len(refused) == ROWS
    reasons = refused["code"].value_counts().to_dict()
    assert reasons.pop("no_temperature") == ROWS - WITH_VALUE
    # 35 degC at 4199 m in 15/5-7 A can't be; nothing else may be doubted away
    assert reasons == {"depth_unit_suspect": 1}
    assert refused.loc[refused["code"] == "depth_unit_suspect", "well"].tolist() == ["15/5-7 A"]
    assert (readings["kind"] == "corrected").all()


def test_raw_gradient_is_that_of_the_source(shelf):
    readings = shelf.table(tables.Readings, "wells/readings.parquet")
    told = ~readings["flags"].str.contains("assumed_vertical")  # as the source's check: by TVD
    raw = (readings["temperature_degc"] - 4.0) / readings["depth_m"] * 1000.0
    assert raw[told].median() == pytest.approx(RAW_GRADIENT_K_KM, abs=0.3)


def test_median_gradient(shelf):
    # The source takes 4 degC at the sea floor, here it is 5: 0.3 K/km at the median depth of 3 km.
    # The offset that all estimates may share (sigma 2 K, stated for kind corrected) adds 0.7 K/km.
    gradients = shelf.table(tables.Gradients, "base/tables/gradients.parquet")
    assert gradients["gradient_k_km"].median() == pytest.approx(
        RAW_GRADIENT_K_KM, abs=0.3 + 2 * 0.7
    )


@pytest.mark.parametrize("name", ["heat_flow_left_out", "temperature_left_out"])
def test_left_out_wells_lie_in_the_stated_interval(shelf, name):
    scores = shelf.scores()[name]
    assert 0.80 <= scores["coverage_90"] <= 0.97
    assert 0.6 < scores["msdr"] < 1.5


def test_the_map_beats_plain_predictors(shelf):
    scores = shelf.scores()
    baselines = scores["heat_flow_baselines_rmse"]
    assert scores["heat_flow_left_out"]["rmse"] < min(baselines.values())


def test_heat_flow_is_that_of_a_shelf(shelf):
    # 30 to 120 mW/m2 spans shields to young margins (Pollack et al. 1993, from memory).
    flow = shelf.raster("heat_flow")
    flow = flow[np.isfinite(flow)]
    assert len(flow) > 5000
    assert ((flow > 30.0) & (flow < 120.0)).mean() > 0.99
    assert 55.0 < np.median(flow) < 80.0


def test_rock_that_nobody_has_seen_is_uncertain_everywhere(shelf):
    # No well has layers: sediment is assumed, and its conductivity is as unknown at a well as
    # between wells. What is left at 3 km can't be less than 8 % of the rise (15 % an interval).
    rise, std = shelf.raster("temperature_3000m"), shelf.raster("temperature_3000m_std")
    known = np.isfinite(rise)
    assert np.median(std[known] / (rise[known] - 5.0)) > 0.08


def test_every_raster_opens(shelf):
    files = sorted((shelf.results / "base/delivery/rasters").glob("*.tif"))
    assert {"gradient.tif", "heat_flow.tif", "temperature_3000m_std.tif", "status.tif"} <= {
        file.name for file in files
    }
    for file in files:
        with rasterio.open(file) as raster:
            assert raster.crs.to_epsg() == 23032
            assert raster.count == 1
            assert raster.res == (5000.0, 5000.0)
            assert raster.read(1, masked=True).count() > 5000


def test_wells_stand_where_the_map_is(shelf):
    # From 56 to 74 degrees north: North Sea, Norwegian Sea and Barents Sea, each with cells.
    flow = shelf.table(tables.HeatFlow, "base/tables/heat_flow.parquet")
    wells = shelf.table(tables.Wells, "base/tables/wells.parquet").set_index("well")
    north = wells.loc[flow["well"], "latitude_deg"]
    for low, high in ((56.0, 62.0), (62.0, 69.0), (69.0, 75.0)):
        assert north.between(low, high).sum() > 50
    with rasterio.open(shelf.results / "base/delivery/rasters/heat_flow.tif") as raster:
        at = wells.loc[flow["well"], ["easting_m", "northing_m"]].to_numpy()
        assert np.isfinite([value[0] for value in raster.sample(at)]).all()
