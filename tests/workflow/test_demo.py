"""The committed demo, mapped and held against what is known of it."""

import csv
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pytest
import rasterio
import yaml
from runs import ROOT, snakemake

from basinheat import tables
from basinheat.synthetic import DEMO_SEED, make_basin

DEMO = ROOT / "config" / "demo"
CELL_M = 4_000
# The rock model's intervals are 250 m: between neighbouring slices temperature is a straight line.
DEPTHS_M = (1000, 2000, 2750, 3000, 3250)
NORMAL_90 = 1.6449

# What the dirt is must be told by this code, in the ledger or as a flag of the record.
TOLD = {
    "approximate_number": "approximate",
    "base_above_top": "no_thickness",
    "below_surface_temperature": "not_above_surface_temperature",
    "blank_coordinate": "no_coordinates",
    "blank_temperature": "no_temperature",
    "celsius_in_fahrenheit_column": "temperature_unit_suspect",
    "copied_reading": "copied_temperature",
    "deeper_than_total_depth": "deeper_than_total_depth",
    "duplicate_row": "merged",
    "longitude_latitude_swapped": "coordinates_suspect",
    "metres_in_feet_column": "depth_unit_suspect",
    "missing_code": "no_temperature",
    "missing_datum": "rig_floor_assumed",
    "missing_word": "no_temperature",
    "negative_depth": "depth_negative",
    "text_in_number": "ground_elevation_dropped",
    "too_hot": "temperature_impossible",
    "unknown_lithology": "lithology_unknown",
    "unknown_well": "unknown_well",
    "well_twice_far": "well_location_conflict",
    "well_twice_nearby": "merged",
}
# A copy that recovery and rounding explain as well stays, flagged.
MAY_BE_SOUND = {"copied_reading": "same_temperature"}
# Whole degrees and equal depths: two runs of one set may read the same by chance, and the rule for
# copied readings (the earliest counts) can't know.
BY_CHANCE = "copied_temperature"


@dataclass
class Demo:
    """The demo's results, and what is true."""

    results: Path
    basin: object

    def table(self, contract, name):
        """Return a table of the run."""
        return contract.load(self.results / name)

    def raster(self, name, scenario="base"):
        """Return the cells of a delivered raster, rows from the north."""
        with rasterio.open(self.results / scenario / f"delivery/rasters/{name}.tif") as raster:
            return raster.read(1)

    def places(self):
        """Return easting and northing of all cells' centres, as the GeoTIFF states them."""
        with rasterio.open(self.results / "base/delivery/rasters/heat_flow.tif") as raster:
            cols, rows = np.meshgrid(np.arange(raster.width), np.arange(raster.height))
            return [v.ravel() for v in rasterio.transform.xy(raster.transform, rows, cols)]


@pytest.fixture(scope="module")
def demo(tmp_path_factory):
    """Return a run of the committed config: coarser cells, more slices, one scenario more."""
    folder = tmp_path_factory.mktemp("demo")
    config = yaml.safe_load((ROOT / "config/config.yaml").read_text(encoding="utf-8"))
    for kind in ("wells", "readings", "layers", "surveys"):
        for entry in config["inputs"][kind]:
            entry["file"] = str(ROOT / "config" / entry["file"])
    rasters = config["inputs"]["rasters"]
    config["inputs"]["rasters"] = {k: str(ROOT / "config" / v) for k, v in rasters.items()}
    config["maps"] |= {"cell_size_m": CELL_M, "depths_m": list(DEPTHS_M)}
    config["scenarios"] = {"harrison_only": {"correction": {"order": ["harrison1983"]}}}
    (folder / "demo.yaml").write_text(yaml.safe_dump(config), encoding="utf-8")
    snakemake(ROOT, folder, "--configfile", "demo.yaml", "--cores", 2)
    return Demo(folder / "results" / config["run"], make_basin(DEMO_SEED))


