"""The text cells: what Markdown and typed math become, and that nothing typed is lost."""

from __future__ import annotations

import xml.etree.ElementTree as ET

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calckit.report.model import Block, Span
from calckit.report.prose import ATTRIBUTES, ELEMENTS, blocks, draw_math, set_math
from tests.report.sample import HOSTILE


def _words(block: Block) -> str:
    """Everything a block prints, without its layout."""
    spans = [*block.spans, *(span for cell in block.head for span in cell)]
    spans += [span for row in block.rows for cell in row for span in cell]
    inner = [_words(entry) for item in block.items for entry in item]
    return "".join([block.text, *(span.text + span.href for span in spans), *inner])


def _texts(markdown: str) -> list[tuple[str, str]]:
    (block,) = blocks(markdown)
    return [(span.kind, span.text) for span in block.spans]


def test_blocks_of_every_kind() -> None:
    text = """# Title *a*

Words on
two lines.

- dead
- live
    1. first
    2. second

> said

```python
x = 1  # <b>
```

| a | b |
|---|--:|
| 1 | `2` |
"""
    heading, paragraph, bullets, quote, code, table = blocks(text)
    assert (heading.kind, heading.level, [s.text for s in heading.spans]) == ("heading", 1, ["Title ", "a"])
    assert [s.text for s in paragraph.spans] == ["Words on two lines."]
    assert [[entry.kind for entry in item] for item in bullets.items] == [["paragraph"], ["paragraph", "numbers"]]
    assert (quote.kind, quote.items[0][0].spans[0].text) == ("quote", "said")
    assert (code.kind, code.text) == ("code", "x = 1  # <b>")
    assert [_words(Block("paragraph", cell)) for cell in table.head] == ["a", "b"]
    assert [[span.kind for cell in row for span in cell] for row in table.rows] == [["text", "code"]]


def test_spans_of_every_kind() -> None:
    assert _texts("a *b* **c** `d` [e](f.html) $g$") == [
        ("text", "a "), ("emphasis", "b"), ("text", " "), ("strong", "c"), ("text", " "), ("code", "d"), ("text", " "),
        ("link", "e"), ("text", " "), ("math", "g"),
    ]  # fmt: skip
    assert blocks("[e](https://a.b/c)")[0].spans == (Span("link", "e", href="https://a.b/c"),)
    assert _texts("one  \ntwo") == [("text", "one\ntwo")]


def test_html_is_shown_as_typed() -> None:
    assert _texts('a <b onclick="x()">bold</b> <!-- kept --> c') == [
        ("text", 'a <b onclick="x()">bold</b> <!-- kept --> c')
    ]
    (block,) = blocks("<script>\nalert(1)\n</script>")
    assert (block.kind, block.text) == ("code", "<script>\nalert(1)\n</script>")
    (block,) = blocks('<div style="x">\n*a*\n</div>')
    assert (block.kind, block.text) == ("code", '<div style="x">\n*a*\n</div>')


def test_signs_of_other_languages_pass_unchanged() -> None:
    typed = '#read("x") {{ 7*7 }} {% raw %} @line-1 // 50 % & a_b_c θ ≤ Δ "q" \'q\' \\frac'
    assert "".join(text for _, text in _texts(typed)) == typed
    in_code = HOSTILE.replace("`", "")
    assert _texts(f"`{in_code}`") == [("code", in_code)]
    assert _texts("&lt;b&gt; &amp; &#65; &copy R&D") == [("text", "<b> & A &copy R&D")]


def test_a_picture_is_named_and_not_fetched() -> None:
    (kind, text), *_ = _texts("![the frame](https://a.b/c.png)")
    assert kind == "text"
    assert text == "[picture not carried: the frame, https://a.b/c.png; cure: calc.figure]"


def test_money_is_not_math() -> None:
    assert _texts("from $5 to $10, or $ 3") == [("text", "from $5 to $10, or $ 3")]
    assert _texts(r"\$5 and \$6") == [("text", "$5 and $6")]
    assert _texts("`$x$` costs $7") == [("code", "$x$"), ("text", " costs $7")]


