"""The first look: what it tells of files of which one knows what is wrong with them."""

import numpy as np
import pandas as pd
import pytest
from firstlook_case import WELLS, basin, entry, seen
from hypothesis import given
from hypothesis import strategies as st

from basinheat.firstlook import (
    cell_questions,
    columns,
    gradients,
    headers,
)
from basinheat.firstlook.proposals import columns_and_units, proposal
from basinheat.settings import schemas
from basinheat.settings.load import load_config


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