def rows(name):
    """Return the records of a file of the demo, read by Python's own reader."""
    with (DEMO / f"{name}.csv").open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


def ledger(demo):
    """Return the delivered ledger."""
    with (demo.results / "base/delivery/rejected.csv").open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


def kept_flags(demo):
    """Return the flags of every kept well and reading, by file and line."""
    out = {}
    for name, contract in (("wells", tables.Wells), ("readings", tables.Readings)):
        frame = demo.table(contract, f"wells/{name}.parquet")
        for line, flags in zip(frame["source_line"], frame["flags"], strict=True):
            out[name, line] = set(flags.split(";"))
    return out


def codes_of(demo, dirt):
    """Return what is told of a spoiled row, and what of it is still in use (None: nothing)."""
    table, line = dirt["table"], int(dirt["line"])
    here = [r for r in ledger(demo) if r["source_file"].endswith(f"{table}.csv")]
    told = {r["code"] for r in here if int(r["source_line"]) == line}
    # of two rows of one well either may be the one that goes; layers have no line of their own
    if table == "wells" or dirt["code"] == "unknown_lithology":
        told |= {
            r["code"] for r in ledger(demo) if r["table"] == table and r["well"] == dirt["well"]
        }
    return told, kept_flags(demo).get((table, line))


def test_every_spoiled_row_is_recognised(demo):
    missed = []
    for dirt in rows("dirt"):
        told, flags = codes_of(demo, dirt)
        code, expected = dirt["code"], dirt["expected"]
        wanted = TOLD.get(code)
        if expected == "kept":
            good = flags is not None or BY_CHANCE in told
            good = good and (wanted is None or wanted in told)
        elif expected == "noticed":
            good = bool({wanted, MAY_BE_SOUND.get(code)} & (told | (flags or set())))
        else:
            good = wanted in told and (flags is None or dirt["table"] == "wells")
        if not good:
            missed.append((code, dirt["table"], dirt["line"], told, flags))
    assert not missed
    assert {dirt["expected"] for dirt in rows("dirt")} == {"rejected", "merged", "noticed", "kept"}


def test_clean_rows_are_not_refused(demo):
    spoiled = {(dirt["table"], dirt["line"]) for dirt in rows("dirt")}
    follow = {"well_rejected", BY_CHANCE, "merged", "well_location_conflict", "lithology_unknown"}
    clean = [
        row
        for row in ledger(demo)
        if (row["table"], row["source_line"]) not in spoiled
        and row["table"] in ("wells", "readings", "layers")
        and row["code"] not in follow
    ]
    assert not clean


def test_every_row_is_kept_merged_or_refused(demo):
    prepared = demo.table(tables.Rejected, "wells/rejected.parquet")
    for name, contract in (
        ("wells", tables.Wells),
        ("readings", tables.Readings),
        ("layers", tables.Layers),
    ):
        kept = len(demo.table(contract, f"wells/{name}.parquet"))
        assert len(rows(name)) == kept + (prepared["table"] == name).sum(), name


def test_the_awkward_name_arrives_as_it_is(demo):
    (name,) = (dirt["well"] for dirt in rows("dirt") if dirt["code"] == "awkward_name")
    flow = demo.table(tables.HeatFlow, "base/tables/heat_flow.parquet")
    assert name in set(flow["well"])
    for page in ("report.html", "wells.html"):
        assert "<b>ST1</b>" not in (demo.results / "base/delivery" / page).read_text("utf-8")


def test_columns_of_wells_pass_through_their_closure(demo):
    """Between edges temperature is straight: the column at a reading is what closure says."""
    columns = demo.table(tables.WellColumns, "base/tables/crossval/columns.parquet")
    closure = demo.table(tables.Closure, "base/tables/crossval/temperature.parquet")
    assert set(columns["well"]) == set(closure["well"])
    by_well = dict(list(columns.groupby("well")))
    for row in closure.itertuples():
        column = by_well[row.well]
        assert column["depth_m"].iloc[0] == 0.0
        for name in ("rebuilt_degc", "predicted_degc"):
            there = np.interp(row.depth_m, column["depth_m"], column[name])
            assert there == pytest.approx(getattr(row, name), abs=1e-6)
    assert (columns[["rebuilt_std_k", "predicted_std_k"]] > 0).all().all()


