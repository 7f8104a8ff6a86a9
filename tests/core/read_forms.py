"""LaTeX, MathML and Typst forms of a line read back into plain text, so that their meaning can be compared.

Knows what the forms are made of: fractions, powers, roots, brackets, signs, numbers with units. Must not know how the
kit prints: it imports none of it.
"""

from __future__ import annotations

import re
from xml.etree import ElementTree

_LATEX = {
    r"\times": " × ", r"\,": " ", r"\;": " ", r"\ ": " ", r"\le": " ≤ ", r"\ge": " ≥ ", r"\ne": " ≠ ", r"\left": "",
    r"\right": "", r"\cdot": "·",
}  # fmt: skip


def latex(text: str) -> str:
    r"""A LaTeX form as plain text.

    >>> latex(r"\frac{2}{3} \times \left(30\,\mathrm{m}\right)^{0.9}")
    '((2)/(3))  ×  (30 m)^(0.9)'
    """
    found, place = "", 0
    while place < len(text):
        if text.startswith((r"\left|", r"\right|"), place):
            found, place = found + "|", text.index("|", place) + 1
        elif text.startswith(r"\frac", place):
            top, place = _group(text, place + 5)
            bottom, place = _group(text, place)
            found += f"(({latex(top)})/({latex(bottom)}))"
        elif text.startswith(r"\sqrt", place):
            inner, place = _group(text, place + 5)
            found += f"sqrt({latex(inner)})"
        elif text.startswith(r"\mathrm", place):
            inner, place = _group(text, place + 7)
            found += inner
        elif text.startswith(r"{\cdot}", place):
            found, place = found + "·", place + 7
        elif text[place] == "^" and text[place + 1] == "{":
            inner, place = _group(text, place + 1)
            unit = found[-1:].isalpha()
            found += inner.translate(_RAISED) if unit else f"^({latex(inner)})"
        elif text[place] == "\\":
            command = re.match(r"\\([a-z]+|.)", text[place:])
            assert command, text
            found += _LATEX.get(command[0], command[1])
            place += len(command[0])
        else:
            assert text[place] not in "{}", f"{text!r}: a brace that belongs to nothing at {place}"
            found, place = found + text[place], place + 1
    return found


_RAISED = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")


def _group(text: str, place: int) -> tuple[str, int]:
    """What stands between the braces that open at `place`, and the place after them."""
    assert text[place] == "{", f"{text!r}: no group at {place}"
    end = _closing(text, place, "{", "}")
    return text[place + 1 : end], end + 1


def _closing(text: str, place: int, opens: str, closes: str) -> int:
    depth, quoted = 0, False
    for end in range(place, len(text)):
        quoted ^= text[end] == '"'
        depth += 0 if quoted else (text[end] == opens) - (text[end] == closes)
        if not depth:
            return end
    raise AssertionError(f"{text!r}: {opens} at {place} is not closed")


def typst(text: str) -> str:
    """A Typst form as plain text.

    >>> typst('frac(2, 3) times (30 thin "m")^(0.9)')
    '((2)/(3)) × (30 m)^(0.9)'
    """
    text = text.replace(" times ", " × ").replace("\\/", "/").replace("−", "-")
    while match := re.search(r"\bfrac\(", text):
        end = _closing(text, match.end() - 1, "(", ")")
        top, bottom = _halves(text[match.end() : end])
        text = f"{text[: match.start()]}(({top})/({bottom})){text[end + 1 :]}"
    while match := re.search(r"\babs\(", text):
        end = _closing(text, match.end() - 1, "(", ")")
        text = f"{text[: match.start()]}|{text[match.end() : end]}|{text[end + 1 :]}"
    return re.sub(r' thin "([^"]*)"', r" \1", text)


def _halves(text: str) -> tuple[str, str]:
    depth = 0
    for place, sign in enumerate(text):
        depth += (sign == "(") - (sign == ")")
        if sign == "," and not depth:
            return text[:place].strip(), text[place + 1 :].strip()
    raise AssertionError(f"{text!r}: one part only")


def mathml(text: str) -> str:
    """A MathML form as plain text; an error if it is not well-formed.

    >>> mathml("<mrow><mfrac><mrow><mn>2</mn></mrow><mrow><mn>3</mn></mrow></mfrac><mo>×</mo><mn>5</mn></mrow>")
    '((2)/(3)) × 5'
    """
    return _element(ElementTree.fromstring(text.replace("<mspace width='0.2em'/>", "<mtext> </mtext>")))


def _element(node: ElementTree.Element) -> str:
    parts = [_element(child) for child in node]
    match node.tag:
        case "mfrac":
            return f"(({parts[0]})/({parts[1]}))"
        case "msup":
            return f"{parts[0]}^({parts[1]})"
        case "msqrt":
            return f"sqrt({''.join(parts)})"
        case "mo":
            return _sign(node.text or "")
        case "mn" | "mi" | "mtext":
            return node.text or ""
        case "mrow":
            return "".join(parts)
    raise AssertionError(f"element {node.tag} is not read")


def _sign(text: str) -> str:
    if text in "()|,":
        return text
    return {"\u2062": " × ", "\u2061": "", "−": "-"}.get(text, f" {text} ")
