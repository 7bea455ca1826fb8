"""The stage as a whole: what it promises of its tables, and how it answers changed data."""

import json

import numpy as np
import pandas as pd
import pytest
from mud_cooling import make_basin, table_of, wells_of

from basinheat import tables
from basinheat.corrections import correct
from basinheat.corrections.choose import counts
from basinheat.settings.heat import Correction

RECOVERY = Correction(order=["conductive_recovery"])
NUMBERS = ["temperature_degc", "temperature_std_k", "well_std_k", "shared_std_k"]


@pytest.fixture(scope="module")
def basin():
    return make_basin(7, n_wells=50)


@pytest.fixture(scope="module")
def corrected(basin):
    return correct(basin.readings, basin.wells, Correction())


def ids_of(estimates):
    """All identities of readings in estimates."""
    return sorted(i for ids in estimates["reading_ids"] for i in ids.split(";"))


def test_tables_keep_their_contracts(corrected, tmp_path):
    for contract, frame in (
        (tables.Estimates, corrected.estimates),
        (tables.Sources, corrected.sources),
        (tables.Rejected, corrected.rejected),
    ):
        contract.save(frame, tmp_path / "table.parquet")
        assert len(contract.load(tmp_path / "table.parquet")) == len(frame)
    assert json.loads(json.dumps(corrected.recovery))["conductive_recovery"]["sets_that_taught"] > 5
    rows = corrected.estimates
    assert np.isfinite(rows[NUMBERS]).all(axis=None)
    assert (rows["temperature_std_k"] > 0).all()
    assert rows["temperature_degc"].to_numpy() - rows["raw_temperature_degc"].to_numpy() == (
        pytest.approx(rows["correction_k"].to_numpy())
    )
    carried = [name for name in rows.columns if name.startswith("loading_")]
    assert [f"loading_{name}" for name in corrected.sources["source"]] == carried
    assert rows["shared_std_k"].to_numpy() == (
        pytest.approx(np.sqrt((rows[carried] ** 2).sum(axis=1)).to_numpy())
    )


def test_every_reading_is_used_or_in_the_ledger(basin):
    order = Correction(order=["horner"])
    for settings in (Correction(), order):
        done = correct(basin.readings, basin.wells, settings)
        both = sorted(ids_of(done.estimates) + done.rejected["reading_id"].tolist())
        assert both == sorted(basin.readings["reading_id"])
        assert done.estimates["n_readings"].sum() + len(done.rejected) == len(basin.readings)
    assert set(done.rejected["code"]) == {"no_method"}


def test_the_order_of_rows_changes_nothing(basin, corrected):
    rng = np.random.default_rng(1)
    readings = basin.readings.iloc[rng.permutation(len(basin.readings))]
    wells = basin.wells.iloc[rng.permutation(len(basin.wells))]
    again = correct(readings, wells, Correction())
    pd.testing.assert_frame_equal(again.estimates, corrected.estimates, check_exact=True)


@pytest.mark.parametrize("method", ["conductive_recovery", "horner"])
def test_any_scale_of_temperature_gives_the_same(basin, method):
    """All temperatures, surface and errors to aT + b (°F, say): estimates follow."""
    a, b = 1.8, 32.0
    settings = Correction(order=[method])
    before = correct(basin.readings, basin.wells, settings, (), 0.7)
    readings = basin.readings.assign(
        temperature_degc=a * basin.readings["temperature_degc"] + b,
        temperature_std_k=a * basin.readings["temperature_std_k"],
    )
    wells = basin.wells.assign(
        surface_temperature_degc=a * basin.wells["surface_temperature_degc"] + b,
        surface_temperature_std_k=a * basin.wells["surface_temperature_std_k"],
    )
    after = correct(readings, wells, settings, (), a * 0.7)
    found, expected = after.estimates["temperature_degc"], before.estimates["temperature_degc"]
    assert found.to_numpy() == pytest.approx(a * expected.to_numpy() + b, abs=0.02)
    if method == "conductive_recovery":
        for name in NUMBERS[1:]:
            assert after.estimates[name].to_numpy() == (
                pytest.approx(a * before.estimates[name].to_numpy(), rel=0.01)
            )


def test_held_out_wells_teach_nothing(basin):
    out = basin.wells["well"].tolist()[::5]
    first = correct(basin.readings, basin.wells, RECOVERY, out)
    mine = basin.readings["well"].isin(out)
    other = basin.readings.assign(
        temperature_degc=basin.readings["temperature_degc"] + 20.0 * mine,
        circulation_h=basin.readings["circulation_h"] * np.where(mine, 3.0, 1.0),
    )
    second = correct(other, basin.wells, RECOVERY, out)
    assert (
        first.recovery == second.recovery
        or first.recovery["conductive_recovery"]["law"]
        == (second.recovery["conductive_recovery"]["law"])
    )
    kept = [frame.loc[~frame["well"].isin(out)] for frame in (first.estimates, second.estimates)]
    pd.testing.assert_frame_equal(kept[0], kept[1])
    assert first.estimates["well"].isin(out).any(), "they are estimated like the others"


