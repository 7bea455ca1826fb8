"""What the report says: words, counts and warnings, reckoned by hand on a made-up run."""

import subprocess
import sys
import unicodedata
from dataclasses import replace

import made_up_report
import numpy as np
import pandas as pd
import pytest
from hypothesis import given
from hypothesis import strategies as st

from basinheat.delivery import style
from basinheat.report import (
    attention,
    basis,
    captions,
    comparison,
    mapfigures,
    overview,
    summary,
    template,
)
from basinheat.report.sheet import LONGEST, Sheet, number, percent, shown


@pytest.fixture(scope="module")
def run():
    """Make a run in which nothing calls for a look."""
    return made_up_report.contents()


def cells(run, rows=slice(None), cols=slice(None)):
    """Return which cells of the maps lie in a window of the grid."""
    window = np.zeros((made_up_report.ROWS, made_up_report.COLS), bool)
    window[rows, cols] = True
    return window[run.maps["row"], run.maps["col"]]


# Words and numbers


@given(st.text(max_size=2 * LONGEST))
def test_shown_text_hides_nothing_and_ends(text):
    """No control, no mark of direction, no endless name (categories of the Unicode database)."""
    out = shown(text)
    assert len(out) <= LONGEST * len("[U+2066]")
    left = [c for c in out if c not in "\t\n"]
    assert not [c for c in left if unicodedata.category(c) in ("Cc", "Zl", "Zp", "Cs")]
    assert not [c for c in left if unicodedata.bidirectional(c) in
                ("LRE", "RLE", "LRO", "RLO", "PDF", "LRI", "RLI", "FSI", "PDI")]  # fmt: skip


@given(st.text(alphabet="abc αβγ وعר <&=", max_size=LONGEST))
def test_plain_text_of_any_script_stays(text):
    assert shown(text) == text


def test_numbers_never_say_more_than_they_know():
    assert number(1234.5678, 1) == "1,234.6"
    assert number(-0.001, 1) == number(0.0, 1, sign=True) == "0.0"
    assert number(-2.5, 1) == "−2.5"
    assert [number(x) for x in (None, np.nan, np.inf)] == ["–"] * 3
    assert [percent(x) for x in (0.0, 0.001, 0.5, 0.999, 1.0)] == [
        "0 %", "under 1 %", "50 %", "over 99 %", "100 %",
    ]  # fmt: skip


def test_every_class_source_and_method_has_words():
    """No code with an underscore or a colon reaches the reader, known or not."""
    for name in ("recovery:untimed", "method:horner", "direct", "method:new_one", "odd:thing"):
        assert not {"_", ":"} & {*captions.of_class(name)}, name
    for name in ("surface_temperature", "recovery:mud_capacity", "conductivity:shaly_sandstone"):
        assert not {"_", ":"} & {*captions.of_source(name)}, name


# Where the maps rest on readings


def test_below_readings_by_hand(run):
    """Deepest reading 2,500 m in the west, 1,500 m from column 50 on."""
    east = cells(run, cols=slice(50, None))
    expected = {
        "heat_flow": np.zeros_like(east),
        "gradient": east,  # down to 2,000 m
        "temperature_1000m": np.zeros_like(east),
        "temperature_2000m": east,
        "isotherm_100c": cells(run, cols=slice(50, 55)),  # at 2,400 m there, else 1,400 m
    }
    for name, below in expected.items():
        np.testing.assert_array_equal(basis.below_readings(name, run), below, name)
    assert basis.share_below("isotherm_100c", run) == pytest.approx(5 / 30)


def test_trust_sheet_shares_are_complementary(run):
    """10 of 59 columns lie below 1,500 m; σ is 2 K/km everywhere."""
    rows = overview.trust_sheet(run).rows
    assert rows[0][2:] == ["100 %", "2.0", "0 %", "–"]
    assert rows[1][2:] == ["83 %", "4.0", "17 %", "4.0"]
    deep = (run.temperatures["depth_m"] >= 2000.0).sum()
    assert rows[1][:2] == ["2,000", str(deep)]


