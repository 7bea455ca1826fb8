"""Subsets of the Global Heat Flow Database, read with one line of config each.

Source: Global Heat Flow Data Assessment Group et al. (2024), release 2024,
doi 10.5880/fidgeo.2024.014, CC BY 4.0; the subsets and their quirks are described beside the data.
"""

import numpy as np
import pandas as pd
import pytest
from ingest_case import WELLS
from shared import shared_file

from basinheat import ingest
from basinheat.settings.model import Settings

# One well in the middle of each subset stands for a basin there (invented).
SUBSETS = {"germany": (10.0, 51.0), "australia": (134.0, -26.0)}


def read(folder, name):
    """Return the file's own rows, and what ingest makes of them."""
    path = shared_file("data", "ghfdb_2024", f"subset_{name}.csv")
    longitude, latitude = SUBSETS[name]
    (folder / "wells.csv").write_text(f"{WELLS}N00,{longitude},{latitude},100,105,,3005\n")
    (folder / "readings.csv").write_text("well,depth,temperature\nN00,2000,70\n")
    config = {
        "run": "flow",
        "crs": f"EPSG:{32601 + int((longitude + 180) // 6)}",
        "surface_temperature": {"model": "constant", "temperature_degc": 10.0},
        "heat_flow": {"published_within_km": 5000.0},
        "inputs": {
            "wells": [{"file": "wells.csv", "crs": "EPSG:4326"}],
            "readings": [{"file": "readings.csv"}],
            "heat_flow": [{"file": str(path), "schema": "ihfc_heat_flow"}],
        },
    }
    raw = pd.read_csv(path, dtype=str, encoding="utf-8-sig", keep_default_na=False)
    return raw, ingest.prepare(Settings.model_validate(config), folder)


@pytest.mark.parametrize("name", SUBSETS)
def test_every_row_is_a_point_or_has_a_reason(tmp_path, name):
    raw, prepared = read(tmp_path, name)
    reasons = prepared.rejected[prepared.rejected["table"] == "heat_flow"]["code"]
    assert len(raw) == len(prepared.heat_flow) + len(reasons)
    assert set(reasons) <= {"merged", "heat_flow_outside", "no_heat_flow", "not_a_number"}
    # what stands in the column q within the limits is there, place by place
    q = pd.to_numeric(raw["q"], errors="coerce")
    sound = raw[(q >= 10.0) & (q <= 250.0)]
    assert 0.5 * sound["ID_parent"].nunique() < len(prepared.heat_flow)
    assert len(prepared.heat_flow) <= sound["ID_parent"].nunique()
    assert (reasons == "heat_flow_outside").sum() == (q.notna() & ~q.between(10.0, 250.0)).sum()


@pytest.mark.parametrize("name", SUBSETS)
def test_values_are_those_of_the_file(tmp_path, name):
    raw, prepared = read(tmp_path, name)
    points = prepared.heat_flow.set_index("well")
    stated = raw.assign(q=pd.to_numeric(raw["q"], errors="coerce")).groupby("ID_parent")["q"]
    low, high = stated.min().reindex(points.index), stated.max().reindex(points.index)
    value = points["heat_flow_mw_m2"]
    assert ((value >= low - 1e-9) & (value <= high + 1e-9)).all()
    assumed = points["flags"].str.contains("heat_flow_std_assumed")
    np.testing.assert_allclose(points["heat_flow_std_mw_m2"][assumed], 0.2 * value[assumed])
    # continental means lie about 65 mW/m2 (Pollack et al. 1993, METHODS F), these within a third
    assert 43.0 < value.median() < 87.0
