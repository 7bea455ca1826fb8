"""The page of the wells: scales, curves, order and words, reckoned by hand or by other means."""

import re
from dataclasses import replace

import made_up_wells
import mud_cooling
import numpy as np
import pandas as pd
import pytest
from hypothesis import given
from hypothesis import strategies as st

from basinheat import tables
from basinheat.conductivity import catalogue
from basinheat.corrections.methods.horner import horner_time
from basinheat.corrections.recovery.response import Mud
from basinheat.wellpages import rocks, sheets
from basinheat.wellpages.cooling import (
    TimedSets,
    curves,
    fit_cooling,
    horner_lines,
)
from basinheat.wellpages.depthplot import Drawn, depth_plot
from basinheat.wellpages.fits import fit_sets, members
from basinheat.wellpages.page import TEMPLATES, html
from basinheat.wellpages.ranking import rank_wells
from basinheat.wellpages.rows import Rows
from basinheat.wellpages.scale import Scale, limits, nice_step, thinned
from basinheat.wellpages.views import anchor, well_views

MUD, KAPPA = Mud(1.65, 0.30), 1.0e-6
SINCE = np.array([6.0, 12.0, 24.0])


@pytest.fixture(scope="module")
def run():
    """Make wells of which the last is the farthest from the others."""
    return made_up_wells.contents()


def one_set(temperature, since=SINCE, formation=100.0, std=0.5):
    """Return one set, of four hours' circulation in a hole of 8 1/2 inches."""
    since, temperature = np.atleast_2d(since), np.atleast_2d(np.asarray(temperature, float))
    std = np.full(since.shape, std)
    return TimedSets(since, temperature, std, np.array([4.0]), np.array([0.108]),
                     np.array([formation]))  # fmt: skip


# Scales


@given(st.floats(1e-3, 1e6), st.integers(2, 12))
def test_steps_are_round_and_ticks_are_few(span, about):
    """1, 2 or 5 times a power of ten (common practice), at most the intervals asked for."""
    step = nice_step(span, about)
    assert round(step / 10.0 ** np.floor(np.log10(step) + 1e-9)) in (1, 2, 5)
    assert about / 2.6 <= span / step <= about * (1 + 1e-6)
    scale = Scale(0.0, span, 400.0, 0.0)
    ticks = scale.ticks(about)
    assert len(ticks) <= about + 1
    assert ticks.min() >= 0.0 and ticks.max() <= span * (1 + 1e-6)


def test_scale_places_its_ends_and_goes_straight():
    scale = Scale(10.0, 30.0, 100.0, 500.0)
    assert scale(np.array([10.0, 20.0, 30.0])).tolist() == [100.0, 300.0, 500.0]
    assert f"{Scale(-1.0, 1.0, 0.0, 1.0).ticks(2)[1]:g}" == "0", "never -0"


@given(st.lists(st.floats(-50, 400) | st.just(np.nan), max_size=20))
def test_limits_hold_every_value(values):
    low, high = limits(np.array(values), least=5.0)
    assert high - low >= 5.0
    assert all(low < v < high for v in values if np.isfinite(v))


@given(st.integers(0, 3000), st.integers(2, 200))
def test_thinning_keeps_both_ends(n, most):
    which = thinned(n, most)
    assert len(which) == min(n, most)
    assert n == 0 or (which[0] == 0 and which[-1] == n - 1)


# Recovery


def test_cooling_is_found_in_a_hole_simulated_by_other_means():
    """Readings from the tests' own simulation: its 15 K of cooling come back to 1 %."""
    left = mud_cooling.left_on_axis(4.0, SINCE, 0.108, KAPPA, MUD.capacity, MUD.conductivity)
    cooled = fit_cooling(one_set(100.0 - 15.0 * left), MUD, KAPPA)
    assert cooled.cooling_k == pytest.approx([15.0], rel=0.01)
    assert cooled.misfit[0] < 0.1


def test_curve_rises_to_the_formation_temperature():
    """Physics: warmer with time, and after endless rest as warm as the rock."""
    sets = one_set([80.0, 88.0, 93.0])
    cooled = fit_cooling(sets, MUD, KAPPA)
    curve = curves(sets, cooled, np.geomspace(1.0, 3000.0, 50)[None], MUD, KAPPA)[0]
    assert (np.diff(curve) > 0).all()
    assert 99.5 < curve[-1] < 100.0


