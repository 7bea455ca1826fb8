"""What closes a delivery: manifest, README and the rejects as CSV."""

import csv
import hashlib
import json

import pandas as pd
import pytest

from basinheat.delivery import cautions, manifest, raster, rejects
from basinheat.delivery.metadata import STATUS_CLASSES
from basinheat.tables.spreadsheet import inert


@pytest.fixture(scope="module")
def folder(tmp_path_factory, maps, grid, about, results):
    """Write a small delivery and close it."""
    path = tmp_path_factory.mktemp("closed") / "delivery"
    few = maps[["row", "col", "heat_flow", "heat_flow_std", "status"]]
    raster.write_all(few, grid, path / "rasters", about)
    (path / "report.html").write_text("<p>report</p>")
    (path / "wells.html").write_text("<p>wells</p>")
    (path / "demo.gpkg").write_bytes(b"stands for the GeoPackage")
    write = {"config": {"run": "demo"}, "inputs": {"wells.csv": "0" * 64}, "code": {"x": "1"}}
    manifest.write(path, grid, results["rejected"], about, **write)
    return path


def test_manifest_lists_every_file_with_its_true_hash(folder):
    """Checked against hashlib, file by file; nothing is missing and nothing is made up."""
    listed = json.loads((folder / "manifest.json").read_text("utf-8"))["files"]
    on_disk = {
        path.relative_to(folder).as_posix(): hashlib.sha256(path.read_bytes()).hexdigest()
        for path in folder.rglob("*")
        if path.is_file() and path.name != "manifest.json"
    }
    assert listed == on_disk
    assert "rasters/heat_flow.tif" in listed
    assert {"rejected.csv", "wells.html"} <= {*listed}


def test_manifest_has_the_parts_that_the_design_promises(folder):
    """Files, config, inputs, versions, code."""
    content = json.loads((folder / "manifest.json").read_text("utf-8"))
    assert sorted(content) == ["code", "config", "files", "inputs", "versions"]
    assert content["inputs"] == {"wells.csv": "0" * 64}
    assert {"python", "numpy", "rasterio"} <= set(content["versions"])


def test_writing_again_changes_no_byte(folder, grid, about, results):
    """A delivery that already holds its own manifest gives the same manifest."""
    names = ("manifest.json", "README.txt", "rejected.csv")
    before = [(folder / name).read_bytes() for name in names]
    write = {"config": {"run": "demo"}, "inputs": {"wells.csv": "0" * 64}, "code": {"x": "1"}}
    manifest.write(folder, grid, results["rejected"].iloc[::-1], about, **write)
    assert [(folder / name).read_bytes() for name in names] == before


def test_nothing_tells_where_and_when(folder):
    """No folder of this machine in the text files."""
    for name in ("manifest.json", "README.txt", "rejected.csv"):
        text = (folder / name).read_text("utf-8")
        assert str(folder.parent) not in text
        assert "/tmp" not in text


def test_rejects_hold_no_formula(folder, results):
    """No cell starts with a sign that spreadsheets run; numbers stay numbers (common practice)."""
    with open(folder / "rejected.csv", newline="", encoding="utf-8") as file:
        rows = list(csv.DictReader(file))
    assert len(rows) == len(results["rejected"])
    assert [row["source_line"] for row in rows] == ["3", "5", "7"]
    assert [row["value"] for row in rows] == ["'=1+1", "'@SUM(A1)", "-999.25"]
    assert rows[1]["well"].startswith("'=HYPERLINK")


@pytest.mark.parametrize(
    "text", ["=1", "+A1", "-A1", "@x", "\tx", "\rx", " =1", "-1+cmd|' /C calc'!A0", "+-2", "-"]
)
def test_formulas_become_inert(text):
    """The signs that start a formula, also after blanks."""
    assert inert(text) == f"'{text}"


@pytest.mark.parametrize("text", ["", "-12", "+1.5e3", "-.5", "1,5", "-3,25", "BW-1", "a=b", "'x"])
def test_numbers_and_words_stay(text):
    """What is no formula is not touched."""
    assert inert(text) == text


def test_readme_carries_all_cautions_and_conventions(folder, grid):
    """Every caution word for word, every raster, CRS, sigma, depth reference, classes."""
    readme = " ".join((folder / "README.txt").read_text("utf-8").split())
    for caution in cautions.CAUTIONS:
        assert caution in readme
    for word in (
        "rasters/heat_flow_std.tif",
        "rejected.csv",
        "manifest.json",
        "wells.html",
        "demo.gpkg",
        grid.crs,
        "west 500000, south 5100000, east 1100000, north 5800000",
        "1 sigma",
        "sea floor",
        "mW/m²",
        "apostrophe",
        "CC BY, nobody",
        *(one.name for one in STATUS_CLASSES),
    ):
        assert word in readme


def test_readme_lines_fit_a_terminal(folder):
    """At most 88 characters, whole words."""
    lines = (folder / "README.txt").read_text("utf-8").splitlines()
    assert max(map(len, lines)) <= 88


def test_cautions_name_the_uses_to_keep_away_from():
    """Each point of the trade's cautions (METHODS, section L) is there in words."""
    text = " ".join(cautions.CAUTIONS)
    for word in (
        "screening", "equipment", "casing", "cement", "mud weights", "well-control", "invest",
        "90 or 95 %", "10 %", "faults", "salt", "several kelvin", "does not shrink", "pressure",
        "hydrogen sulphide", "engineer", "local codes", "Blank",
    ):  # fmt: skip
        assert word in text, word


def test_an_empty_ledger_is_a_header(tmp_path):
    """No rejects: a CSV with names of columns only."""
    rejects.write(pd.DataFrame(), tmp_path / "rejected.csv")
    assert (tmp_path / "rejected.csv").read_text().startswith("table,source_file,source_line,well")
