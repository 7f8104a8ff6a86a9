"""Documents, sources, confirmations, and what stays open."""

from __future__ import annotations

import pytest

from calckit import Calc
from calckit.core.assemble import assemble
from calckit.core.record import OpenItem
from calckit.core.settings import Settings
from calckit.errors import DuplicateError, InputError, UnknownNameError
from tests.building import Building


@pytest.fixture
def calc() -> Calc:
    """A calculation with three documents whose keys start alike."""
    made = Calc(project="Sources")
    made.document("S", title="Structural set", author="A. Person")
    made.document("S 2", title="Second set", revision="3", date="2026-10-02")
    made.document("H-2", title="Hazard printout")
    return made


@pytest.mark.parametrize(
    ("text", "document", "where", "entry"),
    [
        ("S 2 p. 4", "S 2", "p. 4", "Second set, revision 3, 2026-10-02"),
        ("S 2", "S 2", "", "Second set, revision 3, 2026-10-02"),
        ("S 21 p. 4", "S", "21 p. 4", "Structural set, A. Person"),
        ("S  grid A ", "S", "grid A", "Structural set, A. Person"),
        ("H-2", "H-2", "", "Hazard printout"),
    ],
)
def test_longest_key_wins(calc: Calc, text: str, document: str, where: str, entry: str) -> None:
    source = calc.sources.read(text, "test")
    assert (source.document, source.where, source.entry, source.standard) == (document, where, entry, False)
    assert source.text() == f"{document} {where}".strip()


def test_standard_is_declared_by_itself(calc: Calc) -> None:
    source = calc.sources.read("ASCE 7-16 12.8.7", "test")
    assert (source.document, source.where, source.standard) == ("ASCE/SEI 7-16", "12.8.7", True)


@pytest.mark.parametrize("text", ["H-22 p. 1", "h-2 p. 1", "p. 4", "ASCE 7-22 12.8"])
def test_unknown_key_lists_the_known(calc: Calc, text: str) -> None:
    with pytest.raises(UnknownNameError, match=rf"^test: document in source '{text}' is not known; known: .*H-2"):
        calc.sources.read(text, "test")
    with pytest.raises(InputError, match="test: source: needed a declared document and a place in it; given nothing"):
        calc.sources.read("  ", "test")


def test_document_twice(calc: Calc) -> None:
    calc.document("H-2", title="Hazard printout")
    with pytest.raises(DuplicateError, match="document 'H-2' is declared twice with different entries"):
        calc.document("H-2", title="Hazard printout", revision="2")


def test_revisions(calc: Calc) -> None:
    row = {"date": "2026-12-01", "reason": "first comments", "by": "A. Person"}
    calc.revise("B", **row)
    calc.revise("B", **row)
    assert calc.revisions == [{"revision": "B", "sheets": "", **row}]
    with pytest.raises(DuplicateError, match="revision 'B' is in the revision table already, with another row"):
        calc.revise("B", date="2026-12-02", reason="second comments", by="A. Person")


@pytest.mark.parametrize("blank", ["revision", "date", "reason", "by"])
def test_a_revision_without_a_reason_is_refused(blank: str, calc: Calc) -> None:
    row = {"revision": "B", "date": "2026-12-01", "reason": "first comments", "by": "A. Person"} | {blank: " "}
    with pytest.raises(InputError, match=f"revise {blank}: needed text; given blank"):
        calc.revise(**row)
    assert calc.revisions == []


# confirmation


def to_confirm(calc: Calc) -> set[str]:
    """Tables and clauses that are still to be confirmed."""
    return {item.id.removeprefix("confirm-") for item in assemble(calc).open_items if item.group == "confirm"}


def test_one_open_item_for_each_table_or_clause() -> None:
    calc = Building(second=False).calc()
    items = [item for item in assemble(calc).open_items if item.group == "confirm"]
    assert len(items) == len({item.id for item in items}) > 15
    assert items[0] == OpenItem(
        "confirm-Table 11.4-1", "F_a", "ASCE/SEI 7-16 Table 11.4-1", "holder of the standard", "confirm"
    )


def test_confirmed_before_and_after() -> None:
    calc = Building(second=False).calc()
    before = to_confirm(calc)
    assert calc["F_a"].line.source and calc["F_a"].line.source.confirmed is None
    calc.confirm("Table 11.4-1", "office copy 3", "A. Person", "2026-10-02")
    entry = "confirmed in office copy 3 by A. Person, 2026-10-02"
    assert calc["F_a"].line.source and calc["F_a"].line.source.confirmed == entry
    assert assemble(calc).line("F_a").source.confirmed == entry  # type: ignore[union-attr]
    assert before - to_confirm(calc) == {"Table 11.4-1"}
    # a line written later takes it too
    first = Calc(project="Later")
    first.document("H-2", title="Hazard printout")
    first.confirm("Table 11.4-1", "office copy 3", "A. Person", "2026-10-02")
    first.givens("S_S, 0.6, H-2\nS_1, 0.22, H-2\nT_L, 8 s, H-2\nsite_class, C, H-2")
    first.asce7.design_spectrum()
    assert first["F_a"].line.source and first["F_a"].line.source.confirmed == entry
    assert first["S_DS"].line.source and first["S_DS"].line.source.confirmed is None


