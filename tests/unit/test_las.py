"""Headers of well logs: what is read of them, and what of broken ones."""

import time

import pytest
from ingest_case import codes, flags, prepare

from basinheat import ingest
from basinheat.readers.las import read_header
from basinheat.readers.las_values import degrees
from basinheat.settings.inputs import Mnemonics
from basinheat.settings.model import Settings

KNOWN = frozenset(name for _, names in Mnemonics() for name in names)
VERSION = "~V\n VERS. 2.0 : CWLS\n WRAP. NO : one line\n"
WELL = "~W\n NULL. -999.25 : null\n UWI. {uwi} : id\n X.M 515000 : east\n Y.M 6015000 : north\n"
RUN = (
    "~P\n GL.M 100 : ground\n KB.M 105 : bushing\n TD.M 3010 : total depth\n"
    " BHT.DEGC 95 : bottom-hole temperature\n TDL.M 3000 : logger\n DATE. 31-MAY-94 : date\n"
    " RUN. 2 : run\n BS.IN 8.5 : bit\n"
)
DATA = "~A\n 1000 1.0\n 1001 2.0\n"


def log(run=RUN, uwi="0042", version=VERSION, well=WELL, data=DATA):
    return version + well.format(uwi=uwi) + run + data


def with_logs(folder, *texts, las=None, **case):
    """Prepare the ordinary wells and logs beside them."""
    (folder / "logs").mkdir()
    for number, text in enumerate(texts):
        data = text if isinstance(text, bytes) else text.encode()
        (folder / "logs" / f"{number}.las").write_bytes(data)
    case["inputs"] = {"las": [{"file": "logs/*.las", **(las or {})}]} | case.get("inputs", {})
    return prepare(folder, **case)


def reading(out, well="0042"):
    (row,) = out.readings[out.readings["well"] == well].itertuples()
    return row


def test_a_header_gives_a_well_and_a_reading(tmp_path):
    out = with_logs(tmp_path, log())
    well = out.wells.set_index("well").loc["0042"]  # text: its zeros stay
    assert (well["easting_m"], well["ground_elevation_m"]) == (515000.0, 100.0)
    assert (well["datum_elevation_m"], well["total_depth_m"]) == (105.0, 3010.0)
    row = reading(out)
    assert (row.temperature_degc, row.measured_depth_m, row.depth_m) == (95.0, 3000.0, 2895.0 + 100)
    assert (row.date, row.log_run, row.kind) == ("1994-05-31", "2", "bht")
    assert row.hole_radius_m == pytest.approx(0.5 * 8.5 * 0.0254)
    assert (row.source_file, row.source_line) == ("logs/0.las", 13)
    assert codes(out) == []


def test_logs_alone_will_do(tmp_path):
    (tmp_path / "a.las").write_text(log())
    config = {
        "run": "logs",
        "crs": "EPSG:32631",
        "surface_temperature": {"model": "constant", "temperature_degc": 10},
        "inputs": {"las": [{"file": "a.las"}]},
    }
    out = ingest.prepare(Settings.model_validate(config), tmp_path)
    assert (len(out.wells), len(out.readings)) == (1, 1)


def test_units_are_those_of_the_file(tmp_path):
    run = (
        "~P\n EGL.F 328.084 : ground\n EKB.FT 344.488 : bushing\n BHT.DEG F 203 : warm\n"
        " TDL. 9842.52 FT : logger\n TSC.MIN 510 : since circulation\n"
    )
    out = with_logs(tmp_path, log(run))
    row = reading(out)
    assert row.temperature_degc == pytest.approx(95.0)
    assert row.measured_depth_m == pytest.approx(3000.0, abs=1e-3)
    assert row.since_circulation_h == pytest.approx(8.5)
    well = out.wells.set_index("well").loc["0042"]
    assert well["datum_elevation_m"] == pytest.approx(105.0, abs=1e-3)
    assert "unit_in_cell" in row.flags.split(";")


def test_a_unit_that_is_not_stated_is_assumed_and_flagged_or_told(tmp_path):
    bare = RUN.replace("BHT.DEGC 95", "BHT. 95")
    assert "unit_assumed" in reading(with_logs(tmp_path, log(bare))).flags
    (tmp_path / "b").mkdir()
    told = with_logs(
        tmp_path / "b",
        log(bare.replace("BHT. 95", "BHT. 203")),
        las={"units": {"temperature": "degF"}},
    )
    assert reading(told).temperature_degc == pytest.approx(95.0)
    assert "unit_assumed" not in reading(told).flags


