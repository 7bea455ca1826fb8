"""Sixteen good wells with two readings each, and ways to graft dirt onto them."""

import re

from .model import Case, Content, Ledger, Refused

WELL_COLUMNS = ("well", "x", "y", "ground_elevation", "datum_elevation", "total_depth")
READING_COLUMNS = ("well", "depth", "temperature", "kind", "since_circulation", "circulation")
NEXT_WELL_LINE = 18
NEXT_READING_LINE = 34


def temperature_at(depth: float) -> float:
    """30 K/km above 10 degC, the ground 5 m below the datum."""
    return 10 + 0.03 * (depth - 5)


def well_rows() -> list[tuple]:
    """N00 to N15, 20 km apart, 800 to 3500 m deep; well N<i> is in line i + 2."""
    found = []
    for i in range(16):
        x = 600000 + 20000 * (i % 4) + 100 * (37 * i % 11)
        y = 5700000 + 20000 * (i // 4) + 100 * (53 * i % 7)
        ground = 20 + 3 * i
        found.append((f"N{i:02}", x, y, ground, ground + 5, 800 + 180 * i))
    return found


def reading_rows() -> list[tuple]:
    """Two readings of each well; those of well N<i> are in lines 2 i + 2 and 2 i + 3."""
    found = []
    for i, (well, *_, total_depth) in enumerate(well_rows()):
        for depth in (total_depth // 2, total_depth - 20):
            temperature = round(temperature_at(depth) + 0.4 * (7 * i % 5 - 2), 1)
            found.append((well, depth, temperature, "equilibrium", "", ""))
    return found


def table(columns, lines, delimiter=",") -> str:
    """Delimited text."""
    return "".join(delimiter.join(map(str, line)) + "\n" for line in [columns, *lines])


def good_wells() -> str:
    return table(WELL_COLUMNS, well_rows())


def good_readings() -> str:
    return table(READING_COLUMNS, reading_rows())


def plus(text: str, *lines: str) -> str:
    """Text with further lines."""
    return text + "".join(line + "\n" for line in lines)


def with_cell(text: str, line: int, column: str, value: str) -> str:
    """Text with another cell; lines count from 1, the headers."""
    lines = text.split("\n")
    cells = lines[line - 1].split(",")
    cells[lines[0].split(",").index(column)] = value
    lines[line - 1] = ",".join(cells)
    return "\n".join(lines)


def with_line(text: str, line: int, value: str) -> str:
    """Text with another line."""
    lines = text.split("\n")
    lines[line - 1] = value
    return "\n".join(lines)


def with_columns(text: str, *names: str) -> str:
    """Text with further columns, blank in all rows."""
    headers, *lines = text.splitlines()
    commas = "," * len(names)
    return "\n".join([",".join([headers, *names]), *(line + commas for line in lines)]) + "\n"


def renamed(text: str, names: dict[str, str]) -> str:
    """Text with other headers."""
    headers, rest = text.split("\n", 1)
    return ",".join(names.get(name, name) for name in headers.split(",")) + "\n" + rest


def with_temperatures(*cells: str) -> str:
    """Readings with one more of N15 per cell, each 50 m deeper from 1800 m (line 34 on)."""
    more = (f"N15,{1800 + 50 * i},{cell},equilibrium,," for i, cell in enumerate(cells))
    return plus(good_readings(), *more)


def with_depths(*cells: str) -> str:
    """Readings with one more of N15 per cell of depth, all plausible for 2500 m (line 34 on)."""
    more = (f"N15,{cell},{84.9 + i / 10:.1f},equilibrium,," for i, cell in enumerate(cells))
    return plus(good_readings(), *more)


def numbered(text: str) -> str:
    """Wells named 1000 to 1015 rather than N00 to N15."""
    return re.sub(r"^N(\d\d)", r"10\1", text, flags=re.M)


def inputs(**tables) -> dict:
    """The config for `wells={...}`, `readings={...}`: one file each, or a list of them."""
    return {"inputs": {k: [v] if isinstance(v, dict) else v for k, v in tables.items()}}


def case(
    name: str,
    why: str,
    expected: Ledger | Refused,
    *,
    wells: Content | None = None,
    readings: Content | None = None,
    files: dict[str, Content] | None = None,
    config: dict | None = None,
) -> Case:
    """A case whose files are the good ones where it states none."""
    base = {
        "wells.csv": good_wells() if wells is None else wells,
        "readings.csv": good_readings() if readings is None else readings,
    }
    return Case(name, why, base | (files or {}), config or {}, expected)