def truth(demo, name, east, north):
    """Return a true map at places."""
    of = demo.basin.truth
    if name == "heat_flow":
        return of.heat_flow_mw_m2(east, north)
    if name == "gradient":
        return of.gradient_k_km(east, north, 2000.0)
    if name.startswith("isotherm"):
        return of.isotherm_depth_m(east, north, float(name.split("_")[1][:-1]))
    return of.temperature_degc(east, north, float(name.split("_")[1][:-1]))[:, 0]


MAPS = ["heat_flow", "gradient", *[f"temperature_{z}m" for z in DEPTHS_M]]
ISOTHERMS = ["isotherm_100c", "isotherm_150c"]


@pytest.mark.parametrize("name", MAPS + ISOTHERMS)
def test_the_truth_lies_in_the_stated_interval(demo, name):
    # One basin whose errors are partly common to all cells: 90 % holds over many basins only.
    # 80 to 97 % is what the demo's one draw may give (over ten draws the mean is judged).
    value, std = demo.raster(name).ravel(), demo.raster(f"{name}_std").ravel()
    true = truth(demo, name, *demo.places())
    known = np.isfinite(value) & np.isfinite(true)
    z = (value - true)[known] / std[known]
    assert known.sum() > 1000
    assert 0.80 <= (np.abs(z) < NORMAL_90).mean() <= 0.97


@pytest.mark.parametrize("name", MAPS)
def test_the_bias_is_no_larger_than_what_is_shared(demo, name):
    # Errors of single wells average out over the map, shared ones do not: two of their sigma.
    # What cells share can't be more than the sigma of the best-known cell.
    value = demo.raster(name).ravel()
    known = np.isfinite(value)
    bias = (value - truth(demo, name, *demo.places()))[known].mean()
    shared = np.nanmin(demo.raster(f"{name}_std"))
    if name == "heat_flow":
        flow = demo.table(tables.HeatFlow, "base/tables/heat_flow.parquet")
        shared = flow["heat_flow_shared_std_mw_m2"].median()
    assert abs(bias) <= 2.0 * shared


def test_slices_never_cross(demo):
    for scenario in ("base", "harrison_only"):
        slices = np.array([demo.raster(f"temperature_{z}m", scenario) for z in DEPTHS_M])
        known = np.isfinite(slices).all(axis=0)
        assert known.sum() > 1000
        assert (np.diff(slices[:, known], axis=0) > 0.0).all()


def test_isotherms_and_slices_agree(demo):
    depth = demo.raster("isotherm_100c")
    for top, base in ((2750, 3000), (3000, 3250)):
        inside = (depth >= top) & (depth <= base)
        share = (depth[inside] - top) / (base - top)
        upper, lower = (demo.raster(f"temperature_{z}m")[inside] for z in (top, base))
        assert inside.sum() > 50
        assert np.abs((1.0 - share) * upper + share * lower - 100.0).max() < 0.5


def test_a_scenario_stands_beside_base(demo):
    assert (demo.results / "harrison_only/delivery/manifest.json").is_file()
    methods = {
        name: set(demo.table(tables.Temperatures, f"{name}/tables/temperatures.parquet")["method"])
        for name in ("base", "harrison_only")
    }
    assert methods["harrison_only"] == {"harrison1983"}
    assert {"equilibrium", "dst", "conductive_recovery"} <= methods["base"]
    base, other = (demo.raster("temperature_3000m", name) for name in ("base", "harrison_only"))
    assert base.shape == other.shape
    assert np.nanmedian(np.abs(base - other)) > 1.0
