"""Table 12.2-1: factors of the force-resisting system, whether it and its height are permitted, and the footnotes.

Knows the rows of each edition, the lower overstrength factor of flexible diaphragms and the higher height limits. Must
not know periods or forces.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from typing import TYPE_CHECKING

from calckit.core.handle import Handle, Handles
from calckit.core.record import NOT_CHECKED, NOT_OK, OK, Flag, Source
from calckit.core.table import Found, Table, load
from calckit.errors import Fault, InputError, ScopeError, nearest_first
from calckit.standards.asce7.clauses import rule
from calckit.standards.asce7.hazard import PACKAGE
from calckit.standards.asce7.margins import put_on_check
from calckit.standards.asce7.structure_rules import OMEGA_0_LESS

if TYPE_CHECKING:
    from calckit.core.scope import Scope

ADDED = {"ASCE 7-22": "systems_7_22"}
"""Tables of the systems that one edition adds to those of `systems`."""
RAISED = {"D": ("160", "240 ft"), "E": ("160", "240 ft"), "F": ("100", "160 ft")}
"""Design category -> limit of the table in ft, and what 12.2.5.4 raises it to."""
MAY_RISE = (
    "building frame: steel eccentrically braced frame",
    "building frame: steel special concentrically braced frame",
    "building frame: buckling-restrained braced frame",
    "building frame: special steel plate wall",
    "building frame: special reinforced concrete wall",
    "bearing wall: special reinforced concrete shear wall",
)
"""Systems whose limit 12.2.5.4 raises."""
ONE_STORY, ONE_STORY_LIMIT = "building frame: steel ordinary concentrically braced frame", "60 ft"


def edition(scope: Scope) -> str:
    """The edition in force, as the title block says it."""
    return str(scope.calc.title_block["standard"])


def system_row(scope: Scope) -> tuple[str, dict[str, str], Table]:
    """The row of Table 12.2-1 for the part's system: the whole key, or the part after the colon where unique."""
    tables = [load(PACKAGE, "systems")] + [load(PACKAGE, name) for key, name in ADDED.items() if key == edition(scope)]
    typed = scope.word("system")
    if typed is None:
        raise InputError("asce7.system", [scope.missing("system")])
    typed = " ".join(typed.split())
    known = {key: table for table in tables for key in table.rows}
    matching = [key for key in known if typed in (key, key.partition(": ")[2])]
    if len(matching) > 1:
        raise InputError(
            "asce7.system", [Fault("system", "one row of Table 12.2-1", typed, f"write one of {'; '.join(matching)}")]
        )
    if not matching:
        cure = f"near names: {'; '.join(nearest_first(typed, known)[:6])}"
        for name, other in ADDED.items():
            if any(typed in (key, key.partition(": ")[2]) for key in load(PACKAGE, other).rows):
                cure = f"{name} alone has it; {cure}"
        raise InputError(
            "asce7.system", [Fault("system", "a row of Table 12.2-1", typed, cure, "seismic force-resisting system")]
        )
    return matching[0], known[matching[0]].row(matching[0]), known[matching[0]]


def system(scope: Scope) -> Handles:
    """R, Omega_0, C_d of one row of Table 12.2-1, and whether the system and its height are permitted."""
    key, row, table = system_row(scope)
    with scope.step():
        return Handles(
            [
                scope.look_up("R", _entry(scope, key, table, "R"), rests=("system",)),
                _overstrength(scope, key, table),
                scope.look_up("C_d", _entry(scope, key, table, "C_d"), rests=("system",)),
                _permitted(scope, key, row, table),
            ]
        )


def _entry(scope: Scope, key: str, table: Table, column: str) -> Found:
    """An entry of the row; its number in the table is said in the edition whose numbers are known."""
    found = table.entry(key, column)
    if edition(scope) != table.header["edition"] or "row" not in table.columns:
        return found
    return replace(found, detail=found.detail.replace(", row ", f", row {table.row(key)['row']}, ", 1))


def _overstrength(scope: Scope, key: str, table: Table) -> Handle:
    """Omega_0 of the table, or 0.5 less where the engineer takes the footnote for flexible diaphragms."""
    found, rests = _entry(scope, key, table, "Omega_0"), ("system",)
    if scope.word("Omega_0_less") != "yes":
        return scope.look_up("Omega_0", found, rests=rests)
    if edition(scope) != "ASCE 7-16":
        text = (
            f"{scope.id_of('Omega_0')}: whether {edition(scope)} lowers it for flexible diaphragms is not known to the "
            "kit; not lowered"
        )
        return scope.look_up("Omega_0", found, [Flag(text, True, "holder of the standard")], rests=rests)
    diaphragm = scope.word("diaphragm")
    if diaphragm not in (None, "flexible"):
        cure = "answer no, or correct the answer diaphragm"
        needed = "flexible diaphragms where the answer is yes"
        raise InputError("asce7.system", [Fault("Omega_0_less", needed, f"diaphragm {diaphragm}", cure)])
    if float(found.text) < 2.5:
        raise ScopeError(
            f"{scope.id_of('Omega_0')}: the footnote of Table 12.2-1 holds where the table gives 2.5 or more; "
            f"{key} has {found.text}: answer Omega_0_less with no"
        )
    flags = []
    if diaphragm is None:
        text = f"{scope.id_of('Omega_0')} is 0.5 lower for flexible diaphragms; the diaphragms are not classed yet"
        flags = [Flag(text, True, "originator")]
    scope.look_up("Omega_0tab", found, rests=rests)
    return scope.compute(OMEGA_0_LESS, flags=flags, rests=("Omega_0_less", "diaphragm"))


