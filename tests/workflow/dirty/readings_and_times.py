"""Kinds, dates, durations, times of day, and times that belong to another stop."""

import datetime as dt
import io

from openpyxl import Workbook

from .base import case, good_readings, inputs, plus, renamed, with_columns
from .model import ledger, refused, rows

READINGS = good_readings()
DROPPED = "since_circulation_dropped"
OF_DAY = "since_circulation_is_time_of_day|since_circulation_dropped"
SINCE = ("N15", "since_circulation_h")


def durations(*cells: str) -> str:
    """A run of N15 per duration, 50 m apart (line 34 on)."""
    more = (f"N15,{2500 + 50 * i},{78 + i},bht,{cell},4" for i, cell in enumerate(cells))
    return plus(READINGS, *more)


def clock(*cells: tuple[str, str, str]) -> str:
    """A run of N15 per stop, logger on bottom and duration, 50 m apart (line 34 on)."""
    more = (
        f"N15,{2500 + 50 * i},{78 + i},bht,{since},4,{stop},{bottom}"
        for i, (stop, bottom, since) in enumerate(cells)
    )
    return plus(with_columns(READINGS, "circulation_stopped", "logger_on_bottom"), *more)


def runs(*cells: tuple) -> str:
    """Runs 1, 2, ... of N15 at one depth and date, each with a time and a temperature."""
    more = (
        f"N15,2500,{temperature},bht,{since},4,1985-03-07,{i + 1}"
        for i, (since, temperature) in enumerate(cells)
    )
    return plus(with_columns(READINGS, "date", "log_run"), *more)


def dates(*cells: str) -> str:
    more = (f"N15,{2500 + 50 * i},{78 + i},bht,10,4,{cell}" for i, cell in enumerate(cells))
    return plus(with_columns(READINGS, "date"), *more)


def kinds(*cells: str) -> str:
    more = (f"N15,{2500 + 50 * i},{84 + i},{cell},,4" for i, cell in enumerate(cells))
    return plus(READINGS, *more)


def timed_sheet() -> bytes:
    """Times of day as a spreadsheet stores them, one pair with its dates."""
    lines = [line.split(",") for line in READINGS.splitlines()]
    book = Workbook()
    book.active.append([*lines[0], "circulation_stopped", "logger_on_bottom"])
    for well, depth, temperature, kind, *_ in lines[1:]:
        book.active.append([well, float(depth), float(temperature), kind])
    book.active.append(["N15", 2500, 78, "bht", None, 4, dt.time(8, 0), dt.time(14, 30)])
    day = dt.datetime(1985, 3, 7)
    stop, bottom = day.replace(hour=20), day.replace(day=8, hour=6)
    book.active.append(["N15", 2600, 81, "bht", None, 4, stop, bottom])
    memory = io.BytesIO()
    book.save(memory)
    return memory.getvalue()


def kept(number: int, hours: float | None, *flags: str, codes=None, **more):
    """So many more readings of N15, of which one was read so many hours after the stop."""
    flagged = {("readings", "N15"): flags} if flags else {}
    return ledger(codes, 16, 32 + number, flagged, {SINCE: hours}, **more)


DURATIONS = [
    case(
        "times_durations_in_every_spelling",
        "Hours are written as decimals, with a colon or with an h.",
        kept(3, 7.5),
        readings=durations("7.5", "7:30", "7h30"),
    ),
    case(
        "times_durations_with_a_unit",
        "One clerk noted minutes, and said so in the cell.",
        kept(1, 1.5, "unit_in_cell"),
        readings=durations("90 min"),
    ),
    case(
        "times_that_are_times_of_day",
        "The hour of the reading was noted instead of the hours since the stop.",
        kept(4, None, codes=rows("readings", OF_DAY, 34, 4)),
        readings=durations("1430", "1000", "2359", "26:15"),
    ),
    case(
        "times_too_long_or_negative",
        "Days were taken for hours, or the two times were subtracted the wrong way round.",
        kept(3, None, codes=rows("readings", DROPPED, 34, 3)),
        readings=durations("720", "-6", "999"),
    ),
    case(
        "times_with_text",
        "The time, which is optional, holds a remark.",
        kept(2, None, codes=rows("readings", DROPPED, 34, 2)),
        readings=durations("see log", "short"),
    ),
]

