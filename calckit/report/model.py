"""The document model: one plain description of a report that both writers print.

Knows what stands in a report, in which order and under which number: cover, answer, open items, sections, lists. Must
not know HTML, Typst or any paper size, nor how it is made from a record (`calckit.report.view`). Texts in it are data,
never markup.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

if TYPE_CHECKING:
    from calckit.report.checked import CheckedView
    from calckit.report.matters import MattersView
    from calckit.report.revised import Revised

# --- the text of the notebook's Markdown cells


@dataclass(frozen=True)
class Span:
    """A run of text of one kind.

    `text` is what is printed; for "math" it is the LaTeX source, shown as it stands where `mathml` or `svg` is blank
    because the formula cannot be set. `mathml` is a fragment without the outer element, `svg` a drawing whose baseline
    is y = 0 and whose lengths are in points at 10 pt type. `href` is the address of a "link", which is printed and
    never fetched.
    """

    kind: Literal["text", "emphasis", "strong", "code", "math", "link"]
    text: str
    mathml: str = ""
    svg: str = ""
    href: str = ""


Spans = tuple[Span, ...]


@dataclass(frozen=True)
class Block:
    """A block of text.

    heading: `level`, `spans`. paragraph: `spans`. bullets, numbers: `items`, each a sequence of blocks. quote: one
    entry in `items`. code: `text`. table: `head`, `rows` of cells of spans. math: one math span, set on its own row.
    """

    kind: Literal["heading", "paragraph", "bullets", "numbers", "quote", "code", "table", "math"]
    spans: Spans = ()
    level: int = 0
    text: str = ""
    items: tuple[tuple[Block, ...], ...] = ()
    head: tuple[Spans, ...] = ()
    rows: tuple[tuple[Spans, ...], ...] = ()


Content = Sequence[tuple[Literal["prose"], Sequence[Block]] | tuple[Literal["cell"], int]]
"""The notebook in order: the blocks of a Markdown cell, or the place of a code cell in the record's `cells`."""


# --- pieces of the calculation


@dataclass(frozen=True)
class Typeset:
    """A formula or symbol in its four printed forms, as the record holds them."""

    plain: str
    latex: str
    mathml: str
    typst: str


@dataclass(frozen=True)
class Ref:
    """A line by number and id; its anchor is `line-<n>`, unless the line is not `here` in a short form."""

    n: int
    id: str
    here: bool = True


@dataclass(frozen=True)
class FlagView:
    """A remark on a line. `number` is its number among the open items, 0 if it is none or is `closed_by` a line.

    `text` is blank where the line itself says the same; then one of the other two is there.
    """

    text: str
    number: int
    owner: str
    closed_by: Ref | None


@dataclass(frozen=True)
class CandidateView:
    """One of several competing values."""

    equation: str
    shown: str
    reason: str
    governs: bool
    ref: Ref | None


@dataclass(frozen=True)
class OverrideView:
    """A value put in place of the kit's own."""

    ref: Ref
    symbol: Typeset | None
    meaning: str
    computed: str
    in_force: str
    reason: str
    by: str
    document: str


@dataclass(frozen=True)
class LineView:
    """One line as printed.

    `label` is the kind in the reader's words, blank for a computed line. `steps` are the symbolic and the substituted
    form: right-hand sides to `symbol`, or complete relations where `relation` is true; the substituted one alone where
    the symbol prints as its own formula. `shown` is the result ("" where there is none) and `at` the row of a list that
    it belongs to. `table` is the number of the table that holds the
    list, `values` its entries where no table does. `minor` lines are candidates that do not govern: one row each.
    `enclosed` is the place, from 1, of the bound page that the source names (0: none is bound); `was` says what stood
    here in the former issue, if that differs.
    """

    n: int
    id: str
    kind: str
    label: str
    part: str
    meaning: str
    name: str
    symbol: Typeset | None
    steps: tuple[Typeset, ...]
    relation: bool
    shown: str
    at: str
    table: int
    values: tuple[tuple[str, str], ...]
    source: str
    confirmation: str
    text: str
    detail: str
    margin: str
    verdict: str
    missing: str
    candidates: tuple[CandidateView, ...]
    minor: bool
    override: OverrideView | None
    flags: tuple[FlagView, ...]
    inputs: tuple[Ref, ...]
    used_in: tuple[Ref, ...]
    enclosed: int = 0
    was: str = ""
    type: Literal["line"] = "line"


@dataclass(frozen=True)
class ColumnView:
    """A column of a table: its part where that is not the table's, symbol, printed unit and the line it prints."""

    part: str
    symbol: Typeset
    unit: str
    ref: Ref


@dataclass(frozen=True)
class TableView:
    """Lists side by side; its anchor is `table-<number>`."""

    number: int
    id: str
    part: str
    title: str
    head: str
    columns: tuple[ColumnView, ...]
    rows: tuple[tuple[str, tuple[str, ...]], ...]
    type: Literal["table"] = "table"


@dataclass(frozen=True)
class FigureView:
    """A drawing; its anchor is `figure-<number>`, `file` its name among the figures."""

    number: int
    id: str
    caption: str
    alt: str
    file: str
    refs: tuple[Ref, ...]
    type: Literal["figure"] = "figure"


@dataclass(frozen=True)
class ProseView:
    """Text of a Markdown cell; headings inside it are of level 3 and below."""

    blocks: tuple[Block, ...]
    type: Literal["prose"] = "prose"


