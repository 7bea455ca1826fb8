"""Ingest as a whole: nothing vanishes, nothing depends on the order of files, facts are placed."""

import numpy as np
import pandas as pd
import pytest
from ingest_case import codes, degc, flags, ordinary_readings, prepare
from shared import shared_file

from basinheat import ingest
from basinheat.errors import UserError
from basinheat.ingest import stage
from basinheat.settings.model import Settings
from basinheat.tables import Layers, Readings, Rejected, Wells


def test_the_tables_keep_their_contracts(tmp_path):
    out = prepare(tmp_path)
    assert list(out.wells) == list(Wells.columns)
    assert list(out.readings) == list(Readings.columns)
    assert list(out.layers) == list(Layers.columns)
    assert list(out.rejected) == list(Rejected.columns)
    assert len(out.wells) == len(out.readings) == 16
    assert out.rejected.empty


BAD = """\
,2000,70,,,,,,
N00,,70,,,,,,
N00,deep,70,,,,,,
N00,2000,,,,,,,
N00,2000,warm,,,,,,
N00,-2000,70,,,,,,
N00,4,12,,,,,,
N00,2000,70,log,,,,,
N00,2000,70,calculated,,,,,
N00,2000,EST 70,,,,,,
NOBODY,2000,70,,,,,,
n-01,2000,70,,,,,,
N00,2000,700,,,,,,
N00,2000,10.5,,,,,,
N00,2000
"""
EXPECTED = [
    "no_well",
    "no_depth",
    "not_a_number",
    "no_temperature",
    "not_a_number",
    "depth_negative",
    "depth_above_ground",
    "unknown_kind",
    "estimated_value",
    "estimated_value",
    "unknown_well",
    "unknown_well",
    "temperature_impossible",
    "not_above_surface_temperature",
    "wrong_number_of_cells",
]


def test_every_bad_row_has_its_line_code_and_way_out(tmp_path):
    out = prepare(tmp_path, readings=BAD)
    ledger = out.rejected.sort_values("source_line")
    assert ledger["source_line"].tolist() == list(range(18, 33))  # header and 16 ordinary before
    assert ledger["code"].tolist() == EXPECTED
    assert (ledger["source_file"] == "readings.csv").all()
    assert (ledger["table"] == "readings").all()
    assert ledger["sentence"].str.len().min() > 15
    near = ledger.loc[ledger["well"] == "n-01", "sentence"].item()
    assert '"N01"' in near
    assert len(out.readings) == 16


def test_a_bad_optional_cell_costs_the_cell_only(tmp_path):
    out = prepare(
        tmp_path,
        readings=f"N00,1505,{degc(1505)},,soon,4,8.5,6/4/84,1\nN01,1505,{degc(1505)},,400,,,,\n",
    )
    assert len(out.readings) == 18
    assert codes(out, table="readings") == []
    assert codes(out, table="values") == [
        "date_dropped",
        "hole_diameter_dropped",
        "since_circulation_dropped",
        "since_circulation_dropped",
    ]
    row = out.readings[out.readings["depth_m"] == 1500.0].set_index("well")
    assert row["since_circulation_h"].isna().all()
    assert row.loc["N00", "circulation_h"] == 4.0
    assert "date_dropped" in row.loc["N00", "flags"]


def test_rows_of_a_refused_well(tmp_path):
    out = prepare(tmp_path, wells="BAD,,6010000,100,105,,3000\n", readings="BAD,2000,70,,,,,,\n")
    assert codes(out, "BAD", "wells") == ["no_coordinates"]
    assert codes(out, "BAD", "readings") == ["well_rejected"]


def test_wells_without_readings_are_listed(tmp_path):
    out = prepare(tmp_path, wells="DRY,515000,6015000,100,105,,3000\n")
    assert "no_readings" in flags(out.wells, "DRY")


def test_order_of_rows_and_files_changes_nothing(tmp_path):
    rows = (ordinary_readings() + BAD).splitlines(keepends=True)
    here, there = tmp_path / "a", tmp_path / "b"
    here.mkdir()
    there.mkdir()
    first = prepare(here, readings="".join(rows), base=True)
    mixed = [rows[i] for i in np.random.default_rng(1).permutation(len(rows))]
    second = prepare(there, readings="".join(mixed), base=True)
    content = [name for name in Readings.columns if not name.startswith("source")]
    pd.testing.assert_frame_equal(first.readings[content], second.readings[content])
    assert codes(first) == codes(second)
    assert codes(first).count("merged") == 16


def test_globs_are_read_in_order(tmp_path):
    for name, depth in (("r2.csv", 1505), ("r1.csv", 1605)):
        (tmp_path / name).write_text(f"well,depth,temperature\nN00,{depth},{degc(depth)}\n")
    out = prepare(tmp_path, inputs={"readings": [{"file": "r*.csv"}, {"file": "r1.csv"}]})
    added = out.readings[out.readings["source_file"].isin(["r1.csv", "r2.csv"])]
    assert added["depth_m"].tolist() == [1500.0, 1600.0]
    assert codes(out).count("merged") >= 1


