"""Every method on every set: each once, the same as alone, and what a table of them must keep."""

from dataclasses import replace

import numpy as np
import pandas as pd
import pytest
from mud_cooling import make_basin, table_of, wells_of

from basinheat import tables
from basinheat.corrections import METHODS, correct
from basinheat.corrections.judging.comparison import describe_sets
from basinheat.corrections.judging.intercepts import Ground, intercepts, lay_ground
from basinheat.corrections.judging.stage import Fitted, judge
from basinheat.corrections.stage import prepare
from basinheat.settings.heat import Correction

ORDER = Correction(order=["equilibrium", "dst", "horner", "conductive_recovery"])
BHT = [name for name, method in METHODS.items() if method.kind == "bht"]
HEAT_FLOW = 60.0  # mW/m², of the made-up rock
KEY = ["well", "depth_m"]


def placed(basin):
    """The wells with places, on a square of 200 km."""
    rng = np.random.default_rng(5)
    place = rng.uniform(0.0, 2e5, (len(basin.wells), 2))
    return basin.wells.assign(easting_m=place[:, 0], northing_m=place[:, 1])


def fitted(readings, wells, settings=ORDER, truth=None, holdout=()):
    """What a joint fit leaves that changed nothing; rock such that true temperatures fit."""
    estimates = correct(readings, wells, settings, holdout).estimates
    surface = wells.set_index("well")["surface_temperature_degc"].loc[estimates["well"]].to_numpy()
    true = estimates["temperature_degc"] if truth is None else truth(estimates)
    resistance = (true - surface) / HEAT_FLOW * 1e3
    return Fitted(
        estimates=estimates,
        temperatures=estimates.loc[estimates["used"], list(tables.Temperatures.columns)],
        resistances=tables.Resistances.conform(
            estimates[KEY].assign(resistance_m2k_w=resistance, radiogenic_k=0.0)
        ),
        sources=tables.Sources.empty(),
        source_covariance=tables.SourceCovariance.empty(),
        variogram={"variance_scales": {"method:horner": 3.0, "recovery:single": 1.0}},
    )


def judged(basin, settings=ORDER, **options):
    wells = placed(basin)
    return judge(basin.readings, wells, fitted(basin.readings, wells, settings), settings)


def whole(judgement):
    return pd.concat(judgement.comparison, ignore_index=True)


@pytest.fixture(scope="module")
def basin():
    return make_basin(17, n_wells=60)


@pytest.fixture(scope="module")
def judgement(basin):
    return judged(basin)


@pytest.fixture(scope="module")
def table(judgement):
    return whole(judgement)


def test_each_set_and_method_once(basin, table):
    estimates = correct(basin.readings, basin.wells, ORDER).estimates
    assert len(table) == len(estimates) * len(BHT)
    assert not table.duplicated([*KEY, "method"]).any()
    for method, part in table.groupby("method"):
        assert method in BHT
        assert part["n_readings"].sum() == len(basin.readings)
    assert table.groupby(KEY)["chosen"].sum().eq(1).all(), "one method counts everywhere here"
    assert (table["reason"].ne("") == ~table["applies"]).all()
    assert (table["temperature_degc"].notna() == table["applies"]).all()


def test_the_chosen_rows_are_the_estimates(basin, table):
    expected = correct(basin.readings, basin.wells, ORDER).estimates.set_index(KEY)
    chosen = table[table["chosen"]].set_index(KEY).loc[expected.index]
    assert chosen["method"].tolist() == expected["method"].tolist()
    assert {"horner", "conductive_recovery"} == set(chosen["method"])
    for name in ("temperature_degc", "correction_k", "temperature_std_k", "well_std_k",
                 "shared_std_k", "raw_temperature_degc"):  # fmt: skip
        assert chosen[name].to_numpy() == pytest.approx(expected[name].to_numpy(), rel=1e-9)
    assert chosen["final_temperature_degc"].to_numpy() == (
        pytest.approx(expected["temperature_degc"].to_numpy())
    )
    parts = chosen[["temperature_std_k", "well_std_k", "shared_std_k"]].to_numpy()
    assert chosen["total_std_k"].to_numpy() == pytest.approx(np.sqrt((parts**2).sum(1)))


@pytest.mark.parametrize("name", ["horner", "bullard1947", "harrison1983", "uncorrected"])
def test_each_method_says_what_it_says_alone(basin, table, name):
    alone = correct(basin.readings, basin.wells, Correction(order=[name])).estimates
    own = table[table["method"].eq(name) & table["applies"]].set_index(KEY)
    assert len(own) == len(alone) > 0
    assert own.loc[alone.set_index(KEY).index, "temperature_degc"].to_numpy() == (
        pytest.approx(alone["temperature_degc"].to_numpy())
    )


