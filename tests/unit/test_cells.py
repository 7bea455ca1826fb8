"""Cells to words, numbers and dates: what is missing, what is wrong, what a cell says of itself."""

import numpy as np
import pandas as pd
import pytest
from hypothesis import given
from hypothesis import strategies as st

from basinheat.readers.canonical import Reading, canonical
from basinheat.readers.cells import dates, from_serials, words
from basinheat.readers.numbers import numbers
from basinheat.readers.raw import RawTable
from basinheat.settings.inputs import TableFile


def series(*cells):
    return pd.Series(list(cells), dtype="str")


def readings(how=None, spec=None, **cells):
    """Return the canonical columns of cells, and the notes."""
    columns = {name: name for name in cells if not name.startswith("u_")}
    units = {name.removeprefix("u_"): name for name in cells if name.startswith("u_")}
    frame = pd.DataFrame({name: series(*values) for name, values in cells.items()})
    raw = RawTable(frame, np.arange(1, len(frame) + 1))
    reading = Reading(columns, unit_columns=units, **(how or {}))
    return canonical(raw, reading, TableFile(file="", **(spec or {})), "readings")


def test_missing_words_and_sentinels():
    """The list of config/README.md, in any case; the numbers with any zeros behind the point."""
    listed = (
        "", "NA", "N/A", "NaN", "null", "none", "nil", "nil:missing", "nil:unknown",
        "nil:inapplicable", "[unspecified]", "unspecified", "unknown", "-", "--", "?", "#N/A",
    )  # fmt: skip
    cells = [spelling for word in listed for spelling in (word, word.upper(), f" {word.lower()} ")]
    assert set(words(series(*cells), [])) == {""}
    found = numbers(series(*cells, "-999.25", "-999.2500", "-9999", "-9999.0", "-99999.00"))
    assert np.isnan(found.values).all() and not found.wrong.any()
    assert found.missing["-999.2500"] == 1 and found.missing["N/A"] == 2


def test_sentinels_are_no_missing_names():
    assert words(series("-9999", "-999.25", " 0012 "), []).tolist() == ["-9999", "-999.25", "0012"]


def test_missing_words_of_the_config():
    found = numbers(series("0", "0.00", "7", "n.d."), ["0", "N.D."])
    assert np.isnan(found.values).tolist() == [True, True, False, True]
    assert not found.wrong.any()
    assert found.missing == {"0": 1, "0.00": 1, "n.d.": 1}


def test_a_comma_is_never_guessed():
    assert numbers(series("1,234")).wrong.tolist() == [True]
    assert numbers(series("1,234"), decimal=",").values.tolist() == [1.234]
    assert numbers(series("1.5"), decimal=",").wrong.tolist() == [True]
    assert numbers(series("1,234", "1,5"), thousands=",").values.tolist()[0] == 1234.0
    assert numbers(series("1,5"), thousands=",").wrong.tolist() == [True]
    assert numbers(series("1.234,5"), decimal=",", thousands=".").values.tolist() == [1234.5]
    assert numbers(series("600\u00a0000", "1 200"), thousands=" ").values.tolist() == [6e5, 1200.0]
    assert numbers(series("3,500 ft"), thousands=",").values.tolist() == [3500.0]


@pytest.mark.parametrize(
    "cell",
    [
        *("12m3x4", "inf", "-Infinity", "1e400", "8_5", "0x55", "1O5", "8 5", "84..9", "63.9*"),
        *("12,5", "7:30", "12 1/4", "1-2", "٣", "True", "<", "~", "ca. F", "F 120", "1e", "5 <6"),
    ],
)
def test_what_is_no_number(cell):
    frame, _ = readings(temperature=[cell])
    assert frame["wrong:temperature"].tolist() == [True]
    assert np.isnan(frame["temperature"]).all()


@given(st.floats(allow_nan=False, allow_infinity=False), st.sampled_from(["", "+"]))
def test_numbers_are_read_to_the_last_bit(value, sign):
    """Python's own reading of the same text is the outside check."""
    text = repr(value) if value < 0 or str(value).startswith("-") else sign + repr(value)
    found = numbers(series(text, f" {text} ", text.upper()))
    if value not in (-999.25, -9999.0, -99999.0):
        assert found.values.tolist() == [value] * 3
    assert not found.wrong.any()


def test_units_in_cells():
    """120 F is 440/9 degC, a foot 0.3048 m, an inch 0.0254 m: by definition."""
    frame, notes = readings(
        temperature=["120 F", "120°F", "120", "322.03889 K", "120 ft", "120 xyz"],
        depth=["3500 ft", "3500FEET", "1,5", "3500'", "-12 m", "1 mi"],
        hole_diameter=['12.25"', "8.5 in", "0.2", "21.59 cm", "216 mm", ""],
    )
    expected = [440 / 9, 440 / 9, 120.0, 322.03889 - 273.15]
    assert frame["temperature"][:4].tolist() == pytest.approx(expected)
    assert frame["wrong:temperature"].tolist() == [False] * 4 + [True] * 2
    assert frame["depth"].tolist()[:2] == pytest.approx([1066.8, 1066.8])
    assert frame["depth"].tolist()[3:] == pytest.approx([1066.8, -12.0, 1609.344])
    assert frame["hole_diameter"].tolist()[:5] == pytest.approx(
        [0.31115, 0.2159, 0.2, 0.2159, 0.216]
    )
    assert frame["flag:unit_in_cell"].tolist() == [True, True, False, True, True, True]
    assert frame["unit:temperature"].tolist() == ["degF", "degF", "degC", "K", "degC", "degC"]
    counts = {note["value"]: note["count"] for note in notes if note["column"] == "temperature"}
    assert counts == {"F": 1, "°F": 1, "K": 1}


