"""A calculation of our own invention with everything a report can hold, made without running a notebook.

The building, its documents and its numbers are invented. Hostile texts stand where a user can type.
"""

from __future__ import annotations

import copy
from collections.abc import Sequence
from functools import cache

from calckit import units
from calckit.core.formula import Formula
from calckit.core.layout import Printed
from calckit.core.printers import print_all, typeset
from calckit.core.record import (
    NOT_CHECKED,
    NOT_OK,
    OK,
    Candidate,
    Column,
    Figure,
    Flag,
    Line,
    Margin,
    OpenItem,
    Operand,
    Override,
    Record,
    Source,
    Summary,
    SummaryRow,
    Table,
    lines_hash,
)  # fmt: skip
from calckit.core.symbol import Symbol
from calckit.report.model import Block, Content, Span

HOSTILE = (
    r"""<script>alert("x")</script> $C_s$ #read("x") {{ 7*7 }} [a](b) *b* _i_ \frac{1}{2} 'q' & θ ≤ Δ @line-1 // /* """
    r"`c` &lt; %s <line-1>"
)
"""Text that must come out as it was typed."""

LEVELS = ("Roof", "5", "4", "3", "2")
_STANDARD = "ASCE/SEI 7-16"
_PARTS = {"X": "East-west", "Y": "North-south"}
_SYMBOLS = {
    symbol.name: symbol
    for symbol in (
        Symbol("S_S", "mapped ordinate for short periods, as a fraction of g"),
        Symbol("S_1", "mapped ordinate at 1 s, as a fraction of g"),
        Symbol("T_L", "start of the long-period part of the spectrum", "time"),
        Symbol("site_class", "site class", "words"),
        Symbol("risk_category", "risk category", "words"),
        Symbol("I_e", "importance factor"),
        Symbol("F_a", "site coefficient for short periods"),
        Symbol("F_v", "site coefficient at 1 s"),
        Symbol("S_DS", "design ordinate for short periods, as a fraction of g"),
        Symbol("S_D1", "design ordinate at 1 s, as a fraction of g"),
        Symbol("SDC", "seismic design category", "words"),
        Symbol("h_n", "structural height", "length"),
        Symbol("h_x", "height of level x above the base", "length"),
        Symbol("w_x", "effective seismic weight of level x", "force"),
        Symbol("w_roof", "weight of the planted roof, allowed for until the landscape drawings are issued", "force"),
        Symbol("W", "effective seismic weight", "force"),
        Symbol("R", "response modification coefficient"),
        Symbol("C_t", "coefficient of the approximate period"),
        Symbol("x", "exponent of the approximate period"),
        Symbol("C_u", "coefficient of the upper limit on the period"),
        Symbol("T_a", "approximate period", "time"),
        Symbol("T_analysis", "period from the analysis", "time"),
        Symbol("T_max", "upper limit on the period for strength", "time"),
        Symbol("T", "period used for strength", "time"),
        Symbol("C_sbasic", "seismic response coefficient, basic value", sub="s,basic"),
        Symbol("C_scap", "seismic response coefficient, upper limit", sub="s,cap"),
        Symbol("C_sfloor", "seismic response coefficient, lower limit", sub="s,floor"),
        Symbol("C_s", "seismic response coefficient"),
        Symbol("V", "base shear", "force"),
        Symbol("k", "exponent of the vertical distribution"),
        Symbol("F_x", "lateral force at level x", "force"),
        Symbol("V_x", "story shear below level x", "force"),
        Symbol("theta", "stability coefficient"),
        Symbol("theta_max", "largest stability coefficient allowed"),
    )
}


