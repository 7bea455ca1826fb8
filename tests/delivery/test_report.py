"""The report, opened as a reader would: one file, nothing from outside, no name does harm."""

import base64
import os
import pickle
import re
import struct
import subprocess
import sys

import made_up_report
import pytest
import yaml
from page_reader import Page

from basinheat.delivery.cautions import CAUTIONS
from basinheat.report import page
from basinheat.report.sheet import LONGEST

HOSTILE = (
    "<script>alert(1)</script>",
    "<img src=x onerror=alert(1)>",
    '"><svg/onload=alert(1)>',
    "=1+1",
    "{{ 7 * 7 }}",
    "$\\frac{1}{0}$ & co; &lt;b&gt;",
    "../../etc/passwd",
    "safe\u202egnp.exe\u2066",
    "بئر ٧",
    "x" * 10_000,
)


@pytest.fixture(scope="module")
def hostile():
    """Make a run whose wells are named to break a page, one of each far out."""
    run = made_up_report.contents(HOSTILE)
    table = run.crossval_temperature
    table.loc[: len(HOSTILE) - 1, "left_out_k"] = 20.0
    credits = f"Owner {HOSTILE[0]}"
    settings = made_up_report.settings(credits=credits)
    settings["inputs"]["wells"][0]["file"] = "/home/somebody/secret place/wells.csv"
    return made_up_report.contents(
        HOSTILE, crossval_temperature=table, settings=settings,
        about=type(run.about)("made_up", credits=credits),
    )  # fmt: skip


@pytest.fixture(scope="module")
def text(hostile):
    """Write the page once."""
    return page.html(hostile)


@pytest.fixture(scope="module")
def read(text):
    """Parse it."""
    return Page(text)


def test_nothing_comes_from_outside(text, read):
    """No script, no link but to anchors and the page beside, no address; the page forbids it."""
    names = {tag for tag, _, _ in read.tags}
    assert not names & {"script", "link", "iframe", "object", "embed", "form", "base", "svg"}
    assert all(attrs["src"].startswith("data:image/png;base64,") for attrs in read.all("img"))
    links = {attrs["href"] for attrs in read.all("a")}
    assert {link for link in links if not link.startswith("#")} == {"wells.html"}
    style = re.search(r"<style>(.*?)</style>", text, re.S).group(1)
    assert not re.search(r"url\(|@import|http", style)
    assert not [name for _, attrs, _ in read.tags for name in attrs if name.startswith("on")]
    policy = [attrs for attrs in read.all("meta") if "http-equiv" in attrs]
    assert policy[0]["content"].startswith("default-src 'none'")
    assert "http://" not in text
    assert "https://" not in text


def test_every_link_has_its_place(read):
    """Anchors exist, and each id stands once."""
    ids = [attrs["id"] for _, attrs, _ in read.tags if "id" in attrs]
    assert len(ids) == len({*ids})
    links = [attrs["href"] for attrs in read.all("a")]
    assert {link.removeprefix("#") for link in links if link.startswith("#")} <= {*ids}


def test_names_of_wells_are_shown_and_do_nothing(text, read):
    """Each name is there as text, cut where endless, marks of direction made visible."""
    for name in HOSTILE[:7]:
        assert name in "".join(read.text), name
    for raw in HOSTILE[:3]:
        assert raw not in text
    assert "safe[U+202E]gnp.exe[U+2066]" in text
    assert "بئر ٧" in text
    kept = LONGEST - 1
    assert {len(run) for run in re.findall(r"x{50,}", text)} == {kept}
    assert "x" * kept + "…" in text


def test_pages_do_not_name_folders(text):
    """An absolute path of the user's goes by its file name."""
    assert "somebody" not in text
    assert "file: wells.csv" in text


def test_all_cautions_are_printed(read):
    """Word for word."""
    words = " ".join("".join(read.text).split())
    for caution in CAUTIONS:
        assert " ".join(caution.split()) in words


def test_all_settings_and_versions_are_printed(read, hostile):
    """The settings are YAML that reads back."""
    whole = "".join(read.text)
    start = whole.index("run: made_up")
    printed = yaml.safe_load(whole[start : whole.index("\nVersions", start)])
    for section in ("maps", "kriging", "correction", "gradient", "validation"):
        assert printed[section] == hostile.settings[section]
    for name, version in hostile.versions.items():
        assert name in whole
        assert version in whole


