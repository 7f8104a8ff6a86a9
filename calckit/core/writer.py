"""The methods a user calls on a calculation or a part to write lines.

Knows how each kind of line is made from what is typed. Must not know any standard or any report.
"""

from __future__ import annotations

import ast
import csv
import io
import re
from collections.abc import Callable, Mapping, Sequence
from pathlib import Path
from typing import Any

from calckit import units
from calckit.core import levels, work
from calckit.core.book import Entry, this_cell
from calckit.core.formula import Formula
from calckit.core.handle import Handle, Handles
from calckit.core.inputs import Reading, own_symbol
from calckit.core.parser import parse
from calckit.core.record import Figure, Flag, Line, Source
from calckit.core.scope import OPEN_ANSWER, Scope
from calckit.core.symbol import Symbol
from calckit.errors import CalckitError, ExpressionError, Fault, InputError, UnknownNameError

NO_MODEL = "none: no model yet"
_ID = re.compile(r"[\w.\-]+\Z")


class Writer(Scope):
    """A scope as its user sees it; `scope["F_x"]` reads a line by symbol.

    >>> from calckit import Calc
    >>> calc = Calc(project="Demo", number="D-1", standard="ASCE 7-16")
    >>> calc.document("S-1", title="Framing elevations")
    >>> calc.givens("h_n, 30 ft, S-1 grid A\\nrisk_category, II, S-1")
    [h_n = 30 ft, risk_category = II]
    >>> x = calc.part("X", "East-west")
    >>> calc.levels("level, h_x [ft], w_x [kip]\\nRoof, 30, 310\\n2, 15, 455", source="S-1")[0]
    h_x = 30, 15
    >>> x.line("M_r", "total(w_x*h_x)/10", unit="kip*ft", meaning="rough overturning moment")
    X.M_r = 1613 kip·ft
    >>> x.check("M_r", "<=", "2*M_r", title="Demonstration").line.verdict
    'OK'
    >>> calc.answer("diaphragm", "rigid", basis="concrete slab", source="S-1")
    diaphragm = rigid
    >>> x.answers("H2, no, rectangular plan, S-1\\nH4, not answered")
    [X.H2 = no, X.H4 = not answered]
    >>> calc.judge("J-slab", "The slab carries the forces to the frames.", basis="no opening beside a frame")
    J-slab = The slab carries the forces to the frames.
    >>> calc.note("N-wind", "Wind is in another calculation.")
    N-wind = Wind is in another calculation.
    >>> x.assume("beta", 1.0, basis="taken as 1.0")
    X.beta = 1.0
    >>> x.analysis(V_applied="31 kip")
    [X.V_applied = 31 kip, X.W_model = none: no model yet]
    >>> x.override("C_s", 0.05, reason="demonstration", by="originator")
    >>> calc.confirm("Table 12.2-1", document="printed standard", by="checker", date="2026-12-01")
    """

    def __getitem__(self, name: str) -> Handle:
        entry = self.find(name)
        if entry is None:
            raise UnknownNameError("line", name, self.book.entries)
        return Handle(self, entry.line.id)

    def given(self, name: str, value: Any, source: str = "", *, meaning: str = "", unit: str = "") -> Handle:
        """An input with its source.

        `name` is a symbol of the standard, or any other with `meaning=` and a unit (in the value or as `unit=`);
        `value` a string with a unit ("62 ft"), a plain number, a word, or "none: reason"; `source` a declared document
        and a place in it. Raises InputError, UnitError or UnknownNameError.

        >>> from calckit import Calc
        >>> calc = Calc(project="Demo", number="D-1")
        >>> _ = calc.document("S-1", title="Framing elevations")
        >>> calc.given("h_n", "62 ft", source="S-1 grid A")
        h_n = 62 ft
        """
        symbol = self._declare(name, meaning, unit, value)
        if not source.strip():
            cure = f'name a document, or use assume("{name}", ..., basis=...)'
            raise InputError("given", [Fault(name, "a source", "nothing", cure, symbol.meaning)])
        origin = self.calc.sources.read(source, f"given {name}")
        reading, was_set = self._in_force(symbol, value)
        detail = "set at issue" if was_set else ""
        return self.write(self._stated(symbol, reading, "given", origin, detail=detail))

    def givens(self, text: str) -> Handles:
        """A pasted table of inputs: one `symbol, value, source` a row; all bad rows are reported at once."""
        rows = _pasted(text)
        faults: list[Fault] = []
        for number, row in enumerate(rows, 1):
            if len(row) != 3:
                faults.append(Fault(f"row {number}", "symbol, value, source", ", ".join(row)))
        if faults:
            raise InputError("givens", faults)
        with self.step():
            return self._each("givens", rows, lambda row: self.given(*row))

    def _each(self, where: str, rows: Sequence[Sequence[str]], make: Any) -> Handles:
        made, faults = Handles(), []
        for number, row in enumerate(rows, 1):
            try:
                made.append(make(row))
            except InputError as error:
                faults += error.faults
            except UnknownNameError as error:
                faults.append(Fault(f"row {number} ({row[0]})", "a known name", str(error)))
        if faults:
            raise InputError(where, faults)
        return made

    def _declare(self, name: str, meaning: str, unit: str, value: Any) -> Symbol:
        if name in self.calc.standard.symbols:
            return self.calc.standard.symbols[name]
        known = self.calc.own_symbols.get(name)
        if known and not meaning:
            return known
        symbol = own_symbol(name, meaning, unit, value)
        if isinstance(symbol, Fault):
            near = UnknownNameError("symbol", name, self.calc.standard.symbols).known[:6]
            raise InputError(
                "symbol",
                [Fault(name, symbol.needed, symbol.given, f"{symbol.cure}, or did you mean {', '.join(near)}?")],
            )
        self.calc.own_symbols[name] = symbol
        return symbol

    def assume(
        self, name: str, value: Any, basis: str, *, meaning: str = "", unit: str = "", owner: str = "originator"
    ) -> Handle:
        """An assumption with its basis; an open item until a note closes it."""
        symbol = self._declare(name, meaning, unit, value)
        if not basis.strip():
            raise InputError("assume", [Fault(name, "a basis", "nothing", 'add basis="..."', symbol.meaning)])
        reading, was_set = self._in_force(symbol, value)
        flag = Flag(f"assumption {self.id_of(name)} is unconfirmed: {basis}", True, owner)
        detail = "set at issue" if was_set else ""
        return self.write(self._stated(symbol, reading, "assumption", None, basis, detail, [flag], owner=owner))

    def answer(
        self, name: str, word: str = OPEN_ANSWER, basis: str = "", source: str = "", owner: str = "originator"
    ) -> Handle:
        """The engineer's answer to a question that a step asks for; without answer or basis it is an open item."""
        symbol = self.calc.standard.symbols.get(name)
        if symbol is None:
            raise UnknownNameError("question", name, self.calc.standard.symbols)
        origin = self.calc.sources.read(source, f"answer {name}") if source.strip() else None
        found = self.book.settings.value(self.id_of(name))
        reading = self._read(symbol, found[1], found[0]) if found else None
        if reading:
            basis = basis or "set at issue"
        elif word.strip() and word != OPEN_ANSWER:
            reading = self._read(symbol, word)
        flags = []
        if reading is None:
            flags.append(Flag(f"{self.id_of(name)} is not answered: {symbol.meaning}", True, owner))
            reading = Reading(OPEN_ANSWER)
        elif not basis.strip() and origin is None:
            flags.append(Flag(f"{self.id_of(name)} is answered without a basis: {symbol.meaning}", True, owner))
        detail = "set at issue" if found else ""
        return self.write(self._stated(symbol, reading, "judgment", origin, basis, detail, flags, owner=owner))

    def answers(self, text: str) -> Handles:
        """A pasted table of answers: one `question, answer, basis[, source]` a row."""
        rows = [[*row, "", "", ""][:4] for row in _pasted(text)]
        with self.step():
            return self._each("answers", rows, lambda row: self.answer(*row))

    def levels(self, text: str, source: str, sources: Mapping[str, str] | None = None) -> Handles:
        """The pasted table of levels, or "@file.csv"; writes h_x, h_sx, w_x and, if there, delta_xe and P_x.

        `source` is that of the table, `sources` those of single columns by symbol: `{"delta_xe": "M-1 p. 12"}`. Raises
        InputError naming every bad row and column at once, and a source of a column that is not there.
        """
        from calckit.core.level_lines import write_levels

        origins = {"": self.calc.sources.read(source, "levels")}
        for symbol, text_of_one in (sources or {}).items():
            origins[symbol] = self.calc.sources.read(text_of_one, f"levels, {symbol}")
        found = self.book.settings.value("levels")
        parts = tuple(self.calc.parts)
        if found:
            try:
                table = levels.parse(self._text_of(found[1], of_settings=True), self.symbol, parts, self.system)
            except CalckitError as error:
                self.book.settings.invalid[found[0]] = str(error)
                found = None
        if not found:
            table = levels.parse(self._text_of(text), self.symbol, parts, self.system)
        with self.step():
            return write_levels(self, table, origins)

    def rows(
        self, id: str, text: str, source: str, *, title: str = "", meanings: Mapping[str, str] | None = None
    ) -> Handles:
        """A pasted table, or "@file.csv", whose columns become list lines, printed side by side as the table `id`.

        The first column names the rows, each other one is headed `symbol [unit]`; `meanings` are those of symbols that
        no standard declares. Raises InputError naming every bad row and column at once.

        >>> from calckit import Calc
        >>> calc = Calc(project="Demo", number="D-1")
        >>> calc.document("S-1", title="Framing plan")
        >>> calc.rows("walls", "wall, L_w [ft]\\nA, 20\\nB, 12", source="S-1", meanings={"L_w": "length of the wall"})
        [L_w = 20, 12]
        """
        from calckit.core import rows
        from calckit.core.level_lines import write_column

        origin = self.calc.sources.read(source, f"rows {id}")

        def symbol(name: str, unit: str) -> Symbol | Fault:
            declared = self.calc.standard.symbols.get(name)
            return declared or own_symbol(name, (meanings or {}).get(name, ""), unit)

        table = self.text_in_force(id, text, lambda pasted: rows.parse(id, pasted, symbol, self.system))
        own = {name: declared for name, declared in table.symbols.items() if name not in self.calc.standard.symbols}
        self.calc.own_symbols |= own
        with self.step():
            columns = table.symbols.items()
            made = Handles(write_column(self, table, name, declared, origin) for name, declared in columns)
            self.table(id, title or id, list(table.symbols), head=table.head)
        return made

    def text_in_force(self, id: str, text: str, read: Callable[[str], Any]) -> Any:
        """What `read` makes of a pasted table `id`, of "@file.csv", or of the set value that stands in for it.

        A set value that `read` refuses is noted, and the notebook's own table stands in.

        >>> from calckit import Calc
        >>> Calc(project="Demo", number="D-1").text_in_force("tags", "tag\\nA1", str.split)
        ['tag', 'A1']
        """
        found = self.book.settings.value(self.id_of(id))
        if found:
            try:
                return read(self._text_of(found[1], of_settings=True))
            except CalckitError as error:
                self.book.settings.invalid[found[0]] = str(error)
        return read(self._text_of(text))

    def _text_of(self, text: str, of_settings: bool = False) -> str:
        if not text.startswith("@"):
            return text
        name = text[1:]
        if of_settings and name in self.book.settings.files:
            return self.book.settings.files[name]
        return self.file(name).decode("utf-8-sig")

    def line(
        self, name: str, expression: str, *, unit: str = "", meaning: str = "", source: str = "", digits: int = 4
    ) -> Handle:
        """A user's own computed line.

        `expression` uses symbols of this scope, `part.symbol`, + - * / **, comparisons, `a if c else b`, sqrt exp log
        sin cos tan min max abs, `total(...)`, `above(...)`, `below(...)`, `level(F_x, "5")`. Units are checked.
        """
        if isinstance(parse(expression).tree, ast.Compare):
            raise ExpressionError(f"line {name!r}: {expression!r} is a relation; write it with check(...)")
        symbol = own_symbol(name, meaning or self._known_meaning(name), unit)
        if isinstance(symbol, Fault):
            raise InputError("line", [symbol])
        symbol = Symbol(symbol.name, symbol.meaning, symbol.kind, own_unit=symbol.own_unit, digits=digits)
        self.calc.own_symbols[name] = symbol
        origin = self.calc.sources.read(source, f"line {name}") if source.strip() else Source("own formula")
        entry = work.compute(self, Formula(name, expression, origin), unit=units.canonical(unit), symbol=symbol)
        with self.step():
            handle = self.write(entry)
            if entry.line.rows:
                lists = [n for n in parse(expression).names if (e := self.find(n)) and e.line.rows == entry.line.rows]
                self.table(name, meaning, [*lists, name])
        return handle

    def _known_meaning(self, name: str) -> str:
        symbol = self.calc.standard.symbols.get(name) or self.calc.own_symbols.get(name)
        return symbol.meaning if symbol else ""

    def check(self, demand: str, relation: str, limit: str, *, title: str, source: str = "", id: str = "") -> Handle:
        """A requirement: demand, relation, limit, ratio, verdict in words; NOT CHECKED if a value is missing."""
        origin = self.calc.sources.read(source, f"check {title!r}") if source.strip() else Source("own requirement")
        return self.require(f"{demand} {relation} {limit}", title=title, source=origin, id_=id)

    def override(self, name: str, value: Any, *, reason: str, by: str, document: str = "") -> None:
        """Put a value in place of the one a later cell will compute; both are printed.

        With `document` (and its section) the override prints as a local amendment. Call it before the computing cell.
        """
        faults = [
            Fault(f"override {name}", what, "blank")
            for what, text in (("a reason", reason), ("a name", by))
            if not text.strip()
        ]
        if faults:
            raise InputError("override", faults)
        if document:
            self.calc.sources.read(document, f"override {name}")
        id_ = self.id_of(name)
        self._read(self.symbol(name), value)
        entry = self.book.entries.get(id_)
        if entry and self.book.settings.clean:
            raise InputError(
                "override",
                [
                    Fault(
                        name,
                        "a line not yet computed",
                        "a computed line",
                        "move the override above the cell that computes it",
                    )
                ],
            )
        self.calc.overrides[id_] = (value, reason, by, document)

    def judge(self, id_: str, text: str, basis: str) -> Handle:
        """An engineering judgment with its reason."""
        faults = [
            Fault(f"judge {id_}", what, "blank")
            for what, t in (("a statement", text), ("a basis", basis))
            if not t.strip()
        ]
        if faults:
            raise InputError("judge", faults)
        return self._words("judgment", id_, text, f"Basis: {basis}")

    def note(self, id_: str, text: str, *, owner: str = "", closes: str = "") -> Handle:
        """A note; with `owner` an open item until another note `closes` it (by line id)."""
        if not text.strip():
            raise InputError("note", [Fault(f"note {id_}", "text", "blank")])
        flags = [Flag(text, True, owner)] if owner else []
        return self._words("note", id_, text, "", flags, owner, closes)

    def _words(
        self, kind: str, id_: str, text: str, detail: str, flags: Sequence[Flag] = (), owner: str = "", closes: str = ""
    ) -> Handle:
        if not _ID.match(id_):
            raise InputError(kind, [Fault(id_, "an id of letters, digits, - and _", repr(id_))])
        line = Line(
            self.id_of(id_),
            kind,
            meaning=kind,
            part=self.id,
            text=text,
            detail=detail,
            flags=list(flags),
            owner=owner,
            closes=closes,
        )
        return self.write(Entry(line, this_cell()))

    def figure(self, figure: Any, *, caption: str, alt: str, id: str = "", lines: Sequence[str] = ()) -> None:
        """A drawing (matplotlib Figure) with caption and alternative text; `lines` are the ids it is made from.

        >>> from calckit import Calc, plots
        >>> calc = Calc(project="Demo", number="D-1")
        >>> drawing = plots.design_spectrum([0, 0.1, 0.5, 2.0], [0.4, 1.0, 1.0, 0.25])
        >>> calc.figure(drawing, caption="Design spectrum", alt="S_a over the period", id="spectrum")
        """
        from calckit.core.figures import place

        faults = [
            Fault(f"figure {what}", "text", "blank")
            for what, text in (("caption", caption), ("alt", alt))
            if not text.strip()
        ]
        if faults:
            raise InputError("figure", faults)
        place(self, figure, Figure(id or f"figure-{len(self.book.figures) + 1}", caption, alt, "", list(lines)))

    def file(self, name: str) -> bytes:
        """The bytes of a file beside the notebook; the file travels with the report.

        Raises InputError if there is no such file, or if it lies outside the notebook's folder.

        >>> from calckit import Calc
        >>> Calc(project="Demo", number="D-1").file("nowhere.csv")
        Traceback (most recent call last):
        calckit.errors.InputError: file: nowhere.csv: needed a readable file beside the notebook; given No such file ...
        """
        path = Path(name)
        if path.is_absolute() or ".." in path.parts:
            raise InputError("file", [Fault(name, "a path inside the notebook's folder", name)])
        try:
            data = path.read_bytes()
        except OSError as error:
            raise InputError(
                "file", [Fault(name, "a readable file beside the notebook", str(error.strerror))]
            ) from None
        self.calc.files[path.as_posix()] = data
        return data

    def analysis(
        self, *, document: str = "", run_date: str = "", V_applied: Any = NO_MODEL, W_model: Any = NO_MODEL,  # noqa: N803
        with_P_delta: str = "", base: str = "", stiffness: str = "", diaphragm: str = "",  # noqa: N803
    ) -> Handles:  # fmt: skip
        """The model that displacements and T_analysis of this part come from: document, date, shear applied, weight."""
        facts = {
            "document": document, "run": run_date, "P-delta in the model": with_P_delta, "base": base,
            "stiffness": stiffness, "diaphragm": diaphragm,
        }  # fmt: skip
        text = "; ".join(f"{name}: {fact}" for name, fact in facts.items() if fact)
        origin = self.calc.sources.read(document, "analysis") if document.strip() else None
        with self.step():
            made = Handles()
            named = [("V_applied", V_applied), ("W_model", W_model)]
            if with_P_delta and "with_P_delta" in self.calc.standard.symbols:
                named.append(("with_P_delta", with_P_delta))
            for name, raw in named:
                symbol = self.symbol(name)
                reading, was_set = self._in_force(symbol, raw)
                detail, facts_of = "set at issue" if was_set else "", "" if symbol.kind == "words" else text
                made.append(self.write(self._stated(symbol, reading, "given", origin, facts_of, detail)))
            return made

    def confirm(self, what: str, document: str, by: str, date: str) -> None:
        """State that a table or clause was confirmed against the printed standard."""
        self.calc.sources.confirm(what, document, by, date)
        for entry in self.book.entries.values():
            if entry.line.source:
                entry.line.source.confirmed = self.calc.sources.confirmation(entry.line.source)

    def summary(self) -> None:
        """Show the governing results so far, and name lines that are stale or whose cell was deleted.

        >>> from calckit import Calc
        >>> Calc(project="Demo", number="D-1").summary()
        <IPython.core.display.Markdown object>
        """
        from calckit.core.summary import show_summary

        show_summary(self.calc)


def _pasted(text: str) -> list[list[str]]:
    lines = [line for line in text.splitlines() if line.strip()]
    mark = next((m for m in ("\t", ";", ",") if lines and m in lines[0]), ",")
    return [
        [cell.strip() for cell in row]
        for row in csv.reader(io.StringIO("\n".join(lines)), delimiter=mark, skipinitialspace=True)
    ]
