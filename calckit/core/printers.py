"""How each of the four printed forms writes its pieces: plain text, LaTeX, MathML, Typst.

Knows the spelling of symbols, numbers and signs in each form. Must not know how an expression is laid out.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from typing import Any
from xml.sax.saxutils import escape

import sympy

from calckit import units
from calckit.core.layout import Form, Operands
from calckit.core.nodes import Env
from calckit.core.symbol import GREEK, Symbol


def _upright(text: str) -> bool:
    return not (len(text) == 1 and text.isalpha())


class Plain(Form):
    """Plain text: what alternative texts and terminals show."""

    times = "×"
    beside = " × "
    minus = "-"
    stacked = False

    def atom(self, stem: str, subscript: str) -> str:
        return GREEK.get(stem, stem) + (f"_{subscript}" if subscript else "")

    def numeral(self, text: str, unit: str) -> str:
        return f"{text} {units.shown(unit)}".rstrip()

    def word(self, text: str) -> str:
        return text

    def power(self, base: str, exponent: str) -> str:
        return f"{base}^{exponent}"

    def root(self, inner: str) -> str:
        return f"sqrt({inner})"

    def summed(self, under: str, inner: str) -> str:
        return f"Σ {inner}" if not under else f"Σ({under}) {inner}"

    def cases(self, branches: list[tuple[str, str]]) -> str:
        return "; ".join(f"{value} if {when}" if when else f"{value} otherwise" for value, when in branches)


class Latex(Form):
    """LaTeX that MathJax and KaTeX both know."""

    times = r"\times"
    beside = r"\,"
    minus = "-"

    def atom(self, stem: str, subscript: str) -> str:
        letter = f"\\{stem}" if stem in GREEK else stem
        base = rf"\mathrm{{{stem}}}" if stem not in GREEK and _upright(stem) else letter
        if stem == "omicron":
            base = "o"
        return base + (f"_{{{self._script(subscript)}}}" if subscript else "")

    def _script(self, text: str) -> str:
        return self.word(text) if _upright(text) else text

    def numeral(self, text: str, unit: str) -> str:
        parts = [rf"\mathrm{{{name}}}" + (f"^{{{power}}}" if power else "") for name, power in _unit_parts(unit)]
        return text + (r"\," + r"{\cdot}".join(parts) if parts else "")

    def word(self, text: str) -> str:
        special = {"\\": r"\backslash ", "{": r"\{", "}": r"\}", "_": r"\_", "^": r"\wedge ", "~": r"\sim ", "−": "-"}
        special |= {char: "\\" + char for char in "#$%&"}
        return r"\mathrm{" + "".join(special.get(char, char) for char in text).replace(" ", r"\ ") + "}"

    def bracket(self, inner: str) -> str:
        return rf"\left({inner}\right)"

    def fraction(self, top: str, bottom: str) -> str:
        return rf"\frac{{{top}}}{{{bottom}}}"

    def power(self, base: str, exponent: str) -> str:
        return f"{base}^{{{exponent}}}"

    def root(self, inner: str) -> str:
        return rf"\sqrt{{{inner}}}"

    def bars(self, inner: str) -> str:
        return rf"\left|{inner}\right|"

    def applied(self, name: str, args: list[str]) -> str:
        return rf"\{name}" + self.bracket(",\\; ".join(args))

    def summed(self, under: str, inner: str) -> str:
        return (r"\sum_{i \ge x}" if under else r"\sum") + " " + inner

    def cases(self, branches: list[tuple[str, str]]) -> str:
        rows = (
            rf"{value} & \text{{if }} {when}" if when else rf"{value} & \text{{otherwise}}" for value, when in branches
        )
        return r"\begin{cases}" + r" \\ ".join(rows) + r"\end{cases}"

    def relation(self, sign: str) -> str:
        return {"≤": r"\le", "≥": r"\ge", "≠": r"\ne"}.get(sign, sign)


class MathML(Form):
    """MathML Core, without the outer element."""

    times = "×"
    beside = "<mo>\u2062</mo>"

    def atom(self, stem: str, subscript: str) -> str:
        base = f"<mi>{GREEK.get(stem, stem)}</mi>"
        return f"<msub>{base}{self._script(subscript)}</msub>" if subscript else base

    def _script(self, text: str) -> str:
        return self.word(text) if _upright(text) else f"<mi>{text}</mi>"

    def numeral(self, text: str, unit: str) -> str:
        negative = text.startswith("-")
        number = f"<mn>{text.removeprefix('-')}</mn>"
        number = f"<mrow><mo>−</mo>{number}</mrow>" if negative else number
        return f"{number}<mspace width='0.2em'/><mtext>{units.shown(unit)}</mtext>" if unit else number

    def word(self, text: str) -> str:
        return f"<mtext>{escape(text)}</mtext>"

    def sign(self, text: str) -> str:
        return f"<mo>{escape(text)}</mo>"

    def negated(self, inner: str) -> str:
        return f"<mo>−</mo>{inner}"

    def bracket(self, inner: str) -> str:
        return f"<mrow><mo>(</mo>{inner}<mo>)</mo></mrow>"

    def fraction(self, top: str, bottom: str) -> str:
        return f"<mfrac><mrow>{top}</mrow><mrow>{bottom}</mrow></mfrac>"

    def power(self, base: str, exponent: str) -> str:
        return f"<msup><mrow>{base}</mrow><mrow>{exponent}</mrow></msup>"

    def root(self, inner: str) -> str:
        return f"<msqrt>{inner}</msqrt>"

    def bars(self, inner: str) -> str:
        return f"<mrow><mo>|</mo>{inner}<mo>|</mo></mrow>"

    def applied(self, name: str, args: list[str]) -> str:
        return f"<mi>{name}</mi><mo>\u2061</mo>" + self.bracket("<mo>,</mo>".join(args))

    def summed(self, under: str, inner: str) -> str:
        below = "<mrow><mi>i</mi><mo>≥</mo><mi>x</mi></mrow>"
        return (f"<munder><mo>∑</mo>{below}</munder>" if under else "<mo>∑</mo>") + inner

    def cases(self, branches: list[tuple[str, str]]) -> str:
        rows = "".join(
            f"<mtr><mtd><mrow>{value}</mrow></mtd><mtd><mrow>"
            + (f"<mtext>if\u00a0</mtext>{when}" if when else "<mtext>otherwise</mtext>")
            + "</mrow></mtd></mtr>"
            for value, when in branches
        )
        return f"<mrow><mo>{{</mo><mtable>{rows}</mtable></mrow>"

    def doprint(self, expr: Any) -> str:
        return f"<mrow>{super().doprint(expr)}</mrow>"


class Typst(Form):
    """Typst math mode."""

    times = "times"
    beside = " "

    def atom(self, stem: str, subscript: str) -> str:
        base = self.word(stem) if stem not in GREEK and _upright(stem) else GREEK.get(stem, stem)
        return base + (f"_{self._script(subscript)}" if subscript else "")

    def _script(self, text: str) -> str:
        return self.word(text) if _upright(text) else text

    def numeral(self, text: str, unit: str) -> str:
        number = text.replace("-", "−")
        return f"{number} thin {self.word(units.shown(unit))}" if unit else number

    def word(self, text: str) -> str:
        return '"' + text.replace("\\", "\\\\").replace('"', '\\"') + '"'

    def sign(self, text: str) -> str:
        return " \\/ " if text == "/" else f" {text} "

    def fraction(self, top: str, bottom: str) -> str:
        return f"frac({top}, {bottom})"

    def power(self, base: str, exponent: str) -> str:
        return f"{base}^({exponent})"

    def root(self, inner: str) -> str:
        return f"sqrt({inner})"

    def bars(self, inner: str) -> str:
        return f"abs({inner})"

    def applied(self, name: str, args: list[str]) -> str:
        return f"{name}({', '.join(args)})"

    def summed(self, under: str, inner: str) -> str:
        return ("sum_(i ≥ x) " if under else "sum ") + inner

    def cases(self, branches: list[tuple[str, str]]) -> str:
        rows = (f'{value} quad "if " {when}' if when else f'{value} quad "otherwise"' for value, when in branches)
        return f"cases({', '.join(rows)})"


FORMS: dict[str, type[Form]] = {"plain": Plain, "latex": Latex, "mathml": MathML, "typst": Typst}


def _unit_parts(unit: str) -> list[tuple[str, str]]:
    """Names and signed powers of a unit in print order."""
    parts = []
    for sign, name, power in re.findall(r"(^1?|[*/])([A-Za-z]+)(?:\*\*(-?\d+))?", unit):
        exponent = int(power or 1) * (-1 if sign == "/" else 1)
        parts.append((name, "" if exponent == 1 else str(exponent)))
    return parts


def print_all(
    node: sympy.Expr, symbols: Callable[[str], Symbol], operands: Operands | None = None, env: Env | None = None
) -> dict[str, str]:
    """The expression in all four forms."""
    return {name: form(symbols, operands, env).doprint(node) for name, form in FORMS.items()}


def typeset(symbol: Symbol, symbols: Callable[[str], Symbol]) -> dict[str, str]:
    """A symbol alone in all four forms.

    >>> typeset(Symbol("C_smin", "lower limit", sub="s,min"), lambda name: Symbol(name, name))["latex"]
    'C_{\\\\mathrm{s,min}}'
    """
    forms = {name: form(symbols).symbol(symbol) for name, form in FORMS.items()}
    return forms | {"mathml": f"<mrow>{forms['mathml'].removeprefix('<mrow>').removesuffix('</mrow>')}</mrow>"}
