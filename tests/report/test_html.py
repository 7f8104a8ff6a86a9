"""The HTML report: complete, safe, self-contained, well-formed, and right in a browser without network."""

from __future__ import annotations

import base64
import io
import re
import shutil
import subprocess
import sys
import xml.etree.ElementTree as ET
from dataclasses import replace
from html.parser import HTMLParser
from http.server import BaseHTTPRequestHandler, ThreadingHTTPServer
from pathlib import Path
from threading import Thread
from typing import Any

import pytest
from jinja2 import UndefinedError

from calckit.core.record import Record
from calckit.report import fonts, html, prose, seal, view
from calckit.report.attachments import Attachment
from calckit.report.model import Block, LineView, ProseView, Span, Typeset, View
from tests.report.sample import HOSTILE, content, figures, record

FILES = (
    Attachment("demo.ipynb", b'{"cells": []}', "application/x-ipynb+json", "Source notebook", "source"),
    Attachment("file-a%2Fb.csv", b"level,w_x\n5,\xc3\xa9\n", "text/csv", 'File "a/b.csv"', "data"),
)
_VOID = {"meta", "br", "col", "img", "wbr", "hr", "link", "input"}
_ADDRESSES = {"href", "src", "srcset", "action", "formaction", "data", "poster", "background", "cite", "xlink:href"}


class _Page(HTMLParser):
    """A page taken apart: elements with their attributes, running text, and what is wrong with its nesting."""

    def __init__(self, page: bytes) -> None:
        super().__init__()
        self.stack: list[str] = []
        self.elements: list[tuple[str, dict[str, str]]] = []
        self.faults: list[str] = []
        self.text = ""
        self.feed(page.decode())
        self.close()
        self.faults += [f"<{tag}> is not closed" for tag in self.stack]

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.elements.append((tag, {name: value or "" for name, value in attrs}))
        if len(dict(attrs)) != len(attrs):
            self.faults.append(f"<{tag}> has an attribute twice")
        if tag not in _VOID:
            self.stack.append(tag)

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.elements.append((tag, {name: value or "" for name, value in attrs}))

    def handle_endtag(self, tag: str) -> None:
        if not self.stack or self.stack[-1] != tag:
            self.faults.append(f"</{tag}> closes {self.stack[-1:]}")
        else:
            self.stack.pop()

    def handle_data(self, data: str) -> None:
        if "style" not in self.stack:
            self.text += data

    def all(self, tag: str) -> list[dict[str, str]]:
        return [attrs for name, attrs in self.elements if name == tag]


def _view(made: Record | None = None) -> View:
    return view.build(made or record(), content())


def _render(model: View, **other: Any) -> bytes:
    return html.render(model, **({"figures": figures(), "attachments": FILES} | other))


@pytest.fixture(scope="module")
def page() -> bytes:
    return _render(_view())


@pytest.fixture(scope="module")
def parsed(page: bytes) -> _Page:
    return _Page(page)


def _with_prose(model: View, *blocks: Block) -> View:
    first = model.sections[0]
    changed = replace(first, items=(*first.items, ProseView(blocks)))
    return replace(model, sections=(changed, *model.sections[1:]))


# --- what stands in it


def test_every_line_with_its_source_and_result_stands_in_the_text(parsed: _Page) -> None:
    rows = {attrs["id"] for attrs in parsed.all("tr") if attrs.get("id", "").startswith("line-")}
    lines = [item for section in _view().sections for item in section.items if isinstance(item, LineView)]
    assert rows == {f"line-{line.n}" for line in lines} == {f"line-{line.n}" for line in record().lines}
    for line in lines:
        for text in (line.source, line.confirmation, line.meaning, line.text, line.detail, line.shown, line.missing):
            assert text in parsed.text, (line.id, text)


