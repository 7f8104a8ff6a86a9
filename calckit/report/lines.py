"""From the record's lines to the lines of the document model.

Knows how one line is worded, what it rests on, what rests on it, and which open item, table or candidate list it
belongs to. Must not know sections, sheets or output forms.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field

from calckit import units
from calckit.core.record import NOT_CHECKED, NOT_OK, TO_BE_CONFIRMED, Candidate, Flag, Line, OpenItem, Record
from calckit.report import enclosures
from calckit.report.model import CandidateView, FlagView, LineView, OverrideView, Ref, Typeset

FORMS = ("plain", "latex", "mathml", "typst")
LABELS = {
    "given": "input",
    "assumption": "assumption",
    "table": "table value",
    "computed": "",
    "analysis": "analysis",
    "check": "check",
    "judgment": "judgment",
    "note": "note",
}
"""The kinds of lines in the reader's words."""


def typeset(forms: Mapping[str, str]) -> Typeset | None:
    """The four forms of a symbol; None where the record holds none (words have no symbol)."""
    return Typeset(forms["plain"], forms["latex"], forms["mathml"], forms["typst"]) if forms else None


@dataclass
class Lines:
    """The lines of a record, ready to be looked up and worded; `was` says what stood in place of those that changed."""

    record: Record
    was: Mapping[str, str] = field(default_factory=dict)

    def __post_init__(self) -> None:
        lines = self.record.lines
        self.by_id = {line.id: line for line in lines}
        self._items = {(item.line, item.text): place for place, item in enumerate(open_items(self.record), 1)}
        self._closed = {line.closes: line.id for line in lines if line.closes}
        self._bound = enclosures.bound(self.record)
        self._tables: dict[str, int] = {}
        for number, table in enumerate(self.record.tables, 1):
            for column in table.columns:
                self._tables.setdefault(column.line, number)
        self._beaten = {candidate.line for line in lines for candidate in line.candidates if not candidate.governs} - {
            candidate.line for line in lines for candidate in line.candidates if candidate.governs
        }
        self._used: dict[str, list[Line]] = {}
        for line in lines:
            for id_ in _rests_on(line):
                self._used.setdefault(id_, []).append(line)

    def ref(self, id_: str) -> Ref | None:
        """The reference to a line, None if there is no such line."""
        line = self.by_id.get(id_)
        return Ref(line.n, line.id) if line else None

    def refs(self, ids: Iterable[str]) -> tuple[Ref, ...]:
        """References to those ids that are lines, each once, in the order of their numbers."""
        found = {ref for id_ in ids if (ref := self.ref(id_))}
        return tuple(sorted(found, key=lambda ref: ref.n))

    def inputs(self, line: Line) -> tuple[Ref, ...]:
        """The lines that a line rests on."""
        return self.refs(_rests_on(line))

    def used_in(self, line: Line) -> tuple[Ref, ...]:
        """The lines that rest on a line."""
        return self.refs(user.id for user in self._used.get(line.id, []))

    def enclosed(self, line: Line) -> int:
        """The place, from 1, of the bound page that the source of a line names; 0 if none is bound."""
        place = enclosures.place(line.source, self._bound) if line.source else None
        return 0 if place is None else place + 1

    def open_number(self, line: Line, flag: Flag) -> int:
        """The number of a flag among the open items, 0 if it is none."""
        return self._items.get((line.id, flag.text), 0) if flag.open else 0

    def is_open(self, line: Line) -> bool:
        """Whether an open item of this line stands."""
        return any(self.open_number(line, flag) for flag in line.flags)

    def closed_by(self, line: Line) -> Ref | None:
        """The line that closes what this line left open."""
        return self.ref(self._closed.get(line.id, "")) if any(flag.open for flag in line.flags) else None

    def shown(self, line: Line) -> str:
        """The printed result; of a list, the entry of the row that is worked."""
        if not isinstance(line.shown, list):
            return line.shown
        if not line.row:
            return ""
        return f"{line.shown[line.rows.index(line.row)]} {units.shown(line.unit)}".rstrip()

    def override(self, line: Line) -> OverrideView | None:
        """What stands in place of the kit's own value."""
        if not line.override or not line.computed:
            return None
        kept = line.computed.shown
        return OverrideView(
            Ref(line.n, line.id),
            typeset(line.typeset),
            line.meaning,
            ", ".join(kept) if isinstance(kept, list) else kept,
            line.override.shown,
            line.override.reason,
            line.override.by,
            line.override.document,
        )

    def view(self, line: Line) -> LineView:
        """A line in the document model.

        Raises KeyError if one of the four printed forms is missing.
        """
        forms = line.forms
        pairs = list(zip(*(forms[name] for name in FORMS), strict=True)) if forms else []
        if pairs and pairs[0][0] == line.typeset.get("plain"):
            del pairs[0]  # the symbol is printed as its own formula
        flags = [self._flag(line, flag) for flag in line.flags]
        listed = isinstance(line.shown, list)
        table = self._tables.get(line.id, 0)
        return LineView(
            n=line.n,
            id=line.id,
            kind=line.kind,
            label=LABELS[line.kind],
            part=line.part,
            meaning="" if line.kind in ("note", "judgment") and line.meaning == line.kind else line.meaning,
            name=line.symbol,
            symbol=typeset(line.typeset),
            steps=tuple(Typeset(*pair) for pair in pairs),
            relation=line.kind == "check",
            shown=self.shown(line),
            at=line.row if listed else "",
            table=table,
            values=tuple(zip(line.rows, line.shown, strict=True)) if listed and not table else (),
            source=source(line),
            confirmation=confirmation(line),
            text=line.text,
            detail=line.detail,
            margin=f"{line.margin.shown} {line.margin.to}" if line.margin else "",
            verdict=line.verdict or "",
            missing=line.missing,
            candidates=tuple(self._candidate(candidate) for candidate in line.candidates),
            minor=self._is_minor(line),
            override=self.override(line),
            flags=tuple(flag for flag in flags if flag.text or flag.number or flag.closed_by),
            inputs=self.inputs(line),
            used_in=self.used_in(line),
            enclosed=self.enclosed(line),
            was=self.was.get(line.id, ""),
        )

    def _is_minor(self, line: Line) -> bool:
        plain = not (line.flags or line.override or line.candidates or line.rows)
        return line.id in self._beaten and bool(line.forms) and plain

    def _candidate(self, candidate: Candidate) -> CandidateView:
        ref = self.ref(candidate.line)
        return CandidateView(candidate.equation, candidate.shown, candidate.reason, candidate.governs, ref)

    def _flag(self, line: Line, flag: Flag) -> FlagView:
        number = self.open_number(line, flag)
        closed_by = self.closed_by(line) if flag.open and not number else None
        return FlagView("" if _said(line, flag) else flag.text, number, flag.owner, closed_by)


