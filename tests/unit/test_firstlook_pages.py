"""The first look as map, page and console: harmless, and the same every time."""

import re
import unicodedata

import numpy as np
import pytest
from firstlook_case import (
    DEGF,
    SURFACE,
    WELLS,
    basin,
    column,
    seen,
)

from basinheat import documents
from basinheat.firstlook import (
    answers,
    chart,
    console,
    page,
    places,
)
from basinheat.settings.model import Settings

# The map


def test_the_map_holds_every_well(tmp_path):
    record, done = seen(tmp_path)
    place = record["map"]
    cells = np.array(place["cells"])
    assert cells[:, 2].sum() == place["wells"] == len(done.wells) == WELLS
    assert cells[:, 3].sum() == place["with_readings"] == done.readings["well"].nunique()
    north = done.wells.loc[done.wells["northing_m"].idxmax()]
    assert cells[0, 0] == 0  # the first row is the northernmost
    assert cells[0, 1] == int((north["easting_m"] - place["west"]) / place["cell_m"])
    assert chart.svg(place).count("<circle") == len(cells)
    lines = chart.characters(place)[1:-2]
    assert sum(1 for line in lines for mark in line if mark in ".oO#") <= WELLS
    assert len(lines) <= chart.SCREEN_ROWS + 1
    assert max(map(len, lines)) <= chart.SCREEN_COLUMNS + 3


def test_the_map_has_axes_in_kilometres(tmp_path):
    record, _ = seen(tmp_path)
    place = record["map"]
    drawn = chart.svg(place)
    north = [float(km) for km in re.findall(r'text-anchor="end">(-?[\d.]+)<', drawn)]
    assert len(north) >= 3
    margin = 10.0  # km beside the outermost wells
    assert min(north) >= place["south"] / 1000.0 - margin
    assert max(north) <= place["north"] / 1000.0 + margin
    # Where a tick stands is where a well of that northing would be drawn.
    steps = re.findall(r'd="M-4 ([\d.]+)h5"/>\n<text[^>]*>(-?[\d.]+)<', drawn)
    pixel, km = np.array(steps, float).T
    first = place["cells"][0]
    dot = float(re.search(r'<circle[^>]* cy="([\d.]+)"', drawn)[1])
    at = place["north"] / 1000.0 - (first[0] + 0.5) * place["cell_m"] / 1000.0
    assert np.polyval(np.polyfit(km, pixel, 1), at) == pytest.approx(dot, abs=0.5)


def test_headers_like_nothing_known_are_told_without_contradiction(tmp_path):
    wells, readings = basin()
    record, _ = seen(tmp_path, wells.assign(OPERATOR="a"), readings)
    told = console.text(record)
    assert "Not read, and like no column that is known: OPERATOR." in told
    assert "not read: none" not in told and "not read: none" not in page.html(record)


@pytest.mark.parametrize("count", [0, 1, 2])
def test_a_map_of_few_wells(count, tmp_path):
    _, done = seen(tmp_path)
    place = places.small_map(done.wells[:count], np.ones(count, bool), "EPSG:32614")
    assert (chart.svg(place) == "") == (count == 0)
    assert sum(cell[2] for cell in place["cells"]) == count


# Harmless, and the same every time

HOSTILE = [
    "<script>alert(1)</script>",
    "\x1b[2J\x1b]0;owned\x07",
    "a\u202egnp.exe",
    "=HYPERLINK(1)",
    "../../etc/passwd",
    "N" * 10_000,
    "{{ 7 * 7 }} {% raw %}",
    "`units: {depth: ft}`",
]


def hostile(folder):
    """Return the first look at a basin with hostile names, headers, kinds and cells."""
    wells, readings = basin()
    wells.loc[: len(HOSTILE) - 1, "well"] = HOSTILE
    readings = readings.astype({"temperature": object})
    readings.loc[: len(HOSTILE) - 1, "kind"] = HOSTILE
    readings.loc[10 : 9 + len(HOSTILE), "temperature"] = HOSTILE
    readings.loc[20 : 19 + len(HOSTILE), "well"] = HOSTILE
    for header in HOSTILE:
        readings[header] = 1
    return seen(folder, wells, readings)[0]


def test_nothing_in_the_data_steers_a_terminal_or_a_browser(tmp_path):
    record = hostile(tmp_path)
    told, html = console.text(record), page.html(record)
    for text in (told, html):
        assert not [c for c in text if unicodedata.category(c) in ("Cc", "Cf", "Zl") and c != "\n"]
        assert "N" * 1100 not in text
    assert html.count("<script") == 0
    assert "&lt;script&gt;" in html
    assert "7 * 7" in html, "templates in the data are text"
    longest = sorted(map(len, told.splitlines()))
    assert longest[-5] <= 170  # a table with a long name in each cell
    assert longest[-1] <= 1100  # lines to be typed are not broken
    assert all(each["ask"].count("`") % 2 == 0 for each in record["questions"])


