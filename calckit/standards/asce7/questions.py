"""Reviewers' questions: each with the lines that answer it, the engineer's reason that it does not apply, or open.

Knows what counts as an answer and how the row of a question is put together. Must not know the questions themselves.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from calckit.core.book import Entry, this_cell
from calckit.core.handle import Handle, Handles
from calckit.core.inputs import NONE
from calckit.core.record import NOT_CHECKED, Flag, Line, Operand
from calckit.core.scope import OPEN_ANSWER
from calckit.standards.asce7.questions_rules import NOT_APPLICABLE, QUESTIONS, Need, Question
from calckit.standards.asce7.summary import directions

if TYPE_CHECKING:
    from calckit.core.scope import Scope

OWNER = "originator"


@dataclass
class _Row:
    """What was found for one question: answering lines, reasons why it does not apply, what is missing by part.

    `waits` are lines that are there and give no answer, `absent` the ids that are not there; `unasked` tells that the
    question asks for nothing here.
    """

    unasked: bool
    lines: dict[str, Line] = field(default_factory=dict)
    reasons: dict[str, Line] = field(default_factory=dict)
    missing: dict[str, list[str]] = field(default_factory=dict)
    waits: dict[str, None] = field(default_factory=dict)
    absent: dict[str, None] = field(default_factory=dict)


def reviewers_questions(scope: Scope) -> Handles:
    """One note for each question, over all directions."""
    calc = scope.calc
    with calc.step():
        return Handles(_write(calc, question, _row(directions(calc), question)) for question in QUESTIONS)


def _row(parts: Sequence[Scope], question: Question) -> _Row:
    row = _Row(unasked=bool(question.because))
    for place, part in enumerate(parts):
        applies = part.word(question.id) != NOT_APPLICABLE
        if not applies:
            _take(part, question.id, row.reasons)
        asked = [need for need in question.needs if _is_asked(part, need)]
        for need in asked:
            if not (need.shared and place):
                _answer(part, need, row, applies)
        row.unasked = row.unasked and not asked
        for name in question.rests.split() if not asked else ():
            _take(part, name, row.lines)
    calc = parts[0].calc
    for found in (calc, *calc.parts.values()) if question.also else ():
        for name in question.also.split():
            _take(found, name, row.lines)
    return row


def _take(scope: Scope, name: str, into: dict[str, Line]) -> None:
    entry = scope.find(name)
    if entry:
        into[entry.line.id] = entry.line


def _is_asked(scope: Scope, need: Need) -> bool:
    return all(_first_word(scope, names) in words for names, words in need.where)


def _first_word(scope: Scope, names: str) -> str | None:
    return next((word for name in names.split() if (word := scope.word(name))), None)


def _answer(scope: Scope, need: Need, row: _Row, applies: bool) -> None:
    """Enter the line that answers, or what there is instead."""
    said = []
    for name in need.names.split():
        entry = scope.find(name)
        lacks = _lacks(entry.line, need) if entry else ""
        if entry and not lacks:
            row.lines[entry.line.id] = entry.line
            return
        if entry:
            row.waits[entry.line.id] = None
            said.append(f"{name} ({lacks})")
    if not applies:
        return
    part, name = "" if need.shared else scope.id, need.names.split()[0].removesuffix("_found")
    if not said:
        row.absent |= dict.fromkeys(f"{part}.{other}" if part else other for other in need.names.split())
    row.missing.setdefault(part, []).extend(said or [name])


def _lacks(line: Line, need: Need) -> str:
    """Why a line is no answer; blank if it is one."""
    if line.value in (NONE, OPEN_ANSWER):
        return str(line.value)
    if line.verdict == NOT_CHECKED:
        return NOT_CHECKED
    return "" if need.text in line.text else f"does not say {need.text.strip(': ')}"


def _write(calc: Scope, question: Question, row: _Row) -> Handle:
    """The note of one question. What is missing stands in its detail and is an open item."""
    asked = f"{question.id} {question.words}"
    detail, flags = "", []
    if row.missing:
        detail = f"not answered: {_by_part(row.missing)}"
        flags.append(Flag(f"{asked}: {detail}", True, OWNER))
    told = _told(calc, list(row.lines.values()))
    if row.unasked:
        told = f"{NOT_APPLICABLE} because {question.because}: {told}"
    because = {id_: found.text or "no reason given" for id_, found in row.reasons.items()}
    reasons = [f"{NOT_APPLICABLE} because: {why} ({id_})" for id_, why in because.items()]
    line = Line(f"review_{question.id}", "note", meaning=asked, text="; ".join(filter(None, [*reasons, told])))
    line.detail, line.flags = detail, flags
    line.inputs = {id_: Operand(None, "", "") for id_ in row.absent}
    return calc.write(Entry(line, this_cell()), [*row.lines, *row.reasons, *row.waits])


def _told(calc: Scope, lines: Sequence[Line]) -> str:
    """What the lines say, part by part."""
    said: dict[str, list[str]] = {}
    for line in lines:
        said.setdefault(line.part, []).append(_says(calc, line))
    return _by_part(said)


def _by_part(said: Mapping[str, Sequence[str]]) -> str:
    return "; ".join(f"{part}: {', '.join(texts)}" if part else ", ".join(texts) for part, texts in said.items())


def _says(calc: Scope, line: Line) -> str:
    name = line.id.removeprefix(f"{line.part}.")
    if line.verdict:
        return f"{line.meaning} {line.verdict}"
    if isinstance(line.value, float):
        return f"{calc.plain(name)} = {line.shown}"
    if isinstance(line.value, str):
        return f"{name} {line.value}"
    return calc.plain(name) if line.rows else name