def _rests_on(line: Line) -> list[str]:
    """What stands in a line or is compared by it, each once; what is absent is no line, even if one came later."""
    there = [id_ for id_, operand in line.inputs.items() if not operand.is_absent()]
    return list(dict.fromkeys([*there, *(candidate.line for candidate in line.candidates)]))


def open_items(record: Record) -> list[OpenItem]:
    """The open items in the order in which they are numbered."""
    return [item for item in record.open_items if item.group == "open"]


def source(line: Line) -> str:
    """The printed source of a line; what an assumption, a judgment or a note rests on has no document."""
    if line.source:
        return line.source.text()
    return {"assumption": "assumed", "judgment": "engineer's judgment"}.get(line.kind, "")


def confirmation(line: Line) -> str:
    """Whether a value or rule of a standard was confirmed against the printed standard."""
    if not line.source or not line.source.standard:
        return ""
    return line.source.confirmed or TO_BE_CONFIRMED


def _said(line: Line, flag: Flag) -> bool:
    """Whether the printed line says already what the flag says."""
    if line.verdict in (NOT_OK, NOT_CHECKED) and flag.text.startswith(f"{line.meaning}:"):
        return True
    if line.override and flag.text.startswith(f"{line.id} overridden"):
        return True
    if line.meaning and line.meaning in flag.text and str(line.shown) in flag.text:
        return True
    return bool(line.text) and line.text in flag.text