def test_misfit_counts_in_sigmas():
    """Twice the σ: half the misfit. One reading fits by itself; none gives nothing."""
    readings = [80.0, 90.0, 91.0]
    one, two = (fit_cooling(one_set(readings, std=s), MUD, KAPPA).misfit[0] for s in (0.5, 1.0))
    assert one == pytest.approx(2.0 * two)
    assert one > 1.0
    alone = fit_cooling(one_set([80.0, np.nan, np.nan], [6.0, np.nan, np.nan]), MUD, KAPPA)
    assert np.isnan(alone.misfit[0]) and alone.cooling_k[0] > 20.0
    none = fit_cooling(one_set([np.nan] * 3, [np.nan] * 3), MUD, KAPPA)
    assert np.isnan(none.cooling_k[0])


def test_horner_line_is_that_of_a_library():
    """Intercept and slope against numpy.polyfit on ln((tc + Δt) / Δt) (Horner 1951)."""
    degc = np.array([80.0, 88.5, 93.0])
    intercept, slope = horner_lines(one_set(degc))
    expected = np.polyfit(np.log((4.0 + SINCE) / SINCE), degc, 1)
    assert (slope[0], intercept[0]) == pytest.approx(tuple(expected))
    assert np.isnan(horner_lines(one_set([80.0, 81.0], [6.0, 6.0]))[0][0]), "two equal times"


def test_horner_time_ends_at_nought():
    """As long rested as circulated: ln 2; rested without end: 0 (arithmetic)."""
    assert horner_time(4.0, 4.0) == pytest.approx(np.log(2.0))
    assert horner_time(4.0, 1e12) == pytest.approx(0.0, abs=1e-9)


# From tables to wells


def test_readings_are_found_behind_their_temperature(run):
    """An identity that no reading has is passed over."""
    some = run.temperatures.head(2).assign(reading_ids=["r0010;r0002", "nobody"])
    both = members(some, run.readings)
    assert both.estimate.tolist() == [0, 0]
    assert run.readings["reading_id"].iloc[both.reading].tolist() == ["r0010", "r0002"]


def test_only_timed_sets_of_timed_methods_are_fitted(run):
    assert fit_sets(run).sets.since_h.tolist() == [[6.0, 12.0, 18.0]] * made_up_wells.WELLS
    other = replace(run, temperatures=run.temperatures.assign(method="harrison1983"))
    assert len(fit_sets(other).row) == 0
    untimed = replace(run, readings=run.readings.assign(since_circulation_h=np.nan))
    assert len(fit_sets(untimed).row) == 0


def test_readings_are_carried_to_the_depth_of_their_set(run):
    """100 m deeper at 30 K/km: 3 K warmer than there."""
    deeper = replace(run, readings=run.readings.assign(depth_m=made_up_wells.DEPTH_M + 100.0))
    shift = fit_sets(deeper).sets.temperature_degc - fit_sets(run).sets.temperature_degc
    assert shift == pytest.approx(np.full(shift.shape, -3.0))


def test_the_worst_fit_comes_first(run):
    """Well i is 0.1 i σ warmer than the others; the misfit of all is the same."""
    ranked = rank_wells(run, fit_sets(run))
    assert sorted(ranked["well"]) == sorted(run.wells["well"])
    assert (np.diff(ranked["score"]) <= 0).all()
    larger = np.fmax(ranked["z"].abs(), ranked["misfit"])
    assert ranked["score"].to_numpy() == pytest.approx(larger.to_numpy())
    by_name = ranked.set_index("well")
    assert by_name["z"]["W-11"] == pytest.approx(1.1)
    assert by_name["residual_k"]["W-11"] == pytest.approx(4.4)
    far = run.closure.assign(left_out_k=np.where(run.closure["well"] == "W-03", 40.0, 0.0))
    assert rank_wells(replace(run, closure=far), fit_sets(run))["well"][0] == "W-03"
    wild = run.readings.copy()
    wild.loc[wild["reading_id"].eq("r0051"), "temperature_degc"] = 20.0
    wild = replace(run, readings=wild)
    assert rank_wells(wild, fit_sets(wild))["well"][0] == "W-05"


