"""Local calibration: which readings make pairs, what they teach, and what they must not."""

import numpy as np
import pandas as pd
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from basinheat import tables
from basinheat.corrections import correct
from basinheat.corrections.calibration.distance import growth_per_m
from basinheat.corrections.calibration.ladder import FEWEST, STEPS, Data, chosen, climb
from basinheat.corrections.calibration.robust import Errors, fit
from basinheat.settings.heat import Correction

ORDER = ["equilibrium", "dst", "local_calibration"]
SURFACE, GRADIENT = 10.0, 0.03


def readings_of(rows):
    """Readings from a list of dicts."""
    frame = pd.DataFrame(rows)
    frame["reading_id"] = [f"r{i:05d}" for i in range(len(frame))]
    return tables.Readings.conform(frame.assign(flags="", source_line=np.arange(len(frame))))


def wells_of(readings, apart_m=50_000.0):
    """The wells of readings, in a row, too far apart to be neighbours unless told."""
    names = sorted(set(readings["well"]))
    return tables.Wells.conform(
        pd.DataFrame(
            {
                "well": names,
                "easting_m": apart_m * np.arange(len(names)),
                "northing_m": 0.0,
                "surface_temperature_degc": SURFACE,
                "surface_temperature_std_k": 0.5,
            }
        )
    )


def basin(law, n_wells=40, noise_k=0.0, kind="equilibrium", seed=1, extra=()):
    """One timed reading per well and a direct temperature at its depth; ``law(depth, hours)``."""
    rng = np.random.default_rng(seed)
    depth, hours = rng.uniform(1000.0, 4000.0, n_wells), rng.uniform(5.0, 25.0, n_wells)
    truth = SURFACE + GRADIENT * depth
    cold = truth - law(depth, hours) + noise_k * rng.normal(size=n_wells)
    rows = []
    for i in range(n_wells):
        place = {"well": f"W{i:03d}", "depth_m": depth[i], "temperature_std_k": 1.0}
        rows.append(place | {"kind": kind, "temperature_degc": truth[i]})
        times = {"since_circulation_h": hours[i], "circulation_h": 4.0}
        rows.append(place | times | {"kind": "bht", "temperature_degc": cold[i]})
    return readings_of(rows + list(extra))


def corrected(readings, holdout=(), apart_m=50_000.0, order=ORDER, **calibration):
    """Correct readings, wells as in ``wells_of``."""
    settings = Correction(order=order, calibration=calibration)
    return correct(readings, wells_of(readings, apart_m), settings, holdout)


def local(done):
    """Estimates by local calibration."""
    return done.estimates[done.estimates["method"] == "local_calibration"]


def parabola(depth, _hours):
    """Correction of depth alone, K."""
    return 4.0 + 3.0e-3 * depth + 4.0e-7 * depth**2


LAWS = {
    "constant": lambda depth, hours: 12.0 + 0.0 * depth,
    "linear": lambda depth, hours: 2.0 + 5.0e-3 * depth,
    "quadratic": parabola,
    "quadratic_with_time": lambda z, hours: parabola(z, hours) - 5.0 * np.log(hours / 12.0),
    "scaled_with_time": lambda z, hours: parabola(z, hours) * np.log1p(4 / hours) / np.log1p(1 / 3),
}


@pytest.mark.parametrize("step", STEPS)
def test_each_step_finds_its_own_law(step):
    done = corrected(basin(LAWS[step]), model=step)
    rows = local(done)
    assert len(rows) == 40
    truth = SURFACE + GRADIENT * rows["depth_m"]
    assert rows["temperature_degc"].to_numpy() == pytest.approx(truth.to_numpy(), abs=1e-4)
    assert done.recovery["calibration"]["step"] == step


@pytest.mark.parametrize("step", STEPS)
def test_auto_takes_the_step_that_predicts(step):
    """Scatter of 1 K on 80 wells, against terms of several kelvin."""
    done = corrected(basin(LAWS[step], n_wells=80, noise_k=1.0))
    found = done.recovery["calibration"]["step"]
    assert found == step or (step == "scaled_with_time" and found == "quadratic_with_time")


