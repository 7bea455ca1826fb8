"""Bad input files: one-line errors that name file, place and way out, or ledger rows and a map."""

import subprocess
from dataclasses import dataclass, field

import numpy as np
import pandas as pd
import pytest
import yaml
from ingest_case import READINGS, SURFACE, WELLS, degc, ordinary_readings, ordinary_wells
from runs import ROOT, command, environment

from basinheat import corrections, grid, heatflow, ingest, products, structure, surface
from basinheat.errors import UserError
from basinheat.interpolation import krige_heat_flow
from basinheat.rock import resistances
from basinheat.settings.load import load_config

GOOD_WELLS, GOOD_READINGS = WELLS + ordinary_wells(), READINGS + ordinary_readings()
LAYERS = "well,top,base,lithology,conductivity\n"
GOOD_LAYERS = LAYERS + "".join(f"N{i:02d},5,3005,shale,\n" for i in range(16))
SURVEYS = "well,depth,inclination,azimuth\n"
DECISIONS = "well,reading,action,column,value,reason,initials,date\n"
HTML = "<!DOCTYPE html><html><body>404 Not Found</body></html>\n"
HOSTILE = ("<script>alert(1)</script>", "../../etc/passwd", "N" * 10_000)


@dataclass
class Mapped:
    """What the stages made of the files."""

    wells: pd.DataFrame
    rejected: pd.DataFrame
    maps: pd.DataFrame
    codes: dict = field(init=False)

    def __post_init__(self):
        self.codes = self.rejected.groupby(["table", "code"]).size().to_dict()


def write(folder, files):
    """Write the files beside the good ones and return the config that names them."""
    files = {"wells": GOOD_WELLS, "readings": GOOD_READINGS} | files
    inputs = {}
    for name, text in files.items():
        data = text if isinstance(text, bytes) else text.encode()
        (folder / f"{name}.csv").write_bytes(data)
        inputs[name] = f"{name}.csv" if name == "decisions" else [{"file": f"{name}.csv"}]
    return {
        "run": "bad",
        "crs": "EPSG:32631",
        "inputs": inputs,
        "surface_temperature": {"model": "constant", "temperature_degc": SURFACE, "std_k": 1.5},
        "maps": {"cell_size_m": 10_000, "depths_m": [2000], "isotherms_degc": []},
    }


def mapped(folder, files):
    """Take the files through every stage that makes the maps, as the rules do."""
    settings = load_config(write(folder, files), "bad.yaml", folder)["base"]
    rock = settings.conductivity
    prepared = ingest.prepare(settings, folder)
    wells = surface.at_wells(prepared.wells, settings.surface_temperature, None, settings.crs)
    corrected = corrections.correct(prepared.readings, wells, settings.correction, (), 0.7)
    rocks = resistances.estimate(
        corrected.estimates, wells, prepared.layers, rock, settings.heat_flow
    )
    sources = pd.concat([corrected.sources, rocks.sources], ignore_index=True)
    fit = heatflow.fit(corrected.estimates, rocks.resistances, sources, wells, ("matern15",), 0.7)
    _, cells = grid.define(wells, prepared.readings, settings)
    flow = krige_heat_flow(
        fit.map_points, fit.source_information, fit.variogram, cells, "global", "none"
    )
    fitted = structure.fit_structure(rocks.structure, rock.wells_per_interval, ("matern15",))
    columns = structure.krige_conductivity(
        rocks.structure,
        fitted,
        cells,
        rock.interval_m,
        settings.maps.deepest_m,
        rock.wells_per_interval,
        rock.below_layers,
    )
    maps = products.derive(
        cells,
        flow,
        columns,
        fit.sources,
        fit.source_covariance,
        fitted["vertical_correlation_m"],
        settings.maps.depths_m,
        settings.maps.isotherms_degc,
        settings.gradient.reference_depth_m,
    )
    rejected = pd.concat([prepared.rejected, corrected.rejected, rocks.rejected])
    return Mapped(prepared.wells, rejected, maps)


def readings(row):
    """Return a file of readings made row by row from the number of the well."""
    return READINGS + "".join(row(i) + "\n" for i in range(16))


def wells(row):
    """Return a file of wells made row by row from the number of the well."""
    return WELLS + "".join(row(i) + "\n" for i in range(16))