def test_tables_figures_summaries_and_lists_stand_in_the_text(parsed: _Page) -> None:
    model = _view()
    for table in record().tables:
        assert table.title in parsed.text
        assert all(cell in parsed.text for row in table.shown for cell in row)
    assert [attrs["alt"] for attrs in parsed.all("img")] == [figure.alt for figure in record().figures]
    for text in (*(item.text for item in record().open_items), *model.cautions, *model.field_of_use, *model.not_covered,
                 model.software.source, model.software.inputs, model.software.lines, model.short_hash):  # fmt: skip
        assert text in parsed.text, text
    for summary in (*model.answer, *model.drawings):
        assert all(label in parsed.text for label, _ in summary.rows)
    assert all(reference.title in parsed.text for reference in model.references)


def test_order_of_the_parts(parsed: _Page) -> None:
    ids = [attrs["id"] for _, attrs in parsed.elements if "id" in attrs]
    parts = ["answer", "open", "contents", "criteria", "assumptions", "section-1", "input-list", "symbols",
             "references", "software", "files", "use"]  # fmt: skip
    assert [id_ for id_ in ids if id_ in parts] == parts
    assert len(ids) == len(set(ids))


def test_links_inside_the_file_reach_their_targets(parsed: _Page) -> None:
    ids = {attrs["id"] for _, attrs in parsed.elements if "id" in attrs}
    targets = {attrs["href"][1:] for attrs in parsed.all("a") if attrs["href"].startswith("#")}
    assert targets <= ids
    assert {f"line-{record().line(id_).n}" for id_ in ("X.C_s", "X.V", "h_n")} <= targets


def test_a_computed_line_is_stacked(page: bytes) -> None:
    number = record().line("X.T_a").n
    row = re.search(rf'<tr id="line-{number}">.*?</tr>', page.decode(), re.S)
    assert row is not None
    rights = re.findall(r'<span class="right">.*?</span>', row[0], re.S)
    assert len(rights) == 2
    assert "C_t × h_n^x" in rights[0]
    assert "0.028 × (67 ft)^0.8" in rights[1]
    assert '<td data-column="Result:">' in row[0].split(rights[1])[1]


def test_a_preliminary_issue_has_fields_in_place_of_the_clear_space() -> None:
    assert b'class="seal-space"' in _render(_view())
    early = _render(_view(record(status="preliminary")))
    assert b'class="seal-space"' not in early
    assert "License number" in _Page(early).text


def test_attachments_are_downloads_with_the_same_bytes(parsed: _Page) -> None:
    links = {attrs["download"]: attrs["href"] for attrs in parsed.all("a") if "download" in attrs}
    for file in FILES:
        head, _, body = links[file.name].partition(",")
        assert head == f"data:{file.media_type};base64"
        assert base64.b64decode(body, validate=True) == file.data
        assert file.description in parsed.text


def test_the_seal_finds_its_one_place(page: bytes) -> None:
    assert page.count(seal.PLACEHOLDER.encode()) == 1
    assert _Page(page).all("meta")[-1]["content"] == seal.PLACEHOLDER
    assert seal.check(seal.apply(page)).state == "intact"


# --- safe, self-contained, well-formed


def test_no_script_and_nothing_to_fetch(page: bytes, parsed: _Page) -> None:
    assert not {tag for tag, _ in parsed.elements} & {"script", "iframe", "object", "embed", "link", "base", "form"}
    for tag, attrs in parsed.elements:
        assert not [name for name in attrs if name.startswith("on")], tag
        for name in attrs.keys() & _ADDRESSES:
            assert attrs[name].startswith("#" if "download" not in attrs and name == "href" else "data:"), attrs[name]
    style = page.decode().partition("<style>")[2].partition("</style>")[0]
    assert re.findall(r"url\((.{6})", style) == ['"data:']
    assert "@import" not in style


def test_the_security_policy_forbids_every_fetch(parsed: _Page) -> None:
    policy = next(attrs["content"] for attrs in parsed.all("meta") if "http-equiv" in attrs)
    assert policy.split("; ") == [
        "default-src 'none'", "style-src 'unsafe-inline'", "img-src data:", "font-src data:", "base-uri 'none'",
        "form-action 'none'",
    ]  # fmt: skip


def test_well_formed_with_title_author_and_language(parsed: _Page) -> None:
    assert parsed.faults == []
    assert parsed.all("html") == [{"lang": "en"}]
    assert {"name": "author", "content": "J. Doe"} in parsed.all("meta")
    assert "C-207 - Lateral seismic forces - Quarry Road Library (demonstration)" in parsed.text


