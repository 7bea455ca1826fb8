"""Methods of timed readings: what they refuse, how they scale, and how they err on known truth."""

import numpy as np
import pandas as pd
import pytest
from hypothesis import given
from hypothesis import strategies as st
from mud_cooling import judged, left_on_axis, make_basin, table_of, wells_of

from basinheat.corrections import METHODS, correct
from basinheat.corrections.methods.brennand1984 import PLOT as BRENNAND
from basinheat.corrections.methods.bullard1947 import cooling_ratio, formation_degc
from basinheat.corrections.methods.cylinder_source import PLOT as CYLINDER
from basinheat.corrections.methods.generalised_horner import PLOT as GENERALISED
from basinheat.corrections.methods.horner import PLOT as HORNER
from basinheat.corrections.methods.instantaneous_line_source import PLOT as AT_ONCE
from basinheat.corrections.methods.time_lines import fit_line
from basinheat.settings.heat import Correction

PLOTS = (HORNER, GENERALISED, CYLINDER, AT_ONCE, BRENNAND)
TIMED = [
    *(plot.name for plot in PLOTS),
    *("bullard1947", "lachenbruch_brewer1959", "waples2001", "waples2004"),
]
RADIUS_M, KAPPA = 0.108, 1e-6
every_plot = pytest.mark.parametrize("plot", PLOTS, ids=[plot.name for plot in PLOTS])


def order_of(name):
    """Settings with one method alone, in its region."""
    regions = METHODS[name].regions
    return Correction(order=[name], region=regions[0] if regions else None)


@pytest.fixture(scope="module")
def basin():
    """A basin in which half of the mud is noted and every fourth reading lies deep."""
    made = make_basin(5, n_wells=60, runs=(1, 2, 3), capacity=1.0, conductivity=1.0)
    readings = made.readings.copy()
    mud = np.where(np.arange(len(readings)) % 2 == 0, readings["temperature_degc"] - 15.0, np.nan)
    readings["mud_temperature_degc"] = mud
    readings["drilling_h"] = 6.0 + readings["circulation_h"].fillna(4.0)
    deep = readings["depth_m"] > 3000.0
    readings.loc[deep, "depth_m"] = readings.loc[deep, "depth_m"] + 1200.0
    return readings, made.wells


@pytest.mark.parametrize("name", TIMED)
def test_any_scale_of_temperature_gives_the_same(basin, name):
    """All temperatures, mud and surface to aT + b (°F, say): estimates follow.

    But for what waples2004 adds for depth, which is in kelvin.
    """
    a, b = 1.8, 32.0
    readings, wells = basin
    changed = readings.assign(
        temperature_degc=a * readings["temperature_degc"] + b,
        mud_temperature_degc=a * readings["mud_temperature_degc"] + b,
        temperature_std_k=a * readings["temperature_std_k"],
    )
    warmer = wells.assign(surface_temperature_degc=a * wells["surface_temperature_degc"] + b)
    before = correct(readings, wells, order_of(name)).estimates.set_index("reading_ids")
    after = correct(changed, warmer, order_of(name)).estimates.set_index("reading_ids")
    assert len(before) > 5
    both = before.index.intersection(after.index)
    assert len(both) >= 0.95 * max(len(before), len(after)), "hardly any crosses a threshold"
    before, after = before.loc[both], after.loc[both]
    expected = a * before["temperature_degc"] + b
    if name == "waples2004":
        expected -= (a - 1.0) * -0.001391 * (before["depth_m"] - 4498.0)
    assert after["temperature_degc"].to_numpy() == pytest.approx(expected.to_numpy(), abs=0.02)


@pytest.mark.parametrize("name", TIMED)
def test_the_order_of_rows_changes_nothing(basin, name):
    readings, wells = basin
    rng = np.random.default_rng(2)
    shuffled = readings.iloc[rng.permutation(len(readings))]
    first = correct(readings, wells, order_of(name)).estimates
    again = correct(shuffled, wells.iloc[::-1], order_of(name)).estimates
    pd.testing.assert_frame_equal(again, first, check_exact=True)


