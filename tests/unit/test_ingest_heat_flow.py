"""Heat flow that others found: from a file to data of the map."""

import pytest
from ingest_case import codes, prepare

HEAD = "well,x,y,heat_flow,heat_flow_std,conductivity,base,quality\n"


def published(folder, rows, **changes):
    """Return what ingest makes of rows of heat flow beside the ordinary wells."""
    (folder / "flow.csv").write_text(HEAD + rows, encoding="utf-8")
    return prepare(folder, inputs={"heat_flow": [{"file": "flow.csv"}]}, **changes)


def test_a_row_becomes_a_point(tmp_path):
    (point,) = published(tmp_path, "A,505000,6005000,62,5,2.4,900,U2.M1\n").heat_flow.itertuples()
    assert (point.well, point.heat_flow_mw_m2, point.heat_flow_std_mw_m2) == ("A", 62.0, 5.0)
    assert (point.easting_m, point.northing_m) == (505000.0, 6005000.0)
    assert (point.conductivity_w_mk, point.quality, point.flags) == (2.4, "U2.M1", "")
    assert point.source_line == 2


@pytest.mark.parametrize(
    ("row", "code"),
    [
        (",505000,6005000,62,5,,,", "no_well"),
        ("A,,6005000,62,5,,,", "no_coordinates"),
        ("A,505000,here,62,5,,,", "not_a_number"),
        ("A,505000,6005000,,5,,,", "no_heat_flow"),
        ("A,505000,6005000,much,5,,,", "not_a_number"),
        ("A,505000,6005000,-3,5,,,", "heat_flow_outside"),
        ("A,505000,6005000,62000,5,,,", "heat_flow_outside"),
        ("A,900000,6005000,62,5,,,", "far_from_wells"),
    ],
)
def test_a_row_that_can_not_be_is_in_the_ledger(tmp_path, row, code):
    prepared = published(tmp_path, row + "\n")
    assert len(prepared.heat_flow) == 0
    assert codes(prepared, table="heat_flow") == [code]


def test_without_an_uncertainty_a_share_of_the_value_is_assumed(tmp_path):
    rows = "A,505000,6005000,60,,,,\nB,515000,6005000,60,-1,,,\n"
    prepared = published(tmp_path, rows, heat_flow={"published_std_share": 0.1})
    assert prepared.heat_flow["heat_flow_std_mw_m2"].tolist() == [6.0, 6.0]
    assert prepared.heat_flow["flags"].tolist() == [
        "heat_flow_std_assumed",
        "heat_flow_std_assumed;heat_flow_std_dropped",
    ]


def test_one_hole_counts_once_by_its_deepest_interval(tmp_path):
    rows = "A,505000,6005000,60,5,,300,\nA,505000,6005000,66,5,,900,\nB,505003,6005000,61,5,,200,\n"
    prepared = published(tmp_path, rows)
    assert prepared.heat_flow["heat_flow_mw_m2"].tolist() == [66.0]
    assert codes(prepared, table="heat_flow") == ["merged", "merged"]


def test_a_place_of_a_wells_name_is_told_apart(tmp_path):
    prepared = published(tmp_path, "N00,505000,6005000,60,5,,,\n")
    assert prepared.heat_flow["well"].tolist() == ["N00 (published)"]


def test_the_order_of_rows_changes_nothing(tmp_path):
    rows = [
        "A,505000,6005000,60,5,,300,",
        "B,515000,6005000,66,4,,900,",
        "A,505000,6005000,61,5,,,",
    ]
    both = []
    for name, lines in (("one", rows), ("other", rows[::-1])):
        (tmp_path / name).mkdir()
        found = published(tmp_path / name, "\n".join(lines) + "\n").heat_flow
        both.append(found.drop(columns="source_line"))
    assert both[0].equals(both[1])