class _Notebook:
    """Collects lines, tables and figures cell by cell."""

    def __init__(self) -> None:
        self.lines: dict[str, Line] = {}
        self.tables: list[Table] = []
        self.figures: list[Figure] = []
        self.cells: list[list[list[str]]] = []
        self.section = ""

    def cell(self, section: str) -> None:
        self.section = section
        self.cells.append([])

    def add(self, line: Line) -> Line:
        line.n, line.section = len(self.lines) + 1, self.section
        line.content = f"{line.n:064x}"
        self.lines[line.id] = line
        self.cells[-1].append(["line", line.id])
        return line

    def stated(self, id_: str, kind: str, value: float | str, unit: str = "", **more: object) -> Line:
        part, _, name = id_.rpartition(".")
        symbol = _SYMBOLS[name]
        shown = f"{value} {units.shown(unit)}".rstrip()
        forms = typeset(symbol, _SYMBOLS.__getitem__) if symbol.kind != "words" else {}
        line = Line(id_, kind, name, symbol.meaning, value, unit, shown, part=part, typeset=forms)
        return self.add(_with(line, more))

    def listed(self, id_: str, values: Sequence[float], unit: str, digits: int, **more: object) -> Line:
        part, _, name = id_.rpartition(".")
        symbol = _SYMBOLS[name]
        line = Line(
            id_, "given", name, symbol.meaning, list(values), unit, [f"{v:.{digits}f}" for v in values], part=part,
            rows=list(LEVELS), typeset=typeset(symbol, _SYMBOLS.__getitem__),
        )  # fmt: skip
        return self.add(_with(line, more))

    def worked(self, id_: str, text: str, unit: str = "", kind: str = "computed", **more: object) -> Line:
        """A computed line: operands are lines of the same part or of the whole calculation."""
        part, _, name = id_.rpartition(".")
        symbol = _SYMBOLS[name]
        formula = Formula(name, text, Source("own"))
        found = {n: self.lines.get(f"{part}.{n}") or self.lines[n] for n in formula.names}
        rows = next((line.rows for line in found.values() if line.rows), [])
        values = {n: line.value for n, line in found.items()}
        listed = bool(rows) and not text.startswith("total")
        results = [formula.value(values, rows, i) for i in (range(len(rows)) if listed else (None,))]
        shown = [f"{v:.2f}" if listed or unit == "kip" else f"{v:#.4g}" for v in results]
        line = Line(
            id_, kind, name, symbol.meaning, results if listed else results[0], unit,
            shown if listed else f"{shown[0]} {units.shown(unit)}".rstrip(), part=part, formula=text,
            rows=rows if listed else [], row=rows[0] if listed else "",
            inputs={line.id: Operand(line.value, line.unit, line.shown) for line in found.values()},
            forms=_forms(formula, found, rows, 0 if listed else None),
            typeset=typeset(symbol, _SYMBOLS.__getitem__),
        )  # fmt: skip
        return self.add(_with(line, more))

    def check(self, id_: str, title: str, relation: str, verdict: str, **more: object) -> Line:
        part, _, name = id_.rpartition(".")
        formula = Formula(name, relation, Source("own"))
        found = {n: self.lines.get(f"{part}.{n}") or self.lines[n] for n in formula.names}
        line = Line(id_, "check", meaning=title, part=part, formula=relation, verdict=verdict)
        line.inputs = {line.id: Operand(line.value, line.unit, line.shown) for line in found.values()}
        line.forms = _forms(formula, found, [], None)
        return self.add(_with(line, more))

    def table(self, id_: str, title: str, ids: Sequence[str]) -> None:
        lines = [self.lines[id_] for id_ in ids]
        columns = [Column(line.symbol, line.unit, line.id, line.typeset) for line in lines]
        shown = [[line.shown[row] for line in lines] for row in range(len(LEVELS))]
        self.tables.append(Table(id_, id_.rpartition(".")[0], title, "Level", columns, list(LEVELS), shown, list(ids)))
        self.cells[-1].append(["table", id_])

    def figure(self, id_: str, caption: str, alt: str, lines: Sequence[str]) -> None:
        self.figures.append(Figure(id_, caption, alt, f"{id_}.svg", list(lines)))
        self.cells[-1].append(["figure", id_])