def test_the_same_reading_in_other_units_has_the_same_identity(tmp_path):
    (tmp_path / "us.csv").write_text("API,D,T\nN00,5000,150\n")
    (tmp_path / "si.csv").write_text("well,depth,temperature\nN00,1524,65.5555555555556\n")
    us = {
        "file": "us.csv",
        "columns": {"well": "API", "depth": "D", "temperature": "T"},
        "units": {"depth": "ft", "temperature": "degF"},
    }
    out = prepare(tmp_path, inputs={"readings": [us, {"file": "si.csv"}]})
    assert len(out.readings) == 1
    assert codes(out) == ["merged"]


def test_coordinates_and_units_of_a_file(tmp_path):
    out = prepare(
        tmp_path,
        base=False,
        well_header="API,LONG,LAT,GL,KB,WD\n",
        wells="0501,3.0,54.0,1000,1016.4042,\nSEA,2.5,57.0,,82.021,1115.4856\n",
        wells_file={
            "crs": "EPSG:4326",
            "columns": {
                "well": "API",
                "x": "LONG",
                "y": "LAT",
                "ground_elevation": "GL",
                "datum_elevation": "KB",
                "water_depth": "WD",
            },
            "units": {"ground_elevation": "ft", "datum_elevation": "ft", "water_depth": "ft"},
        },
        readings="0501,2005,70,,,,,,\nSEA,3200,95,,,,,,\n",
    )
    wells = out.wells.set_index("well")
    # on the central meridian of zone 31 the easting is 500 km by definition
    assert wells.loc["0501", "easting_m"] == pytest.approx(500000.0)
    assert wells.loc["0501", "longitude_deg"] == pytest.approx(3.0)
    assert wells.loc["0501", "ground_elevation_m"] == pytest.approx(304.8)
    assert wells.loc["SEA", "ground_elevation_m"] == pytest.approx(-340.0, abs=1e-3)
    depths = out.readings.set_index("well")["depth_m"]
    assert depths["0501"] == pytest.approx(2000.0, abs=1e-3)
    assert depths["SEA"] == pytest.approx(2835.0, abs=2e-3)


def test_vertical_depth_survey_and_neither(tmp_path):
    (tmp_path / "s.csv").write_text(
        "well,depth,inclination,azimuth\nN01,1005,0,\nN01,1305,90,0\nN01,900,1,0\nN01,900,2,0\n"
        "N09,-3,0,0\n"
    )
    readings = (
        "well,depth,vertical_depth,temperature\nN00,3005,2005,70\nN01,1305,,50\nN01,1205,,49\n"
        "N02,,1505,55\nN03,2005,,70\n"
    )
    (tmp_path / "own.csv").write_text(readings)
    out = prepare(
        tmp_path,
        inputs={"surveys": [{"file": "s.csv"}], "readings": [{"file": "own.csv"}]},
    )
    rows = out.readings.set_index("well")
    assert rows.loc["N00", "depth_m"] == 2000.0
    assert rows.loc["N02", "depth_m"] == 1500.0
    assert rows.loc["N03", "depth_std_m"] == pytest.approx(20.05)  # 1 % of measured depth
    assert flags(out.readings, "N03") == {"assumed_vertical"}
    assert flags(out.readings, "N00") == set()
    bottom = out.readings[out.readings["measured_depth_m"] == 1305.0]
    radius = 600.0 / np.pi  # of a quarter circle of 300 m
    assert bottom["depth_m"].item() == pytest.approx(1000.0 + radius)
    assert codes(out, table="surveys") == ["no_depth", "station_conflict", "station_conflict"]


def test_layers(tmp_path):
    (tmp_path / "l.csv").write_text(
        "well,top,base,lithology,conductivity,porosity,gamma_ray\n"
        "N00,0,505,shale,,0.3,\nN00,505,1005,sandstone,2.8,,60\nN00,0,1005,group,,,\n"
        "N00,900,1205,salt,,,\nN00,1205,1205,salt,,,\nN00,1205,1300,,,,\n"
        "N00,1205,1400,salt,,30,\nWHO,0,1,salt,,,\n"
    )
    out = prepare(tmp_path, inputs={"layers": [{"file": "l.csv"}]})
    rows = out.layers
    assert rows["lithology"].tolist() == ["shale", "sandstone", "salt"]
    assert rows["top_m"].tolist() == [0.0, 500.0, 1200.0]
    assert rows["base_m"].tolist() == [500.0, 1000.0, 1395.0]
    # Bücker and Rybach (1996), check value F5_60
    assert rows["heat_production_uw_m3"][1] == pytest.approx(0.93536)
    assert codes(out, table="layers") == [
        "layer_overlap",
        "layer_overlap",
        "no_rock",
        "no_thickness",
        "unknown_well",
    ]
    assert codes(out, table="values") == ["porosity_dropped"]


