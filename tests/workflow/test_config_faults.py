"""Faults of the config: every one in a line of its own, before any job, without a traceback."""

import copy
import json
import os
import subprocess
import sys
from pathlib import Path

import pytest
import yaml

from basinheat.errors import UserError
from basinheat.settings.load import load_config, merged

ROOT = Path(__file__).parents[2]

GOOD = {
    "run": "faulty",
    "crs": "EPSG:32631",
    "inputs": {
        "wells": [
            {
                "file": "wells.csv",
                "crs": "EPSG:4326",
                "columns": {"well": "API", "x": "LONG", "y": "LAT", "ground_elevation": "GL_FT"},
                "units": {"ground_elevation": "ft"},
            }
        ],
        "readings": [
            {
                "file": "readings*.csv",
                "columns": {"well": "API", "depth": "DEPTH_FT", "temperature": "BHT_F"},
                "units": {"depth": "ft", "temperature": "degF"},
            }
        ],
    },
}
COMMAND = (sys.executable, "-m", "snakemake", "-s", str(ROOT / "Snakefile"), "--cores", "1")
WELLS, READINGS = ("inputs", "wells", 0), ("inputs", "readings", 0)

# Where in the config, what is put there, and what the line must say.
FAULTS = {
    "unknown section": (("corection",), {}, 'corection: unknown key; did you mean "correction"?'),
    "unknown key": (
        ("maps",), {"cellsize_m": 5}, 'maps.cellsize_m: unknown key; did you mean "cell_size_m"?',
    ),
    "unknown key of an input": (
        (*WELLS, "colums"), {}, 'inputs.wells[0].colums: unknown key; did you mean "columns"?',
    ),
    "missing key": (("run",), None, "run: is missing and has no default"),
    "not a method": (
        ("correction",),
        {"order": ["horned"]},
        'correction.order[0]: "horned" is not a method; did you mean "horner"?',
    ),
    "not a region": (
        ("correction",),
        {"region": "oklohoma"},
        'correction.region: "oklohoma" is not known; did you mean "oklahoma"?',
    ),
    "a variogram that is none": (
        ("kriging",), {"variogram": {"pinned": "wells.csv"}}, "kriging.variogram.pinned: wells.csv",
    ),
    "a word for a list": (
        ("correction",),
        {"order": "horner"},
        'correction.order: must be a list (got "horner"); write [horner]',
    ),
    "a file for a list": (
        ("inputs", "wells"),
        "wells.csv",
        'inputs.wells: must be a list (got "wells.csv"); write [{file: wells.csv}]',
    ),
    "an entry for a list": (
        ("inputs", "wells"), {"file": "wells.csv"}, "inputs.wells: must be a list (got {",
    ),
    "an empty list": (("correction",), {"order": []}, "correction.order: needs at least 1 entry"),
    "negative": (("maps",), {"cell_size_m": -500}, "maps.cell_size_m: must be positive (got -500)"),
    "a word for a number": (
        ("maps",),
        {"mask": {"max_distance_km": "far"}},
        'maps.mask.max_distance_km: must be a number (got "far")',
    ),
    "not a number": (
        ("gradient",), {"reference_depth_m": float("nan")}, "gradient.reference_depth_m: must be",
    ),
    "upside down": (
        ("maps",), {"extent": [2e5, 0, 1e5, 9]}, "maps.extent: west must be below east",
    ),
    "twice": (("maps",), {"depths_m": [500, 500.0]}, "maps.depths_m: each value once"),
    "deeper than the model": (
        ("maps",),
        {"depths_m": [9000]},
        "maps.deepest_m: must reach the deepest of depths_m",
    ),
    "no model of the surface": (
        ("surface_temperature",), {"std_k": 1}, "surface_temperature.model: is missing",
    ),
    "another model of the surface": (
        ("surface_temperature",),
        {"model": "liner"},
        'surface_temperature.model: "liner" is not known; did you mean "linear"?',
    ),
    "surface raster without a raster": (
        ("surface_temperature",),
        {"model": "raster"},
        "surface_temperature.model: raster needs inputs.rasters.surface_temperature",
    ),
    "surface column without a column": (
        ("surface_temperature",),
        {"model": "column"},
        "surface_temperature.model: column needs surface_temperature in inputs.wells[0].columns",
    ),
    "a name that is no name": (("run",), "../up", "such as my_wells_2026"),
    "a scenario's name": (
        ("scenarios",), {"No Good": {}}, "scenarios.No Good: must be small letters, digits",
    ),
    "a scenario called base": (("scenarios",), {"base": {}}, "scenarios.base: base is the config"),
    "a scenario over shared things": (
        ("scenarios",), {"a": {"maps": {}}}, "scenarios.a.maps: a scenario may change only",
    ),
    "a fault inside a scenario": (
        ("scenarios",),
        {"a": {"correction": {"order": ["dts"]}}},
        'scenarios.a.correction.order[0]: "dts" is not a method; did you mean "dst"?',
    ),
    "no such file": ((*WELLS, "file"), "well.csv", "inputs.wells[0].file: no file"),
    "a glob without files": ((*READINGS, "file"), "logs/*.csv", "inputs.readings[0].file: no file"),
    "no such raster": (
        ("inputs", "rasters"), {"elevation": "dem.tif"}, "inputs.rasters.elevation: no file",
    ),
    "no such polygon": (
        ("maps",), {"mask": {"polygon": "area.gpkg"}}, "maps.mask.polygon: no file",
    ),
    "no such variogram": (
        ("kriging",), {"variogram": {"pinned": "v.json"}}, "kriging.variogram.pinned: no file",
    ),
    "a header that is not there": (
        (*READINGS, "columns", "temperature"),
        "BHTF",
        'has no column "BHTF"; did you mean "BHT_F"?',
    ),
    "a column outside the contract": (
        (*READINGS, "columns", "depht"),
        "DEPTH_FT",
        'inputs.readings[0].columns.depht: no column of readings; did you mean "depth"?',
    ),
    "a required column": (
        READINGS,
        {"file": "readings.csv", "columns": {"well": "API", "depth": "DEPTH_FT"}},
        "inputs.readings[0].columns: temperature is missing (temperature as read)",
    ),
    "not a unit": (
        (*READINGS, "units", "depth"),
        "fete",
        'inputs.readings[0].units.depth: "fete" is not a unit',
    ),
    "a unit of something else": (
        (*READINGS, "units", "depth"),
        "degF",
        'inputs.readings[0].units.depth: "degF" is a unit of something else',
    ),
    "a unit of a name": (
        (*READINGS, "units", "well"), "m", "inputs.readings[0].units.well: well takes no unit",
    ),
    "a well that YAML takes for a number": (
        ("validation",), {"holdout": [42]}, "validation.holdout[0]: must be text, in quotes",
    ),
    "not a CRS": (("crs",), "EPSG:1", 'crs: "EPSG:1" is no coordinate reference system'),
    "degrees": (("crs",), "EPSG:4326", "crs: EPSG:4326 is WGS 84, which is not projected"),
    "feet": (("crs",), "EPSG:2277", "crs: EPSG:2277 counts in US survey foot"),
    "not a CRS of wells": ((*WELLS, "crs"), "wgs", 'inputs.wells[0].crs: "wgs" is no coordinate'),
}  # fmt: skip