@pytest.mark.parametrize("step", STEPS)
def test_fewest_pairs(step):
    """METHODS A10 (common practice): 5, 10, 20, 30, 30 pairs."""
    assert list(FEWEST.values()) == [5, 10, 20, 30, 30]
    few = corrected(basin(LAWS[step], n_wells=FEWEST[step] - 1), model=step)
    assert local(few).empty
    assert f"it needs {FEWEST[step]}" in few.recovery["calibration"]["steps"][step]["refused"]
    assert few.rejected["sentence"].str.contains("fewer pairs").all()
    assert len(few.rejected) == FEWEST[step] - 1
    assert len(local(corrected(basin(LAWS[step], n_wells=FEWEST[step]), model=step)))


def test_many_pairs_of_one_well_are_not_many():
    rows = []
    for z in np.linspace(1000.0, 4000.0, 12):
        for kind, cold in (("equilibrium", 0.0), ("bht", 9.0)):
            degc = SURFACE + GRADIENT * z - cold
            rows.append({"well": "A", "depth_m": z, "kind": kind, "temperature_degc": degc})
    done = corrected(readings_of(rows))
    assert done.recovery["calibration"]["pairs"] == 12
    assert "pairs of 1 wells" in done.recovery["calibration"]["steps"]["constant"]["refused"]
    assert local(done).empty


def test_nothing_to_hold_readings_to():
    done = corrected(basin(parabola).query("kind == 'bht'"))
    assert done.recovery["calibration"]["pairs"] == 0
    assert done.calibration.empty
    assert (done.rejected["code"] == "no_method").all()


@pytest.mark.parametrize(
    ("anchors", "apart_m", "carried"),
    [
        ([("A", 2000.0, 0.0)], 0.0, 70.0),
        ([("A", 2040.0, 0.0)], 0.0, 70.0),
        ([("A", 2060.0, 0.0)], 0.0, None),
        ([("A", 1800.0, 2.0), ("A", 2200.0, 6.0)], 0.0, 74.0),
        ([("A", 1700.0, 2.0), ("A", 2300.0, 6.0)], 0.0, None),
        ([("B", 2040.0, 0.0)], 4900.0, 70.0),
        ([("B", 2040.0, 0.0)], 5100.0, None),
        ([("A", 2040.0, 0.0), ("B", 2000.0, 3.0)], 4000.0, 70.0),
    ],
)
def test_what_makes_a_pair(anchors, apart_m, carried):
    """METHODS A10: within 50 m of depth after a shift, or between points of a log; within 5 km.

    Readings on a straight line elsewhere give the region's gradient, 30 K/km.
    """
    rows = [
        {"well": f"Z{i}", "depth_m": z, "kind": "bht", "temperature_degc": SURFACE + GRADIENT * z}
        for i, z in enumerate(np.linspace(500.0, 4000.0, 30))
    ]
    rows += [{"well": "A", "depth_m": 2000.0, "kind": "bht", "temperature_degc": 70.0}]
    for well, z, excess in anchors:
        degc = SURFACE + GRADIENT * z + excess
        rows.append({"well": well, "depth_m": z, "kind": "equilibrium", "temperature_degc": degc})
    readings = readings_of(rows)
    wells = wells_of(readings, 1.0e6)
    wells.loc[wells["well"] == "B", "easting_m"] = apart_m
    done = correct(readings, wells, Correction(order=[*ORDER, "uncorrected"]))
    pairs = done.calibration[done.calibration["well"] == "A"]
    if carried is None:
        assert pairs.empty
    else:
        assert pairs["anchor_temperature_degc"].tolist() == pytest.approx([carried], abs=0.02)
        assert pairs["residual_k"].tolist() == pytest.approx([70.0 - carried], abs=0.02)


