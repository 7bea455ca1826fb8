"""Rounding, remarks, casing, season and copies: each rule on what it is for and what it must leave.

The rules are common practice (METHODS K and A11), no source; the score of heaping is the check
value K1, computed from the binomial distribution.
"""

import numpy as np
import pandas as pd
import pytest
from ingest_case import codes, degc, flags, prepare

from basinheat.screening.one_record import boiling_point_degc
from basinheat.screening.rounding import heaping_score

W = "W,515000,6015000,100,105,,\n"
HEAD = "well,depth,temperature,kind,date,remarks,casing_shoe,temperature_std\n"


def one(
    folder, depth=2005, temperature=66, kind="", date="", remarks="", shoe="", std="", **changes
):
    """Return ingest of one reading beside nothing."""
    row = f'W,{depth},{temperature},{kind},{date},"{remarks}",{shoe},{std}\n'
    return prepare(folder, base=False, wells=W, readings=row, reading_header=HEAD, **changes)


def test_the_score_of_heaping():
    """60 of 150 end in 0 or 5: 30 above the expected 30, in units of sqrt(0.16 150) (K1)."""
    assert heaping_score(60.0, 150.0, 0.2) == pytest.approx(6.1237244, abs=1e-7)
    assert heaping_score(30.0, 150.0, 0.2) == 0.0


def fahrenheit(folder, values, **changes):
    """Return ingest of readings in degF, one a well of its own depth."""
    wells = "".join(f"W{i:03d},{500000 + 700 * i},6000000,100,105,,\n" for i in range(len(values)))
    rows = "".join(f"W{i:03d},{1500 + 5 * i},{value},,,,,\n" for i, value in enumerate(values))
    file = {"units": {"temperature": "degF"}}
    case = {"wells": wells, "readings": rows, "reading_header": HEAD, "readings_file": file}
    return prepare(folder, base=False, **case, **changes)


SPREAD = np.random.default_rng(0).integers(120, 170, 100)


def test_a_file_that_rounds_to_five(tmp_path):
    """60 of 100 to 5 degF: those ending in 0 or 5 gain 5/sqrt(12) degF in quadrature, once."""
    values = [5 * round(v / 5) if i < 60 else v for i, v in enumerate(SPREAD)]
    out = fahrenheit(tmp_path, values)
    rounded = out.readings["flags"].str.contains("rounded_to_5")
    ends = (out.readings["temperature_degc"] * 1.8 + 32.0).round(6) % 5 == 0
    assert (rounded == ends).all()
    widened = out.readings.loc[rounded, "temperature_std_k"]
    assert np.allclose(widened, np.hypot(1.0, 5.0 / 12.0**0.5 / 1.8))
    assert out.readings.loc[~rounded, "temperature_std_k"].isna().all()
    finding = out.findings[out.findings["code"] == "rounded_to_5"]
    assert len(finding) == 1, "one finding a file"
    assert f"{int(ends.sum())} of 100" in finding["sentence"].item()


def test_a_file_that_rounds_to_ten(tmp_path):
    """To 10 degF: 1.6 K (METHODS A12), and the odd fives are left alone."""
    values = [10 * round(v / 10) if i < 60 else v for i, v in enumerate(SPREAD)]
    out = fahrenheit(tmp_path, values)
    rounded = out.readings["flags"].str.contains("rounded_to_10")
    ends = (out.readings["temperature_degc"] * 1.8 + 32.0).round(6) % 10 == 0
    assert (rounded == ends).all()
    assert not out.readings["flags"].str.contains("rounded_to_5").any()
    added = np.sqrt(out.readings.loc[rounded, "temperature_std_k"] ** 2 - 1.0)
    assert np.allclose(added, 1.6, atol=0.01)


