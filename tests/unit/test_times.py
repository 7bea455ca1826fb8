"""Times since circulation in all their writings.

What a cell means is common practice (config/README.md, "Times"; METHODS K, Q12), no source; the
hours themselves are arithmetic.
"""

import numpy as np
import pandas as pd
import pytest
from ingest_case import codes, flags, prepare

from basinheat.ingest import times
from basinheat.screening.stops import run_order

HEAD = (
    "well,depth,temperature,since_circulation,circulation_stopped,logger_on_bottom,date,log_run\n"
)
W = "W,515000,6015000,100,105,,\n"


def case(folder, *rows, **changes):
    """Return ingest of readings at 2005 m of well W: since, stopped, bottom, date, run, degC."""
    lines = [
        f"W,2005,{row[5] if len(row) > 5 else 66 + i},{','.join(row[:5])}\n"
        for i, row in enumerate(rows)
    ]
    return prepare(
        folder,
        base=False,
        wells=W + "A,505000,6005000,100,105,,\n",
        readings="".join(lines),
        reading_header=HEAD,
        **changes,
    )


def since(prepared):
    return prepared.readings["since_circulation_h"].tolist()


@pytest.mark.parametrize(
    ("text", "hours"),
    [
        ("7:30", 7.5),
        ("07:30", 7.5),
        ("7h30", 7.5),
        ("7 h 30 min", 7.5),
        ("7,5 hrs", 7.5),
        ("450 min", 7.5),
        ("7.5 hours", 7.5),
        ("1 d 2 h", 26.0),
        ("2 days", 48.0),
        ("0:45", 0.75),
    ],
)
def test_durations(text, hours):
    assert times.durations(pd.Series([text])).tolist() == [hours]


@pytest.mark.parametrize(
    "text", ["soon", "7", "7.5", "7:75", "h", "", "-3 h", "7:30 pm", "1984-06-04"]
)
def test_what_is_no_duration(text):
    """A bare number is the business of the reader of numbers, who knows the decimal mark."""
    assert np.isnan(times.durations(pd.Series([text]))[0])


@pytest.mark.parametrize(
    ("text", "hour"),
    [
        ("14:30", 14.5), ("1430", 14.5), ("0230", 2.5), ("2:30", 2.5), ("14.30", 14.5),
        ("14:30:00", 14.5), ("2:30 PM", 14.5), ("12:15 am", 0.25), ("12:15 p.m.", 12.25),
        ("24:00", 24.0), ("1430 hrs", 14.5), ("1984-06-04T14:30", 14.5),
    ],
)  # fmt: skip
def test_times_of_day(text, hour):
    assert times.clocks(pd.Series([text]), None)[0].tolist() == [hour]


@pytest.mark.parametrize(
    "text", ["noon", "25:00", "24:30", "14:60", "14", "4.6.84 14:30", "31.02.1984 10:00"]
)
def test_what_is_no_time_of_day(text):
    assert np.isnan(times.clocks(pd.Series([text]), None)[0][0])


def test_dates_of_times_follow_the_form_of_the_file():
    text = pd.Series(["06/04/1984 14:30"])
    assert np.isnan(times.clocks(text, None)[0][0])
    hour, day = times.clocks(text, "%m/%d/%Y")
    assert (hour[0], day[0]) == (
        14.5,
        (np.datetime64("1984-06-04") - np.datetime64(0, "D")).astype(int),
    )


def test_text_durations_reach_the_table(tmp_path):
    out = case(
        tmp_path, ("7:30", "", "", "", "1"), ("12h15", "", "", "", "2"), ("0:00", "", "", "", "3")
    )
    assert sorted(since(out))[:2] == [7.5, 12.25]
    assert np.isnan(sorted(since(out), key=np.isnan)[-1]), "zero means not noted"
    assert codes(out) == []


def test_text_that_is_no_time_is_dropped(tmp_path):
    out = case(tmp_path, ("soon", "", "", "", ""))
    assert codes(out) == ["since_circulation_dropped"]
    assert len(out.readings) == 1


@pytest.mark.parametrize("text", ["1430", "1000", "2359", "0730", "30:15"])
def test_a_duration_that_is_a_time_of_day(tmp_path, text):
    out = case(tmp_path, (text, "", "", "", ""))
    assert codes(out) == ["since_circulation_is_time_of_day"]
    assert text in out.rejected["sentence"].item()
    assert np.isnan(since(out)[0])
    assert "since_circulation_is_time_of_day" in flags(out.readings, "W")


def test_minutes_are_no_time_of_day(tmp_path):
    """1430 minutes are 23.8 h, an ordinary time of a late run."""
    file = {"units": {"since_circulation": "min"}}
    out = case(tmp_path, ("1430", "", "", "", ""), readings_file=file)
    assert since(out) == [pytest.approx(1430 / 60)]
    assert codes(out) == []


def test_numbers_that_no_clock_shows_are_too_long_and_nothing_else(tmp_path):
    assert codes(case(tmp_path, ("1375", "", "", "", ""))) == ["since_circulation_dropped"]


