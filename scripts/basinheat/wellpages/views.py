"""One well after the other, as the page shows it."""

from __future__ import annotations

import hashlib
from collections.abc import Iterator
from dataclasses import dataclass, replace

import numpy as np
import pandas as pd

from basinheat.conductivity.mixtures import load_formations
from basinheat.report.sheet import Sheet, number, words
from basinheat.tables.sources import SURFACE
from basinheat.wellpages import rocks, sheets
from basinheat.wellpages.contents import Contents
from basinheat.wellpages.depthplot import DepthPlot, Drawn, depth_plot
from basinheat.wellpages.fits import Fits, fit_sets, members
from basinheat.wellpages.recoveryplot import Curves, SetPlot, all_curves, set_plot
from basinheat.wellpages.rows import Rows

MOST_SETS = 6
_USED = "no. "


@dataclass(frozen=True)
class WellView:
    """A well of the page: its anchor, name and facts, its pictures, its tables."""

    anchor: str
    name: str
    facts: list[str]
    picture: DepthPlot
    sets: list[SetPlot]
    sets_left: int
    sheets: list[Sheet]


def anchor(well: str) -> str:
    """Return an anchor that is safe whatever the name, and the same in each run.

    Examples
    --------
    >>> anchor("")  # SHA-256 of nothing begins so (FIPS 180-4 examples, from memory)
    'w-e3b0c44298fc'
    """
    return "w-" + hashlib.sha256(well.encode("utf-8", "surrogatepass")).hexdigest()[:12]


def well_views(contents: Contents, wells: list[str]) -> Iterator[WellView]:
    """Yield the views of some wells, in their order."""
    few = contents.of(wells)
    few = replace(few, layers=_named(few.layers))
    by_well = {name: Rows.by_well(getattr(few, name), wells) for name in _TABLES}
    closure = Rows.of(few.closure)
    fits = fit_sets(few)
    total = _total_std(few.temperatures)
    kept = {well: _worst_sets(fits, by_well["temperatures"][well].places) for well in wells}
    curves = all_curves(few, fits, np.concatenate([np.zeros(0, np.int64), *kept.values()]))
    became = _became(few, by_well["temperatures"])
    start = 0
    for well in wells:
        rows = {name: tables[well] for name, tables in by_well.items()}
        mine = rows["temperatures"]
        sets = [
            _set_of(fits, curves, start + k, mine, float(total[fits.row[i]]))
            for k, i in enumerate(kept[well])
        ]
        start += len(sets)
        yield WellView(
            anchor=anchor(well),
            name=well,
            facts=_facts(few, well, rows["wells"]),
            picture=depth_plot(_drawn(few, rows, became)),
            sets=sets,
            sets_left=_count_sets(fits, mine.places) - len(sets),
            sheets=_sheets(rows, closure.take(mine.places), became),
        )


def _named(layers: pd.DataFrame) -> pd.DataFrame:
    """Return the layers, where they name no lithology with their formation in its place."""
    lithology = layers["lithology"]
    return layers.assign(lithology=lithology.where(lithology != "", layers["formation"]))


_TABLES = ("wells", "readings", "temperatures", "columns", "layers", "rejected")


def _total_std(temperatures: pd.DataFrame) -> np.ndarray:
    parts = temperatures[["temperature_std_k", "well_std_k", "shared_std_k"]].fillna(0.0)
    return np.sqrt((parts**2).sum(axis=1)).to_numpy()


def _sets_of(fits: Fits, mine: np.ndarray) -> np.ndarray:
    """Return the sets of a well: rows of a well stand together, and sets in their order."""
    if not mine.size:
        return mine
    return np.arange(*np.searchsorted(fits.row, [mine[0], mine[-1] + 1]))


def _count_sets(fits: Fits, mine: np.ndarray) -> int:
    return len(_sets_of(fits, mine))


def _worst_sets(fits: Fits, mine: np.ndarray) -> np.ndarray:
    """Return the sets of a well to draw, by depth: where there are many, the worst fits."""
    sets = _sets_of(fits, mine)
    misfit = np.nan_to_num(fits.cooled.misfit[sets], nan=-1.0)
    return np.sort(sets[np.argsort(-misfit, kind="stable")[:MOST_SETS]])