def _with(line: Line, more: dict[str, object]) -> Line:
    for name, value in more.items():
        setattr(line, name, value)
    return line


def _forms(formula: Formula, found: dict[str, Line], rows: list[str], row: int | None) -> dict[str, list[str]]:
    shown = {
        name: [Printed(text, line.unit) for text in line.shown]
        if isinstance(line.shown, list)
        else Printed(str(line.shown).partition(" ")[0], line.unit)
        for name, line in found.items()
    }
    from calckit.core.numbers import FLOATS

    env = formula.env({name: line.value for name, line in found.items()}, FLOATS, rows, row)
    symbolic = print_all(formula.node, _SYMBOLS.__getitem__)
    substituted = print_all(formula.node, _SYMBOLS.__getitem__, shown, env)
    return {name: [symbolic[name], substituted[name]] for name in symbolic}


def _of(where: str, equation: str = "", confirmed: str | None = None) -> Source:
    return Source(_STANDARD, where, equation, "memory, high", confirmed, standard=True)


def _in(document: str, where: str) -> Source:
    return Source(document, where, entry=document)


def _hazard(book: _Notebook) -> None:
    book.cell("Documents and hazard")
    book.stated("risk_category", "given", "III", source=_in("B-1", "section 2"))
    book.stated("S_S", "given", 0.68, source=_in("H-2", "p. 1"))
    book.stated("S_1", "given", 0.26, source=_in("H-2", "p. 1"))
    book.stated("T_L", "given", 8.0, "s", source=_in("H-2", "p. 1"), shown="8 s", detail="set at issue")
    book.stated("site_class", "given", "C", source=_in("G-1", "section 5.2"))
    book.stated("h_n", "given", 67.0, "ft", source=_in("S-201", "grid A"), shown="67 ft")
    book.cell("Documents and hazard")
    book.worked(
        "F_a", "1.3 + (1.2 - 1.3)*(S_S - 0.5)/(0.75 - 0.5)", kind="table", source=_of("Table 11.4-1"),
        detail="Table 11.4-1, row C, between columns 0.5: 1.3 and 0.75: 1.2",
    )  # fmt: skip
    book.stated("F_v", "table", 1.5, source=_of("Table 11.4-2"), detail="Table 11.4-2, row C, column 0.3: 1.5")
    confirmed = "confirmed in ASCE/SEI 7-16, 3rd printing by M. Ito, 2026-10-20"
    book.worked("S_DS", "2/3*F_a*S_S", source=_of("11.4.5", "11.4-3", confirmed))
    book.worked("S_D1", "2/3*F_v*S_1", source=_of("11.4.5", "11.4-4", confirmed))
    book.stated("I_e", "table", 1.25, source=_of("Table 1.5-2"), detail="Table 1.5-2, row III, column I_e: 1.25")
    book.stated(
        "SDC", "table", "D", source=_of("11.6"), detail="the more severe of the two tables",
        margin=Margin("above category C", 11.3, "%", "S_DS 11.3 %"),
    )  # fmt: skip


def _weight(book: _Notebook) -> None:
    book.cell("Weight")
    basis = "12 in of saturated soil over half of the roof; landscape drawings outstanding"
    book.stated(
        "w_roof", "assumption", 60.0, "kip", shown="60 kip", text=basis, owner="landscape architect",
        flags=[Flag(f"assumption w_roof is unconfirmed: {basis}", True, "landscape architect")],
    )  # fmt: skip
    book.listed("h_x", (67, 54, 41, 28, 15), "ft", 0, source=_in("S-201", "grid A"))
    book.listed("w_x", (880, 1020, 1020, 1020, 1100), "kip", 0, source=_in("S-100", "sheet 3"))
    book.table("levels", "Levels", ["h_x", "w_x"])
    book.worked("W", "total(w_x)", "kip", source=_of("12.7.2"))
    book.figure("elevation", "Levels, heights and weights", "Sketch of five levels, roof at 67 ft.", ["h_x", "w_x"])
    book.add(
        Line(
            "J-snow", "judgment", meaning="judgment", text="Snow is left out of the seismic weight.",
            detail="Basis: flat roof snow load below 30 psf at the site.",
        )
    )  # fmt: skip


