"""The math font of the HTML report: one fixed subset of STIX Two Math, carried inside the file.

Knows where the font comes from and which characters the subset holds. Must not know what the report says.

STIX Two Math is under the SIL Open Font License 1.1; its copyright and license texts stay in the subset.
"""

from __future__ import annotations

import base64
import io
from functools import cache
from importlib.util import find_spec
from pathlib import Path

FAMILY = "STIX Two Math"

_RANGES = (
    (0x20, 0x7E), (0xA0, 0xFF),  # Latin
    (0x391, 0x3A1), (0x3A3, 0x3A9), (0x3B1, 0x3C9), (0x3D1, 0x3D1), (0x3D5, 0x3D6), (0x3F0, 0x3F1), (0x3F5, 0x3F5),
    (0x2010, 0x2016), (0x2018, 0x2019), (0x201C, 0x201D), (0x2020, 0x2022), (0x2026, 0x2026), (0x2032, 0x2034),
    (0x203E, 0x203E), (0x2061, 0x2064),  # punctuation, primes, invisible operators
    (0x302, 0x303), (0x2C6, 0x2C7), (0x2D8, 0x2D9), (0x2DC, 0x2DC), (0x20D7, 0x20D7),  # accents
    (0x2102, 0x2102), (0x210E, 0x210F), (0x2113, 0x2113), (0x2115, 0x2115), (0x211D, 0x211D), (0x2124, 0x2124),
    (0x2190, 0x2194), (0x21D0, 0x21D4), (0x23DE, 0x23DF), (0x2308, 0x230B), (0x27E8, 0x27E9),
    (0x2200, 0x220B), (0x220F, 0x220F), (0x2211, 0x2213), (0x2215, 0x2215), (0x2217, 0x221E), (0x2220, 0x2220),
    (0x2223, 0x2223), (0x2225, 0x2225), (0x2227, 0x222E), (0x2234, 0x2235), (0x223C, 0x223C), (0x2243, 0x2243),
    (0x2245, 0x2245), (0x2248, 0x2248), (0x2260, 0x2261), (0x2264, 0x2265), (0x226A, 0x226B), (0x2282, 0x2283),
    (0x2286, 0x2287), (0x2295, 0x2295), (0x2297, 0x2297), (0x22A5, 0x22A5), (0x22C5, 0x22C5), (0x22EE, 0x22EF),
    (0x22F1, 0x22F1), (0x25A1, 0x25A1),
    (0x1D400, 0x1D454), (0x1D456, 0x1D49B), (0x1D6E2, 0x1D755), (0x1D7CE, 0x1D7D7),  # bold and italic
)  # fmt: skip

CHARACTERS = frozenset(chr(code) for low, high in _RANGES for code in range(low, high + 1))
"""What the subset can set. Italic letters are included for every upright letter, so only the upright ones are asked."""

_KEPT_NAMES = [0, 1, 2, 4, 6, 13, 14]  # copyright, the names of the font, license, address of the license


@cache
def math_font() -> bytes:
    """The subset as a WOFF file: the same bytes on every call and in every process.

    Raises FileNotFoundError if the package that carries the font is not installed in full.

    >>> math_font()[:4]
    b'wOFF'
    """
    from fontTools import subset  # type: ignore[import-untyped]
    from fontTools.ttLib import TTFont  # type: ignore[import-untyped]

    options = subset.Options()
    options.layout_features = []
    options.hinting = False
    options.notdef_outline = True
    options.name_IDs = _KEPT_NAMES
    font = TTFont(_path(), recalcTimestamp=False)
    subsetter = subset.Subsetter(options)
    subsetter.populate(unicodes=[ord(character) for character in CHARACTERS])
    subsetter.subset(font)
    font.flavor = "woff"
    out = io.BytesIO()
    font.save(out, reorderTables=False)
    return out.getvalue()


def math_font_uri() -> str:
    """The subset as an address that needs no fetch.

    >>> math_font_uri()[:24]
    'data:font/woff;base64,d0'
    """
    return f"data:font/woff;base64,{base64.b64encode(math_font()).decode()}"


def missing(text: str) -> str:
    """The characters of `text` that the subset lacks, each once, in order; blanks are not counted.

    >>> missing("T_a ≤ 漢 s")
    '漢'
    """
    return "".join(dict.fromkeys(c for c in text if not c.isspace() and c not in CHARACTERS))


def _path() -> Path:
    # The package is only located, not imported: importing it loads its whole typesetter.
    spec = find_spec("ziamath")
    for folder in (spec.submodule_search_locations or ()) if spec else ():
        path = Path(folder) / "fonts" / "STIXTwoMath-Regular.ttf"
        if path.is_file():
            return path
    raise FileNotFoundError("the math font of the report was not found; cure: pip install --force-reinstall ziamath")