def test_runs_by_number_behind_the_name_and_by_version_3(tmp_path):
    numbered = RUN.replace(" BHT.DEGC 95", " BHT1.DEGC 70 : one\n BHT2.DEGC 95").replace(
        " TDL.M 3000", " TDL1.M 2000 : one\n TDL2.M 3000"
    )
    third = log(
        "~Log_Parameter\n TMAX.DEGC 70 : max | Run[1]\n TDL.M 2000 : d | RUN[1]\n"
        " TMAX.DEGC 95 : max | Run[2]\n RUN_DEPTH.M 1500,3000 : interval {F} | Run[2]\n"
        " RUN_DATE. 23/10/1998 : date {DD/MM/YYYY} | Run[2]\n",
        "0043",
        VERSION.replace("2.0", "3.0"),
        WELL.replace("6015000", "6017000"),
        "~Log_Data | Log_Definition\n1,2\n",
    )
    colon = log(
        RUN.replace(" BHT.DEGC 95", " BHT:1.DEGC 70 : one\n BHT:2.DEGC 95").replace(
            " TDL.M 3000", " TDL[1].M 2000 : one\n TDL[2].M 3000"
        ),
        "0044",
        well=WELL.replace("6015000", "6019000"),
    )
    out = with_logs(tmp_path, log(numbered), third, colon)
    for well in ("0042", "0043", "0044"):
        rows = out.readings[out.readings["well"] == well].sort_values("depth_m")
        assert rows["temperature_degc"].tolist() == [70.0, 95.0]
        assert rows["measured_depth_m"].tolist() == [2000.0, 3000.0]
    dated = out.readings[out.readings["well"] == "0043"].set_index("log_run")["date"]
    assert dated["2"] == "1998-10-23"


def test_times_of_day(tmp_path):
    run = RUN + " TIMC. 31/05/1994 04:00 : stopped\n TIML. 31/05/1994 12:30 : on bottom\n"
    assert reading(with_logs(tmp_path, log(run))).since_circulation_h == pytest.approx(8.5)


@pytest.mark.parametrize(
    ("date", "iso"),
    [
        ("31-MAY-94", "1994-05-31"),
        ("25-DEC-1988", "1988-12-25"),
        ("15/03/2015", "2015-03-15"),
        ("03/15/2015", "2015-03-15"),
        ("1986-12-13", "1986-12-13"),
        ("13.12.1986", "1986-12-13"),
        ("01-FEB-07", "2007-02-01"),
        ("03/04/2015", ""),  # nobody can tell
    ],
)
def test_dates(tmp_path, date, iso):
    assert reading(with_logs(tmp_path, log(RUN.replace("31-MAY-94", date)))).date == iso


def test_timc_is_a_duration_where_its_unit_is_a_time(tmp_path):
    run = RUN + " TIMC.HR 8.5 : hours since circulation\n"
    assert reading(with_logs(tmp_path, log(run))).since_circulation_h == pytest.approx(8.5)


@pytest.mark.parametrize(
    ("text", "code"),
    [
        (log(RUN.replace("BHT.DEGC 95", "BHT.DEGC -999.25")), "no_temperature"),
        (
            log(RUN.replace("BHT.DEGC 95", "BHT.DEGC -1"), well=WELL.replace("-999.25", "-1")),
            "no_temperature",
        ),
        (log(RUN.replace("TDL.M 3000", "TDL.M").replace("TD.M 3010", "TD.M")), "no_depth"),
        (log(uwi=""), "no_well"),
        (log(RUN.replace("DEGC", "FURLONG")), "unit_unknown"),
        ("", "unreadable_file"),
        ("well,depth\nA,1\n", "unreadable_file"),
        (b"\x89PNG\r\n\x1a\n" + bytes(range(256)), "unreadable_file"),
    ],
)
def test_a_file_without_what_it_needs_is_one_row_of_the_ledger(tmp_path, text, code):
    out = with_logs(tmp_path, text)
    assert codes(out) == [code]
    assert out.rejected["source_file"].item() == "logs/0.las"
    assert str(tmp_path) not in out.rejected.to_csv()
    assert len(out.readings) == 16


