"""The text cells of a notebook: Markdown with math becomes the neutral blocks that both writers print.

Knows Markdown, and how typed LaTeX becomes MathML and a drawing. Must not know HTML pages or Typst. The text is the
user's: HTML in it is shown as typed, addresses and pictures are named and never fetched, and math that cannot be set
is shown as its LaTeX source.
"""

from __future__ import annotations

import html
import re
import unicodedata
import warnings
import xml.etree.ElementTree as ET
from collections.abc import Callable, Iterable, Iterator
from dataclasses import replace
from functools import cache
from typing import Any

from calckit.report.fonts import missing
from calckit.report.model import Block, Span, Spans

_Token = dict[str, Any]

_ENTITY = re.compile(r"&(?:#\d{1,7}|#[xX][0-9a-fA-F]{1,6}|[A-Za-z][A-Za-z0-9]*);")

# A dollar opens math if no blank follows it and closes it if no blank stands before it and no digit after it, so that
# sums of money stay text.
_INLINE_MATH = (
    r"\$\$(?P<math_own_row>(?:[^$\\]|\\[\s\S])+?)\$\$"
    r"|\$(?![\s$])(?P<math_in_row>(?:[^$\\]|\\[\s\S])+?)(?<!\s)\$(?!\d)"
)
_BLOCK_MATH = (
    r"^ {0,3}\$\$(?P<math_dollars>(?:[^$\\]|\\[\s\S])+?)\$\$[ \t]*(?:\n|$)"
    r"|^ {0,3}(?P<math_environment>\\begin\{(?P<math_name>(?:align|equation|gather)\*?)\}[\s\S]+?"
    r"\\end\{(?P=math_name)\})[ \t]*(?:\n|$)"
)


def blocks(text: str) -> tuple[Block, ...]:
    """The blocks of a Markdown text, in order.

    >>> [block.kind for block in blocks("# Loads\\n\\n- dead\\n- live\\n\\n$$W = \\\\sum w_x$$")]
    ['heading', 'bullets', 'math']
    >>> blocks("about **10 %**, <b>not</b> more")[0].spans
    (Span(kind='text', text='about ',...), Span(kind='strong', text='10 %',...), Span(kind='text', text=', <b>not</b>...
    """
    return tuple(_blocks(_reader()(text)))


def set_math(latex: str, own_row: bool = False) -> str:
    """LaTeX as a MathML fragment without the outer element, blank if it cannot be set.

    `own_row` sets it large, as on a row of its own. What comes back holds only the elements and attributes that every
    reader of MathML Core draws.

    >>> set_math("C_s W")
    '<mrow><msub><mi>C</mi><mi>s</mi></msub><mi>W</mi></mrow>'
    >>> set_math(r"\\unknown{x}")
    ''
    """
    if _REFUSED.search(latex):
        return ""
    source = _MATHRM.sub(r"\\mathrm {", _UNNUMBERED.sub("", _ALIGNED.sub(r"\1align*}", latex)))
    # The converter raises whatever its parser stumbles over (IndexError, KeyError, ...): any of it means "not set".
    try:
        tree = _converted(source, own_row)
        if any("linebreak" in element.attrib for element in tree.iter()):
            tree = _converted(r"\begin{align*}" + source + r"\end{align*}", own_row)
        for element in tree.iter():
            _clean(element)
    except Exception:
        return ""
    return "".join(ET.tostring(child, encoding="unicode") for child in tree)


def draw_math(mathml: str, own_row: bool = False) -> str:
    """A MathML fragment as an SVG drawing with its baseline at y = 0, in points at 10 pt type.

    Blank if it cannot be drawn with every character in place.

    >>> draw_math("<mi>x</mi>")[:4]
    '<svg'
    """
    whole = f'<math display="{_display(own_row)}">{mathml}</math>'
    if missing("".join(ET.fromstring(whole).itertext())):
        return ""
    try:
        drawing: str = _drawer()(whole, size=10, margin=0).svg()
    except Exception:  # as above: what it raises is not settled
        return ""
    return drawing


@cache
def _drawer() -> Any:
    with warnings.catch_warnings():  # the package opens its font in a way that Python 3.11 calls outdated
        warnings.simplefilter("ignore", DeprecationWarning)
        from ziamath.zmath import Math
    return Math


# --- Markdown


@cache
def _reader() -> Callable[[str], list[_Token]]:
    import mistune
    from mistune.plugins.table import table, table_in_list, table_in_quote

    def math(reader: Any) -> None:
        reader.block.register("block_math", _BLOCK_MATH, _read_block_math, before="list")
        reader.block.insert_rule(reader.block.block_quote_rules, "block_math", before="list")
        reader.block.insert_rule(reader.block.list_rules, "block_math", before="list")
        reader.inline.register("inline_math", _INLINE_MATH, _read_inline_math, before="codespan")

    return mistune.create_markdown(renderer="ast", plugins=[table, table_in_quote, table_in_list, math])  # type: ignore


