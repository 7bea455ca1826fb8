"""Corrections against outside values (rows A.. of the check values, METHODS section A).

Rows marked CALC were computed by the notes' author with other code than ours.
"""

import numpy as np
import pytest
from mud_cooling import table_of, wells_of

from basinheat.corrections import METHODS, correct
from basinheat.corrections.methods.forster1997 import correction_k as forster_k
from basinheat.corrections.methods.harrison1983 import VERTEX_M, parabola_k
from basinheat.corrections.methods.harrison1983 import correction_k as harrison_k
from basinheat.corrections.methods.horner import horner_time
from basinheat.corrections.methods.kehle_gregory import SUMMIT_FT, cubic_f
from basinheat.corrections.methods.kehle_gregory import correction_k as kehle_k
from basinheat.corrections.methods.time_lines import fit_line
from basinheat.corrections.recovery.response import Mud, simulate
from basinheat.settings.heat import Correction

# Published readings: P. Glover, Petrophysics MSc course notes, Aberdeen 2000, pp. 305-306.
GLOVER_H = np.array([[8.0 + 25 / 60, 11.0, 13.5, 16.5]])
GLOVER_F = np.array([[241.0, 257.0, 266.0, 273.0]])
A3_H, A3_DEGC = np.array([[6.0, 12.0, 20.0]]), np.array([[82.0, 88.5, 91.9]])
PER_HOUR = 3600e-6 / 0.108**2  # dimensionless time of an hour, 8 1/2 inch hole, 1e-6 m2/s
ROCK = Mud(1.0, 1.0)
WALL = Mud(1e-4, 1e3)  # no heat capacity: the axis has the wall's temperature


def horner(circulation_h, since_h, degc):
    """Horner line of one set."""
    return fit_line(horner_time(np.array([[circulation_h]]), since_h), degc)


@pytest.mark.parametrize(
    ("circulation_h", "intercept_f"), [(6.0, 317.38243), (3.0, 312.4), (12.0, 325.59557)]
)
def test_horner_of_glovers_readings(circulation_h, intercept_f):
    """A2, A2i_tc12 (CALC on published data); 312.4 for 3 h as printed in A1."""
    line = horner(circulation_h, GLOVER_H, GLOVER_F)
    assert line.intercept[0] == pytest.approx(intercept_f, rel=2e-4)


def test_horner_errors_of_glovers_readings():
    """A2c slope per decade, A2e its s.e., A2f residual, A2h 95 % half width (t = 4.302653)."""
    line = horner(6.0, GLOVER_H, GLOVER_F)
    assert line.slope[0] * np.log(10) == pytest.approx(-324.22766, rel=1e-4)
    assert line.residual_std[0] == pytest.approx(0.96454827, rel=1e-4)
    half_width = 4.302653 * line.residual_std[0] * line.intercept_factor[0]
    assert half_width == pytest.approx(10.308258, rel=1e-4)
    x = horner_time(6.0, GLOVER_H)
    slope_se = line.residual_std[0] / np.sqrt(((x - x.mean()) ** 2).sum())
    assert slope_se == pytest.approx(5.6843708, rel=1e-4)


def test_horner_of_three_readings():
    """A-ex3: 97.576 ± 0.202 degC; A3c spread 0.38299; A3d 1.5 K of reading are 2.3011 K."""
    line = horner(5.0, A3_H, A3_DEGC)
    assert line.intercept[0] == pytest.approx(97.576, abs=1e-3)
    assert line.residual_std[0] * line.intercept_factor[0] == pytest.approx(0.202, abs=1e-3)
    assert line.spread[0] == pytest.approx(0.38299225, rel=1e-4)
    assert 1.5 * line.intercept_factor[0] == pytest.approx(2.3011088, rel=1e-4)


def test_horner_of_two_readings_by_hand():
    """A-ex1: 96 degC at 7 h, 101 at 11 h, 5 h: T = 96 - m ln(12/7)."""
    slope = (101 - 96) / (np.log(16 / 11) - np.log(12 / 7))
    line = horner(5.0, np.array([[7.0, 11.0]]), np.array([[96.0, 101.0]]))
    assert line.intercept[0] == pytest.approx(96 - slope * np.log(12 / 7))


