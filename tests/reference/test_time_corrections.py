"""Corrections of timed readings against outside values (rows A4 to A16, METHODS section A).

Rows marked CALC were computed by the notes' author with other code than ours.
"""

from math import factorial

import numpy as np
import pytest
from mud_cooling import table_of, wells_of
from scipy.special import exp1, k0e, k1e

from basinheat.corrections import METHODS, correct
from basinheat.corrections.methods.brennand1984 import brennand_time
from basinheat.corrections.methods.bullard1947 import cooling_ratio, formation_degc
from basinheat.corrections.methods.cylinder_source import share_left
from basinheat.corrections.methods.generalised_horner import (
    adjusted_share,
    generalised_time,
    wall_temperature,
)
from basinheat.corrections.methods.horner import horner_time
from basinheat.corrections.methods.instantaneous_line_source import inverse_time
from basinheat.corrections.methods.time_lines import fit_line
from basinheat.corrections.methods.time_plot import rest
from basinheat.corrections.methods.waples2001 import factor as malay_factor
from basinheat.corrections.methods.waples2004 import added_k
from basinheat.corrections.methods.waples2004 import factor as campeche_factor
from basinheat.corrections.recovery.response import Mud, simulate
from basinheat.settings.heat import Correction

A3_H, A3_DEGC = np.array([[6.0, 12.0, 20.0]]), np.array([[82.0, 88.5, 91.9]])
RADIUS_M, KAPPA = 0.108, 1e-6
PER_HOUR = 3600 * KAPPA / RADIUS_M**2
ROCK, WALL = Mud(1.0, 1.0), Mud(1e-4, 1e3)  # the axis reads mud like rock, or the bare wall


def one(*values):
    """Arrays of one value each."""
    return [np.array([float(v)]) for v in values]


def share_found(mud, circulation_h, since_h, x):
    """Intercept on simulated readings, in units of the cooling; truth 1."""
    times = np.array([circulation_h * PER_HOUR]), np.array(since_h) * PER_HOUR
    return fit_line(x, 1.0 - simulate(mud, *times)).intercept[0]


def generalised(circulation_h, since_h):
    """Abscissae of one set of the generalised plot."""
    return generalised_time(circulation_h, np.array([since_h], float), RADIUS_M, KAPPA)