_SYSTEMS = {"X": (8.0, "8", 0.028, 0.8), "Y": (6.0, "6", 0.02, 0.75)}


def _period(book: _Notebook, part: str) -> None:
    R, shown, C_t, x = _SYSTEMS[part]
    book.cell("Period")
    book.stated(f"{part}.R", "table", R, shown=shown, source=_of("Table 12.2-1"), detail=f"column R: {shown}")
    book.stated(f"{part}.C_t", "table", C_t, source=_of("Table 12.8-2"), detail=f"column C_t (ft): {C_t}")
    book.stated(f"{part}.x", "table", x, source=_of("Table 12.8-2"), detail=f"column x: {x}")
    book.stated(
        f"{part}.T_analysis", "given", "none", source=_in("B-1", "section 6"), text="model not run yet",
        flags=[Flag(f"{part}.T_analysis is not known: model not run yet", True, "originator")],
    )  # fmt: skip
    book.worked(f"{part}.T_a", "C_t*h_n**x", "s", source=_of("12.8.2.1", "12.8-7"))
    book.stated(f"{part}.C_u", "table", 1.44, source=_of("Table 12.8-1"), detail="columns 0.2: 1.5 and 0.3: 1.4")
    book.worked(f"{part}.T_max", "C_u*T_a", "s", source=_of("12.8.2"))
    T_a, T_max = book.lines[f"{part}.T_a"], book.lines[f"{part}.T_max"]
    book.worked(
        f"{part}.T", "T_a", "s", source=_of("12.8.2"), detail="no analysis: T = T_a, not C_u T_a",
        candidates=[
            Candidate("approximate period", T_a.value, "s", T_a.shown, "no analysis: T = T_a", True, T_a.id),
            Candidate("analysis", None, "s", "none", "analysis", False, ""),
            Candidate("upper limit", T_max.value, "s", T_max.shown, "upper limit C_u T_a", False, T_max.id),
        ],
    )  # fmt: skip


def _base_shear(book: _Notebook, part: str) -> None:
    book.cell("Base shear")
    names = {"C_sbasic": "S_DS/(R/I_e)", "C_scap": "S_D1/(T*(R/I_e))", "C_sfloor": "max(0.044*S_DS*I_e, 0.01)"}
    equations = ("12.8-2", "12.8-3", "12.8-5")
    reasons = ("basic value", "upper limit for T <= T_L", "lower limit")
    made = [
        book.worked(f"{part}.{name}", text, source=_of("12.8.1.1", equation))
        for (name, text), equation in zip(names.items(), equations, strict=True)
    ]
    book.worked(
        f"{part}.C_s", "max(min(C_sbasic, C_scap), C_sfloor)", source=_of("12.8.1.1"),
        candidates=[
            Candidate(equation, line.value, "", line.shown, reason, equation == "12.8-3", line.id)
            for line, equation, reason in zip(made, equations, reasons, strict=True)
        ],
    )  # fmt: skip
    if part == "Y":
        line = book.lines["Y.C_s"]
        line.computed = Operand(line.value, "", line.shown)
        line.value, line.shown = 0.13, "0.13"
        line.override = Override(0.13, "0.13", "the owner asks for a margin here", "J. Doe", "B-1 section 7")
        line.flags = [Flag("Y.C_s overridden: 0.13 in place of 0.1157; the owner asks for a margin")]
    book.worked(f"{part}.V", "C_s*W", "kip", source=_of("12.8.1", "12.8-1"))
    book.add(
        Line(
            f"{part}.N-model", "note", meaning="note", part=part, owner="originator",
            text=f"Run the analysis model in direction {part} and return period and displacements.",
            flags=[Flag(f"Run the analysis model in direction {part} and return period and displacements.", True,
                        "originator")],
        )
    )  # fmt: skip


