"""Reads an issued PDF as a stranger would: where each run of text stands, how large it is and what it is tagged as.

Uses pypdf for the objects and the page description operators of ISO 32000-1, 9.4 (text) and 14.7 (structure).
"""

from __future__ import annotations

import io
import re
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from pypdf import PdfReader
from pypdf.generic import ContentStream

Matrix = tuple[float, float, float, float, float, float]
IDENTITY: Matrix = (1, 0, 0, 1, 0, 0)


@dataclass(frozen=True)
class Run:
    """A run of text: its ends and base line in points from the lower left corner, and the tags above it."""

    text: str
    x0: float
    x1: float
    y: float
    size: float
    tags: tuple[str, ...]


class Sheets:
    """The sheets of a PDF file."""

    def __init__(self, data: bytes) -> None:
        self.reader = PdfReader(io.BytesIO(data))
        self.catalog: Any = self.reader.trailer["/Root"]
        self.tree: Any = self.catalog["/StructTreeRoot"]
        self._parents = dict(_numbers(self.tree["/ParentTree"]))
        self._fonts: dict[int, tuple[dict[int, float], float, dict[int, str]]] = {}
        self._read: dict[int, list[Run]] = {}

    def __len__(self) -> int:
        return len(self.reader.pages)

    def text(self) -> str:
        """All text without blanks and line ends, so that it does not matter where a row was broken."""
        return "".join("".join(page.extract_text().split()) for page in self.reader.pages)

    def elements(self, kind: str) -> list[Any]:
        """The structure elements of one kind."""
        return [element for element in _walk(self.tree) if element.get("/S") == f"/{kind}"]

    def runs(self, number: int) -> list[Run]:
        """The runs of text on a sheet, in the order in which they are drawn."""
        if number not in self._read:
            self._read[number] = list(self._runs(self.reader.pages[number - 1]))
        return self._read[number]

    def body(self, number: int) -> list[Run]:
        """The runs that are neither title block nor footer."""
        return [run for run in self.runs(number) if run.tags != ("Artifact",)]

    def _runs(self, page: Any) -> Iterator[Run]:
        fonts = page["/Resources"]["/Font"]
        elements = self._parents.get(page.get("/StructParents"))
        saved: list[Matrix] = []
        marks: list[tuple[str, ...]] = []
        ctm, text = IDENTITY, IDENTITY
        font: Any = None
        size = 0.0
        for operands, operator in ContentStream(page.get_contents(), self.reader).operations:
            if operator == b"q":
                saved.append(ctm)
            elif operator == b"Q":
                ctm = saved.pop()
            elif operator == b"cm":
                ctm = product(matrix_of(operands), ctm)
            elif operator in (b"BDC", b"BMC"):
                marks.append(_tags(operands, elements))
            elif operator == b"EMC":
                marks.pop()
            elif operator == b"BT":
                text = IDENTITY
            elif operator == b"Tf":
                font, size = self._font(fonts.raw_get(operands[0])), float(operands[1])
            elif operator == b"Tm":
                text = matrix_of(operands)
            elif operator in (b"Td", b"TD", b"T*", b"'", b'"', b"Tc", b"Tw", b"Tz", b"TL", b"Ts"):
                raise AssertionError(f"operator {operator!r} is not read here")
            elif operator in (b"Tj", b"TJ"):
                pieces = operands[0] if operator == b"TJ" else operands
                words, width, inked = _shown(pieces, font)
                whole = product(text, ctm)
                x, y = whole[4], whole[5]
                text = product((1, 0, 0, 1, width * size, 0), text)
                scale = abs(whole[0])
                if words.strip():
                    yield Run(words, x, x + inked * size * scale, y, size * scale, marks[-1] if marks else ())

    def _font(self, reference: Any) -> Any:
        if reference.idnum not in self._fonts:
            font = reference.get_object()
            inner = font["/DescendantFonts"][0].get_object()
            letters = _letters(font["/ToUnicode"].get_data().decode())
            self._fonts[reference.idnum] = (_widths(inner.get("/W", [])), float(inner.get("/DW", 1000)), letters)
        return self._fonts[reference.idnum]


def _shown(pieces: Any, font: Any) -> tuple[str, float, float]:
    """The text of a show operator, its width and its width without blanks at the end, over the type size."""
    widths, default, letters = font
    words, width, inked = "", 0.0, 0.0
    for piece in pieces:
        if isinstance(piece, int | float):
            width -= float(piece) / 1000
            continue
        raw = piece.original_bytes
        for at in range(0, len(raw), 2):
            code = raw[at] * 256 + raw[at + 1]
            words += letters.get(code, "")
            width += widths.get(code, default) / 1000
            inked = width if words[-1:].strip() else inked
    return words, width, inked


def _tags(operands: Any, elements: Any) -> tuple[str, ...]:
    if operands[0] == "/Artifact":
        return ("Artifact",)
    properties = operands[1] if len(operands) > 1 else {}
    if elements is None or not hasattr(properties, "get") or "/MCID" not in properties:
        return ()
    found: list[str] = []
    element = elements[properties["/MCID"]].get_object()
    while "/S" in element:
        found.append(element["/S"][1:])
        element = element["/P"].get_object()
    return tuple(found)


def _walk(element: Any) -> Iterator[Any]:
    yield element
    children = element.get("/K", [])
    for child in children if isinstance(children, list) else [children]:
        inner = child.get_object()
        if hasattr(inner, "get") and "/S" in inner:
            yield from _walk(inner)


def _numbers(node: Any) -> Iterator[tuple[int, Any]]:
    """The entries of a number tree."""
    entries = node.get("/Nums", [])
    for key, value in zip(entries[::2], entries[1::2], strict=True):
        yield int(key), value.get_object()
    for child in node.get("/Kids", []):
        yield from _numbers(child.get_object())


def _widths(entries: Any) -> dict[int, float]:
    found: dict[int, float] = {}
    at = 0
    while at < len(entries):
        first, second = int(entries[at]), entries[at + 1]
        if isinstance(second, list):
            found |= {first + place: float(width) for place, width in enumerate(second)}
            at += 2
        else:
            found |= dict.fromkeys(range(first, int(second) + 1), float(entries[at + 2]))
            at += 3
    return found


def _letters(cmap: str) -> dict[int, str]:
    found: dict[int, str] = {}
    for block in re.findall(r"beginbfchar(.*?)endbfchar", cmap, re.DOTALL):
        for code, text in re.findall(r"<([0-9A-Fa-f]+)>\s*<([0-9A-Fa-f]+)>", block):
            found[int(code, 16)] = bytes.fromhex(text).decode("utf-16-be")
    for block in re.findall(r"beginbfrange(.*?)endbfrange", cmap, re.DOTALL):
        for low, high, text in re.findall(r"<([0-9A-Fa-f]+)>\s*<([0-9A-Fa-f]+)>\s*<([0-9A-Fa-f]+)>", block):
            for place, code in enumerate(range(int(low, 16), int(high, 16) + 1)):
                found[code] = chr(int(text, 16) + place)
    return found


def matrix_of(operands: Any) -> Matrix:
    a, b, c, d, e, f = (float(operand) for operand in operands)
    return (a, b, c, d, e, f)


def product(m: Matrix, n: Matrix) -> Matrix:
    return (
        m[0] * n[0] + m[1] * n[2], m[0] * n[1] + m[1] * n[3],
        m[2] * n[0] + m[3] * n[2], m[2] * n[1] + m[3] * n[3],
        m[4] * n[0] + m[5] * n[2] + n[4], m[4] * n[1] + m[5] * n[3] + n[5],
    )  # fmt: skip