def test_tables_have_real_headers_and_pictures_words(parsed: _Page) -> None:
    assert all(attrs.get("scope") in ("row", "col", "colgroup") for attrs in parsed.all("th"))
    assert all(attrs["alt"].strip() for attrs in parsed.all("img"))
    for attrs in parsed.all("math"):
        assert "alttext" in attrs or attrs.keys() <= {"displaystyle"}


def test_every_formula_is_well_formed_xml(page: bytes) -> None:
    formulas = re.findall(r"<math[ >].*?</math>", page.decode(), re.S)
    assert len(formulas) > 100
    for formula in formulas:
        assert all(element.tag in prose.ELEMENTS for element in ET.fromstring(formula).iter())


def test_hostile_texts_appear_as_typed(parsed: _Page) -> None:
    assert parsed.text.count(HOSTILE) >= 4
    assert HOSTILE in [attrs["alt"].removeprefix("Story shears of both directions. ") for attrs in parsed.all("img")]


def test_hostile_texts_in_the_title_block_stay_text() -> None:
    hostile = HOSTILE + '\n</style></title><b onclick="x">" \\'
    fields = ("project", "location", "number", "subject", "revision", "status", "purpose", "firm", "prepared_by")
    made = _Page(_render(_view(record(**dict.fromkeys(fields, hostile)))))
    assert made.faults == []
    assert made.text.count(hostile) >= len(fields)
    assert not made.all("b")
    assert {"name": "author", "content": hostile} in made.all("meta")


def test_typed_markdown_of_every_kind() -> None:
    text = "# <i>\n\n> a **b** [c](javascript:x) `<u>`\n\n- $\\frac12$\n- $\\nope$\n\n$$\\sum$$\n\n"
    text += "|x|\n|-|\n|$y$|\n\n$$\\no$$"
    made = _render(_with_prose(_view(), *prose.blocks(text)))
    page = _Page(made)
    assert page.faults == []
    assert not page.all("u") and not page.all("i")
    for words in ("<i>", "c (javascript:x)", "<u>", r"$\nope$", r"$$\no$$"):
        assert words in page.text
    assert b'<math alttext="\\frac12"><mrow><mfrac>' in made
    assert b'<math display="block" alttext="\\sum">' in made


# --- faults are reported, not printed


@pytest.mark.parametrize("mathml", ["<mrow>", "<script>x</script>", '<mi onclick="x">a</mi>', "<mi><a href='x'/></mi>"])
def test_a_formula_that_is_no_mathml_is_refused(mathml: str) -> None:
    span = Span("math", "x", mathml)
    with pytest.raises(ValueError, match="MathML"):
        _render(_with_prose(_view(), Block("paragraph", (span,))))


def test_a_missing_figure_is_refused() -> None:
    with pytest.raises(ValueError, match=r"figure file 'elevation\.svg' is not there; there are: shears\.svg"):
        _render(_view(), figures={"shears.svg": b"<svg/>"})


def test_missing_data_raises_and_prints_no_blank() -> None:
    class Lacking:
        def __init__(self, model: View) -> None:
            self.__dict__ = {name: getattr(model, name) for name in model.__dataclass_fields__ if name != "criteria"}

    with pytest.raises(UndefinedError, match="criteria"):
        html.template("report.html.j2").render(
            view=Lacking(_view()), notices=(), figures=html._Pictures(figures()), attachments=(), enclosed=(),
            placeholder="x",
        )
    blank = replace(_view(), short_hash=None)  # type: ignore[arg-type]
    with pytest.raises(ValueError, match="holds None"):
        _render(blank)


def test_a_character_outside_the_math_font_is_reported() -> None:
    assert html.missing_glyphs(_view()) == []
    model = _with_prose(_view(), Block("paragraph", (Span("math", r"\text{漢}", "<mtext>漢</mtext>"),)))
    (said,) = html.missing_glyphs(model)
    assert said == r"The math font of this file lacks 漢 (U+6F22), in the formula \text{漢}"
    text = _Page(_render(model)).text
    assert said in text
    assert text.count("漢") > said.count("漢"), "the formula itself still stands in its place"