def test_a_log_of_a_well_in_the_list(tmp_path):
    """The row of the list counts, the header fills its blanks, wherever the header lies."""
    near = log(RUN.replace("100", "300").replace("105", "305"), "LISTED")
    far = log(
        RUN.replace("3000", "2500").replace("95", "80"),
        "LISTED",
        well=WELL.replace("6015000", "6115000"),
    )
    out = with_logs(tmp_path, near, far, wells="LISTED,515010,6015000,100,105,,\n")
    row = out.wells.set_index("well").loc["LISTED"]
    assert (row["easting_m"], row["ground_elevation_m"]) == (515010.0, 100.0)
    assert row["total_depth_m"] == 3010.0
    assert codes(out) == ["well_conflict", "well_location_conflict"]
    assert (out.readings["well"] == "LISTED").sum() == 2
    assert "well_conflict" in flags(out.wells, "LISTED")


def test_a_header_without_place_belongs_to_the_list(tmp_path):
    run = RUN.replace("3010", "3005")
    text = log(run, "N00", well=WELL.replace("515000", "").replace("6015000", ""))
    out = with_logs(tmp_path, text)
    assert (out.readings["well"] == "N00").sum() == 2
    assert codes(out) == ["merged"]


def test_datum_of_a_header(tmp_path):
    """3 E, 54 N lies on the central meridian of zone 31; ED50 shifts it by about 100 m."""
    place = "~W\n UWI. {uwi} : id\n LATI.DEG 54 0' 0\" N : lat\n LONG.DEG 3.0 : lon\n"
    shifted = place + " GDAT. ED50 : datum\n"
    unknown = place + " GDAT. Clarke : datum\n"
    out = with_logs(
        tmp_path,
        log(uwi="A", well=place),
        log(uwi="B", well=shifted),
        log(uwi="C", well=unknown),
    )
    wells = out.wells.set_index("well")
    assert wells.loc["A", "easting_m"] == pytest.approx(500000.0, abs=1e-3)
    assert 50.0 < abs(wells.loc["B", "easting_m"] - 500000.0) < 200.0
    assert codes(out, "C") == ["crs_unknown", "well_rejected"]


def test_own_mnemonics_replace_the_defaults(tmp_path):
    run = RUN.replace("BHT.", "HOT.")
    out = with_logs(tmp_path, log(run), las={"mnemonics": {"temperature": ["HOT"]}})
    assert reading(out).temperature_degc == 95.0


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("37 24' 56\" N", 37 + 24 / 60 + 56 / 3600),
        ("37.41565", 37.41565),
        ("Lat 37.4", 37.4),
        ("S 12 30", -12.5),
        ("101 35 13.2 W", -(101 + 35 / 60 + 13.2 / 3600)),
        ("-101 30", -101.5),
        ("N 37 24.93'", 37 + 24.93 / 60),
    ],
)
def test_angles(text, value):
    """A degree has 60 minutes of 60 seconds; south and west are negative (ISO 6709)."""
    assert float(degrees(text)) == pytest.approx(value, abs=1e-9)


@pytest.mark.parametrize("text", ["45.37 12' 58\"", "37 83", "somewhere 12 N of 34", "1 2 3 4", ""])
def test_what_is_no_angle_stays_as_it_is(text):
    assert degrees(text) == text


@pytest.mark.parametrize(
    "hostile",
    [
        "." * 200_000,
        "A." + ": " * 100_000,
        "\n".join("." * 900 for _ in range(2000)),
        "BHT" * 50_000,
        "~" * 100_000,
        "\n".join(f"BHT{i}.DEGC 50 : x" for i in range(30_000)),
        "\x00" * 1000,
        "BHT[99999999999999999999].DEGC 5 : x | RUN[99999999999999999999999]",
    ],
)
def test_hostile_headers_take_no_time(tmp_path, hostile):
    """Seconds at most, no traceback; the limit is generous, a slow match takes minutes."""
    path = tmp_path / "a.las"
    path.write_text(VERSION + "~W\n" + hostile + "\n~P\n" + hostile + "\n")
    start = time.process_time()
    read_header(path, KNOWN)
    assert time.process_time() - start < 10.0