def _read_block_math(block: Any, match: re.Match[str], state: Any) -> int:
    state.append_token({"type": "block_math", "raw": match["math_dollars"] or match["math_environment"]})
    return match.end()


def _read_inline_math(inline: Any, match: re.Match[str], state: Any) -> int:
    own_row = match["math_own_row"]
    token = {"type": "block_math", "raw": own_row} if own_row else {"type": "math", "raw": match["math_in_row"]}
    state.append_token(token)
    return match.end()


def _blocks(tokens: Iterable[_Token]) -> Iterator[Block]:
    for token in tokens:
        kind = token["type"]
        if kind in ("paragraph", "block_text"):
            yield from _paragraph(token["children"])
        elif kind == "heading":
            yield Block("heading", _spans(token["children"]), level=token["attrs"]["level"])
        elif kind == "block_math":
            yield Block("math", (_math(token["raw"], True),))
        elif kind == "list":
            yield from _list(token)
        elif kind == "block_quote":
            yield Block("quote", items=(tuple(_blocks(token["children"])),))
        elif kind in ("block_code", "block_html"):
            yield Block("code", text=token["raw"].rstrip("\n"))
        elif kind == "table":
            yield _table(token)
        elif kind not in ("blank_line", "thematic_break"):
            raise ValueError(f"no block for Markdown of the type {kind}")


def _paragraph(children: list[_Token]) -> Iterator[Block]:
    """A paragraph; a formula in it that asks for a row of its own gets one."""
    run: list[_Token] = []
    for child in children:
        if child["type"] != "block_math":
            run.append(child)
            continue
        if run:
            yield Block("paragraph", _spans(run))
        yield Block("math", (_math(child["raw"], True),))
        run = []
    if run:
        yield Block("paragraph", _spans(run))


def _list(token: _Token) -> Iterator[Block]:
    items = [tuple(_blocks(item["children"])) for item in token["children"]]
    first = token["attrs"].get("start", 1)
    if not token["attrs"]["ordered"] or first == 1:
        yield Block("numbers" if token["attrs"]["ordered"] else "bullets", items=tuple(items))
        return
    # A list that does not start at 1 keeps its numbers as typed, as text.
    for number, item in enumerate(items, first):
        mark = Span("text", f"{number}. ")
        if item and item[0].kind == "paragraph":
            yield replace(item[0], spans=(mark, *item[0].spans))
            yield from item[1:]
        else:
            yield Block("paragraph", (mark,))
            yield from item


def _table(token: _Token) -> Block:
    head, *bodies = token["children"]
    rows = [row for body in bodies for row in body["children"]]
    return Block("table", head=_cells(head), rows=tuple(_cells(row) for row in rows))


def _cells(row: _Token) -> tuple[Spans, ...]:
    return tuple(_spans(cell["children"]) for cell in row["children"])


def _spans(tokens: Iterable[_Token], kind: Any = "text") -> Spans:
    """The spans of inline tokens; neighbours of one kind are joined."""
    spans: list[Span] = []
    for span in _inline(tokens, kind):
        if spans and span.kind == spans[-1].kind and span.kind in ("text", "emphasis", "strong"):
            spans[-1] = Span(span.kind, spans[-1].text + span.text)
        else:
            spans.append(span)
    return tuple(spans)


def _inline(tokens: Iterable[_Token], kind: Any) -> Iterator[Span]:
    for token in tokens:
        what = token["type"]
        if what == "text":
            yield Span(kind, _plain(token["raw"]))
        elif what == "inline_html":
            yield Span(kind, token["raw"])
        elif what in ("softbreak", "linebreak"):
            yield Span(kind, " " if what == "softbreak" else "\n")
        elif what in ("emphasis", "strong"):
            yield from _inline(token["children"], what)
        elif what == "codespan":
            yield Span("code", token["raw"])
        elif what in ("math", "block_math"):
            yield _math(token["raw"], False)
        elif what == "link":
            yield Span("link", _words(token["children"]), href=token["attrs"]["url"])
        elif what == "image":
            alt, path = _words(token["children"]), token["attrs"]["url"]
            yield Span(kind, f"[picture not carried: {f'{alt}, ' if alt else ''}{path}; cure: calc.figure]")
        else:
            raise ValueError(f"no span for Markdown of the type {what}")


def _words(tokens: Iterable[_Token]) -> str:
    return "".join(span.text for span in _inline(tokens, "text"))


def _plain(raw: str) -> str:
    return _ENTITY.sub(lambda match: html.unescape(match[0]), raw)


def _math(latex: str, own_row: bool) -> Span:
    source = latex.strip()
    mathml = set_math(source, own_row)
    return Span("math", source, mathml=mathml, svg=draw_math(mathml, own_row) if mathml else "")


# --- math

# A comment would be dropped without a word, a definition holds beyond the formula: both are shown as source.
_REFUSED = re.compile(r"(?<!\\)(?:\\\\)*%|\\(?:new|renew|provide)command|\\def(?![a-zA-Z])")
_MATHRM = re.compile(r"\\mathrm\{")  # the converter reads \mathrm{d} as the letter alone, \mathrm {d} as upright
_ALIGNED = re.compile(r"(\\(?:begin|end)\{)(?:align|aligned|split|gather\*?|gathered)\}")
_UNNUMBERED = re.compile(r"\\(?:begin|end)\{equation\*?\}")

