"""Questions of the first look: one slip at a time, and nothing else is asked about."""

import re

import numpy as np
import pandas as pd
import pytest
from firstlook_case import (
    DEGF,
    FEET,
    GRADIENT,
    SURFACE,
    WELLS,
    asked,
    basin,
    entry,
    seen,
)

from basinheat import ingest
from basinheat.conductivity import catalogue
from basinheat.firstlook import (
    answers,
    console,
    gradients,
    page,
    place_questions,
    questions,
)
from basinheat.firstlook.stage import look
from basinheat.settings.model import Settings


def test_a_good_basin_calls_for_no_question_but_the_kind(tmp_path):
    record, _ = seen(tmp_path)
    assert asked(record) == []
    assert entry(record, "readings")["gradient_k_km"] == pytest.approx(GRADIENT, abs=0.1)


@pytest.mark.parametrize(
    ("temperature", "depth", "units"),
    [
        (DEGF, 1.0, "{temperature: degF}"),
        (lambda degc: degc, FEET, "{depth: ft}"),
        (DEGF, FEET, "{temperature: degF, depth: ft}"),
        (lambda degc: degc + 273.15, 1.0, "{temperature: K}"),
    ],
)
def test_numbers_in_units_that_nobody_stated(tmp_path, temperature, depth, units):
    wells, readings = basin()
    readings["temperature"] = temperature(readings["temperature"])
    readings["depth"], wells["total_depth"] = (
        readings["depth"] * depth,
        wells["total_depth"] * depth,
    )
    record, _ = seen(tmp_path, wells, readings)
    here = [each for each in record["questions"] if "gradient" in each["seen"]]
    assert len(here) == 1
    assert f"units: {units}" in here[0]["ask"]
    assert "30 K/km" in here[0]["ask"] or "29 K/km" in here[0]["ask"]


def test_metres_and_degrees_read_as_feet_and_fahrenheit(tmp_path):
    units = {"temperature": "degF", "depth": "ft"}
    record, _ = seen(tmp_path, readings_file={"units": units})
    assert any("`units: {temperature: degC" in each for each in asked(record))


def test_depths_in_another_unit_than_total_depths(tmp_path):
    _, readings = basin()
    readings["depth"] *= FEET
    record, _ = seen(tmp_path, readings=readings)
    (ratio,) = [each for each in record["questions"] if "times the total depth" in each["seen"]]
    assert "3.28 times" in ratio["seen"]


def test_a_unit_in_a_header_is_held_against_the_one_assumed(tmp_path):
    wells, _ = basin()
    file = {"columns": {name: name for name in wells} | {"ground_elevation": "GL_FT"}}
    record, _ = seen(tmp_path, wells.rename(columns={"ground_elevation": "GL_FT"}), wells_file=file)
    assert "inputs.wells[0]: Add to inputs.wells[0] `units: {ground_elevation: ft}`?" in asked(
        record
    )
    file["units"] = {"ground_elevation": "ft"}
    record, _ = seen(tmp_path, wells.rename(columns={"ground_elevation": "GL_FT"}), wells_file=file)
    assert not any("Headers" in each["seen"] for each in record["questions"])


@pytest.mark.parametrize(
    ("change", "said"),
    [
        (lambda w: w.rename(columns={"x": "y", "y": "x"}), "{well: well, x: y, y: x, "),
        (lambda w: w.assign(x=-w["x"]), "the sign of x turned"),
    ],
)
def test_coordinates_mixed_up_in_a_whole_file(tmp_path, change, said):
    record, _ = seen(tmp_path, wells=change(basin()[0]))
    pressing = [each for each in record["questions"] if each["weight"] == questions.PRESSING]
    assert any(said in each["ask"] for each in pressing)


def test_degrees_read_as_metres_and_metres_read_as_degrees(tmp_path):
    record, _ = seen(tmp_path, wells_file={"crs": "EPSG:32614"})
    assert any("`crs: " in each and "4326" in each for each in asked(record))
    wells, _ = basin()
    record, _ = seen(tmp_path, wells.assign(x=wells["x"] * 1e4, y=wells["y"] * 1e5))
    assert any("a projected system" in each for each in asked(record))


def test_wells_just_outside_their_zone_are_no_matter(tmp_path):
    """A basin over two UTM zones is mapped in one of them: common practice."""
    wells, _ = basin()
    record, _ = seen(tmp_path, wells.assign(x=wells["x"] + 9.0))
    assert asked(record) == []


