"""The first look: what it tells of files of which one knows what is wrong with them."""

import re
import unicodedata

import numpy as np
import pandas as pd
import pytest
from hypothesis import given
from hypothesis import strategies as st

from basinheat import documents, ingest
from basinheat.conductivity import catalogue
from basinheat.firstlook import (
    answers,
    cell_questions,
    chart,
    columns,
    console,
    gradients,
    headers,
    page,
    place_questions,
    places,
    questions,
)
from basinheat.firstlook.proposals import columns_and_units, proposal
from basinheat.firstlook.stage import look
from basinheat.settings import schemas
from basinheat.settings.load import load_config
from basinheat.settings.model import Settings

SURFACE, GRADIENT, WELLS = 12.0, 30.0, 40
# Inside UTM zone 14 north (EPSG:32614): longitude 102 to 96 west (EPSG registry).
WEST, SOUTH = -100.0, 37.0


def basin():
    """Return wells and readings in metres, degrees and degC, with a gradient of 30 K/km."""
    rng = np.random.default_rng(5)
    total = rng.uniform(1500.0, 3500.0, WELLS)
    wells = pd.DataFrame(
        {
            "well": [f"W-{i:02d}" for i in range(WELLS)],
            "x": (WEST + rng.uniform(0.0, 1.5, WELLS)).round(5),
            "y": (SOUTH + rng.uniform(0.0, 1.5, WELLS)).round(5),
            "ground_elevation": 300.0,
            "datum_elevation": 305.0,
            "total_depth": total.round(1),
        }
    )
    depth = np.concatenate([total, 0.6 * total])
    readings = pd.DataFrame(
        {
            "well": np.tile(wells["well"], 2),
            "depth": depth.round(1),
            "temperature": (SURFACE + GRADIENT * (depth - 5.0) / 1000.0).round(1),
            "kind": "bht",
        }
    )
    return wells, readings


def seen(folder, wells=None, readings=None, wells_file=(), readings_file=(), **changes):
    """Return the record of the first look at tables written to a folder, and the cleaned tables."""
    good_wells, good_readings = basin()
    folder.mkdir(exist_ok=True)
    for name, frame in (("wells", good_wells if wells is None else wells),
                        ("readings", good_readings if readings is None else readings)):  # fmt: skip
        text = frame if isinstance(frame, str) else frame.to_csv(index=False)
        (folder / f"{name}.csv").write_text(text, encoding="utf-8")
    inputs = {
        "wells": [{"file": "wells.csv", "crs": "EPSG:4326", **dict(wells_file)}],
        "readings": [{"file": "readings.csv", **dict(readings_file)}],
        **changes.pop("inputs", {}),
    }
    surface = {"model": "constant", "temperature_degc": SURFACE}
    config = {"run": "case", "crs": "EPSG:32614", "inputs": inputs, "surface_temperature": surface}
    settings = Settings.model_validate(config | changes)
    done = ingest.prepare(settings, folder)
    rocks = catalogue.load()
    record = look(settings, str(folder), done.wells, done.readings, done.rejected, rocks)
    return record, done


def asked(record):
    """Return what is asked, pressing questions or not."""
    return [f"{each['place']}: {each['ask']}" for each in record["questions"]]


def entry(record, table):
    """Return what is told of the only file of a table."""
    (found,) = (each for each in record["files"] if each["table"] == table)
    return found


def column(record, table, name):
    """Return what is told of one column."""
    return next(each for each in entry(record, table)["columns"] if each["name"] == name)


def test_formations_and_mixtures_of_the_config_are_known_rock(tmp_path):
    (tmp_path / "layers.csv").write_text(
        "well,top,base,lithology,formation\nW-00,10,90,,Upper\nW-00,90,200,,Uper\n"
        "W-00,200,300,sandstone 60 shale 40,Upper\nW-00,300,400,sandstone/shale,\n"
    )
    record, _ = seen(
        tmp_path,
        inputs={"layers": [{"file": "layers.csv"}]},
        conductivity={"formations": {"Upper": {"sandstone": 60, "shale": 40}}},
    )
    words = {each["word"]: each["unknown"] for each in entry(record, "layers")["rocks"]}
    assert words["Upper"] == words["sandstone 60 shale 40"] == ""
    assert words["Uper"] == "the nearest is upper"
    assert "states no percentages" in words["sandstone/shale"]