def test_a_coordinate_has_no_unit():
    raw = RawTable(pd.DataFrame({"x": series("12 %")}), np.array([2]))
    frame, _ = canonical(raw, Reading({"x": "x"}), TableFile(file=""), "wells")
    assert frame["wrong:x"].tolist() == [True]


def test_approximate_values_and_bounds():
    frame, _ = readings(temperature=["~120", "ca. 120", "Ca 120", "<25", "> 120 F", "≥7", "5"])
    assert frame["temperature"].tolist()[:3] == [120.0] * 3
    assert frame["flag:approximate"].tolist() == [True] * 3 + [False] * 4
    assert frame["bound:temperature"].tolist() == [False] * 3 + [True] * 3 + [False]
    assert frame["wrong:temperature"].tolist() == frame["bound:temperature"].tolist()
    german, _ = readings(temperature=["ca. 65,5"], spec={"decimal": ","})
    assert german["temperature"].tolist() == [65.5]


def test_nothing_to_tell_leaves_no_columns():
    frame, notes = readings(temperature=["1", ""], depth=["2", "3"])
    extra = [n for n in frame if n.startswith(("flag:", "bound:", "unit_unknown:", "row_unit:"))]
    assert extra == [] and notes == []


def test_units_of_rows():
    frame, notes = readings(
        temperature=["212", "100", "373.15", "5", "5", "212 F", ""],
        u_temperature=["F", "deg C", "k", "furlong", "", "furlong", "furlong"],
    )
    assert frame["temperature"].tolist()[:3] == pytest.approx([100.0] * 3)
    assert frame["temperature"].tolist()[4:6] == pytest.approx([5.0, 100.0])
    assert frame["unit_unknown:temperature"].tolist() == [False] * 3 + [True] + [False] * 3
    assert frame["wrong:temperature"].tolist() == [False] * 3 + [True] + [False] * 3
    assert frame["unit:temperature"].tolist()[:3] == ["degF", "degC", "K"]
    told = {note["value"]: note["count"] for note in notes if note["what"] == "row_unit"}
    assert told == {"F": 1, "deg C": 1, "k": 1, "furlong": 3}


def test_zero_where_it_can_not_be_and_where_told():
    frame, _ = readings(
        since_circulation=["0", "0.0"], temperature=["0", "0"], mud_temperature=["0", "1"],
        spec={"zero_is_missing": ["mud_temperature"]},
    )  # fmt: skip
    assert np.isnan(frame["since_circulation"]).all()
    assert frame["temperature"].tolist() == [0.0, 0.0]
    assert np.isnan(frame["mud_temperature"]).tolist() == [True, False]


def test_missing_words_are_counted():
    _, notes = readings(temperature=["nil:missing", "nil:missing", "5"], date=["?", "1984", "?"])
    told = {(note["column"], note["value"]): note["count"] for note in notes}
    assert told == {("temperature", "nil:missing"): 2, ("date", "?"): 2}


def test_dates():
    found, wrong = dates(series("1984", "1984-06", "1984-06-04", "04.06.1984", "6/4/84", ""), None)
    assert found.tolist() == ["1984", "1984-06", "1984-06-04", "1984-06-04", "", ""]
    assert wrong.tolist() == [False, False, False, False, True, False]
    stated, _ = dates(series("6/4/1984", "1984-06-04", "1984"), "%m/%d/%Y")
    assert stated.tolist() == ["1984-06-04", "1984-06-04", ""]


def test_serial_dates():
    """31113 is 7 March 1985 and 25569 is 1 January 1970 in Excel (from memory)."""
    found = from_serials(series("31113", "25569.5", "1985", "x", "1"), "1899-12-30")
    assert found.tolist() == ["1985-03-07", "1970-01-01", "1985", "x", "1"]


def test_a_column_of_remarks_is_no_column_of_units():
    """Many words that are no units cost no hours, and the usual ones among them still count."""
    words_ = [f"remark {'abcdefghij'[i % 10]}{'klmnopqrst'[i // 10 % 10]} x" for i in range(5000)]
    words_ = [f"{word} {'y' * (i // 100)}"[:29] for i, word in enumerate(words_)]
    frame, notes = readings(
        temperature=["212"] * 5001 + ["5 zz"], u_temperature=[*words_, "F", "F"]
    )
    assert frame["unit_unknown:temperature"].sum() == 5000
    assert frame["temperature"].tolist()[5000] == pytest.approx(100.0)
    assert sum(note["what"] == "row_unit" for note in notes) <= 50
