"""Readings become sets: who belongs together, and what stands in for what is not noted."""

import numpy as np
import pandas as pd
import pytest
from hypothesis import given
from hypothesis import strategies as st
from mud_cooling import table_of, wells_of

from basinheat.corrections.gather import gather
from basinheat.corrections.sets import group_by_depth, pad
from basinheat.corrections.trend import fit_trend
from basinheat.settings.heat import Correction

READING = st.tuples(st.integers(0, 3), st.floats(10.0, 400.0))


@given(st.lists(READING, min_size=1, max_size=40), st.floats(1.0, 30.0))
def test_sets_are_chains_cut_to_length(readings, gap_m):
    well, depth = (np.array(column) for column in zip(*sorted(readings), strict=True))
    group = group_by_depth(well, depth, gap_m, 3 * gap_m)
    assert set(np.diff(group)) <= {0, 1}
    assert group[0] == 0
    for number in range(group[-1] + 1):
        own = group == number
        assert np.unique(well[own]).size == 1
        assert np.ptp(depth[own]) <= 3 * gap_m * (1 + 1e-9)
        assert (np.diff(depth[own]) < gap_m).all()
    apart = (np.diff(well) != 0) | (np.diff(depth) >= gap_m)
    assert (np.diff(group)[apart] == 1).all()


@given(st.lists(st.integers(1, 6), min_size=1, max_size=20))
def test_padding_keeps_every_row_once(sizes):
    place = pad(np.repeat(np.arange(len(sizes)), sizes), len(sizes))
    assert sorted(place[place >= 0]) == list(range(sum(sizes)))
    assert (place >= 0).sum(1).tolist() == sizes


def test_a_continuous_log_does_not_become_one_set():
    rows = [{"kind": "equilibrium", "depth_m": z, "temperature_degc": 10 + 0.03 * z}
            for z in np.arange(100.0, 1000.0, 5.0)]  # fmt: skip
    sets = gather(table_of(rows), wells_of("A"), Correction()).sets["equilibrium"]
    assert len(sets) >= 60
    span = np.nanmax(sets.reading_depth_m, 1) - np.nanmin(sets.reading_depth_m, 1)
    assert span.max() <= 15.0


def test_readings_of_a_set_stand_in_the_order_of_time():
    rows = [
        {"temperature_degc": 90.0, "since_circulation_h": 12.0, "depth_m": 2004.0},
        {"temperature_degc": 80.0},
        {"temperature_degc": 85.0, "since_circulation_h": 6.0, "circulation_h": 3.0},
    ]
    sets = gather(table_of(rows), wells_of("A"), Correction()).sets["bht"]
    assert sets.temperature_degc.tolist() == [[85.0, 90.0, 80.0]]
    assert sets.depth_m.tolist() == [2004.0], "the depth of the latest reading"
    assert sets.circulation_h.tolist() == [3.0]
    assert sets.hole_radius_m.tolist() == [0.108], "correction.hole_radius_m where none is noted"
    assert sets.temperature_std_k.tolist() == [[1.0, 1.0, 1.0]], "correction.reading_std_k"


def test_readings_are_carried_to_the_depth_of_the_set():
    rows = [
        {"temperature_degc": 80.0, "since_circulation_h": 6.0, "depth_m": 1990.0},
        {"temperature_degc": 90.0, "since_circulation_h": 12.0, "depth_m": 2000.0},
    ]
    sets = gather(table_of(rows), wells_of("A"), Correction()).sets["bht"]
    assert sets.at_one_depth(np.array([0.03])).temperature_degc.tolist() == [[80.3, 90.0]]


def test_a_copy_counts_once_and_is_in_the_ledger():
    """METHODS Q05: identical readings of successive runs; the earliest counts."""
    rows = [
        {"temperature_degc": 80.0, "since_circulation_h": 6.0},
        {"temperature_degc": 80.0, "since_circulation_h": 12.0, "flags": "heaped;copied"},
        {"temperature_degc": 80.0, "since_circulation_h": 18.0},
        {"temperature_degc": 95.0, "depth_m": 2500.0, "flags": "copied"},
    ]
    gathered = gather(table_of(rows), wells_of("A"), Correction())
    assert gathered.sets["bht"].count.tolist() == [2, 1], "a flag without an original drops nothing"
    assert gathered.rejected["code"].tolist() == ["copied"]
    assert gathered.rejected["source_line"].tolist() == [3]


def test_readings_of_unknown_wells_are_in_the_ledger():
    rows = [{"well": "A", "temperature_degc": 80.0}, {"well": "B", "temperature_degc": 80.0}]
    gathered = gather(table_of(rows), wells_of("A"), Correction())
    assert gathered.rejected["code"].tolist() == ["well_rejected"]
    assert gathered.rejected["well"].tolist() == ["B"]


@pytest.mark.parametrize("seed", range(3))
def test_the_trend_is_robust_and_goes_through_the_surface(seed):
    rng = np.random.default_rng(seed)
    depth = rng.uniform(500.0, 4000.0, 300)
    truth = 0.034 * depth - 1.5e-6 * depth**2
    rise = truth * rng.normal(1.0, 0.05, depth.size)
    rise[::10] *= 2.5  # one in ten is badly wrong
    trend = fit_trend(depth, rise)
    assert trend.rise_k(np.array([0.0]))[0] == 0.0
    assert trend.rise_k(depth) == pytest.approx(truth, rel=0.05)


@given(st.floats(0.5, 3.0))
def test_the_trend_scales_with_the_data(factor):
    depth = np.linspace(500.0, 3000.0, 25)
    rise = 0.03 * depth + np.sin(depth)
    one, other = fit_trend(depth, rise), fit_trend(depth, factor * rise)
    assert other.rise_k(depth) == pytest.approx(factor * one.rise_k(depth))


def test_the_trend_goes_on_straight_and_needs_no_data():
    trend = fit_trend(np.linspace(500, 3000, 20), 0.03 * np.linspace(500, 3000, 20))
    deep = trend.rise_k(np.array([3000.0, 6000.0]))
    assert np.diff(deep)[0] / 3000.0 == pytest.approx(0.03)
    nothing = fit_trend(np.zeros(0), np.zeros(0))
    assert nothing.rise_k(np.array([1000.0]))[0] == pytest.approx(30.0)


def test_no_readings_at_all():
    gathered = gather(table_of([{"temperature_degc": 1.0}]).iloc[:0], wells_of("A"), Correction())
    assert gathered.sets == {}
    assert isinstance(gathered.rejected, pd.DataFrame)
