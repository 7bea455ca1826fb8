"""The target first_look, run through snakemake on a small basin."""

import csv
import json
import re
import subprocess

import pytest
from runs import RUN, command, copy_project, environment, snakemake, write_basin

from basinheat import tables


@pytest.fixture(scope="module")
def first(tmp_path_factory):
    """Return folder, config and what the first run printed.

    From a copy of the project: a rule runs again where its code was changed in between.
    """
    folder = tmp_path_factory.mktemp("look")
    copy_project(folder)
    config = write_basin(folder / "basin")
    return folder, config, printed(folder, config)


def printed(folder, config, *arguments):
    """Return what a run of the target prints for the user."""
    done = subprocess.run(
        command(folder / "project", "first_look", "--configfile", config, "--cores", 1, *arguments),
        cwd=folder,
        env=environment(folder / "project"),
        capture_output=True,
        text=True,
        timeout=600,
    )
    assert done.returncode == 0, done.stdout + done.stderr
    return done.stdout


def results(folder, name):
    """Return a file of the results."""
    return folder / "results" / RUN / "wells" / name


def test_it_prints_the_text_that_it_writes(first):
    folder, _, said = first
    text = results(folder, "first_look.txt").read_text(encoding="utf-8")
    assert "A first look at the inputs of" in text
    assert text in said


def test_it_maps_nothing(first):
    folder, _, _ = first
    made = {path.name for path in (folder / "results" / RUN).iterdir()}
    assert made == {"wells", "logs"}


def test_it_prints_again_without_reading_again(first):
    folder, config, said = first
    before = results(folder, "first_look.json").stat().st_mtime_ns
    again = printed(folder, config)
    assert "A first look at the inputs of" in again
    assert again.count("\n") >= said.count("\n") - 3
    assert results(folder, "first_look.json").stat().st_mtime_ns == before


@pytest.mark.parametrize("arguments", [("--quiet", "all"), ("--quiet", "rules")])
def test_a_quiet_run_still_prints_it(first, arguments):
    folder, config, _ = first
    assert "A first look at the inputs of" in printed(folder, config, *arguments)


def test_rows_are_those_of_the_files(first):
    """Lines counted by the csv module, rows that are kept by the tables."""
    folder, config, _ = first
    record = json.loads(results(folder, "first_look.json").read_text(encoding="utf-8"))
    kept = {
        "wells": tables.Wells.load(results(folder, "wells.parquet")),
        "readings": tables.Readings.load(results(folder, "readings.parquet")),
        "layers": tables.Layers.load(results(folder, "layers.parquet")),
    }
    assert {"wells", "readings", "layers"} <= {each["table"] for each in record["files"]}
    for each in record["files"]:
        path = config.parent / each["file"]
        with path.open(encoding="utf-8", newline="") as file:
            assert each["rows"] == sum(1 for row in csv.reader(file) if row) - 1
        assert each["rows"] == each["kept"] + each["merged"] + each["refused"]
        if each["table"] in kept:
            assert each["kept"] == len(kept[each["table"]])


def test_reasons_are_those_of_the_ledger(first):
    folder, _, _ = first
    record = json.loads(results(folder, "first_look.json").read_text(encoding="utf-8"))
    with results(folder, "rejected.csv").open(encoding="utf-8", newline="") as file:
        lines = list(csv.DictReader(file))
    told = sum(one["rows"] for each in record["files"] for one in each["reasons"])
    assert told + sum(one["rows"] for one in record["decisions"]) == len(lines)


def test_the_page_needs_nothing_from_elsewhere(first):
    folder, _, _ = first
    page = results(folder, "first_look.html").read_text(encoding="utf-8")
    assert "<svg" in page and "<circle" in page
    assert re.findall(r"""(?:src|href)=["'](?!#)""", page) == []
    assert str(folder) not in page and folder.name not in page


def test_a_header_that_is_absent_is_told_before_any_job(first, tmp_path):
    folder, config, _ = first
    root = folder / "project"
    text = config.read_text(encoding="utf-8")
    spoiled = re.sub(r"(\btemperature: )(\w+)", r"\1no such header", text, count=1)
    assert spoiled != text
    other = config.with_name("spoiled.yaml")
    other.write_text(spoiled, encoding="utf-8")
    done = subprocess.run(
        command(root, "first_look", "--configfile", other, "--cores", 1, "--directory", tmp_path),
        cwd=folder, env=environment(root), capture_output=True, text=True, timeout=600,
    )  # fmt: skip
    said = done.stdout + done.stderr
    assert done.returncode != 0
    assert 'has no column "no such header"' in said and "may it be" in said
    assert "Traceback" not in said and "Job" not in said


def test_a_dry_run_plans_three_steps(first, tmp_path):
    folder, config, _ = first
    root = folder / "project"
    said = snakemake(root, tmp_path, "first_look", "--configfile", config, "--cores", 1, "-n")
    planned = set(re.findall(r"^(\w+) +1$", said, re.M))
    assert {"prepare_wells", "look_at_inputs", "first_look"} <= planned
