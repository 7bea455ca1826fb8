"""Input files to clean tables: read, convert, place, merge and screen; nothing vanishes.

Every row that a file holds ends as a row of a table or as a line of the ledger; the counts are
checked at run time. Wells without readings stay in the wells (flag ``no_readings``): they show
where a basin was drilled, and layers of them tell about the rock.
"""

from __future__ import annotations

import logging
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pandas as pd

from basinheat.flags import joined, mark
from basinheat.ingest import las
from basinheat.ingest.decisions import Decisions
from basinheat.ingest.heat_flow import prepare_heat_flow
from basinheat.ingest.layers import prepare_layers
from basinheat.ingest.readings import attribute, clean_readings, place_readings
from basinheat.ingest.tops import read_layers
from basinheat.ingest.wells import prepare_wells
from basinheat.ledger import Ledger
from basinheat.readers import InputTable, read_inputs
from basinheat.screening import (
    gather_findings,
    screen_against_neighbours,
    screen_records,
    screen_wells,
)
from basinheat.settings.model import Settings
from basinheat.tables import Readings, Wells

_log = logging.getLogger(__name__)


@dataclass(frozen=True)
class Prepared:
    """What the inputs hold, cleaned, and what was found: tables by the contracts of ``tables``."""

    wells: pd.DataFrame
    readings: pd.DataFrame
    layers: pd.DataFrame
    heat_flow: pd.DataFrame
    rejected: pd.DataFrame
    findings: pd.DataFrame
    decisions_template: pd.DataFrame


def prepare(settings: Settings, folder: str | Path) -> Prepared:
    """Read and screen all inputs of a config.

    Parameters
    ----------
    settings : Settings
        The config.
    folder : str or Path
        Where its relative paths start.

    Returns
    -------
    Prepared

    Raises
    ------
    UserError
        For faults of whole files; a faulty record goes to the ledger instead.
    """
    ledger, inputs = Ledger(), settings.inputs
    decisions = Decisions.load(inputs.decisions, folder)
    tables = {
        name: read_inputs(name, getattr(inputs, name), folder)
        for name in ("wells", "readings", "surveys", "heat_flow")
    }
    tables["layers"] = read_layers(inputs.layers, folder)
    not_las = las.append(tables, inputs, folder, ledger)
    rows_in = {name: len(table) + len(table.broken) for name, table in tables.items()}
    rows_in["las"] = not_las
    for table in tables.values():
        ledger.broken(table)
    wells, *known = prepare_wells(tables["wells"], ledger, settings, folder, decisions)
    identity = known[-1]
    readings = identity.apply(tables["readings"])
    readings = clean_readings(readings, ledger, inputs, decisions, settings.screening)
    readings = attribute(readings, ledger, wells, *known)
    layers = attribute(identity.apply(tables["layers"]), ledger, wells, *known)
    stations = attribute(identity.apply(tables["surveys"]), ledger, wells, *known)
    readings, surveys, stations = place_readings(readings, stations, ledger, wells)
    rules = settings.screening
    std_k, near_m = settings.correction.reading_std_k, settings.correction.same_depth_m
    readings, heaped = screen_records(readings, ledger, rules, std_k, settings.crs)
    readings = screen_wells(readings, ledger, rules, std_k, near_m)
    readings = screen_against_neighbours(readings, ledger, rules)
    out_layers = prepare_layers(layers, ledger, wells, surveys)
    points = prepare_heat_flow(tables["heat_flow"], ledger, settings, wells)
    mark(wells, ~np.isin(np.arange(len(wells)), readings.frame["row"]), "no_readings")
    decisions.audit(ledger)
    kept = {
        "wells": len(wells),
        "readings": len(readings),
        "layers": len(out_layers),
        "surveys": len(stations),
        "heat_flow": len(points),
        "las": 0,
    }
    _check_counts(rows_in, kept, ledger)
    rejected = ledger.table()
    _log_codes(kept, rejected)
    found = gather_findings(wells, readings.frame, rejected, ledger.expected(), heaped, rules)
    return Prepared(_wells(wells), _readings(readings), out_layers, points, rejected, *found)


def _check_counts(rows_in: dict[str, int], kept: dict[str, int], ledger: Ledger) -> None:
    """Stop where a row was lost or doubled on the way: that would be an error of this program."""
    for name, rows in rows_in.items():
        refused = ledger.rows_of(name)
        if rows != kept[name] + refused:
            raise RuntimeError(
                f"{name}: {rows} rows read, {kept[name]} kept and {refused} refused or merged"
            )


def _log_codes(kept: dict[str, int], rejected: pd.DataFrame) -> None:
    """Say how many rows were kept, and how many left by which rule."""
    for name, rows in kept.items():
        _log.info("%s: %d kept", name, rows)
    for (table, code), rows in rejected.groupby(["table", "code"]).size().items():
        _log.info("%s: %d %s", table, rows, code)


def _wells(wells: pd.DataFrame) -> pd.DataFrame:
    """Return ``tables.Wells``, by name."""
    columns = [name for name in Wells.columns if name in wells and name != "flags"]
    return Wells.conform(wells[columns].assign(flags=joined(wells)))


def _readings(table: InputTable) -> pd.DataFrame:
    """Return ``tables.Readings``, in an order that their content alone decides."""
    frame = table.frame
    out = pd.DataFrame(
        {
            "reading_id": frame["reading_id"],
            "well": frame["well"],
            "measured_depth_m": frame["depth"],
            "depth_m": frame["depth_m"],
            "depth_std_m": frame["depth_std_m"],
            "temperature_degc": frame["temperature"],
            "temperature_std_k": frame["temperature_std"],
            "kind": frame["kind"],
            "since_circulation_h": frame["since_circulation"],
            "circulation_h": frame["circulation"],
            "drilling_h": frame["drilling"],
            "hole_radius_m": frame["hole_diameter"] / 2.0,
            "mud_temperature_degc": frame["mud_temperature"],
            "log_run": frame["log_run"],
            "date": frame["date"],
            "flags": joined(frame),
            "source_file": frame["source_file"],
            "source_line": frame["source_line"],
        }
    )
    # Wells are in the order of their names; ids are of one length: short bytes sort fast.
    ids = out["reading_id"].to_numpy().astype("S17")
    numbers = (out[name] for name in ("since_circulation_h", "temperature_degc", "depth_m"))
    order = np.lexsort([ids, *numbers, frame["row"]])
    return Readings.conform(out.iloc[order].reset_index(drop=True))
