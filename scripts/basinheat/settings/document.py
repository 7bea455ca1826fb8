"""The reference tables of config/README.md, made from the models, so that they cannot disagree."""

from __future__ import annotations

import json
import re
import sys
from collections.abc import Iterator, Mapping
from pathlib import Path
from string import Formatter
from typing import Any

from basinheat.settings.columns import INPUT_COLUMNS, ONE_OF, InputColumn
from basinheat.settings.model import Settings
from basinheat.settings.wells import Screening

_TYPES = {
    "string": "text",
    "number": "number",
    "integer": "whole number",
    "boolean": "true, false",
    "null": "none",
    "object": "mapping",
}
_LIMITS = {
    "exclusiveMinimum": "above {:g}",
    "minimum": "{:g} or more",
    "exclusiveMaximum": "below {:g}",
    "maximum": "{:g} or less",
}
_HEADS = ("setting", "value", "default", "meaning")
_ROW = {
    "wells": "well",
    "readings": "temperature reading",
    "layers": "rock interval of a well",
    "surveys": "station of a deviation survey; wells without one are vertical",
    "heat_flow": "heat flow that others found",
}
Row = tuple[str, str, str, str]


def settings_tables() -> str:
    """Return a table of every setting, one per section of the config, in Markdown."""
    schema = Settings.model_json_schema()
    top, parts = [], []
    for name, field in schema["properties"].items():
        rows = [*_rows(name, field, schema, name in schema["required"])]
        if _inner(field, schema):
            head = f"### `{name}`\n\n{_sentence(field['description'])}."
            parts.append(f"{head}\n\n{_table(_HEADS, _together(rows))}")
        else:
            top += rows
    first = _table(_HEADS, top)
    return "\n\n".join([f"### Top level\n\n{first}", *parts])


def columns_tables() -> str:
    """Return a table of every input column, one per kind of input table, in Markdown."""
    parts = []
    for kind, columns in INPUT_COLUMNS.items():
        rows = [_column(name, column) for name, column in columns.items()]
        either = "".join(
            f" Of {' and '.join(names)} one is required." for names in ONE_OF.get(kind, ())
        )
        table = _table(("column", "required", "unit", "meaning"), rows)
        parts.append(f"### `inputs.{kind}`\n\nOne row per {_ROW[kind]}.{either}\n\n{table}")
    return "\n\n".join(parts)


def flags_table() -> str:
    """Return a table of every flag of screening, the grave ones first, in Markdown."""
    from basinheat.screening.codes import READINGS, SEVERITIES, WELLS

    rows = [
        (f"`{code}`", of, flag.severity, _without_record(flag.sentence))
        for of, flags in (("wells", WELLS), ("readings", READINGS))
        for code, flag in flags.items()
    ]
    rows.sort(key=lambda row: (row[1] != "wells", SEVERITIES.index(row[2]), row[0]))
    return _table(("flag", "table", "severity", "meaning"), rows)


def refreshed(text: str) -> str:
    """Return the text with what stands between its markers made anew."""
    made = {"flags": flags_table(), "settings": settings_tables(), "columns": columns_tables()}
    for name, tables in made.items():
        begin, end = f"<!-- {name}: generated -->", f"<!-- {name}: end -->"
        before, rest = text.split(begin)
        text = f"{before}{begin}\n\n{tables}\n\n{end}{rest.split(end)[1]}"
    return text


def _without_record(sentence: str) -> str:
    """Return the sentence of a flag for no record: settings at their defaults, dots for values."""
    rules, text = Screening().model_dump(), ""
    for before, field, form, _ in Formatter().parse(sentence):
        value = format(rules[field], form or "") if field in rules else "…"
        text += before + (value if field else "")
    return re.sub(r"\((screening\.\w+)\)", r"(`\1`)", text)


def _column(name: str, column: InputColumn) -> Row:
    unit = "text" if column.text else column.unit or "-"
    return f"`{name}`", "yes" if column.required else "", unit, column.description


def _rows(
    path: str, field: Mapping[str, Any], schema: Mapping[str, Any], required: bool
) -> Iterator[Row]:
    """Yield the rows of a setting, or of all settings below it."""
    models = _inner(field, schema)
    if not models:
        default = "required" if required else _default(field.get("default", {}))
        yield f"`{path}`", _value(field), default, field.get("description", "")
        return
    below = f"{path}[]" if field.get("type") == "array" else path
    for name in dict.fromkeys(key for model in models for key in model["properties"]):
        having = [model for model in models if name in model["properties"]]
        inner = dict(having[0]["properties"][name])
        if "const" in inner:
            words = [model["properties"][name]["const"] for model in having]
            inner = {"enum": words, "description": "which of the models"}
        elif len(having) < len(models):
            tag = having[0]["properties"]["model"]["const"]
            inner["description"] = f"{inner['description']} (model {tag})"
        yield from _rows(f"{below}.{name}", inner, schema, name in having[0].get("required", []))


def _together(rows: list[Row]) -> list[Row]:
    """Return the rows with those that every kind of input table has told once, and first."""
    tails = [path.partition("[]")[2] for path, *_ in rows]
    shared = {tail for tail in tails if tail and tails.count(tail) >= len(INPUT_COLUMNS)}
    common: dict[str, Row] = {}
    for tail, row in zip(tails, rows, strict=True):
        if tail in shared:
            common.setdefault(tail, row)
    told_once = [(f"`inputs.*[]{tail}", *row[1:]) for tail, row in common.items()]
    return told_once + [row for tail, row in zip(tails, rows, strict=True) if tail not in shared]


def _inner(field: Mapping[str, Any], schema: Mapping[str, Any]) -> list[Mapping[str, Any]]:
    """Return the models that a setting holds, [] for a plain value."""
    parts = [field, *field.get("oneOf", []), *field.get("anyOf", []), field.get("items", {})]
    names = [part["$ref"].split("/")[-1] for part in parts if "$ref" in part]
    return [schema["$defs"][name] for name in names]


def _value(field: Mapping[str, Any]) -> str:
    """Return what a setting may be, in words."""
    if "anyOf" in field or "oneOf" in field:
        parts = field.get("anyOf", field.get("oneOf", []))
        values = [_value(part) for part in parts if part.get("type") != "null"]
        return ", ".join(dict.fromkeys(values))
    if "enum" in field:
        plain = all(word.isidentifier() for word in field["enum"])
        return ", ".join(field["enum"] if plain else [f'"{word}"' for word in field["enum"]])
    if "const" in field:
        return str(field["const"])
    if field.get("type") == "array":
        return f"list of: {_value(field.get('items', {}))}"
    limits = [text.format(field[key]) for key, text in _LIMITS.items() if key in field]
    return ", ".join([_TYPES.get(field.get("type", ""), "any"), *limits])


def _default(value: Any) -> str:
    if value in (None, "", {}, []):
        return "none"
    text = value if isinstance(value, str) else json.dumps(value)
    return f"`{text}`"


def _sentence(text: str) -> str:
    return text[:1].upper() + text[1:]


def _table(heads: Row, rows: list[Row]) -> str:
    lines = [heads, ("---",) * len(heads), *rows]
    text = "\n".join(f"| {' | '.join(cells)} |" for cells in lines)
    return text.replace("<", "\\<")


if __name__ == "__main__":
    readme = Path(sys.argv[1])
    readme.write_text(refreshed(readme.read_text(encoding="utf-8")), encoding="utf-8")