def _forces(book: _Notebook, part: str) -> None:
    book.cell("Forces over the height")
    book.worked(
        f"{part}.k", "1 if T <= 0.5 else 2 if T >= 2.5 else 1 + (T - 0.5)/(2.5 - 0.5)", source=_of("12.8.3"),
        detail="linear between 0.5 and 2.5 s",
    )  # fmt: skip
    book.worked(f"{part}.F_x", "w_x*h_x**k/total(w_x*h_x**k)*V", "kip", source=_of("12.8.3", "12.8-11"))
    book.worked(f"{part}.V_x", "above(F_x)", "kip", source=_of("12.8.4", "12.8-13"))
    book.table(f"{part}.forces", "Lateral forces and story shears", ["h_x", "w_x", f"{part}.F_x", f"{part}.V_x"])


def _checks(book: _Notebook) -> None:
    book.cell("Drift and stability")
    book.stated("X.theta", "given", 0.081, source=_in("M-1", "run 4"), detail="level 3")
    book.stated("X.theta_max", "given", 0.0909, source=_of("12.8.7"))
    line = book.check("X.stability", "Stability, story 3", "theta <= theta_max", OK, source=_of("12.8.7"))
    line.value, line.shown = 0.891, "0.891"
    book.stated("Y.theta", "given", 0.112, source=_in("M-1", "run 4"), detail="level 3")
    book.stated("Y.theta_max", "given", 0.1, source=_of("12.8.7"))
    line = book.check("Y.stability", "Stability, story 3", "theta <= theta_max", NOT_OK, source=_of("12.8.7"))
    line.value, line.shown = 1.12, "1.12"
    line.flags = [Flag("Stability, story 3: not met", True, "originator")]
    for form, sign in {"plain": ">", "latex": ">", "mathml": "&gt;", "typst": ">"}.items():
        old = {"plain": "≤", "latex": r"\le", "mathml": "≤", "typst": "≤"}[form]
        line.forms[form][1] = line.forms[form][1].replace(old, sign)
    missing = "delta_xe (displacements of the model)"
    book.add(
        Line(
            "X.drift", "check", meaning="Story drift", part="X", formula="Delta <= Delta_a", verdict=NOT_CHECKED,
            missing=missing, source=_of("12.12.1"),
            flags=[Flag(f"Story drift: NOT CHECKED, missing {missing}", True, "originator")],
        )
    )  # fmt: skip
    book.figure("shears", HOSTILE, f"Story shears of both directions. {HOSTILE}", ["X.V_x", "Y.V_x"])


def _notes(book: _Notebook) -> None:
    book.cell("Notes")
    book.add(Line("N-hostile", "note", meaning="note", text=HOSTILE))
    book.add(
        Line(
            "N-survey", "note", meaning="note", text="Height of the parapet to be surveyed.", owner="architect",
            flags=[Flag("Height of the parapet to be surveyed.", True, "architect")],
        )
    )  # fmt: skip
    book.add(Line("N-surveyed", "note", meaning="note", text="Parapet surveyed: below 2 ft.", closes="N-survey"))


def _open_items(book: _Notebook) -> list[OpenItem]:
    lines = book.lines.values()
    closed = {line.closes for line in lines}
    found = [
        OpenItem(f"{line.id}-{number}", line.id, flag.text, flag.owner, "open")
        for line in lines
        for number, flag in enumerate((flag for flag in line.flags if flag.open), 1)
        if line.id not in closed
    ]
    used: dict[str, Line] = {}
    for line in lines:
        if line.source and line.source.standard and not line.source.confirmed:
            used.setdefault(line.source.where, line)
    return found + [
        OpenItem(f"confirm-{where}", line.id, f"{_STANDARD} {where}", "holder of the standard", "confirm")
        for where, line in used.items()
    ]


