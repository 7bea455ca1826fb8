"""Ready-made column lists against the standards' own headers, and tables that follow them.

Sources: the field names of the borehole temperature content model (AASG, US geoscience information
network) and the Global Heat Flow Database of the IHFC, release 2024 (doi 10.5880/fidgeo.2024.014,
CC BY 4.0), both as they lie in the shared folder.
"""

import pandas as pd
import pytest
from shared import shared_file

from basinheat.readers import read_inputs
from basinheat.settings.check_tables import table_faults
from basinheat.settings.columns import INPUT_COLUMNS
from basinheat.settings.inputs import HeatFlowFile, ReadingsFile, TableFile, WellsFile
from basinheat.settings.schemas import SCHEMAS, column_list
from basinheat.units import named

NGDS, IHFC = "ngds_borehole_temperature", "ihfc_heat_flow"


def fields():
    text = shared_file("data", "ngds_schema", "aasg_borehole_temperature_fields.txt").read_text()
    return text.split()


def names_of(ready):
    own = [*ready.columns.values(), *ready.unit_columns.values()]
    return {*own, ready.crs_column} - {""}


def test_every_header_of_the_ngds_list_is_one_of_the_model():
    for ready in SCHEMAS[NGDS].values():
        assert names_of(ready) <= set(fields())


@pytest.mark.parametrize("part", ["germany", "australia"])
def test_every_header_of_the_ihfc_list_is_one_of_the_release(part):
    path = shared_file("data", "ghfdb_2024", f"subset_{part}.csv")
    present = set(pd.read_csv(path, nrows=0).columns)
    assert names_of(column_list(TableFile(file="", schema=IHFC), "heat_flow")) <= present


@pytest.mark.parametrize(("name", "kind"), [(n, k) for n, kinds in SCHEMAS.items() for k in kinds])
def test_ready_made_lists_keep_the_contract(name, kind):
    ready, contract = SCHEMAS[name][kind], INPUT_COLUMNS[kind]
    required = {column for column, what in contract.items() if what.required}
    assert required <= set(ready.columns) <= set(contract)
    assert set(ready.unit_columns) <= set(ready.columns)
    for column, unit in ready.units.items():
        assert named(unit, contract[column].unit)


# Rows invented in the form of the model; what stands for missing as the collection's note has it.
ROWS = {
    "APINo": ["15009000010000", "15009000020000", "15009000030000"],
    "LatDegree": ["38.5", "38.6", "nil:missing"],
    "LongDegree": ["-98.7", "-98.8", "-98.9"],
    "SRS": ["EPSG:4267", "", "WGS 84"],
    "ElevationGL": ["1800", "550", "nil:missing"],
    "DrillerTotalDepth": ["3500", "1100", "3400"],
    "LengthUnits": ["ft", "m", "Feet"],
    "DepthOfMeasurement": ["3490", "1090", "3390"],
    "MeasuredTemperature": ["113", "45", "nil:missing"],
    "TemperatureUnits": ["F", "C", "F"],
    "CorrectedTemperature": ["", "", ""],
    "BitDiameterTD": ["7.875", "20.0", "7.875"],
    "DiameterUnits": ["", "cm", "in"],
    "TimeSinceCirculation": ["nil:missing", "6", "0"],
}


@pytest.fixture
def ngds(tmp_path):
    lines = [",".join(name for name in fields() if name in ROWS)]
    order = lines[0].split(",")
    lines += [",".join(ROWS[name][i] for name in order) for i in range(3)]
    (tmp_path / "bht.csv").write_text("\n".join(lines) + "\n", encoding="utf-8-sig")
    return tmp_path


def test_a_table_of_the_model_needs_one_line(ngds):
    """113 F = 45 degC, 1 ft = 0.3048 m, 7.875 in = 0.200025 m: by definition."""
    assert table_faults("w", "wells", WellsFile(file="bht.csv", schema=NGDS), ngds) == []
    assert table_faults("r", "readings", ReadingsFile(file="bht.csv", schema=NGDS), ngds) == []
    wells = read_inputs("wells", [WellsFile(file="bht.csv", schema=NGDS)], ngds).frame
    assert wells["well"].tolist() == ROWS["APINo"]
    assert wells["crs_word"].tolist() == ["EPSG:4267", "EPSG:4326", "WGS 84"]
    assert wells["total_depth"].tolist() == pytest.approx([1066.8, 1100.0, 1036.32])
    assert wells["ground_elevation"].tolist()[:2] == pytest.approx([548.64, 550.0])
    assert wells["y"].isna().tolist() == [False, False, True]
    assert not wells["wrong:y"].any()
    readings = read_inputs("readings", [ReadingsFile(file="bht.csv", schema=NGDS)], ngds).frame
    assert readings["temperature"].tolist()[:2] == pytest.approx([45.0, 45.0])
    assert readings["depth"].tolist() == pytest.approx([1063.752, 1090.0, 1033.272])
    assert readings["hole_diameter"].tolist() == pytest.approx([0.200025, 0.2, 0.200025])
    assert readings["since_circulation"].isna().tolist() == [True, False, True]


def test_what_the_config_states_beside_a_schema_wins(ngds):
    spec = ReadingsFile(
        file="bht.csv",
        schema=NGDS,
        columns={"temperature": "CorrectedTemperature"},
        units={"depth": "km"},
        missing=["1090"],
    )
    frame = read_inputs("readings", [spec], ngds).frame
    assert frame["temperature"].isna().all()
    assert frame["depth"].tolist()[0] == 3_490_000.0
    assert frame["depth"].isna().tolist() == [False, True, False]
    stated = WellsFile(file="bht.csv", schema=NGDS, crs="EPSG:4269")
    assert "crs_word" not in read_inputs("wells", [stated], ngds).frame


def test_a_table_that_lacks_what_the_schema_requires(ngds):
    path = ngds / "bht.csv"
    text = path.read_text("utf-8-sig")
    path.write_text(text.replace("MeasuredTemperature", "Temp").replace("BitDiameterTD", "Bit"))
    faults = table_faults("r", "readings", ReadingsFile(file="bht.csv", schema=NGDS), ngds)
    assert len(faults) == 1 and "MeasuredTemperature" in faults[0]
    faults = table_faults("l", "layers", TableFile(file="bht.csv", schema=NGDS), ngds)
    assert "l.schema: ngds_borehole_temperature is for inputs.wells and inputs.readings" in faults


@pytest.mark.parametrize("part", ["germany", "australia"])
def test_heat_flow_of_the_release(part):
    """pandas reads the same file: q, and how many of the optional cells hold numbers."""
    path = shared_file("data", "ghfdb_2024", f"subset_{part}.csv")
    spec = HeatFlowFile(file=str(path), schema=IHFC)
    assert table_faults("h", "heat_flow", spec, path.parent) == []
    table = read_inputs("heat_flow", [spec], path.parent)
    raw = pd.read_csv(path, dtype=str, keep_default_na=False)
    assert len(table) + len(table.broken) == len(raw)
    frame = table.frame
    for name, header in (("heat_flow", "q"), ("gradient", "T_grad_mean"), ("x", "long_EW")):
        expected = pd.to_numeric(raw[header], errors="coerce").to_numpy()
        assert frame[name].to_numpy() == pytest.approx(expected, nan_ok=True)
        assert not frame[f"wrong:{name}"].any(), "every other word means missing"
    assert (frame["crs_word"] == "EPSG:4326").all()
    told = {note["value"] for note in table.notes if note["what"] == "missing"}
    assert any(word.lower() == "[unspecified]" for word in told)
