"""The HTML report: the document model as one file that needs no network, no script and nothing beside it.

Knows the page: template, style, math font, security policy, attachments. Must not know how anything in the model was
computed. Every text of the model is escaped; only MathML that holds known elements and nothing else goes in as markup.
"""

from __future__ import annotations

import base64
import xml.etree.ElementTree as ET
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import fields, is_dataclass
from functools import cache
from itertools import pairwise
from pathlib import Path
from typing import TYPE_CHECKING, Any

from calckit.report import checked, fonts, seal
from calckit.report.attachments import Attachment
from calckit.report.enclosures import Page
from calckit.report.model import LineView, Span, Typeset, View
from calckit.report.prose import ATTRIBUTES, ELEMENTS

if TYPE_CHECKING:
    from jinja2 import Template
    from markupsafe import Markup

_ASSETS = Path(__file__).parent / "assets"
_LONG = 36  # characters of plain text above which a formula may be broken at its signs
_WIDE = 52  # characters above which a fraction is written on one row
_TALL = {"mfrac", "mtable", "munder", "mover", "munderover", "msqrt", "mroot"}
_SIGNS = {"+", "−", "×", "/", "=", "≤", "≥", "<", ">", "≠"}
_SHEET = {"Letter": "8.5in 11in", "A4": "210mm 297mm"}


def render(
    view: View, *, figures: Mapping[str, bytes], attachments: Sequence[Attachment], enclosed: Sequence[Page] = ()
) -> bytes:
    """The report as UTF-8 HTML with the seal's placeholder in place.

    `figures` maps the file names of the view's figures to SVG; the attachments become downloads, the pages `enclosed`
    (as PNG) an appendix. The same arguments give the same bytes. Raises ValueError if a figure is not there, a formula
    is no well-formed MathML or the view holds None where a text belongs; jinja2.UndefinedError if the view lacks
    something the template prints.

    >>> from calckit.report.view import build
    >>> from tests.report.sample import content, figures, record
    >>> page = render(build(record(), content()), figures=figures(), attachments=())
    >>> page.startswith(b"<!DOCTYPE html>"), b"<script" in page
    (True, False)
    """
    return (
        template("report.html.j2")
        .render(
            view=view,
            notices=(*view.notices, *missing_glyphs(view)),
            figures=_Pictures(figures),
            attachments=attachments,
            enclosed=enclosed,
            placeholder=seal.PLACEHOLDER,
        )
        .encode()
    )


def missing_glyphs(view: View) -> list[str]:
    """Formulas with characters that the embedded font lacks, each with the characters; the reader's own fonts set them.

    >>> from dataclasses import replace
    >>> from calckit.report.view import build
    >>> from tests.report.sample import content, record
    >>> missing_glyphs(build(record(), content()))
    []
    """
    found: dict[str, None] = {}
    for name, mathml in _formulas(view):
        lacking = fonts.missing("".join(_tree(mathml).itertext()))
        if lacking:
            listed = ", ".join(f"{character} (U+{ord(character):04X})" for character in lacking)
            found[f"The math font of this file lacks {listed}, in the formula {name}"] = None
    return list(found)


def _formulas(thing: Any) -> Iterator[tuple[str, str]]:
    """Every formula of a view as (name, MathML)."""
    if isinstance(thing, Typeset):
        yield thing.plain, thing.mathml
    elif isinstance(thing, Span):
        if thing.mathml:
            yield thing.text, thing.mathml
    elif is_dataclass(thing):
        for field in fields(thing):
            yield from _formulas(getattr(thing, field.name))
    elif isinstance(thing, tuple):
        for entry in thing:
            yield from _formulas(entry)


@cache
def template(name: str) -> Template:
    """A page of this package, set strictly: missing data is an error, texts are data, nothing is fetched.

    >>> template("report.html.j2").name
    'report.html.j2'
    """
    from jinja2 import Environment, FileSystemLoader, StrictUndefined
    from markupsafe import Markup

    environment = Environment(
        loader=FileSystemLoader(_ASSETS),
        undefined=StrictUndefined,
        autoescape=True,
        trim_blocks=True,
        lstrip_blocks=True,
        keep_trailing_newline=True,
        finalize=_present,
    )
    environment.filters |= {"mathml": _mathml, "formula": _formula, "css": _css_text, "data": _data, "runs": _runs}
    environment.filters["ranges"] = checked.ranges
    environment.globals |= {
        "style": Markup((_ASSETS / "report.css").read_text(encoding="utf-8")),
        "font": Markup(fonts.math_font_uri()),
        "sheet": _SHEET,
    }
    return environment.get_template(name)


def _present(value: Any) -> Any:
    if value is None:
        raise ValueError("the document model holds None where the HTML report prints a text")
    return value


