"""What a calculation and its parts have in common: the methods a user calls to write lines.

Knows how each kind of line is made from what is typed. Must not know any standard or any report.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from contextlib import contextmanager
from dataclasses import replace
from typing import TYPE_CHECKING, Any

from calckit import units
from calckit.core import columns, work
from calckit.core.book import Entry, this_cell
from calckit.core.formula import Formula
from calckit.core.handle import Handle
from calckit.core.inputs import NONE, Reading, read
from calckit.core.record import NOT_CHECKED, NOT_OK, Candidate, Flag, Line, Margin, Operand, Override, Source
from calckit.core.standard import methods
from calckit.core.symbol import Symbol
from calckit.errors import Fault, InputError, StaleObjectError, UnknownNameError, nearest_first

if TYPE_CHECKING:
    from calckit.core.book import Book
    from calckit.core.calc import Calc

OPEN_ANSWER = "not answered"
DEFAULT = "default"
"""What the input list says of a choice that nobody made."""
_ID = re.compile(r"[\w.\-]+\Z")


class Scope:
    """A calculation or one of its parts: own symbols first, then the calculation's."""

    def __init__(self, calc: Calc, id_: str, title: str) -> None:
        self.calc, self.id, self.title = calc, id_, title

    @property
    def book(self) -> Book:
        """The lines; refuses if the calculation has been started afresh."""
        if self.calc.superseded:
            afresh = "this object belongs to a calculation that was started afresh"
            raise StaleObjectError(f"{afresh}; run again the cell that makes {self._maker()}")
        return self.calc.lines

    def _maker(self) -> str:
        return f"part({self.id!r})" if self.id else "Calc(...)"

    @property
    def system(self) -> str:
        """The unit set, "US" or "SI"."""
        return str(self.calc.title_block["units"])

    def id_of(self, symbol: str) -> str:
        """The id of a line of this scope."""
        return f"{self.id}.{symbol}" if self.id else symbol

    def symbol(self, name: str) -> Symbol:
        """The symbol a name stands for: the standard's, else the user's own, else one spelt by the name alone.

        The symbol of another part carries that part in its subscript.
        """
        part, _, plain = name.rpartition(".")
        found = self.calc.standard.symbols.get(plain) or self.calc.own_symbols.get(plain) or Symbol(plain, plain)
        if part in ("", self.id):
            return found
        return replace(found, sub=", ".join(filter(None, (found.subscript, part))), layout="")

    def typeset(self, symbol: Symbol) -> dict[str, str]:
        """A symbol in the four printed forms."""
        from calckit.core.printers import typeset

        return typeset(symbol, self.symbol)

    def plain(self, name: str) -> str:
        """A name as its symbol prints in plain text: "δ_x", "X.ρ"."""
        part, _, symbol = name.rpartition(".")
        printed = self.typeset(self.symbol(symbol))["plain"]
        return f"{part}.{printed}" if part else printed

    def find(self, name: str) -> Entry | None:
        """The line a name stands for here, or None."""
        return self.book.find(self.id, name)

    def absent(self, name: str) -> bool:
        """Whether nothing stands for a name but what an earlier run of this very cell wrote, which goes with it."""
        entry, cell = self.find(name), this_cell()
        return entry is None or (entry.cell.key == cell.key and entry.cell.run < cell.run)

    def word(self, name: str) -> str | None:
        """The word or text value a name stands for here, None if there is no line or it says none."""
        entry = self.find(name)
        value = entry.line.value if entry else None
        return value if isinstance(value, str) and value not in (NONE, OPEN_ANSWER) else None

    def choice(self, name: str, usual: str, source: Source) -> str:
        """The word chosen; where nobody chose, a line among the inputs says that the usual one is taken by default."""
        entry = self.find(name)
        if entry is None or entry.line.detail == DEFAULT:
            self.state(name, usual, "given", source, detail=DEFAULT)
        return self.word(name) or usual

    def number(self, name: str, unit: str = "") -> float | None:
        """The number a name stands for here, in `unit` (blank: in its own); None if there is none."""
        entry = self.find(name)
        value = entry.line.value if entry else None
        if entry is None or not isinstance(value, int | float):
            return None
        return units.convert(float(value), entry.line.unit, unit) if unit else float(value)

    def labelled(self, title: str) -> str:
        """A title with the part it belongs to: "X: Story drift"."""
        return f"{self.id}: {title}" if self.id else title

    def missing(self, name: str, line: Line | None = None) -> Fault:
        """What to say of a name that has no number here."""
        symbol = self.symbol(name)
        supplier = self.calc.standard.suppliers.get(symbol.name, f'given("{symbol.name}", ...)')
        unit = symbol.unit(self.system)
        words = ", ".join(symbol.choices) or "a word"
        needed = words if symbol.kind == "words" else f"a number{' in ' + units.shown(unit) if unit else ''}"
        given = str(line.shown) if line else "nothing"
        cure = f"supply it with {supplier}"
        known = {**self.calc.standard.symbols, **self.calc.own_symbols}
        if symbol.name not in known and symbol.name not in self.calc.standard.suppliers:
            cure += f", or did you mean {', '.join(nearest_first(symbol.name, known)[:4])}?"
        return Fault(name, needed, given, cure, symbol.meaning if symbol.name in known else "")

    def title_of(self, symbol: str) -> str:
        """A symbol with its meaning, for messages."""
        return f"{self.id_of(symbol)} ({self.symbol(symbol).meaning})"

    @contextmanager
    def step(self) -> Iterator[None]:
        """Write all lines of a step or none, and show them below the cell, the governing ones first."""
        book = self.book
        outermost = book.depth == 0
        if outermost:
            book.written, book.notices = [], []
        with book.together():
            yield
        if outermost:
            lines = [book.entries[id_].line for id_ in book.written if id_ in book.entries]
            ordered = sorted(lines, key=lambda line: not line.candidates)
            shown = set(book.written)
            tables = [
                table for table in book.tables.values() if shown & set(table.lines) and table.id in book.fresh_tables
            ]
            book.fresh_tables.clear()
            self.calc.outputs.show(ordered, tables, book.notices)

    def write(self, entry: Entry, rests: Sequence[str] = ()) -> Handle:
        """Write one line: the single place where set values and overrides of computed lines take effect.

        `rests` are symbols that the line rests on without standing in its formula: what chose a row or a branch, what a
        check that is not made waits for. Of these, what no line gives yet is recorded as absent.
        """
        line = entry.line
        for name in rests:
            found = self.find(name)
            if found:
                chosen = found.line
                line.inputs.setdefault(chosen.id, Operand(chosen.value, chosen.unit, chosen.shown, chosen.content))
            elif line.verdict == NOT_CHECKED:
                line.inputs[name] = Operand(None, "", "")
        if line.kind in ("computed", "table", "analysis") and not isinstance(line.value, list):
            self._put_in_force(entry)
        if line.source:
            if line.source.standard:
                line.source = self.calc.standard.in_this_edition(line.source)
            line.source = replace(line.source, confirmed=self.calc.sources.confirmation(line.source))
        with self.step():
            self.book.write(entry)
        return Handle(self, line.id)

    def _put_in_force(self, entry: Entry) -> None:
        line = entry.line
        override = self.calc.overrides.get(line.id)
        found = self.book.settings.value(line.id)
        raw, reason, by, document = override or (None, "", "", "")
        if found:
            raw, reason, by, document = found[1], "set at issue", "the command line", ""
        if raw is None:
            return
        reading = self._read(self.symbol(line.symbol), raw, found[0] if found else None)
        if reading is None:
            return
        line.computed = Operand(line.value, line.unit, str(line.shown))
        line.value, line.unit = reading.value, reading.unit or line.unit
        line.shown = f"{reading.numeral or reading.value} {units.shown(reading.unit)}".rstrip()
        line.override = Override(line.value, line.shown, reason, by, document)
        entry.numerals = (reading.numeral,) if reading.numeral else None
        text = f"{line.id} overridden: {line.shown} in place of {line.computed.shown}{_change(line)}; {reason}"
        line.flags.append(Flag(text))

    def _read(self, symbol: Symbol, raw: Any, set_key: str | None = None) -> Reading | None:
        """A reading; a bad set value is noted and gives None, any other bad value raises."""
        reading = read(symbol, raw, self.system)
        if isinstance(reading, Reading):
            return reading
        if set_key is None:
            raise InputError("value", [reading])
        self.book.settings.invalid[set_key] = str(reading)
        return None

    def _in_force(self, symbol: Symbol, raw: Any) -> tuple[Reading, bool]:
        """The reading of a typed value, or of the set value that stands in for it; whether it was set."""
        found = self.book.settings.value(self.id_of(symbol.name))
        if found:
            reading = self._read(symbol, found[1], found[0])
            if reading:
                return reading, True
        own = self._read(symbol, raw)
        assert own is not None
        return own, False

    def compute(self, formula: Formula, **how: Any) -> Handle:
        """Work a formula in this scope and write the line; see `work.compute` for the words of `how`."""
        candidates, rests = how.pop("candidates", []), how.pop("rests", ())
        entry = work.compute(self, formula, **how)
        entry.line.candidates = list(candidates)
        return self.write(entry, rests)

    def look_up(self, symbol: str, found: Any, flags: Sequence[Flag] = (), rests: Sequence[str] = ()) -> Handle:
        """Write a table value: an exact entry, or the formula that interpolates between two.

        `rests` are the symbols that chose row and column. An entry at a knot of the table prints as an entry and keeps
        the formula of its two sides, for slopes.
        """
        if found.expression:
            formula = Formula(symbol, found.expression, found.source)
            return self.compute(formula, kind="table", detail=found.detail, flags=flags, rests=rests)
        return self.state(
            symbol, found.text, "table", found.source, detail=found.detail, flags=flags, rests=rests,
            formula=found.knot or None,
        )  # fmt: skip

    def state(
        self, symbol: str, raw: Any, kind: str, source: Source | None, *, text: str = "", detail: str = "",
        flags: Sequence[Flag] = (), rests: Sequence[str] = (), candidates: Sequence[Candidate] = (),
        margin: Margin | None = None, formula: str | None = None, closes: str = "",
    ) -> Handle:  # fmt: skip
        """Write a line whose value stands as typed or as printed in a table; it `closes` what a line left open."""
        declared = self.symbol(symbol)
        reading = self._read(declared, raw)
        assert reading is not None
        entry = self._stated(declared, reading, kind, source, text, detail, flags)
        entry.line.candidates, entry.line.margin, entry.line.formula = list(candidates), margin, formula
        entry.line.closes = closes
        return self.write(entry, rests)

    def _stated(
        self, symbol: Symbol, reading: Reading, kind: str, source: Source | None, text: str = "", detail: str = "",
        flags: Sequence[Flag] = (), owner: str = "",
    ) -> Entry:  # fmt: skip
        shown = f"{reading.numeral or reading.value} {units.shown(reading.unit)}".rstrip()
        shown = f"{reading.value}: {reading.text}" if reading.text else shown
        line = Line(
            self.id_of(symbol.name), kind, symbol.name, symbol.meaning, reading.value, reading.unit, shown,
            part=self.id, typeset=self.typeset(symbol) if symbol.kind != "words" else {}, source=source,
            text=text, detail=detail, flags=list(flags), owner=owner,
        )  # fmt: skip
        places = len(reading.numeral.partition(".")[2])
        return Entry(line, this_cell(), (reading.numeral,) if reading.numeral else None, places)

    def table(self, id_: str, title: str, names: Sequence[str], head: str = "Level") -> None:
        """Print list lines side by side, their decimals settled so that each row follows from what is printed."""
        table = columns.tabulate(self, id_, title, names, head)
        self.book.write_table(table)
        self.book.fresh_tables.add(table.id)

    def require(
        self, relation: str, *, title: str, source: Source, id_: str = "", flags: Sequence[Flag] = (), sets: Any = None
    ) -> Handle:
        """A check of a relation with a source of its own; used by steps."""
        formula = Formula(title, relation, source, sets=sets)
        id_ = id_ or re.sub(r"\W+", "_", title.lower()).strip("_")
        absent = [name for name in formula.names if not self.has_number(name)]
        unknown = [
            name for name in absent if self.find(name) is None and not self._known_meaning(name.rpartition(".")[2])
        ]
        if unknown:
            known = [*self.calc.standard.symbols, *self.book.entries]
            raise UnknownNameError(f"check {title!r}: symbol", unknown[0], known)
        if absent:
            missing = ", ".join(f"{self.plain(name)} ({self.symbol(name).meaning})" for name in absent)
            return self.write(work.not_checked(self, id_, title, missing, source, relation), absent)
        with self.step():
            entry = work.check(self, id_, formula, title=title, flags=flags)
            handle = self.write(entry)
            if entry.line.rows:
                columns.tell_apart(self, entry)
            return handle

    def verdict(
        self, id_: str, title: str, verdict: str, source: Source, *, detail: str = "", missing: str = "",
        rests: Sequence[str] = (),
    ) -> Handle:  # fmt: skip
        """A check decided by a rule that is no relation of numbers; `rests` as in `write`, what is missing included."""
        line = Line(
            self.id_of(id_),
            "check",
            "",
            title,
            None,
            part=self.id,
            source=source,
            verdict=verdict,
            detail=detail,
            missing=missing,
        )
        if missing:
            line.flags.append(Flag(f"{self.labelled(title)}: NOT CHECKED, missing {missing}", True, "originator"))
        elif verdict == NOT_OK:
            line.flags.append(Flag(f"{self.labelled(title)}: {detail}", True, "originator"))
        return self.write(Entry(line, this_cell()), rests)

    def has_number(self, name: str) -> bool:
        """Whether a name stands for a number or a list of numbers here."""
        entry = self.find(name)
        return entry is not None and not isinstance(entry.line.value, str) and entry.line.value is not None

    def typed_in_place(self, values: Mapping[str, Any]) -> dict[str, Entry]:
        """Operands typed as arguments of a step."""
        made = {}
        for name, raw in values.items():
            symbol = self.symbol(name)
            reading = self._read(symbol, raw)
            assert reading is not None
            made[name] = self._stated(symbol, reading, "given", None)
        return made

    def __getattr__(self, name: str) -> Any:
        if not name.startswith("_") and name == self.calc.standard.family:
            return self.calc.standard.steps(self)
        if name == "methods":
            return methods().attached(self)
        raise AttributeError(f"{type(self).__name__} has no attribute {name!r}")


def _change(line: Line) -> str:
    """How far the value in force is from the kit's own, in percent."""
    own = line.computed.value if line.computed else None
    if not isinstance(own, float) or not isinstance(line.value, float) or own == 0 or not line.computed:
        return ""
    return f" ({(units.convert(line.value, line.unit, line.computed.unit) / own - 1) * 100:+.2f} %)"