def test_each_map_stands_beside_its_uncertainty(read, hostile):
    """Two images a quantity, each described in words; an isotherm too."""
    alts = [attrs["alt"] for attrs in read.all("img")]
    assert all(alts)
    for title in ("Surface heat flow", "Temperature at 1000 m", "Temperature at 2000 m",
                  "Depth of 100 °C", "Mean geothermal gradient down to 2000 m"):  # fmt: skip
        found = [alt for alt in alts if title in alt]
        assert len(found) == 2, title
        assert "standard uncertainty" in found[1]


def test_images_are_bare_png_of_the_stated_size(read):
    """Chunks: header, resolution, data, end; no date, no program (PNG specification, ISO 15948)."""
    for attrs in read.all("img"):
        data = base64.b64decode(attrs["src"].partition(",")[2])
        assert data[:8] == b"\x89PNG\r\n\x1a\n"
        assert struct.unpack(">II", data[16:24]) == (int(attrs["width"]), int(attrs["height"]))
        assert chunks(data) <= {b"IHDR", b"pHYs", b"IDAT", b"IEND"}


def chunks(data):
    """Return the kinds of the chunks of a PNG."""
    kinds, at = set(), 8
    while at < len(data):
        (length,) = struct.unpack(">I", data[at : at + 4])
        kinds.add(data[at + 4 : at + 8])
        at += 12 + length
    return kinds


def test_size(text):
    """A page of a few megabytes opens on a phone."""
    assert len(text.encode()) < 4_000_000


def test_bytes_depend_on_content_only(tmp_path, hostile):
    """Another folder, clock zone, language, hash seed, and a user's own matplotlibrc."""
    (tmp_path / "run.pickle").write_bytes(pickle.dumps(hostile))
    code = (
        "import pickle, sys\n"
        "from basinheat.report import page\n"
        "page.write(sys.argv[2], pickle.load(open(sys.argv[1], 'rb')))\n"
    )
    places, running = [tmp_path / "a", tmp_path / "b"], []
    for place, zone, seed, own in zip(
        places, ("UTC", "Asia/Tokyo"), "12", ("", "font.size: 31"), strict=True
    ):
        place.mkdir()
        (place / "matplotlibrc").write_text(f"{own}\n")
        env = {**os.environ, "TZ": zone, "PYTHONHASHSEED": seed, "LC_ALL": "C.UTF-8"}
        env["PYTHONPATH"] = os.pathsep.join(sys.path)
        command = [sys.executable, "-c", code, str(tmp_path / "run.pickle"), "report.html"]
        running.append(subprocess.Popen(command, cwd=place, env=env))
    assert [process.wait() for process in running] == [0, 0]
    for place in places:
        assert sorted(file.name for file in place.iterdir()) == ["matplotlibrc", "report.html"]
    pages = [(place / "report.html").read_bytes() for place in places]
    assert pages[0] == pages[1]


def test_a_page_is_whole_or_not_there(tmp_path, hostile, monkeypatch):
    """A fault while drawing leaves no file that looks finished."""

    def fail(*_):
        raise RuntimeError

    monkeypatch.setattr("basinheat.report.figures.validation_picture", fail)
    with pytest.raises(RuntimeError):
        page.write(tmp_path / "report.html", hostile)
    assert list(tmp_path.iterdir()) == []


def test_a_poor_run_has_a_page_too():
    """No layers, no rejects, no isotherm reached, nothing to judge the temperature by."""
    run = made_up_report.contents()
    none = {"n": 0, **dict.fromkeys(("bias", "rmse", "msdr", "coverage_50", "coverage_80",
                                     "coverage_90", "coverage_95"))}  # fmt: skip
    poor = made_up_report.contents(
        maps=run.maps.assign(isotherm_100c=float("nan"), isotherm_100c_std=float("nan")),
        rejected=run.rejected.head(0),
        rejected_later=run.rejected_later.head(0),
        crossval_temperature=run.crossval_temperature.head(0),
        scores={**run.scores, "temperature_left_out": none, "temperature_closure": none},
        structure_model={"groups": [], "vertical_correlation_m": 500.0},
        heat_flow_model={**run.heat_flow_model, "experimental": None},
        recovery={},
    )
    assert "Depth of 100 °C" not in " ".join(Page(page.html(poor)).text)