# --- the font


def test_the_font_holds_what_it_says_and_its_license() -> None:
    from fontTools.ttLib import TTFont

    font = TTFont(io.BytesIO(fonts.math_font()))
    assert {ord(character) for character in fonts.CHARACTERS} <= font.getBestCmap().keys()
    assert "MATH" in font
    assert "SIL Open Font License" in font["name"].getDebugName(13)
    assert len(fonts.math_font()) < 80_000


def test_upright_letters_of_the_subset_have_their_italics() -> None:
    # MathML draws a single letter in <mi> with the italic letter of the same name.
    assert {chr(0x1D434 + n) for n in range(26) if n != 33} <= fonts.CHARACTERS
    assert "\u210e" in fonts.CHARACTERS, "the italic h is an older character"
    assert {chr(0x1D6FC + n) for n in range(25)} <= fonts.CHARACTERS


# --- long formulas


def _typeset(mathml: str, plain: str) -> Typeset:
    return Typeset(plain, "", f"<mrow>{mathml}</mrow>", "")


def test_a_long_sum_may_be_broken_before_its_signs() -> None:
    terms = "<mo>+</mo>".join(f"<mn>10{n}</mn><mo>×</mo><mi>x</mi>" for n in range(9))
    made = str(html._formula(_typeset(terms, "p" * 60)))
    pieces = made.split("<wbr>")
    assert len(pieces) == 9
    assert all(piece.startswith('<math displaystyle="true"><mo form="infix">+</mo>') for piece in pieces[1:])
    text = "".join(ET.fromstring(made.replace("<wbr>", "")).itertext())
    assert text == "+".join(f"10{n}×x" for n in range(9))
    assert "<wbr>" not in html._formula(_typeset(terms, "short"))


def test_a_long_fraction_goes_on_one_row_in_brackets() -> None:
    top, bottom = "<mi>a</mi>", "<mo>+</mo>".join(f"<mn>1234567{n}</mn>" for n in range(8))
    fraction = f"<mfrac><mrow>{top}</mrow><mrow>{bottom}</mrow></mfrac><mo>×</mo><mi>V</mi>"
    made = str(html._formula(_typeset(fraction, "p" * 90)))
    text = "".join(ET.fromstring(made.replace("<wbr>", "")).itertext())
    assert text == "(a)/(" + "+".join(f"1234567{n}" for n in range(8)) + ")×V"
    short = "<mfrac><mi>a</mi><mi>b</mi></mfrac>"
    assert short in html._formula(_typeset(short, "p" * 90))


def test_a_leading_minus_is_no_break() -> None:
    terms = "<mo>−</mo><mn>1</mn>" + "<mo>+</mo><mrow><mo>(</mo><mo>−</mo><mn>2</mn><mo>)</mo></mrow>" * 3
    pieces = str(html._formula(_typeset(terms, "p" * 60))).split("<wbr>")
    assert ["".join(re.findall(r">([^<]+)<", piece)) for piece in pieces] == ["−1", "+(−2)", "+(−2)", "+(−2)"]


# --- the same bytes


def test_the_same_bytes_in_another_process(page: bytes, tmp_path: Path) -> None:
    code = (
        "from pathlib import Path; from tests.report.test_html import _render, _view; import sys;"
        "Path(sys.argv[1]).write_bytes(_render(_view()))"
    )
    out = tmp_path / "again.html"
    root = Path(html.__file__).parents[2]
    subprocess.run(
        [sys.executable, "-c", code, str(out)],
        check=True,
        cwd=root,
        env={"PYTHONHASHSEED": "7", "PYTHONPATH": str(root)},
    )
    assert out.read_bytes() == page


# --- in a browser


_CHROMIUM = shutil.which("chromium") or shutil.which("chromium-browser") or shutil.which("google-chrome")
in_browser = pytest.mark.skipif(_CHROMIUM is None, reason="no Chromium here: the page is not looked at in a browser")