def test_a_neighbour_is_a_poorer_anchor_the_further_away():
    def std(apart_m):
        rows = basin(parabola, n_wells=12)
        moved = rows.assign(well=np.where(rows["kind"] == "bht", rows["well"] + "N", rows["well"]))
        wells = wells_of(rows)
        near = wells.assign(well=wells["well"] + "N", easting_m=wells["easting_m"] + apart_m)
        done = correct(moved, pd.concat([wells, near], ignore_index=True), Correction(order=ORDER))
        assert len(done.calibration) == 12
        assert (done.calibration["distance_m"] == apart_m).all()
        return done.calibration["anchor_std_k"].to_numpy()

    assert (std(4000.0) > std(1000.0)).all()
    assert (std(1000.0) > std(0.0)).all()


def test_unlike_neighbours_are_learned():
    """Wells that differ by 5 % of the rise per 5 km, then by 20 % (half squares by hand)."""
    rng = np.random.default_rng(3)
    place = np.stack([5000.0 * np.arange(60), np.zeros(60)], axis=1)
    std = {}
    for share in (0.05, 0.2):
        ratio = 1.0 + share * rng.normal(size=60).cumsum()
        growth = growth_per_m(place, ratio, np.zeros(60), 5000.0, 0.05)
        std[share] = np.sqrt(growth * 5000.0)
    assert 0.03 < std[0.05] < 0.08
    assert std[0.2] > 2.0 * std[0.05]


def test_flat_and_less_sure_beyond_the_pairs():
    probes = [
        {"well": f"P{i}", "depth_m": z, "kind": "bht", "temperature_degc": 80.0}
        for i, z in enumerate((200.0, 500.0, 2500.0, 4500.0, 6500.0))
    ]
    rows = local(corrected(basin(parabola, noise_k=2.0, extra=probes), model="quadratic"))
    rows = rows[rows["well"].str.startswith("P")].set_index("depth_m")
    added, shared = rows["correction_k"], rows["shared_std_k"]
    assert added[200.0] == pytest.approx(added[500.0], abs=1e-9)
    assert added[4500.0] == pytest.approx(added[6500.0], abs=1e-9)
    assert shared[6500.0] > shared[4500.0] > shared[2500.0]
    assert shared[200.0] > shared[500.0] > shared[2500.0]
    outside = rows["flags"].str.contains("outside_calibration_depths")
    assert outside.tolist() == [True, True, False, True, True]


def test_a_correction_is_never_negative_and_a_large_one_is_flagged():
    warm = corrected(basin(lambda depth, hours: -5.0 + 0.0 * depth, noise_k=1.0))
    assert (local(warm)["correction_k"] == 0.0).all()
    cold = local(corrected(basin(lambda depth, hours: 0.6 * GRADIENT * depth)))
    assert cold["flags"].str.contains("correction_above_half_of_rise").mean() > 0.9


def test_a_correction_that_grows_with_time_is_refused():
    done = corrected(basin(lambda z, hours: parabola(z, hours) + 6.0 * np.log(hours / 12.0)))
    steps = done.recovery["calibration"]["steps"]
    assert steps["quadratic_with_time"]["refused"] == "the correction would grow with time"
    assert done.recovery["calibration"]["step"] != "quadratic_with_time"


@pytest.mark.parametrize("step", ["quadratic_with_time", "scaled_with_time"])
def test_later_readings_need_less(step):
    probes = [
        {"well": f"P{h:02d}", "depth_m": 2500.0, "kind": "bht", "temperature_degc": 70.0,
         "since_circulation_h": float(h), "circulation_h": 4.0}
        for h in (6, 9, 14, 22)
    ]  # fmt: skip
    rows = local(corrected(basin(LAWS[step], noise_k=1.0, extra=probes), model=step))
    rows = rows[rows["well"].str.startswith("P")].sort_values("well")
    assert (np.diff(rows["correction_k"]) < -0.5).all()


