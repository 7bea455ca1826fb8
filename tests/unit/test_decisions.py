"""A reviewer has the last word, and every line of theirs is answered."""

import pytest
from ingest_case import codes, degc, flags, prepare

from basinheat.errors import UserError

HEAD = "well,reading,action,column,value,reason,initials,date\n"
END = ",checked the header,AB,2026-11-30\n"


def decide(folder, *lines, **case):
    (folder / "d.csv").write_text(HEAD + "".join(line + END for line in lines), encoding="utf-8")
    return prepare(folder, inputs={"decisions": "d.csv"}, **case)


def reading_of(prepared, well):
    for table in (prepared.readings, prepared.rejected):
        found = table.loc[(table["well"] == well) & (table["reading_id"] != ""), "reading_id"]
        if len(found):
            return found.iloc[0]
    raise AssertionError(well)


def test_keep_brings_a_refused_reading_back(tmp_path):
    wells, readings = "ODD,515000,6015000,100,105,,\n", "ODD,2005,11,,,,,,\n"
    first = prepare(tmp_path, wells=wells, readings=readings)
    assert codes(first, "ODD") == ["not_above_surface_temperature"]
    name = reading_of(first, "ODD")
    out = decide(tmp_path, f",{name},keep,,", wells=wells, readings=readings)
    assert {"reviewed_keep", "not_above_surface_temperature"} <= flags(out.readings, "ODD")
    assert codes(out) == ["decision_applied"]


def test_set_replaces_a_value_and_the_rules_look_again(tmp_path):
    case = {
        "wells": "ODD,515000,6015000,100,105,,\n",
        "readings": "ODD,2005,warm,,,,,,\nODD,1505,44,,,,,,\n",
    }
    name = reading_of(prepare(tmp_path, **case), "ODD")
    rejected = prepare(tmp_path, **case).rejected
    name = rejected.loc[rejected["code"] == "not_a_number", "reading_id"].item()
    out = decide(tmp_path, f",{name},set,temperature,{degc(2005)}", **case)
    assert len(out.readings[out.readings["well"] == "ODD"]) == 2
    out = decide(tmp_path, f",{name},set,temperature,500", **case)
    assert "temperature_impossible" in codes(out)


def test_set_moves_a_well(tmp_path):
    out = decide(tmp_path, "N00,,set,x,505000", "N00,,set,datum_elevation,112")
    row = out.wells.set_index("well").loc["N00"]
    assert (row["easting_m"], row["datum_elevation_m"]) == (505000.0, 112.0)
    assert "reviewed_set" in row["flags"]


def test_reject_and_regrade(tmp_path):
    plain = prepare(tmp_path)
    one = reading_of(plain, "N02")
    out = decide(tmp_path, "N00,,reject,,", "N01,,regrade,,dst", f",{one},reject,,")
    assert codes(out, "N00") == ["decision_applied", "reviewed_reject", "well_rejected"]
    assert out.readings.set_index("well").loc["N01", "kind"] == "dst"
    refused = out.rejected[out.rejected["code"] == "reviewed_reject"]
    assert (
        refused["sentence"].str.contains("checked the header (AB, 2026-11-30)", regex=False).all()
    )
    assert "N02" not in set(out.readings["well"])


def test_a_well_far_away_is_kept_on_request(tmp_path):
    case = {"wells": "FAR,999000,6000000,100,105,,\n"}
    assert codes(prepare(tmp_path, **case), "FAR") == ["coordinates_suspect"]
    out = decide(tmp_path, "FAR,,keep,,", **case)
    assert {"reviewed_keep", "coordinates_suspect"} <= flags(out.wells, "FAR")


def test_every_line_is_answered(tmp_path):
    (tmp_path / "d.csv").write_text(
        HEAD
        + "NOBODY,,reject,,"
        + END
        + ",r0123456789abcdef,keep,,"
        + END
        + "N00,,erase,,"
        + END
        + "N00,,reject,,,,,\n"
        + "N00,,set,colour,3"
        + END
        + "N00,,set,x,east"
        + END
        + ",,keep,,"
        + END
        + "N00,,regrade,,guess"
        + END,
        encoding="utf-8",
    )
    out = prepare(tmp_path, inputs={"decisions": "d.csv"})
    audit = out.rejected[out.rejected["table"] == "decisions"].sort_values("source_line")
    assert audit["source_line"].tolist() == list(range(2, 10))
    assert audit["code"].tolist() == ["decision_without_effect"] * 2 + ["decision_invalid"] * 6
    assert len(out.readings) == 16


def test_a_file_that_holds_no_decisions(tmp_path):
    (tmp_path / "d.csv").write_text("well,comment\nN00,good\n")
    with pytest.raises(UserError, match="decisions need the columns"):
        prepare(tmp_path, inputs={"decisions": "d.csv"})