_CHILDREN = {"mfrac": 2, "mroot": 2, "msub": 2, "msup": 2, "munder": 2, "mover": 2, "msubsup": 3, "munderover": 3}
_TOKENS = {"mi", "mn", "mo", "mtext"}
ELEMENTS = {*_CHILDREN, *_TOKENS, "math", "mrow", "mspace", "msqrt", "mstyle", "mtable", "mtr", "mtd"}
ATTRIBUTES = {
    "stretchy", "fence", "form", "accent", "displaystyle", "scriptlevel", "linethickness", "minsize", "maxsize",
    "columnalign", "columnspacing", "mathvariant", "width",
}  # fmt: skip
_SPACE = re.compile(r"-?0\.\d+em|[0-2](?:\.\d+)?em")
_ORDINARY = "∞∂∇"  # signs that stand for a quantity, not for an operation
_ACCENTS = {"^": "\u02c6", "~": "\u02dc", "\u00af": "\u203e"}
_WIDE = {"^": "\u0302", "~": "~", "\u00af": "\u203e", "\u2015": "\u203e", "\u2192": "\u20d7"}
_LATIN = "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz"
_GREEK = "ΑΒΓΔΕΖΗΘΙΚΛΜΝΞΟΠΡϴΣΤΥΦΧΨΩ∇αβγδεζηθικλμνξοπρςστυφχψω∂ϵϑϰϕϱϖ"


def _letters(first: str, plain: str) -> dict[str, str]:
    return {letter: chr(ord(first) + place) for place, letter in enumerate(plain)}


_VARIANTS = {
    "bold": {"\u00a0": "\u00a0", **_letters("𝐀", _LATIN), **_letters("𝟎", "0123456789")},
    "bold-italic": {"\u00a0": "\u00a0", **_letters("𝑨", _LATIN), **_letters("𝜜", _GREEK)},
}


def _display(own_row: bool) -> str:
    return "block" if own_row else "inline"


def _converted(latex: str, own_row: bool) -> ET.Element:
    from latex2mathml.converter import convert

    tree = ET.fromstring(convert(latex, display=_display(own_row)))
    for element in tree.iter():
        element.tag = element.tag.rpartition("}")[2]
    return tree


def _clean(element: ET.Element) -> None:
    """Bring one element to MathML Core; ValueError if that cannot be done without losing something."""
    tag, text = element.tag, element.text or ""
    if tag not in ELEMENTS or element.attrib.keys() - ATTRIBUTES - {"display", "rowspacing"}:
        raise ValueError(f"{tag} {element.attrib}")
    if len(element) != _CHILDREN.get(tag, len(element)) or (tag in _TOKENS and len(element)):
        raise ValueError(f"{tag} with {len(element)} children")
    if "\\" in text or (tag == "mi" and text in ("{", "}")):
        raise ValueError(f"left over: {text}")
    if tag == "math":
        element.attrib.clear()
    elif tag == "mspace":
        if not _SPACE.fullmatch(element.get("width", "")) or len(element.attrib) > 1:
            raise ValueError(f"space {element.attrib}")
    elif tag == "mtable":
        element.attrib.pop("rowspacing", None)
        if element.attrib.pop("columnspacing", ""):
            element.set("columnspacing", "0em")
    elif tag in ("mover", "munder"):
        _accent(element)
    elif tag in _TOKENS:
        _token(element, text)


def _token(element: ET.Element, text: str) -> None:
    variant = element.attrib.pop("mathvariant", "")
    if variant in _VARIANTS:
        element.text = "".join(_VARIANTS[variant][letter] for letter in text)
    elif variant == "normal" and element.tag == "mi":
        element.set("mathvariant", "normal")
    elif variant and (variant, element.tag) != ("italic", "mi"):
        raise ValueError(f"variant {variant}")
    if element.tag == "mi" and len(text) == 1 and unicodedata.category(text) == "Sm" and text not in _ORDINARY:
        element.tag = "mo"
    elif element.tag == "mo" and text and text in _ORDINARY:
        element.tag = "mi"


def _accent(element: ET.Element) -> None:
    """An accent over one letter keeps its size, one over more is stretched; a line below is a low line."""
    element.attrib.pop("accent", None)
    base, mark = element
    sign = mark.text or ""
    if mark.tag != "mo":
        return
    if element.tag == "munder":
        if sign == "\u2015":
            mark.text, mark.attrib = "_", {"stretchy": "true"}
        return
    if len("".join(base.itertext())) > 1 and sign in _WIDE:
        mark.text, mark.attrib = _WIDE[sign], {"stretchy": "true"}
    elif sign in _ACCENTS or sign in ("\u00a8", "\u02d9"):
        mark.text, mark.attrib = _ACCENTS.get(sign, sign), {"stretchy": "false"}
        element.set("accent", "true")