def inverted(transform, t):
    """Inverse Laplace transform (Stehfest 1970, Algorithm 368, Comm. ACM 13, 12 terms)."""
    half, total = 6, 0.0
    for i in range(1, 2 * half + 1):
        weight = sum(
            k**half * factorial(2 * k)
            / (factorial(half - k) * factorial(k) * factorial(k - 1) * factorial(i - k)
               * factorial(2 * k - i))
            for k in range((i + 1) // 2, min(i, half) + 1)
        )  # fmt: skip
        total += (-1.0) ** (i + half) * weight * transform(i * np.log(2) / t)
    return total * np.log(2) / t


def flux_of_constant_wall(s):
    """Transform of the heat drawn by a cylinder held at unit temperature."""
    return k1e(np.sqrt(s)) / (np.sqrt(s) * k0e(np.sqrt(s)))


@pytest.mark.parametrize(
    ("t", "formula", "exact"),
    [
        (0.5, None, 0.61685856),  # A4x_TD0.5
        (1, 0.8012892, 0.80214519),  # A4_TD1, A4x_TD1
        (5, 1.3604826, 1.362463),  # A4_TD5, A4x_TD5
        (10, 1.6485962, 1.6508948),  # A4_TD10, A4x_TD10
        (50, 2.386296, 2.3883692),  # A4_TD50, A4x_TD50
        (100, None, 2.7228946),  # A4x_TD100
    ],
)
def test_wall_of_a_cylinder_of_constant_flux(t, formula, exact):
    """The formula, and the exact solution by Laplace (Carslaw & Jaeger 1959, section 13.5)."""
    found = wall_temperature(np.array([float(t)]))[0]
    if formula is not None:
        assert found == pytest.approx(formula, rel=1e-6)
    laplace = inverted(lambda s: k0e(np.sqrt(s)) / (s**1.5 * k1e(np.sqrt(s))), t)
    assert laplace == pytest.approx(exact, rel=1e-3)
    assert found == pytest.approx(laplace, rel=2.5e-3)


@pytest.mark.parametrize(
    ("t", "formula", "exact"),
    [
        (0.5, 1.6759771, 1.6608084),  # A5_G0.5, A5x_G0.5
        (1, 1.5933601, None),  # A5_G1
        (10, None, 1.3862708),  # A5x_G10
        (50, 1.2786797, None),  # A5_G50
        (100, 1.2511892, 1.2450833),  # A5_G100, A5x_G100
    ],
)
def test_heat_of_a_cylinder_of_constant_temperature(t, formula, exact):
    """G is cumulative heat over time and final rate, to 1 %."""
    found = adjusted_share(np.array([float(t)]))[0]
    if formula is not None:
        assert found == pytest.approx(formula, rel=1e-6)
    heat = inverted(lambda s: flux_of_constant_wall(s) / s, t)
    laplace = heat / (t * inverted(flux_of_constant_wall, t))
    if exact is not None:
        assert laplace == pytest.approx(exact, rel=1e-3)
    assert found == pytest.approx(laplace, rel=1.2e-2)


def test_generalised_plot():
    """A5b_6, A5b_9, A5b_12: ln X; A5c: 70, 76, 80 degC give 97.833903 degC."""
    x = generalised(4.0, (6, 9, 12))
    assert x[0] == pytest.approx([0.2574399, 0.20065255, 0.16531668], rel=1e-6)
    line = fit_line(x, np.array([[70.0, 76.0, 80.0]]))
    assert line.intercept[0] == pytest.approx(97.833903, rel=1e-6)


@pytest.mark.parametrize(
    ("mud", "circulation_h", "since_h", "intercept"),
    [
        (ROCK, 4, (6, 9, 12), 1.0377107),  # A6_short_kutasov
        (ROCK, 4, (12, 18, 24), 1.0203127),  # A6_mid_kutasov
        (ROCK, 24, (6, 12, 24), 1.0416188),  # A6_long_kutasov
        (ROCK, 4, (24, 36, 48), 1.0086911),  # A6_late_kutasov
        (WALL, 4, (6, 9, 12), 1.0071698),  # A6w_short_kutasov
        (WALL, 4, (12, 18, 24), 1.0031918),  # A6w_mid_kutasov
        (WALL, 24, (6, 12, 24), 1.0076951),  # A6w_long_kutasov
        (WALL, 4, (24, 36, 48), 1.0011796),  # A6w_late_kutasov
    ],
)
def test_generalised_plot_on_simulated_recovery(mud, circulation_h, since_h, intercept):
    """A6 rows: truth 1."""
    found = share_found(mud, circulation_h, since_h, generalised(float(circulation_h), since_h))
    assert found == pytest.approx(intercept, rel=5e-3)
    assert found > 1.0


@pytest.mark.parametrize(
    ("circulation_h", "since_h", "intercept"),
    [
        (4, (6, 9, 12), 0.95929578),  # A6w_short_horner
        (4, (12, 18, 24), 0.98169523),  # A6w_mid_horner
        (24, (6, 12, 24), 0.93482133),  # A6w_long_horner
        (4, (24, 36, 48), 0.99267754),  # A6w_late_horner
    ],
)
def test_horners_plot_on_a_simulated_wall(circulation_h, since_h, intercept):
    """A6w rows: truth 1."""
    x = horner_time(float(circulation_h), np.array([since_h], float))
    found = share_found(WALL, circulation_h, since_h, x)
    assert found == pytest.approx(intercept, rel=5e-3)


@pytest.mark.parametrize(
    ("circulation_h", "since_h", "intercept"),
    [
        (4, (6, 9, 12), 0.92169123),  # A6_short_ics
        (24, (6, 12, 24), 0.81268701),  # A6_long_ics
        (4, (24, 36, 48), 0.99149576),  # A6_late_ics
    ],
)
def test_cylinder_source_on_simulated_recovery(circulation_h, since_h, intercept):
    """A6 rows: truth 1; circulation is left out, so low."""
    x = share_left(np.array([since_h], float), RADIUS_M, KAPPA)
    found = share_found(ROCK, circulation_h, since_h, x)
    assert found == pytest.approx(intercept, rel=5e-3)


def test_cylinder_source():
    """A7_2: exp(-a²/4κΔt) at 2 h; A7b: 78, 86 degC at 6, 12 h; METHODS A5: mud of -36.6 degC."""
    assert 1.0 - share_left(2.0, RADIUS_M, KAPPA) == pytest.approx(0.66697681, rel=1e-7)
    line = fit_line(share_left(np.array([[6.0, 12.0]]), RADIUS_M, KAPPA), np.array([[78.0, 86.0]]))
    assert line.intercept[0] == pytest.approx(94.558642, rel=1e-6)
    assert line.intercept[0] + line.slope[0] == pytest.approx(-36.6, abs=0.05)


def test_cylinder_source_refuses_mud_that_cannot_be():
    """METHODS A5: mud of -36.6 degC is a rejection flag."""
    rows = [{"temperature_degc": t, "since_circulation_h": h, "hole_radius_m": RADIUS_M}
            for t, h in ((78.0, 6.0), (86.0, 12.0))]  # fmt: skip
    done = correct(table_of(rows), wells_of("A"), Correction(order=["cylinder_source"]))
    assert done.rejected["sentence"].str.contains("mud would be cooler than the surface").all()
    assert len(done.rejected) == 2


@pytest.mark.parametrize(
    ("circulation_h", "ratio"), [(4, 0.23726503), (10, 0.30074028), (24, 0.38615186)]
)
def test_ratio_of_a_single_reading(circulation_h, ratio):
    """A8_4_12, A8_10_12, A8_24_12: Bullard's F, 12 h after circulation."""
    found = cooling_ratio(*one(circulation_h, 12, RADIUS_M), KAPPA)[0]
    assert found == pytest.approx(ratio, rel=1e-6)


def test_a_single_reading_by_the_formula():
    """A8b: 80 degC, mud of 45: 90.887499 degC."""
    ratio = cooling_ratio(*one(4, 12, RADIUS_M), KAPPA)
    assert formation_degc(*one(80, 45), ratio)[0] == pytest.approx(90.887499, rel=1e-6)


def test_the_logarithm_is_near_the_exponential_integrals():
    """A8c: the exact difference at 6 h is 10 % smaller; A8d: a²/κ = 3.24 h."""
    assert rest(3.24, RADIUS_M, KAPPA) == pytest.approx(1.0, rel=1e-6)
    after, since = rest(10.0, RADIUS_M, KAPPA), rest(6.0, RADIUS_M, KAPPA)
    exact = exp1(0.25 / after) - exp1(0.25 / since)
    ratio = cooling_ratio(*one(4, 6, RADIUS_M), KAPPA)[0]
    log = ratio * exp1(0.25 / rest(4.0, RADIUS_M, KAPPA))
    assert exact / log - 1.0 == pytest.approx(-0.10020684, rel=1e-4)


@pytest.mark.parametrize(
    ("circulation_h", "since_h", "share"),
    [(4, 12, 0.997), (4, 24, 0.9912878), (4, 48, 0.994), (24, 24, 0.96011443)],
)
def test_a_single_reading_on_simulated_recovery(circulation_h, since_h, share):
    """A6b_mid_bullard, A6b_long_bullard; the others as printed in METHODS A4. Mud 0, truth 1."""
    times = np.array([circulation_h * PER_HOUR]), np.array([since_h * PER_HOUR])
    reading = 1.0 - simulate(ROCK, *times)[0]
    ratio = cooling_ratio(*one(circulation_h, since_h, RADIUS_M), KAPPA)
    assert formation_degc(reading, np.zeros(1), ratio)[0] == pytest.approx(share, rel=5e-3)


def test_brennand_and_the_line_source_at_once():
    """A9 (coefficient from memory): 98.987547 degC; A10: 95.820513 degC; readings of A-ex3."""
    brennand = fit_line(brennand_time(5.0, A3_H), A3_DEGC)
    assert brennand.intercept[0] == pytest.approx(98.987547, rel=1e-6)
    at_once = fit_line(inverse_time(A3_H), A3_DEGC)
    assert at_once.intercept[0] == pytest.approx(95.820513, rel=1e-6)


def test_factor_of_campeche():
    """A15 (coefficients seen in the abstract): 5, 120 degC, 12 h, 4500 m: 150.4943 degC."""
    share, more = campeche_factor(np.array([12.0])), added_k(np.array([4500.0]))
    assert 5.0 + share[0] * 115.0 + more[0] == pytest.approx(150.4943, rel=1e-6)
    assert campeche_factor(np.array([62.0, 62.2, 500.0])) == pytest.approx([1, 1, 1], abs=1e-3)


def test_factor_of_malaysia():
    """A16 (from memory): 25, 95 degC, 10 h, 2000 m: 119.27951 degC."""
    share = malay_factor(*one(10, 2000))[0]
    assert 25.0 + share * 70.0 == pytest.approx(119.27951, rel=1e-6)


@pytest.mark.parametrize(
    ("name", "region", "depth_m", "degc", "surface_degc", "since_h", "expected"),
    [
        ("waples2004", "campeche", 4500.0, 120.0, 5.0, 12.0, 150.4943),  # A15
        ("waples2001", "malay_basin", 2000.0, 95.0, 25.0, 10.0, 119.27951),  # A16
    ],
)
def test_factors_from_end_to_end(name, region, depth_m, degc, surface_degc, since_h, expected):
    """The whole stage, at home; elsewhere it is refused."""
    row = {"depth_m": depth_m, "temperature_degc": degc, "since_circulation_h": since_h}
    wells, readings = wells_of("A", surface_degc=surface_degc), table_of([row])
    done = correct(readings, wells, Correction(order=[name], region=region)).estimates
    assert done["temperature_degc"][0] == pytest.approx(expected, rel=1e-6)
    away = correct(readings, wells, Correction(order=[name], region="oklahoma"))
    assert away.rejected["sentence"].str.contains(f"region is not {region}").all()


@pytest.mark.parametrize(
    ("name", "total_k"),
    [("cylinder_source", 7.0), ("generalised_horner", 7.0), ("waples2004", 8.0)],
)
def test_stated_totals(name, total_k):
    """METHODS A12 (common practice)."""
    assert METHODS[name].uncertainty.total_k == total_k


@pytest.mark.parametrize("name", ["brennand1984", "waples2001"])
def test_what_is_from_memory_is_no_default(name):
    """METHODS: a coefficient from memory may be chosen, and says so, but is no default."""
    assert "from memory" in METHODS[name].reference.status
    assert "never a default" in METHODS[name].reference.status
    assert name not in Correction().order
