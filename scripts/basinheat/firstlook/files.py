"""What each input file holds, what was read of it, and what became of its rows."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from typing import Any, get_args

import numpy as np
import pandas as pd

from basinheat.conductivity.catalogue import Catalogue
from basinheat.conductivity.mixtures import Vocabulary, load_formations
from basinheat.firstlook.columns import number_facts, text_facts
from basinheat.firstlook.formations import formations
from basinheat.firstlook.headers import suggest, unit_in
from basinheat.firstlook.inputfile import InputFile
from basinheat.firstlook.logfiles import logs
from basinheat.ingest.tops import read_layers
from basinheat.readers import InputTable, look, read_inputs
from basinheat.readers.inputs import source_name
from basinheat.settings import schemas
from basinheat.settings.columns import INPUT_COLUMNS
from basinheat.settings.files import matches
from basinheat.settings.inputs import Kind, TableFile
from basinheat.settings.model import Settings

KINDS = get_args(Kind)
MOST_KINDS = 20
MOST_ROCKS = 200  # looked up in the catalogue; formation names may be thousands
# Words for kinds of readings (common practice); what is none of these is left to the user.
LIKELY_KINDS = {
    "dst": ("dst", "drill stem", "rft", "mdt", "wft", "production test", "prod", "test", "pvt"),
    "equilibrium": ("eq", "equil", "static", "stabil", "shut", "continuous", "observation"),
    "corrected": ("corr", "horner", "extrapol", "formation temp", "true"),
    "bht": ("bht", "log", "bottom", "max", "mrt", "wireline"),
}


def read_files(settings: Settings, folder: str) -> list[InputFile]:
    """Read every file of the inputs, in the order of the config.

    Parameters
    ----------
    settings : Settings
        The config.
    folder : str
        Where its relative paths start.
    """
    found = []
    for table in INPUT_COLUMNS:
        specs = getattr(settings.inputs, table)
        read = (
            read_layers(specs, folder) if table == "layers" else read_inputs(table, specs, folder)
        )
        rows = read.frame.groupby(["config", "source_file"]).indices if len(read) else {}
        seen: set[tuple[int, str]] = set()
        for number, spec in enumerate(specs):
            for path in matches(spec.file, folder):
                label = source_name(path, folder)
                # Files of one name from several folders outside the config's are told as one.
                if (number, label) in seen:
                    continue
                seen.add((number, label))
                here = rows.get((number, label), np.empty(0, np.int64))
                found.append(_file(table, number, path, label, spec, read, here))
    return [*found, *logs(settings.inputs, folder)]


def describe(
    file: InputFile, files: Sequence[InputFile], settings: Settings, rocks: Catalogue
) -> dict[str, Any]:
    """Return what is to be told of a file before its rows are judged.

    Parameters
    ----------
    file : InputFile
        The file.
    files : sequence of InputFile
        All files of the config, this one among them.
    settings : Settings
        The config.
    rocks : Catalogue
        Of conductivities, for the names of layers.
    """
    tops, wells = formations(file)
    return {
        "table": file.table,
        "place": file.place,
        "file": file.label,
        "rows": len(file.frame) + file.broken,
        "read_as": file.notes,
        "columns": _columns(file, settings.crs),
        "absent": [
            {"name": name, "meaning": column.description}
            for name, column in INPUT_COLUMNS[file.table].items()
            if name not in file.columns
        ],
        "not_read": _not_read(file, files),
        "kinds": _kinds(file),
        "rocks": _rocks(file, settings, rocks),
        "formations": tops,
        "wells": wells,
    }


def with_fate(
    entry: dict[str, Any], file: InputFile, rejected: pd.DataFrame, flags: pd.Series
) -> dict[str, Any]:
    """Return an entry with what became of the file's rows.

    Parameters
    ----------
    entry : dict
        Of ``describe``.
    file : InputFile
        The file.
    rejected : DataFrame
        ``tables.Rejected``.
    flags : Series
        The ;-joined flags of the kept rows of this file; empty for tables without flags.
    """
    here = rejected[rejected["source_file"].isin(sorted(file.sources))]
    rows = here[here["table"].isin([file.table, *file.unread])]
    headers = sorted({part for each in file.columns.values() for part in (each, *each.split(", "))})
    cells = here[(here["table"] == "values") & here["column"].isin(headers)]
    merged = int((rows["code"] == "merged").sum())
    refused = len(rows) - merged
    return entry | {
        "kept": entry["rows"] - merged - refused,
        "merged": merged,
        "refused": refused,
        "reasons": [*reasons(rows, "row"), *reasons(cells, "cell")],
        "flags": flag_counts(flags),
    }


def reasons(lines: pd.DataFrame, what: str) -> list[dict[str, Any]]:
    """Return code, rows and the first example of each reason in the ledger, the commonest first."""
    if lines.empty:
        return []
    ordered = lines.sort_values(["source_file", "source_line", "sentence"], kind="stable")
    first = ordered.drop_duplicates("code").set_index("code")
    counts = lines["code"].value_counts()
    found = [
        {
            "code": str(code),
            "what": what,
            "rows": int(counts[code]),
            "file": str(example["source_file"]),
            "line": int(example["source_line"]),
            "well": str(example["well"])[:200],
            "column": str(example["column"])[:200],
            "value": str(example["value"])[:200],
            "sentence": str(example["sentence"])[:1000],
        }
        for code, example in first.iterrows()
    ]
    return sorted(found, key=lambda each: (-each["rows"], each["code"]))


def flag_counts(flags: pd.Series) -> list[dict[str, Any]]:
    """Return code and rows of each flag, the commonest first."""
    totals: dict[str, int] = {}
    for joined, rows in flags.value_counts().items():
        for code in filter(None, str(joined).split(";")):
            totals[code] = totals.get(code, 0) + int(rows)
    ordered = sorted(totals.items(), key=lambda each: (-each[1], each[0]))
    return [{"code": code, "rows": rows} for code, rows in ordered]


def _file(
    table: str,
    number: int,
    path: str,
    label: str,
    spec: TableFile,
    read: InputTable,
    rows: np.ndarray,
) -> InputFile:
    """Return one file with its rows of the table it was read into."""
    places = schemas.is_places(path)
    present = look(path, spec, schemas.all_needed(spec, table, places)).headers
    columns = schemas.found(spec, table, present, places)
    if spec.more_headers:
        columns["top"] = ", ".join(spec.more_headers)
    notes = [
        {"what": str(note["what"]).replace("_", " "), "value": str(note["value"])[:200]}
        for note in read.notes
        if note["file"] == label and not note["column"] and note["what"] not in ("rows", "broken")
    ]
    broken = int((read.broken["source_file"] == label).sum())
    place = f"inputs.{table}[{number}]"
    frame = read.frame.iloc[rows]
    names = frozenset([label])
    return InputFile(table, place, path, label, names, spec, present, columns, frame, broken, notes)


def _columns(file: InputFile, map_crs: str) -> list[dict[str, Any]]:
    """Return the facts of each column that is read."""
    out = []
    for name, column in INPUT_COLUMNS[file.table].items():
        if name not in file.columns:
            continue
        entry: dict[str, Any] = {"name": name, "header": file.columns[name]}
        if column.text:
            out.append(entry | {"unit": "", "stated": True} | text_facts(file.frame[name]))
            continue
        unit, stated, of_facts = _unit(file, name, map_crs)
        facts = number_facts(file.frame, name, column.unit, of_facts)
        named = bool(of_facts) and unit_in(file.columns[name], column.unit) == of_facts
        told = {"unit": unit, "canonical": column.unit, "stated": stated, "named": named}
        out.append(entry | told | facts)
    return out


def _unit(file: InputFile, name: str, map_crs: str) -> tuple[str, bool, str | None]:
    """Return a column's unit (or CRS) in words, whether it is stated, and that of the numbers."""
    if name in ("x", "y"):
        ready, column = schemas.crs_of(file.spec, file.table, file.headers)
        own = getattr(file.spec, "crs", None) or ready
        if column:
            return f"by row, from {column}", True, ""
        if schemas.is_places(file.path) and not own:
            return "as the file says", True, ""
        return own or map_crs, bool(own), ""
    if name in file.unit_columns:
        return f"by row, from {file.unit_columns[name]}", True, None
    unit = file.unit(name)
    stated = name in schemas.units_of(file.spec, file.table)
    return unit, stated or INPUT_COLUMNS[file.table][name].unit == "", unit