def _chromium(tmp_path: Path, page: bytes, *options: str) -> str:
    (tmp_path / "page.html").write_bytes(page)
    command = [
        str(_CHROMIUM), "--headless", "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run",
        "--disable-sync", "--disable-background-networking", "--disable-component-update",
        f"--user-data-dir={tmp_path / 'profile'}", *options, str(tmp_path / "page.html"),
    ]  # fmt: skip
    return subprocess.run(command, check=True, capture_output=True, text=True, timeout=120).stdout


@pytest.fixture(scope="module")
def printed(page: bytes, tmp_path_factory: pytest.TempPathFactory) -> Any:
    from pypdf import PdfReader

    folder = tmp_path_factory.mktemp("printed")
    _chromium(folder, page, "--no-pdf-header-footer", f"--print-to-pdf={folder / 'page.pdf'}")
    return PdfReader(folder / "page.pdf")


@in_browser
def test_sheets_are_numbered_and_carry_the_title_block(printed: Any) -> None:
    count = len(printed.pages)
    assert count > 5
    for number, sheet in enumerate(printed.pages, 1):
        text = re.sub(r"\s+", " ", sheet.extract_text())
        for words in (f"Sheet {number} of {count}", "Quarry Road Library (demonstration), Demonstration site",
                      "Calculation C-207, revision B", "Status: for check", "Prepared by J. Doe", "Checked by",
                      "Engineer of record"):  # fmt: skip
            assert words in text, number
        assert len(text) > 320, f"sheet {number} holds nothing but its title block"
        assert [float(x) for x in sheet.mediabox[2:]] == [612, 792]


@in_browser
def test_answer_is_on_sheet_two_and_cover_alone_on_one(printed: Any) -> None:
    first, second = (printed.pages[n].extract_text() for n in (0, 1))
    assert "Sign-off" in first and "Governing results" not in first
    assert "Governing results" in second and "Seismic data for the drawings" in second


@in_browser
def test_printed_type_is_large_enough_and_inside_the_margins(printed: Any) -> None:
    found: list[tuple[float, float, str, bool]] = []

    def visit(text: str, cm: list[float], tm: list[float], font: Any, size: float) -> None:
        if text.strip():
            scale = abs(cm[3]) * abs(tm[3]) * size
            x = cm[0] * tm[4] + cm[4]
            math = "STIX" in str((font or {}).get("/BaseFont", ""))
            found.append((round(scale, 2), x, text.strip(), math))

    for sheet in printed.pages:
        sheet.extract_text(visitor_text=visit)
    words = [entry for entry in found if not entry[3]]
    formulas = [entry for entry in found if entry[3]]
    assert len(words) > 500 and len(formulas) > 100
    assert min(words)[0] >= 7.99, min(words)
    assert min(formulas)[0] >= 5.5, min(formulas)
    assert min(entry[1] for entry in found) > 19 / 25.4 * 72 - 1
    assert max(entry[1] for entry in found) < 612 - 16 / 25.4 * 72 - 1


@in_browser
@pytest.mark.parametrize("guarded", [True, False])
def test_the_policy_of_the_page_stops_a_fetch(page: bytes, tmp_path: Path, guarded: bool) -> None:
    asked: list[str] = []

    class Listener(BaseHTTPRequestHandler):
        def do_GET(self) -> None:
            asked.append(self.path)
            self.send_error(404)

        def log_message(self, format: str, *args: object) -> None:
            pass

    with ThreadingHTTPServer(("127.0.0.1", 0), Listener) as server:
        Thread(target=server.serve_forever, daemon=True).start()
        address = f"http://127.0.0.1:{server.server_address[1]}"
        fetch = f'<img src="{address}/picture" alt="x"><script src="{address}/script"></script></body>'
        tampered = page.replace(b"</body>", fetch.encode())
        if not guarded:
            tampered = tampered.replace(b"Content-Security-Policy", b"none")
        _chromium(tmp_path, tampered, "--dump-dom")
        server.shutdown()
    # Without the policy the browser asks for both: the listener works.
    assert sorted(asked) == ([] if guarded else ["/picture", "/script"])
