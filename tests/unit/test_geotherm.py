"""Promises of the marched geotherm."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from basinheat import geotherm
from basinheat.conductivity import conditions

K25 = np.array([2.0, 5.5, 3.0])
LAWS = [conditions.vosteen2003_sed, conditions.halite, conditions.vosteen2003_cryst]


def _march(surface, flow, thickness, step=25.0):
    return geotherm.march(
        surface,
        flow,
        thickness,
        lambda i, z, t: LAWS[i](K25[i] + 0 * t, t),
        lambda i, z: 1e-6 * z,
        step,
    )


@given(st.floats(0.03, 0.12), st.lists(st.floats(50.0, 2000.0), min_size=3, max_size=3))
def test_temperature_rises_with_depth_and_with_heat_flow(flow, thickness):
    temperature, _ = _march([5.0, 5.0], [flow, 1.1 * flow], thickness)
    assert np.all(np.diff(temperature, axis=1) > 0)
    assert np.all(temperature[1, 1:] > temperature[0, 1:])


def test_columns_do_not_know_each_other():
    thickness = np.array([[500.0, 800.0, 300.0], [100.0, 50.0, 2000.0]])
    both, flows = _march([4.0, 15.0], [0.05, 0.08], thickness)
    for i in range(2):
        alone, flow = _march([[4.0, 15.0][i]], [[0.05, 0.08][i]], thickness[i])
        assert alone[0] == pytest.approx(both[i], abs=1e-5)
        assert flow[0] == pytest.approx(flows[i])


def test_the_step_does_not_matter():
    coarse, _ = _march([10.0], [0.065], [1500.0, 1000.0, 1500.0], step=50.0)
    fine, _ = _march([10.0], [0.065], [1500.0, 1000.0, 1500.0], step=5.0)
    assert coarse == pytest.approx(fine, rel=1e-8)


def test_no_heat_no_gradient():
    temperature, flow = geotherm.march([7.0], [0.0], [1000.0], lambda i, z, t: 0 * t + 2.0)
    assert temperature[0].tolist() == [7.0, 7.0]
    assert flow[0].tolist() == [0.0, 0.0]


def test_isotherm_is_found_where_the_column_crosses_it():
    depth = np.array([0.0, 100.0, 300.0])
    temperature = np.array([[10.0, 20.0, 40.0], [10.0, 12.0, 14.0], [35.0, 40.0, 50.0]])
    found = geotherm.isotherm_depth(depth, temperature, 30.0)
    assert found[0] == pytest.approx(200.0)
    assert np.isnan(found[1:]).all()  # too cool everywhere; hotter already at the top
