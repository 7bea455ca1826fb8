"""Rows of one well in several files, and readings that contradict each other."""

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from ingest_case import codes, degc, flags, prepare

FILES = [{"file": "wells.csv"}, {"file": "more.csv"}]
HEAD = "well,x,y,ground_elevation,datum_elevation,water_depth,total_depth\n"
RUNS = "well,depth,temperature,kind,date,log_run\n"


def more(folder, text, **case):
    """Prepare with a second file of wells."""
    (folder / "more.csv").write_text(HEAD + text, encoding="utf-8")
    case["inputs"] = {"wells": FILES} | case.get("inputs", {})
    return prepare(folder, **case)


def test_the_first_file_counts_and_the_ledger_shows_both(tmp_path):
    out = more(
        tmp_path,
        "TWO,515000,6015000,130,135,,3000\n",
        wells="TWO,515010,6015000,100,105,,\n",
    )
    row = out.wells.set_index("well").loc["TWO"]
    assert (row["ground_elevation_m"], row["total_depth_m"]) == (100.0, 3000.0)
    assert row["easting_m"] == 515010.0
    assert "well_conflict" in row["flags"]
    (told,) = out.rejected.itertuples()
    assert (told.table, told.code, told.source_file) == ("wells", "well_conflict", "more.csv")
    assert "ground_elevation 100 m in wells.csv, line 18, and not 130" in told.sentence
    assert "datum_elevation 105 m in wells.csv, line 18, and not 135" in told.sentence


def test_the_order_of_files_decides_and_not_their_names(tmp_path):
    (tmp_path / "a.csv").write_text(HEAD + "TWO,515000,6015000,130,135,,\n")
    case = {"wells": "TWO,515000,6015000,100,105,,\n"}
    case["inputs"] = {"wells": [{"file": "a.csv"}, {"file": "wells.csv"}]}
    out = prepare(tmp_path, **case)
    assert out.wells.set_index("well").loc["TWO", "ground_elevation_m"] == 130.0


def test_the_fullest_row_stays_where_rows_agree(tmp_path):
    out = more(
        tmp_path, "TWO,515000,6015000,100,105,,3000\n", wells="TWO,515000,6015000,100.4,,,\n"
    )
    assert codes(out) == ["merged"]
    assert out.rejected["source_file"].item() == "wells.csv"
    row = out.wells.set_index("well").loc["TWO"]
    assert row["source_file"] == "more.csv"
    assert row["ground_elevation_m"] == 100.4  # of the first file, within rounding to a foot
    assert "well_conflict" not in row["flags"]


def test_a_row_without_place_completes_the_others(tmp_path):
    out = more(tmp_path, "TWO,,,,,,3000\n", wells="TWO,515000,6015000,100,105,,\n")
    assert codes(out) == ["merged"]
    assert out.wells.set_index("well").loc["TWO", "total_depth_m"] == 3000.0


def test_rows_far_apart_refuse_the_well(tmp_path):
    out = more(
        tmp_path,
        "TWO,515000,6015600,100,105,,\n",
        wells="TWO,515000,6015000,100,105,,\n",
        readings=f"TWO,2005,{degc(2005)},,,,,,\n",
    )
    assert codes(out) == ["well_location_conflict"] * 2 + ["well_rejected"]
    assert "more.csv, line 2" in out.rejected["sentence"].str.cat()


@pytest.mark.parametrize(("file", "northing"), [("", 6015000.0), ("more.csv", 6016000.0)])
def test_a_decision_keeps_one_of_them(tmp_path, file, northing):
    (tmp_path / "d.csv").write_text(
        "well,reading,action,column,value,reason,initials,date\n"
        f"TWO,,keep,,{file},right place,AB,2026-11-30\n"
    )
    out = more(
        tmp_path,
        "TWO,515000,6016000,100,105,,\n",
        wells="TWO,515000,6015000,100,105,,\n",
        inputs={"decisions": "d.csv"},
    )
    assert codes(out) == ["decision_applied", "well_location_conflict"]
    row = out.wells.set_index("well").loc["TWO"]
    assert row["northing_m"] == northing
    assert {"well_location_conflict", "reviewed_keep"} <= flags(out.wells, "TWO")