# Headers


@pytest.mark.parametrize("table", ["wells", "readings"])
def test_headers_of_an_open_standard_are_understood(table):
    """Header and meaning as the content model of the US geoscience information network has them."""
    listed = schemas.SCHEMAS["ngds_borehole_temperature"][table].columns
    found = {name: headers.suggest(header, table) for name, header in listed.items()}
    told = {name: each.name for name, each in found.items() if each is not None}
    assert told == {name: name for name in told}, "a wrong suggestion is worse than none"
    assert len(told) >= 0.8 * len(listed)


# Abbreviations of the oil trade: common practice, no source.
@pytest.mark.parametrize(
    ("table", "header", "name", "unit"),
    [
        ("wells", "KB", "datum_elevation", ""),
        ("wells", "KB_ELEV_FT", "datum_elevation", "ft"),
        ("wells", "GL (ft)", "ground_elevation", "ft"),
        ("wells", "TD_M", "total_depth", "m"),
        ("wells", "LAT", "y", ""),
        ("wells", "LONGITUDE", "x", ""),
        ("wells", "UWI", "well", ""),
        ("wells", "wlbKellyBushElevation", "datum_elevation", ""),
        ("wells", "Water Depth [m]", "water_depth", "m"),
        ("readings", "BHT_F", "temperature", "degF"),
        ("readings", "wlbBottomHoleTemperature", "temperature", ""),
        ("readings", "TSC", "since_circulation", ""),
        ("readings", "TVD_FT", "vertical_depth", "ft"),
        ("readings", "BIT_IN", "hole_diameter", "in"),
        ("readings", "Hrs since circ", "since_circulation", ""),
        ("readings", "SOURCE", "kind", ""),
        ("readings", "TEMPERATUR", "temperature", ""),
        ("surveys", "INCL", "inclination", ""),
        ("surveys", "MD (ft)", "depth", "ft"),
        ("layers", "TOP_FT", "top", "ft"),
        ("layers", "LITH", "lithology", ""),
    ],
)
def test_usual_headers_are_understood(table, header, name, unit):
    guess = headers.suggest(header, table)
    assert (guess.name, guess.unit) == (name, unit)


@pytest.mark.parametrize("table", ["wells", "readings", "layers", "surveys"])
@pytest.mark.parametrize("header", ["OPERATOR", "COUNTY", "Field", "LICENCE", "x" * 9999, "?", ""])
def test_other_headers_are_not_guessed_at(table, header):
    guess = headers.suggest(header, table)
    assert guess is None


def test_columns_are_proposed_as_they_can_be_typed():
    import yaml

    present = ["API", "DEPTH_FT", "BHT_F", "TSC_H", "OPERATOR"]
    found, units = columns_and_units("readings", present)
    assert found == {
        "well": "API", "depth": "DEPTH_FT", "temperature": "BHT_F", "since_circulation": "TSC_H",
    }  # fmt: skip
    assert units == {"depth": "ft", "temperature": "degF", "since_circulation": "h"}
    typed = proposal("readings", present).strip("`").replace(", units:", "\nunits:")
    assert yaml.safe_load(typed) == {"columns": found, "units": units}


def test_a_header_that_is_absent_is_told_with_the_likely_one(tmp_path):
    _, readings = basin()
    readings.rename(columns={"temperature": "BHT"}).to_csv(tmp_path / "r.csv", index=False)
    basin()[0].to_csv(tmp_path / "w.csv", index=False)
    names = {"well": "well", "depth": "depht", "temperature": "T degC"}
    inputs = {
        "wells": [{"file": "w.csv", "crs": "EPSG:4326"}],
        "readings": [{"file": "r.csv", "columns": names}],
    }
    with pytest.raises(Exception, match="not valid") as fault:
        load_config({"run": "a", "crs": "EPSG:32614", "inputs": inputs}, "a.yaml", tmp_path)
    assert "columns.depth: " in str(fault.value) and 'did you mean "depth"?' in str(fault.value)
    assert 'may it be "BHT"?' in str(fault.value)