@pytest.mark.parametrize("name", TIMED)
def test_never_cooler_than_the_warmest_reading(basin, name):
    """METHODS Q21. Horner's plot of scattered readings may be, within their error."""
    found = correct(*basin, order_of(name)).estimates
    slack = 3.0 if name == "horner" else 1e-9
    shift = 0.05 * 45.0  # readings are carried over 45 m at most to the depth of the set
    assert (found["correction_k"] >= -slack - shift).all()
    assert (found["temperature_std_k"] > 0.0).all()
    assert (found[f"loading_method:{name}"] >= 1.9).all()


def test_held_out_wells_do_not_teach_the_guess_of_mud(basin):
    readings, wells = basin
    out = wells["well"].tolist()[::4]
    mine = readings["well"].isin(out)
    hotter = readings.assign(temperature_degc=readings["temperature_degc"] + 25.0 * mine)
    first, second = (
        correct(table, wells, order_of("bullard1947"), out).estimates.query("well not in @out")
        for table in (readings, hotter)
    )
    pd.testing.assert_frame_equal(first, second)


@every_plot
@given(st.lists(st.floats(4.0, 60.0), min_size=2, max_size=5, unique=True),
       st.floats(1.0, 20.0), st.floats(0.3, 3.0), st.floats(0.2, 5.0))  # fmt: skip
def test_other_units_of_time_and_length_change_nothing(plot, hours, t_c, length, time):
    """Intercepts of the same hole in hours and seconds, metres and feet."""
    since = np.sort(np.array([hours]))
    degc = np.linspace(70.0, 90.0, since.size)[None]
    if np.ptp(since) < 0.5:
        return
    radius = np.array([[RADIUS_M]])
    one, other = (
        fit_line(
            plot.abscissa(np.array([[t_c]]) * t, since * t, radius * x, KAPPA * x**2 / t), degc
        )
        for t, x in ((1.0, 1.0), (time, length))
    )
    assert other.intercept[0] == pytest.approx(one.intercept[0], rel=1e-6)


@every_plot
def test_the_abscissa_ends_at_zero_and_falls(plot):
    since = np.array([[2.0, 5.0, 10.0, 50.0, 1e9]])
    x = plot.abscissa(np.array([[4.0]]), since, np.array([[RADIUS_M]]), KAPPA)[0]
    assert (np.diff(x) < 0.0).all()
    assert abs(x[-1]) < 1e-6


def test_a_single_reading_needs_less_later_and_more_with_colder_mud():
    one = np.ones(4)
    ratio = cooling_ratio(4.0 * one, np.array([6.0, 12.0, 24.0, 1e6]), RADIUS_M * one, KAPPA)
    found = formation_degc(80.0 * one, 45.0 * one, ratio)
    assert (np.diff(found) < 0.0).all()
    assert found[-1] == pytest.approx(80.0, abs=1e-3)
    assert (formation_degc(80.0 * one, 35.0 * one, ratio) >= found).all()


def single(**changes):
    """Readings of one well, 12 h after 4 h of circulation, mud noted."""
    row = {"temperature_degc": 80.0, "since_circulation_h": 12.0, "circulation_h": 4.0,
           "mud_temperature_degc": 45.0, "hole_radius_m": RADIUS_M}  # fmt: skip
    return table_of([row | changes])


@pytest.mark.parametrize(
    ("changes", "surface", "reason"),
    [
        ({"since_circulation_h": np.nan}, 10.0, "no timed reading"),
        ({"mud_temperature_degc": np.nan}, np.nan, "neither the mud's temperature is noted nor"),
        ({"since_circulation_h": 2.0}, 10.0, "too early for a line source"),
        ({"circulation_h": 60.0, "since_circulation_h": 4.0}, 10.0, "half of the cooling is left"),
        ({"mud_temperature_degc": 85.0}, 10.0, "the mud is not cooler than the reading"),
    ],
)
def test_bullard_refuses(changes, surface, reason):
    wells = wells_of("A", surface_degc=surface)
    done = correct(single(**changes), wells, order_of("bullard1947"))
    assert done.rejected["sentence"].str.contains(reason).tolist() == [True]


