"""wells.html, opened as a reader would: one file, nothing from outside, no name does harm."""

import base64
import hashlib
import os
import pickle
import re
import shutil
import subprocess
import sys

import made_up_wells
import pytest
from page_reader import Page

from basinheat.report.sheet import LONGEST
from basinheat.wellpages import page

HOSTILE = (
    "<script>alert(1)</script>",
    "<img src=x onerror=alert(1)>",
    '"><svg/onload=alert(1)>',
    "'; DROP TABLE wells; --",
    "{{ 7 * 7 }}",
    "</title></svg><b>",
    "../../etc/passwd",
    "safe\u202egnp.exe\u2066",
    "بئر ٧",
    "x" * 10_000,
)


@pytest.fixture(scope="module")
def hostile():
    """Make wells whose names, rocks, files and flags are made to break a page."""
    run = made_up_wells.contents(HOSTILE)
    bad = HOSTILE[0]
    layers = run.layers.assign(lithology=bad)
    readings = run.readings.assign(source_file=bad, log_run=HOSTILE[1], date=HOSTILE[2])
    readings = readings.assign(flags="<i>flag</i>")
    return made_up_wells.contents(HOSTILE, layers=layers, readings=readings)


@pytest.fixture(scope="module")
def text(hostile):
    """Write the page once."""
    return page.html(hostile)


@pytest.fixture(scope="module")
def read(text):
    """Parse it."""
    return Page(text)


def test_nothing_comes_from_outside(text, read):
    """No link but to anchors and the report, no image, no address; the page itself forbids it."""
    names = {tag for tag, _, _ in read.tags}
    assert not names & {"img", "link", "iframe", "object", "embed", "base", "image", "i", "b"}
    links = {attrs["href"] for tag in ("a", "use") for attrs in read.all(tag)}
    assert {link for link in links if not link.startswith("#")} == {"report.html"}
    assert not [name for _, attrs, _ in read.tags for name in attrs if name.startswith("on")]
    assert {*re.findall(r"url\((.)", text)} == {"#"}
    assert "@import" not in text
    assert "http://" not in text and "https://" not in text
    (policy,) = [attrs for attrs in read.all("meta") if "http-equiv" in attrs]
    assert policy["content"].startswith("default-src 'none'")


def test_only_the_page_s_own_script_may_run(text):
    """One script, and the policy names its SHA-256 (W3C Content Security Policy, level 2)."""
    (script,) = re.findall(r"<script>(.*?)</script>", text, re.S)
    digest = base64.b64encode(hashlib.sha256(script.encode()).digest()).decode()
    assert f"script-src 'sha256-{digest}'" in text
    assert "unsafe-inline'; script" in text and "script-src 'unsafe" not in text


def test_every_link_has_its_place(text, read):
    """Anchors, marks and patterns exist, and each id stands once."""
    ids = [attrs["id"] for _, attrs, _ in read.tags if "id" in attrs]
    assert len(ids) == len({*ids})
    links = [attrs["href"] for tag in ("a", "use") for attrs in read.all(tag)]
    named = [attrs["aria-labelledby"].split() for attrs in read.all("svg") if "role" in attrs]
    wanted = {link[1:] for link in links if link.startswith("#")} | {n for p in named for n in p}
    assert wanted | {*re.findall(r"url\(#([\w-]+)\)", text)} <= {*ids}
    assert all(re.fullmatch(r"[A-Za-z][\w-]*", name) for name in ids)


def test_names_of_wells_are_shown_and_do_nothing(text, read):
    """Each name is there as text, cut where endless, marks of direction made visible."""
    said = "".join(read.text)
    for name in HOSTILE[:7]:
        assert name in said, name
    for raw in (*HOSTILE[:3], HOSTILE[5], "<i>flag</i>"):
        assert raw not in text
    assert "safe[U+202E]gnp.exe[U+2066]" in said
    assert "بئر ٧" in said
    assert max(len(run) for run in re.findall(r"x{50,}", text)) == LONGEST - 1