NO_MAP = "rejected.csv in the folder wells of the results says"
# The files, and what the error must say: which file or key, what is wrong, the way out.
ERRORS = {
    "an empty file": ({"wells": ""}, ["wells.csv: line 1 holds no headers", "skip_lines"]),
    "blank lines only": ({"readings": "\n\n"}, ["readings.csv: line 1 holds no headers"]),
    "wells: headers only": (
        {"wells": WELLS}, ["inputs.wells[0].file:", "wells.csv has headers and no rows"],
    ),
    "readings: headers only": (
        {"readings": READINGS},
        ["inputs.readings[0].file:", "readings.csv has headers and no rows"],
    ),
    "a delimiter that must be stated": (
        {"wells": GOOD_WELLS.replace(",", "^")},
        ["inputs.wells[0].skip_lines:", "wells.csv", "well^x^y", "delimiter"],
    ),
    "a web page": (
        {"wells": HTML}, ["inputs.wells[0].file:", "wells.csv: is a web page", "as CSV"],
    ),
    "a workbook named as text": (
        {"readings": b"PK\x03\x04" + bytes(range(256))},
        ["inputs.readings[0].file:", "readings.csv: is no text table", "Excel", ".xlsx"],
    ),
    "no text at all": (
        {"readings": bytes(range(256))}, ["inputs.readings[0].file:", "readings.csv", "binary"],
    ),
    "a header twice": (
        {"readings": GOOD_READINGS.replace("log_run", "depth", 1)},
        ["inputs.readings[0].columns.depth:", 'readings.csv has "depth" 2 times', "rename"],
    ),
    "all temperatures missing": (
        {"readings": readings(lambda i: f"N{i:02d},2000,-999.25,,,,,,")},
        ["usable temperature: 0", NO_MAP],
    ),
    "all depths zero": (
        {"readings": readings(lambda i: f"N{i:02d},0,70,,,,,,")}, ["usable temperature: 0", NO_MAP],
    ),
    "readings of unknown wells only": (
        {"readings": readings(lambda i: f"X{i:02d},2000,70,,,,,,")},
        ["usable temperature: 0", NO_MAP],
    ),
    "unknown kinds only": (
        {"readings": readings(lambda i: f"N{i:02d},2000,70,wireline,,,,,")},
        ["usable temperature: 0", NO_MAP],
    ),
    "one well": (
        {"wells": WELLS + ordinary_wells(1), "readings": READINGS + ordinary_readings(1)},
        ["usable temperature: 1", "needs 5"],
    ),
    "four wells": (
        {"wells": WELLS + ordinary_wells(4), "readings": READINGS + ordinary_readings(4)},
        ["usable temperature: 4", "needs 5"],
    ),
    "all wells at one place": (
        {"wells": wells(lambda i: f"N{i:02d},500000,6000000,100,105,,3005")},
        ["all 16 wells lie at one place", "inputs.wells"],
    ),
    "text in all coordinates": (
        {"wells": wells(lambda i: f"N{i:02d},east,north,100,105,,3005")},
        ["no well is left to map", NO_MAP],
    ),
    "negative water depth everywhere": (
        {"wells": GOOD_WELLS.replace("100,105,,", "100,105,-120,")},
        ["no well is left to map", NO_MAP],
    ),
    "rocks that nobody knows": (
        {"layers": GOOD_LAYERS.replace("shale", "unobtainium")},
        ['"unobtainium" is not in the catalogue', "conductivity.lithologies"],
    ),
    "decisions without headers": ({"decisions": ""}, ["decisions.csv: line 1 holds no headers"]),
}  # fmt: skip


@pytest.mark.parametrize(("files", "said"), ERRORS.values(), ids=ERRORS)
def test_an_error_names_the_place_and_the_way_out(tmp_path, files, said):
    with pytest.raises(UserError) as caught:
        mapped(tmp_path, files)
    text = str(caught.value)
    assert [part for part in said if part not in text] == []
    assert all("\n" not in fault for fault in caught.value.faults)


def renamed(text):
    """Return the text with three wells' names made hostile."""
    for old, new in zip(("N03", "N04", "N05"), HOSTILE, strict=True):
        text = text.replace(old, new)
    return text