def _not_read(file: InputFile, files: Sequence[InputFile]) -> list[dict[str, str]]:
    """Return the headers that no table reads from this file, and what each may be."""
    here = [each for each in files if each.path == file.path]
    others = sorted({"wells", "readings", "layers", "surveys"} - {each.table for each in here})
    used = {header for each in here for header in each.columns.values()}
    used.update(header for each in here for header in each.unit_columns.values())
    used.update(header for each in here for header in each.spec.more_headers)
    used.add(schemas.crs_of(file.spec, file.table, file.headers)[1])
    found = []
    for header in dict.fromkeys(each for each in file.headers if each and each not in used):
        guess = suggest(header, file.table, file.columns, others)
        found.append(
            {
                "header": header[:200],
                "table": guess.table if guess else "",
                "name": guess.name if guess else "",
                "unit": guess.unit if guess else "",
            }
        )
    return found


def _kinds(file: InputFile) -> list[dict[str, Any]]:
    """Return the words in the column of kinds: what each is taken for, and its rows."""
    if file.table != "readings":
        return []
    known: dict[str, str] = {kind: kind for kind in KINDS}
    known |= {"": file.spec.kind}
    known |= {word.strip().lower(): kind for word, kind in file.spec.kinds.items()}
    counts = file.frame["kind"].value_counts()
    found = [
        {
            "word": str(word)[:200],
            "kind": known.get(str(word).lower(), ""),
            "rows": int(rows),
            "guess": _likely_kind(str(word)),
        }
        for word, rows in counts.items()
    ]
    return sorted(found, key=lambda each: (-each["rows"], each["word"]))[:MOST_KINDS]