def test_a_yes_to_every_question_mends_the_config(tmp_path):
    """Everything at once: only then are all rows of a sound basin kept."""
    import yaml

    wells, readings = basin()
    wells = wells.rename(columns={"x": "LAT", "y": "LONG"}).rename(
        columns={"LAT": "LONG", "LONG": "LAT", "ground_elevation": "GL_FT", "total_depth": "TD"}
    )
    wells["GL_FT"] *= FEET
    wells["TD"] *= FEET
    wells["well"] = "35-" + wells["well"].str[2:] + "7-20001"
    readings["well"] = "35" + readings["well"].str[2:] + "7200010000"
    readings["temperature"] = DEGF(readings["temperature"]).round(1)
    readings["depth"] = (readings["depth"] * FEET).round(0)
    readings["kind"] = np.resize(["LOG", "PROD TEST", "STATIC"], len(readings))
    readings["date"], readings["BIT"] = "12/31/1985", 8.5
    readings["since_circulation"] = np.resize([999.0, 8.0, 12.0, 6.0], len(readings))
    columns_of = {"well": "well", "x": "LAT", "y": "LONG", "ground_elevation": "GL_FT",
                  "total_depth": "TD"}  # fmt: skip
    first, done = seen(tmp_path, wells, readings, wells_file={"columns": columns_of})
    assert len(done.readings) == len(done.wells) == 0
    typed = yaml.safe_load("\n".join(answers.together(first)))["inputs"]
    then, done = seen(
        tmp_path,
        wells,
        readings,
        inputs=typed,
    )
    assert (len(done.wells), len(done.readings)) == (WELLS, 2 * WELLS)
    assert entry(then, "readings")["gradient_k_km"] == pytest.approx(GRADIENT, abs=0.3)
    assert [each for each in then["questions"] if each["weight"] == questions.PRESSING] == []


def test_the_example_of_the_readme_calls_for_no_question(tmp_path):
    """Nine wells whose shallow readings are hot: the files in README.md, invented and right."""
    from pathlib import Path

    import yaml

    text = (Path(__file__).parents[2] / "README.md").read_text(encoding="utf-8")
    for name, content in re.findall(r"`(\w+\.(?:csv|yaml))`:.*?```\w+\n(.*?)```", text, re.S):
        (tmp_path / name).write_text(content, encoding="utf-8")
    settings = Settings.model_validate(yaml.safe_load((tmp_path / "config.yaml").read_text()))
    done = ingest.prepare(settings, tmp_path)
    rocks = catalogue.load()
    record = look(settings, str(tmp_path), done.wells, done.readings, done.rejected, rocks)
    assert len(done.readings) == entry(record, "readings")["rows"] > 10
    assert asked(record) == []


@pytest.mark.parametrize("hot", [15.0, 28.0])
def test_warm_shallow_readings_are_no_degrees_fahrenheit(tmp_path, hot):
    """A gradient that falls with depth ends above the surface temperature in any unit."""
    wells, readings = basin()
    readings["temperature"] = (SURFACE + hot + 0.024 * readings["depth"]).round(1)
    record, _ = seen(tmp_path, wells, readings)
    assert not any("degF" in each for each in asked(record))


def test_where_degrees_fahrenheit_end_at_the_surface():
    """32 + 1.8 T read as degC stands 32 + 0.8 T above T: by definition of the scale."""
    depth, ground = np.linspace(500.0, 3500.0, 60), np.full(60, 15.0)
    degf = DEGF(15.0 + 0.03 * depth)
    raw = gradients.Raw(degf, depth, ground, np.zeros(60), depth, np.arange(60))
    assert gradients.intercept_k(raw, ("degC", "degC"), ("m", "m"))[0] == pytest.approx(44.0)
    assert gradients._made_by(raw, "degC", "degF", 44.0, 0.0)
    assert not gradients._made_by(raw, "degC", "degF", 12.0, 2.0)
    assert not gradients._made_by(raw, "degC", "degC", 44.0, 0.0)


def test_the_error_of_the_intercept_is_that_of_many_basins():
    """Against the scatter of the estimate itself over basins drawn anew."""
    rng = np.random.default_rng(11)
    found, errors = [], []
    for _ in range(300):
        depth = rng.uniform(1000.0, 3000.0, 90)
        degc = 0.03 * depth + rng.normal(0.0, 6.0, 90)
        raw = gradients.Raw(degc, depth, np.zeros(90), np.zeros(90), depth, np.arange(90))
        value, error = gradients.intercept_k(raw, ("degC", "degC"), ("m", "m"))
        found.append(value)
        errors.append(error)
    assert np.median(errors) == pytest.approx(np.std(found), rel=0.25)
    assert np.mean(found) == pytest.approx(0.0, abs=3.0 * np.std(found) / np.sqrt(300))


@pytest.mark.parametrize("shape", ["intervals", "tops", "wide"])
def test_tops_in_feet_read_as_metres(tmp_path, shape):
    wells, _ = basin()
    tops = {"Upper": 0.1, "Middle": 0.4, "Lower": 0.8}
    wide = pd.DataFrame(
        {"well": wells["well"]}
        | {name: (part * wells["total_depth"] * FEET).round() for name, part in tops.items()}
    )
    rows = wide.melt("well", var_name="formation", value_name="top").assign(lithology="shale")
    rows["base"] = rows["top"] + 100.0
    frame = {"intervals": rows, "tops": rows.drop(columns="base"), "wide": wide}[shape]
    tmp_path.mkdir(exist_ok=True)
    frame.to_csv(tmp_path / "layers.csv", index=False)
    entry_of = {"file": "layers.csv", "shape": shape}
    if shape == "wide":
        entry_of["tops"] = dict.fromkeys(tops, "shale")
    if shape == "tops":
        entry_of["columns"] = {"well": "well", "top": "top", "formation": "formation",
                               "lithology": "lithology"}  # fmt: skip
    units = "{top: ft, base: ft}" if shape == "intervals" else "{top: ft}"
    record, _ = seen(tmp_path, inputs={"layers": [entry_of]})
    (first, *_) = (each for each in record["questions"] if "tops" in each["seen"])
    assert f"`units: {units}`" in first["ask"] and first["weight"] == questions.PRESSING
    entry_of["units"] = first["lines"]["units"]
    record, _ = seen(tmp_path, inputs={"layers": [entry_of]})
    assert asked(record) == []