def _set_of(fits: Fits, curves: Curves, at: int, mine: Rows, total_std_k: float) -> SetPlot:
    place = int(np.flatnonzero(mine.places == fits.row[curves.which[at]])[0])
    depth, method = mine["depth_m"][place], mine["method"][place]
    title = f"No. {place + 1} at {number(depth)} m"
    return set_plot(fits, curves, at, title, f"By {words(method)} it tends", total_std_k)


def _became(few: Contents, temperatures: dict[str, Rows]) -> dict[str, str]:
    """Return what became of each reading, in words, by its identity."""
    ids = few.readings["reading_id"].to_numpy(object)
    later = few.rejected_later[few.rejected_later["reading_id"].ne("")]
    out = {
        row.reading_id: f"refused: {words(row.code)}; {row.sentence}" for row in later.itertuples()
    }
    rest = few.estimates[~few.estimates["used"]]
    both = members(rest, few.readings)
    titles = [words(name) for name in rest["method"]]
    for estimate, reading in zip(both.estimate, both.reading, strict=True):
        out[ids[reading]] = (
            f"shared errors only ({titles[estimate]}): a preferred kind of reading stands at this "
            "depth"
        )
    numbers = {row: k for t in temperatures.values() for k, row in enumerate(t.places, start=1)}
    both = members(few.temperatures, few.readings)
    for estimate, reading in zip(both.estimate, both.reading, strict=True):
        out[ids[reading]] = f"{_USED}{numbers[estimate]}"
    return out


def _drawn(few: Contents, rows: dict[str, Rows], became: dict[str, str]) -> Drawn:
    well, readings = rows["wells"], rows["readings"]
    rock = few.settings["conductivity"]
    formations = load_formations(rock["formations"])
    beds = rows["layers"]
    beds = beds.take(np.lexsort((beds["base_m"], beds["top_m"])))
    beds = beds.take((beds["top_m"] >= 0) & (beds["base_m"] > beds["top_m"]))
    degc, own = (
        float(well[name][0]) if len(well) else np.nan
        for name in ("surface_temperature_degc", "surface_temperature_std_k")
    )
    shared = few.sources.loc[few.sources["source"] == SURFACE, "std"]
    return Drawn(
        temperatures=rows["temperatures"],
        readings=readings,
        used=np.array([became.get(i, "").startswith(_USED) for i in readings["reading_id"]]),
        column=rows["columns"],
        beds=beds,
        patterns={
            name: rocks.pattern(name, few.rocks, rock["lithologies"], formations)
            for name in {*beds["lithology"]}
        },
        surface_degc=degc,
        surface_std_k=float(np.hypot(own, shared.iloc[0] if len(shared) else 0.0)),
    )


def _facts(few: Contents, name: str, rows: Rows) -> list[str]:
    """Return what the head of a well says."""
    facts = ["held out: not in the maps"] if name in few.holdout else []
    for well in rows.each(1):
        place = f"easting {number(well.easting_m)} m, northing {number(well.northing_m)} m"
        facts.append(place)
        if well.water_depth_m > 0:
            facts.append(f"water {number(well.water_depth_m)} m")
        facts.append(f"{well.source_file}:{well.source_line}")
        facts += [words(flag) for flag in well.flags.split(";") if flag]
    return facts


def _sheets(rows: dict[str, Rows], closure: Rows, became: dict[str, str]) -> list[Sheet]:
    readings = rows["readings"]
    order = (readings["reading_id"].astype(str), readings["since_circulation_h"])
    readings = readings.take(np.lexsort((*order, readings["depth_m"])))
    told = [became.get(name, "not used") for name in readings["reading_id"]]
    made = [sheets.readings_sheet(readings, told)]
    if len(rows["temperatures"]):
        made.insert(0, sheets.temperatures_sheet(rows["temperatures"], closure))
    if len(rows["rejected"]):
        made.append(sheets.refused_sheet(rows["rejected"]))
    return made