def test_long_drilling_cools_more_than_its_last_circulation():
    """Against simulated radial conduction, the wall at mud temperature as long as drilling went."""
    drilled, since, mud, formation = 60.0, 24.0, 45.0, 90.0
    left = left_on_axis(drilled, np.array([since]), RADIUS_M, KAPPA, 1.0, 1.0)[0]
    reading = formation - left * (formation - mud)
    row = {"temperature_degc": reading, "since_circulation_h": since, "drilling_h": drilled}
    long, short = (
        correct(single(**row), wells_of("A"), order_of(name)).estimates.iloc[0]
        for name in ("lachenbruch_brewer1959", "bullard1947")
    )
    assert long["temperature_degc"] == pytest.approx(formation, abs=0.03 * (formation - reading))
    assert formation - short["temperature_degc"] > 0.3 * (formation - reading)


def test_without_a_time_of_drilling_another_method_must_serve():
    done = correct(single(), wells_of("A"), order_of("lachenbruch_brewer1959"))
    assert done.rejected["sentence"].str.contains("time of drilling is not noted").tolist() == [
        True
    ]


def test_bullard_says_what_it_assumed_and_is_surer_with_noted_mud():
    """METHODS A4: F/(1-F) sigma(T_m), T_m by 10 K if noted and more if guessed."""
    mud = 10.0 + 0.5 * 70.0 / (1.0 - 0.5 * 0.23726503)  # half way, with F of A8
    noted, same, guessed = (
        correct(single(**more), wells_of("A"), order_of("bullard1947")).estimates.iloc[0]
        for more in ({}, {"mud_temperature_degc": mud}, {"mud_temperature_degc": np.nan})
    )
    assert noted["flags"] == same["flags"] == ""
    assert guessed["flags"] == "mud_assumed"
    assert guessed["temperature_degc"] == pytest.approx(same["temperature_degc"], abs=1e-3)
    assert guessed["loading_method:bullard1947"] > same["loading_method:bullard1947"]
    assert guessed["temperature_std_k"] > same["temperature_std_k"]
    # 90.887 by the formula (A8b); the simulated hole of these times adds 0.1 to 1 % of 46 K.
    assert noted["temperature_degc"] == pytest.approx(90.887, abs=0.5)
    total = np.sqrt((noted[["temperature_std_k", "well_std_k", "shared_std_k"]] ** 2).sum())
    assert total >= 8.0


@pytest.mark.parametrize(
    ("name", "changes", "reason"),
    [
        ("instantaneous_line_source", {"circulation_h": 9.0}, "circulation lasted as long"),
        ("cylinder_source", {"temperature_degc": [60.0, 80.0]}, "cooler than the surface"),
        ("generalised_horner", {"since_circulation_h": [1.0, 9.0]}, "too early"),
        ("brennand1984", {"temperature_degc": [80.0, 79.0]}, "falls with time"),
        ("waples2001", {"depth_m": 3600.0}, "outside 0 to 3500 m"),
        ("waples2001", {"since_circulation_h": [np.nan, np.nan]}, "no timed reading"),
        ("waples2004", {"depth_m": 3400.0}, "outside 3500 to 6500 m"),
        ("waples2004", {"depth_m": 6000.0, "since_circulation_h": [70.0, 80.0]}, "cooler than"),
    ],
)
def test_the_others_refuse(name, changes, reason):
    base = {"temperature_degc": [78.0, 79.5], "since_circulation_h": [8.0, 14.0], "depth_m": 2000.0}
    columns = base | changes
    rows = [{k: v[i] if isinstance(v, list) else v for k, v in columns.items()} for i in (0, 1)]
    done = correct(table_of(rows), wells_of("A"), order_of(name))
    assert done.estimates.empty
    assert done.rejected["sentence"].str.contains(reason).tolist() == [True, True]