def test_a_well_without_temperatures_comes_last(run):
    none = run.temperatures["well"] != "W-11"
    fewer = replace(run, temperatures=run.temperatures[none].reset_index(drop=True),
                    closure=run.closure[none].reset_index(drop=True))  # fmt: skip
    ranked = rank_wells(fewer, fit_sets(fewer))
    assert ranked["well"].iloc[-1] == "W-11"
    assert (ranked["score"].iloc[-1], ranked["readings"].iloc[-1]) == (0.0, 3)


def test_nothing_flagged_and_nothing_corrected_is_a_page_too(run):
    """No flag, no temperature, no layer, no column in the whole run."""
    bare = replace(
        run,
        readings=run.readings.assign(flags=""),
        temperatures=run.temperatures.head(0),
        estimates=run.estimates.head(0),
        closure=run.closure.head(0),
        columns=run.columns.head(0),
        layers=run.layers.head(0),
        rejected=run.rejected.head(0),
    )
    assert html(bare).count('<section class="well"') == made_up_wells.WELLS


@given(st.text(max_size=40))
def test_anchors_are_safe_whatever_the_name(name):
    assert re.fullmatch("w-[0-9a-f]{12}", anchor(name))
    assert anchor(name) != anchor(name + " ")


def test_every_rock_of_the_catalogue_has_a_pattern_that_is_drawn():
    known = catalogue.load()
    template = (TEMPLATES / "pictures.html.j2").read_text(encoding="utf-8")
    drawn = set(re.findall(r'call tile\("(\w+)"', template))
    assert drawn == {*rocks.PATTERNS, rocks.UNKNOWN}
    for known in map(catalogue.load, catalogue.set_names()):
        assert rocks.UNKNOWN not in {rocks.pattern(name, known, {}) for name in known.names}
    assert rocks.pattern("Rock-Salt", known, {}) == "crosses"
    assert rocks.pattern("brine stone", known, {"brine stone": "halite"}) == "crosses"
    assert rocks.pattern("nothing known", known, {}) == rocks.UNKNOWN
    mix = {"Upper": {"shale": 30, "chalk": 70}}
    assert rocks.pattern("upper", known, {}, mix) == "thin_bricks"
    assert rocks.pattern("shale 60 marl 40", known, {}, mix) == "lines"


# Pictures and words


def drawn(run, **changes):
    """Return what is drawn of the first well."""
    first = run.of([run.wells["well"][0]])
    made = {
        "temperatures": Rows.of(first.temperatures),
        "readings": Rows.of(first.readings),
        "used": np.array([True, True, False]),
        "column": Rows.of(first.columns),
        "beds": Rows.of(first.layers),
        "patterns": {"shale": "dashes", "rock of no name": "unknown"},
        "surface_degc": 10.0,
        "surface_std_k": 1.0,
    }
    return depth_plot(Drawn(**{**made, **changes}))


def test_depth_goes_down_and_bars_hold_their_sigmas(run):
    """σ 3, 4 and 12 K: the bar is 5 K to each side, the whisker 13 K (3-4-5, 5-12-13)."""
    plot = drawn(run)
    assert [float(t.at) for t in plot.depths] == sorted(float(t.at) for t in plot.depths)
    (mark,) = plot.marks
    first, last = (plot.degrees[i] for i in (0, -1))
    px_per_k = (float(last.at) - float(first.at)) / (float(last.label) - float(first.label))
    x = float(mark.x)
    assert float(first.at) + (58.0 - float(first.label)) * px_per_k == pytest.approx(x, abs=0.3)
    assert [float(e) - x for e in mark.own] == pytest.approx([-5 * px_per_k, 5 * px_per_k], abs=0.2)
    assert [float(e) - x for e in mark.total] == pytest.approx(
        [-13 * px_per_k, 13 * px_per_k], abs=0.2
    )
    assert x - float(mark.raw) == pytest.approx(7 * px_per_k, abs=0.2)
    y = {tick.label: float(tick.at) for tick in plot.depths}
    a_quarter_more = y["1,400"] + (y["1,400"] - y["1,000"]) / 4.0
    assert float(mark.y) == pytest.approx(a_quarter_more, abs=0.2)