def test_a_single_reading_later_needs_less_and_a_hotter_one_gives_more(basin):
    """Held-out wells of one or two readings, in one run with a basin that teaches."""
    hours = np.array([5.0, 8.0, 12.0, 20.0, 40.0])
    probes = [
        {"well": f"T{i}", "temperature_degc": 80.0, "since_circulation_h": h, "circulation_h": 4.0}
        for i, h in enumerate(hours)
    ] + [
        {"well": f"H{i}", "temperature_degc": t, "since_circulation_h": h, "circulation_h": 4.0}
        for i, last in enumerate((84.0, 86.0, 90.0))
        for h, t in ((6.0, 80.0), (14.0, last))
    ]
    probes = table_of(probes)
    names = sorted(set(probes["well"]))
    probes["reading_id"] = "probe" + probes["reading_id"]
    done = correct(
        pd.concat([basin.readings, probes]), pd.concat([basin.wells, wells_of(*names)]),
        RECOVERY, names,
    ).estimates.set_index("well")  # fmt: skip
    later = done.loc[[f"T{i}" for i in range(5)], "correction_k"].to_numpy()
    assert (np.diff(later) < 0).all()
    assert (later > 0).all()
    assert (np.diff(done.loc[[f"H{i}" for i in range(3)], "temperature_degc"]) > 0).all()


def test_the_preferred_kind_counts_and_the_others_inform():
    rows = [
        {"kind": "bht", "depth_m": 2000.0, "temperature_degc": 60.0, "since_circulation_h": 9.0},
        {"kind": "dst", "depth_m": 2008.0, "temperature_degc": 72.0},
        {"kind": "bht", "depth_m": 1200.0, "temperature_degc": 40.0},
        {"kind": "equilibrium", "depth_m": 900.0, "temperature_degc": 37.0},
        {"kind": "corrected", "depth_m": 3000.0, "temperature_degc": 101.0},
    ]
    done = correct(table_of(rows), wells_of("A"), Correction())
    rows = done.estimates.set_index("depth_m")
    assert rows["used"].to_dict() == {
        900.0: True, 1200.0: True, 2000.0: False, 2008.0: True, 3000.0: True,
    }  # fmt: skip
    assert rows.loc[2008.0, "temperature_degc"] == 72.0
    assert rows.loc[900.0, "variance_class"] == rows.loc[2008.0, "variance_class"] == "direct"
    assert rows.loc[1200.0, "variance_class"] == "recovery:untimed"
    assert rows.loc[2000.0, "variance_class"] == "recovery:single"
    assert rows.loc[[900.0, 2008.0], "loading_surface_temperature"].tolist() == [0.0, 0.0]
    assert rows.loc[2008.0, "loading_method:dst"] == 0.5
    assert rows["passed_over"].tolist() == [""] * 5, "methods of another kind are no news"
    assert done.rejected.empty


def test_readings_of_a_kind_the_order_knows_nothing_of_are_told_so():
    rows = [{"kind": "dst", "temperature_degc": 72.0}, {"temperature_degc": 60.0}]
    done = correct(table_of(rows), wells_of("A"), Correction(order=["horner"]))
    told = done.rejected["sentence"].tolist()
    assert any("none treats dst readings" in text and "Add dst to it" in text for text in told)
    assert any("horner: fewer than 2 timed readings" in text for text in told)


def test_ranks_of_one_kind_do_not_compete():
    used = counts(
        np.zeros(3, int), np.array([1000.0, 1010.0, 1012.0]), np.array([0, 0, 1]),
        np.array([2, 1, 2]), 15.0,
    )  # fmt: skip
    assert used.tolist() == [True, True, False]


def test_an_uncorrected_reading_is_a_marked_lower_bound():
    done = correct(
        table_of([{"temperature_degc": 60.0}]), wells_of("A"),
        Correction(order=["horner", "uncorrected"]),
    )  # fmt: skip
    row = done.estimates.iloc[0]
    assert row["flags"] == "lower_bound"
    assert row["correction_k"] == 0.0
    assert row["passed_over"] == "horner: fewer than 2 timed readings"
    assert np.hypot(row["temperature_std_k"], row["well_std_k"]) >= 8.0


def test_depth_uncertainty_is_common_to_the_well(basin):
    sharp, vague = (
        correct(basin.readings.assign(depth_std_m=m), basin.wells, RECOVERY).estimates
        for m in (0.0, 30.0)
    )
    added = vague["well_std_k"] ** 2 - sharp["well_std_k"] ** 2
    gradient = np.sqrt(added) / 30.0 * 1000.0
    assert gradient.between(15.0, 45.0).all(), "the region's gradient, K/km"
    assert (vague["temperature_std_k"] == sharp["temperature_std_k"]).all()


def test_the_share_common_to_a_well_is_of_the_scatter_only(basin):
    none, half = (
        correct(basin.readings, basin.wells, Correction(well_share=share)).estimates
        for share in (0.0, 0.5)
    )
    total = [e["temperature_std_k"] ** 2 + e["well_std_k"] ** 2 for e in (none, half)]
    assert total[0].to_numpy() == pytest.approx(total[1].to_numpy())
    assert (half["temperature_std_k"] ** 2 > 0.5 * total[1] - 1e-9).all()


def test_without_surface_temperature_the_next_method_serves():
    done = correct(
        table_of([{"temperature_degc": 60.0}]), wells_of("A", surface_degc=np.nan), Correction()
    )
    assert done.estimates["method"].tolist() == ["harrison1983"]
    assert "no surface temperature" in done.estimates["passed_over"][0]


@pytest.mark.parametrize("n", [0, 1, 3])
def test_hardly_any_readings(n):
    rows = [{"temperature_degc": 60.0 + i, "depth_m": 1500.0 + 200 * i} for i in range(n)]
    readings = table_of(rows) if n else table_of([{"temperature_degc": 1.0}]).iloc[:0]
    done = correct(readings, wells_of("A"), Correction())
    assert len(done.estimates) == n
    assert np.isfinite(done.estimates[NUMBERS]).all(axis=None)
    assert (done.estimates["correction_k"] > 2.0).all()
    assert (done.estimates["shared_std_k"] > 1.0).all(), "nothing was learned, much is unknown"
    json.dumps(done.recovery)