CLOCK = [
    case(
        "times_of_day_in_every_spelling",
        "The log's header states when the pumps stopped and when the tool was on bottom.",
        kept(4, 6.5),
        readings=clock(
            ("08:00", "14:30", ""),
            ("0800", "1430", ""),
            ("1985-03-07 20:00", "1985-03-08 02:30", ""),
            ("1985-03-07T20:00", "1985-03-08T02:30:00", ""),
        ),
    ),
    case(
        "times_of_day_across_midnight",
        "The pumps stopped in the evening, and the tool was on bottom in the night.",
        kept(2, 6, "time_across_midnight"),
        readings=clock(("22:30", "04:30", ""), ("2230", "0430", "")),
    ),
    case(
        "times_of_day_before_the_stop_on_one_date",
        "Both times carry the date of the report, although midnight lay between.",
        kept(1, 6, "time_across_midnight"),
        readings=clock(("1985-03-07 22:30", "1985-03-07 04:30", "")),
    ),
    case(
        "times_of_day_at_midnight",
        "Midnight is written 00:00 by one and 24:00 by another.",
        kept(2, 6),
        readings=clock(("00:00", "06:00", ""), ("18:00", "24:00", "")),
    ),
    case(
        "times_of_day_that_disagree_with_the_duration",
        "Somebody subtracted wrongly; without dates the duration is the better one.",
        kept(1, 12, "times_disagree", exact=False),
        readings=clock(("08:00", "14:00", "12")),
    ),
    case(
        "times_with_dates_that_disagree_with_the_duration",
        "With dates on both, the times of day are the better ones.",
        kept(1, 30, "times_disagree", exact=False),
        readings=clock(("1985-03-07 08:00", "1985-03-08 14:00", "6")),
    ),
    case(
        "times_of_day_that_can_not_be",
        "Minutes beyond sixty, or one of the two times missing.",
        ledger(
            {
                (
                    "readings",
                    f"{DROPPED}|circulation_stopped_dropped|logger_on_bottom_dropped",
                    34,
                ): 1
            },
            readings=34,
            values={SINCE: None},
        ),
        readings=clock(("25:70", "14:30", ""), ("", "14:30", "")),
    ),
    case(
        "times_of_day_in_a_workbook",
        "A spreadsheet stores times of day as times, and some with their dates.",
        kept(2, 6.5),
        files={"readings.xlsx": timed_sheet()},
        config=inputs(readings={"file": "readings.xlsx"}),
    ),
]

STOPS = [
    case(
        "times_that_fall_from_run_to_run",
        "The hours were counted back from the last run rather than on from the stop.",
        kept(3, 14, "times_of_another_stop", exact=False),
        readings=runs((14, 78), (9, 80), (4, 82)),
    ),
    case(
        "times_the_same_in_all_runs_while_it_gets_warmer",
        "The first run's time was copied into the headers of the later runs.",
        kept(3, 6, "times_of_another_stop", exact=False),
        readings=runs((6, 78), (6, 80.5), (6, 82)),
    ),
    case(
        "times_that_rise_with_the_runs",
        "Three runs as they should be: nothing to tell.",
        kept(3, 14),
        readings=runs((5, 78), (9, 80), (14, 81.2)),
    ),
]

KINDS = [
    case(
        "kinds_in_words_of_ones_own",
        "A survey has its own words for kinds; the config translates them.",
        ledger({("readings", "unknown_kind", 36): 1}, readings=34, values={("N15", "kind"): "dst"}),
        readings=kinds("LOG", "TEST", "GUESS"),
        config=inputs(readings={"file": "readings.csv", "kinds": {"LOG": "bht", "TEST": "dst"}}),
    ),
    case(
        "kinds_in_capitals",
        "Kinds are typed in capitals, with blanks around.",
        ledger(readings=34, values={("N15", "kind"): "dst"}),
        readings=kinds("DST", " Equilibrium "),
    ),
    case(
        "kinds_blank",
        "Rows without a kind are of the one the config states.",
        ledger(readings=34, values={("N15", "kind"): "corrected"}),
        readings=kinds("", "n/a"),
        config=inputs(readings={"file": "readings.csv", "kind": "corrected"}),
    ),
    case(
        "kinds_translated_into_one_that_is_none",
        "The config's translation has a slip of the pen.",
        refused("kinds", "LOG", "bth"),
        config=inputs(readings={"file": "readings.csv", "kinds": {"LOG": "bth"}}),
    ),
]

DATES = [
    case(
        "dates_in_the_spellings_that_need_no_format",
        "Dates are whole, with the day first, or of a year alone.",
        ledger(readings=36, values={("N15", "date"): "1985-03-07"}),
        readings=dates("1985-03-07", "07.03.1985", "7.3.1985", "1985"),
    ),
    case(
        "dates_with_the_month_first",
        "An American export has the month first, and the config says so.",
        ledger(
            {("readings", "date_dropped", 35): 1},
            readings=34,
            values={("N15", "date"): "1985-03-27"},
        ),
        readings=dates("03/27/1985", "27/03/1985"),
        config=inputs(readings={"file": "readings.csv", "date_format": "%m/%d/%Y"}),
    ),
    case(
        "dates_that_can_not_be",
        "A day that the month does not have, a zero date of a database, a word.",
        ledger(rows("readings", "date_dropped", 34, 3), readings=35),
        readings=dates("31.02.1985", "0000-00-00", "spring"),
    ),
    case(
        "vertical_depth_counts_before_depth",
        "A table states depths along the hole and vertical ones.",
        ledger(readings=33, values={("N15", "temperature_degc"): 78}),
        readings=plus(with_columns(READINGS, "vertical_depth"), "N15,2600,78,bht,10,4,2500"),
    ),
    case(
        "temperature_column_of_another_name",
        "The column is called T, and the config names no columns.",
        refused("readings.csv", "temperature"),
        readings=renamed(READINGS, {"temperature": "T"}),
    ),
]

CASES = [*DURATIONS, *CLOCK, *STOPS, *KINDS, *DATES]