# A good basin, and one slip at a time


def test_a_good_basin_calls_for_no_question_but_the_kind(tmp_path):
    record, _ = seen(tmp_path)
    assert asked(record) == []
    assert entry(record, "readings")["gradient_k_km"] == pytest.approx(GRADIENT, abs=0.1)


FEET, DEGF = 1.0 / 0.3048, lambda degc: degc * 1.8 + 32.0  # by definition


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


# One question per cause, and answers that can be pasted


def test_one_trouble_is_asked_about_once(tmp_path):
    wells, readings = basin()
    readings["well"] = readings["well"].str.replace("W-", "w ")
    readings["date"] = np.resize(["1985", "n/r"], len(readings))
    readings["depth"] = (readings["depth"] * FEET).round(1)
    readings["since_circulation"] = 6.5
    for name in ("temperature", "depth", "since_circulation"):
        readings[name] = readings[name].map(lambda value: f"{value}".replace(".", ","))
    layers = pd.DataFrame({"well": readings["well"], "top": 10, "base": 900, "lithology": "shale"})
    tmp_path.mkdir(exist_ok=True)
    layers.drop_duplicates().to_csv(tmp_path / "layers.csv", index=False)
    inputs = {"layers": [{"file": "layers.csv"}]}
    record, _ = seen(tmp_path, wells, readings, inputs=inputs)
    text = "\n".join(asked(record))
    for once in ("`decimal", "well_names", "missing: [n/r]"):
        assert text.count(once) == 1, once
    assert len(record["questions"]) == 3
    weights = [(each["weight"], -each["rows"]) for each in record["questions"]]
    assert weights == sorted(weights)
    record, _ = seen(tmp_path, wells, readings, readings_file={"decimal": ","},
                     inputs=inputs | {"well_names": "normalised"})  # fmt: skip
    assert "\n".join(asked(record)).count("depth: ft") == 1
    assert len([each for each in record["questions"] if each["cause"] == "units"]) == 1


def test_what_is_pasted_is_a_config(tmp_path):
    """The second of two entries is asked about; the first must not get lost."""
    import yaml

    wells, readings = basin()
    readings["kind"] = np.resize(["bht", "LOG", "static?"], len(readings))
    tmp_path.mkdir(exist_ok=True)
    readings.assign(kind="bht", well="X").to_csv(tmp_path / "first.csv", index=False)
    both = [{"file": "first.csv", "missing": ["x.x"]},
            {"file": "readings.csv", "kinds": {"MTR": "bht"}}]  # fmt: skip
    record, _ = seen(tmp_path, wells, readings, inputs={"readings": both})
    lines = answers.together(record)
    typed = yaml.safe_load("\n".join(lines))
    assert typed["inputs"]["readings"][0] == both[0]
    assert typed["inputs"]["readings"][1]["kinds"] == {"MTR": "bht", "LOG": "bht"}
    assert any(line.strip() == '# "static?": "?"' for line in lines)
    (said,) = (each["ask"] for each in record["questions"] if "kinds" in each["lines"])
    assert '"static?": "?"' in said


@pytest.mark.parametrize(("count", "noise"), [(200, 4.0), (1000, 6.0)])
def test_noisy_readings_of_a_curved_geotherm_in_degrees_fahrenheit_and_feet(tmp_path, count, noise):
    """Right and wrong units of the same drawn basins: asked about in nearly all, and in none."""
    from types import SimpleNamespace

    rng = np.random.default_rng(4)
    file = SimpleNamespace(unit={"temperature": "degC", "depth": "m"}.__getitem__)
    found = {True: 0, False: 0}
    for _ in range(40):
        depth, well = rng.uniform(800.0, 3500.0, count), np.arange(count) // 2
        gradient = rng.normal(0.03, 0.003, count)[well]
        degc = 10.0 + gradient * depth + 10.0 * (1.0 - np.exp(-depth / 700.0))
        degc = degc + rng.normal(0.0, noise, count)
        ground, none = np.full(count, 10.0), np.zeros(count)
        for wrong in found:
            given = (DEGF(degc), depth * FEET) if wrong else (degc, depth)
            raw = gradients.Raw(*given, ground, none, none * np.nan, well)
            told = gradients.judge_units(file, raw, 5.0, 150.0)
            found[wrong] += {"temperature": "degF", "depth": "ft"} in [
                each["units"] for each in told["instead"]
            ]
    assert found[False] == 0 and found[True] >= 36