def test_factors_need_the_surface():
    rows = [{"temperature_degc": 80.0, "since_circulation_h": 9.0, "depth_m": 3500.0}]
    for name in ("waples2001", "waples2004"):
        done = correct(table_of(rows), wells_of("A", surface_degc=np.nan), order_of(name))
        assert done.rejected["sentence"].str.contains("no surface temperature").all()


@pytest.mark.parametrize(
    ("circulation_h", "since_h"), [(4.0, (6, 9, 12)), (4.0, (12, 18, 24)), (4.0, (24, 36, 48))]
)
def test_the_order_of_bias(circulation_h, since_h):
    """METHODS A2, A5, A6: sources at once lowest, then Horner, truth, generalised Horner.

    Mud like rock, as there; the simulation is another than the one that takes the bias out.
    """
    since = np.array([since_h], float)
    left = left_on_axis(circulation_h, since[0], RADIUS_M, KAPPA, 1.0, 1.0)
    at_once, cylinder, horner, generalised = (
        fit_line(
            plot.abscissa(np.array([[circulation_h]]), since, np.array([[RADIUS_M]]), KAPPA),
            1.0 - left[None],
        ).intercept[0]
        for plot in (AT_ONCE, CYLINDER, HORNER, GENERALISED)
    )
    assert at_once < cylinder < horner < 1.0 < generalised
    ratio = cooling_ratio(*(np.array([x]) for x in (circulation_h, since[0, -1], RADIUS_M)), KAPPA)
    single_reading = (1.0 - left[-1]) / (1.0 - ratio[0])
    assert 0.98 < single_reading < 1.0, "METHODS A4: 0.997, 0.991, 0.994"


@pytest.fixture(scope="module")
def like_rock():
    """A basin as METHODS A6 simulates: mud like rock, diffusivity as assumed, times noted."""
    return make_basin(
        3, n_wells=250, diffusivity=KAPPA, capacity=1.0, conductivity=1.0, offset_k=0.0,
        slope=0.35, noise_k=0.3, runs=(3,), untimed=0.0, no_circulation=0.0,
    )  # fmt: skip


@pytest.mark.parametrize("plot", [CYLINDER, GENERALISED], ids=lambda plot: plot.name)
def test_the_published_bias_is_taken_out(like_rock, plot):
    """Mean error of the same sets with and without."""
    table = like_rock.readings
    done = judged(correct(table, like_rock.wells, order_of(plot.name)).estimates, like_rock)
    by_id, plain = table.set_index("reading_id"), []
    for row in done.itertuples():
        own = by_id.loc[row.reading_ids.split(";")].sort_values("since_circulation_h")
        x = plot.abscissa(
            own["circulation_h"].to_numpy()[None], own["since_circulation_h"].to_numpy()[None],
            own["hole_radius_m"].to_numpy()[None], KAPPA,
        )  # fmt: skip
        line = fit_line(x, own["temperature_degc"].to_numpy()[None])
        plain.append(line.intercept[0] - (row.temperature_degc - row.error))
    noise = np.std(plain) / np.sqrt(len(plain))
    assert len(plain) > 20
    assert abs(done["error"].mean()) < abs(np.mean(plain))
    assert abs(done["error"].mean()) < max(1.0, 3 * noise)
    assert np.sign(np.mean(plain)) == (1.0 if plot is GENERALISED else -1.0)


@pytest.mark.parametrize("name", ["bullard1947", "instantaneous_line_source", "brennand1984"])
def test_stated_uncertainty_holds_the_errors(like_rock, name):
    """90 % intervals of the total cover the truth: totals are for field data, this is cleaner."""
    done = judged(correct(like_rock.readings, like_rock.wells, order_of(name)).estimates, like_rock)
    total = np.hypot(done["own_std"], done["shared_std_k"])
    assert len(done) > 20
    assert (done["error"].abs() < 1.645 * total).mean() > 0.9
