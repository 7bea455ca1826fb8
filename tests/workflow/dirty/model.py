"""What a case of dirty input is, and what is expected of a run with it."""

from collections.abc import Callable, Mapping
from copy import deepcopy
from dataclasses import dataclass, field
from pathlib import Path

Content = str | bytes | Callable[[Path], None]

BASE_CONFIG = {
    "run": "dirty",
    "crs": "EPSG:32631",
    "inputs": {"wells": [{"file": "wells.csv"}], "readings": [{"file": "readings.csv"}]},
    "surface_temperature": {"model": "constant", "temperature_degc": 10},
}


@dataclass(frozen=True)
class Refused:
    """The run stops before any job, in one line per fault and without a traceback.

    All fragments are in the message, upper and lower case alike.
    """

    fragments: tuple[str, ...]


@dataclass(frozen=True)
class Ledger:
    """The run goes on; `rejected.csv` and the tables of kept rows look like this.

    codes   (table, code, line) -> number of rows. A table or line of None is any; a code may
            name alternatives with a bar between; a count of None is at least one.
            Lines count from 1 at the top of the file, title rows and headers included.
    kept    table -> number of rows kept. Tables that are not named are not looked at.
    flags   (table, well) -> flags that rows of this well carry, each on at least one.
            A well of None is any.
    values  (well, column) -> value of at least one row of this well in a table with that
            column; None: no row of the well has a value. A well of None is any.
    exact   no rows in the ledger beyond `codes`.
    """

    codes: Mapping[tuple[str | None, str, int | None], int | None]
    kept: Mapping[str, int]
    flags: Mapping[tuple[str, str | None], tuple[str, ...]] = field(default_factory=dict)
    values: Mapping[tuple[str | None, str], float | str | None] = field(default_factory=dict)
    tolerance: float = 0.01
    exact: bool = True


@dataclass(frozen=True)
class Case:
    """A folder of input files, and what comes of it."""

    name: str
    why: str
    files: Mapping[str, Content]
    config: Mapping
    expected: Refused | Ledger


def refused(*fragments: str) -> Refused:
    return Refused(fragments)


def ledger(codes=None, wells=16, readings=32, flags=None, values=None, **more) -> Ledger:
    """A Ledger in short: `layers=` and `surveys=` are further kept rows."""
    kept = {"wells": wells, "readings": readings}
    kept |= {table: more.pop(table) for table in ("layers", "surveys") if table in more}
    return Ledger(codes or {}, kept, flags or {}, values or {}, **more)


def rows(table: str, code: str, first: int, number: int) -> dict:
    """Codes of consecutive lines, one row each."""
    return {(table, code, line): 1 for line in range(first, first + number)}


def merged(below: Mapping, above: Mapping) -> dict:
    """Mappings merge, all else is replaced."""
    result = deepcopy(dict(below))
    for key, value in above.items():
        both = isinstance(value, Mapping) and isinstance(result.get(key), Mapping)
        result[key] = merged(result[key], value) if both else deepcopy(value)
    return result


def config_of(case: Case) -> dict:
    """The whole config of a case."""
    return merged(BASE_CONFIG, case.config)


def write_files(case: Case, folder: Path) -> None:
    """Write the input files of a case, not its config."""
    for name, content in case.files.items():
        path = folder / name
        path.parent.mkdir(parents=True, exist_ok=True)
        if isinstance(content, bytes):
            path.write_bytes(content)
        elif isinstance(content, str):
            path.write_bytes(content.encode("utf-8"))
        else:
            content(path)
