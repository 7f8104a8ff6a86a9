"""The site class in use against the geotechnical report that is named as its source.

Knows when both agree and which classes are defaults. Must not know what a site class does to the ground motion.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit.core.handle import Handle
from calckit.core.record import NOT_CHECKED, NOT_OK, OK, Source
from calckit.errors import InputError

if TYPE_CHECKING:
    from calckit.core.scope import Scope

DEFAULTS = ("D default", "default")
"""Site classes that stand for want of a report."""
SOURCE = Source("common practice, no source: the site class is that of the geotechnical report, or declared a default")


def site_report(scope: Scope) -> Handle:
    """The check of site_class against report_class, the class that the report named as its source gives."""
    in_use = scope.word("site_class")
    if in_use is None:
        raise InputError("asce7.site_report", [scope.missing("site_class")])
    verdict, detail, missing = _compared(scope, in_use)
    with scope.step():
        return scope.verdict(
            "site_report", "Site class agrees with the geotechnical report", verdict, SOURCE, detail=detail,
            missing=missing, rests=("site_class", "report_class"),
        )  # fmt: skip


def _compared(scope: Scope, in_use: str) -> tuple[str, str, str]:
    given, entry = scope.word("report_class"), scope.find("report_class")
    if given is None:
        why = entry.line.shown.partition(": ")[2] if entry and isinstance(entry.line.shown, str) else ""
        if in_use in DEFAULTS and why:
            return OK, f"no report ({why}): class {in_use} is declared a default", ""
        return NOT_CHECKED, "", f"report_class ({scope.symbol('report_class').meaning})"
    assert entry is not None
    named = entry.line.source.text() if entry.line.source else "the report"
    if given == in_use:
        return OK, f"{named} gives class {given}, which is in use", ""
    return NOT_OK, f"{named} gives class {given}; in use is {in_use}", ""
