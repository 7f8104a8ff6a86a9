"""Chapter 12, redundancy: rho of a direction with its reasons (12.3.4).

Knows the two conditions for 1.0 and which stories they concern. Must not know what rho multiplies elsewhere.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from calckit.core.digits import COMPARED, carried
from calckit.core.handle import Handle
from calckit.core.record import Flag
from calckit.errors import Fault, InputError
from calckit.standards.asce7 import irregularity_rules as rules
from calckit.standards.asce7.clauses import rule
from calckit.standards.asce7.found import finding, present

if TYPE_CHECKING:
    from calckit.core.scope import Scope

SHARE = 0.35
"""Share of the base shear above which a story is looked at."""
LOSS = 0.33
"""Largest loss of story strength on removing one element (Table 12.3-3)."""
PLAN_TYPES = ("H1a", "H1b", "H2", "H3", "H4", "H5")
NOT_IN = (
    "1.0 in drift, P-delta, forces on diaphragms by eqs 12.10-1 to 12.10-3, nonstructural components, effects with "
    "overstrength and out-of-plane anchorage of walls; transfer forces take it"
)
ANSWERS = ("r_loss", "n_bay1", "n_bay2", "removal_torsion", "removal_passes", "perimeter_bays")
RESTS = ("SDC", "r_Vs", *ANSWERS, *PLAN_TYPES, *(f"{name}_found" for name in PLAN_TYPES[:4]))

Reading = tuple[bool | None, str]
"""Whether a condition holds (None: not known), and why."""


def redundancy(scope: Scope) -> Handle:
    """rho of a direction: 1.0 by category or by one of two conditions, else 1.3."""
    category = scope.word("SDC")
    faults = [scope.missing("SDC")] if category is None else []
    if category in ("D", "E", "F"):
        faults += [scope.missing("V_x")] if scope.find("V_x") is None else []
        faults += [scope.missing("V")] if scope.number("V") is None else []
    if faults:
        raise InputError("asce7.redundancy", faults)
    with scope.step():
        if category in ("A", "B", "C"):
            detail = f"design category {category}; {NOT_IN}: 1.0"
            return scope.state("rho", "1.0", "table", rule("12.3.4.1"), detail=detail, rests=("SDC",))
        shares = scope.compute(rules.R_VS)
        scope.table("redundancy", "Stories that redundancy looks at", ["V_x", "r_Vs"], head="Story below")
        values = shares.value if isinstance(shares.value, list) else []
        pairs = zip(shares.rows, values, strict=True)
        stories = [row for row, value in pairs if float(carried(value, COMPARED)) > SHARE]
        return _by_conditions(scope, stories)


def _by_conditions(scope: Scope, stories: list[str]) -> Handle:
    where = f"stories with over 35 % of V are {', '.join(stories)}"
    readings = {"(a)": _removal(scope, stories), "(b)": _perimeter(scope, stories)}
    reasons = "; ".join(f"{name} {why}" for name, (_, why) in readings.items())
    met = [name for name, (holds, _) in readings.items() if holds]
    flags = []
    if not met and any(holds is None for holds, _ in readings.values()):
        text = f"{scope.id_of('rho')} = 1.3 is used until the conditions of 12.3.4.2 are answered"
        flags.append(Flag(text, True, "originator"))
    word = "1.0" if met else "1.3"
    detail = f"{where}; {reasons}; {NOT_IN}: {word}"
    return scope.state("rho", word, "table", rule("12.3.4.2"), detail=detail, flags=flags, rests=RESTS)


def _by_story(scope: Scope, name: str, stories: list[str]) -> dict[str, float] | None:
    """A pasted column for the stories looked at, None if there is none; InputError if a story is left out."""
    entry = scope.find(name)
    if entry is None or not isinstance(entry.line.value, list):
        return None
    found = dict(zip(entry.line.rows, entry.line.value, strict=True))
    if absent := [story for story in stories if story not in found]:
        needed, cure = "a row for each story with over 35 % of V", "add the rows"
        given, meaning = f"none for {', '.join(absent)}", scope.symbol(name).meaning
        raise InputError("asce7.redundancy", [Fault(name, needed, given, cure, meaning)])
    return {story: float(carried(found[story], COMPARED)) for story in stories}


def _removal(scope: Scope, stories: list[str]) -> Reading:
    """Condition (a): no removal of Table 12.3-3 costs over 33 % of a story's strength or makes type H1b."""
    losses, torsion = _by_story(scope, "r_loss", stories), scope.word("removal_torsion")
    if losses is not None:
        over = [story for story, loss in losses.items() if loss > LOSS]
        if over:
            return False, f"not met, loss of strength over 33 % at {', '.join(over)}"
        if torsion is None:
            return None, "open, losses not over 33 % but the answer removal_torsion is missing"
        if torsion == "yes":
            return False, "not met, removing an element makes severe torsional irregularity"
        return True, "met, losses of strength not over 33 %, no severe torsional irregularity"
    answer = scope.word("removal_passes")
    if answer is None:
        return None, "open, neither r_loss nor the answer removal_passes"
    return answer == "yes", "met, as answered" if answer == "yes" else "not met, as answered"


def _perimeter(scope: Scope, stories: list[str]) -> Reading:
    """Condition (b): regular in plan, and two bays of perimeter framing on each side in both directions."""
    found, unknown = present(scope, PLAN_TYPES)
    others = [part for part in scope.calc.parts.values() if part is not scope]
    own = set(found)
    found += [f"{p.id}.{n}" for p in others for n in PLAN_TYPES if n not in own and finding(p, n) == "yes"]
    if found:
        return False, f"not met, irregular in plan by {', '.join(found)}"
    columns = [_by_story(scope, name, stories) for name in ("n_bay1", "n_bay2")]
    answer: bool | None = None
    if columns[0] is not None and columns[1] is not None:
        few = [story for story in stories if min(column[story] for column in columns if column is not None) < 2]
        if few:
            return False, f"not met, fewer than two bays at {', '.join(few)}"
        answer = True
    elif word := scope.word("perimeter_bays"):
        answer = word == "yes"
        if not answer:
            return False, "not met, as answered"
    if answer is None:
        return None, "open, neither n_bay1 and n_bay2 nor the answer perimeter_bays"
    if unknown:
        return None, f"open, two bays on each side but answers {', '.join(unknown)} are missing"
    return True, "met, regular in plan, two bays on each side"
