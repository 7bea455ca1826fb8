"""What the report says of the basin's own correction, reckoned by hand on a made-up run."""

import html
from dataclasses import replace

import made_up_report
import numpy as np
import pandas as pd
import pytest

from basinheat import tables
from basinheat.corrections import choose
from basinheat.corrections.calibration.ladder import STEPS
from basinheat.corrections.methods import local_calibration
from basinheat.report import calibration, captions, page, residuals, summary


@pytest.fixture(scope="module")
def run():
    """Make a run with ten pairs, of which a constant was learned."""
    return made_up_report.contents()


@pytest.fixture(scope="module")
def text(run):
    """Write its page once, without the maps, which take long to draw."""
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr("basinheat.report.mapfigures.map_pictures", lambda _: [])
        return page.html(run)


def without_calibration(run, refused):
    """Return a run whose pairs are too few."""
    steps = {name: {"pairs": 3, "wells": 3, "chosen": False, "refused": refused} for name in STEPS}
    record = {"pairs": 3, "wells": 3, "pairs_in_one_well": 3, "steps": steps}
    return replace(run, recovery={"calibration": record})


def test_every_form_of_the_correction_has_its_fate(run):
    """A constant of RMSE 2.3 K, a line of 2.29: better by 0.4 %, so not taken; no row is lost."""
    rows = calibration.ladder_sheet(run).rows
    assert [row[-1] for row in rows] == [
        "chosen", "better by less than 1 %", *["refused: 10 pairs, it needs 20"] * 3,
    ]  # fmt: skip
    assert rows[0][3:7] == ["2.3", "0.0", "+10.0 ± 0.7", "–"]
    assert rows[1][5:7] == ["+10.0 ± 0.7", "+1.0 ± 1.2"]
    assert rows[2][3:7] == ["–"] * 4
    assert {len(row) for row in rows} == {8}, "no column for terms that no form has"


def test_a_form_that_was_asked_for_leaves_the_others_unasked(run):
    asked = made_up_report.settings(correction={"calibration": {"model": "constant"}})
    rows = calibration.ladder_sheet(replace(run, settings=asked)).rows
    assert [row[-1] for row in rows[:2]] == ["chosen", "not asked for"]


def test_residuals_are_told_by_depth_and_apart_from_what_counts(run):
    """Five pairs a bin, off by -2 K above and 2 K below; Horner by -3 K. Equal values: no spread.

    All ten: median 0, distances to it 2 K, so 2.97 K of spread and 1.2533 x 2.97/sqrt(10) = 1.2 K.
    """
    rows = calibration.by_depth_sheet(run).rows
    assert [row[0] for row in rows] == ["1,000 to 1,900", "1,900 to 2,800", "all"]
    assert [row[1:] for row in rows] == [
        ["5", "−2.0 ± 0.0", "0.0", "5", "−3.0 ± 0.0", "0.0"],
        ["5", "+2.0 ± 0.0", "0.0", "5", "−3.0 ± 0.0", "0.0"],
        ["10", "0.0 ± 1.2", "3.0", "10", "−3.0 ± 0.0", "0.0"],
    ]


def test_the_picture_of_residuals_has_times_where_any_is_known(run):
    """Five of ten made-up pairs have no time; without any time there is no second panel."""
    picture = residuals.residual_picture(run)
    assert len(picture.panels) == 2
    assert "5 pairs have no time" in picture.caption
    untimed = replace(run, calibration=run.calibration.assign(since_circulation_h=np.nan))
    assert len(residuals.residual_picture(untimed).panels) == 1
    wild = replace(run, calibration=run.calibration.assign(residual_k=80.0))
    assert "at the edge" in residuals.residual_picture(wild).caption
    assert "at the edge" not in picture.caption