def _summaries(book: _Notebook) -> list[Summary]:
    def rows(table: dict[str, str]) -> list[SummaryRow]:
        found = []
        for label, name in table.items():
            ids = [f"{part}.{name}" if f"{part}.{name}" in book.lines else name for part in _PARTS]
            texts = [str(line.shown or line.verdict) if (line := book.lines.get(id_)) else NOT_CHECKED for id_ in ids]
            found.append(SummaryRow(label, texts, [id_ if id_ in book.lines else "" for id_ in ids]))
        return found

    columns = [f"{part}: {title}" for part, title in _PARTS.items()]
    answer = {
        "Design category": "SDC", "Effective seismic weight W": "W", "R": "R", "Period T": "T", "C_s": "C_s",
        "Base shear V": "V", "Exponent k": "k", "Story drift": "drift", "Redundancy factor rho": "rho",
    }  # fmt: skip
    drawings = {
        "Risk category": "risk_category", "I_e": "I_e", "S_S": "S_S", "S_1": "S_1", "Site class": "site_class",
        "S_DS": "S_DS", "S_D1": "S_D1", "Design category": "SDC", "R": "R", "C_s": "C_s", "V": "V",
    }  # fmt: skip
    return [
        Summary("answer", "Governing results", columns, rows(answer)),
        Summary("drawings", "Seismic data for the drawings", columns, rows(drawings)),
    ]


@cache
def _record() -> Record:
    book = _Notebook()
    _hazard(book)
    _weight(book)
    for work in (_period, _base_shear, _forces):
        for part in _PARTS:
            work(book, part)
    _checks(book)
    _notes(book)
    documents = [
        {"key": "B-1", "title": "Basis of design", "author": "", "revision": "1", "date": "2026-09-18"},
        {"key": "H-2", "title": "Hazard printout", "author": "", "revision": "", "date": "2026-10-02"},
        {"key": "G-1", "title": "Geotechnical report", "author": "R. Roe", "revision": "", "date": "2026-08-21"},
        {"key": "S-100", "title": "Weight take-off", "author": "", "revision": "2", "date": "2026-11-14"},
        {"key": "S-201", "title": "Framing elevations", "author": "", "revision": "2", "date": "2026-11-14"},
        {"key": "M-1", "title": HOSTILE, "author": "", "revision": "", "date": "2026-11-20"},
    ]
    calculation = {
        "project": "Quarry Road Library (demonstration)", "location": "Demonstration site", "number": "C-207",
        "subject": "Lateral seismic forces", "building_code": "IBC 2021", "amendments": ["County ordinance 12, 1613.5"],
        "jurisdiction": "Demonstration County", "firm": "Sample Structures", "revision": "B", "date": "2026-12-01",
        "status": "for check", "purpose": "for permit", "prepared_by": "J. Doe", "checked_by": "", "units": "US",
        "paper": "Letter", "standard": "ASCE 7-16", "supplements": [1, 3], "supplements_source": "B-1 section 1",
        "first_sheet": 1, "sheet_prefix": "", "seal_caption": "Seal and signature",
        "preliminary_caption": "Preliminary issue, not for construction",
        "preliminary_fields": ["Purpose", "Engineer of record", "License number", "Date"], "open_items_accepted": "",
        "standards": [{"id": "asce7", "edition": "ASCE 7-16", "name": _STANDARD, "supplements": [1, 3]}],
        "documents": documents,
        "revisions": [
            {"revision": "A", "date": "2026-11-01", "reason": "First issue", "by": "J. Doe", "sheets": "all"},
            {"revision": "B", "date": "2026-12-01", "reason": "Planted roof added", "by": "J. Doe", "sheets": "6, 8"},
        ],
        "parts": [{"id": id_, "title": title} for id_, title in _PARTS.items()],
        "software": {
            "name": "calckit", "version": "0.1.0", "python": "3.11.9", "platform": "Linux",
            "libraries": {"sympy": "1.14.0", "pint": "0.25.3", "numpy": "2.4.6"},
        },
        "notebook": "library",
    }  # fmt: skip
    lines = list(book.lines.values())
    return Record(
        calculation, lines, book.tables, book.figures, _open_items(book), _summaries(book), book.cells,
        ["Equivalent lateral forces of buildings, first pass."], ["Modal and response history analysis."],
        source="a" * 64, inputs="b" * 64, lines_hash=lines_hash(lines),
    )  # fmt: skip