def test_held_out_wells_teach_nothing():
    readings = basin(parabola, noise_k=2.0)
    out = sorted(set(readings["well"]))[::4]
    other = readings["temperature_degc"] + 15.0 * readings["well"].isin(out)
    first = corrected(readings, out)
    second = corrected(readings.assign(temperature_degc=other), out)
    assert first.recovery["calibration"]["steps"] == second.recovery["calibration"]["steps"]
    assert first.recovery["calibration"]["pairs_that_taught"] == 30
    own = first.calibration[first.calibration["method"] == "local_calibration"]
    assert set(own.loc[~own["taught"], "well"]) == set(out)
    assert set(local(first)["well"]) >= set(out), "they are corrected like the others"


def test_any_scale_of_temperature_gives_the_same():
    a, b = 1.8, 32.0
    readings = basin(LAWS["quadratic_with_time"], noise_k=2.0)
    wells = wells_of(readings)
    before = correct(readings, wells, Correction(order=ORDER), (), 0.7)
    after = correct(
        readings.assign(
            temperature_degc=a * readings["temperature_degc"] + b,
            temperature_std_k=a * readings["temperature_std_k"],
        ),
        wells.assign(surface_temperature_degc=a * SURFACE + b, surface_temperature_std_k=a * 0.5),
        Correction(order=ORDER),
        (),
        a * 0.7,
    )
    found, expected = local(after)["temperature_degc"], local(before)["temperature_degc"]
    assert len(found) == 40
    assert found.to_numpy() == pytest.approx(a * expected.to_numpy() + b, abs=1e-5)
    names = after.recovery["calibration"]["step"], before.recovery["calibration"]["step"]
    assert names[0] == names[1]


def test_the_order_of_rows_changes_nothing():
    readings = basin(parabola, noise_k=2.0)
    wells = wells_of(readings, apart_m=2000.0)
    rng = np.random.default_rng(5)
    mixed = readings.iloc[rng.permutation(len(readings))]
    turned = wells.iloc[rng.permutation(len(wells))]
    first = correct(readings, wells, Correction(order=ORDER))
    second = correct(mixed, turned, Correction(order=ORDER))
    pd.testing.assert_frame_equal(first.calibration, second.calibration, check_exact=True)
    pd.testing.assert_frame_equal(first.estimates, second.estimates, check_exact=True)
    assert first.recovery == second.recovery


def test_a_shared_error_of_the_anchors_is_carried():
    """All tests too warm by one amplitude of ``method:dst``: estimates move by their loadings."""
    readings = basin(parabola, noise_k=1.0, kind="dst")
    shift = 0.5 * (readings["kind"] == "dst")
    rows = local(corrected(readings, model="quadratic"))
    warmer = readings.assign(temperature_degc=readings["temperature_degc"] + shift)
    moved = local(corrected(warmer, model="quadratic"))
    change = moved["temperature_degc"].to_numpy() - rows["temperature_degc"].to_numpy()
    assert change == pytest.approx(rows["loading_method:dst"].to_numpy(), abs=0.03)
    assert change == pytest.approx(0.5, abs=0.05)


def test_every_method_stands_beside_the_anchors(tmp_path):
    order = ["equilibrium", "conductive_recovery", "local_calibration", "harrison1983"]
    done = corrected(basin(LAWS["quadratic_with_time"], noise_k=1.0), order=order)
    tables.Calibration.save(done.calibration, tmp_path / "calibration.parquet")
    rows = tables.Calibration.load(tmp_path / "calibration.parquet")
    assert rows.groupby("method").size().to_dict() == dict.fromkeys(order[1:], 40)
    assert rows["method"][rows["chosen"]].tolist() == ["conductive_recovery"] * 40
    said = rows[rows["method"] == "conductive_recovery"]
    used = done.estimates[done.estimates["method"] == "conductive_recovery"]
    assert said["estimate_degc"].to_numpy() == pytest.approx(used["temperature_degc"].to_numpy())
    step = done.recovery["calibration"]["steps"][done.recovery["calibration"]["step"]]
    own = rows[rows["method"] == "local_calibration"]
    assert own["residual_k"].mean() == pytest.approx(step["left_out_bias_k"], abs=1e-6)


