"""Units in any spelling, exact where they are defined exactly."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from basinheat.errors import UserError
from basinheat.units import _USUAL, conversion, same_dimension


@pytest.mark.parametrize(
    ("spelling", "unit", "number", "expected"),
    [
        # international foot and inch (1959), Celsius and Fahrenheit scales: by definition
        ("ft", "m", 1.0, 0.3048),
        ("feet", "m", 10_000.0, 3048.0),
        ("in", "m", 8.5, 0.2159),
        ("degF", "degC", 212.0, 100.0),
        ("°F", "degC", 32.0, 0.0),
        ("F", "degC", -40.0, -40.0),
        ("C", "degC", 37.0, 37.0),
        ("K", "degC", 273.15, 0.0),
        ("min", "h", 90.0, 1.5),
        ("d", "h", 2.0, 48.0),
        ("percent", "", 25.0, 0.25),
        ("W/m/K", "W/(m K)", 2.5, 2.5),
        ("W m-1 K-1", "W/(m K)", 2.5, 2.5),
        ("W/m-K", "W/(m K)", 2.5, 2.5),
        ("μW/m³", "uW/m3", 1.2, 1.2),
        ("mW/m2", "W/m2", 60.0, 0.06),
        ("ftUS", "m", 3937.0, 1200.0),  # US survey foot: 1200/3937 m
    ],
)
def test_conversions(spelling, unit, number, expected):
    scale, offset = conversion(spelling, unit)
    assert number * scale + offset == pytest.approx(expected, rel=1e-14, abs=1e-12)


def test_a_foot_is_exact():
    assert conversion("feet", "m") == (0.3048, 0.0)


def test_a_temperature_difference_has_no_32():
    """A standard uncertainty of 1.8 degF is 1 K (METHODS 0: the classic error)."""
    assert conversion("degF", "K") == pytest.approx((1 / 1.8, 0.0))
    assert conversion("degC", "K") == pytest.approx((1.0, 0.0))


@pytest.mark.parametrize(("spelling", "unit"), list(_USUAL))
def test_the_usual_units_agree_with_the_library(spelling, unit):
    """The library of units is the outside check of the table that spares loading it."""
    import pint

    registry = pint.UnitRegistry(cache_folder=None)
    scale, offset = conversion(spelling, unit)
    for number in (0.0, 1.0, 451.0):
        expected = registry.Quantity(number, spelling).to(unit).magnitude
        assert number * scale + offset == pytest.approx(expected, rel=1e-12, abs=1e-9)


@pytest.mark.parametrize("spelling", ["furlogs", "kg", "", "degF", "__import__('os')", "m/"])
def test_what_is_no_length(spelling):
    with pytest.raises(UserError, match="choose one of m, ft, km"):
        conversion(spelling, "m")


def test_same_dimension():
    assert same_dimension("yard", "m")
    assert not same_dimension("degF", "m")
    with pytest.raises(ValueError, match="not a unit"):
        same_dimension("furlogs", "m")


@given(st.floats(-500.0, 1000.0))
def test_fahrenheit_there_and_back(degf):
    scale, offset = conversion("degF", "degC")
    degc = degf * scale + offset
    assert degc * 1.8 + 32.0 == pytest.approx(degf, abs=1e-9)