def test_elevation_raster(tmp_path):
    import rasterio

    with rasterio.open(
        tmp_path / "dem.tif",
        "w",
        driver="GTiff",
        width=20,
        height=20,
        count=1,
        dtype="float32",
        crs="EPSG:32631",
        transform=rasterio.transform.from_origin(450000, 6100000, 10000, 10000),
    ) as raster:
        raster.write(np.full((1, 20, 20), 110.0, "float32"))
    out = prepare(
        tmp_path,
        wells="UP,515000,6015000,328,333,,\nNO,515500,6015000,,,,\n",
        inputs={"rasters": {"elevation": "dem.tif"}},
    )
    assert "elevation_suspect" in flags(out.wells, "UP")
    assert "elevation_suspect" not in flags(out.wells, "N00")
    wells = out.wells.set_index("well")
    assert wells.loc["NO", "ground_elevation_m"] == pytest.approx(110.0)
    assert {"ground_elevation_from_raster", "rig_floor_assumed"} <= flags(out.wells, "NO")


def test_a_well_without_its_surface_temperature_is_refused(tmp_path):
    header = "well,x,y,ground_elevation,datum_elevation,surface_temperature\n"
    out = prepare(
        tmp_path,
        base=False,
        well_header=header,
        wells="A,500000,6000000,100,105,11\nB,501000,6000000,100,105,\n",
        readings="A,2005,70,,,,,,\nB,2005,70,,,,,,\n",
        surface_temperature={"model": "column"},
    )
    assert codes(out, "B") == ["no_surface_temperature", "well_rejected"]
    assert out.wells["surface_temperature_degc"].tolist() == [11.0]


def test_faults_of_files_are_told_at_once(tmp_path):
    with pytest.raises(UserError) as told:
        prepare(tmp_path, inputs={"layers": [{"file": "no.csv"}, {"file": "none*.csv"}]})
    assert len(told.value.faults) == 2


def test_braces_in_names_are_only_text(tmp_path):
    out = prepare(
        tmp_path,
        wells="{well.__class__},515000,6015000,100,105,,3000\n",
        readings="{well.__class__},2000,999,,,,,,\n{0},2000,70,,,,,,\n",
    )
    assert codes(out, "{well.__class__}") == ["temperature_impossible"]
    assert codes(out, "{0}") == ["unknown_well"]


def test_a_lost_row_stops_the_run(tmp_path, monkeypatch):
    monkeypatch.setattr(
        stage, "screen_wells", lambda table, *rest: table.where(np.arange(len(table)) > 0)
    )
    with pytest.raises(RuntimeError, match="16 rows read, 15 kept"):
        prepare(tmp_path)


def test_norwegian_shelf():
    """Open data of the Norwegian regulator: the notes beside it count 530 zero and 124 blank
    temperatures among 2066 wellbores, 184 of the others without a vertical depth, and a median
    gradient of 36.9 K/km from 4 degC at the sea floor.
    """
    path = shared_file("data", "norwegian_shelf", "wellbore_exploration_all_2023.csv")
    table = {"file": path.name}
    config = {
        "run": "norway",
        "crs": "EPSG:23032",
        "surface_temperature": {"model": "constant", "temperature_degc": 4.0, "sea_floor_degc": 4.0}
        | {"deep_sea_floor_degc": 4.0},
        "inputs": {
            "wells": [
                table
                | {"crs": "EPSG:4230"}
                | {
                    "columns": {
                        "well": "wlbWellboreName",
                        "x": "wlbEwDesDeg",
                        "y": "wlbNsDecDeg",
                        "datum_elevation": "wlbKellyBushElevation",
                        "water_depth": "wlbWaterDepth",
                        "total_depth": "wlbTotalDepth",
                    }
                }
            ],
            "readings": [
                table
                | {"kind": "corrected", "missing": ["0"]}
                | {
                    "columns": {
                        "well": "wlbWellboreName",
                        "depth": "wlbTotalDepth",
                        "vertical_depth": "wlbFinalVerticalDepth",
                        "temperature": "wlbBottomHoleTemperature",
                    }
                }
            ],
        },
    }
    out = ingest.prepare(Settings.model_validate(config), path.parent)
    assert len(out.wells) == 2066
    assert codes(out, table="readings").count("no_temperature") == 530 + 124
    assert len(out.readings) >= 1405
    vertical = ~out.readings["flags"].str.contains("assumed_vertical").to_numpy()
    assert (~vertical).sum() == pytest.approx(184, abs=2)
    gradient = 1000.0 * (out.readings["temperature_degc"] - 4.0) / out.readings["depth_m"]
    assert gradient[vertical].median() == pytest.approx(36.9, abs=0.2)


def test_a_place_that_no_map_holds_is_refused_among_few_wells_too(tmp_path):
    """No map reaches farther than twice round the Earth (common practice, no source)."""
    wells = "A,500000,6000000,100,105,,\nB,1e308,6000000,100,105,,\nC,500000,-2e8,100,105,,\n"
    out = prepare(tmp_path, base=False, wells=wells, readings=f"A,2005,{degc(2005)},,,,,,\n")
    assert codes(out, table="wells") == ["coordinates_impossible"] * 2
    assert out.wells["well"].tolist() == ["A"]