def test_quantiles_are_of_the_cells_with_a_value(run):
    rows = {row[0]: row[1:] for row in overview.quantiles_sheet(run).rows}
    flow = np.sort(run.maps["heat_flow"].to_numpy())
    tenth, ninth = flow[len(flow) // 10], flow[-len(flow) // 10]
    assert rows["Surface heat flow (mW/m²)"][0] == f"{tenth:.1f}"
    assert rows["Surface heat flow (mW/m²)"][2] == f"{ninth:.1f}"
    assert rows["Depth of 100 °C (m)"] == ["1,400", "2,400", "2,400", "150", "m", "51 %", "17 %"]


def test_hatch_lies_where_readings_are_too_shallow(run):
    """On one colour, pixels differ where a map is hatched, and are alike where it is not."""
    flat = run.maps.assign(temperature_2000m=60.0, temperature_1000m=59.0)
    lone = replace(run, maps=flat, heat_flow=run.heat_flow.head(0))  # no wells drawn
    ends = {**style.limits(lone.maps, lone.about), "temperature": (0.0, 100.0)}
    figure = mapfigures.value_figure("temperature_2000m", lone, ends)
    hatched = spread(figure, 551.5, 559.5)
    assert hatched > 20.0
    assert spread(figure, 502.5, 548.5) == 0.0
    shallow = mapfigures.value_figure("temperature_1000m", lone, ends)
    assert spread(shallow, 502.5, 558.5) == 0.0


def spread(figure, west, east):
    """Return how much the colours between two eastings differ; km."""
    from matplotlib.backends.backend_agg import FigureCanvasAgg

    canvas = FigureCanvasAgg(figure)
    canvas.draw()
    pixels = np.asarray(canvas.buffer_rgba())[:, :, :3].astype(float)
    to_pixels = figure.axes[0].transData.transform
    (left, low), (right, high) = to_pixels([(west, 5801.5), (east, 5838.5)])
    height = len(pixels)
    window = pixels[round(height - high) : round(height - low), round(left) : round(right)]
    assert window.size > 1000
    return float(window.std(axis=(0, 1)).max())


def test_maps_are_the_right_way_up_and_in_kilometres(run):
    """One hot cell in the north-west shows at its own easting and northing, and only there."""
    hot = cells(run, slice(5, 8), slice(10, 13))  # centres 510.5-512.5 km E, 5,834.5-5,832.5 N
    maps = run.maps.assign(temperature_1000m=np.where(hot, 90.0, 20.0), deepest_reading=5000.0)
    lone = replace(run, maps=maps, heat_flow=run.heat_flow.head(0))
    _, ax = mapfigures._map(lone)
    values = mapfigures._thin(lone, maps["temperature_1000m"])
    image = mapfigures._paint(ax, lone, values, "viridis", vmin=0.0, vmax=100.0)
    west, east, south, north = image.get_extent()
    assert (west, east, south, north) == (500.0, 560.0, 5800.0, 5840.0)
    row = int((north - 5833.5) / (north - south) * values.shape[0])
    col = int((511.5 - west) / (east - west) * values.shape[1])
    assert image.get_array()[row, col] == 90.0
    assert (image.get_array() == 90.0).sum() == 9
    assert ax.get_xlabel() == "Easting (km)"
    assert ax.get_ylabel() == "Northing (km)"


# Counts


def test_rows_in_are_rows_kept_merged_and_refused(run):
    rows = {row[0]: [int(cell) for cell in row[1:]] for row in summary.rows_sheet(run).rows}
    assert rows["wells"] == [61, 60, 0, 1]
    assert rows["readings"] == [62, 59, 1, 2]  # one of the kept was refused later
    assert all(total == sum(parts) for total, *parts in rows.values())
    reasons = summary.reasons_sheet(run).rows
    assert sum(int(row[2]) for row in reasons) == 4


def test_wells_to_look_at_are_those_beyond_three_sigma(run):
    """The farthest first, both signs, at most 25; the sign of z is well less others."""
    table = run.crossval_temperature.copy()
    assert overview.temperatures_to_look_at(run).rows == []
    table.loc[[3, 7], "left_out_k"] = [-13.0, 16.0]  # σ 4 K: the well 3.25 σ warmer, 4 σ cooler
    sheet = overview.temperatures_to_look_at(replace(run, crossval_temperature=table))
    assert [(row[0], row[4]) for row in sheet.rows] == [("W-07", "−4.0"), ("W-03", "+3.2")]
    many = run.crossval_heat_flow.assign(z_score=5.0)
    sheet = overview.heat_flow_to_look_at(replace(run, crossval_heat_flow=many))
    assert len(sheet.rows) == 25
    assert "60 of 60" in sheet.note


# What needs a look


def test_nothing_stands_out_in_a_sound_run(run):
    assert attention.points(run) == []


def changed_scores(key, **numbers):
    """Return a change of one score of a run."""

    def change(run):
        return {"scores": {**run.scores, key: {**run.scores["temperature_left_out"], **numbers}}}

    return change


FAULTS = {
    "Only 12 wells": lambda run: {"heat_flow": run.heat_flow.head(12)},
    "Bias in temperature, wells held out": changed_scores("temperature_holdout", bias=-3.0),
    "Bias in temperature, well in the maps": changed_scores("temperature_closure", bias=2.0),
    "σ is too small": changed_scores("temperature_left_out", msdr=2.5),
    "σ is too large": changed_scores("heat_flow_left_out", msdr=0.3),
    "plain predictor (mean)": lambda run: {
        "scores": {**run.scores, "heat_flow_baselines_rmse": {"mean": 3.9}}
    },
    "scaled by 2.60": lambda run: {
        "heat_flow_model": {**run.heat_flow_model, "variance_scales": {"recovery:single": 2.6}}
    },
    "scaled by 0.40": lambda run: {
        "heat_flow_model": {**run.heat_flow_model, "variance_scales": {"direct": 0.4}}
    },
    "Temperature at 2000 m: 100 %": lambda run: {"maps": run.maps.assign(deepest_reading=1600.0)},
    "conductivity of shale: −2.5": lambda run: {"sources": run.sources.assign(mean=[0.3, -0.5])},
    "of the readings were refused": lambda run: {
        "rejected": pd.concat([run.rejected.tail(1)] * 20, ignore_index=True)
    },
    "without rock layers of their own": lambda run: {
        "resistances": run.resistances.assign(origin="basin_mean")
    },
    "1 well stands": lambda run: {
        "crossval_heat_flow": run.crossval_heat_flow.assign(z_score=[9.0] + [0.0] * 59)
    },
}


@pytest.mark.parametrize("words", FAULTS)
def test_each_fault_is_told(run, words):
    """One number out of bounds gives its own sentence, with a link into the page."""
    points = attention.points(replace(run, **FAULTS[words](run)))
    assert words in " ".join(point.text for point in points)
    assert all(point.anchor and point.text.endswith(".") for point in points)


def test_a_small_bias_is_no_news(run):
    """Less than 1 K, or within three standard errors, is not told."""
    for bias, rmse in ((0.9, 1.0), (2.0, 30.0)):
        change = changed_scores("temperature_closure", bias=bias, rmse=rmse)
        assert attention.points(replace(run, **change(run))) == []


def test_what_cannot_be_seen_is_said_until_wells_are_held_out(run):
    assert "held out" in attention.unseen(run)
    held = made_up_report.settings(validation={"holdout": ["W-01"]})
    assert attention.unseen(replace(run, settings=held)) == ""


def test_matplotlib_is_loaded_by_drawing_only():
    """Its import takes longer than many a job."""
    code = "import sys, basinheat.report.page; sys.exit('matplotlib' in sys.modules)"
    assert subprocess.run([sys.executable, "-c", f"import sys; sys.path[:0] = {sys.path}; {code}"],
                          check=False).returncode == 0  # fmt: skip


# Corrections compared


def test_a_line_that_misses_the_surface_is_told_first_and_only_of_what_is_mapped(run):
    """Raw readings always point too low: news only where the final temperatures do."""
    for group, told in (("raw", 0), ("final", 1)):
        table = run.intercepts.assign(
            alarm=np.where(run.intercepts["group"] == group, "5.0 K too cold at the surface", ""),
            intercept_k=-5.0,
        )
        found = attention.points(replace(run, intercepts=table))
        assert len(found) - len(attention.points(run)) == told
        rows = comparison.intercepts_sheet(replace(run, intercepts=table)).rows
        assert [row[-1] for row in rows].count("too cold") == 1


def test_every_method_has_its_line_and_its_share(run):
    """Horner treats one set in four of the made-up run; the chosen method is no line of its own."""
    rows = {row[0]: row[1:] for row in comparison.comparison_sheet(run).rows}
    assert set(rows) == {"horner", "conductive_recovery"}
    assert rows["horner"][:3] == ["25 %", "+13.0", "+3.0"]
    assert len(comparison.comparison_picture(run).panels) == 1
    empty = replace(run, correction_summary=run.correction_summary.head(0))
    assert comparison.comparison_picture(empty).panels == []
    assert comparison.comparison_sheet(empty).rows == []


def test_the_order_to_try_names_a_method_that_is_not_in_it(run):
    """Horner before the mud-cooled method of the present order, behind the equilibrium logs."""
    assert comparison.example_order(run) == ["equilibrium", "horner", "conductive_recovery"]


def anchored(**rows):
    """Return differences from logs: method to median difference, spread and wells."""
    lines = [("equilibrium", name, 9, wells, off, 1.0, spread) for name, (off, spread, wells)
             in rows.items()]  # fmt: skip
    names = ["anchor", "method", "n_pairs", "n_wells", "difference_k", "difference_std_k"]
    return pd.DataFrame(lines, columns=[*names, "spread_k"]).assign(chosen_difference_k=0.0)


@pytest.mark.parametrize(
    ("logs", "lead"),
    [
        ({"horner": (5.0, 1.0, 9), "forster1997": (1.0, 2.0, 9)}, "forster1997"),
        ({"horner": (1.0, 1.0, 9), "forster1997": (-2.0, 1.0, 9)}, "horner"),
        ({"horner": (5.0, 1.0, 9), "forster1997": (0.0, 1.0, 2)}, "horner"),
        ({}, "forster1997"),
    ],
)
def test_the_order_to_try_is_led_by_what_agrees_with_the_logs(run, logs, lead):
    """Of two wells with logs nothing is said; without logs the least σ leads. Hand-made numbers."""
    table = run.correction_summary
    rows = table[table["method"].eq("horner") & table["top_m"].isna()]
    other = rows.assign(method="forster1997", total_std_k=0.1 + 0.0 * rows["total_std_k"])
    changed = replace(
        run, correction_summary=pd.concat([table, other]), anchor_differences=anchored(**logs)
    )
    assert comparison.example_order(changed) == ["equilibrium", lead, "conductive_recovery"]


def test_names_of_the_config_are_set_as_code():
    page = template.environment().from_string(
        '{% from "parts.html.j2" import sheet %}{{ sheet(table) }}'
    )
    table = Sheet("T", ["`method", "said"], [["horner: Horner <b>plot</b>", "a: b"], ["dst", ""]])
    text = page.render(table=table)
    assert "<td><code>horner</code>: Horner &lt;b&gt;plot&lt;/b&gt;</td>" in text
    assert "<code>dst</code></td>" in text and "<td>a: b</td>" in text
    assert ">method</th>" in text


def test_parts_of_sigma_name_the_method_as_the_config_does(run):
    rows = comparison.sigmas_sheet(run).rows
    assert [row[0] for row in rows] == [
        "horner", "conductive_recovery: mud-cooled, one timed reading",
    ]  # fmt: skip
    assert [row[5] for row in rows] == ["–", "1.20"]