def test_horner_another_three():
    """A5d: 70, 76, 80 degC at 6, 9, 12 h, 4 h: 92.622574 degC."""
    line = horner(4.0, np.array([[6.0, 9.0, 12.0]]), np.array([[70.0, 76.0, 80.0]]))
    assert line.intercept[0] == pytest.approx(92.622574, rel=1e-6)


@pytest.mark.parametrize(
    ("mud", "circulation_h", "since_h", "share"),
    [
        (ROCK, 4, 6, 0.60616036),  # A6_short_fd
        (ROCK, 4, 12, 0.76035453),  # A6_short_fd3
        (ROCK, 4, 24, 0.86526006),  # A6_mid_fd3
        (ROCK, 24, 6, 0.4320721),  # A6_long_fd
        (ROCK, 24, 24, 0.72619724),  # A6_long_fd3
        (ROCK, 4, 48, 0.92809146),  # A6_late_fd3
        (WALL, 4, 6, 0.75050127),  # A6w_short_fd
        (WALL, 4, 12, 0.8422723),  # A6w_mid_fd
        (WALL, 24, 6, 0.54891182),  # A6w_long_fd
        (WALL, 4, 24, 0.90731881),  # A6w_late_fd
    ],
)
def test_simulated_recovery(mud, circulation_h, since_h, share):
    """A6 rows (CALC, finite volumes of another make): (T - T_mud) / (T_rock - T_mud)."""
    times = np.array([circulation_h * PER_HOUR]), np.array([since_h * PER_HOUR])
    assert 1.0 - simulate(mud, *times)[0, 0] == pytest.approx(share, rel=2e-3)


@pytest.mark.parametrize(
    ("circulation_h", "since_h", "intercept"),
    [
        (4, (6, 9, 12), 0.95727024),  # A6_short_horner
        (24, (6, 12, 24), 0.94513646),  # A6_long_horner
        (4, (24, 36, 48), 0.995718),  # A6_late_horner
    ],
)
def test_horner_is_biased_low_on_simulated_recovery(circulation_h, since_h, intercept):
    """A6 rows: the plain Horner intercept, truth 1."""
    since = np.array([since_h], float)
    left = simulate(ROCK, np.array([circulation_h * PER_HOUR]), since[0] * PER_HOUR)
    found = horner(float(circulation_h), since, 1.0 - left).intercept[0]
    assert found == pytest.approx(intercept, rel=5e-3)
    assert found < 1.0


def test_no_circulation_is_the_cylinder_at_rest():
    """A7 (closed form, Carslaw & Jaeger section 10.3): 1 - D = exp(-a²/4κΔt); A7_2 at 2 h."""
    since_h = np.array([2.0, 6.0, 24.0])
    share = 1.0 - simulate(ROCK, np.array([1e-9]), since_h * PER_HOUR)[0]
    assert share == pytest.approx(np.exp(-1.0 / (4 * since_h * PER_HOUR)), abs=2e-3)
    assert share[0] == pytest.approx(0.66697681, abs=2e-3)


@pytest.mark.parametrize(
    ("depth_m", "kelvin"),
    [(500, -7.9641585), (1000, -0.58865063), (1500, 5.6143887), (2000, 10.64496),
     (2500, 14.503062), (4000, 19.042558), (5000, 16.206547)],
)  # fmt: skip
def test_harrisons_parabola(depth_m, kelvin):
    """A11 rows: the raw parabola, coefficients verified to five digits."""
    assert parabola_k(np.array([float(depth_m)]))[0] == pytest.approx(kelvin, rel=1e-6)


