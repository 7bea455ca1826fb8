"""The same inputs, config and code give the same delivery, to the last byte."""

import os
import re
import signal
import subprocess
import time

import pytest
from runs import ROOT, RUN, command, digests, environment, snakemake, write_basin


@pytest.fixture(scope="module")
def plain(tmp_path_factory):
    """Return a delivery made on one core."""
    folder = tmp_path_factory.mktemp("plain")
    write_basin(folder)
    snakemake(ROOT, folder, "--configfile", "config.yaml", "--cores", 1)
    return folder / "results" / RUN / "base" / "delivery"


def differing(one, other):
    """Return the files that two deliveries do not share to the byte."""
    one, other = digests(one), digests(other)
    return sorted(name for name in one.keys() | other.keys() if one.get(name) != other.get(name))


def test_the_delivery_is_complete(plain):
    names = set(digests(plain))
    assert {f"{RUN}.gpkg", "report.html", "wells.html", "README.txt"} <= names
    assert {"rejected.csv", "manifest.json"} <= names
    assert {"rasters/heat_flow.tif", "rasters/heat_flow_std.tif", "rasters/status.tif"} <= names
    assert not [name for name in names if name.endswith(".part")]


def test_nothing_around_a_run_shows_in_its_delivery(plain, tmp_path):
    """Cores, folder, user, time zone, locale, hash seed, terminal, dates of the inputs."""
    basin, elsewhere, home = tmp_path / "basin", tmp_path / "else where", tmp_path / "home"
    elsewhere.mkdir()
    home.mkdir()
    config = write_basin(basin)
    for path in basin.glob("*.csv"):
        os.utime(path, (1e9, 1e9))
    snakemake(
        ROOT,
        elsewhere,
        *("--configfile", config, "--directory", tmp_path / "results here", "--cores", 2),
        HOME=str(home),
        USER="somebody",
        TZ="Pacific/Kiritimati",
        LANG="C",
        LC_ALL="C",
        PYTHONHASHSEED="12345",
        COLUMNS="40",
    )
    there = tmp_path / "results here" / "results" / RUN / "base" / "delivery"
    assert differing(plain, there) == []


def test_a_killed_run_resumes_to_the_same_bytes(plain, tmp_path):
    config = ("--configfile", write_basin(tmp_path).name, "--cores", 2)
    results = tmp_path / "results" / RUN / "base"
    with open(tmp_path / "said.txt", "w", encoding="utf-8") as said:
        run = subprocess.Popen(
            command(ROOT, *config),
            cwd=tmp_path,
            env=environment(ROOT),
            stdout=said,
            stderr=said,
            start_new_session=True,
        )
        _wait_for(results / "logs" / "krige_conductivity.log", run)
        os.killpg(run.pid, signal.SIGKILL)
        run.wait()
    assert not (results / "delivery" / "manifest.json").exists(), "killed too late"
    snakemake(ROOT, tmp_path, *config, "--unlock")
    snakemake(ROOT, tmp_path, *config)
    assert differing(plain, results / "delivery") == []


def test_a_delivery_names_no_place_and_no_person(plain):
    """Texts of the delivery hold no path of this machine, no user, no clock time."""
    home = os.path.expanduser("~")
    for name in ("report.html", "wells.html", "README.txt", "manifest.json", "rejected.csv"):
        text = (plain / name).read_text(encoding="utf-8")
        assert str(plain.parents[3]) not in text, name
        assert str(ROOT) not in text, name
        assert home == "/" or home == "/root" or home not in text, name
        assert not re.search(r"\b\d\d:\d\d:\d\d\b", text), name


def _wait_for(path, run):
    """Wait until a file is there, as long as the run lives."""
    deadline = time.monotonic() + 600
    while not path.exists():
        assert run.poll() is None, "the run ended before it came to kriging"
        assert time.monotonic() < deadline
        time.sleep(0.01)
