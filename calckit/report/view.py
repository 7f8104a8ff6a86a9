"""From a record and the notebook's own text to the document model.

Knows how the cover, the answer, the open items, the sections and the lists follow from the lines: everything is
counted and collected here, once, for both writers. Must not know HTML, Typst or how a value is computed.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import replace
from typing import TYPE_CHECKING, Any

from calckit import units
from calckit.core.record import NOT_CHECKED, NOT_OK, OK, WITHDRAWN, Line, OpenItem, Record, Summary, Table, digest
from calckit.report import checked, checklog, matters
from calckit.report.lines import Lines, open_items, source, typeset
from calckit.report.model import (
    AssumptionView,
    Block,
    CarriedView,
    ColumnView,
    Content,
    FigureView,
    InputView,
    Item,
    OpenItemView,
    ProseView,
    Ref,
    ReferenceView,
    Revision,
    SectionView,
    SoftwareView,
    Statement,
    SummaryCell,
    SummaryView,
    SymbolView,
    TableView,
    TitleBlock,
    Typeset,
    View,
)

if TYPE_CHECKING:
    from calckit.report.revised import Revised

CAUTIONS = (
    "This calculation supports the work of a licensed professional engineer and does not replace it. Use it only "
    "under the direction of one, who answers for the inputs, the assumptions and the use made of the results.",
    "The law, the building code as adopted where the work stands with its local amendments, and the authority having "
    "jurisdiction govern over anything printed here.",
    "The kit does not judge whether the standard, the method or the model suits this structure. Where a limit of "
    "application is known to it, the line says so; a limit that is not mentioned has not been checked.",
    "OK, NOT OK and NOT CHECKED state how two numbers of this calculation compare. They are no statement about the "
    "safety of the structure.",
    "Hazard values, soil data, weights and displacements are taken as entered. Their sources answer for them.",
    "The file seal and the hashes show whether a file or a line was changed after issue. They do not show who made it.",
)
"""What every report says of its own use."""

DIGITS = (
    "Values are carried with 12 significant digits. Each printed result follows from the digits printed beside it by "
    "decimal arithmetic, rounded half up; rounding serves printing only."
)

_ROLES = ("Prepared by", "Checked by", "Engineer of record")
_FIRST = "Calculation"


def content_of(record: Record) -> str:
    """The first digits over the three hashes: what identifies the content on every sheet."""
    return digest(record.source + record.inputs + record.lines_hash)[:8]


def build(record: Record, content: Content, revised: Revised | None = None) -> View:
    """The document model of a record.

    `content` is the notebook in order: ("prose", blocks) for a Markdown cell, ("cell", k) for the k-th code cell that
    ran. A heading of level 1 or 2 starts a section. `revised` is what changed against the former issue.
    Raises KeyError if the record misses a field of the title block or a printed form.
    """
    facts = record.calculation
    lines = Lines(record, dict(revised.was) if revised else {})
    items = open_items(record)
    seal_caption, seal_fields = _seal_space(facts)
    sections = _sections(record, content, lines)
    return View(
        paper=facts["paper"],
        title=" - ".join(part for part in (facts["number"], facts["subject"], facts["project"]) if part),
        title_block=TitleBlock(**{name: facts[name] for name in TitleBlock.__dataclass_fields__}),
        short_hash=content_of(record),
        revisions=_revisions(facts, revised),
        statements=tuple(_statements(record, lines)),
        left_open=_left_open(record),
        sign_off=tuple(zip(_ROLES, (facts["prepared_by"], facts["checked_by"], ""), strict=True)),
        check=checked.sign_off(record),
        seal_caption=seal_caption,
        seal_fields=seal_fields,
        standing=facts["status"].upper() if facts["status"] in WITHDRAWN else "",
        first_sheet=facts["first_sheet"],
        sheet_prefix=facts["sheet_prefix"],
        answer=_summaries(record, "answer", lines),
        drawings=_summaries(record, "drawings", lines),
        counts=tuple((word, sum(line.verdict == word for line in record.lines)) for word in (OK, NOT_OK, NOT_CHECKED)),
        not_met=tuple(lines.view(line) for line in record.lines if line.verdict in (NOT_OK, NOT_CHECKED)),
        margins=tuple(_margins(record)),
        open_items=_items(items, lines),
        to_confirm=_items([item for item in record.open_items if item.group == "confirm"], lines),
        overrides=tuple(view for line in record.lines if (view := lines.override(line))),
        criteria=tuple(_criteria(facts)),
        sections=sections,
        assumptions=_assumptions(record, lines),
        inputs=tuple(_inputs(record, lines)),
        symbols=_symbols(record),
        references=tuple(_references(record)),
        software=_software(record),
        field_of_use=tuple(record.field_of_use),
        not_covered=tuple(record.not_covered),
        cautions=CAUTIONS,
        revised=revised,
        matters=matters.build(record, lines),
    )


def _margins(record: Record) -> Iterator[Statement]:
    """Each margin with its line; parts of which the same is said share one row."""
    found: dict[tuple[str, str], list[Line]] = {}
    for line in record.lines:
        if line.margin:
            found.setdefault((line.meaning or line.id, f"{line.margin.shown} {line.margin.to}"), []).append(line)
    for (called, text), lines in found.items():
        parts = ", ".join(line.part for line in lines if line.part)
        yield Statement(f"{parts}: {called}" if parts else called, text, tuple(Ref(x.n, x.id) for x in lines))


def _revisions(facts: dict[str, Any], revised: Revised | None) -> tuple[Revision, ...]:
    """The revision table; the sheets of the newest row, if not typed, are blank where the writers can say them."""
    rows = [Revision(**row) for row in facts["revisions"]]
    last = len(rows) - 1
    rows = [
        row if row.sheets.strip() or (revised and place == last) else replace(row, sheets="not stated")
        for place, row in enumerate(rows)
    ]
    first = Revision(facts["revision"], facts["date"], "First issue", facts["prepared_by"], "all")
    return tuple(rows) or (first,)


def _seal_space(facts: dict[str, Any]) -> tuple[str, tuple[tuple[str, str], ...]]:
    """What stands above the clear space for the seal, and the fields that a preliminary issue has in its place.

    Of the fields only the purpose is filled: the others are for a person.
    """
    if facts["status"] != "preliminary" or not facts["preliminary_fields"]:
        return facts["seal_caption"], ()
    fields = tuple((name, facts["purpose"] if name == "Purpose" else "") for name in facts["preliminary_fields"])
    return facts["preliminary_caption"], fields


def _statements(record: Record, lines: Lines) -> Iterator[Statement]:
    """What the cover says of the state of the calculation."""
    facts = record.calculation
    unsettled = [line for line in record.lines if lines.is_open(line)]
    for label, kinds in (
        ("Unconfirmed assumptions", ("assumption",)),
        ("Unsettled inputs and answers", ("given", "judgment")),
    ):
        yield _statement(label, [line for line in unsettled if line.kind in kinds])
    yield _statement("Checks NOT OK", [line for line in record.lines if line.verdict == NOT_OK])
    yield _statement("Checks NOT CHECKED", [line for line in record.lines if line.verdict == NOT_CHECKED])
    yield _statement("Overrides", [line for line in record.lines if line.override])
    open_ones = len(open_items(record))
    yield Statement("Open items in all", str(open_ones) if open_ones else "none")
    unread = len(record.open_items) - open_ones
    yield Statement("Tables and clauses to be confirmed against the standard", str(unread) if unread else "none")
    said = checklog.self_check(facts)
    if said:
        yield Statement("Self-check", said.partition(": ")[2])


def _left_open(record: Record) -> str:
    """Which open items stand in an issue for construction, by number, and the reason given for it; blank if none do."""
    if record.calculation["status"] != "for construction" or not record.open_items:
        return ""
    open_ones = len(open_items(record))
    unread = len(record.open_items) - open_ones
    parts = [
        f"{count} {what} (No. 1{f' to {count}' if count > 1 else ''})"
        for count, what in ((open_ones, "to be closed"), (unread, "to be confirmed against the standard"))
        if count
    ]
    reason = record.calculation["open_items_accepted"]
    return f"Issued for construction with open items: {' and '.join(parts)}. Reason given: {reason}"


def _statement(label: str, found: list[Line]) -> Statement:
    return Statement(label, str(len(found)) if found else "none", tuple(Ref(line.n, line.id) for line in found))


def _items(items: list[OpenItem], lines: Lines) -> tuple[OpenItemView, ...]:
    return tuple(
        OpenItemView(number, item.text, item.owner, lines.ref(item.line)) for number, item in enumerate(items, 1)
    )


def _summaries(record: Record, role: str, lines: Lines) -> tuple[SummaryView, ...]:
    return tuple(_summary(summary, lines) for summary in record.summaries if summary.role == role)


def _summary(summary: Summary, lines: Lines) -> SummaryView:
    rows = tuple(
        (
            row.label,
            tuple(
                SummaryCell(text, lines.ref(id_), lines.was.get(id_, ""))
                for text, id_ in zip(row.cells, row.lines, strict=True)
            ),
        )
        for row in summary.rows
    )
    return SummaryView(summary.title, tuple(summary.columns), rows)


def _criteria(facts: dict[str, Any]) -> Iterator[tuple[str, str]]:
    """Codes, editions and amendments; what was not stated says so."""
    yield "Building code", facts["building_code"] or "not stated"
    yield "Jurisdiction", facts["jurisdiction"] or "not stated"
    yield "Local amendments", "; ".join(facts["amendments"]) or "none stated"
    for standard in facts["standards"]:
        yield "Standard", standard["name"]
        yield "Supplements in force", _supplements(standard["supplements"], facts["supplements_source"])
    yield "Units", {"US": "US customary", "SI": "SI"}[facts["units"]]
    yield "Parts", "; ".join(f"{part['id']}: {part['title']}" for part in facts["parts"]) or "none"
    yield "Printed digits", DIGITS


def _supplements(numbers: list[int] | None, said_by: str) -> str:
    if numbers is None:
        return "not stated"
    text = ", ".join(str(number) for number in numbers) or "none"
    return f"{text} ({said_by})" if said_by else text


# --- sections


def _sections(record: Record, content: Content, lines: Lines) -> tuple[SectionView, ...]:
    """Split the notebook at its headings of level 1 and 2; no line, table or figure is left out."""
    pieces: list[tuple[str, list[Item]]] = [(_FIRST, [])]
    views = _views(record, lines)
    for entry in content:
        if entry[0] == "prose":
            for title, blocks in _split(entry[1]):
                if title:
                    pieces.append((title, []))
                if blocks:
                    pieces[-1][1].append(ProseView(tuple(blocks)))
        elif entry[1] < len(record.cells):
            pieces[-1][1].extend(views.pop((kind, id_)) for kind, id_ in record.cells[entry[1]])
    if views:
        pieces.append(("Further lines", list(views.values())))
    pieces = [piece for piece in pieces if piece[1] or piece[0] != _FIRST]
    home = {item.id: number for number, (_, items) in enumerate(pieces) for item in items if item.type == "line"}
    return tuple(
        SectionView(number + 1, title, tuple(items), tuple(_carried(items, home, number)))
        for number, (title, items) in enumerate(pieces)
    )


def _views(record: Record, lines: Lines) -> dict[tuple[str, str], Item]:
    found: dict[tuple[str, str], Item] = {("line", line.id): lines.view(line) for line in record.lines}
    for number, table in enumerate(record.tables, 1):
        found["table", table.id] = _table(number, table, lines)
    for number, figure in enumerate(record.figures, 1):
        refs = lines.refs(figure.lines)
        found["figure", figure.id] = FigureView(number, figure.id, figure.caption, figure.alt, figure.file, refs)
    return found


def _table(number: int, table: Table, lines: Lines) -> TableView:
    columns = []
    for column in table.columns:
        symbol, ref = typeset(column.typeset), lines.ref(column.line)
        if symbol is None or ref is None:
            raise KeyError(f"table {table.id!r}: column {column.symbol!r} has no printed symbol or no line")
        part = lines.by_id[column.line].part
        columns.append(ColumnView("" if part == table.part else part, symbol, units.shown(column.unit), ref))
    rows = tuple((label, tuple(row)) for label, row in zip(table.rows, table.shown, strict=True))
    return TableView(number, table.id, table.part, table.title, table.head, tuple(columns), rows)


def _split(blocks: Iterable[Block]) -> Iterator[tuple[str, list[Block]]]:
    """The blocks between headings of level 1 and 2, each run under its heading ("" before the first).

    Headings inside a run are of level 3 and below, none skipped.
    """
    title, run, level = "", list[Block](), 2
    for block in blocks:
        if block.kind == "heading" and block.level <= 2:
            if title or run:
                yield title, run
            title, run, level = "".join(span.text for span in block.spans), [], 2
        elif block.kind == "heading":
            level = min(block.level, level + 1)
            run.append(replace(block, level=level))
        else:
            run.append(block)
    yield title, run


def _carried(items: list[Item], home: dict[str, int], number: int) -> Iterator[CarriedView]:
    """The results of a section that lines of later sections use."""
    for item in items:
        if item.type == "line" and item.kind in ("computed", "table", "analysis"):
            away = tuple(ref for ref in item.used_in if home[ref.id] != number)
            if away:
                yield CarriedView(Ref(item.n, item.id), item.symbol, item.name, item.part, item.shown, away)


# --- lists after the sections


def _inputs(record: Record, lines: Lines) -> Iterator[InputView]:
    dates = {document["key"]: document["date"] for document in record.calculation["documents"]}
    for line in record.lines:
        if line.kind in ("given", "assumption") or (line.kind == "judgment" and line.symbol):
            shown = line.shown if isinstance(line.shown, str) else f"{len(line.shown)} values"
            yield InputView(
                Ref(line.n, line.id), typeset(line.typeset), line.symbol, line.part, line.meaning, shown, source(line),
                dates.get(line.source.document, "") if line.source else "", _status(line, lines),
                lines.enclosed(line),
            )  # fmt: skip


def _status(line: Line, lines: Lines) -> str:
    numbers = [number for flag in line.flags if (number := lines.open_number(line, flag))]
    words = [f"open item {', '.join(map(str, numbers))}"] if numbers else []
    closed = lines.closed_by(line)
    if closed:
        words.append(f"closed by line {closed.n}")
    return "; ".join([line.detail, *words] if line.detail else words) or "in force"


def _assumptions(record: Record, lines: Lines) -> tuple[AssumptionView, ...]:
    found = [line for line in record.lines if line.kind == "assumption"]
    return tuple(
        AssumptionView(
            number, Ref(line.n, line.id), typeset(line.typeset), line.symbol, line.meaning,
            line.shown if isinstance(line.shown, str) else ", ".join(line.shown), line.text, _status(line, lines),
            lines.used_in(line),
        )
        for number, line in enumerate(found, 1)
    )  # fmt: skip


def _symbols(record: Record) -> tuple[SymbolView, ...]:
    """Every symbol once for each meaning it has, in alphabetical order."""
    found: dict[tuple[str, str], list[Line]] = {}
    for line in record.lines:
        if line.typeset:
            found.setdefault((line.symbol, line.meaning), []).append(line)
    return tuple(_symbol(found[key]) for key in sorted(found, key=lambda key: (key[0].casefold(), key)))


def _symbol(lines: list[Line]) -> SymbolView:
    numbers = [line for line in lines if not isinstance(line.value, str | None)]
    printed = dict.fromkeys(units.shown(line.unit) or "number" for line in numbers)
    refs = tuple(Ref(line.n, line.id) for line in lines)
    first = lines[0].typeset
    return SymbolView(Typeset(**first), lines[0].meaning, ", ".join(printed), refs)


def _references(record: Record) -> Iterator[ReferenceView]:
    """Standards and declared documents, with the lines that cite them."""
    facts = record.calculation
    cited: dict[str, list[Ref]] = {}
    for line in record.lines:
        if line.source:
            cited.setdefault(line.source.document, []).append(Ref(line.n, line.id))
    for standard in facts["standards"]:
        title = f"supplements in force: {_supplements(standard['supplements'], '')}"
        yield ReferenceView(standard["name"], title, "", "", "", tuple(cited.get(standard["name"], ())))
    for document in facts["documents"]:
        yield ReferenceView(**document, refs=tuple(cited.get(document["key"], ())))


def _software(record: Record) -> SoftwareView:
    facts = record.calculation
    software = facts["software"]
    return SoftwareView(
        software["name"], software["version"], software["python"], software["platform"],
        tuple(software["libraries"].items()), facts["notebook"], record.source, record.inputs, record.lines_hash,
    )  # fmt: skip
