"""Regional lines that are not tied to the surface: what they find, and what they cannot see.

The basins are made here, from heat flow, rock and noise of their own; nothing is compared with a
former run.
"""

import numpy as np
import pytest

from basinheat.corrections.judging.regional_line import fit_line

SEEDS = range(120)
BIAS_K = -4.0  # as much as plain Horner falls short of by at 60 K of cooling (METHODS A1, A6)


def basin(seed, wells=250, bias_k=0.0, slope_bias=0.0, wild=0.0):
    """Resistance, temperature above the surface, well and place of readings in an invented basin.

    Heat flow is a smooth field of 60 ± 8 mW/m² and 2 mW/m² from well to well; scatter of 3 K at a
    reading and 2 K common to a well are of the size METHODS A12 gives for time methods.
    """
    rng = np.random.default_rng(seed)
    xy = rng.uniform(0.0, 2e5, (wells, 2))
    phase = rng.uniform(0.0, 2 * np.pi, 2)
    flow = 60.0 + 8.0 * np.sin(xy[:, 0] / 7e4 + phase[0]) * np.cos(xy[:, 1] / 9e4 + phase[1])
    flow += rng.normal(0.0, 2.0, wells)
    well = np.repeat(np.arange(wells), rng.integers(1, 4, wells))
    x = rng.uniform(0.3, 1.9, well.size)  # 700 to 4,200 m of rock of 2.2 W/(m K), 1e3 m² K/W
    own = rng.normal(0.0, 2.0, wells)[well]
    y = flow[well] * x * (1.0 + slope_bias) + bias_k + own + rng.normal(0.0, 3.0, well.size)
    y += np.where(rng.random(well.size) < wild, rng.normal(0.0, 40.0, well.size), 0.0)
    return x, y, well, xy[well]


def lines(**options):
    """One line a seed."""
    return [fit_line(*basin(seed, **options)) for seed in SEEDS]


def alarmed(line):
    """The rule of the alarm: beyond two standard uncertainties and 2 K."""
    return abs(line.intercept) > max(2.0 * line.intercept_std, 2.0)


def test_silent_on_truth_and_honest_about_it():
    """Of 120 basins without a bias few alarm; 2 σ hold 95 in 100 (normal distribution)."""
    found = lines()
    z = np.array([line.intercept / line.intercept_std for line in found])
    assert np.mean([alarmed(line) for line in found]) <= 0.05
    assert 0.90 <= np.mean(np.abs(z) < 2.0) <= 0.99
    assert abs(np.mean([line.intercept for line in found])) < 0.3


def test_a_planted_bias_of_the_size_of_horners_is_caught():
    found = lines(bias_k=BIAS_K)
    assert np.mean([alarmed(line) for line in found]) >= 0.95
    assert np.mean([line.intercept for line in found]) == pytest.approx(BIAS_K, abs=0.3)


def test_a_bias_in_proportion_to_resistance_is_not_seen():
    """The limit that the docstring tells of: heat flow takes it."""
    found = lines(slope_bias=-0.1)
    assert np.mean([alarmed(line) for line in found]) <= 0.05
    slopes = [line.slope for line in found]
    assert np.mean(slopes) == pytest.approx(
        0.9 * np.mean([line.slope for line in lines()]), rel=0.01
    )


def test_wild_readings_hardly_move_it():
    """One in twenty off by some 40 K: least squares alone would err by far more."""
    error = [
        abs(fit_line(*basin(seed, wild=0.05)).intercept - fit_line(*basin(seed)).intercept)
        for seed in range(20)
    ]
    assert np.median(error) < 0.5


@pytest.mark.parametrize("scale", [1.8, 0.1])
def test_scales_and_order_change_nothing(scale):
    """Another unit of temperature or resistance, other axes, another order of rows."""
    x, y, well, xy = basin(3)
    line = fit_line(x, y, well, xy)
    other = fit_line(x, scale * y, well, xy)
    assert other.intercept == pytest.approx(scale * line.intercept, rel=1e-6)
    assert other.intercept_std == pytest.approx(scale * line.intercept_std, rel=1e-6)
    wider = fit_line(scale * x, y, well, 10.0 * xy + 5e5)
    assert wider.intercept == pytest.approx(line.intercept, rel=1e-6)
    assert wider.slope == pytest.approx(line.slope / scale, rel=1e-6)
    order = np.random.default_rng(0).permutation(x.size)
    again = fit_line(x[order], y[order], well[order], xy[order])
    assert again.intercept == pytest.approx(line.intercept, rel=1e-8)
    assert again.influence == pytest.approx(line.influence[order], rel=1e-6)


def test_influence_is_what_a_change_of_data_does():
    """A line is linear in its data but for the weights: a constant moves it by that constant."""
    x, y, well, xy = basin(5)
    line = fit_line(x, y, well, xy)
    assert line.influence.sum() == pytest.approx(1.0)
    assert line.influence @ x == pytest.approx(0.0, abs=1e-9)
    assert line.influence @ y == pytest.approx(line.intercept)


def test_a_wells_readings_count_together():
    """Each reading ten times over is no more evidence."""
    x, y, well, xy = basin(8, wells=40)
    line = fit_line(x, y, well, xy)
    many = fit_line(*(np.repeat(values, 10, axis=0) for values in (x, y, well, xy)))
    assert many.intercept == pytest.approx(line.intercept, abs=0.05)
    assert many.intercept_std > 0.9 * line.intercept_std


@pytest.mark.parametrize("wells", [1, 7])
def test_few_wells_have_no_line(wells):
    assert fit_line(*basin(1, wells=wells)) is None


def test_one_depth_has_no_line():
    x, y, well, xy = basin(1)
    assert fit_line(np.ones_like(x), y, well, xy) is None
