"""What the validation of the config found, in words a user can act on."""

from __future__ import annotations

import difflib
import json
import re
from collections.abc import Iterable, Mapping, Sequence
from typing import Any, get_args

from pydantic import BaseModel, ValidationError

_SENTENCES = {
    "missing": "is missing and has no default",
    "greater_than": "must be above {gt:g}{got}",
    "greater_than_equal": "must be {ge:g} or more{got}",
    "less_than": "must be below {lt:g}{got}",
    "less_than_equal": "must be {le:g} or less{got}",
    "too_short": "needs at least {min_length} entry",
    "string_too_short": "must not be empty",
    "int_from_float": "must be a whole number{got}",
    "finite_number": "must be a finite number{got}",
    "union_tag_not_found": "is missing; it says which of the models is meant",
}
# Patterns in words.
NAME = r"^[a-z0-9][a-z0-9_]{0,39}$"
_PATTERNS = {
    NAME: "be small letters, digits and _, at most 40, not first a _, such as my_wells_2026",
}
_KINDS = {
    "float": "a number",
    "int": "a whole number",
    "bool": "true or false",
    "string": "text, in quotes where YAML takes it for something else",
    "list": "a list",
    "dict": "a mapping",
    "model": "a mapping",
    "tuple": "a list",
}


def describe(
    error: ValidationError, config: Mapping[str, Any], model: type[BaseModel]
) -> list[str]:
    """Return one line per fault: dotted path, what is wrong, the way out.

    Parameters
    ----------
    error : ValidationError
        What pydantic found.
    config : mapping
        The config that was validated.
    model : type of BaseModel
        The model it was validated against.
    """
    lines: dict[str, str] = {}
    for fault in error.errors():
        place = _place(fault["loc"], config)
        if fault["type"].startswith("union_tag"):
            place.append("model")
        # Alternatives of a type each report; the first speaks for all.
        lines.setdefault(_dotted(place), _sentence(fault, model))
    return [f"{path}: {sentence}" for path, sentence in lines.items()]


def nearest(word: str, words: Iterable[str]) -> str:
    """Return a hint at the most similar of the words, or at all of them where none is."""
    known = {str(each).casefold(): str(each) for each in words}
    close = difflib.get_close_matches(word.casefold(), known, 1)
    if close:
        return f'did you mean "{known[close[0]]}"?'
    return f"choose one of {', '.join(known.values())}" if known else "there is none"


def got(value: Any) -> str:
    """Return a value as it may have stood in the config, shortened."""
    shown = json.dumps(value, default=str, ensure_ascii=False)
    return shown if len(shown) <= 60 else f"{shown[:57]}..."


def _sentence(fault: Mapping[str, Any], model: type[BaseModel]) -> str:
    """Return what is wrong with one place of the config."""
    kind, value, context = fault["type"], fault["input"], fault.get("ctx", {})
    if kind == "extra_forbidden":
        return f"unknown key; {nearest(str(fault['loc'][-1]), _keys(fault['loc'], model))}"
    if kind == "literal_error":
        what = "a method" if "order" in fault["loc"] else "known"
        return f"{got(value)} is not {what}; {_choice(value, context['expected'])}"
    if kind == "union_tag_invalid":
        choice = _choice(context["tag"], context["expected_tags"])
        return f"{got(context['tag'])} is not known; {choice}"
    if kind == "value_error":
        return str(context["error"])
    if context.get("gt") == 0:
        return f"must be positive (got {got(value)})"
    if kind == "string_pattern_mismatch":
        wanted = _PATTERNS.get(context["pattern"], f"match {context['pattern']}")
        return f"must {wanted} (got {got(value)})"
    if kind in _SENTENCES:
        return _SENTENCES[kind].format(got=f" (got {got(value)})", **context)
    wanted = _KINDS.get(kind.removesuffix("_type").removesuffix("_parsing"))
    if wanted is None:
        return f"{fault['msg']} (got {got(value)})"
    return f"must be {wanted} (got {got(value)})" + (_as_list(fault, model) * (wanted == "a list"))


def _as_list(fault: Mapping[str, Any], model: type[BaseModel]) -> str:
    """Return how one thing is written where a list is wanted, "" where that is no help."""
    value, items = fault["input"], _models(_annotation(fault["loc"], model))
    if isinstance(value, Mapping) and "file" in value:
        return f"; write [{{file: {value['file']}{', ...' * (len(value) > 1)}}}]"
    if isinstance(value, bool) or not isinstance(value, str | int | float) or value == "":
        return ""
    plain = str(value) if re.fullmatch(r"[\w./+-]+", str(value)) else got(value)
    if items:
        named = any("file" in item.model_fields for item in items)
        return f"; write [{{file: {plain}}}]" if named else ""
    return f"; write [{plain}]"


def _choice(value: Any, expected: str) -> str:
    """Return the choices of a pydantic message, the nearest first."""
    words = [word.strip(" '") for word in expected.replace(" or ", ", ").split(",")]
    close = difflib.get_close_matches(str(value).lower(), words, 1)
    hint = f'did you mean "{close[0]}"? ' if close else ""
    return f"{hint}choose one of {', '.join(words)}"


def _place(loc: Sequence[str | int], config: Any) -> list[str | int]:
    """Return the path of a fault without the names of types that pydantic puts into it."""
    place: list[str | int] = []
    here = config
    for index, step in enumerate(loc):
        last = index == len(loc) - 1 and step != "[key]"
        if isinstance(here, Mapping) and (step in here or (last and isinstance(step, str))):
            place.append(step)
            here = here.get(step)
        elif isinstance(here, list) and isinstance(step, int) and step < len(here):
            place.append(step)
            here = here[step]
    return place


def _dotted(place: Sequence[str | int]) -> str:
    text = "".join(f"[{step}]" if isinstance(step, int) else f".{step}" for step in place)
    return text.removeprefix(".")


def _keys(loc: Sequence[str | int], model: type[BaseModel]) -> list[str]:
    """Return the keys that are known at a place."""
    models = _models(_annotation(loc[:-1], model))
    return sorted({field.alias or key for one in models for key, field in one.model_fields.items()})


def _annotation(loc: Sequence[str | int], model: type[BaseModel]) -> Any:
    """Return the type of what stands at a place, by walking the models along it."""
    here: Any = model
    for step in loc:
        models = _models(here)
        tagged = [one for one in models if _tag(one) == step]
        found = [one.model_fields[step].annotation for one in models if step in one.model_fields]
        here = tagged[0] if tagged else (found[0] if found else here)
    return here


def _models(annotation: Any) -> list[type[BaseModel]]:
    """Return the models inside an annotation such as ``list[A | B]``."""
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        return [annotation]
    return [model for part in get_args(annotation) for model in _models(part)]


def _tag(model: type[BaseModel]) -> str | None:
    """Return the value of the ``model`` key that picks this model from a union."""
    field = model.model_fields.get("model")
    words = get_args(field.annotation) if field else ()
    return words[0] if len(words) == 1 else None
