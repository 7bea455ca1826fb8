"""Faults of input tables that are told before any job: one line each, with the way out."""

import pytest

from basinheat.conductivity.catalogue import load
from basinheat.conductivity.mixtures import Vocabulary
from basinheat.settings.check_tables import rock_faults, table_faults
from basinheat.settings.files import input_tables
from basinheat.settings.inputs import HeatFlowFile, Inputs, LayersFile, ReadingsFile, WellsFile

READINGS = "well,depth,temperature,T_UNIT\nA,1000,40,C\n"
MODELS = {"wells": WellsFile, "readings": ReadingsFile, "heat_flow": HeatFlowFile}


def faults(folder, kind="readings", text=READINGS, file="t.csv", **spec):
    """Return the faults of one table with this text."""
    if text is not None:
        (folder / file).write_text(text, encoding="utf-8")
    return table_faults("in", kind, MODELS[kind](file=file, **spec), folder)


def test_a_good_table_has_none(tmp_path):
    spec = {"unit_columns": {"temperature": "T_UNIT"}, "zero_is_missing": ["temperature"]}
    assert faults(tmp_path, **spec) == []


FAULTY = {
    "a column of units for no column": (
        {"unit_columns": {"temprature": "T_UNIT"}},
        'in.unit_columns.temprature: no such column; did you mean "temperature"?',
    ),
    "a column of units for words": (
        {"unit_columns": {"date": "T_UNIT"}}, "in.unit_columns.date: date takes no unit",
    ),
    "a column of units that is not there": (
        {"unit_columns": {"temperature": "T_UNITS"}},
        'has no column "T_UNITS"; did you mean "T_UNIT"?',
    ),
    "zero in no column": ({"zero_is_missing": ["dept"]}, 'in.zero_is_missing: "dept"'),
    "zero in words": ({"zero_is_missing": ["kind"]}, 'in.zero_is_missing: "kind"'),
    "a delimiter": ({"delimiter": "::"}, 'in.file: '),
    "a header": (
        {"columns": {"well": "well", "depth": "Depth", "temperature": "temperature"}},
        'in.columns.depth: ',
    ),
    "a schema": (
        {"schema": "ihfc_heat_flow", "columns": {}}, "in.schema: ihfc_heat_flow is for inputs.heat",
    ),
}  # fmt: skip


@pytest.mark.parametrize("name", FAULTY)
def test_each_fault_is_told(tmp_path, name):
    spec, words = FAULTY[name]
    told = faults(tmp_path, **spec)
    assert any(words in line for line in told), told
    assert all("\n" not in line for line in told)


def test_all_faults_at_once(tmp_path):
    told = faults(
        tmp_path,
        columns={"well": "API", "depth": "D", "temperature": "temperature"},
        units={"depth": "degF"},
        unit_columns={"temperature": "U"},
        zero_is_missing=["well"],
    )
    places = sorted(line.split(": ")[0] for line in told)
    assert places == [
        "in.columns.depth", "in.columns.well", "in.unit_columns.temperature", "in.units.depth",
        "in.zero_is_missing",
    ]  # fmt: skip


def test_a_header_that_stands_there_twice(tmp_path):
    told = faults(tmp_path, text="well,depth,depth,temperature\nA,1,2,3\n")
    assert len(told) == 1 and '"depth" 2 times' in told[0]


@pytest.mark.parametrize("columns", [{}, {"well": "API", "depth": "D", "temperature": "T"}])
def test_lines_to_skip_are_asked_for_only_where_no_headers_are(tmp_path, columns):
    """A file tells its headers or that it has none, never both."""
    told = faults(tmp_path, text="a,b,c\n1,2,3\n", columns=columns)
    assert told and not any("skip_lines" in line for line in told)
    (only,) = faults(tmp_path, text="prose\n" * 60, columns=columns)
    assert only.startswith("in.skip_lines: ") and "headers in its first lines" in only


@pytest.mark.parametrize("count, more", [(12, ""), (13, " and 1 more")])
def test_up_to_twelve_headers_are_listed(tmp_path, count, more):
    names = [f"h{number}" for number in range(count)]
    text = ",".join(names) + "\n" + ",".join("1" * count) + "\n"
    told = faults(tmp_path, text=text)
    assert told and all('"h0", "h1", "h2"' in line and f'"h11"{more}; map' in line for line in told)
    assert not any('"h12"' in line for line in told)


def test_both_faults_of_units_are_told(tmp_path):
    told = faults(tmp_path, units={"temperature": "F", "depht": "ft", "depth": "feetz"})
    assert [line.split(": ")[0] for line in told] == ["in.units.depht", "in.units.depth"]


ROCKS = {
    "an unknown rock": ({}, "lime", 'in.tops.Old Lime: "lime" is not in the catalogue; the near'),
    "a rock of the config": ({"lithologies": {"lime": "limestone"}}, "lime", ""),
    "a formation": ({"formations": {"Lime": {"limestone": 90, "shale": 10}}}, "lime", ""),
    "a mixture": ({}, "sandstone 60 shale 40", ""),
    "a mixture without shares": ({}, "sandstone/shale", "states no percentages"),
}


@pytest.mark.parametrize("name", ROCKS)
def test_rocks_of_wide_files_are_known_before_any_job(name):
    settings, rock, words = ROCKS[name]
    vocabulary = Vocabulary(load(), settings.get("lithologies", {}), settings.get("formations", {}))
    wide = LayersFile(file="t.csv", shape="wide", tops={"Old Lime": rock, "Sand": "sandstone"})
    told = rock_faults("in", wide, vocabulary)
    assert len(told) == bool(words) and all(words in line for line in told)
    rows = LayersFile(file="t.csv", columns={"lithology": "lime"})
    assert rock_faults("in", rows, vocabulary) == [], "rows are for the ledger"


def test_headers_that_are_not_found(tmp_path):
    told = faults(tmp_path, text="prose\n" * 60 + READINGS)
    assert any("in.skip_lines" in line for line in told)
    assert faults(tmp_path, text="prose\n" * 60 + READINGS, skip_lines=60) == []


@pytest.mark.parametrize("kind", ["wells", "readings"])
def test_files_without_rows(tmp_path, kind):
    head = {"wells": "well,x,y\n", "readings": "well,depth,temperature\n"}[kind]
    (told,) = faults(tmp_path, kind, head)
    assert "no rows" in told
    (tmp_path / "a.csv").write_text(head + "A,1,2\n", encoding="utf-8")
    assert faults(tmp_path, kind, None, "*.csv") == [], "of several files some may be empty"


def test_tables_of_heat_flow(tmp_path):
    head = "well,x,y,heat_flow\nA,1,2,65\n"
    assert faults(tmp_path, "heat_flow", head) == []
    told = faults(tmp_path, "heat_flow", head, units={"heat_flow": "K/km"})
    assert told == ['in.units.heat_flow: "K/km" is a unit of something else; choose one of mW/m2']


def test_the_parts_of_a_shapefile_are_inputs(tmp_path):
    for name in ("w.shp", "w.dbf", "w.prj", "w.xml", "r.csv"):
        (tmp_path / name).write_bytes(b"")
    inputs = Inputs(wells=[{"file": "w.shp"}], readings=[{"file": "r.csv"}])
    found = [path.rpartition("/")[2] for path in input_tables(inputs, tmp_path)]
    assert found == ["r.csv", "w.dbf", "w.prj", "w.shp"]
