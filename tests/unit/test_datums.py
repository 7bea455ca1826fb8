"""Depth datums: physics first, then what is assumed where nothing was noted."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from basinheat.datums import OFFSHORE_M, ONSHORE_M, heights

NONE = np.nan


def one(ground, datum, water):
    return heights(np.array([ground]), np.array([datum]), np.array([water]))


@given(st.floats(-80, 4000), st.floats(0, 25), st.floats(-100, 100))
def test_moving_sea_level_changes_nothing_onshore(ground, rig, shift):
    """Only the difference of two elevations counts (METHODS B)."""
    here, there = one(ground, ground + rig, NONE), one(ground + shift, ground + rig + shift, NONE)
    assert here.height_m[0] == pytest.approx(rig, abs=1e-6)
    assert there.height_m[0] == pytest.approx(rig, abs=1e-6)


@given(st.floats(1, 3000), st.floats(0, 90))
def test_offshore_the_water_counts(water, datum):
    found = one(NONE, datum, water)
    assert found.height_m[0] == pytest.approx(datum + water)
    assert found.ground_m[0] == -water


def test_missing_rig_floor():
    """Common practice, no source: 5 m onshore, 25 m offshore, with 5 and 10 m (METHODS B)."""
    onshore, offshore = one(300.0, NONE, NONE), one(NONE, NONE, 120.0)
    assert (onshore.height_m[0], onshore.std_m[0]) == (ONSHORE_M, 5.0)
    assert (offshore.height_m[0], offshore.std_m[0]) == (120.0 + OFFSHORE_M, 10.0)
    assert onshore.datum_m[0] == 305.0
    assert onshore.assumed[0] and offshore.assumed[0]


def test_missing_ground_follows_from_the_rig_floor():
    found = one(NONE, 305.0, NONE)
    assert found.ground_m[0] == 300.0
    assert found.assumed[0] and not found.suspect[0]


@pytest.mark.parametrize("datum", [6.0, 1000.0])  # a height above ground; feet taken for metres
def test_a_rig_floor_that_can_not_be_is_not_used(datum):
    found = one(305.0, datum, NONE)
    assert found.suspect[0]
    assert (found.height_m[0], found.std_m[0]) == (ONSHORE_M, 5.0)


def test_a_sunken_ground_is_a_sea_floor():
    found = one(-340.0, 25.0, NONE)
    assert (found.water_m[0], found.height_m[0]) == (340.0, 365.0)
    assert found.from_ground[0]


def test_land_below_the_sea_is_land():
    """Wells stand at the Dead Sea, 430 m below sea level (from memory)."""
    found = one(-430.0, -424.0, NONE)
    assert (found.water_m[0], found.height_m[0]) == (0.0, 6.0)