def test_confirmation_changes_no_content() -> None:
    calc = Building(second=False).calc()
    before = calc["F_a"].line.content
    calc.confirm("Table 11.4-1", "office copy 3", "A. Person", "2026-10-02")
    assert calc["F_a"].line.content == before and calc.lines.stale() == {}


def test_confirmation_that_meets_no_line_is_an_open_item() -> None:
    calc = Building(second=False).calc()
    calc.confirm("Table 11.4-9", "office copy 3", "A. Person", "2026-10-02")
    found = [item for item in assemble(calc).open_items if item.id.startswith("confirmation")]
    assert [(item.id, item.group) for item in found] == [("confirmation-Table 11.4-9", "open")]
    assert found[0].text == "the confirmation of 'Table 11.4-9' meets no line of this calculation"


REGISTER = """\
standard,edition,table_or_clause,document,by,date
ASCE/SEI 7-16,ASCE 7-16,Table 11.4-1,office copy 3,A. Person,2026-10-02
ASCE/SEI 7-16,ASCE 7-16,12.8.1,office copy 3,A. Person,2026-10-02
ASCE/SEI 7-10,ASCE 7-10,12.8.2,office copy 1,A. Person,2016-10-02
"""


def test_office_register(monkeypatch: pytest.MonkeyPatch) -> None:
    from calckit.core import settings

    monkeypatch.setattr(settings, "current", lambda: Settings(confirmed=REGISTER))
    calc = Building(second=False).calc()
    assert set(calc.sources.confirmed) == {"Table 11.4-1", "12.8.1"}, "the other edition stays out"
    assert {"Table 11.4-1", "12.8.1"}.isdisjoint(to_confirm(calc)) and "12.8.2" in to_confirm(calc)


def test_register_with_another_header(calc: Calc) -> None:
    with pytest.raises(InputError, match="header: needed standard,edition,table_or_clause,document,by,date; given a,b"):
        calc.sources.read_register("a,b\n1,2\n")
    with pytest.raises(InputError, match="confirm by: needed text; given blank"):
        calc.sources.read_register(REGISTER.replace("A. Person", "", 1))


# open items


def open_items(calc: Calc) -> list[tuple[str, str, str]]:
    """Line, text and owner of each open item that is no confirmation."""
    return [(item.line, item.text, item.owner) for item in assemble(calc).open_items if item.group == "open"]


def test_note_with_an_owner_stays_open_until_another_closes_it(calc: Calc) -> None:
    calc.note("N-wind", "Compare with wind.", owner="engineer of record")
    calc.note("N-plain", "Nothing to close.")
    assert open_items(calc) == [("N-wind", "Compare with wind.", "engineer of record")]
    calc.note("N-answer", "Wind is lower.", closes="N-wind")
    assert open_items(calc) == []


def test_note_in_a_part_is_closed_by_its_line_id(calc: Calc) -> None:
    x = calc.part("X", "East-west")
    x.note("N-wind", "Compare with wind.", owner="originator")
    x.note("N-answer", "Wind is lower.", closes="X.N-wind")
    assert open_items(calc) == []


def test_note_that_names_another_id_closes_nothing(calc: Calc) -> None:
    calc.note("N-wind", "Compare with wind.", owner="originator")
    calc.note("N-answer", "Wind is lower.", closes="N-wnid")
    assert open_items(calc) == [("N-wind", "Compare with wind.", "originator")]


def test_assumption_is_open_until_it_is_closed(calc: Calc) -> None:
    calc.assume("h_n", "62 ft", basis="drawings not issued", owner="architect")
    assert open_items(calc) == [("h_n", "assumption h_n is unconfirmed: drawings not issued", "architect")]
    calc.note("N-1", "Confirmed by drawing S 2.", closes="h_n")
    assert open_items(calc) == []


def test_answer_without_word_or_basis_is_open(calc: Calc) -> None:
    calc.answer("H1a")
    calc.answer("H1b", "no")
    calc.answer("H2", "no", basis="rectangular plan")
    calc.answer("H3", "no", source="S 2 p. 3")
    assert [line for line, *_ in open_items(calc)] == ["H1a", "H1b"]
    assert open_items(calc)[0][1].startswith("H1a is not answered: irregularity H1a")
    assert open_items(calc)[1][1].startswith("H1b is answered without a basis: irregularity H1b")


def test_check_that_is_not_met_or_not_made_is_open(calc: Calc) -> None:
    calc.given("V", "100 kip", source="H-2")
    calc.given("W", "90 kip", source="H-2")
    calc.check("V", "<=", "W", title="Own limit")
    calc.check("V", "<=", "V_applied", title="Not yet")
    assert [(line, owner) for line, _, owner in open_items(calc)] == [
        ("own_limit", "originator"), ("not_yet", "originator"),
    ]  # fmt: skip
    assert open_items(calc)[1][1].startswith("Not yet: NOT CHECKED, missing V_applied")