Item = LineView | TableView | FigureView | ProseView


@dataclass(frozen=True)
class CarriedView:
    """A result of a section and the lines of other sections that use it."""

    ref: Ref
    symbol: Typeset | None
    name: str
    part: str
    shown: str
    to: tuple[Ref, ...]


@dataclass(frozen=True)
class SectionView:
    """A section of the notebook; its anchor is `section-<number>`."""

    number: int
    title: str
    items: tuple[Item, ...]
    carried: tuple[CarriedView, ...]


# --- what stands before and after the sections


@dataclass(frozen=True)
class TitleBlock:
    """What stands on every sheet."""

    project: str
    location: str
    number: str
    subject: str
    revision: str
    date: str
    status: str
    purpose: str
    firm: str
    prepared_by: str
    checked_by: str


@dataclass(frozen=True)
class Revision:
    """A row of the revision table; `sheets` is blank where the writers say which changed, from the view's `revised`."""

    revision: str
    date: str
    reason: str
    by: str
    sheets: str


@dataclass(frozen=True)
class Statement:
    """Something the cover says, computed from the lines: a label, words, and the lines it is about."""

    label: str
    text: str
    refs: tuple[Ref, ...] = ()


@dataclass(frozen=True)
class SummaryCell:
    """A value of a summary, the line it comes from, and what stood here in the former issue, if that differs."""

    text: str
    ref: Ref | None
    was: str = ""


@dataclass(frozen=True)
class SummaryView:
    """A summary with the parts side by side; `rows` are (label, one cell a column)."""

    title: str
    columns: tuple[str, ...]
    rows: tuple[tuple[str, tuple[SummaryCell, ...]], ...]


@dataclass(frozen=True)
class OpenItemView:
    """An open item, or a table or clause to be confirmed."""

    number: int
    text: str
    owner: str
    ref: Ref | None


@dataclass(frozen=True)
class InputView:
    """A row of the input list; `enclosed` as in `LineView`."""

    ref: Ref
    symbol: Typeset | None
    name: str
    part: str
    meaning: str
    shown: str
    source: str
    date: str
    status: str
    enclosed: int


@dataclass(frozen=True)
class AssumptionView:
    """A numbered assumption."""

    number: int
    ref: Ref
    symbol: Typeset | None
    name: str
    meaning: str
    shown: str
    basis: str
    status: str
    used_in: tuple[Ref, ...]


@dataclass(frozen=True)
class SymbolView:
    """A row of the symbol list: the lines that define the symbol."""

    symbol: Typeset
    meaning: str
    unit: str
    refs: tuple[Ref, ...]


@dataclass(frozen=True)
class ReferenceView:
    """A document and the lines that cite it."""

    key: str
    title: str
    author: str
    revision: str
    date: str
    refs: tuple[Ref, ...]


@dataclass(frozen=True)
class SoftwareView:
    """What computed the lines; the three hashes identify source, inputs and lines."""

    name: str
    version: str
    python: str
    platform: str
    libraries: tuple[tuple[str, str], ...]
    notebook: str
    source: str
    inputs: str
    lines: str


@dataclass(frozen=True)
class View:
    """The whole report.

    `short_hash` stands in the footer of every sheet, `standing` ("SUPERSEDED", "VOID") at its head unless it is blank.
    Sheets are counted from `first_sheet` and named with `sheet_prefix`. `sign_off` are (role, printed name), `check`
    (label, entry) of how the check was made, `checked` is None in an issue without a check log. `seal_fields` take the
    place of the clear space for seal and signature in a preliminary issue; `seal_caption` stands above either.
    `left_open` is said on the cover of an issue for construction with open items. `revised` is None in an issue that
    names no former one. `counts` are the checks by verdict. `margins` say how near a value stands to the next limit.
    `notices` are for the reader of this copy (characters not printed).
    `matters` is None where the answer has no numbers, and in the short form. `short_of` names the full form, and is
    blank in it; `short_note` is what the short form says of itself.
    """

    paper: Literal["Letter", "A4"]
    title: str
    title_block: TitleBlock
    short_hash: str
    revisions: tuple[Revision, ...]
    statements: tuple[Statement, ...]
    left_open: str
    sign_off: tuple[tuple[str, str], ...]
    seal_caption: str
    check: tuple[tuple[str, str], ...]
    seal_fields: tuple[tuple[str, str], ...]
    standing: str
    first_sheet: int
    sheet_prefix: str
    answer: tuple[SummaryView, ...]
    drawings: tuple[SummaryView, ...]
    counts: tuple[tuple[str, int], ...]
    not_met: tuple[LineView, ...]
    margins: tuple[Statement, ...]
    open_items: tuple[OpenItemView, ...]
    to_confirm: tuple[OpenItemView, ...]
    overrides: tuple[OverrideView, ...]
    criteria: tuple[tuple[str, str], ...]
    sections: tuple[SectionView, ...]
    assumptions: tuple[AssumptionView, ...]
    inputs: tuple[InputView, ...]
    symbols: tuple[SymbolView, ...]
    references: tuple[ReferenceView, ...]
    software: SoftwareView
    field_of_use: tuple[str, ...]
    not_covered: tuple[str, ...]
    cautions: tuple[str, ...]
    revised: Revised | None = None
    checked: CheckedView | None = None
    notices: tuple[str, ...] = ()
    matters: MattersView | None = None
    short_of: str = ""
    short_note: str = ""