@pytest.mark.parametrize(
    ("stop", "bottom", "hours", "midnight"),
    [
        ("08:00", "15:30", 7.5, False),
        ("2200", "0530", 7.5, True),
        ("1984-06-04 22:00", "1984-06-05 05:30", 7.5, False),
        ("1984-06-04 22:00", "1984-06-06 05:30", 31.5, False),
        ("1984-06-04 22:00", "1984-06-04 05:30", 7.5, True),
        ("1984-06-04 22:00", "05:30", 7.5, True),
        ("22:00", "24:00", 2.0, False),
    ],
)
def test_times_of_day_give_a_duration(tmp_path, stop, bottom, hours, midnight):
    out = case(tmp_path, ("", stop, bottom, "1984-06-05", ""))
    assert since(out) == [pytest.approx(hours)]
    assert ("time_across_midnight" in flags(out.readings, "W")) == midnight


def test_the_same_time_twice_is_not_noted(tmp_path):
    out = case(tmp_path, ("", "08:00", "08:00", "", ""))
    assert np.isnan(since(out)[0])


def test_dates_in_the_wrong_order(tmp_path):
    out = case(tmp_path, ("", "1984-06-06 22:00", "1984-06-04 05:30", "", ""))
    assert codes(out) == ["logger_on_bottom_dropped"]
    assert np.isnan(since(out)[0])


def test_a_time_that_is_none(tmp_path):
    assert codes(case(tmp_path, ("6", "noon", "14:00", "", ""))) == ["circulation_stopped_dropped"]


@pytest.mark.parametrize(
    ("noted", "stop", "bottom", "counts", "disagree"),
    [
        ("7", "08:00", "15:30", 7.0, False),
        ("12", "08:00", "15:30", 12.0, True),
        ("12", "1984-06-04 08:00", "1984-06-04 15:30", 7.5, True),
        ("31.5", "08:00", "15:30", 31.5, False),  # the clock tells hours modulo a day
    ],
)
def test_durations_and_times_that_disagree(tmp_path, noted, stop, bottom, counts, disagree):
    out = case(tmp_path, (noted, stop, bottom, "", ""))
    assert since(out) == [counts]
    assert ("times_disagree" in flags(out.readings, "W")) == disagree
    assert codes(out) == ["times_disagree"] * disagree


def test_the_disagreement_is_a_setting(tmp_path):
    row = ("9", "08:00", "15:30", "", "")
    assert codes(case(tmp_path, row)) == ["times_disagree"]
    assert codes(case(tmp_path, row, screening={"time_disagreement_h": 2.0})) == []


def test_a_reviewer_has_the_last_word_on_times(tmp_path):
    row = ("12", "1984-06-04 08:00", "1984-06-04 15:30", "", "")
    name = case(tmp_path, row).readings["reading_id"].item()
    (tmp_path / "d.csv").write_text(
        "well,reading,action,column,value,reason,initials,date\n"
        f",{name},set,since_circulation,9,tour sheet,AB,2026-11-30\n"
    )
    assert since(case(tmp_path, row, inputs={"decisions": "d.csv"})) == [9.0]


def test_rows_that_differ_in_times_of_day_only_are_two_readings(tmp_path):
    rows = [("", "08:00", "12:00", "", "", "66"), ("", "08:00", "20:00", "", "", "66")]
    out = case(tmp_path, *rows)
    assert "merged" not in codes(out)


def test_order_of_runs():
    names = pd.Series(["2", "10", "Run 1", "3B", "3A", "", "FINAL"])
    assert np.argsort(run_order(names)[:5]).tolist() == [2, 0, 4, 3, 1]
    assert np.isnan(run_order(names)[5:]).all()


def test_times_that_fall_while_runs_go_on(tmp_path):
    out = case(
        tmp_path,
        ("14", "", "", "1984-06-04", "1", "64"),
        ("9", "", "", "1984-06-04", "2", "66"),
        ("5", "", "", "1984-06-04", "3", "68"),
    )
    assert codes(out) == ["times_of_another_stop"] * 2
    kept = out.readings.set_index("log_run")["since_circulation_h"]
    assert kept["1"] == 14.0
    assert kept[["2", "3"]].isna().all()
    assert out.readings["flags"].str.contains("times_of_another_stop").all()


def test_one_time_for_runs_that_get_warmer(tmp_path):
    rows = [("8", "", "", "1984-06-04", str(i), str(60 + 2 * i)) for i in (1, 2, 3)]
    out = case(tmp_path, *rows)
    assert codes(out) == ["times_of_another_stop"] * 2
    assert out.readings.set_index("log_run")["since_circulation_h"]["1"] == 8.0


@pytest.mark.parametrize(
    "rows",
    [
        # time goes on
        [("5", "", "", "1984-06-04", "1", "64"), ("9", "", "", "1984-06-04", "2", "66")],
        # another day, another stop
        [("9", "", "", "1984-06-04", "1", "64"), ("5", "", "", "1984-06-09", "2", "66")],
        # two tools of one run share its time
        [("8", "", "", "1984-06-04", "1", "64"), ("8", "", "", "1984-06-04", "1", "66")],
        # runs without an order
        [("9", "", "", "1984-06-04", "", "64"), ("5", "", "", "1984-06-04", "", "66")],
        # the same time and temperature tell nothing of a rise
        [("8", "", "", "1984-06-04", "1", "64.0"), ("8", "", "", "1984-06-04", "2", "64.2")],
    ],
)  # fmt: skip
def test_times_that_go_on_stay(tmp_path, rows):
    out = case(tmp_path, *rows)
    assert codes(out) == []
    assert out.readings["since_circulation_h"].notna().all()
