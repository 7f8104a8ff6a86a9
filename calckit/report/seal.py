"""The file seal: a digest that an issued file carries of itself.

A file cannot hold its own digest, so the seal is the SHA-256 of the file as it was written with zeros where the digits
stand, and the digits are then put in place of the zeros: length and structure stay. Knows bytes, and asks `additions`
what bytes added later change; must not know what a report says. The seal shows that a file changed, not who wrote it:
anyone can seal a file.
"""

from __future__ import annotations

import hashlib
import re
from dataclasses import dataclass
from typing import Literal

from calckit.errors import NotebookError
from calckit.report import additions

_MARK = b"calckit-seal:"
_ZEROS = b"0" * 64
_SEAL = re.compile(_MARK + rb"([0-9a-f]{64})(?![0-9a-f])")
_END = re.compile(rb"%%EOF(?:\r\n|\n|\r)?")

PLACEHOLDER = (_MARK + _ZEROS).decode()
"""What a writer puts into the PDF keywords, or into the content of one HTML meta tag, and nowhere else."""


@dataclass(frozen=True)
class Verdict:
    """What a seal says of a file.

    `seal` holds the 64 digits found ("" if there are none), `added` the number of bytes that follow the issued ones,
    `changes` what these alter of what was issued; marks and signatures alter nothing.
    """

    state: Literal["intact", "added", "altered"]
    seal: str
    added: int = 0
    changes: tuple[str, ...] = ()

    def text(self) -> str:
        """The verdict in words.

        >>> Verdict("added", "5f" * 32, 812).text()
        '812 bytes added after issue'
        """
        added = f"{self.added} byte{'' if self.added == 1 else 's'} added after issue"
        if self.changes:
            return f"altered by {added}"
        if self.state == "added":
            return added
        return "intact" if self.state == "intact" else "altered or re-saved after issue"


def is_pdf(data: bytes) -> bool:
    """Whether the bytes are a PDF."""
    return data.startswith(b"%PDF-")


def apply(data: bytes) -> bytes:
    """The sealed file: the digest of `data` in place of each placeholder.

    Raises NotebookError unless the placeholder stands exactly twice in a PDF (document information and metadata) or
    once in an HTML file.

    >>> page = f'<meta name="seal" content="{PLACEHOLDER}">'.encode()
    >>> check(apply(page)).text(), check(apply(page) + b" ").text()
    ('intact', 'altered or re-saved after issue')
    """
    found, needed = _SEAL.findall(data), _copies(data)
    if found != [_ZEROS] * needed:
        raise NotebookError(
            f"the file seal needs its blank digits {needed} time{'s' if needed > 1 else ''} in the file; found "
            f'{len(found)}; cure: remove any text starting "{_MARK.decode()}" from the notebook'
        )
    digest = hashlib.sha256(data).hexdigest().encode()
    return _SEAL.sub(_MARK + digest, data)


def seal_of(data: bytes) -> str:
    """The 64 digits in the file, "" if it holds none."""
    found = _SEAL.search(data)
    return found[1].decode() if found else ""


def check(data: bytes) -> Verdict:
    """Hold a file against its seal.

    Marks and signatures are appended to a PDF, so each beginning of it that is itself a whole file is tried; what is
    appended may not change what the reader sees of the issued part. Anything appended to an HTML file makes it altered.
    """
    end = _end(data)
    if end is None:
        return Verdict("altered", seal_of(data))
    if end == len(data):
        return Verdict("intact", seal_of(data))
    changed = tuple(additions.changes(data[:end], data))
    return Verdict("altered" if changed else "added", seal_of(data), len(data) - end, changed)


def issued_bytes(data: bytes) -> bytes:
    """The file without what was added after issue."""
    return data[: _end(data)]


def _end(data: bytes) -> int | None:
    """Where the issued part ends; None if the seal fits no beginning of the file."""
    seals = list(_SEAL.finditer(data))[: _copies(data)]
    digits = {seal[1] for seal in seals}
    if len(seals) != _copies(data) or len(digits) != 1:
        return None
    seal = digits.pop().decode()
    ends = [len(data)]
    if is_pdf(data):
        candidates = {end for found in _END.finditer(data) for end in (found.start() + len(b"%%EOF"), found.end())}
        ends = sorted(end for end in candidates | {len(data)} if end >= seals[-1].end())
    digest, done = hashlib.sha256(), 0
    blank = data
    for found in seals:
        blank = blank[: found.start(1)] + _ZEROS + blank[found.end(1) :]
    for end in ends:
        digest.update(memoryview(blank)[done:end])
        done = end
        if digest.copy().hexdigest() == seal:
            return end
    return None


def _copies(data: bytes) -> int:
    return 2 if is_pdf(data) else 1