def test_the_order_of_rows_changes_nothing(basin, table):
    rng = np.random.default_rng(2)
    wells = placed(basin)
    turned = wells.iloc[rng.permutation(len(wells))]
    readings = basin.readings.iloc[rng.permutation(len(basin.readings))]
    again = judge(readings, turned, fitted(readings, turned), ORDER)
    pd.testing.assert_frame_equal(whole(again), table, check_exact=True)


def test_another_scale_of_temperature_gives_the_same(basin, table):
    """aT + b, surface, mud and errors included: methods without kelvin of their own follow."""
    a, b = 1.8, 32.0
    readings, wells = basin.readings, placed(basin)
    warm = readings.assign(
        temperature_degc=a * readings["temperature_degc"] + b,
        temperature_std_k=a * readings["temperature_std_k"],
    )
    surface = wells.assign(
        surface_temperature_degc=a * wells["surface_temperature_degc"] + b,
        surface_temperature_std_k=a * wells["surface_temperature_std_k"],
    )
    other = whole(judge(warm, surface, fitted(warm, surface), ORDER, (), a * 0.7))
    for name in ("horner", "conductive_recovery", "uncorrected", "brennand1984"):
        first, second = (t[t["method"] == name] for t in (table, other))
        both = (first["applies"].to_numpy() & second["applies"].to_numpy()).nonzero()[0]
        assert both.size >= 5
        expected = a * first["temperature_degc"].to_numpy()[both] + b
        found = second["temperature_degc"].to_numpy()[both]
        assert found == pytest.approx(expected, abs=0.05), name


def test_the_summary_counts_what_the_table_holds(judgement, table):
    summary = judgement.summary
    for name, part in table.groupby("method"):
        rows = summary[summary["method"].eq(name) & summary["sets"].eq("own")]
        every, bins = rows[rows["top_m"].isna()].iloc[0], rows[rows["top_m"].notna()]
        own = part[part["applies"]]
        assert every["n_treated"] == bins["n_treated"].sum() == len(own)
        assert every["n_sets"] == bins["n_sets"].sum() == len(part)
        if len(own):
            assert every["correction_k"] == pytest.approx(own["correction_k"].median())
            one = bins[bins["n_treated"] > 0].iloc[0]
            inside = own[own["depth_m"].between(one["top_m"], one["base_m"], inclusive="left")]
            assert one["correction_low_k"] == pytest.approx(inside["correction_k"].quantile(0.25))
            assert one["total_std_k"] == pytest.approx(inside["total_std_k"].median())
    common = summary[summary["sets"].eq("common") & summary["top_m"].isna()]
    same = common["n_treated"].eq(common["n_treated"].iloc[0])
    assert same.all(), "common sets are the same for all"
    names = set(common["method"]) - {"chosen"}
    agreed = table[table["method"].isin(names)].groupby(KEY)["applies"].all()
    assert common["n_treated"].iloc[0] == agreed.sum() > 0


def test_anchors_are_those_of_the_well_within_50_m():
    """By hand: an equilibrium point 40 m below tells, one 60 m below and another well's do not."""
    rows = [
        {"well": "A", "depth_m": 2000.0, "temperature_degc": 60.0},
        {"well": "A", "depth_m": 2040.0, "temperature_degc": 75.0, "kind": "equilibrium"},
        {"well": "B", "depth_m": 2000.0, "temperature_degc": 61.0},
        {"well": "B", "depth_m": 2060.0, "temperature_degc": 76.0, "kind": "equilibrium"},
        {"well": "C", "depth_m": 2000.0, "temperature_degc": 62.0},
        {"well": "C", "depth_m": 2000.0, "temperature_degc": 70.0, "kind": "dst"},
    ]
    readings, wells = table_of(rows), wells_of("A", "B", "C").assign(easting_m=0.0, northing_m=0.0)
    found = judge(readings, wells, fitted(readings, wells), ORDER)
    anchors = found.anchors[found.anchors["method"] == "uncorrected"].set_index("anchor")
    assert anchors["n_pairs"].to_dict() == {"equilibrium": 1, "dst": 1}
    assert anchors.loc["dst", "difference_k"] == pytest.approx(-8.0)
    step = -15.0 - anchors.loc["equilibrium", "difference_k"]
    assert -40.0 * 0.06 < step < -40.0 * 0.015, "carried 40 m up with the region's gradient"
    out = judge(readings, wells, fitted(readings, wells, holdout=("C",)), ORDER, ("C",))
    assert set(out.anchors["anchor"]) == {"equilibrium"}, "wells held out are not looked at"