# The files, wells that remain, and all rows of the ledger.
LEDGERS = {
    "nothing bad": ({}, 16, {}),
    "another delimiter": ({"wells": GOOD_WELLS.replace(",", ";")}, 16, {}),
    "UTF-16": ({"wells": GOOD_WELLS.encode("utf-16")}, 16, {}),
    "lines that end as on old machines": ({"readings": GOOD_READINGS.replace("\n", "\r")}, 16, {}),
    "text in a coordinate": (
        {"wells": GOOD_WELLS.replace("N03,530000", "N03,east")},
        15,
        {("wells", "not_a_number"): 1, ("readings", "well_rejected"): 1},
    ),
    "a well a million metres off": (
        {"wells": GOOD_WELLS.replace("N03,530000", "N03,1530000")},
        15,
        {("wells", "coordinates_suspect"): 1, ("readings", "well_rejected"): 1},
    ),
    "numbers beyond all bounds": (
        {
            "wells": GOOD_WELLS + "X,1e308,1e308,,,,\n",
            "readings": GOOD_READINGS + "N00,1e308,70,,,,,,\nN00,2000,1e308,,,,,,\n",
        },
        16,
        {
            ("wells", "coordinates_impossible"): 1,
            ("readings", "depth_impossible"): 1,
            ("readings", "temperature_impossible"): 1,
        },
    ),
    "an unknown kind": (
        {"readings": GOOD_READINGS + "N00,1500,55,wireline?,,,,,\n"},
        16,
        {("readings", "unknown_kind"): 1},
    ),
    "negative water depth": (
        {"wells": GOOD_WELLS.replace("6000000,100,105,,3005\nN04", "6000000,,25,-90,3005\nN04")},
        15,
        {("wells", "water_depth_negative"): 1, ("readings", "well_rejected"): 1},
    ),
    "a quote that never closes": (
        {"wells": GOOD_WELLS.replace("N03,", '"N03,')},
        15,
        {("wells", "unclosed_quote"): 1, ("readings", "unknown_well"): 1},
    ),
    "lines cut short": (
        {"readings": GOOD_READINGS + "N00,2000\nN01\n"},
        16,
        {("readings", "wrong_number_of_cells"): 2},
    ),
    "hostile names": (
        {"wells": renamed(GOOD_WELLS), "readings": renamed(GOOD_READINGS)}, 16, {},
    ),
    "decisions that match nothing": (
        {
            "decisions": DECISIONS
            + "NOBODY,,reject,,,no core,AB,2026-01-01\nN00,,explode,,,bored,AB,2026-01-01\n"
        },
        16,
        {("decisions", "decision_without_effect"): 1, ("decisions", "decision_invalid"): 1},
    ),
    "layers over each other": (
        {"layers": GOOD_LAYERS + "N00,1000,3500,limestone,\n"},
        16,
        {("layers", "layer_overlap"): 1},
    ),
    "layers upside down": (
        {"layers": GOOD_LAYERS.replace("N02,5,3005", "N02,3005,5")},
        16,
        {("layers", "no_thickness"): 1},
    ),
    "a survey that points to the sky": (
        {"surveys": SURVEYS + "N00,0,0,0\nN00,1000,200,0\nN00,3000,10,0\n"},
        16,
        {("surveys", "inclination_impossible"): 1},
    ),
    "the same temperature everywhere": (
        {"readings": readings(lambda i: f"N{i:02d},2005,{degc(2005):.1f},,,,,,")}, 16, {},
    ),
}  # fmt: skip


@pytest.mark.parametrize(("files", "remain", "ledger"), LEDGERS.values(), ids=LEDGERS)
def test_a_bad_record_costs_itself_and_there_is_a_map(tmp_path, files, remain, ledger):
    out = mapped(tmp_path, files)
    assert len(out.wells) == remain
    assert out.codes == ledger
    assert out.rejected["sentence"].str.len().gt(15).all()
    assert (out.rejected["source_line"] > 1).all()
    # Readings of 67 to 73 degC at 2 km, which mud has cooled by some 3 to 30 K (common practice).
    at_2000 = out.maps["temperature_2000m"]
    assert len(at_2000) > 50
    assert at_2000.between(67.0 + 3.0, 73.0 + 30.0).all()
    assert np.isfinite(out.maps["heat_flow_std"]).all()


def run(folder, files):
    """Run the whole workflow on the files."""
    config = write(folder, files)
    (folder / "bad.yaml").write_text(yaml.safe_dump(config), encoding="utf-8")
    return subprocess.run(
        command(ROOT, "--configfile", "bad.yaml", "--cores", 2),
        cwd=folder,
        env=environment(ROOT),
        capture_output=True,
        text=True,
        timeout=300,
    )


def test_a_fault_of_a_whole_file_ends_the_run_before_it_begins(tmp_path):
    done = run(tmp_path, {"wells": HTML})
    assert done.returncode == 1
    assert "bad.yaml is not valid:\n  inputs.wells[0].file: " in done.stderr
    assert "wells.csv: is a web page" in done.stderr
    assert "Traceback" not in done.stdout + done.stderr
    assert not (tmp_path / "results").exists()


@pytest.mark.parametrize("name", ["readings of unknown wells only", "all temperatures missing"])
def test_files_of_which_nothing_is_left_end_in_one_line(tmp_path, name):
    files, _ = ERRORS[name]
    done = run(tmp_path, files)
    assert done.returncode == 1
    assert any(NO_MAP in line for line in done.stderr.splitlines())
    assert "Traceback" not in done.stdout + done.stderr
    ledger = pd.read_csv(tmp_path / "results/bad/wells/rejected.csv")
    assert len(ledger) == 16
    assert not (tmp_path / "results/bad/base/delivery").exists()


def test_hostile_names_go_through_to_the_delivery_as_text(tmp_path):
    # far too hot, so that the report must name the wells
    files, _, _ = LEDGERS["hostile names"]
    hot = "".join(f"{name},2505,990,,,,,,\n" for name in HOSTILE)
    done = run(tmp_path, files | {"readings": files["readings"] + hot})
    assert done.returncode == 0, done.stdout + done.stderr
    delivery = tmp_path / "results/bad/base/delivery"
    report = (delivery / "report.html").read_text(encoding="utf-8")
    assert HOSTILE[0] not in report
    assert sorted(path.name for path in tmp_path.iterdir() if path.name[0] != ".") == [
        "bad.yaml", "readings.csv", "results", "wells.csv",
    ]  # fmt: skip
    refused = pd.read_csv(delivery / "rejected.csv")
    assert set(refused["well"]) == set(HOSTILE)
