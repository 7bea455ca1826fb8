"""Each screening rule on a case that it is for, and on one that it must leave alone.

The rules are common practice (METHODS K); the cases are our own.
"""

import re
from io import StringIO
from pathlib import Path

import numpy as np
import pandas as pd
import pytest
from ingest_case import HEIGHT, SURFACE, codes, degc, flags, prepare

W = "W,515000,6015000,100,105,,{total}\n"


def well(total=""):
    return W.format(total=total)


def test_hot_wells_are_warned_about_and_kept(tmp_path):
    """A geothermal well of 120 K/km among 30 K/km, in metres and degC (METHODS D: never reject)."""
    rows = "".join(f"W,{z},{degc(z, 120.0):.1f},,,,,,\n" for z in (1005, 1505, 2005))
    out = prepare(tmp_path, wells=well(2100), readings=rows)
    kept = out.readings[out.readings["well"] == "W"]
    assert len(kept) == 3
    assert kept["temperature_degc"].max() == pytest.approx(degc(2005, 120.0), abs=0.05)
    assert kept["flags"].str.contains("gradient_high").all()
    assert kept["flags"].str.contains("spatial_outlier").all()


def test_cold_wells_are_warned_about_and_kept(tmp_path):
    out = prepare(tmp_path, wells=well(), readings=f"W,505,{degc(505, 8.0)},,,,,,\n")
    assert "gradient_low" in flags(out.readings, "W")


FT = {"depth": "ft", "temperature": "degF"}


def in_feet(depth_m, temperature_degc):
    return f"{depth_m / 0.3048:.0f},{temperature_degc * 1.8 + 32:.1f}"


def us_case(tmp_path, row, total="", others=30.0, **case):
    """Return ingest of a table in feet and Fahrenheit, with one row more."""
    rows = "".join(
        f"N{i:02d},{in_feet(2005 + 50 * i, degc(2005 + 50 * i, others - 1.5 + 0.2 * i))},,,,,,\n"
        for i in range(16)
    )
    header = (
        "well,depth,temperature,kind,since_circulation,circulation,hole_diameter,date,log_run\n"
    )
    folder = tmp_path / "us"
    folder.mkdir(exist_ok=True)
    (folder / "us.csv").write_text(header + rows + row)
    file = {"file": "us.csv", "units": FT}
    return prepare(folder, wells=well(total), inputs={"readings": [file]}, **case)


def test_celsius_in_a_fahrenheit_column(tmp_path):
    """100 degC at 3 km, written 100 beside Fahrenheit: 9 K/km as read, 30 as meant."""
    out = us_case(tmp_path, "W,9859,100,,,,,,\n")
    (row,) = out.rejected.to_dict("records")
    assert row["code"] == "temperature_unit_suspect"
    assert "degC" in row["sentence"] and row["reading_id"] in row["sentence"]
    assert row["value"] == "100"


def test_metres_in_a_feet_column(tmp_path):
    """2505 m written beside feet: three times too hot, and the total depth agrees with metres."""
    out = us_case(tmp_path, f"W,2505,{degc(2505) * 1.8 + 32:.1f},,,,,,\n", total=2600)
    assert codes(out) == ["depth_unit_suspect"]


def test_feet_in_a_metre_column(tmp_path):
    out = prepare(tmp_path, wells=well(), readings=f"W,9859,{degc(3005)},,,,,,\n")
    assert codes(out) == ["depth_unit_suspect"]
    assert "in ft" in out.rejected["sentence"].item()


def test_fahrenheit_in_a_celsius_column(tmp_path):
    """200 degF at 2.8 km: 68 K/km as read and 29 as meant, above 180 degrees and shallow."""
    out = prepare(tmp_path, wells=well(), readings="W,2805,200,,,,,,\n")
    assert codes(out) == ["temperature_unit_suspect"]


def test_a_hot_reading_that_its_neighbours_do_not_contradict_stays(tmp_path):
    """Where all wells are hot, a unit that would make one ordinary proves nothing."""
    hot = 95.0
    row = f"W,{in_feet(2505, degc(2505, hot))},,,,,,\n"
    out = us_case(tmp_path, row, others=hot)
    assert codes(out) == []
    assert {"gradient_high", "depth_unit_suspect"} <= flags(out.readings, "W")


def test_a_hot_reading_that_its_own_well_supports_stays(tmp_path):
    rows = "".join(f"W,{in_feet(z, degc(z, 95.0))},,,,,,\n" for z in (1505, 2505))
    out = us_case(tmp_path, rows)
    assert codes(out) == []
    assert (out.readings["well"] == "W").sum() == 2


def test_a_hot_reading_that_the_total_depth_supports_stays(tmp_path):
    out = us_case(tmp_path, f"W,{in_feet(2505, degc(2505, 95.0))},,,,,,\n", total=2600)
    assert codes(out) == []