def test_honest_whole_degrees_and_small_files_are_not_rounded(tmp_path):
    assert not fahrenheit(tmp_path, SPREAD).readings["flags"].str.contains("rounded").any()
    few = fahrenheit(tmp_path, [120, 125, 130, 135, 140] * 4)
    assert not few.readings["flags"].str.contains("rounded").any()


def test_chance_seldom_looks_rounded():
    """Above a score of 3 by chance: about 0.2 % of files (binomial, exact), so below 1 % here."""
    from scipy.stats import binom

    for n in (30, 100, 1000):
        needed = 0.2 * n + 3.0 * np.sqrt(0.16 * n)
        assert binom.sf(np.floor(needed), n, 0.2) < 0.005
        drawn = np.random.default_rng(n).binomial(n, 0.2, 4000)
        assert (heaping_score(drawn, float(n), 0.2) > 3.0).mean() < 0.01


@pytest.mark.parametrize(
    ("kind", "remarks", "code"),
    [
        ("dst", "gas to surface in 10 min", "gas_cooled"),
        ("dst", "rec. 300 ft gas-cut mud", "gas_cooled"),
        ("dst", "rec 120 ft drilling mud", "only_mud_recovered"),
        ("dst", "Misrun", "only_mud_recovered"),
        ("", "air drilled below 900 m", "gas_cooled"),
        ("", "Lost circulation at 2300 m", "lost_circulation"),
        ("", "total loss of returns", "lost_circulation"),
        ("", "steam injection nearby", "injected"),
        ("", "base of permafrost 310 m", "permafrost"),
        ("", "on a salt dome", "salt_nearby"),
        ("", "strong water flow at 400 m", "moving_water"),
    ],
)
def test_remarks_that_doubt_a_reading(tmp_path, kind, remarks, code):
    out = one(tmp_path, kind=kind, remarks=remarks)
    assert code in flags(out.readings, "W")
    assert remarks in out.findings.loc[out.findings["code"] == code, "sentence"].item()


@pytest.mark.parametrize(
    ("kind", "remarks"),
    [
        ("dst", "no gas, rec 900 ft salt water"),
        ("dst", "rec 500 ft salt water and 60 ft mud"),
        ("dst", "recovered gas oil"),
        ("", "no losses"),
        ("", "without lost circulation"),
        ("", "good hole, gas shows at 1200 m"),
        ("", "salt at 800 m"),
    ],
)
def test_remarks_that_do_not(tmp_path, kind, remarks):
    assert flags(one(tmp_path, kind=kind, remarks=remarks).readings, "W") == {"assumed_vertical"}


def test_gas_widens_a_test(tmp_path):
    """8 K for a test that gas may have cooled (METHODS A11, A12), and nothing for a log."""
    out = one(tmp_path, kind="dst", remarks="gas flow")
    assert out.readings["temperature_std_k"].item() == 8.0
    out = one(tmp_path, kind="dst", remarks="gas flow", screening={"gas_std_k": 5.0})
    assert out.readings["temperature_std_k"].item() == 5.0
    assert np.isnan(one(tmp_path, remarks="gas flow").readings["temperature_std_k"].item())


@pytest.mark.parametrize(
    "remarks", ["BHT est.", "temperature estimated", "calc", "Temp. is nominal"]
)
def test_remarks_that_it_was_not_read(tmp_path, remarks):
    assert codes(one(tmp_path, remarks=remarks)) == ["estimated_value"]


@pytest.mark.parametrize("remarks", ["top est. at 900 m", "estimated porosity 12 %"])
def test_other_estimates_are_no_matter(tmp_path, remarks):
    assert codes(one(tmp_path, remarks=remarks)) == []


def test_a_log_inside_the_casing(tmp_path):
    assert "inside_casing" in flags(one(tmp_path, shoe=2300).readings, "W")
    assert "inside_casing" not in flags(one(tmp_path, shoe=1800).readings, "W")
    assert "inside_casing" not in flags(one(tmp_path, shoe=2300, kind="dst").readings, "W")