def test_the_console_tells_what_the_page_tells(tmp_path):
    record = hostile(tmp_path)
    flat = re.sub(r"\W", "", console.text(record))
    html = page.html(record)
    for each in record["questions"]:
        for part, _ in page.code_parts(each["ask"]):
            assert re.sub(r"\W", "", console.plain(part)[:300]) in flat
    for code in {one["code"] for each in record["files"] for one in each["reasons"]}:
        assert code.replace("_", " ") in html and re.sub("_", "", code) in flat.replace("_", "")


def test_the_same_bytes_in_another_folder(tmp_path):
    made = []
    for name in ("one", "two words"):
        record = hostile(tmp_path / name)
        documents.save(record, tmp_path / name / "record.json")
        text = (tmp_path / name / "record.json").read_text(encoding="utf-8")
        made.append((text, page.html(record), console.text(record)))
    assert made[0] == made[1]
    assert not any(str(tmp_path) in text for text in made[0])


def test_no_path_of_the_machine_is_told(tmp_path):
    """Files and decisions that the config names by a whole path."""
    inputs = {"readings": [{"file": str(tmp_path / "away" / "far.csv"), "kinds": {"a": "bht"}}],
              "decisions": str(tmp_path / "away" / "decisions.csv")}  # fmt: skip
    settings = Settings.model_validate(
        {"run": "case", "crs": "EPSG:32614", "surface_temperature": {"model": "constant",
         "temperature_degc": SURFACE}, "inputs": {"wells": [{"file": "wells.csv"}], **inputs}}
    )  # fmt: skip
    told = answers.stated(settings)
    assert told["inputs"]["readings"] == [{"file": "far.csv", "kinds": {"a": "bht"}}]
    assert str(tmp_path) not in repr(told)


# Well logs

LAS = """~Version
VERS. 2.0 : CWLS LOG ASCII STANDARD
WRAP. NO  :
~Well
STRT.M 0.0 :
STOP.M 1.0 :
STEP.M 0.5 :
NULL. -999.25 :
WELL. {well} : WELL
LONG.DEG {x} : LONGITUDE
LATI.DEG {y} : LATITUDE
~Parameter
BHT.{unit} {degree} : BOTTOM HOLE TEMPERATURE
TDL.M {depth} : TOTAL DEPTH LOGGER
~Curve
DEPT.M : DEPTH
~ASCII
0.0
0.5
1.0
"""  # sections and items as in the LAS 2.0 standard of the CWLS (from memory)


def test_headers_of_logs_are_told_of_together(tmp_path):
    wells, readings = basin()
    for i, (well, reading) in enumerate(zip(wells.to_dict("records"), readings.to_dict("records"),
                                            strict=False)):  # fmt: skip
        unit, degree = ("DEGF", DEGF(reading["temperature"])) if i % 2 else ("DEGC", "")
        text = LAS.format(well=well["well"], x=well["x"], y=well["y"], unit=unit, degree=degree,
                          depth=reading["depth"])  # fmt: skip
        (tmp_path / f"log{i}.las").write_text(text, encoding="utf-8")
    (tmp_path / "none.las").write_text("<html></html>", encoding="utf-8")
    # the tables hold another basin, as a config may name both
    record, done = seen(tmp_path, wells.assign(well="T" + wells["well"]),
                        readings.assign(well="T" + readings["well"]),
                        inputs={"las": [{"file": "*.las"}]})  # fmt: skip
    told = [each for each in record["files"] if each["place"] == "inputs.las[0]"]
    assert [(each["table"], each["file"]) for each in told] == [
        ("wells", "*.las, 41 files"), ("readings", "*.las, 41 files"),
    ]  # fmt: skip
    reasons = {each["code"]: each["rows"] for each in told[1]["reasons"]}
    assert reasons == {"no_temperature": WELLS // 2, "unreadable_file": 1}
    assert (told[1]["rows"], told[1]["kept"]) == (WELLS + 1, WELLS // 2)
    assert sum(each["kept"] for each in record["files"] if each["table"] == "readings") == len(
        done.readings
    )
    assert column({"files": told}, "readings", "temperature")["missing"] == WELLS // 2
    shown = {name: column({"files": told}, "readings", name)["header"]
             for name in ("temperature", "depth")}  # fmt: skip
    assert shown == {"temperature": "BHT", "depth": "TDL"}, "as found, not sought"