def test_without_neighbours_a_hot_reading_stays(tmp_path):
    out = prepare(tmp_path, base=False, wells=well(), readings="W,2805,200,,,,,,\n")
    assert "temperature_unit_suspect" in flags(out.readings, "W")


def test_an_outlier_is_flagged_and_an_ordinary_spread_is_not(tmp_path):
    out = prepare(tmp_path, wells=well(), readings=f"W,2505,{degc(2505, 52.0)},,,,,,\n")
    assert "spatial_outlier" in flags(out.readings, "W")
    others = out.readings[out.readings["well"] != "W"]
    assert not others["flags"].str.contains("outlier").any()


def test_copied_temperature_counts_once(tmp_path):
    rows = f"W,2005,{degc(2005)},,20,4,,,3\nW,2005,{degc(2005)},,8,4,,,1\nW,2005,72,,30,4,,,4\n"
    out = prepare(tmp_path, wells=well(), readings=rows)
    assert codes(out) == ["copied_temperature"]
    kept = out.readings[out.readings["well"] == "W"].sort_values("since_circulation_h")
    assert kept["since_circulation_h"].tolist() == [8.0, 30.0]
    assert "copied_temperature" in kept["flags"].iloc[0]


def test_a_header_copied_to_another_depth(tmp_path):
    rows = f"W,1505,{degc(2505)},,,,,,1\nW,2505,{degc(2505)},,,,,,2\n"
    out = prepare(tmp_path, wells=well(), readings=rows)
    assert codes(out) == ["repeated_temperature"]
    kept = out.readings[out.readings["well"] == "W"]
    assert kept["measured_depth_m"].tolist() == [2505.0]
    assert "repeated_temperature" in kept["flags"].item()


@pytest.mark.parametrize("kind", ["bht", "dst", "equilibrium", "corrected"])
def test_tables_of_one_kind_or_none(tmp_path, kind):
    readings = f"W,2005,{degc(2005)},,,,,,\nW,2505,{degc(2505)},,,,,,\n"
    out = prepare(
        tmp_path, base=False, wells=well(), readings=readings, readings_file={"kind": kind}
    )
    assert out.readings["kind"].tolist() == [kind, kind]
    assert prepare(tmp_path, base=False, wells=well()).readings.empty
    assert prepare(tmp_path, base=False).wells.empty


def test_equal_temperatures_that_were_read_apart_stay(tmp_path):
    """Early on, mud has the deep rock as cool as the shallow one is hours later."""
    rows = f"W,1505,{degc(1505)},,20,4,,,1\nW,2505,{degc(1505)},,4,4,,,2\n"
    assert codes(prepare(tmp_path, wells=well(), readings=rows)) == []


def test_equal_temperatures_close_by_stay(tmp_path):
    rows = "W,2405,84,,,,,,1\nW,2505,84,,,,,,2\n"
    assert codes(prepare(tmp_path, wells=well(), readings=rows)) == []


def test_cooling_with_time(tmp_path):
    rows = "W,2005,66,,8,4,,,\nW,2005,64,,14,4,,,\nN00,1505,40,,8,4,,,\nN00,1505,44,,14,4,,,\n"
    out = prepare(tmp_path, wells=well(), readings=rows)
    doubted = out.readings["flags"].str.contains("cooling_with_time")
    assert out.readings.loc[doubted, "well"].tolist() == ["W", "W"]


def test_inconsistent_gradient(tmp_path):
    rows = "W,2005,70,,,,,,\nW,2505,71,,,,,,\nN00,2505,85,,,,,,\n"
    out = prepare(tmp_path, wells=well(), readings=rows)
    doubted = out.readings["flags"].str.contains("inconsistent_gradient")
    assert out.readings.loc[doubted, "well"].tolist() == ["W", "W"]


@pytest.mark.parametrize(
    ("row", "code"),
    [
        ("W,2005,70,,,60,,,", "circulation_long"),
        ("W,2005,70,,3,6,,,", "circulation_exceeds_rest"),
        ("W,2505,85,,,,,,", "deeper_than_total_depth"),
        ("W,2005,70,,,,,1948-05-01,", "old_reading"),
    ],
)
def test_warnings(tmp_path, row, code):
    out = prepare(tmp_path, wells=well(2400), readings=row + "\n")
    assert code in flags(out.readings, "W")
    assert codes(out) == []


def test_old_readings_are_less_certain(tmp_path):
    """1 K of a reading that states none, 2 K more before 1950, in quadrature (METHODS K, Q20)."""
    out = prepare(tmp_path, wells=well(), readings="W,2005,70,,,,,1948,\n")
    row = out.readings.set_index("well").loc["W"]
    assert row["temperature_std_k"] == pytest.approx(5.0**0.5)