def test_sigmas_say_of_every_method_what_it_says_of_itself(judgement, table):
    sigmas = judgement.sigmas
    assert list(dict.fromkeys(sigmas["method"])) == list(METHODS)
    for name, method in METHODS.items():
        own = sigmas[sigmas["method"] == name]
        assert (own["known_bias"] == method.uncertainty.known_bias).all()
        assert (own["status"] == method.reference.status).all()
        assert (own["source"].str.len() > 10).all()
    horner = sigmas[sigmas["method"] == "horner"].iloc[0]
    own = table[table["method"].eq("horner") & table["applies"]]
    assert horner["shared_std_k"] == pytest.approx(own["shared_std_k"].median())
    assert horner["n_estimates"] == table["chosen"][table["method"].eq("horner")].sum() > 0
    assert horner["scale"] == 3.0
    assert "1.7 times" in horner["verdict"], "the square root of 3"
    single = sigmas[sigmas["variance_class"] == "recovery:single"].iloc[0]
    assert single["verdict"] == "" and single["scale"] == 1.0
    assert np.isnan(sigmas.loc[sigmas["method"] == "harrison1983", "scale"]).all(), "not in use"


def test_parts_make_the_table_that_the_whole_makes(judgement, table, tmp_path):
    tables.CorrectionComparison.save_parts(judgement.comparison, tmp_path / "parts.parquet")
    loaded = tables.CorrectionComparison.load(tmp_path / "parts.parquet")
    pd.testing.assert_frame_equal(loaded, table, rtol=1e-9)
    for contract, frame in (
        (tables.CorrectionSummary, judgement.summary),
        (tables.AnchorDifferences, judgement.anchors),
        (tables.Intercepts, judgement.intercepts),
        (tables.MethodSigmas, judgement.sigmas),
    ):
        contract.save(frame, tmp_path / "table.parquet")
        pd.testing.assert_frame_equal(contract.load(tmp_path / "table.parquet"), frame, rtol=1e-9)


def test_without_mud_cooled_readings_there_is_nothing_to_compare():
    rows = [{"well": f"W{i}", "temperature_degc": 70.0 + i, "kind": "dst"} for i in range(3)]
    readings = table_of(rows)
    wells = wells_of("W0", "W1", "W2").assign(easting_m=0.0, northing_m=0.0)
    found = judge(readings, wells, fitted(readings, wells), ORDER)
    assert whole(found).empty and found.summary.empty and found.anchors.empty
    assert set(found.sigmas["method"]) == set(METHODS)


def test_raw_readings_alarm_and_the_truth_does_not():
    """Four basins of simulated mud cooling: 4 K and 38 % of the rise at the end of circulation.

    The rock is true, so what the line shows is the readings' own. Some of the cooling does not
    grow with depth, and a robust line must find it in raw readings, and nothing in the truth.
    """
    order, values = Correction(order=["harrison1983"]), []
    for seed in range(4):
        basin = make_basin(40 + seed, n_wells=150, offset_k=16.0)
        wells = placed(basin)
        truth = lambda e, b=basin: e["reading_ids"].str.split(";").str[0].map(b.truth)  # noqa: E731
        fit = fitted(basin.readings, wells, order, truth)
        final = fit.temperatures.assign(temperature_degc=truth(fit.estimates).to_numpy())
        described = describe_sets(prepare(basin.readings, wells, order), fit.estimates, final)
        ground = lay_ground(
            fit.estimates, fit.resistances, wells, fit.sources, fit.source_covariance
        )
        found = intercepts(ground, described, [], fit.estimates, final).set_index("group")
        assert "too cold" in found.loc["raw", "alarm"]
        assert found.loc["final", "alarm"] == ""
        values.append(found.loc["raw", "intercept_k"])
    assert -12.0 < np.mean(values) < -2.0


def test_what_rock_leaves_open_widens_what_is_expected():
    """A source that scales all resistance moves no intercept; one of shallow rock does."""
    rng = np.random.default_rng(0)
    n = 200
    resistance = rng.uniform(0.3, 1.9, n)
    names = [f"W{i:03d}" for i in range(n)]
    estimates = tables.Estimates.conform(
        pd.DataFrame({"well": names, "depth_m": 2000.0 * resistance, "reading_ids": names}).assign(
            temperature_degc=10.0 + 60.0 * resistance + rng.normal(0.0, 2.0, n),
            method="uncorrected", variance_class="method:uncorrected", used=True,
        )
    )  # fmt: skip
    described = pd.DataFrame({"raw_temperature_degc": estimates["temperature_degc"],
                              "estimate": np.arange(n)})  # fmt: skip
    ground = Ground(
        well=np.arange(n), xy=rng.uniform(0.0, 1e5, (n, 2)), depth_m=2000.0 * resistance,
        surface_degc=np.full(n, 10.0), resistance=resistance, radiogenic_k=np.zeros(n),
        change=np.zeros((1, n)), covariance=np.eye(1), surface_std_k=0.0,
    )  # fmt: skip

    def expected(change):
        other = replace(ground, change=change[None])
        return intercepts(other, described, [], estimates, estimates).loc[0, "expected_std_k"]

    plain = expected(np.zeros(n))
    assert expected(0.2 * resistance) == pytest.approx(plain, rel=1e-6)
    # 0.1 of resistance in shallow rock above all readings is 60 mW/m² x 0.1 = 6 K.
    assert expected(np.full(n, 0.1)) == pytest.approx(np.hypot(plain, 6.0), rel=0.03)
