"""Twelve public LAS files: the examples of the standard (CWLS) and a log of Kansas.

What is expected is read off the files with the eye; their oddities are listed beside them
(SOURCE.md): values behind the colon, runs in columns, a mud-temperature mnemonic described as
bottom-hole temperature, UTF-16, a missing version.
"""

import pytest
from ingest_case import codes
from shared import shared_file

from basinheat import ingest
from basinheat.settings.model import Settings

# Without a depth: the standard's examples state a bottom-hole temperature and no total depth.
REASONS = {
    "1001178549.las": "no_depth",
    "6038187_v1.2.las": "no_temperature",
    "encodings_iso88591.las": "no_depth",
    "encodings_utf16le.las": "unit_unknown",
    "las-30a-revised-2010.las": "no_temperature",
    "missing_vers.las": "no_depth",
    "sample.las": "no_depth",
    "sample_2.0.las": "no_depth",
    "sample_2.0_universal_newline.las": "no_depth",
    "sample_3.0.las": "no_temperature",
    "sample_wrapped.las": "no_temperature",
}


@pytest.fixture(scope="module")
def out():
    folder = shared_file("data", "lasio_las", "sample.las").parent
    config = {
        "run": "logs",
        "crs": "EPSG:32613",
        "surface_temperature": {"model": "constant", "temperature_degc": 12},
        "inputs": {"las": [{"file": "*.las"}]},
    }
    return ingest.prepare(Settings.model_validate(config), folder)


def test_every_file_is_a_reading_or_a_reason(out):
    told = out.rejected[out.rejected["table"] == "readings"]
    assert dict(zip(told["source_file"], told["code"], strict=True)) == REASONS
    assert out.readings["source_file"].tolist() == ["sample_2.0_based.las"]
    assert codes(out, table="readings") == sorted(REASONS.values())


def test_the_mud_temperature_that_is_a_bottom_hole_temperature(out):
    (row,) = out.readings.itertuples()
    assert (row.temperature_degc, row.measured_depth_m) == (67.0, 3456.5)
    assert (row.well, row.date) == ("100123401234W500", "1986-12-13")


def test_the_log_of_kansas(out):
    """3190 and 3210 ft above sea level, 37.41565 N, 101.58701 W."""
    well = out.wells.set_index("well").loc["15-187-20743"]
    assert well["ground_elevation_m"] == pytest.approx(3190 * 0.3048)
    assert well["datum_elevation_m"] == pytest.approx(3210 * 0.3048)
    assert well["latitude_deg"] == pytest.approx(37.41565)
    assert well["longitude_deg"] == pytest.approx(-101.58701)


def test_names_of_version_1_2_stand_behind_the_colon(out):
    """In a file without a version too: no well is called UNIQUE WELL ID."""
    told = out.rejected.set_index("source_file")["well"]
    for name in ("encodings_iso88591.las", "encodings_utf16le.las", "missing_vers.las"):
        assert told[name] == "100091604920W300"
    assert told["sample_wrapped.las"] == "ANY ET AL XX-XX-XX-XX"