def test_too_few_pairs_are_one_sentence_and_no_picture(run, text, monkeypatch):
    few = without_calibration(run, "3 pairs, it needs 5")
    few = replace(few, calibration=run.calibration.head(0))
    none = replace(few, recovery={})
    for made, why in ((few, "3 pairs, it needs 5"), (none, "nowhere does a direct temperature")):
        assert not calibration.found(made)
        assert why in calibration.introduction(made)
        assert residuals.residual_picture(made).panels == []
    monkeypatch.setattr("basinheat.report.mapfigures.map_pictures", lambda _: [])
    shown = html.unescape(page.html(few))
    assert calibration.introduction(few) in shown
    for title in ("Residuals at the pairs", "Forms of the correction"):
        assert title not in shown
        assert title in text


def test_where_the_calibration_counts_alone_nothing_is_set_beside_it(run):
    """No empty columns, no word of open signs."""
    table = run.calibration[run.calibration["method"].eq("local_calibration")]
    alone = replace(run, calibration=table.assign(chosen=True))
    assert {len(row) for row in calibration.by_depth_sheet(alone).rows} == {4}
    assert "Open:" not in residuals.residual_picture(alone).caption
    assert "Open:" in residuals.residual_picture(run).caption


def test_pairs_of_wells_held_out_are_counted(run):
    held = made_up_report.settings(validation={"holdout": ["W-01", "W-30"]})
    assert "pairs with them, 1, judge" in calibration.introduction(replace(run, settings=held))
    assert "held out" not in calibration.introduction(run)


def test_where_the_calibration_counts_is_said(run):
    """Not in the order; in it and never needed; in it and used for twelve."""
    assert "is not in correction.order" in calibration.introduction(run)
    ordered = replace(run, about=replace(run.about, methods=("equilibrium", "local_calibration")))
    assert "counts nowhere here" in calibration.introduction(ordered)
    table = run.temperatures.copy()
    table.loc[:11, "method"] = "local_calibration"
    used = replace(ordered, temperatures=table)
    assert "counts for 12 temperatures" in calibration.introduction(used)


def test_what_recovery_learned_is_said_with_its_sign(run):
    """ln cooling −0.1 ± 0.03 of 0.2: exp(−0.1) − 1 = −9.5 %, so 10 % less, −0.5 σ ± 0.15."""
    sources = tables.Sources.conform(
        pd.DataFrame(
            {
                "source": ["recovery:cooling", "recovery:diffusivity", "recovery:mud_capacity"],
                "prior_std": [0.2, 0.25, 0.2],
                "mean": [-0.1, 0.05, 0.02],
                "std": [0.03, 0.1, 0.199],
                "unit": ["ln K", "ln m2/s", "1"],
                "n_wells": 9,
            }
        )
    )
    rows = calibration.recovery_sheet(replace(run, sources=sources)).rows
    assert rows[0][1:] == ["−0.5 ± 0.1", "mud cooled the holes 10 % less than assumed (± 3 %)"]
    assert rows[1][2] == "as assumed, to ± 11 %"
    assert rows[2][2] == "these wells hardly tell: the assumption stands"
    assert calibration.recovery_sheet(run).rows == []


def test_sources_and_flags_of_the_calibration_have_words(run):
    for name in ("method:local_calibration_1", "method:local_calibration_slope",
                 "method:harrison1983_slope"):  # fmt: skip
        assert not {"_"} & {*captions.of_source(name)}, name
    assert captions.of_source("method:local_calibration_1") != captions.of_source(
        "method:local_calibration_2"
    )
    for code in (local_calibration.BEYOND, choose.LARGE):
        flagged = run.temperatures.assign(flags=code)
        rows = {
            row[1]: row[2] for row in summary.flags_sheet(replace(run, temperatures=flagged)).rows
        }
        assert rows[captions.of_flag(code)] == str(len(flagged))
        assert captions.of_flag(code).startswith(code.replace("_", " ") + ": ")


def test_each_thing_is_said_once(run, text):
    """The steps of the calibration stand in their own table only, σ and its scale by method."""
    assert summary.learned_sheet(run).rows == [
        ["its part in proportion to the rock's rise above the surface", "0.35", "K per K"],
        ["sets of repeated readings that taught this", "12", "sets"],
    ]
    assert "Corrections used" not in text and "Scale on the stated variance" not in text
