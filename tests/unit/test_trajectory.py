"""Deviated holes: geometry of straight lines and circles."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from hypothesis.extra.numpy import arrays

from basinheat.trajectory import displacement, position, survey, tangents

angles = st.floats(0.0, 120.0)


def test_a_straight_hole():
    hole = survey(np.zeros(3, int), np.array([0.0, 500, 2000]), np.full(3, 30.0), np.full(3, 90.0))
    place, beyond = position(hole, np.zeros(3, int), np.array([100.0, 1000.0, 2500.0]))
    assert place[:, 2] == pytest.approx(np.array([100, 1000, 2500]) * np.cos(np.pi / 6))
    assert place[:, 1] == pytest.approx(np.array([50.0, 500.0, 1250.0]))
    assert beyond.tolist() == [False, False, True]


def test_inside_an_arc_the_hole_is_the_arc():
    """Quarter circle of radius r = L 2/pi: at a third of the way TVD is r sin(30 degrees)."""
    hole = survey(np.zeros(2, int), np.array([0.0, 300.0]), np.array([0.0, 90.0]), np.zeros(2))
    place, _ = position(hole, np.zeros(1, int), np.array([100.0]))
    radius = 600.0 / np.pi
    assert place[0] == pytest.approx([radius * (1 - np.cos(np.pi / 6)), 0.0, radius / 2.0])


@settings(max_examples=50, deadline=None)
@given(arrays(float, 8, elements=angles), arrays(float, 8, elements=st.floats(0.0, 360.0)))
def test_a_station_on_the_arc_changes_nothing(tilt, heading):
    """Cutting each arc in two at its own midpoint leaves the hole where it was."""
    depth = np.arange(8) * 100.0
    hole = survey(np.zeros(8, int), depth, tilt, heading)
    middle, _ = position(hole, np.zeros(7, int), depth[1:] - 50.0)
    first, second = hole.tangent[:-1], hole.tangent[1:]
    turned = first + second
    turned /= np.linalg.norm(turned, axis=1, keepdims=True)
    again = hole.position_m[:-1] + displacement(np.full(7, 50.0), first, turned)
    assert middle == pytest.approx(again, abs=1e-6)


@given(arrays(float, 6, elements=angles), arrays(float, 6, elements=st.floats(0.0, 360.0)))
def test_never_deeper_than_long(tilt, heading):
    depth = np.arange(6) * 200.0
    hole = survey(np.zeros(6, int), depth, tilt, heading)
    assert (hole.position_m[:, 2] <= depth + 1e-9).all()
    assert (np.linalg.norm(hole.position_m, axis=1) <= depth + 1e-9).all()


def test_many_holes_at_once_are_each_alone():
    rng = np.random.default_rng(3)
    holes = [
        (np.sort(rng.uniform(0, 3000, n)), rng.uniform(0, 60, n), rng.uniform(0, 360, n))
        for n in (2, 5, 9)
    ]
    number = np.repeat([0, 1, 5], [2, 5, 9])
    together = survey(number, *(np.concatenate(parts) for parts in zip(*holes, strict=True)))
    wanted = rng.uniform(0, 4000, 300)
    which = rng.choice([0, 1, 5], 300)
    place, beyond = position(together, which, wanted)
    for label, parts in zip((0, 1, 5), holes, strict=True):
        alone = survey(np.zeros(len(parts[0]), int), *parts)
        own, own_beyond = position(
            alone, np.zeros((which == label).sum(), int), wanted[which == label]
        )
        assert place[which == label] == pytest.approx(own, abs=1e-8)
        assert (beyond[which == label] == own_beyond).all()


def test_above_the_first_station_the_hole_is_vertical():
    hole = survey(np.zeros(1, int), np.array([1000.0]), np.array([0.0]), np.array([np.nan]))
    place, _ = position(hole, np.zeros(1, int), np.array([400.0]))
    assert place[0] == pytest.approx([0.0, 0.0, 400.0])


def test_tangents_are_units():
    grid = np.meshgrid(np.linspace(0, 180, 7), np.linspace(0, 360, 9))
    assert np.linalg.norm(tangents(*grid), axis=-1) == pytest.approx(np.ones((9, 7)))
