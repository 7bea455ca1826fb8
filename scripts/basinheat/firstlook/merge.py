"""One question per file and cause, the weightiest first."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import replace
from typing import Any

from basinheat.firstlook.proposals import setting
from basinheat.firstlook.questions import NAMES, PLACES, ROCKS, UNITS, Question


def merged(asked: Iterable[Question]) -> list[Question]:
    """Return the questions with those of one cause made one, sorted by weight and rows concerned.

    A question that names an answer takes in those that only tell what follows of the same cause:
    with degF stated, no reading may be too hot any more.

    Parameters
    ----------
    asked : iterable of Question
        In the order of the files.
    """
    ordered = list(asked)
    leaders: list[Question] = []
    for each in sorted(ordered, key=lambda one: (not one.lines, one.weight)):
        at = next((i for i, leader in enumerate(leaders) if _one_cause(leader, each)), None)
        if at is None:
            leaders.append(each)
        else:
            leaders[at] = _taken_in(leaders[at], each)
    # stable: what weighs the same stays in the order of the files
    first = {(each.place, each.file, each.ask): number for number, each in enumerate(ordered)}
    return sorted(
        leaders,
        key=lambda one: (one.weight, -one.rows, first.get((one.place, one.file, one.ask), 0)),
    )


def _one_cause(leader: Question, other: Question) -> bool:
    """Tell whether an answer to the one question is an answer to the other."""
    if leader.cause != other.cause:
        return False
    same_place = other.place in {place for place, _ in _files(leader)}
    if not leader.cause:  # the same answer for several files of one entry
        return bool(leader.lines) and leader.at == other.at and leader.lines == other.lines
    if leader.cause == PLACES:
        return same_place and not other.lines
    if leader.cause == UNITS:
        return same_place and _about_the_same(leader, other)
    if leader.cause == NAMES:
        return leader.lines == other.lines if other.lines else same_place
    return leader.cause == ROCKS


def _about_the_same(leader: Question, other: Question) -> bool:
    """Tell whether two questions about units agree, and one can stand for both."""
    mine, its = leader.lines.get("units", {}), other.lines.get("units", {})
    if mine and its:
        return all(mine.get(name, unit) == unit for name, unit in its.items())
    return bool({*leader.of, *mine} & {*other.of, *its})


def _taken_in(leader: Question, other: Question) -> Question:
    """Return a question that tells what both have seen."""
    lines = _both(leader.lines, other.lines)
    told = other.seen if other.file == leader.file else f"{other.file}: {other.seen}"
    files = list(dict.fromkeys([*_files(leader), *_files(other)]))
    return replace(
        leader,
        weight=min(leader.weight, other.weight),
        rows=max(leader.rows, other.rows),
        seen=leader.seen if told in leader.seen else f"{leader.seen} {told}",
        lines=lines,
        ask=leader.ask if lines == leader.lines else f"Add to {leader.at} {setting(**lines)}?",
        files=tuple(files),
        of=tuple(dict.fromkeys([*leader.of, *other.of])),
    )


def _both(mine: Mapping[str, Any], its: Mapping[str, Any]) -> dict[str, Any]:
    """Return the lines of two answers that do not contradict each other."""
    out = dict(mine)
    for key, value in its.items():
        out[key] = {**value, **mine.get(key, {})} if isinstance(value, Mapping) else value
    # Nothing new leaves the order, and with it the wording, as it is.
    return dict(mine) if out == dict(mine) else out


def _files(question: Question) -> tuple[tuple[str, str], ...]:
    return question.files or ((question.place, question.file),)
