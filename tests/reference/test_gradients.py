"""Gradients and surface temperature against outside values (rows C.., D.. of the check values).

Rows D2-D7 rest on a set of readings that the notes do not print, so they can't be repeated; the
closed forms beside them are tested on readings of our own.
"""

import numpy as np
import pytest

from basinheat.gradient import fit_lines
from basinheat.surface import linear

DEPTH = np.array([0.9, 1.42, 2.2, 2.51, 3.1])
DEGC = np.array([38.2, 54.0, 79.0, 87.3, 104.0])
STD = np.array([4.0, 3.0, 5.0, 5.0, 3.0])
ONE = np.zeros(5, int)


def test_surface_temperature_falls_with_elevation():
    """C2: 12 degC at 300 m, 6.5 K/km (standard atmosphere): 6.15 degC at 1200 m."""
    at_sea_level = 12 + 6.5 * 0.3
    assert linear(np.array([1200.0]), at_sea_level, 6.5) == pytest.approx(6.15, rel=1e-9)


def test_single_point():
    """D1: 104.0 degC at 3105 m above 11 degC: 29.951691 K/km.

    The error 2.597 K/km, as printed, is that of (s_T^2 + s_T0^2)/z^2 for the notes' own sigmas;
    here the identity is checked with 7.9 K and 1.6 K.
    """
    line = fit_lines(
        np.zeros(2, int), 1, np.array([0.0, 3.105]), np.array([11.0, 104.0]), np.array([1.6, 7.9])
    )
    assert line.slope == pytest.approx(29.951691, rel=1e-7)
    assert np.sqrt(line.covariance[0, 1, 1]) == pytest.approx(np.hypot(7.9, 1.6) / 3.105)


def test_interval_gradient():
    """D8, D8s: 33.3 K between 1420 and 2510 m, sigmas 3 and 5 K: 30.550459 +- 5.3494972 K/km."""
    line = fit_lines(
        np.zeros(2, int), 1, np.array([1.42, 2.51]), np.array([54.0, 87.3]), np.array([3.0, 5.0])
    )
    assert line.slope == pytest.approx(30.550459, rel=1e-7)
    assert np.sqrt(line.covariance[0, 1, 1]) == pytest.approx(5.3494972, rel=1e-7)


def test_unanchored_is_weighted_least_squares():
    """The form of D2: numpy's polynomial fit with weights 1/sigma, known sigmas."""
    line = fit_lines(ONE, 1, DEPTH, DEGC, STD)
    slope, intercept = np.polyfit(DEPTH, DEGC, 1, w=1 / STD)
    assert (line.slope[0], line.intercept[0]) == pytest.approx((slope, intercept))
    _, covariance = np.polyfit(DEPTH, DEGC, 1, w=1 / STD, cov="unscaled")
    assert line.covariance[0, ::-1, ::-1] == pytest.approx(covariance)


def test_hard_anchor():
    """The form of D4: G = sum w z (T - T0) / sum w z^2, its error with T0's as a shared one."""
    w = 1 / STD**2
    surface, surface_std = 11.0, 1.5
    slope = (w * DEPTH * (DEGC - surface)).sum() / (w * DEPTH**2).sum()
    std = np.sqrt(
        1 / (w * DEPTH**2).sum() + ((w * DEPTH).sum() / (w * DEPTH**2).sum()) ** 2 * surface_std**2
    )
    group, x = np.zeros(6, int), np.append(DEPTH, 0.0)
    tight = np.append(STD, 0.0)
    line = fit_lines(group, 1, x, np.append(DEGC, surface), tight)
    moved = fit_lines(group, 1, x, np.append(DEGC, surface + surface_std), tight)
    assert line.slope == pytest.approx(slope, rel=1e-4)
    shift = moved.slope - line.slope
    assert np.sqrt(line.covariance[0, 1, 1] + shift[0] ** 2) == pytest.approx(std, rel=1e-4)
