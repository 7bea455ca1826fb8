"""Dirty inputs: what comes of each case of the corpus in `dirty/`, which the manual alone wrote."""

import io
import subprocess
import sys
from collections import Counter
from pathlib import Path

import numpy as np
import pandas as pd
import pytest
import yaml
from runs import ROOT, command, environment

sys.path.insert(0, str(Path(__file__).parent))
import dirty

from basinheat import ingest
from basinheat.errors import UserError
from basinheat.settings.load import load_config
from basinheat.tables import Rejected

CASES = {case.name: case for case in dirty.CASES}
REAL = ("log_as_it_should_be", "names_that_lost_their_zeros", "sheet_with_merged_headers")
LEDGER = ["table", "code", "line"]


def prepared(case, folder):
    """Return the tables of a case, or the faults that stop it."""
    dirty.write_files(case, folder)
    try:
        settings = load_config(dirty.config_of(case), "dirty.yaml", folder)["base"]
        return ingest.prepare(settings, folder)
    except UserError as error:
        return str(error)


def entries(rejected):
    """Return the ledger as table, code and line of each row; a dropped cell has its own table."""
    return list(
        zip(rejected["table"], rejected["code"], rejected["source_line"].astype(int), strict=True)
    )


def _fits(entry, wanted):
    table, code, line = wanted
    right = table is None or entry[0] == table or (entry[0] == "values" and _dropped(code))
    return right and entry[1] in code.split("|") and line in (None, entry[2])


def _dropped(code):
    """Dropped cells stand in the ledger under `values`, with the column in the code."""
    return any(word.endswith("_dropped") for word in code.split("|"))


def unmet(expected, out):
    """Return what the tables of a case lack of what is expected, in words."""
    faults, left = [], entries(out.rejected)
    for wanted, number in expected.codes.items():
        found = [entry for entry in left if _fits(entry, wanted)]
        for entry in found:
            left.remove(entry)
        if not found or (number is not None and len(found) != number):
            faults.append(f"{wanted}: {len(found)} rows instead of {number or 'some'}")
    if expected.exact and left:
        faults.append(f"more in the ledger: {sorted(Counter(left).items())}")
    for name, number in expected.kept.items():
        kept = _kept(out, name)
        if kept is not None and kept != number:
            faults.append(f"{name}: {kept} kept instead of {number}")
    for (name, well), flags in expected.flags.items():
        rows = _of(getattr(out, name), well)
        raised = set(";".join(rows["flags"]).split(";"))
        faults += [f"{name} {well}: no flag {flag}" for flag in flags if flag not in raised]
    for (well, column), value in expected.values.items():
        faults += _value(out, well, column, value, expected.tolerance)
    return faults


def _of(table, well):
    return table if well is None else table[table["well"] == well]


def _kept(out, name):
    """Return how many rows of a table were kept; stations of surveys make no table."""
    return None if name == "surveys" else len(getattr(out, name))


def _value(out, well, column, value, tolerance):
    """Return where no row of a well has the value in any table with that column."""
    # The manual tells of diameters, the table of readings holds the radius.
    readings = out.readings.assign(hole_diameter_m=2.0 * out.readings["hole_radius_m"])
    cells = [
        cell
        for table in (out.wells, readings, out.layers)
        if column in table
        for cell in _of(table, well)[column]
    ]
    if not cells:
        return [f"{well}: no rows with {column}"]
    blank = [cell == "" if isinstance(cell, str) else np.isnan(cell) for cell in cells]
    if value is None:
        return [] if all(blank) else [f"{well}: {column} is {cells}"]
    if isinstance(value, str):
        return [] if value in cells else [f"{well}: {column} is {cells} and not {value!r}"]
    near = [cell for cell in cells if not isinstance(cell, str) and abs(cell - value) <= tolerance]
    return [] if near else [f"{well}: {column} is {cells} and not {value}"]


def _absent(fragments, message):
    return [part for part in fragments if part.casefold() not in message.casefold()]


@pytest.mark.parametrize("name", CASES)
def test_what_comes_of_dirty_input(name, tmp_path):
    case = CASES[name]
    out = prepared(case, tmp_path)
    if isinstance(case.expected, dirty.Refused):
        assert isinstance(out, str), f"{case.why} Nothing was refused."
        assert not _absent(case.expected.fragments, out), f"{case.why}\n{out}"
    else:
        assert not isinstance(out, str), f"{case.why} Refused: {out}"
        assert unmet(case.expected, out) == [], case.why
    assert str(tmp_path) not in (out.rejected.to_csv() if not isinstance(out, str) else "")


@pytest.mark.parametrize("name", REAL)
def test_the_same_in_a_real_run(name, tmp_path):
    """The command line tells the same: faults without a traceback, or the same ledger."""
    case = CASES[name]
    dirty.write_files(case, tmp_path)
    (tmp_path / "dirty.yaml").write_text(yaml.safe_dump(dirty.config_of(case)), encoding="utf-8")
    target = f"results/{dirty.config_of(case)['run']}/wells/rejected.csv"
    done = subprocess.run(
        command(ROOT, "--cores", "1", "--configfile", "dirty.yaml", "--", target),
        cwd=tmp_path,
        env=environment(ROOT),
        capture_output=True,
        text=True,
        timeout=300,
    )
    said = done.stdout + done.stderr
    assert "Traceback" not in said, said
    if isinstance(case.expected, dirty.Refused):
        assert done.returncode != 0
        assert not _absent(case.expected.fragments, said), said
        return
    assert done.returncode == 0, said
    told = pd.read_csv(io.StringIO((tmp_path / target).read_text(encoding="utf-8")), dtype=str)
    there = Rejected.conform(prepared(case, tmp_path).rejected).astype(str)
    assert sorted(zip(told["code"], told["source_line"], strict=True)) == sorted(
        zip(there["code"], there["source_line"], strict=True)
    )