def test_two_methods_share_a_source():
    """Untimed readings of wells without a surface temperature go to the calibration."""
    readings = basin(parabola, noise_k=1.0)
    readings.loc[readings["kind"] == "bht", "since_circulation_h"] = np.nan
    wells = wells_of(readings)
    wells.loc[wells.index[::2], "surface_temperature_degc"] = np.nan
    order = ["equilibrium", "conductive_recovery", "local_calibration"]
    done = correct(readings, wells, Correction(order=order))
    rows = done.estimates[done.estimates["method"] != "equilibrium"]
    carries = (rows["loading_method:untimed"] != 0.0).groupby(rows["method"]).agg(["size", "all"])
    assert carries["size"].to_dict() == {"conductive_recovery": 20, "local_calibration": 20}
    assert carries["all"].all()


def test_left_out_predictions_against_fits_without_the_well():
    """Leave one well out, and all that share its log, written as separate least squares."""
    rng = np.random.default_rng(7)
    n = 30
    errors = Errors(
        rng.uniform(0.2, 2.0, n), np.ones(n), rng.integers(0, 9, n), np.full(n, 0.3),
        rng.integers(0, 14, n), 0.5,
    )  # fmt: skip
    data = Data(rng.uniform(1000.0, 4000.0, n), np.full(n, np.nan), np.full(n, 4.0))
    value = parabola(data.depth_m, 0.0) + rng.normal(0.0, 2.0, n)
    rung = climb(data, value, errors, data)[STEPS.index("linear")]
    design, weights = rung.step.design(data), rung.found.weights
    for i in range(n):
        logs = errors.group[errors.well == errors.well[i]]
        kept = (errors.well != errors.well[i]) & ~np.isin(errors.group, logs)
        root = np.sqrt(weights[kept])
        alone = np.linalg.lstsq(design[kept] * root[:, None], value[kept] * root, rcond=None)[0]
        assert rung.left_out_k[i] == pytest.approx(design[i] @ alone, abs=1e-6)


@settings(deadline=None, max_examples=30)
@given(st.floats(-500.0, 500.0))
def test_one_gross_error_moves_little(error):
    rng = np.random.default_rng(11)
    n = 25
    errors = Errors(np.full(n, 0.25), np.ones(n), np.arange(n), np.zeros(n), np.arange(n), 0.0)
    value = 10.0 + rng.normal(0.0, 2.0, n)
    spoiled = value + error * (np.arange(n) == 4)
    clean, dirty = (fit(np.ones((n, 1)), each, errors) for each in (value, spoiled))
    assert abs(dirty.coefficients[0] - clean.coefficients[0]) < 0.4
    assert dirty.scatter_k < 1.5 * clean.scatter_k


def test_pairs_of_one_well_leave_the_fit_less_sure():
    """Readings in twos, half their scatter in common: variance of a mean as by hand, × 1.5."""
    n = 40
    value = np.random.default_rng(2).normal(10.0, 2.0, n)
    none, each = np.zeros(n), np.arange(n)
    apart = fit(np.ones((n, 1)), value, Errors(none, none + 1, each, none, each, 0.5), np.inf)
    in_twos = Errors(none, none + 1, each, none, each // 2, 0.5)
    together = fit(np.ones((n, 1)), value, in_twos, np.inf)
    assert together.covariance[0, 0] == pytest.approx(1.5 * apart.covariance[0, 0], rel=1e-6)
    assert apart.covariance[0, 0] == pytest.approx(value.var(ddof=1) / n, rel=1e-6)


def test_a_named_step_is_taken_or_none():
    rungs = climb(
        Data(np.linspace(1000.0, 4000.0, 12), np.full(12, np.nan), np.full(12, 4.0)),
        np.linspace(5.0, 20.0, 12),
        Errors(np.ones(12), np.ones(12), np.arange(12), np.zeros(12), np.arange(12), 0.5),
        Data(np.zeros(0), np.zeros(0), np.zeros(0)),
    )
    assert chosen(rungs, "constant").step.name == "constant"
    assert chosen(rungs, "auto").step.name == "linear"
    assert chosen(rungs, "quadratic") is None