@pytest.mark.parametrize(("line", "northing"), [(18, 6015000.0), (19, 6016000.0)])
def test_a_decision_names_a_line_of_one_file(tmp_path, line, northing):
    """A well that stands twice in one file; expected values by hand, from the rows."""
    case = {
        "wells": "TWO,515000,6015000,100,105,,\nTWO,515000,6016000,100,105,,\n",
        "inputs": {"decisions": "d.csv"},
    }
    head = "well,reading,action,column,value,reason,initials,date\n"
    (tmp_path / "d.csv").write_text(f"{head}TWO,,keep,,wells.csv:{line},seen,AB,2026-11-30\n")
    out = prepare(tmp_path, **case)
    assert out.wells.set_index("well").loc["TWO", "northing_m"] == northing
    told = out.rejected.set_index("code")["sentence"]
    assert sorted(told.index) == ["decision_applied", "well_location_conflict"]
    assert told["decision_applied"].endswith(f" Kept: wells.csv, line {line}.")
    other = told["well_location_conflict"]
    assert f"1.0 km from the one that a decision keeps (wells.csv, line {line})" in other
    assert "by a decision:" not in other, "nothing is left to decide"


def test_a_decision_that_names_no_row_says_how_to(tmp_path):
    head = "well,reading,action,column,value,reason,initials,date\n"
    (tmp_path / "d.csv").write_text(f"{head}TWO,,keep,,wells.csv:99,seen,AB,2026-11-30\n")
    wells = "TWO,515000,6015000,100,105,,\nTWO,515000,6016000,100,105,,\n"
    out = prepare(tmp_path, wells=wells, inputs={"decisions": "d.csv"})
    told = out.rejected.set_index("code")["sentence"]
    assert "file:line such as wells.csv:18" in told["decision_invalid"]
    assert told["well_location_conflict"].str.contains("by a decision:").all()


def runs(folder, first, second, **names):
    """Prepare with two files of readings of N00."""
    for file, rows in (("a.csv", first), ("b.csv", second)):
        (folder / names.get(file, file)).write_text(RUNS + rows, encoding="utf-8")
    inputs = {"readings": [{"file": "a.csv"}, {"file": "b.csv"}]}
    return prepare(folder, inputs=inputs)


T, OTHER = round(degc(2005), 1), round(degc(2005) + 3, 1)


def test_another_temperature_of_the_same_run_in_another_file(tmp_path):
    out = runs(tmp_path, f"N00,2005,{T},,1984-05-01,2\n", f"N00,2005,{OTHER},,1984-05-01,2\n")
    assert codes(out) == ["reading_conflict"]
    assert out.readings["temperature_degc"].tolist() == [T]
    told = out.rejected["sentence"].item()
    assert f"{OTHER:g} degC here" in told and f"{T:g} degC in a.csv, line 2" in told


@pytest.mark.parametrize("same", [",,,", ",,1984-05-01,", ",,,2"])
def test_without_a_date_and_run_both_are_kept(tmp_path, same):
    """Two tools of one day read one depth: only date and run together single out a reading."""
    out = runs(tmp_path, f"N00,2005,{T}{same}\n", f"N00,2005,{OTHER}{same}\n")
    assert codes(out) == []
    assert len(out.readings) == 2


def test_two_readings_of_one_file_are_no_conflict(tmp_path):
    both = f"N00,2005,{T},,1984-05-01,2\nN00,2005,{OTHER},,1984-05-01,2\n"
    assert codes(runs(tmp_path, both, f"N01,2005,{T},,,\n")) == []


places = st.sampled_from(["515000", "515200", "516000", "", "x"])
values = st.sampled_from(["", "100", "100.5", "140"])


@settings(
    max_examples=25, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture]
)
@given(st.lists(st.tuples(st.sampled_from(["A-1", "A1", "B"]), places, values), max_size=8))
def test_no_row_is_lost_whatever_the_rows(tmp_path, rows):
    """Rows in = kept + rejected + merged (also checked at run time), and one row a well."""
    text = "".join(f"{well},{x},6015000,{z},,,\n" for well, x, z in rows)
    out = more(tmp_path, text, inputs={"well_names": "normalised"})
    assert not out.wells["well"].duplicated().any()
    assert len(out.wells) + (out.rejected["table"] == "wells").sum() == 16 + len(rows)
