"""Symbols of the trade: name, meaning, kind of quantity, printed form, allowed range.

Knows how a name is spelt and what may be said of a value before it is used. Must not know how a symbol is printed in
any output form, nor which standard uses it.
"""

from __future__ import annotations

import keyword
import math
import re
from dataclasses import dataclass

from calckit.errors import Fault, InputError

KINDS = {
    "number": ("", ""),
    "words": ("", ""),
    "length": ("ft", "m"),
    "displacement": ("in", "mm"),
    "time": ("s", "s"),
    "force": ("kip", "kN"),
    "moment": ("kip*ft", "kN*m"),
    "area": ("ft**2", "m**2"),
    "pressure": ("psf", "kPa"),
    "stiffness": ("kip/in", "kN/mm"),
    "line load": ("lb/ft", "kN/m"),
    "load effect": ("kip", "kN"),
    "velocity": ("in/s", "m/s"),
    "acceleration": ("ft/s**2", "m/s**2"),
    "other": ("", ""),
}
"""Kind of quantity -> display unit in the US and in the SI set.

A load effect is typed in any unit of force, alone or times a power of length: a moment, a force on each unit of length.
"""

GREEK = {
    "alpha": "α", "beta": "β", "gamma": "γ", "delta": "δ", "epsilon": "ε", "zeta": "ζ", "eta": "η", "theta": "θ",
    "iota": "ι", "kappa": "κ", "lambda": "λ", "mu": "μ", "nu": "ν", "xi": "ξ", "omicron": "ο", "pi": "π", "rho": "ρ",
    "sigma": "σ", "tau": "τ", "upsilon": "υ", "phi": "φ", "chi": "χ", "psi": "ψ", "omega": "ω", "Gamma": "Γ",
    "Delta": "Δ", "Theta": "Θ", "Lambda": "Λ", "Xi": "Ξ", "Pi": "Π", "Sigma": "Σ", "Upsilon": "Υ", "Phi": "Φ",
    "Psi": "Ψ", "Omega": "Ω",
}  # fmt: skip
"""Greek letters as they are spelt out in names."""

_NAME = re.compile(r"[A-Za-z][A-Za-z0-9]*(_[A-Za-z0-9]+)?_?\Z")
_NAME_OF_WORDS = re.compile(r"[A-Za-z][A-Za-z0-9]*(_[A-Za-z0-9]+)*_?\Z")


@dataclass(frozen=True)
class Symbol:
    """A named quantity.

    Arguments: `name` by the transliteration rule (stem, one underscore, subscript run together; Greek spelt out; a
    Python keyword takes a trailing underscore); `meaning` in plain words; `kind`, a key of `KINDS`; `sub`, the printed
    subscript where it differs from the name's ("s,min"); `layout`, an expression whose printed form stands for the
    symbol ("w_x*h_x**k"); `digits`, the significant digits of a printed result; `low`, `high`, the allowed range, with
    `low_open` if `low` itself is not allowed; `choices` for words; `own_unit`, the display unit of kind "other";
    `index`, what the rows of its list are.

    >>> T_a = Symbol("T_a", "approximate fundamental period", "time", low=0, low_open=True)
    >>> T_a.stem, T_a.subscript, T_a.unit("SI")
    ('T', 'a', 's')
    """

    name: str
    meaning: str
    kind: str = "number"
    sub: str = ""
    layout: str = ""
    digits: int = 4
    low: float | None = None
    high: float | None = None
    low_open: bool = False
    choices: tuple[str, ...] = ()
    own_unit: str = ""
    index: str = "level"

    def __post_init__(self) -> None:
        check_name(self.name, words=self.kind == "words")
        if not self.meaning.strip():
            raise InputError("Symbol", [Fault(self.name, "a meaning", "none", "say what the symbol stands for")])
        if self.kind not in KINDS:
            raise InputError("Symbol", [Fault(self.name, f"a kind among {', '.join(KINDS)}", self.kind)])

    @property
    def stem(self) -> str:
        """The letter or word before the underscore, as spelt."""
        return self.name.rstrip("_").partition("_")[0]

    @property
    def subscript(self) -> str:
        """The printed subscript, blank if there is none."""
        return self.sub or self.name.rstrip("_").partition("_")[2]

    def unit(self, system: str) -> str:
        """The display unit in the set "US" or "SI"."""
        return self.own_unit or KINDS[self.kind][system == "SI"]

    def range_text(self) -> str:
        """The allowed range in words, blank if there is none.

        >>> Symbol("S_S", "mapped ordinate", low=0, high=5).range_text()
        'from 0 to 5'
        """
        if self.low is not None and self.high is not None:
            return f"{'above' if self.low_open else 'from'} {self.low:g} to {self.high:g}"
        if self.low is not None:
            return f"{'above' if self.low_open else 'not less than'} {self.low:g}"
        return "" if self.high is None else f"at most {self.high:g}"

    def fault(self, value: float, unit: str) -> Fault | None:
        """What is wrong with a number for this symbol (in its display unit), or None."""
        low = self.low is not None and (value < self.low or (self.low_open and value == self.low))
        if math.isfinite(value) and not low and not (self.high is not None and value > self.high):
            return None
        needed = f"a finite number {self.range_text()}".rstrip()
        return Fault(self.name, needed, f"{value:g} {unit}".rstrip(), "correct the value", self.meaning)


def check_name(name: str, words: bool = False) -> str:
    """The name itself if it follows the transliteration rule; InputError if not.

    A name whose value is `words` is never typeset as a symbol and may run over several underscores.

    >>> check_name("lambda_"), check_name("T_a_method", words=True)
    ('lambda_', 'T_a_method')
    """
    if not (_NAME_OF_WORDS if words else _NAME).match(name) or keyword.iskeyword(name):
        needed = "stem, one underscore, subscript run together (a Python keyword takes a trailing underscore)"
        raise InputError("name", [Fault(name, needed, repr(name), 'write it like "V_x" or "lambda_"')])
    return name