@pytest.fixture
def folder(tmp_path):
    """Return a folder with the inputs of the good config."""
    (tmp_path / "wells.csv").write_text("API,LONG,LAT,GL_FT\nA,3.1,55,10\n", encoding="utf-8")
    (tmp_path / "readings.csv").write_text("API,DEPTH_FT,BHT_F\nA,3000,99\n", encoding="utf-8")
    return tmp_path


def changed(place, value):
    """Return the good config with one place changed, or taken out where the value is None."""
    config = copy.deepcopy(GOOD)
    here = config
    for step in place[:-1]:
        here = here[step]
    here[place[-1]] = value
    if value is None:
        del here[place[-1]]
    return config


def faults_of(config, folder):
    """Return heading and lines of the faults of a config."""
    with pytest.raises(UserError) as caught:
        load_config(config, "my/config.yaml", folder)
    return caught.value.heading, caught.value.faults


def test_the_config_is_good_before_it_is_changed(folder):
    assert load_config(GOOD, "my/config.yaml", folder)["base"].run == "faulty"


@pytest.mark.parametrize(("place", "value", "line"), FAULTS.values(), ids=FAULTS)
def test_a_fault_is_one_line(folder, place, value, line):
    heading, faults = faults_of(changed(place, value), folder)
    assert heading == "my/config.yaml is not valid:"
    assert len(faults) == 1, "one slip, one line"
    assert line in faults[0]
    assert "\n" not in faults[0]