@pytest.mark.parametrize(
    ("temperature", "date", "doubted"),
    [
        (30, "1984-07-15", True),
        (30, "1984-01-15", False),
        (30, "1984", False),
        (40, "1984-07-15", False),  # the air is not 30 K above a yearly mean of 10 degC
    ],
)
def test_heat_of_the_surface(tmp_path, temperature, date, doubted):
    """The case lies at 54 degrees north."""
    out = one(tmp_path, depth=1005, temperature=temperature, date=date)
    assert ("surface_heat_possible" in flags(out.readings, "W")) == doubted


@pytest.mark.parametrize(("bar", "degc"), [(1.0, 99.606), (10.0, 179.886), (100.0, 310.999)])
def test_boiling_point(bar, degc):
    """IAPWS-IF97 (2007), table 36: saturation temperatures at 0.1, 1 and 10 MPa (from memory)."""
    depth = (bar - 1.013) / 0.0981
    assert boiling_point_degc(np.array([max(depth, 0.0)]))[0] == pytest.approx(degc, rel=0.02)


def test_hotter_than_boiling_is_doubted_and_kept(tmp_path):
    assert "above_boiling_point" in flags(one(tmp_path, depth=505, temperature=290).readings, "W")
    assert "above_boiling_point" not in flags(
        one(tmp_path, depth=505, temperature=240).readings, "W"
    )


def runs(folder, *rows, **changes):
    """Return ingest of runs at 2005 m: temperature, since, run."""
    text = "".join(f"W,2005,{t},,{since},4,,,{run}\n" for t, since, run in rows)
    return prepare(folder, base=False, wells=W, readings=text, **changes)


def test_runs_that_time_hardly_warms_may_read_the_same(tmp_path):
    """From 20 to 22 h the line source warms 56 K by 0.3 K, less than any thermometer tells."""
    out = runs(tmp_path, ("66", 20, 1), ("66", 22, 2))
    assert codes(out) == []
    assert out.readings["flags"].str.contains("same_temperature").tolist() == [False, True]


def test_runs_that_time_must_warm_may_not(tmp_path):
    """From 4 to 20 h it is ten kelvin: ln 2 against ln 1.2, times 56 K and a third."""
    out = runs(tmp_path, ("66", 4, 1), ("66", 20, 2))
    assert codes(out) == ["copied_temperature"]
    assert "warmer were expected" in out.rejected["sentence"].item()
    lenient = {"same_temperature_score": 50.0}
    assert codes(runs(tmp_path, ("66", 4, 1), ("66", 20, 2), screening=lenient)) == []


def test_equal_runs_without_times_count_once(tmp_path):
    assert codes(runs(tmp_path, ("66", "", 1), ("66", "", 2))) == ["copied_temperature"]
    assert codes(runs(tmp_path, ("66", 8, 1), ("66", 8, 2))) == ["copied_temperature"]


def test_the_region_says_how_fast_runs_warm(tmp_path):
    """Where repeated logs rise by little, equal ones are no wonder."""
    wells = "".join(f"R{i:02d},{500000 + 900 * i},6005000,100,105,,\n" for i in range(40))
    for rise, expected in ((0.2, []), (12.0, ["copied_temperature"])):
        rows = "".join(
            f"R{i:02d},2005,{70 + i / 10 + rise * run:.1f},,{6 + 6 * run},4,,,{1 + run}\n"
            for i in range(40)
            for run in (0, 1)
        )
        text = rows + "W,2005,66,,6,4,,,1\nW,2005,66,,12,4,,,2\n"
        out = prepare(tmp_path, base=False, wells=W + wells, readings=text)
        assert codes(out) == expected