def record(**fields: object) -> Record:
    """The sample record, fresh; `fields` change its title block."""
    made = copy.deepcopy(_record())
    made.calculation |= fields
    return made


def _paragraph(*spans: Span | str) -> Block:
    return Block("paragraph", tuple(Span("text", span) if isinstance(span, str) else span for span in spans))


def _heading(level: int, text: str) -> Block:
    return Block("heading", (Span("text", text),), level=level)


_EQUATION = Span(
    "math", "F_x = m a", "<mrow><mi>F</mi><mo>=</mo><mi>m</mi><mi>a</mi></mrow>",
    '<svg xmlns="http://www.w3.org/2000/svg" width="30" height="10" viewBox="0 -8 30 10">'
    '<path d="M0 0L8 -8L16 0z"/></svg>',
)  # fmt: skip


def content() -> Content:
    """The text of the sample notebook between its code cells."""
    titles = ["Documents and hazard", "Weight", "Period", "Base shear", "Forces over the height", "Drift and stability"]
    rich = (
        _paragraph("Values of the ", Span("strong", "hazard printout"), " and the ", Span("emphasis", "soils letter"),
                   "; see ", Span("link", "the basis", href="https://example.org/b"), " and ",
                   Span("code", "S_S = 0.68"), ", with ", _EQUATION, " and ", Span("math", r"\unknown{x}"), "."),
        Block("bullets", items=((_paragraph("first"),), (_paragraph("second"), _paragraph("more of it")))),
        Block("numbers", items=((_paragraph("one"),), (_paragraph("two"),))),
        Block("quote", items=((_paragraph("A remark taken from the soils letter."),),)),
        Block("code", text='calc.given("S_S", 0.68)\n    # indented'),
        Block("table", head=((Span("text", "Item"),), (Span("text", "Value"),)),
              rows=(((Span("text", "one"),), (Span("strong", "1"),)),)),
        Block("math", (_EQUATION,)),
        _heading(3, "A heading inside a section"),
        _paragraph(HOSTILE),
    )  # fmt: skip
    intro = (_heading(1, "Demonstration building"), _paragraph("Five stories, two directions. Nothing here is real."))
    made: list[tuple[str, object]] = [("prose", intro)]
    cell = 0
    for title, count in zip(titles, (2, 1, 2, 2, 2, 1), strict=True):
        made.append(("prose", (_heading(2, title), *(rich if title == titles[0] else ()))))
        made += [("cell", cell + place) for place in range(count)]
        cell += count
    made += [("prose", (_heading(2, "Notes"),)), ("cell", cell)]
    return made  # type: ignore[return-value]


def figures() -> dict[str, bytes]:
    """Drawings for the figures of the sample record."""
    bars = "".join(f'<rect x="{20 * n + 10}" y="{90 - 15 * n}" width="12" height="{15 * n}"/>' for n in range(1, 6))
    picture = f'<svg xmlns="http://www.w3.org/2000/svg" width="180pt" height="100pt" viewBox="0 0 180 100">{bars}</svg>'
    return {figure.file: picture.encode() for figure in _record().figures}
