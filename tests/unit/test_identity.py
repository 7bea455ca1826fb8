"""Which names mean one well: rules, their keys, and wells that are kept apart."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from ingest_case import codes, degc, flags, prepare

from basinheat.ingest.identity import keys, similar
from basinheat.ingest.places import crs_of

T = degc(1505)


def named(*names, step=2000):
    """Return rows of wells of these names, apart from each other by a step in metres."""
    return "".join(f"{n},{515000 + step * i},6015000,100,105,,\n" for i, n in enumerate(names))


def read(*names):
    """Return a reading for each name, each at a depth of its own."""
    return "".join(
        f"{n},{1505 + 50 * i},{degc(1505 + 50 * i)},,,,,,\n" for i, n in enumerate(names)
    )


@pytest.mark.parametrize(
    ("rule", "one", "other", "same"),
    [
        ("exact", "0042", "42", False),
        ("normalised", "0042", "42", True),
        ("normalised", "42", "42.0", True),
        ("normalised", "42", "42.5", False),
        ("normalised", "Oak-Hill_7", "OAK HILL 7", True),
        ("normalised", "O'ak/Hill.7,", "oakhill7", True),
        ("normalised", "A-1", "A-10", False),
        ("normalised", "000", "0", False),  # zeros alone are no number in front of something
        ("us_api", "42-123-45678", "42123456780000", True),
        ("us_api", "421234567800", "4212345678", True),
        ("us_api", "42-123-45678-01-00", "42123456780000", True),  # sidetracks of one well
        ("us_api", "4212345678", "4212345679", False),
        ("us_api", "512345678", "0512345678", True),  # Colorado, its zero lost in a spreadsheet
        ("us_api", "A-1", "A1", False),  # no number: text, as with exact
    ],
)
def test_what_makes_two_names_one(rule, one, other, same):
    """The rules as config/README.md states them; no source beyond."""
    first, second = keys([one, other], rule)
    assert (first == second) is same


@given(st.lists(st.text(max_size=12), max_size=8))
def test_a_key_is_never_blank_and_keys_of_keys_change_nothing(names):
    for rule in ("exact", "normalised", "us_api"):
        found = keys(names, rule)
        assert all(key for key, name in zip(found, names, strict=True) if name)
        if rule == "exact":
            assert found == names


def test_first_spelling_in_the_wells_stays_and_every_change_is_flagged(tmp_path):
    (tmp_path / "more.csv").write_text("well,x,y,total_depth\nOAK HILL 7,515000,6015000,3000\n")
    (tmp_path / "l.csv").write_text("well,top,base,lithology\noakhill7,5,1005,shale\n")
    out = prepare(
        tmp_path,
        wells=named("Oak-Hill 7"),
        readings=read("OAK-HILL 7", "Oak-Hill 7"),
        inputs={
            "wells": [{"file": "wells.csv"}, {"file": "more.csv"}],
            "layers": [{"file": "l.csv"}],
            "well_names": "normalised",
        },
    )
    row = out.wells.set_index("well").loc["Oak-Hill 7"]
    assert row["total_depth_m"] == 3000.0
    assert "well_name_matched" in row["flags"]
    found = out.readings[out.readings["well"] == "Oak-Hill 7"].sort_values("depth_m")
    assert ["well_name_matched" in text for text in found["flags"]] == [True, False]
    assert out.layers["well"].tolist() == ["Oak-Hill 7"]
    assert codes(out) == ["merged"]
    assert out.rejected["well"].tolist() == ["OAK HILL 7"]  # as written


def test_wells_that_lie_apart_are_kept_apart(tmp_path):
    case = {
        "wells": named("A-1", "A1"),
        "readings": read("A-1", "A1", "a 1"),
        "inputs": {"well_names": "normalised"},
    }
    out = prepare(tmp_path, **case)
    for well in ("A-1", "A1"):
        assert "well_name_ambiguous" in flags(out.wells, well)
        assert (out.readings["well"] == well).sum() == 1
    assert codes(out) == ["unknown_well"]
    assert "well_name_ambiguous" in out.rejected["sentence"].item()


def test_a_row_without_place_does_not_choose_among_wells_kept_apart(tmp_path):
    out = prepare(
        tmp_path,
        wells=named("A-1", "A1") + "a 1,,,100,105,,2500\n",
        inputs={"well_names": "normalised"},
    )
    assert codes(out) == ["no_coordinates"]
    assert out.wells.set_index("well").loc[["A-1", "A1"], "total_depth_m"].isna().all()


def test_readings_of_a_refused_well_say_so_in_any_spelling(tmp_path):
    out = prepare(
        tmp_path,
        wells="LOST 1,,6015000,100,105,,\n",
        readings=read("lost-1"),
        inputs={"well_names": "normalised"},
    )
    assert codes(out) == ["no_coordinates", "well_rejected"]


def test_without_a_rule_the_log_tells_what_one_would_join(tmp_path, caplog):
    with caplog.at_level("WARNING"):
        out = prepare(tmp_path, readings=read("n-01", "n 01", "nobody"))
    assert codes(out) == ["unknown_well"] * 3
    assert "2 rows name no well, but would under `well_names: normalised`" in caplog.text
    assert '"N01"' in out.rejected.set_index("well").loc["n-01", "sentence"]


def test_similar_names():
    assert similar(["n 1", "x"], ["N-1", "N2"]) == ["N-1", ""]


def test_a_decision_finds_the_well_by_either_name(tmp_path):
    (tmp_path / "d.csv").write_text(
        "well,reading,action,column,value,reason,initials,date\n"
        "a1,,regrade,,dst,test,AB,2026-11-30\nA-1,,reject,,,test,AB,2026-11-30\n"
    )
    case = {"wells": named("A-1"), "readings": read("a1")}
    case["inputs"] = {"well_names": "normalised", "decisions": "d.csv"}
    out = prepare(tmp_path, **case)
    assert codes(out, table="decisions") == ["decision_applied"] * 2
    assert "A-1" not in set(out.wells["well"])


@pytest.mark.parametrize(
    ("word", "crs"),
    [
        ("EPSG:4267", "EPSG:4267"),
        ("4267", "EPSG:4267"),
        ("nad27", "EPSG:4267"),  # codes of the EPSG registry
        ("NAD 83", "EPSG:4269"),
        ("WGS-84", "EPSG:4326"),
        ("ED50", "EPSG:4230"),
        ("ETRS89", "EPSG:4258"),
        ("GDA94", "EPSG:4283"),
        ("99999", ""),
        ("Potsdam?", ""),
    ],
)
def test_crs_of_a_row(word, crs):
    assert crs_of(word) == crs


def test_rows_name_their_own_crs(tmp_path):
    out = prepare(
        tmp_path,
        well_header="well,x,y,ground_elevation,datum_elevation,srs\n",
        base=False,
        wells="MAP,500000,6000000,100,105,\nGLOBE,3.0,54.0,100,105,WGS84\nNO,3,54,100,105,hm\n",
        readings=read("MAP", "GLOBE", "NO"),
        wells_file={
            "crs_column": "srs",
            "columns": {
                name: name for name in ("well", "x", "y", "ground_elevation", "datum_elevation")
            },
        },
    )
    wells = out.wells.set_index("well")
    # on the central meridian of zone 31 the easting is 500 km by definition
    assert wells.loc["GLOBE", "easting_m"] == pytest.approx(500000.0, abs=1e-3)
    assert wells.loc["MAP", "longitude_deg"] == pytest.approx(3.0, abs=1e-9)
    assert codes(out, "NO") == ["crs_unknown", "well_rejected"]
    assert np.isfinite(wells["latitude_deg"]).all()