# Words


def test_kinds_rocks_names_and_dates_are_asked_for_with_the_likely_answer(tmp_path):
    wells, readings = basin()
    readings["kind"] = np.resize(["LOG", "DST 2", "STATIC", "?X"], len(readings))
    readings["date"] = "12/31/1985"
    readings["well"] = readings["well"].str.replace("W-", "w ")
    layers = "well,top,base,lithology\n" + "".join(f"W-{i:02d},10,900,sandston\n" for i in range(9))
    tmp_path.mkdir(exist_ok=True)
    (tmp_path / "layers.csv").write_text(layers, encoding="utf-8")
    record, _ = seen(tmp_path, wells, readings, inputs={"layers": [{"file": "layers.csv"}]})
    text = "\n".join(asked(record))
    assert '`kinds: {"?X": "?", DST 2: dst, LOG: bht, STATIC: equilibrium}`' in text
    assert "`well_names: normalised`" in text
    assert '`date_format: "%m/%d/%Y"`' in text
    assert "`lithologies: {sandston: sandstone}`" in text


def test_cells_that_are_no_numbers_and_numbers_that_are_none(tmp_path):
    _, readings = basin()
    comma = readings.assign(
        temperature=readings["temperature"].map(lambda t: f"{t}".replace(".", ","))
    )
    record, _ = seen(tmp_path, readings=comma)
    assert any('`decimal: ","`' in each for each in asked(record))
    words = readings.astype({"temperature": object})
    words.loc[:9, "temperature"] = "not read"
    record, _ = seen(tmp_path, readings=words)
    assert any("`missing: [not read]`" in each for each in asked(record))
    assert column(record, "readings", "temperature")["wrong"] == 10
    nines = readings.assign(since_circulation=np.resize([999.0, 8.0, 12.0, 6.0], len(readings)))
    record, _ = seen(tmp_path, readings=nines)
    assert any('`missing: ["999"]`' in each for each in asked(record))


def test_a_reading_of_99_degrees_is_a_reading():
    degc = np.concatenate([np.linspace(60.0, 140.0, 300), np.full(10, 99.0)])
    assert columns._stand_ins(degc) == []
    assert columns._stand_ins(np.append(degc, np.full(10, 9999.0))) == [[9999.0, 10]]


@pytest.mark.parametrize(
    ("written", "form"),
    [
        (["31/12/1985", "1/2/1986"], "%d/%m/%Y"),
        (["12/31/85", "1/2/86"], "%m/%d/%y"),
        (["1/2/1985", "3/4/1985"], ""),  # nobody can tell
        (["13.31.1985"], ""),
        (["spring 1985"], ""),
    ],
)
def test_forms_of_dates(written, form):
    assert cell_questions.date_form(written) == form


# Numbers


def test_ranges_gaps_and_cells_as_written():
    frame = pd.DataFrame(
        {
            "depth": [304.8, np.nan, 3048.0, np.nan, 609.6],
            "wrong:depth": [False, False, False, True, False],
            "as_written:depth": ["1000", "NA", "10000.0", "deep", "2000"],
        }
    )
    facts = columns.number_facts(frame, "depth", "m", "ft")
    assert (facts["missing"], facts["missing_words"]) == (1, [["NA", 1]])
    assert (facts["wrong"], facts["wrong_words"]) == (1, [["deep", 1]])
    assert (facts["low"], facts["middle"], facts["high"]) == (304.8, 609.6, 3048.0)
    assert facts["as_written"] == ["1000", "2000", "10000.0"]


