"""Every correction method beside the others: picture, tables, and where they meet the surface."""

from __future__ import annotations

from textwrap import fill
from typing import Any

import numpy as np
import pandas as pd

from basinheat.corrections.registry import METHODS
from basinheat.report import captions
from basinheat.report.contents import Contents
from basinheat.report.draw import ACCENT, FAINT, INK, SECOND, Picture, as_panel, new_figure
from basinheat.report.sheet import Sheet, number, percent

KM = 1e-3
COLUMNS = 4
FACET = (2.4, 2.75)  # inches: four beside each other in 1,152 pixels
FEWEST = 3  # sets that make quartiles
WIDEST_K = 60.0  # a method gone wild must not press the others together
FEWEST_WELLS = 3  # with measured temperatures, or they say little of a method
WORTH_TRYING = 0.2  # share of the sets that a method treats
CHOSEN, LOWER_BOUND = "chosen", "uncorrected"


def comparison_picture(contents: Contents) -> Picture:
    """Draw the median correction of every method by depth, one small picture a method."""
    table = contents.correction_summary
    table = table[table["top_m"].notna() & (table["n_treated"] >= FEWEST)]
    shown = [name for name in _methods(table) if name != LOWER_BOUND]
    if not shown:
        return Picture("comparison", _TITLE, "No method treats three readings of one depth.", [])
    lines = -(-len(shown) // COLUMNS)
    figure = new_figure(FACET[1] * lines + 0.75, FACET[0] * COLUMNS)
    limits = _limits(table[table["method"].isin(shown)])
    for place, name in enumerate(shown):
        ax = _facet(figure, place, lines)
        _draw(ax, table, name)
        ax.set(xlim=limits[0], ylim=limits[1], title=_heading(contents, name))
        ax.tick_params(labelleft=place % COLUMNS == 0)
        if place % COLUMNS == 0:
            ax.set_ylabel("Depth (km)")
        if place + COLUMNS >= len(shown):
            ax.set_xlabel("Correction (K)")
    _legend(figure)
    return Picture("comparison", _TITLE, _CAPTION, [as_panel(figure, _ALT)])


_TITLE = "Correction by depth, every method"
_CAPTION = (
    "Median correction of each method by 500 m of depth, on all sets it can treat (dots), with "
    "its quartiles (band). Diamonds: the same on common sets, which every compared method treats, "
    "so that the methods differ there and not their wells. Dashed, in every picture: the chosen "
    "methods on all sets. Depths with fewer than three sets are left out."
)
_ALT = "Median correction against depth with quartiles, one small picture for every method"


def _methods(table: pd.DataFrame) -> list[str]:
    """Return the methods that have rows, in the order of the registry."""
    there = set(table["method"])
    return [name for name in METHODS if name in there]


def _limits(table: pd.DataFrame) -> tuple[tuple[float, float], tuple[float, float]]:
    low = min(float(table["correction_low_k"].min()), 0.0)
    high = min(max(float(table["correction_high_k"].max()), 5.0), WIDEST_K)
    return (low - 1.0, 1.04 * high), (float(table["base_m"].max()) * KM, 0.0)


def _facet(figure: Any, place: int, lines: int) -> Any:
    """Return the axes of one small picture, placed by hand so that all are of one size."""
    width, height = figure.get_size_inches()
    row, column = divmod(place, COLUMNS)
    left, top = 0.55 + column * (width - 0.6) / COLUMNS, 0.5 + row * FACET[1]
    size = (width - 0.6) / COLUMNS - 0.22, FACET[1] - 0.85
    return figure.add_axes(
        (left / width, 1 - (top + size[1]) / height, size[0] / width, size[1] / height)
    )


def _draw(ax: Any, table: pd.DataFrame, name: str) -> None:
    own = _part(table, name, "own")
    depth = _middle(own)
    ax.fill_betweenx(
        depth, own["correction_low_k"], own["correction_high_k"], color=FAINT, alpha=0.7,
        linewidth=0,
    )  # fmt: skip
    ax.plot(own["correction_k"], depth, "-o", color=ACCENT, markersize=4, linewidth=1.6)
    chosen = _part(table, CHOSEN, "own")
    ax.plot(chosen["correction_k"], _middle(chosen), "--", color=INK, linewidth=1.0)
    common = _part(table, name, "common")
    ax.plot(
        common["correction_k"], _middle(common), "D", color=SECOND, markerfacecolor="white",
        markersize=5, markeredgewidth=1.3,
    )  # fmt: skip
    ax.axvline(0.0, color=INK, linewidth=0.5, zorder=0)


def _part(table: pd.DataFrame, name: str, sets: str) -> pd.DataFrame:
    return table[table["method"].eq(name) & table["sets"].eq(sets)]


def _middle(part: pd.DataFrame) -> pd.Series:
    return 0.5 * (part["top_m"] + part["base_m"]) * KM


def _heading(contents: Contents, name: str) -> str:
    row = _all_depths(contents.correction_summary, name, "own")
    return f"{fill(name.replace('_', ' '), 26)}\n{row.n_treated:,} of {row.n_sets:,} sets"


def _legend(figure: Any) -> None:
    """Explain the signs at the foot, apart from the axes."""
    from matplotlib.lines import Line2D
    from matplotlib.patches import Patch

    signs = [
        Line2D([], [], color=ACCENT, marker="o", markersize=4, label="median, all its sets"),
        Patch(color=FAINT, alpha=0.7, label="its quartiles"),
        Line2D([], [], color=SECOND, marker="D", markerfacecolor="white", markersize=5,
               linestyle="none", label="median, common sets"),
        Line2D([], [], color=INK, linestyle="--", linewidth=1.0, label="chosen methods"),
    ]  # fmt: skip
    figure.legend(handles=signs, loc="lower left", bbox_to_anchor=(0.05, 0.0), ncols=4)


def _all_depths(table: pd.DataFrame, name: str, sets: str) -> Any:
    """Return the row of a method over all depths, None where there is none."""
    rows = table[table["method"].eq(name) & table["sets"].eq(sets) & table["top_m"].isna()]
    return next(iter(rows.itertuples()), None)


def comparison_sheet(contents: Contents) -> Sheet:
    """List every method: what it treats, its correction, and how it fares beside the others."""
    table = contents.correction_summary
    rows = []
    for name in _methods(table):
        own, common = (_all_depths(table, name, sets) for sets in ("own", "common"))
        rows.append(
            [
                name,
                percent(own.share_treated),
                number(own.correction_k, 1, sign=True),
                number(own.difference_k, 1, sign=True),
                number(own.total_std_k, 1),
                number(common.correction_k, 1, sign=True) if common else "–",
                number(common.difference_k, 1, sign=True) if common else "–",
            ]
        )
    headers = ["`name in the config", "#sets it treats", "#median correction (K)",
               "#less chosen, same sets (K)", "#median σ (K)", "#correction, common sets (K)",
               "#less chosen, common sets (K)"]  # fmt: skip
    chosen = _all_depths(table, CHOSEN, "common")
    note = "Chosen: the first method of correction.order that applies. Common sets: the "
    note += f"{number(chosen.n_treated if chosen else 0)} that every method treats which can treat "
    note += "a quarter of the sets with repeated timed readings. "
    note += "Every method on every set: tables/correction_comparison.parquet."
    return Sheet("Every method on the mud-cooled sets it can treat", headers, rows, note)


def anchors_sheet(contents: Contents) -> Sheet:
    """Compare methods with temperatures measured beside mud-cooled readings."""
    rows = [
        [
            row.method,
            {"dst": "drill-stem test"}.get(row.anchor, f"{row.anchor} log"),
            number(row.n_pairs),
            number(row.n_wells),
            number(row.difference_k, 1, sign=True),
            number(row.difference_std_k, 1),
            number(row.spread_k, 1),
            number(row.chosen_difference_k, 1, sign=True),
        ]
        for row in contents.anchor_differences.itertuples()
    ]
    headers = ["`method", "against", "#sets", "#wells", "#median of method − measured (K)",
               "#its σ (K)", "#spread (K)", "#chosen − measured, same sets (K)"]  # fmt: skip
    note = "Within 50 m in the same well; wells held out are not looked at. A method with a median "
    note += (
        "beyond twice its σ is off here. Trust those with many wells: the last column tells how "
    )
    note += "the chosen methods do on the same sets."
    return Sheet("Against temperatures measured nearby", headers, rows, note)


def intercepts_sheet(contents: Contents) -> Sheet:
    """List where the regional line of each group of temperatures meets the surface."""
    rows = [
        [
            _group(row),
            "yes" if row.in_use else "no",
            number(row.n_sets),
            number(row.n_wells),
            f"{number(row.top_m)} to {number(row.base_m)}",
            number(row.slope_mw_m2, 1),
            number(row.intercept_k, 1, sign=True),
            number(2.0 * row.expected_std_k, 1),
            _verdict(row),
        ]
        for row in contents.intercepts.itertuples()
    ]
    headers = ["temperatures", "in the maps", "#number", "#wells", "#depths (m)",
               "#slope (mW/m²)", "#at the surface (K)", "#expected there: 0 ± 2 σ (K)",
               "verdict"]  # fmt: skip
    note = "A line through all wells, heat flow changing smoothly over the region, that is not "
    note += "tied to the surface; shown is what it says there less the surface temperature. "
    note += "What stands out is a bias that does not grow with depth, or rock that is wrong at "
    note += "shallow depth. It needs no pairs; a bias in proportion to depth it can not see."
    return Sheet("Where the temperatures point to at the surface", headers, rows, note)


def _verdict(row: Any) -> str:
    return f"too {'warm' if row.intercept_k > 0.0 else 'cold'}" if row.alarm else "fits"


def _group(row: Any) -> str:
    if row.group == "class":
        return captions.of_class(row.subject)
    return {"raw": "readings as they are", "final": "all mud-cooled, final"}.get(
        row.group, row.subject
    )


def sigmas_sheet(contents: Contents) -> Sheet:
    """List the three parts of sigma of every method, and what the fit made of the first."""
    rows = [
        [
            _method_and_class(row),
            number(row.n_estimates),
            number(row.temperature_std_k, 1),
            number(row.well_std_k, 1),
            number(row.shared_std_k, 1),
            number(row.scale, 2),
            row.known_bias + (f". {row.verdict[:1].upper()}{row.verdict[1:]}" * bool(row.verdict)),
        ]
        for row in contents.method_sigmas.itertuples()
    ]
    headers = ["`method", "#in the maps", "#independent (K)", "#common to a well (K)",
               "#shared by all (K)", "#scale found", "known bias, subtracted"]  # fmt: skip
    note = "Medians over the sets a method can treat, as the method states them. Own errors, "
    note += "independent or common to a well, average away with more readings and wells; what is "
    note += "shared by all does not. Scale: by how much the fit had to scale the stated variance "
    note += "of a method's own errors, for methods in the maps; 1: they scatter among neighbours "
    note += "as stated. It is already in every σ of the maps."
    return Sheet("Three parts of σ, by method", headers, rows, note)


def _method_and_class(row: Any) -> str:
    kind = row.variance_class
    several = kind and not kind.startswith("method:") and kind != "direct"
    return f"{row.method}: {captions.of_class(kind)}" if several else row.method


def sigma_sources_sheet(contents: Contents) -> Sheet:
    """List where each method holds and where its uncertainty and coefficients are from."""
    table = contents.method_sigmas.drop_duplicates("method")
    rows = [
        [
            f"{row.method}: {captions.of_method(row.method)}",
            _validity(row),
            row.source,
            f"{row.reference}. Coefficients: {row.status}",
        ]
        for row in table.itertuples()
    ]
    headers = ["`method", "holds for", "σ from", "publication"]
    return Sheet("Sources of the methods and of their σ", headers, rows)


def _validity(row: Any) -> str:
    depths = "" if np.isinf(row.base_m) else f" ({number(row.top_m)} to {number(row.base_m)} m)"
    return row.validity + depths


def example_order(contents: Contents) -> list[str]:
    """Return an order of methods to try: the present one, led by the best that is not yet first.

    The best agrees best with the temperatures measured nearby; where these tell of none, it is the
    one of least σ.
    """
    order = list(contents.about.methods)
    table = contents.correction_summary
    first = next((i for i, name in enumerate(order) if METHODS[name].kind == "bht"), len(order))
    stated = {
        name: row.total_std_k
        for name in _methods(table)
        if (row := _all_depths(table, name, "own")).share_treated >= WORTH_TRYING
        and name not in {*order[first : first + 1], LOWER_BOUND}
    }
    off = _off_the_logs(contents, list(stated))
    best = sorted((off or stated).items(), key=lambda each: (each[1], each[0]))[:1]
    lead = [name for name, _ in best]
    return [*order[:first], *lead, *(name for name in order[first:] if name not in lead)]


def _off_the_logs(contents: Contents, names: list[str]) -> dict[str, float]:
    """Return how far methods lie from temperatures measured nearby, bias and spread, K."""
    table = contents.anchor_differences
    table = table[table["method"].isin(names) & (table["n_wells"] >= FEWEST_WELLS)]
    off = np.hypot(table["difference_k"], table["spread_k"])
    table = table.assign(off=off).dropna(subset="off").sort_values("n_pairs", ascending=False)
    # Of two kinds of anchor the one with more pairs speaks.
    first = table.drop_duplicates("method")
    return dict(zip(first["method"], first["off"], strict=True))
