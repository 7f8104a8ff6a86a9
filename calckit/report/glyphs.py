"""Which characters the fonts that travel with Typst can print.

Knows how to ask Typst. Must not know where a text stands.
"""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Iterable
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Literal

import typst

STANDARDS: tuple[Literal["a-3a"], Literal["ua-1"]] = ("a-3a", "ua-1")
"""What the report is held to; under these Typst refuses a character that no font holds."""

_UNSEEN = ("Cc", "Cf", "Cn", "Co", "Cs")
_LINE = re.compile(r"probe\.typ:(\d+):")
_known: dict[str, bool] = dict.fromkeys("\n\t", True)


def lacking(characters: Iterable[str]) -> set[str]:
    """Those characters that cannot be printed; invisible ones that steer or hide text are among them.

    >>> sorted(lacking("T_a ≤ 漢 θ\\u202e")) == sorted("漢\\u202e")
    True
    """
    asked = sorted(set(characters))
    for character in asked:
        if character not in _known and unicodedata.category(character) in _UNSEEN:
            _known[character] = False
    new = [character for character in asked if character not in _known and not " " <= character <= "~"]
    _known.update(dict.fromkeys(new, True) | dict.fromkeys(_refused(new), False))
    return {character for character in asked if not _known.get(character, True)}


def code_point(character: str) -> str:
    """The name under which a character that cannot be printed is shown.

    >>> code_point("漢")
    'U+6F22'
    """
    return f"U+{ord(character):04X}"


def _refused(characters: list[str]) -> set[str]:
    """Set each character on a line of its own; Typst names the lines that it cannot set."""
    head = ['#set document(title: "probe")', "= Probe"]
    refused: set[str] = set()
    with TemporaryDirectory(prefix="calckit-") as folder:
        probe = Path(folder) / "probe.typ"
        while left := [character for character in characters if character not in refused]:
            rows = [f'#"\\u{{{ord(character):x}}}" \\' for character in left]
            probe.write_text("\n".join([*head, *rows]), encoding="utf-8")
            try:
                typst.compile(
                    str(probe), root=folder, ignore_system_fonts=True, pdf_standards=[*STANDARDS], timestamp=0
                )
            except typst.TypstError as error:
                places = {int(place) - len(head) - 1 for place in _LINE.findall(str(error.diagnostic))}
                if not places:
                    raise
                refused |= {left[place] for place in places}
            else:
                break
    return refused