def test_every_picture_is_told_in_words(read):
    """A picture has a title and a description; what only decorates is hidden (WAI-ARIA 1.2)."""
    for attrs in read.all("svg"):
        told = attrs.get("role") == "img" and "aria-labelledby" in attrs
        assert told or attrs.get("aria-hidden") == "true"
    drawn = [attrs for attrs in read.all("svg") if attrs.get("role") == "img"]
    inside = [tag for tag, _, parents in read.tags if parents[-1:] == ("svg",)]
    assert len(drawn) == inside.count("title") == inside.count("desc") == 3 * made_up_wells.WELLS


def test_tables_have_headers(read):
    """Every header says whether it is of a column or of a row (WCAG technique H63)."""
    assert all(attrs.get("scope") in ("col", "row") for attrs in read.all("th"))
    assert len(read.all("table")) > made_up_wells.WELLS


def test_bytes_depend_on_content_only(tmp_path, hostile):
    """Two processes with other seeds of hashing and other zones write the same bytes."""
    (tmp_path / "run.pickle").write_bytes(pickle.dumps(hostile))
    code = (
        "import pickle, sys\nfrom basinheat.wellpages import page\n"
        "page.write(sys.argv[2], pickle.load(open(sys.argv[1], 'rb')))\n"
    )
    for zone, seed in (("UTC", "1"), ("Asia/Tokyo", "2")):
        env = {**os.environ, "TZ": zone, "PYTHONHASHSEED": seed, "LC_ALL": "C.UTF-8"}
        env["PYTHONPATH"] = os.pathsep.join(sys.path)
        out = tmp_path / f"{seed}.html"
        command = [sys.executable, "-c", code, str(tmp_path / "run.pickle"), str(out)]
        subprocess.run(command, env=env, check=True)
    assert (tmp_path / "1.html").read_bytes() == (tmp_path / "2.html").read_bytes()


def test_a_page_is_whole_or_not_there(tmp_path, hostile, monkeypatch):
    """A fault while drawing leaves no file."""

    def fail(*_):
        raise RuntimeError

    monkeypatch.setattr("basinheat.wellpages.views.depth_plot", fail)
    with pytest.raises(RuntimeError):
        page.write(tmp_path / "wells.html", hostile)
    assert list(tmp_path.iterdir()) == []


def opened(folder, query=""):
    """Return the page as a browser has it after its script ran."""
    browser = next(filter(None, map(shutil.which, ("chromium", "chromium-browser",
                                                   "google-chrome"))), None)  # fmt: skip
    if browser is None:
        pytest.skip("no chromium to open the page with")
    command = [
        browser, "--headless", "--no-sandbox", "--disable-gpu", f"--user-data-dir={folder}/user",
        "--dump-dom", f"{(folder / 'wells.html').as_uri()}{query}",
    ]  # fmt: skip
    done = subprocess.run(command, capture_output=True, text=True, timeout=120)
    assert done.returncode == 0, done.stderr
    return done.stdout


def test_a_browser_filters_the_wells(tmp_path, hostile):
    """The script runs under the page's own policy; search by name and by size of misfit."""
    page.write(tmp_path / "wells.html", hostile)
    dom = opened(tmp_path)
    assert f"{made_up_wells.WELLS} of {made_up_wells.WELLS} shown" in dom
    assert "data-hide" not in dom.split("<main>")[1].split("<script>")[0]
    assert re.search(r'<form id="filter">', dom), "shown where there is a script"
    named = opened(tmp_path, "?name=etc%2FPASSWD")
    assert f"1 of {made_up_wells.WELLS} shown" in named
    assert len(re.findall(r'<section class="well"[^>]* data-hide', named)) == 11
    # wells 10 and 11 lie 1.0 and 1.1 σ from the others
    assert f"2 of {made_up_wells.WELLS} shown" in opened(tmp_path, "?size=0.95")