def test_a_cold_reading_without_neighbours_is_doubted_only(tmp_path):
    """Mud can cool a log to 8 K/km: whether it is the unit, only others can tell."""
    file = {"units": {"temperature": "degF"}}
    text = f"W,2505,{degc(2505):.0f},,,,,,\n"
    out = prepare(tmp_path, base=False, wells=W, readings=text, readings_file=file)
    assert codes(out) == []
    assert "temperature_unit_suspect" in flags(out.readings, "W")


def test_order_of_rows_changes_nothing(tmp_path):
    rows = [
        "W,2005,66,,4,4,,,1\n",
        "W,2005,66,,20,4,,,2\n",
        f"W,1505,{degc(1505)},,,,,,\n",
        "W,2005,67,,9,4,,,3\n",
    ]
    one, two = (prepare(tmp_path, wells=W, readings="".join(order)) for order in (rows, rows[::-1]))
    lines = ["source_line"]
    pd.testing.assert_frame_equal(
        one.readings.drop(columns=lines), two.readings.drop(columns=lines)
    )


DRILLED = "well,depth,temperature,kind,since_circulation,circulation,drilling\n"


def drilled(folder, *rows):
    """Return ingest of readings with circulation and drilling as written, 10 m apart."""
    text = "".join(
        f"W,{2005 + 10 * i},{66 + i},bht,8,{circulation},{drilling}\n"
        for i, (circulation, drilling) in enumerate(rows)
    )
    return prepare(folder, base=False, wells=W, readings=text, reading_header=DRILLED)


@pytest.mark.parametrize(
    ("circulation", "drilling", "hours"),
    [
        ("3", "12", 12.0),
        ("3", "3", 3.0),
        ("", "0.5", 0.5),
        ("3", "12:30", 12.5),
        ("0.5", "90 min", 1.5),
    ],
)
def test_a_time_of_drilling_is_kept(tmp_path, circulation, drilling, hours):
    """The mud cools a place from the bit's passing on, so no shorter than the last circulation."""
    out = drilled(tmp_path, (circulation, drilling))
    assert out.readings["drilling_h"].tolist() == [pytest.approx(hours)]
    assert codes(out) == []


@pytest.mark.parametrize(("circulation", "drilling"), [("3", "2"), ("", "-4"), ("3", "soon")])
def test_a_time_of_drilling_that_cannot_be_costs_the_cell_only(tmp_path, circulation, drilling):
    out = drilled(tmp_path, (circulation, drilling), ("3", "9"))
    (line,) = out.rejected.to_dict("records")
    assert (line["table"], line["code"], line["source_line"]) == ("values", "drilling_dropped", 2)
    assert (line["column"], line["value"]) == ("drilling", drilling)
    kept = out.readings.sort_values("depth_m")
    assert np.isnan(kept["drilling_h"].iloc[0]) and kept["drilling_h"].iloc[1] == 9.0
    assert kept["circulation_h"].iloc[0] == 3.0 or not circulation
    assert kept["flags"].str.contains("drilling_dropped").tolist() == [True, False]


def test_no_time_of_drilling_is_no_fault(tmp_path):
    """0 means not noted, as in the other durations (config/README.md, `zero_is_missing`)."""
    out = drilled(tmp_path, ("3", ""), ("3", "0"))
    assert out.readings["drilling_h"].isna().all() and len(out.readings) == 2
    assert codes(out) == []


def test_a_row_that_only_lacks_the_time_of_drilling_is_merged(tmp_path):
    """Of two rows that agree the one that says more stays; where they contradict none is merged."""
    row = "W,2005,66,bht,8,3,{}\n"
    for number, (noted, kept) in enumerate([(("9", ""), 1), (("9", "12"), 2), (("9", "9"), 1)]):
        folder = tmp_path / str(number)
        folder.mkdir()
        text = "".join(row.format(hours) for hours in noted)
        out = prepare(folder, base=False, wells=W, readings=text, reading_header=DRILLED)
        assert codes(out).count("merged") == 2 - kept, codes(out)
        assert out.readings["drilling_h"].iloc[0] == 9.0