def test_formations_in_columns_are_counted_and_their_rocks_looked_up(tmp_path):
    wells, _ = basin()
    deep = (0.5 * wells["total_depth"]).round()
    frame = pd.DataFrame({"well": wells["well"], "Till": 0, "Chalk": 300, "Rotl": deep})
    frame.loc[:4, "Till"], frame["Rotl"] = 7, frame["Rotl"].where(frame.index > 9)
    tmp_path.mkdir(exist_ok=True)
    frame.to_csv(tmp_path / "layers.csv", index=False)
    layers = {"file": "layers.csv", "shape": "wide",
              "tops": {"Till": "clay", "Chalk": "sandston", "Rotl": "sandstone"}}  # fmt: skip
    record, _ = seen(tmp_path, inputs={"layers": [layers]})
    told = {each["header"]: (each["tops"], each["zeros"], each["blanks"])
            for each in entry(record, "layers")["formations"]}  # fmt: skip
    assert told == {"Till": (5, 35, 0), "Chalk": (40, 0, 0), "Rotl": (30, 0, 10)}
    text = "\n".join(asked(record))
    assert "`zero_is_missing: []`" in text
    assert "`lithologies: {sandston: sandstone}`" in text
    assert "Formations in columns" in page.html(record) and "Formations in col" in console.text(
        record
    )
    layers["zero_is_missing"] = []
    record, _ = seen(tmp_path, inputs={"layers": [layers]})
    assert not any("surface?" in each for each in asked(record))


def test_zeros_of_a_deep_formation_mean_that_it_is_absent(tmp_path):
    wells, _ = basin()
    frame = pd.DataFrame({"well": wells["well"], "Chalk": 300, "Rotl": 0})
    frame.loc[:4, "Rotl"] = 900
    tmp_path.mkdir(exist_ok=True)
    frame.to_csv(tmp_path / "layers.csv", index=False)
    layers = {"file": "layers.csv", "shape": "wide", "tops": {"Chalk": "clay", "Rotl": "shale"}}
    assert asked(seen(tmp_path, inputs={"layers": [layers]})[0]) == []


@pytest.mark.parametrize(("degree", "asks"), [(54.0, True), (29.0, False)])
def test_a_surface_temperature_in_degrees_fahrenheit(tmp_path, degree, asks):
    """54 degF are 12.2 degC, by definition; 29 degC is the ground of the hottest places."""
    surface = {"model": "constant", "temperature_degc": degree}
    record, _ = seen(tmp_path, surface_temperature=surface)
    text = [each for each in asked(record) if each.startswith("surface_temperature")]
    assert bool(text) == asks
    assert not asks or "`temperature_degc: 12.2`" in text[0]


@pytest.mark.parametrize(
    ("crs", "datum", "other"),
    [
        ("EPSG:4326", "NAD27", "EPSG:4267"),
        ("EPSG:4267", "NAD27", None),
        ("EPSG:6318", "NAD83", None),  # NAD83(2011) is a realisation of it
        ("EPSG:32614", "NAD27", "EPSG:26714"),
        ("EPSG:32631", "ED50", "EPSG:23031"),
        ("EPSG:32614", "NAD83", "EPSG:26914"),
        ("EPSG:23031", "WGS84", "EPSG:32631"),
        ("EPSG:27700", "ED50", ""),
    ],
)
def test_the_same_crs_on_the_datum_of_a_header(crs, datum, other):
    """Codes of the EPSG registry, their datums as pyproj has them."""
    from pyproj import CRS

    assert place_questions.crs_on(crs, datum) == other
    if other:
        name = CRS.from_user_input(other).geodetic_crs.datum.name
        assert name.startswith(place_questions.DATUMS[datum][0])
        assert CRS.from_user_input(other).utm_zone == CRS.from_user_input(crs).utm_zone


def test_a_datum_in_a_header_is_held_against_the_crs(tmp_path):
    wells, _ = basin()
    wells = wells.rename(columns={"x": "LON_NAD27", "y": "LAT_NAD27"})
    file = {"columns": {name: name for name in wells if name[:2] != "LO" and name[:2] != "LA"}}
    file["columns"] |= {"x": "LON_NAD27", "y": "LAT_NAD27"}
    record, _ = seen(tmp_path, wells, wells_file=file)
    assert any('`crs: "EPSG:4267"`' in each for each in asked(record))
    record, _ = seen(tmp_path, wells, wells_file={**file, "crs": "EPSG:4267"})
    assert asked(record) == []
