"""Promises that every registered method keeps, and the tests by which Horner refuses."""

import re
from dataclasses import replace
from typing import get_args

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from mud_cooling import table_of, wells_of

from basinheat import tables
from basinheat.corrections import METHODS, correct
from basinheat.corrections.gather import KINDS, gather
from basinheat.corrections.method import Context
from basinheat.corrections.methods.forster1997 import correction_k as forster_k
from basinheat.corrections.methods.harrison1983 import correction_k as harrison_k
from basinheat.corrections.methods.horner import horner_time
from basinheat.corrections.methods.kehle_gregory import correction_k as kehle_k
from basinheat.corrections.methods.time_lines import fit_line
from basinheat.corrections.stage import prepare
from basinheat.corrections.trend import RegionalTrend
from basinheat.settings.heat import Correction, Method, Region

CONTEXT = Context(
    trend=RegionalTrend(0.03, 0.0, 4000.0), region=None, diffusivity_m2_s=1e-6,
    circulation_h=4.0, circulation_factor=1.8, well_share=0.5, surface_shared_std_k=0.7,
)  # fmt: skip
every_method = pytest.mark.parametrize("method", METHODS.values(), ids=METHODS.keys())


def sets_of(method):
    """Three sets at depths of the method: deep and repeated, shallower and timed, untimed."""
    top = max(900.0, method.depth_range_m[0])
    rows = [
        {"depth_m": top + 800.0, "temperature_degc": 57.0, "since_circulation_h": 8.0},
        {"depth_m": top + 800.0, "temperature_degc": 58.3, "since_circulation_h": 14.0},
        {
            "depth_m": top + 300.0,
            "temperature_degc": 41.0,
            "since_circulation_h": 8.0,
            "drilling_h": 6.0,
        },
        {"depth_m": top, "temperature_degc": 33.0},
    ]
    readings = table_of([row | {"kind": method.kind} for row in rows])
    return gather(readings, wells_of("A"), Correction()).sets[method.kind]


def six_pairs():
    """What six wells teach whose readings are 9 to 14 K below their equilibrium logs."""
    places = [{"well": f"W{i}", "depth_m": 1000.0 + 500.0 * i} for i in range(6)]
    direct = [
        place | {"kind": "equilibrium", "temperature_degc": 10.0 + 0.03 * place["depth_m"]}
        for place in places
    ]
    muddy = [
        place | {"temperature_degc": 1.0 - i + 0.03 * place["depth_m"]}
        for i, place in enumerate(places)
    ]
    wells = wells_of(*(place["well"] for place in places))
    return prepare(table_of(direct + muddy), wells, Correction()).context.calibration


def at_home(method):
    """The context of wells in the region of the method, pairs among them."""
    region = method.regions[0] if method.regions else None
    return replace(CONTEXT, region=region, calibration=six_pairs())


def test_the_config_knows_the_methods():
    assert set(METHODS) == set(get_args(Method))


def test_the_regions_of_the_settings_are_those_of_the_methods():
    known = {region for method in METHODS.values() for region in method.regions}
    assert known == set(get_args(Region))


@every_method
def test_what_a_method_says_of_itself(method):
    known = {*tables.Readings.columns, *tables.Wells.columns}
    assert set(method.needs) | set(method.helps) <= known
    assert method.needs
    assert method.kind in KINDS
    reference = method.reference
    assert 1900 < reference.year < 2100
    assert all([reference.author, reference.title, reference.equation, reference.status])
    assert all([method.title, method.validity, method.uncertainty.source])


@every_method
def test_what_a_method_prints_needs_no_other_document(method):
    """README and report print these: the reason itself, and not where developers noted it."""
    said = [method.title, method.validity, *method.reasons, *vars(method.reference).values()]
    said += [method.uncertainty.source, method.uncertainty.known_bias]
    assert not [text for text in said if re.search(r"METHODS|\bA\d+\b", str(text))]


@every_method
def test_what_a_method_says_of_sets(method):
    sets = sets_of(method)
    outcome = method.estimate(sets, at_home(method))
    use = outcome.reason == 0
    assert use.any()
    assert set(outcome.reason) <= set(range(len(method.reasons) + 1))
    for values in (outcome.temperature_degc, outcome.independent_std_k, outcome.well_std_k):
        assert values.shape == (len(sets),)
        assert np.isfinite(values[use]).all()
    assert (outcome.independent_std_k[use] > 0.0).all()
    assert (outcome.well_std_k[use] >= 0.0).all()
    for name, loading in outcome.loadings.items():
        assert loading.values.shape == (len(sets),)
        assert loading.prior_std > 0.0
        assert name.split(":")[0] in ("recovery", "method", "surface_temperature")
    assert all(flags.shape == (len(sets),) for flags in outcome.flags.values())


@every_method
def test_a_method_never_cools_a_reading(method):
    sets = sets_of(method)
    outcome = method.estimate(sets, at_home(method))
    use = outcome.reason == 0
    lowest = sets.warmest_degc if method.kind == "bht" else sets.mean_degc
    assert (outcome.temperature_degc[use] >= lowest[use] - 1e-9).all()


@pytest.mark.parametrize("formula", [harrison_k, kehle_k, forster_k])
@given(st.floats(0.0, 8000.0), st.floats(0.0, 4000.0))
def test_formulas_grow_with_depth(formula, depth_m, deeper_m):
    shallow, deep = formula(np.array([depth_m, depth_m + deeper_m]))
    assert deep >= shallow - 1e-9


