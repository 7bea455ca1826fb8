"""Flags and refusals as one table for people, and the form in which they answer it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np
import pandas as pd

from basinheat.flags import PREFIX
from basinheat.screening.codes import (
    BEYOND_DECISION,
    DOUBT,
    DOUBTFUL_VALUES,
    NOTE,
    READINGS,
    REFUSED,
    ROUNDED,
    SEVERITIES,
    WELLS,
    Flag,
)
from basinheat.screening.rounding import Heaped
from basinheat.settings.wells import Screening
from basinheat.tables import DecisionsTemplate, Findings
from basinheat.units import conversion

_TABLES = ("wells", "readings", "layers", "surveys", "heat_flow", "values")
_ALWAYS = ("well", "reading_id", "source_file", "source_line", "expected_degc", "score")
_REVIEWED = f"{PREFIX}reviewed_"


def gather_findings(
    wells: pd.DataFrame,
    readings: pd.DataFrame,
    rejected: pd.DataFrame,
    expected: pd.DataFrame,
    heaped: Sequence[Heaped],
    rules: Screening,
) -> tuple[pd.DataFrame, pd.DataFrame]:
    """Gather what screening found.

    Parameters
    ----------
    wells, readings : DataFrame
        What was kept, with ``flag:<code>`` columns; readings with ``gradient_k_km,
        expected_degc, score``.
    rejected : DataFrame
        The ledger, ``tables.Rejected``.
    expected : DataFrame
        ``reading_id, expected_degc, score`` of refused readings, where known.
    heaped : sequence of Heaped
        Files that round.
    rules : Screening
        Thresholds, which the sentences name.

    Returns
    -------
    findings : DataFrame
        ``tables.Findings``, the worst first.
    template : DataFrame
        ``tables.DecisionsTemplate``: a row per well or reading with a refusal or a doubt that no
        decision has answered.
    """
    parts = [
        _of_ledger(rejected, expected),
        _of_flags("readings", readings, READINGS, rules),
        _of_flags("wells", wells, WELLS, rules),
        _of_files(heaped, rules),
    ]
    found = pd.concat([part for part in parts if len(part)] or parts[:1], ignore_index=True)
    found = Findings.conform(found.iloc[_worst_first(found)])
    return found, _template(found, _answered(wells, readings))


def _worst_first(found: pd.DataFrame) -> np.ndarray:
    """Return the order by severity, distance from the neighbours, rule, file and line."""
    code, file, table = (
        pd.factorize(found[name], sort=True)[0] for name in ("code", "source_file", "table")
    )
    gravity = found["severity"].map({name: i for i, name in enumerate(SEVERITIES)}).to_numpy()
    off = -np.nan_to_num(np.abs(found["score"].to_numpy(float)))
    return np.lexsort([found["source_line"].to_numpy(), file, table, code, off, gravity])


def _of_ledger(rejected: pd.DataFrame, expected: pd.DataFrame) -> pd.DataFrame:
    """Return refused rows and dropped values."""
    lines = rejected[rejected["table"].isin(_TABLES)]
    code, values = lines["code"], (lines["table"] == "values").to_numpy()
    told = values | code.isin(["merged", "reviewed_reject"]).to_numpy()
    severity = np.where(values & code.isin(DOUBTFUL_VALUES), DOUBT, np.where(told, NOTE, REFUSED))
    whose = np.where(lines["reading_id"] != "", "readings", "wells")
    around = expected.drop_duplicates("reading_id").set_index("reading_id")
    around = around.reindex(lines["reading_id"]).reset_index(drop=True)
    return lines.drop(columns="column").assign(
        severity=severity,
        table=np.where(values, whose, lines["table"]),
        expected_degc=around["expected_degc"].to_numpy(float),
        score=around["score"].to_numpy(float),
    )


def _of_flags(
    table: str, frame: pd.DataFrame, codes: Mapping[str, Flag], rules: Screening
) -> pd.DataFrame:
    """Return a row per flag that is raised."""
    parts = []
    for code, flag in codes.items():
        if f"{PREFIX}{code}" not in frame:
            continue
        said = f"{flag.sentence}{flag.value}"
        names = [name for name in frame if name in _ALWAYS or f"{{{name}" in said]
        rows = frame.loc[frame[f"{PREFIX}{code}"].to_numpy(bool), names]
        numbers = ("expected_degc", "score")
        parts.append(
            pd.DataFrame(
                {
                    "severity": flag.severity,
                    "code": code,
                    "sentence": _written(flag.sentence, rows, rules),
                    "well": rows["well"],
                    "reading_id": rows.get("reading_id", ""),
                    "table": table,
                    "source_file": rows["source_file"],
                    "source_line": rows["source_line"],
                    "value": _written(flag.value, rows, rules),
                }
                | {name: rows.get(name, np.nan) for name in numbers}
            )
        )
    return pd.concat(parts, ignore_index=True) if parts else Findings.empty()


def _written(sentence: str, rows: pd.DataFrame, rules: Screening) -> list[str]:
    """Return the sentence with the values of each row and the thresholds."""
    names = [name for name in rows.columns if f"{{{name}:" in sentence or f"{{{name}}}" in sentence]
    limits = {key: limit for key, limit in rules.model_dump().items() if f"{{{key}" in sentence}
    if not names:
        return [sentence.format(**limits)] * len(rows)
    # By place and not by name: hundreds of thousands of sentences are written.
    for place, name in enumerate(names):
        sentence = sentence.replace(f"{{{name}:", f"{{{place}:")
        sentence = sentence.replace(f"{{{name}}}", f"{{{place}}}")
    columns = [rows[name].tolist() for name in names]
    return [sentence.format(*values, **limits) for values in zip(*columns, strict=True)]


def _of_files(heaped: Sequence[Heaped], rules: Screening) -> pd.DataFrame:
    """Return a row per file that rounds."""
    rows = [
        {
            "severity": NOTE,
            "code": f"rounded_to_{one.step}",
            "sentence": ROUNDED.format(
                **vars(one),
                heaping_score=rules.heaping_score,
                std=one.step * conversion(one.unit, "degC")[0] / 12.0**0.5,
            ),
            "table": "readings",
            "source_file": one.source_file,
            "source_line": 0,
            "value": f"{one.ending} of {one.whole}",
            "score": np.nan,
        }
        for one in heaped
    ]
    return Findings.conform(pd.DataFrame(rows)) if rows else Findings.empty()


def _answered(wells: pd.DataFrame, readings: pd.DataFrame) -> set[tuple[str, str]]:
    """Return table and name of the records that a reviewer has decided on."""
    done = set()
    for table, frame, name in (("wells", wells, "well"), ("readings", readings, "reading_id")):
        marks = [column for column in frame if str(column).startswith(_REVIEWED)]
        if marks:
            rows = frame[marks].to_numpy(bool).any(axis=1)
            done |= {(table, value) for value in frame.loc[rows, name]}
    return done


def _template(found: pd.DataFrame, answered: set[tuple[str, str]]) -> pd.DataFrame:
    """Return one line a record that a person should decide on."""
    ask = found["severity"].isin([REFUSED, DOUBT]) & ~found["code"].isin(BEYOND_DECISION)
    ask &= found["table"].isin(["wells", "readings"])
    rows = found[ask]
    record = rows["reading_id"].where(rows["table"] == "readings", rows["well"])
    key = rows["table"] + ":" + record
    done = {f"{table}:{name}" for table, name in answered}
    rows, key = rows[(record != "") & ~key.isin(done)], key[(record != "") & ~key.isin(done)]
    first = ~key.duplicated()
    # The rows are in order of gravity: the first of a record says where it stands.
    out = rows[first].rename(columns={"reading_id": "reading", "value": "noted"})
    out = out.drop(columns=["table", "score"]).set_axis(key[first].to_numpy())
    several = key.duplicated(keep=False).to_numpy()
    for name, mark in (("code", ";"), ("sentence", " | ")):
        joined = rows.loc[several, name].groupby(key[several].to_numpy(), sort=False).agg(mark.join)
        out.loc[joined.index, name] = joined
    return DecisionsTemplate.conform(out.reset_index(drop=True))