def test_everything_is_drawn_inside_its_frame(run):
    plot = drawn(run)
    pairs = [p.split(",") for p in f"{plot.band} {plot.column} {plot.left_out}".split()]
    pairs += [(x, y) for x, y, _ in plot.readings]
    for x, y in pairs:
        assert plot.left - 0.06 <= float(x) <= plot.right + 0.06
        assert plot.top <= float(y) <= plot.bottom
    assert [used for _, _, used in plot.readings] == [True, True, False]
    assert [bed.name for bed in plot.beds] == ["shale", "rock of no name"]
    assert plot.legend == [("dashes", "shale"), ("unknown", "rock of no name")]
    foot = float(plot.beds[-1].y) + float(plot.beds[-1].height)
    assert foot == pytest.approx(plot.bottom, abs=0.2), "layers end at the foot of the picture"


def test_a_well_with_next_to_nothing_is_drawn(run):
    """No column, no layers, no temperature, no surface temperature: readings alone."""
    plot = drawn(
        run,
        temperatures=Rows.of(run.temperatures.head(0)),
        column=Rows.of(run.columns.head(0)),
        beds=Rows.of(run.layers.head(0)),
        surface_degc=np.nan,
        surface_std_k=np.nan,
    )
    assert (plot.marks, plot.beds, plot.column, plot.surface) == ([], [], "", None)
    assert len(plot.readings) == 3


def test_horner_is_drawn_from_two_times_on(run):
    """A single reading has no straight line."""
    (view,) = well_views(run, ["W-01"])
    assert [len(one.panels) for one in view.sets] == [2]
    assert "Horner" in view.sets[0].words and "58.0 ± 13.0 °C" in view.sets[0].words
    rest = run.temperatures.assign(reading_ids=run.temperatures["reading_ids"].str[:5])
    (view,) = well_views(replace(run, temperatures=rest), ["W-01"])
    assert [len(one.panels) for one in view.sets] == [1]
    assert "Horner" not in view.sets[0].words


def test_tables_say_what_became_of_each_reading(run):
    """Used, refused later, for shared errors only, or not at all."""
    ids = made_up_wells.reading_ids(2)
    used = run.temperatures.assign(reading_ids=run.temperatures["reading_ids"].str[:5])
    later = pd.DataFrame({"table": ["readings"], "code": "copied", "sentence": "twice."})
    later = tables.Rejected.conform(later.assign(well="W-02", reading_id=ids[1]))
    rest = used.assign(reading_ids=[f"r{i:03d}2" for i in range(made_up_wells.WELLS)])
    estimates = pd.concat([used.assign(used=True), rest.assign(used=False)], ignore_index=True)
    changed = replace(run, temperatures=used, estimates=tables.Estimates.conform(estimates),
                      rejected_later=later)  # fmt: skip
    (view,) = well_views(changed, ["W-02"])
    readings = next(sheet for sheet in view.sheets if sheet.title == "Readings")
    at = readings.headers.index("used for")
    first, second, third = (row[at] for row in readings.rows)
    assert first == "no. 1"
    assert second == "refused: copied; twice."
    assert third.startswith("shared errors only (conductive recovery)")
    assert [row[-1] for row in readings.rows] == [f"readings.csv:{line}" for line in (8, 9, 10)]
    (temperatures,) = [sheet for sheet in view.sheets if sheet.title == "Formation temperatures"]
    assert temperatures.rows[0][-1] == "horner: times too close to each other"


def test_long_lists_are_cut_and_say_so(run):
    many = Rows.of(pd.concat([run.readings] * 3, ignore_index=True))
    sheet = sheets.readings_sheet(many, [""] * len(many))
    assert len(sheet.rows) == 60
    assert "60 of 108" in sheet.note


@pytest.mark.parametrize("wanted", [0, 5, 400])
def test_as_many_wells_are_drawn_as_the_settings_say(run, wanted):
    """The others stand in the list, with a sentence how to draw more."""
    page = html(replace(run, settings=made_up_wells.settings(report={"wells_drawn": wanted})))
    assert page.count('<section class="well"') == min(wanted, made_up_wells.WELLS)
    assert page.count("<tr data-w=") == made_up_wells.WELLS
    assert ("report.wells_drawn" in page) == (wanted < made_up_wells.WELLS)