def _permitted(scope: Scope, key: str, row: Mapping[str, str], table: Table) -> Handle:
    source, title, rests = table.source(key), "System and height permitted", ("system", "SDC")
    category = scope.word("SDC")

    def say(verdict: str, detail: str = "", missing: str = "") -> Handle:
        return scope.verdict("system_permitted", title, verdict, source, detail=detail, missing=missing, rests=rests)

    if category is None:
        return say(NOT_CHECKED, missing="SDC (seismic design category)")
    limit = "NL" if category == "A" else row[category]
    if limit == "NP":
        return say(NOT_OK, f"{key} is not permitted in design category {category}")
    if limit == "NL":
        return say(OK, f"{key}: no height limit in design category {category}")
    if limit == "not known":
        return say(NOT_CHECKED, missing=f"the height limit of {key} in category {category}, from {source.text()}")
    text, source, detail = _height(scope, key, category, limit, table)
    claimed = scope.word("height_rule") not in (None, "table")
    flags = [Flag(f"height limit {text}: its conditions are checked by asce7.procedure()")] if claimed else []
    scope.state("h_limit", text, "table", source, detail=detail, rests=(*rests, "height_rule"))
    made = scope.require("h_n <= h_limit", title=title, source=source, id_="system_permitted", flags=flags)
    return put_on_check(made, "h_n", "the height limit")


def _height(scope: Scope, key: str, category: str, limit: str, table: Table) -> tuple[str, Source, str]:
    """The height limit in force, its source and how it was found."""
    claimed = scope.word("height_rule") or "table"
    if claimed == "12.2.5.4":
        own, raised = RAISED.get(category, ("", ""))
        if key not in MAY_RISE or limit != own:
            raise ScopeError(
                f"{scope.id_of('height_rule')}: 12.2.5.4 raises 160 ft in category D or E and 100 ft in F, for "
                f"{'; '.join(MAY_RISE)}; {key} in category {category} has {limit} ft: answer table"
            )
        return raised, rule("12.2.5.4"), f"12.2.5.4, category {category}, in place of {own} ft: {raised}"
    if claimed == "one story":
        if key != ONE_STORY or category not in ("D", "E"):
            raise ScopeError(
                f"{scope.id_of('height_rule')}: the footnote of Table 12.2-1 for one story is known to the kit for "
                f"{ONE_STORY} in category D or E, not for {key} in category {category}: answer table"
            )
        detail = f"{table.name}, footnote for one story, in place of {limit} ft: {ONE_STORY_LIMIT}"
        return ONE_STORY_LIMIT, table.source(key), detail
    found = _entry(scope, key, table, category)
    place = found.detail.rpartition(", column ")[0]
    return f"{limit} ft", table.source(key), f"{place}, category {category}: {limit} ft"


def height_conditions(scope: Scope) -> None:
    """Check what the height limit claimed by `height_rule` asks for; writes nothing where none is claimed."""
    claimed = scope.word("height_rule")
    if claimed == "12.2.5.4":
        source = rule("12.2.5.4")
        title = "Higher height limit: no extreme torsional irregularity"
        answer, missing = scope.word("H1b"), ""
        if edition(scope) != "ASCE 7-16":
            answer, missing = None, f"how {edition(scope)} words the condition on torsion"
        verdict = {"no": OK, "yes": NOT_OK}.get(answer or "", NOT_CHECKED)
        detail = {OK: "H1b is not present", NOT_OK: "H1b is present"}.get(verdict, "")
        missing = missing or ("answer H1b" if verdict == NOT_CHECKED else "")
        scope.verdict("height_torsion", title, verdict, source, detail=detail, missing=missing, rests=("H1b",))
        scope.require(
            "r_line <= 0.6", title="Higher height limit: share of one line", source=source, id_="height_line"
        )
    if claimed == "one story":
        levels, source = scope.find("h_x"), rule("Table 12.2-1")
        title = "Higher height limit: one story"
        count = len(levels.line.rows) if levels else 0
        verdict = NOT_CHECKED if not count else OK if count == 1 else NOT_OK
        detail = f"levels above the base: {count}" if count else ""
        missing = "" if count else "h_x (levels)"
        scope.verdict("height_story", title, verdict, source, detail=detail, missing=missing, rests=("h_x",))