def test_math_in_the_row_and_on_its_own() -> None:
    assert _texts("so $T_a$ and $a*b$ and $c*d$.") == [
        ("text", "so "), ("math", "T_a"), ("text", " and "), ("math", "a*b"), ("text", " and "), ("math", "c*d"),
        ("text", "."),
    ]  # fmt: skip
    for text in ("$$V = C_s W$$", "$$\nV = C_s W\n$$", "  $$ V = C_s W $$", "before $$V = C_s W$$ after"):
        found = [block for block in blocks(text) if block.kind == "math"]
        assert [block.spans[0].text for block in found] == ["V = C_s W"], text
    kinds = [block.kind for block in blocks("before $$x$$ after\n\n- item\n\n  $$y$$\n\n> $$z$$")]
    assert kinds == ["paragraph", "math", "paragraph", "bullets", "quote"]
    (block,) = blocks("\\begin{align}\na &= b \\\\\nc &= d\n\\end{align}")
    assert block.kind == "math"
    assert block.spans[0].mathml.count("<mtr>") == 2


def test_a_list_keeps_the_numbers_typed() -> None:
    assert [_words(block) for block in blocks("3. three\n4. four")] == ["3. three", "4. four"]
    assert blocks("1. one\n2. two")[0].kind == "numbers"


@pytest.mark.parametrize(
    ("latex", "mathml"),
    [
        (r"\frac{S_{DS}}{R/I_e}", "<mfrac>"),
        (r"\mathrm{d}x", '<mi mathvariant="normal">d</mi>'),
        (r"a \pm b", "<mo>±</mo>"),
        (r"\infty", "<mi>∞</mi>"),
        (r"\boldsymbol{\phi}", "<mi>𝝓</mi>"),
        (r"\mathbf{Ku}", "<mi>𝐊</mi><mi>𝐮</mi>"),
        (r"\ddot{u}", '<mover accent="true">'),
        (r"\overline{abc}", '<mo stretchy="true">‾</mo>'),
        (r"\begin{aligned}a&=b\\c&=d\end{aligned}", '<mtd columnalign="right"><mi>a</mi></mtd>'),
        (r"a=b\\c=d", "<mtr>"),
        (r"\text{if } x<0", "<mo>&lt;</mo>"),
        (r"50\,\%", "<mi>%</mi>"),
    ],
)
def test_math_that_is_set(latex: str, mathml: str) -> None:
    made = set_math(latex, own_row=True)
    assert mathml in made
    assert draw_math(made, own_row=True).startswith("<svg")


@pytest.mark.parametrize(
    "latex",
    [
        r"\unknown{x}", r"\SI{5}{kN}", r"\frac{a", "}", "{", "", "a & b", r"\href{javascript:x}{y}", r"\boxed{x}",
        r"\color{red}{x}", r"\hspace{-20cm}x", r"\not=", r"\newcommand{\x}{y}\x",
        r"5 % of W",  # LaTeX would drop the rest as a comment
    ],
)  # fmt: skip
def test_math_that_cannot_be_set_is_shown_as_source(latex: str) -> None:
    assert set_math(latex) == ""
    if latex.strip():
        (block,) = blocks(f"$${latex}$$")
        assert block.spans == (Span("math", latex),)


def test_a_character_that_the_drawing_lacks_leaves_the_source() -> None:
    (block,) = blocks(r"$$\text{漢} + 1$$")
    span = block.spans[0]
    assert "漢" in span.mathml
    assert span.svg == ""


def test_the_drawing_stands_on_its_baseline() -> None:
    (block,) = blocks("so $x_2$")
    svg = ET.fromstring(block.spans[1].svg)
    _, top, width, height = map(float, svg.attrib["viewBox"].split())
    assert top < 0 < top + height, "the subscript reaches below the baseline, the letter above it"
    assert 8 < width < 14, "points at 10 pt type"


_LATEX = st.sampled_from(
    [*"abxT01{}^_&%$#~ ()|'<>=+-", "{x}", "{y}", r"\\", r"\frac", r"\sqrt", r"\left(", r"\right)", r"\text", r"\mathrm",
     r"\begin{cases}", r"\end{cases}", r"\hat", r"\sum", "漢"]
)  # fmt: skip


@settings(max_examples=300, deadline=2000)
@given(st.lists(_LATEX, max_size=14).map("".join))
def test_whatever_is_typed_the_math_is_core_mathml_or_nothing(latex: str) -> None:
    tree = ET.fromstring(f"<math>{set_math(latex)}</math>")
    for element in tree.iter():
        assert element.tag in ELEMENTS
        assert element.attrib.keys() <= ATTRIBUTES


@settings(max_examples=200, deadline=2000)
@given(st.text(st.sampled_from("ab \n*_`$<>[]()!#-|1.&;\\{}"), max_size=60))
def test_whatever_is_typed_no_word_is_lost(text: str) -> None:
    typed = f"w0 {text} w1"
    printed = "".join(_words(block) for block in blocks(typed))
    assert "w0" in printed
    assert "w1" in printed
