"""What bytes added to a PDF after its issue change of what a reader sees.

A PDF is updated by appending: marks, form fields and signatures are added that way, and so is anything that replaces
what was issued. Knows which objects marks and signatures touch, and holds all others of the file as issued against
those in force. Must not know what a report says, nor how it is sealed.
"""

from __future__ import annotations

import io
from collections.abc import Iterator
from typing import Any

_OF_A_SHEET = {"/Annots", "/Parent", "/Tabs", "/LastModified", "/PieceInfo"}
_OF_THE_FILE = {"/Pages", "/AcroForm", "/Metadata", "/Perms", "/DSS", "/Extensions", "/Version", "/PieceInfo"}
_CODING = {"/Length", "/Filter", "/DecodeParms"}
_CALLED = {
    "/Contents": "contents",
    "/Resources": "resources",
    "/AF": "list of attachments",
    "/Names": "names and attachments",
    "/Outlines": "bookmarks",
    "/StructTreeRoot": "reading order and alternative texts",
    "/OpenAction": "action on opening",
    "/AA": "actions",
}


def changes(issued: bytes, now: bytes) -> list[str]:
    """What of an issued PDF is no longer as it was in the file to which bytes were added, each thing by name.

    Annotations, form fields, signatures and the metadata that viewers keep may differ; nothing is said of them.

    >>> changes(b"%PDF-1.7", b"%PDF-1.7\\n")
    []
    """
    added = now[len(issued) :]
    if b"obj" not in added:
        return []
    if b"startxref" not in added:
        return ["objects outside any update of the file"]
    try:
        return list(_changes(issued, now))
    except Exception as error:  # a damaged file may raise anything in the reader
        return [f"the file with what was added cannot be read: {error}"]


def _changes(issued: bytes, now: bytes) -> Iterator[str]:
    from pypdf import PdfReader

    old, new = PdfReader(io.BytesIO(issued)), PdfReader(io.BytesIO(now))
    if new.is_encrypted:
        yield "the file is encrypted"
        return
    if len(old.pages) != len(new.pages):
        yield f"sheets: {len(new.pages)} in place of {len(old.pages)}"
    held = _Held(old, new)
    for number, (page, other) in enumerate(zip(old.pages, new.pages, strict=False), 1):
        yield from (f"sheet {number}: {key}" for key in held.differing(page, other, _OF_A_SHEET))
    before, after = ({name: list(data) for name, data in reader.attachments.items()} for reader in (old, new))
    for name in sorted(before.keys() | after.keys()):
        if name not in after or name not in before:
            yield f"attachment {name}: {'added' if name in after else 'taken out'}"
        elif before[name] != after[name]:
            yield f"attachment {name}: replaced"
    lists = {"/Names", "/AF"} if before != after else set()
    yield from held.differing(old.root_object, new.root_object, _OF_THE_FILE | lists)
    if "/XFA" in new.root_object.get("/AcroForm", {}):
        yield "form that stands in for the sheets"


class _Held:
    """Objects of two readings of a file held against each other; a page stands for its place, an annotation for any."""

    def __init__(self, old: Any, new: Any) -> None:
        self._pages = tuple(
            {_number(page.indirect_reference): place for place, page in enumerate(reader.pages)}
            for reader in (old, new)
        )
        places = [{**reader.xref.get(0, {}), **reader.xref_objStm} for reader in (old, new)]
        moved = [number for number, place in places[0].items() if places[1].get(number) != place]
        self._only_marked = all((number, 0) in self._pages[0] or _of_marks(old, number) for number in moved)

    def differing(self, old: Any, new: Any, but: set[str]) -> Iterator[str]:
        """The entries of two dictionaries that differ, in words; those in `but` are left out."""
        for key in sorted((old.keys() | new.keys()) - but):
            if not self.same(_raw(old, key), _raw(new, key)):
                yield _CALLED.get(key, key.removeprefix("/"))

    def same(self, old: Any, new: Any) -> bool:
        """Whether two objects are the same with everything they lead to."""
        waiting: list[tuple[Any, Any]] = [(old, new)]
        met = set()
        while waiting:
            a, b = waiting.pop()
            numbers = _number(a), _number(b)
            places = [pages.get(number) for pages, number in zip(self._pages, numbers, strict=True)]
            if places != [None, None]:
                if places[0] != places[1]:
                    return False
                continue
            if None not in numbers:
                if numbers in met:
                    continue
                met.add(numbers)
                if self._only_marked and numbers[0] == numbers[1]:
                    continue  # neither it nor anything it leads to was written again
            a, b = a.get_object(), b.get_object()
            if isinstance(a, dict) and isinstance(b, dict):
                if "/Rect" in a and "/Rect" in b:
                    continue
                if not _same_data(a, b):
                    return False
                waiting += [(_raw(a, key), _raw(b, key)) for key in (a.keys() | b.keys()) - _CODING]
            elif isinstance(a, list) and isinstance(b, list):
                if len(a) != len(b):
                    return False
                waiting += zip(list.__iter__(a), list.__iter__(b), strict=True)
            elif a != b:
                return False
        return True


def _number(thing: Any) -> tuple[int, int] | None:
    """Number and generation of a reference; None if it is none."""
    return (thing.idnum, thing.generation) if hasattr(thing, "generation") else None


def _raw(entries: Any, key: str) -> Any:
    """An entry as it stands, not what it refers to."""
    from pypdf.generic import NullObject

    return entries.raw_get(key) if key in entries else NullObject()


def _same_data(a: Any, b: Any) -> bool:
    if hasattr(a, "get_data") and hasattr(b, "get_data"):
        return bool(a.get_data() == b.get_data())
    return hasattr(a, "get_data") == hasattr(b, "get_data")


def _of_marks(reader: Any, number: int) -> bool:
    """Whether this object may differ wherever it stands, or is held on its own."""
    from pypdf.generic import IndirectObject

    found = reader.get_object(IndirectObject(number, 0, reader))
    kind = found.get("/Type") if isinstance(found, dict) else None
    return kind in ("/Catalog", "/Pages", "/Metadata", "/Annot") or number == reader.trailer.raw_get("/Info").idnum