def test_harrison_as_used():
    """A11v, A11m, A11mF: held beyond the vertex, 19.068 K = 34.3 °F; never below zero."""
    assert pytest.approx(3895.2905, rel=1e-6) == VERTEX_M
    below = harrison_k(np.array([200.0, 1000.0, 1500.0, VERTEX_M, 5000.0, 9000.0]))
    assert below == pytest.approx([0, 0, 5.6143887, 19.068268, 19.068268, 19.068268], rel=1e-6)
    assert below[-1] * 1.8 == pytest.approx(34.322883, rel=1e-5)


@pytest.mark.parametrize(
    ("depth_ft", "fahrenheit"),
    [(3000, 11.676017), (5000, 19.218875), (8000, 28.095152), (10000, 31.77), (12000, 33.156848),
     (15000, 30.021125)],
)  # fmt: skip
def test_kehles_cubic(depth_ft, fahrenheit):
    """A12 rows, °F of feet."""
    assert cubic_f(np.array([float(depth_ft)]))[0] == pytest.approx(fahrenheit, rel=1e-6)


def test_kehle_as_used():
    """A12m, A12mv, A12z: summit at 12 075 ft, zero at 233 ft; METHODS A9: 10 000 ft, 17.65 K."""
    assert pytest.approx(12074.833, rel=1e-4) == SUMMIT_FT
    depth_ft = np.array([100.0, 232.97708, 10000.0, SUMMIT_FT, 20000.0])
    top = 33.158753 / 1.8
    assert kehle_k(depth_ft * 0.3048) == pytest.approx([0, 0, 17.65, top, top], abs=2e-5)


def test_kehle_is_neither_metres_nor_celsius():
    """The two classic mistakes (METHODS 0): metres for feet, °F for kelvin; both are far off."""
    metres = np.array([2000.0])
    assert kehle_k(metres)[0] == pytest.approx(cubic_f(metres / 0.3048)[0] / 1.8)
    assert abs(kehle_k(metres)[0] - cubic_f(metres)[0] / 1.8) > 5.0
    assert abs(kehle_k(metres)[0] - cubic_f(metres / 0.3048)[0]) > 5.0


def test_forsters_line():
    """A14 rows and A14z."""
    depth = np.array([387.05882, 500.0, 1000.0, 2000.0])
    assert forster_k(depth) == pytest.approx([0.0, 1.92, 10.42, 27.42], abs=1e-6)


@pytest.mark.parametrize(
    ("name", "total_k"),
    [("equilibrium", 0.5), ("dst", 3.0), ("horner", 6.0), ("harrison1983", 8.0),
     ("kehle_gregory", 8.0), ("forster1997", 7.0), ("corrected", 5.0)],
)  # fmt: skip
def test_stated_totals(name, total_k):
    """METHODS A12, A9 (common practice): quadrature of the three parts is the total."""
    uncertainty = METHODS[name].uncertainty
    one = np.ones(1)
    parts = uncertainty.split(uncertainty.total_k * one, uncertainty.shared_k * one, 0.5)
    total = np.sqrt(parts[0] ** 2 + parts[1] ** 2 + uncertainty.shared_k**2)
    assert total[0] == pytest.approx(total_k)


@pytest.mark.parametrize(("radius_m", "low", "high"), [(0.05, 0.0, 1e-9), (0.108, 0.2, 4.0)])
def test_glovers_well_from_end_to_end(radius_m, low, high):
    """A2: 158.55 degC; A1: in a wide hole the plot falls short by up to some 4 K, which is added.

    In a narrow one every reading is late (κΔt/a² > 4) and the intercept stands as it is.
    """
    rows = [
        {"temperature_degc": (f - 32) / 1.8, "since_circulation_h": h, "circulation_h": 6.0,
         "hole_radius_m": radius_m, "depth_m": 3000.0}
        for f, h in zip(GLOVER_F[0], GLOVER_H[0], strict=True)
    ]  # fmt: skip
    found = correct(table_of(rows), wells_of("A"), Correction(order=["horner"])).estimates
    added = found["temperature_degc"][0] - (317.38243 - 32) / 1.8
    assert low - 1e-4 <= added <= high + 1e-4
    assert found["n_readings"][0] == 4