def test_every_fault_of_a_pinned_variogram_is_a_line(folder):
    record = {"covariance": {"model": "bessel", "sill": -1.0, "range_m": 4e4, "nugget": 0.0}}
    (folder / "v.json").write_text(json.dumps(record), encoding="utf-8")
    _, faults = faults_of(changed(("kriging",), {"variogram": {"pinned": "v.json"}}), folder)
    assert len(faults) == 2
    assert all(line.startswith("kriging.variogram.pinned: v.json: ") for line in faults)
    assert '"bessel"' in faults[0] and "sill" in faults[1]


def test_all_faults_are_told_at_once(folder):
    config = copy.deepcopy(GOOD)
    wanted = []
    for name in ("unknown section", "negative", "degrees", "not a unit", "no such file"):
        place, value, line = FAULTS[name]
        *_, last = place
        here = config
        for step in place[:-1]:
            here = here[step]
        here[last] = merged(here.get(last), value)
        wanted.append(line)
    _, faults = faults_of(config, folder)
    assert all(any(line in fault for fault in faults) for line in wanted)
    assert len(faults) == len(wanted)


def run(folder, *arguments):
    """Run snakemake on the project from a folder, with the default profile."""
    profile = str(ROOT / "workflow" / "profiles" / "default")
    return subprocess.run(
        [*COMMAND, *arguments],
        cwd=folder,
        env={**os.environ, "SNAKEMAKE_PROFILE": profile},
        capture_output=True,
        text=True,
        timeout=120,
    )


def test_a_run_ends_before_it_begins(folder):
    config = merged(copy.deepcopy(GOOD), {"maps": {"cell_size_m": -1}, "sed": 1})
    (folder / "basin.yaml").write_text(yaml.safe_dump(config), encoding="utf-8")
    done = run(folder, "--configfile", "basin.yaml")
    assert done.returncode == 1
    assert (
        "basin.yaml is not valid:\n"
        "  maps.cell_size_m: must be positive (got -1)\n"
        '  sed: unknown key; did you mean "seed"?\n'
    ) in done.stderr
    assert "Traceback" not in done.stderr + done.stdout
    assert not (folder / "results").exists()


def test_a_setting_from_the_command_line_is_checked_too(tmp_path):
    done = run(tmp_path, "--config", "seed=many")
    assert done.returncode == 1
    assert 'seed: must be a whole number (got "many")' in done.stderr
    assert "Traceback" not in done.stderr + done.stdout
    assert not (tmp_path / "results").exists()


def test_yaml_that_cannot_be_read(folder):
    (folder / "basin.yaml").write_text("run: [x\ncrs: :\n", encoding="utf-8")
    done = run(folder, "--configfile", "basin.yaml")
    assert done.returncode == 1
    assert "not valid JSON or YAML" in done.stderr
    assert "Traceback" not in done.stderr + done.stdout
    assert not (folder / "results").exists()