def test_regions():
    """METHODS A12 (common practice): 8 K at home, 12 K elsewhere; Förster refuses elsewhere.

    In the middle of the formula's depths: away from it the slope of its error adds to that.
    """
    readings = table_of([{"temperature_degc": 50.0, "depth_m": 1950.0}])
    totals = {}
    for region in ("oklahoma", None):
        settings = Correction(order=["forster1997", "harrison1983"], region=region)
        row = correct(readings, wells_of("A"), settings).estimates.iloc[0]
        assert row["method"] == "harrison1983"
        assert row["passed_over"] == "forster1997: correction.region is not kansas_southeast"
        parts = row[["temperature_std_k", "well_std_k", "shared_std_k"]].astype(float)
        totals[region] = np.sqrt((parts**2).sum())
    assert totals == pytest.approx({"oklahoma": 8.0, None: 12.0})


def test_forster_refuses_other_depths():
    settings = Correction(order=["forster1997"], region="kansas_southeast")
    rows = [{"temperature_degc": 50.0, "depth_m": z} for z in (300.0, 1000.0, 2000.0)]
    done = correct(table_of(rows), wells_of("A"), settings)
    assert done.estimates["depth_m"].tolist() == [1000.0]
    assert done.rejected["sentence"].str.contains("outside 400 to 1800 m").tolist() == [True, True]


HORNER = {"since_circulation_h": [8.0, 14.0, 20.0], "temperature_degc": [80.0, 88.0, 92.0]}


@pytest.mark.parametrize(
    ("change", "reason"),
    [
        ({"since_circulation_h": [8.0, np.nan, np.nan]}, "fewer than 2 timed readings"),
        ({"temperature_degc": [80.0, 92.0, 88.0]}, "temperature falls with time"),
        ({"since_circulation_h": [20.0, 21.0, 22.0]}, "times too close to each other"),
        ({"since_circulation_h": [8.0, 9.5, 9.6], "circulation_h": 15.0},
         "times too close to each other"),
        ({"temperature_degc": [80.0, 80.0, 80.0]}, "no rise with time"),
        ({"hole_radius_m": 0.3}, "first reading too early for a line source"),
        ({"circulation_h": 40.0, "since_circulation_h": [8.0, 9.0, 10.0]},
         "the way to the intercept is too long"),
    ],
)  # fmt: skip
def test_horner_refuses(change, reason):
    """The reject column of METHODS A1 (common practice)."""
    readings = table_of(_columns(HORNER | {"circulation_h": 5.0} | change))
    done = correct(readings, wells_of("A"), Correction(order=["horner"]))
    assert done.estimates.empty
    assert done.rejected["code"].tolist() == ["no_method"] * 3
    assert done.rejected["sentence"].str.contains(reason).all()


def _columns(columns):
    return [{k: (v[i] if isinstance(v, list) else v) for k, v in columns.items()} for i in range(3)]


def total_k(columns):
    """Total standard uncertainty of a Horner estimate."""
    settings = Correction(order=["horner"])
    row = correct(table_of(columns), wells_of("A"), settings).estimates.iloc[0]
    return np.sqrt((row[["temperature_std_k", "well_std_k", "shared_std_k"]] ** 2).sum())


def test_horner_grades():
    """METHODS A1, A12: 6 K for three good points, 8 K for two or a warning."""
    narrow = {"hole_radius_m": 0.06, "circulation_h": 8.0}
    three = _columns(HORNER | narrow | {"temperature_degc": [80.0, 84.0, 86.0]})
    assert total_k(three) == pytest.approx(6.0, abs=0.05)
    assert total_k([three[0], three[2]]) == pytest.approx(8.0, abs=0.05)
    equal = _columns(HORNER | narrow | {"temperature_degc": [80.0, 84.0, 84.0]})
    assert total_k(equal) >= 8.0


def test_horner_integrates_an_unknown_circulation():
    known, unknown = (
        correct(table_of(_columns(HORNER | more)), wells_of("A"), Correction(order=["horner"]))
        for more in ({"circulation_h": 4.0}, {})
    )
    assert unknown.estimates["flags"].str.contains("circulation_assumed").all()
    assert not known.estimates["flags"].str.contains("circulation_assumed").any()
    difference = unknown.estimates["temperature_degc"] - known.estimates["temperature_degc"]
    assert 0.0 < difference[0] < 3.0, "the mean over times is not the value at the median"


@given(
    st.lists(st.floats(1.0, 60.0), min_size=2, max_size=6, unique=True),
    st.floats(0.5, 12.0), st.floats(60.0, 200.0), st.floats(-60.0, -1.0), st.floats(0.1, 5.0),
)  # fmt: skip
def test_horner_recovers_its_own_law_and_grows_with_the_last_reading(hours, t_c, degc, slope, more):
    since = np.sort(np.array([hours]))
    x = horner_time(np.array([[t_c]]), since)
    if np.ptp(x) < 1e-3:
        return
    readings = degc + slope * x
    line = fit_line(x, readings)
    assert line.intercept[0] == pytest.approx(degc, rel=1e-6)
    assert line.slope[0] == pytest.approx(slope, rel=1e-6)
    readings[0, -1] += more
    assert fit_line(x, readings).intercept[0] >= line.intercept[0] - 1e-9