@given(st.lists(st.floats(-1e4, 1e4), min_size=1, max_size=60))
def test_ranges_are_those_of_the_numbers(values):
    values = np.array(values)
    frame = pd.DataFrame(
        {"a": values, "wrong:a": False, "as_written:a": [repr(float(v)) for v in values]}
    )
    facts = columns.number_facts(frame, "a", "m", "m")
    assert [facts[name] for name in ("low", "middle", "high")] == [
        values.min(), np.median(values), values.max(),
    ]  # fmt: skip
    low, middle, high = map(float, facts["as_written"])
    assert (low, high) == (values.min(), values.max())
    assert middle == np.sort(values)[(len(values) - 1) // 2]


@pytest.mark.parametrize("step", [10.0, 5.0, 1.0, 0.5, 0.1])
def test_the_step_of_rounding_is_found(step):
    values = np.random.default_rng(2).uniform(40.0, 900.0, 4000)
    found = columns.rounding(np.round(values / step) * step)
    assert found["step"] == step and found["heap"] == 0.0


def test_a_heap_at_tens_is_told_apart_from_chance():
    rng = np.random.default_rng(3)
    whole = np.round(rng.uniform(40.0, 200.0, 4000))
    assert columns.rounding(whole)["heap"] == 0.0  # one in ten is a multiple of 10 by chance
    half = np.where(rng.random(4000) < 0.5, np.round(whole / 10.0) * 10.0, whole)
    found = columns.rounding(half)
    assert (found["step"], found["heap"]) == (1.0, 10.0)
    assert found["heap_share"] == pytest.approx(0.55, abs=0.03)  # 0.5 + 0.5 x 0.1


def test_every_row_is_told_of_once(tmp_path):
    wells, readings = basin()
    readings.loc[3, "depth"] = -5.0
    readings.loc[4, "temperature"] = np.nan
    again = pd.concat([readings, readings.iloc[[7, 8]]])
    text = again.to_csv(index=False) + "too,few\n"
    record, done = seen(tmp_path, wells.drop(index=0), text)
    told = entry(record, "readings")
    assert told["rows"] == 2 * WELLS + 3
    assert told["kept"] == len(done.readings)
    assert told["merged"] == 2
    assert told["refused"] == told["rows"] - told["kept"] - told["merged"]
    reasons = {each["code"]: each["rows"] for each in told["reasons"]}
    assert reasons.pop("unknown_well") == 2
    assert reasons == {
        "merged": 2, "depth_negative": 1, "no_temperature": 1, "wrong_number_of_cells": 1,
    }  # fmt: skip
    example = next(each for each in told["reasons"] if each["code"] == "depth_negative")
    assert (example["line"], example["value"]) == (5, "-5.0")


def test_the_gradient_is_that_of_the_readings_at_depth():
    depth = np.linspace(400.0, 4000.0, 50)
    surface, height, well = np.full(50, 20.0), np.full(50, 8.0), np.arange(50)
    raw = gradients.Raw(20.0 + 0.025 * depth, depth + 8.0, surface, height, depth, well)
    value, count = gradients.median_gradient(raw, ("degC", "degC"), ("m", "m"))
    assert (value, count) == (pytest.approx(25.0), 50)
    line, error = gradients.intercept_k(raw, ("degC", "degC"), ("m", "m"))
    assert (line, error) == pytest.approx((0.0, 0.0), abs=1e-9)


# The map


def test_the_map_holds_every_well(tmp_path):
    record, done = seen(tmp_path)
    place = record["map"]
    cells = np.array(place["cells"])
    assert cells[:, 2].sum() == place["wells"] == len(done.wells) == WELLS
    assert cells[:, 3].sum() == place["with_readings"] == done.readings["well"].nunique()
    north = done.wells.loc[done.wells["northing_m"].idxmax()]
    assert cells[0, 0] == 0  # the first row is the northernmost
    assert cells[0, 1] == int((north["easting_m"] - place["west"]) / place["cell_m"])
    assert chart.svg(place).count("<circle") == len(cells)
    lines = chart.characters(place)[1:-2]
    assert sum(1 for line in lines for mark in line if mark in ".oO#") <= WELLS
    assert len(lines) <= chart.SCREEN_ROWS + 1
    assert max(map(len, lines)) <= chart.SCREEN_COLUMNS + 3


def test_the_map_has_axes_in_kilometres(tmp_path):
    record, _ = seen(tmp_path)
    place = record["map"]
    drawn = chart.svg(place)
    north = [float(km) for km in re.findall(r'text-anchor="end">(-?[\d.]+)<', drawn)]
    assert len(north) >= 3
    margin = 10.0  # km beside the outermost wells
    assert min(north) >= place["south"] / 1000.0 - margin
    assert max(north) <= place["north"] / 1000.0 + margin
    # Where a tick stands is where a well of that northing would be drawn.
    steps = re.findall(r'd="M-4 ([\d.]+)h5"/>\n<text[^>]*>(-?[\d.]+)<', drawn)
    pixel, km = np.array(steps, float).T
    first = place["cells"][0]
    dot = float(re.search(r'<circle[^>]* cy="([\d.]+)"', drawn)[1])
    at = place["north"] / 1000.0 - (first[0] + 0.5) * place["cell_m"] / 1000.0
    assert np.polyval(np.polyfit(km, pixel, 1), at) == pytest.approx(dot, abs=0.5)


def test_headers_like_nothing_known_are_told_without_contradiction(tmp_path):
    wells, readings = basin()
    record, _ = seen(tmp_path, wells.assign(OPERATOR="a"), readings)
    told = console.text(record)
    assert "Not read, and like no column that is known: OPERATOR." in told
    assert "not read: none" not in told and "not read: none" not in page.html(record)


@pytest.mark.parametrize("count", [0, 1, 2])
def test_a_map_of_few_wells(count, tmp_path):
    _, done = seen(tmp_path)
    place = places.small_map(done.wells[:count], np.ones(count, bool), "EPSG:32614")
    assert (chart.svg(place) == "") == (count == 0)
    assert sum(cell[2] for cell in place["cells"]) == count


# Harmless, and the same every time

HOSTILE = [
    "<script>alert(1)</script>",
    "\x1b[2J\x1b]0;owned\x07",
    "a\u202egnp.exe",
    "=HYPERLINK(1)",
    "../../etc/passwd",
    "N" * 10_000,
    "{{ 7 * 7 }} {% raw %}",
    "`units: {depth: ft}`",
]


def hostile(folder):
    """Return the first look at a basin with hostile names, headers, kinds and cells."""
    wells, readings = basin()
    wells.loc[: len(HOSTILE) - 1, "well"] = HOSTILE
    readings = readings.astype({"temperature": object})
    readings.loc[: len(HOSTILE) - 1, "kind"] = HOSTILE
    readings.loc[10 : 9 + len(HOSTILE), "temperature"] = HOSTILE
    readings.loc[20 : 19 + len(HOSTILE), "well"] = HOSTILE
    for header in HOSTILE:
        readings[header] = 1
    return seen(folder, wells, readings)[0]


def test_nothing_in_the_data_steers_a_terminal_or_a_browser(tmp_path):
    record = hostile(tmp_path)
    told, html = console.text(record), page.html(record)
    for text in (told, html):
        assert not [c for c in text if unicodedata.category(c) in ("Cc", "Cf", "Zl") and c != "\n"]
        assert "N" * 1100 not in text
    assert html.count("<script") == 0
    assert "&lt;script&gt;" in html
    assert "7 * 7" in html, "templates in the data are text"
    longest = sorted(map(len, told.splitlines()))
    assert longest[-5] <= 170  # a table with a long name in each cell
    assert longest[-1] <= 1100  # lines to be typed are not broken
    assert all(each["ask"].count("`") % 2 == 0 for each in record["questions"])


def test_the_console_tells_what_the_page_tells(tmp_path):
    record = hostile(tmp_path)
    flat = re.sub(r"\W", "", console.text(record))
    html = page.html(record)
    for each in record["questions"]:
        for part, _ in page.code_parts(each["ask"]):
            assert re.sub(r"\W", "", console.plain(part)[:300]) in flat
    for code in {one["code"] for each in record["files"] for one in each["reasons"]}:
        assert code.replace("_", " ") in html and re.sub("_", "", code) in flat.replace("_", "")


def test_the_same_bytes_in_another_folder(tmp_path):
    made = []
    for name in ("one", "two words"):
        record = hostile(tmp_path / name)
        documents.save(record, tmp_path / name / "record.json")
        text = (tmp_path / name / "record.json").read_text(encoding="utf-8")
        made.append((text, page.html(record), console.text(record)))
    assert made[0] == made[1]
    assert not any(str(tmp_path) in text for text in made[0])


def test_no_path_of_the_machine_is_told(tmp_path):
    """Files and decisions that the config names by a whole path."""
    inputs = {"readings": [{"file": str(tmp_path / "away" / "far.csv"), "kinds": {"a": "bht"}}],
              "decisions": str(tmp_path / "away" / "decisions.csv")}  # fmt: skip
    settings = Settings.model_validate(
        {"run": "case", "crs": "EPSG:32614", "surface_temperature": {"model": "constant",
         "temperature_degc": SURFACE}, "inputs": {"wells": [{"file": "wells.csv"}], **inputs}}
    )  # fmt: skip
    told = answers.stated(settings)
    assert told["inputs"]["readings"] == [{"file": "far.csv", "kinds": {"a": "bht"}}]
    assert str(tmp_path) not in repr(told)


# Well logs

LAS = """~Version
VERS. 2.0 : CWLS LOG ASCII STANDARD
WRAP. NO  :
~Well
STRT.M 0.0 :
STOP.M 1.0 :
STEP.M 0.5 :
NULL. -999.25 :
WELL. {well} : WELL
LONG.DEG {x} : LONGITUDE
LATI.DEG {y} : LATITUDE
~Parameter
BHT.{unit} {degree} : BOTTOM HOLE TEMPERATURE
TDL.M {depth} : TOTAL DEPTH LOGGER
~Curve
DEPT.M : DEPTH
~ASCII
0.0
0.5
1.0
"""  # sections and items as in the LAS 2.0 standard of the CWLS (from memory)


def test_headers_of_logs_are_told_of_together(tmp_path):
    wells, readings = basin()
    for i, (well, reading) in enumerate(zip(wells.to_dict("records"), readings.to_dict("records"),
                                            strict=False)):  # fmt: skip
        unit, degree = ("DEGF", DEGF(reading["temperature"])) if i % 2 else ("DEGC", "")
        text = LAS.format(well=well["well"], x=well["x"], y=well["y"], unit=unit, degree=degree,
                          depth=reading["depth"])  # fmt: skip
        (tmp_path / f"log{i}.las").write_text(text, encoding="utf-8")
    (tmp_path / "none.las").write_text("<html></html>", encoding="utf-8")
    # the tables hold another basin, as a config may name both
    record, done = seen(tmp_path, wells.assign(well="T" + wells["well"]),
                        readings.assign(well="T" + readings["well"]),
                        inputs={"las": [{"file": "*.las"}]})  # fmt: skip
    told = [each for each in record["files"] if each["place"] == "inputs.las[0]"]
    assert [(each["table"], each["file"]) for each in told] == [
        ("wells", "*.las, 41 files"), ("readings", "*.las, 41 files"),
    ]  # fmt: skip
    reasons = {each["code"]: each["rows"] for each in told[1]["reasons"]}
    assert reasons == {"no_temperature": WELLS // 2, "unreadable_file": 1}
    assert (told[1]["rows"], told[1]["kept"]) == (WELLS + 1, WELLS // 2)
    assert sum(each["kept"] for each in record["files"] if each["table"] == "readings") == len(
        done.readings
    )
    assert column({"files": told}, "readings", "temperature")["missing"] == WELLS // 2
    shown = {name: column({"files": told}, "readings", name)["header"]
             for name in ("temperature", "depth")}  # fmt: skip
    assert shown == {"temperature": "BHT", "depth": "TDL"}, "as found, not sought"
