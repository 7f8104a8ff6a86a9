"""What the PDF writer must know of a formula's Typst source to set it in a narrow column.

Knows the few constructs that the kit's printer writes: quoted words, bracketed groups, fractions, scripts. Must not
know what a formula means.
"""

from __future__ import annotations

import re

_PIECE = re.compile(r'"(?:[^"\\]|\\.)*"|\\.|[()]|.', re.DOTALL)
_SETS_SMALL = re.compile(r"[_^]")
_KEPT = ("sqrt", "abs", "cases")


def pieces(source: str) -> list[str]:
    """The parts between blanks outside brackets and quotes: a row cannot break inside one.

    >>> pieces('frac(a, b) times (67 thin "ft q")^(0.75)')
    ['frac(a, b)', 'times', '(67 thin "ft q")^(0.75)']
    """
    found, depth = [""], 0
    for piece in _PIECE.findall(source):
        depth += (piece == "(") - (piece == ")")
        if piece.isspace() and depth == 0:
            found.append("")
        else:
            found[-1] += piece
    return [piece for piece in found if piece]


def linear(source: str) -> str:
    """The same formula with quotients on one row and brackets that a row may break in.

    >>> linear('frac(a + b, c) times max(d, e)^(2)')
    '\\\\(a + b\\\\) \\\\/ \\\\(c\\\\) times max \\\\(d, e\\\\)^(2)'
    """
    tokens, out, at = _PIECE.findall(source), list[str](), 0
    while at < len(tokens):
        if tokens[at] != "(":
            out.append(tokens[at])
            at += 1
            continue
        end = _closing(tokens, at)
        inner = "".join(tokens[at + 1 : end])
        word = re.search(r"[A-Za-z]*$", "".join(out))
        name = word[0] if word else ""
        if name == "frac":
            del out[len(out) - len(name) :]
            top, bottom = _arguments(inner)
            out += [rf"\({linear(top)}\) \/ \({linear(bottom)}\)"]
        elif name in _KEPT or "".join(out[-1:]) in ("^", "_"):
            out.append(f"({inner})")
        else:
            out.append(rf"{' ' if name else ''}\({linear(inner)}\)")
        at = end + 1
    return "".join(out)


def nests_scripts(source: str) -> bool:
    """Whether a raised or lowered part holds another one, so that the smaller would be too small at text size.

    >>> nests_scripts("h_n^(x_a)"), nests_scripts("h_n^(x)")
    (True, False)
    """
    tokens = _PIECE.findall(source)
    for at, token in enumerate(tokens[:-1]):
        if token in ("^", "_") and tokens[at + 1] == "(":
            inner = tokens[at + 2 : _closing(tokens, at + 1)]
            if any(_SETS_SMALL.fullmatch(piece) for piece in inner):
                return True
    return False


def _closing(tokens: list[str], opening: int) -> int:
    depth = 0
    for at in range(opening, len(tokens)):
        depth += (tokens[at] == "(") - (tokens[at] == ")")
        if depth == 0:
            return at
    raise ValueError(f"unclosed bracket in {''.join(tokens)!r}")


def _arguments(inner: str) -> tuple[str, str]:
    """The two arguments of a fraction."""
    depth, tokens = 0, _PIECE.findall(inner)
    for at, token in enumerate(tokens):
        depth += (token == "(") - (token == ")")
        if token == "," and depth == 0:
            return "".join(tokens[:at]), "".join(tokens[at + 1 :]).strip()
    raise ValueError(f"one argument in frac({inner})")
