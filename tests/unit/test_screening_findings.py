"""What screening found, as a table for people and as a form that they can fill in and hand back.

The form of the table is our own; the cases are too.
"""

import csv

import pandas as pd
import pytest
from ingest_case import codes, degc, flags, prepare

from basinheat import tables
from basinheat.ingest.decisions import COLUMNS
from basinheat.screening import codes as known
from basinheat.settings.wells import Screening

WELLS = "ODD,515000,6015000,100,105,,2400\n=HOT(),525000,6015000,100,105,,\n"
READINGS = (
    "ODD,2005,11,,,,,,\n"  # not above the surface temperature
    f"ODD,2505,{degc(2505)},,,60,,1948,\n"  # deeper than total depth, old, long circulation
    f"=HOT(),2005,{degc(2005, 55.0)},,,,,,\n"  # an outlier
)


@pytest.fixture
def found(tmp_path):
    return prepare(tmp_path, wells=WELLS, readings=READINGS)


def test_every_flag_and_refusal_is_a_finding(found):
    rows = found.findings
    assert set(rows.loc[rows["severity"] == "refused", "code"]) == {"not_above_surface_temperature"}
    for row in found.readings.to_dict("records"):
        raised = set(row["flags"].split(";")) & set(known.READINGS)
        told = rows[rows["reading_id"] == row["reading_id"]]
        assert set(told["code"]) == raised
        assert (told["source_line"] == row["source_line"]).all()
    assert {"deeper_than_total_depth", "old_reading", "circulation_long", "spatial_outlier"} <= set(
        rows["code"]
    )


def test_a_sentence_names_value_threshold_and_setting(found):
    rows = found.findings.set_index("code")["sentence"]
    assert "60.0 h" in rows["circulation_long"]
    assert "48 h (screening.longest_circulation_h)" in rows["circulation_long"]
    assert "more than 3.5 (screening.outlier_score)" in rows["spatial_outlier"]


def test_an_outlier_says_what_was_expected(found):
    """The wells around have 28.5 to 31.5 K/km."""
    row = found.findings.set_index("code").loc["spatial_outlier"]
    assert degc(2005, 28.5) <= row["expected_degc"] <= degc(2005, 31.5)
    assert row["score"] > 3.5


def test_every_setting_that_a_sentence_names_exists():
    for flag in [*known.READINGS.values(), *known.WELLS.values()]:
        for name in pd.Series([flag.sentence]).str.findall(r"screening\.(\w+)").item():
            assert name in Screening.model_fields
        assert flag.severity in known.SEVERITIES


def test_the_worst_comes_first(found):
    rank = found.findings["severity"].map({name: i for i, name in enumerate(known.SEVERITIES)})
    assert rank.is_monotonic_increasing
    assert found.decisions_template["severity"].tolist() == ["refused", "doubt", "doubt"]


def test_the_form_has_the_columns_of_decisions(found, tmp_path):
    tables.DecisionsTemplate.save_csv(found.decisions_template, tmp_path / "form.csv")
    with open(tmp_path / "form.csv", encoding="utf-8", newline="") as file:
        head, *rows = csv.reader(file)
    assert tuple(head[: len(COLUMNS)]) == COLUMNS
    assert {"code", "sentence"} <= set(head[len(COLUMNS) :])
    assert all(row[2:8] == [""] * 6 for row in rows), "nothing is decided in advance"
    assert {row[0] for row in rows} == {"ODD", "'=HOT()"}, "no spreadsheet finds a formula"


def test_a_form_that_nobody_filled_in_changes_nothing(found, tmp_path):
    tables.DecisionsTemplate.save_csv(found.decisions_template, tmp_path / "form.csv")
    again = prepare(tmp_path, wells=WELLS, readings=READINGS, inputs={"decisions": "form.csv"})
    pd.testing.assert_frame_equal(again.readings, found.readings)
    pd.testing.assert_frame_equal(again.rejected, found.rejected)
    pd.testing.assert_frame_equal(again.findings, found.findings)


def test_a_form_that_was_filled_in_is_obeyed_and_not_asked_again(found, tmp_path):
    form = found.decisions_template
    code = form["code"].str.contains
    answered = ["reason", "initials", "date"]
    kept, rejected = code("not_above_surface"), code("spatial_outlier")
    form.loc[kept, "action"], form.loc[rejected, "action"] = "keep", "reject"
    form.loc[kept | rejected, answered] = ["header checked", "AB", "2026-11-30"]
    tables.DecisionsTemplate.save_csv(form, tmp_path / "form.csv")
    out = prepare(tmp_path, wells=WELLS, readings=READINGS, inputs={"decisions": "form.csv"})
    assert codes(out, table="decisions") == ["decision_applied"] * 2
    assert "=HOT()" not in set(out.readings["well"])
    assert out.readings["flags"].str.contains("not_above_surface_temperature").sum() == 1
    assert out.decisions_template["code"].str.contains("deeper_than_total_depth").tolist() == [True]


def test_a_line_without_an_action_but_with_a_value_is_told(tmp_path):
    head = ",".join(COLUMNS)
    (tmp_path / "d.csv").write_text(f"{head}\nN00,,,x,505000,typed,AB,2026-11-30\nN01,,,,,,,\n")
    out = prepare(tmp_path, inputs={"decisions": "d.csv"})
    assert codes(out) == ["decision_invalid"]


def test_what_no_decision_can_mend_is_not_asked(tmp_path):
    rows = "NOBODY,2005,70,,,,,,\nN00,2005,,,,,,,\n"
    out = prepare(tmp_path, readings=rows)
    assert set(out.findings["code"]) >= {"unknown_well", "no_temperature"}
    assert out.decisions_template.empty


def test_a_name_that_is_a_formula_stays_a_name(found):
    assert "spatial_outlier" in flags(found.readings, "=HOT()")


def test_no_findings_are_an_empty_table(tmp_path):
    out = prepare(tmp_path, base=False)
    assert out.findings.empty
    assert list(out.findings.columns) == list(tables.Findings.columns)
    tables.Findings.save(out.findings, tmp_path / "f.parquet")
    tables.Findings.save_csv(out.findings, tmp_path / "f.csv")
    assert tables.Findings.load(tmp_path / "f.parquet").empty
    assert (tmp_path / "f.csv").read_text().strip() == ",".join(tables.Findings.columns)
