"""The regression behind the local calibration, against values from outside."""

import csv

import numpy as np
import pytest
from shared import shared_file

from basinheat.corrections.calibration.robust import Errors, fit

# NIST Statistical Reference Datasets, Pontius (load cell calibration; NIST, Statistical
# Engineering Division, data and certified values typed from memory: data that were wrong would
# not give eight certified digits). Loads in steps of 150,000, twice.
PONTIUS = np.array([
    0.11019, 0.21956, 0.32949, 0.43899, 0.54803, 0.65694, 0.76562, 0.87487, 0.98292, 1.09146,
    1.20001, 1.30822, 1.41599, 1.52399, 1.63194, 1.73947, 1.84646, 1.95392, 2.06128, 2.16844,
    0.11052, 0.22018, 0.32939, 0.43886, 0.54798, 0.65739, 0.76596, 0.87474, 0.98300, 1.09150,
    1.20004, 1.30818, 1.41613, 1.52408, 1.63159, 1.73965, 1.84696, 1.95445, 2.06177, 2.16829,
])  # fmt: skip


def independent(n):
    """Pairs with perfect anchors, a well and a log each."""
    each, none = np.arange(n), np.zeros(n)
    return Errors(none, none + 1.0, each, none, each, 0.0)


def test_a_parabola_with_certified_coefficients():
    """Coefficients, their standard deviations and the residual one, as NIST certifies them."""
    load = np.tile(np.arange(1, 21) * 150_000.0, 2)
    scaled = load / 3.0e6
    found = fit(np.stack([scaled**0, scaled, scaled**2], 1), PONTIUS, independent(40), np.inf)
    scale = 3.0e6 ** np.arange(3)
    assert found.coefficients / scale == pytest.approx(
        [0.673565789473684e-3, 0.732059160401003e-6, -0.316081871345029e-14], rel=1e-7
    )
    assert np.sqrt(np.diag(found.covariance)) / scale == pytest.approx(
        [0.107938612033077e-3, 0.157817399981659e-9, 0.486652849992036e-16], rel=1e-7
    )
    assert found.scatter_k == pytest.approx(0.205177424076185e-3, rel=1e-7)


def test_prediction_of_a_parabola_through_seven_points():
    """METHODS A10, row A17c: at 2.2 km, scatter 0.5748 K, a prediction is good to 0.6602 K.

    The row does not list its seven depths: that they lie at equal steps, with 2.2 km half a step
    from the middle, is inferred, and whatever the step, such seven have one leverage.
    """
    with open(shared_file("reference", "check_values.csv"), encoding="utf-8") as file:
        row = next(row for row in csv.DictReader(file) if row["id"] == "A17c")
    depth = 2.4 + 0.4 * np.arange(-3, 4)
    design = np.stack([depth**0, depth, depth**2], axis=1)
    # A residual that no parabola sees: the third orthogonal polynomial of seven points.
    cubic = np.array([-1.0, 1.0, 1.0, 0.0, -1.0, -1.0, 1.0])
    residual = cubic * 0.5748 * 2.0 / np.sqrt(cubic @ cubic)
    found = fit(design, 10.825 + 3.0 * (depth - 2.2) + residual, independent(7), np.inf)
    place = np.array([1.0, 2.2, 2.2**2])
    assert place @ found.coefficients == pytest.approx(10.825, rel=1e-6)
    assert found.scatter_k == pytest.approx(0.5748, rel=1e-6)
    prediction = np.sqrt(found.scatter_k**2 + place @ found.covariance @ place)
    assert prediction == pytest.approx(float(row["value"]), rel=float(row["rel_tol"]))
