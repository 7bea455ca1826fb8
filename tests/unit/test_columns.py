"""Rock columns: slabs, integration, the mean section, smoothed heat flow."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from basinheat import geotherm
from basinheat.conductivity import conditions, porosity
from basinheat.rock import regionalflow, section
from basinheat.rock.columns import Columns, Parts, at_depths, integrate
from basinheat.rock.slabs import cut, overlapping

SED, SALT = conditions.LAW_NAMES.index("vosteen2003_sed"), conditions.LAW_NAMES.index("halite")


def _columns(deepest, tops, k25, laws, phi=None, heat=1e-6, step=50.0):
    """Columns of layers that reach from each top to the next and to the end, one group a layer."""
    n = len(deepest)
    bases = [*tops[1:], 1e5]
    well = np.repeat(np.arange(n), len(tops))
    slabs = cut(np.asarray(deepest), step, well, np.tile(tops, n), np.tile(bases, n))
    layer = slabs.layer % len(tops)
    surface = np.zeros(len(tops)) if phi is None else np.asarray(phi)
    parts = Parts(
        np.arange(len(layer)),
        np.ones(len(layer)),
        np.asarray(k25)[layer],
        porosity.athy_mean(slabs.top_m, slabs.base_m, surface[layer], 5e-4),
        np.asarray(laws)[layer],
        np.full(len(layer), heat),
        layer,
    )
    return Columns(slabs, parts, len(tops))


def test_slabs_fill_every_column_without_gap():
    slabs = cut(
        np.array([330.0, 50.0, 1000.0]),
        50.0,
        np.array([0, 0, 2]),
        np.array([0.0, 120.0, 333.3]),
        np.array([77.7, 200.0, 5000.0]),
    )
    for i, deepest in enumerate((350.0, 50.0, 1000.0)):
        mine = slabs.well == i
        assert slabs.top_m[mine][0] == 0.0
        assert slabs.base_m[mine][-1] == deepest
        assert np.array_equal(slabs.top_m[mine][1:], slabs.base_m[mine][:-1])
    assert slabs.thickness_m.max() <= 50.0 + 1e-9 and slabs.thickness_m.min() > 0.0
    own = np.bincount(slabs.layer[slabs.layer >= 0], slabs.thickness_m[slabs.layer >= 0])
    assert own == pytest.approx([77.7, 80.0, 1000.0 - 333.3])


def test_a_depth_is_found_in_its_slab():
    slabs = cut(
        np.array([200.0, 200.0]), 50.0, *(np.array([], dtype=t) for t in (int, float, float))
    )
    found = slabs.at(np.array([0, 1, 1, 1]), np.array([0.0, 0.0, 50.0, 50.1]))
    assert found.tolist() == [0, 4, 4, 5]


def test_of_overlapping_layers_the_upper_stays():
    well = np.array([0, 0, 0, 0, 1, 1])
    top = np.array([0.0, 50.0, 90.0, 200.0, 0.0, 100.0])
    base = np.array([100.0, 95.0, 200.0, 300.0, 100.0, 200.0])
    assert overlapping(well, top, base).tolist() == [False, True, True, False, False, False]


def test_matches_an_independent_integration():
    """The marched geotherm (Runge-Kutta in depth) of the same rock gives the same temperature."""
    tops, k25, laws, phi = [0.0, 1200.0, 1900.0], [2.2, 5.7, 4.5], [SED, SALT, SED], [0.6, 0.0, 0.5]
    columns = _columns([3000.0, 3000.0], tops, k25, laws, phi, step=25.0)
    surface, flow = np.array([4.0, 15.0]), np.array([0.045, 0.080])
    integrals = integrate(columns, surface, flow)
    base = np.array([1200.0, 1900.0, 3000.0])
    well, depth = np.repeat([0, 1], 3), np.tile(base, 2)
    resistance, radiogenic = at_depths(columns, integrals, well, depth)
    found = surface[well] + flow[well] * resistance.sum(1) - radiogenic.sum(1)

    def conductivity(i, z, t):
        matrix = conditions.at_temperature(np.full(len(t), k25[i]), t, np.full(len(t), laws[i]))
        share = porosity.athy(tops[i] + z, phi[i], 5e-4)
        return matrix ** (1 - share) * conditions.water(t) ** share

    expected, _ = geotherm.march(
        surface, flow, np.diff([0.0, *base]), conductivity, lambda i, z: 1e-6 * z
    )
    assert found.reshape(2, 3) == pytest.approx(expected[:, 1:], rel=2e-4)


@settings(max_examples=30, deadline=None)
@given(
    # in whole millimetres: depths closer than that are one
    st.lists(st.integers(20_000, 3_000_000), min_size=2, max_size=6, unique=True),
    st.floats(0.02, 0.12),
    st.floats(0.0, 0.5),
)
def test_resistance_adds_up_and_temperature_rises(depths, flow, phi):
    columns = _columns([3000.0], [0.0, 800.0], [2.5, 4.0], [SED, SED], [phi, phi])
    integrals = integrate(columns, np.array([10.0]), np.array([flow]))
    z = np.sort(depths) / 1000.0
    resistance, radiogenic = at_depths(columns, integrals, np.zeros(len(z), int), z)
    temperature = 10 + flow * resistance.sum(1) - radiogenic.sum(1)
    assert np.all(np.diff(temperature) > 0) and temperature[0] > 10
    assert np.all(np.diff(resistance, axis=0) >= -1e-9)
    # in each slab the temperature at the middle is that of the sums
    middle, lost = at_depths(columns, integrals, columns.slabs.well, columns.slabs.middle_m)
    assert 10 + flow * middle.sum(1) - lost.sum(1) == pytest.approx(
        integrals.temperature_degc, abs=5e-3
    )


def test_resistance_is_linear_in_thickness_where_rock_is_the_same():
    columns = _columns([2000.0], [0.0], [2.5], [0])
    integrals = integrate(columns, np.array([10.0]), np.array([0.06]))
    z = np.array([37.0, 370.0, 1999.0])
    resistance, radiogenic = at_depths(columns, integrals, np.zeros(3, int), z)
    assert resistance[:, 0] == pytest.approx(z / 2.5)
    assert radiogenic[:, 0] == pytest.approx(1e-6 * z**2 / 2 / 2.5)


def test_columns_do_not_know_each_other():
    surface, flow = np.array([3.0, 12.0]), np.array([0.05, 0.09])
    both = _columns([1000.0, 2600.0], [0.0, 700.0], [2.0, 3.5], [SED, SED], [0.5, 0.3])
    together = integrate(both, surface, flow)
    for i, deepest in enumerate((1000.0, 2600.0)):
        one = _columns([deepest], [0.0, 700.0], [2.0, 3.5], [SED, SED], [0.5, 0.3])
        alone = integrate(one, surface[[i]], flow[[i]])
        mine = both.slabs.well == i
        assert together.resistance_above[mine] == pytest.approx(alone.resistance_above, rel=1e-6)
        assert together.radiogenic_above[mine] == pytest.approx(alone.radiogenic_above, rel=1e-6)


def test_cold_rock_conducts_better_and_resists_less():
    columns = _columns([3000.0], [0.0], [3.5], [SED])
    warm, cold = (
        integrate(columns, np.array([10.0]), np.array([q])).resistance.sum() for q in (0.09, 0.03)
    )
    assert cold < warm


def test_mean_section_weighs_by_thickness_and_knows_its_end():
    """Bins of 100 m: two wells of rock 0, one of rock 1; the deepest is reached by one only."""
    mean = section.mean_section(
        np.array([0.0, 0.0, 0.0, 150.0]),
        np.array([200.0, 200.0, 150.0, 300.0]),
        np.array([0, 0, 1, 0]),
        2,
        100.0,
        enough=3,
    )
    assert mean.share == pytest.approx(np.array([[2 / 3, 1 / 3], [5 / 6, 1 / 6], [1.0, 0.0]]))
    assert mean.known_m == 200.0
    assert mean.at(np.array([50.0, 950.0])) == pytest.approx(np.array([[2 / 3, 1 / 3], [1.0, 0.0]]))


def test_bins_without_layers_take_the_nearest():
    mean = section.mean_section(
        np.array([300.0]), np.array([400.0]), np.array([1]), 2, 100.0, enough=1
    )
    assert mean.share[:, 1].tolist() == [1.0] * 4


def test_spread_between_wells_is_the_sample_covariance():
    rng = np.random.default_rng(3)
    own = rng.multivariate_normal([0.4, 0.5], [[0.01, 0.004], [0.004, 0.02]], 50)
    found = section.spread(own, np.array([0.4, 0.5]), 250.0)
    assert found == pytest.approx(np.cov(own.T))


def test_spread_without_wells_is_assumed_and_never_negative():
    own = np.full((4, 3), np.nan)
    own[:, 0] = [0.3, 0.4, 0.5, 0.6]
    found = section.spread(own, np.array([0.45, 0.5, 0.6]), 250.0)
    assert np.diag(found)[1:] == pytest.approx((0.15 * np.array([0.5, 0.6])) ** 2, rel=0.05)
    assert np.linalg.eigvalsh(found).min() >= -1e-15


def test_smoothed_heat_flow_is_free_of_the_wells_own():
    rng = np.random.default_rng(4)
    xy, flow = rng.uniform(0, 1e5, (30, 2)), rng.normal(0.06, 0.01, 30)
    before = regionalflow.smoothed(xy, flow, 0.06)
    flow[7] = 0.2
    after = regionalflow.smoothed(xy, flow, 0.06)
    assert after[7] == before[7]
    assert np.any(after != before)
    assert np.all((after > 0.03) & (after < 0.12))


def test_smoothed_heat_flow_of_few_wells_is_the_regional_one():
    flow = regionalflow.smoothed(np.zeros((3, 2)), np.array([0.09, np.nan, np.nan]), 0.06)
    assert flow.tolist() == [0.06] * 3