class _Pictures:
    """The figures by file name, as addresses that need no fetch."""

    def __init__(self, figures: Mapping[str, bytes]) -> None:
        self._figures = figures

    def __getitem__(self, name: str) -> str:
        if name not in self._figures:
            listed = ", ".join(sorted(self._figures)) or "none"
            raise ValueError(f"figure file {name!r} is not there; there are: {listed}")
        return _data(self._figures[name], "image/svg+xml")


def _data(content: bytes, media_type: str) -> str:
    return f"data:{media_type};base64,{base64.b64encode(content).decode()}"


def _tree(mathml: str) -> ET.Element:
    """A fragment as a tree; ValueError if it is not well-formed or holds anything but the known elements."""
    try:
        tree = ET.fromstring(f"<math>{mathml}</math>")
    except ET.ParseError as error:
        raise ValueError(f"MathML is not well-formed ({error}): {mathml}") from error
    for element in tree.iter():
        if element.tag not in ELEMENTS or element.attrib.keys() - ATTRIBUTES:
            raise ValueError(f"MathML with <{element.tag}> {sorted(element.attrib)} is not printed: {mathml}")
    return tree


def _mathml(mathml: str) -> Markup:
    from markupsafe import Markup

    return Markup(_inside(_settled(_tree(mathml))))


def _formula(form: Typeset) -> Markup:
    """A formula that may fill its row: one piece, or pieces between which the browser may break a long one."""
    from markupsafe import Markup

    tree = _settled(_tree(form.mathml))
    if len(form.plain) <= _LONG:
        piece = Markup('<math displaystyle="true" alttext="{}">{}</math>')
        return piece.format(form.plain, Markup(_inside(tree)))
    pieces = (f'<math displaystyle="true">{_inside(piece)}</math>' for piece in _pieces(_flat(tree)))
    return Markup('<span role="math" aria-label="{}">{}</span>').format(form.plain, Markup("<wbr>".join(pieces)))


def _inside(elements: Iterable[ET.Element]) -> str:
    return "".join(ET.tostring(element, encoding="unicode") for element in elements)


def _settled(tree: ET.Element) -> ET.Element:
    """Spacing that browsers do not give: brackets around low content stay close, an unwritten product has a gap."""
    for row in tree.iter("mrow"):
        if _is_fenced(row) and not _is_tall(row):
            for fence in (row[0], row[-1]):
                fence.attrib.setdefault("stretchy", "false")
    for sign in tree.iter("mo"):
        if sign.text == "\u2062":
            sign.attrib |= {"lspace": "0.12em", "rspace": "0"}
    return tree


def _is_fenced(row: ET.Element) -> bool:
    return len(row) > 1 and row[0].tag == "mo" and row[0].text == "(" and row[-1].tag == "mo" and row[-1].text == ")"


def _is_tall(row: ET.Element) -> bool:
    return any(element.tag in _TALL for element in row.iter())


def _flat(elements: Iterable[ET.Element]) -> Iterator[ET.Element]:
    """The same formula with rows dissolved and long fractions on one row, so that it can be broken at its signs."""
    for element in elements:
        if element.tag == "mrow" and not (_is_fenced(element) and _is_tall(element)):
            yield from _flat(element)
        elif element.tag == "mfrac" and len("".join(element.itertext())) > _WIDE:
            top, bottom = element
            yield from (_sign("("), *_flat([top]), _sign(")"), _sign("/"))
            yield from (_sign("("), *_flat([bottom]), _sign(")"))
        else:
            yield element


def _sign(text: str) -> ET.Element:
    sign = ET.Element("mo", {"stretchy": "false"})
    sign.text = text
    return sign


def _pieces(elements: Iterable[ET.Element]) -> list[list[ET.Element]]:
    """Pieces that start with a sign between two operands: a factor only where there are no terms."""
    row = list(elements)
    breaks = [
        place
        for place, (before, element) in enumerate(pairwise(row), 1)
        if element.tag == "mo" and element.text in _SIGNS and (before.tag != "mo" or before.text == ")")
    ]
    for place in breaks:
        row[place].set("form", "infix")
    terms = [place for place in breaks if row[place].text != "×"] or breaks
    return [row[start:end] for start, end in pairwise([0, *terms, len(row)])]


def _css_text(text: str) -> Markup:
    """A text as a CSS string: all but letters and digits as code points, so that nothing in it can end the string."""
    from markupsafe import Markup

    safe = "".join(c if c.isascii() and c.isalnum() else f"\\{ord(c):06x}" for c in _present(text))
    return Markup(f'"{safe}"')


def _runs(items: Sequence[Any]) -> list[tuple[str, list[Any]]]:
    """Neighbouring lines gathered, so that each run of lines is one table; anything else stands alone."""
    runs: list[tuple[str, list[Any]]] = []
    for item in items:
        if isinstance(item, LineView) and runs and runs[-1][0] == "line":
            runs[-1][1].append(item)
        else:
            runs.append((item.type, [item]))
    return runs