def _likely_kind(word: str) -> str:
    """Return the kind that a word of the trade stands for, "" where it is none or doubts itself."""
    text = word.lower()[:200]
    if "?" in text:
        return ""
    for kind, parts in LIKELY_KINDS.items():
        if re.search(rf"(?<![a-z])({'|'.join(parts)})", text):
            return kind
    return ""


def _rocks(file: InputFile, settings: Settings, rocks: Catalogue) -> list[dict[str, Any]]:
    """Return the commonest names of rock; what the catalogue does not know, with the nearest."""
    wide = bool(getattr(file.spec, "tops", {}))
    if file.table != "layers" or not (wide or {"lithology", "formation"} & {*file.columns}):
        return []
    lithology, formation = file.frame["lithology"], file.frame["formation"]
    named = lithology.where(lithology != "", formation)
    counts = named[named != ""].value_counts()
    stated = settings.conductivity
    words = Vocabulary(rocks, stated.lithologies, load_formations(stated.formations))
    unknown: Mapping[str, str] = words.unknown(map(str, counts.index[:MOST_ROCKS]))
    found = [
        {"word": str(word)[:200], "rows": int(rows), "unknown": unknown.get(str(word), "")[:200]}
        for word, rows in counts[:MOST_ROCKS].items()
    ]
    ordered = sorted(found, key=lambda each: (not each["unknown"], -each["rows"], each["word"]))
    return ordered[:MOST_KINDS]