@pytest.mark.parametrize(
    ("x", "y", "code", "told"),
    [
        (54.3, 3.2, "coordinates_suspect", "exchanged"),
        (-3.2, 54.3, "coordinates_suspect", "sign of x"),
        (3.2, -54.3, "coordinates_suspect", "sign of y"),
        (54.3, 203.0, "coordinates_impossible", "no place"),
        (0, 0, "coordinates_zero", "not known"),
        (60.0, 40.0, "coordinates_suspect", "far from all"),
    ],
)
def test_slips_of_coordinates(tmp_path, x, y, code, told):
    rows = "".join(f"N{i:02d},{3 + i % 4 / 10},{54 + i // 4 / 10},100,105,,\n" for i in range(16))
    out = prepare(
        tmp_path,
        base=False,
        wells=f"{rows}SLIP,{x},{y},100,105,,\n",
        wells_file={"crs": "EPSG:4326"},
    )
    assert codes(out, "SLIP") == [code]
    assert told in out.rejected["sentence"].item()
    assert len(out.wells) == 16


def test_another_group_of_wells_far_away_is_kept(tmp_path):
    rows = "".join(f"F{i},{900000 + 9000 * i},6000000,100,105,,\n" for i in range(5))
    out = prepare(tmp_path, wells=rows)
    assert len(out.wells) == 21


def readme_wells():
    """Return the rows of the nine wells of the README's example."""
    text = (Path(__file__).parents[2] / "README.md").read_text(encoding="utf-8")
    table = re.search(r"```csv\n(well,x,y.*?)```", text, re.DOTALL).group(1)
    return pd.read_csv(StringIO(table))


def test_nine_wells_do_not_tell_which_of_them_is_far(tmp_path):
    """W9 of the README's example lies 12 km from the next, which is no doubt of its place."""
    rows = "".join(f"{w.well},{w.x},{w.y},100,105,,\n" for w in readme_wells().itertuples())
    out = prepare(tmp_path, base=False, wells=rows)
    assert len(out.wells) == 9 and not out.wells["flags"].str.contains("far_from_others").any()


@pytest.mark.parametrize(("ring_km", "doubted"), [(12, False), (80, True)])
def test_a_well_is_far_by_how_the_others_lie(tmp_path, ring_km, doubted):
    """Wells of a usual basin lie 10 km apart (a square of 25); one more lies east of them."""
    far = f"FAR,{540000 + 1000 * ring_km},6020000,100,105,,\n"
    square = "".join(
        f"S{i:02d},{500000 + 10000 * (i % 5)},{6000000 + 10000 * (i // 5)},100,105,,\n"
        for i in range(25)
    )
    out = prepare(tmp_path, base=False, wells=square + far)
    told = set(out.wells.loc[out.wells["flags"].str.contains("far_from_others"), "well"])
    assert told == ({"FAR"} if doubted else set())


@pytest.mark.parametrize("seed", range(4))
@pytest.mark.parametrize("spread", [0.0, 1.0])
def test_scattered_wells_are_not_far(tmp_path, seed, spread):
    """Wells strewn without order, evenly or in heaps, hold no slip: hardly one in 60 is doubted."""
    rng = np.random.default_rng(seed)
    centre = rng.uniform(0.0, 1e5, (6, 2))[rng.integers(6, size=60)]
    place = centre + rng.normal(0.0, 1.5e4, (60, 2)) * np.exp(spread * rng.normal(size=(60, 1)))
    rows = "".join(
        f"R{i:02d},{500000 + x:.0f},{6000000 + y:.0f},100,105,,\n" for i, (x, y) in enumerate(place)
    )
    out = prepare(tmp_path, base=False, wells=rows)
    assert len(out.wells) == 60
    assert out.wells["flags"].str.contains("far_from_others").sum() <= 1


def test_no_coordinates_among_few_wells_are_doubted(tmp_path):
    out = prepare(
        tmp_path, base=False, wells="A,500000,6000000,,,,\nB,900000,6900000,,,,\n", readings=""
    )
    assert len(out.wells) == 2


def test_thresholds_are_settings(tmp_path):
    reading = f"W,2505,{degc(2505, 52.0)},,,,,,\n"
    out = prepare(tmp_path, wells=well(), readings=reading, screening={"outlier_score": 50.0})
    assert "spatial_outlier" not in flags(out.readings, "W")
    out = prepare(tmp_path, wells=well(), readings=reading, screening={"hottest_degc": 120.0})
    assert codes(out) == ["temperature_impossible"]


def test_the_case_itself():
    """Depth below ground is depth below the rig floor less its height."""
    assert degc(2005) == SURFACE + 30.0 * (2005 - HEIGHT) / 1000.0
