"""Bad input: each message names the symbol, what is needed, what was given and the cure; nothing is written."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from typing import Any

import pytest

from calckit import Calc
from calckit.core import display
from calckit.core.book import Book, Entry
from calckit.core.calc import current
from calckit.errors import (
    DigitsError,
    DuplicateError,
    InputError,
    ScopeError,
    UnitError,
    UnknownNameError,
)  # fmt: skip
from tests.building import Building
from tests.refusals import UNITS, refused

S_S = r"S_S \(mapped risk-targeted spectral ordinate at 0\.2 s, as a fraction of g\)"
H_N = r"h_n \(structural height\)"


@pytest.fixture
def calc() -> Calc:
    """A calculation with one document."""
    made = Calc(project="Bad input")
    made.document("S-201", title="Framing elevations")
    return made


# values


@pytest.mark.parametrize(
    ("name", "value", "message"),
    [
        ("h_n", "62", H_N + r': needed a length with its unit, above 0; given 62; cure: add the unit: "62 ft"'),
        ("h_n", 62, H_N + r': needed a length with its unit, above 0; given 62; cure: add the unit: "62 ft"'),
        ("h_n", "62 s", H_N + r": needed a length with its unit, above 0; given 62 s; cure: use a unit like ft"),
        ("h_n", "-62 ft", H_N + r": needed a finite number above 0; given -62 ft; cure: correct the value"),
        ("h_n", "0 ft", H_N + r": needed a finite number above 0; given 0 ft; cure: correct the value"),
        ("h_n", "tall", H_N + r': needed a length with its unit, above 0; given tall; cure: write it like "62 ft"'),
        ("h_n", "12 meters", H_N + rf": needed a length with its unit, above 0; given 12 meters; cure: {UNITS}"),
        ("V", "12 kNm", rf"V \(base shear\): needed a force with its unit, above 0; given 12 kNm; cure: {UNITS}"),
        ("S_S", 7, S_S + r": needed a finite number above 0 to 5; given 7; cure: correct the value"),
        ("S_S", "-0.1", S_S + r": needed a finite number above 0 to 5; given -0\.1; cure: correct the value"),
        ("S_S", math.nan, S_S + r": needed a finite number above 0 to 5; given nan; cure: correct the value"),
        ("S_S", "nan", S_S + r": needed a plain number, above 0 to 5; given nan; cure: write it like 1\.25"),
        ("S_S", True, S_S + r": needed a plain number, above 0 to 5; given True; cure: write it like 1\.25"),
        ("S_S", None, S_S + r": needed a plain number, above 0 to 5; given None; cure: write it like 1\.25"),
        ("S_S", "none", S_S + r': needed a reason after "none:"; given none; cure: write "none: why"'),
        ("S_1", math.inf, r"S_1 .*: needed a finite number above 0 to 5; given inf; cure: correct the value"),
        ("T_analysis", "0 s", r"T_analysis \(period .*\): needed a finite number above 0 to 30; given 0 s; cure"),
        ("T_L", "1e9 s", r"T_L .*: needed a finite number above 0 to 30; given 1e\+09 s; cure: correct the value"),
        ("site_class", "G", r"site_class \(site class\): needed one of A, B, .*; given G; cure: did you mean 'A'\?"),
        ("site_class", "D defualt", r"site_class .*; given D defualt; cure: did you mean 'D default'\?"),
        ("site_class", " ", r"site_class \(site class\): needed a word; given blank; cure: write one of A, B"),
    ],
)
def test_value(calc: Calc, name: str, value: Any, message: str) -> None:
    refused(calc, InputError, f"^value: {message}", lambda: calc.given(name, value, source="S-201"))


def test_range_is_that_of_the_unit_typed(calc: Calc) -> None:
    message = "needed a finite number above 0 to 30 s; given 40000 ms; cure: correct the value"
    refused(calc, InputError, message, lambda: calc.given("T_analysis", "40000 ms", source="S-201"))
    assert calc.given("T_analysis", "2900 ms", source="S-201").quantity.to("s").value == 2.9


def test_all_bad_rows_of_a_pasted_table_at_once(calc: Calc) -> None:
    text = (
        "S_S, 7, S-201\nS_1, nan, S-201\nh_n, 62, S-201\nsite_class, G, S-201\nT_L, 8 s, X-1\nrisk_category, II, S-201"
    )
    error = refused(calc, InputError, "^givens: S_S", lambda: calc.givens(text))
    assert isinstance(error, InputError)
    assert [fault.symbol for fault in error.faults] == ["S_S", "S_1", "h_n", "site_class", "row 5 (T_L)"]
    assert "document in source 'X-1' is not known; known: S-201, ASCE 7-16" in str(error)


def test_rows_of_a_pasted_table(calc: Calc) -> None:
    message = r"row 1: needed symbol, value, source; given S_S, 7\n  row 2: needed symbol, value, source; given S_1,"
    refused(calc, InputError, message, lambda: calc.givens("S_S, 7\nS_1, 0.2, S-201, x"))
    error = refused(calc, InputError, "^answers", lambda: calc.answers("H1a; maybe; x\nH9; yes; y\nrho; 2; z"))
    assert isinstance(error, InputError)
    assert [fault.symbol for fault in error.faults] == ["H1a", "row 2 (H9)", "rho"]


def test_symbol_of_no_standard(calc: Calc) -> None:
    message = r"S_s: needed a meaning, .*; given none; cure: add meaning=\"\.\.\.\", or did you mean .*S_S.*\?"
    refused(calc, InputError, message, lambda: calc.given("S_s", "0.6", source="S-201"))
    message = r"S__s: needed stem, one underscore, .*; given 'S__s'; cure: write it like \"V_x\""
    refused(calc, InputError, message, lambda: calc.given("S__s", "0.6", source="S-201", meaning="a symbol"))
    message = r"lambda: needed stem, .*\(a Python keyword takes a trailing underscore\)"
    refused(calc, InputError, message, lambda: calc.given("lambda", "0.6", source="S-201", meaning="a symbol"))


def test_unit_typed_wrong_is_not_read_as_words(calc: Calc) -> None:
    message = rf"M_r \(moment\): needed a number and a unit the kit knows; given 12 kNm; cure: {UNITS}"
    refused(calc, UnitError, message, lambda: calc.given("M_r", "12 kNm", source="S-201", meaning="moment"))
    assert calc.given("d_k", "concrete on deck", source="S-201", meaning="deck").value == "concrete on deck"


# sources


def test_source(calc: Calc) -> None:
    message = (
        r"given h_n: document in source 'S-202 grid A' is not known; known: S-201, ASCE 7-16; "
        r'cure: declare it: calc\.document\("KEY", title=\.\.\.\)'
    )
    refused(calc, UnknownNameError, message, lambda: calc.given("h_n", "62 ft", source="S-202 grid A"))
    message = (
        H_N + r': needed a source; given nothing; cure: name a document, or use assume\("h_n", \.\.\., basis=\.\.\.\)'
    )
    refused(calc, InputError, message, lambda: calc.given("h_n", "62 ft"))
    refused(calc, InputError, H_N + r": needed a basis", lambda: calc.assume("h_n", "62 ft", basis=" "))


def test_key_is_not_the_start_of_a_longer_word(calc: Calc) -> None:
    refused(calc, UnknownNameError, "'S-2011 p. 4'", lambda: calc.given("h_n", "62 ft", source="S-2011 p. 4"))


# levels

LEVELS = r"^levels: "


@pytest.mark.parametrize(
    ("text", "messages"),
    [
        ("level, h_x [ft], w_x [kip]\n2, 24, 0\n1, 12, -5",
         [r"row 1 \(2\), column w_x: needed a finite number above 0; given 0 kip",
          r"row 2 \(1\), column w_x: needed a finite number above 0; given -5 kip; cure: correct the value"]),
        ("level, h_x [ft], w_x [kip]\n3, 36, 1\n2, 24, 1\n1, 24, 1",
         [r"row 3 \(1\), column height: needed heights that only rise or only fall; given the same height as the row"]),
        ("level, h_x [ft], w_x [kip]\n3, 36, 1\n2, 24, 1\n1, 30, 1",
         [r"row 3 \(1\), column height: needed heights that only rise or only fall; given a height that runs"]),
        ("level, h_x [ft], w_x [kip]\n3, 36\n2, abc, 10\n1, 12,\n1, 12, x",
         [r"row 1 \(3\), column row: needed 3 entries; given 2 entries",
          r"row 2 \(2\), column h_x: needed a length with its unit, above 0; given abc ft",
          r"row 3 \(1\), column w_x: needed a number; given blank; cure: fill the cell",
          r"row 4 \(1\), column level: needed a name used once; given a name used before",
          r"row 4 \(1\), column w_x: needed a force with its unit, above 0; given x kip"]),
        ("lvl, h_x, w_x [kipp], foo [ft]\n3, 36, 10, 1",
         [r"header, column 1: needed \"level\"; given 'lvl'", r"header, column 2: needed symbol \[unit\]",
          rf"header, column 3: needed a unit the kit knows; given kipp; cure: {UNITS}",
          r"header, column 4: needed symbol \[unit\] with a known symbol; given 'foo \[ft\]'; cure: write one of"]),
        ("level, h_x [kip], w_x [ft]\n3, 36, 10",
         [r"row 1 \(3\), column h_x: needed a length with its unit, above 0; given 36 kip; cure: use a unit like ft",
          r"row 1 \(3\), column w_x: needed a force with its unit, above 0; given 10 ft; cure: use a unit like kip"]),
        ("level, w_x [kip]\n3, 36", [r"header: needed exactly one of h_x, elevation, h_sx; given none"]),
        ("level, h_x [ft], h_sx [ft], w_x [kip], w_x [kip]\n3, 36, 12, 1, 1",
         [r"header: needed exactly one of h_x, elevation, h_sx; given h_x, h_sx",
          r"header: needed each column once; given w_x twice"]),
        ("level, elevation [ft], w_x [kip]\n3, 36, 10\n2, 24, 10", [r"needed a last row named base with its"]),
        ("level, elevation [ft], w_x [kip]\n3, 36, 10\nbase, 40,", [r"row 1 \(3\), column elevation: needed above"]),
        ("level, h_x [ft], w_x [kip]\n3, 36, 10\nbase, 2, 10", [r"a row named base only with the column elevation"]),
        ("", [r"needed a header and a row each; given no text; cure: paste the table"]),
        ("level, h_x [ft], w_x [kip]", [r"needed a row for each level under the header; given no rows"]),
        ("level, h_x [ft], Z.delta_xe [in]\n1, 12, 0.1", [r"header, column 3: needed symbol \[unit\] with a known"]),
        ("level, h_x [ft], X.delta_xe [in]\n1, 12, -0.1", [r"column X\.delta_xe: needed .* not less than 0;"]),
    ],
)  # fmt: skip
def test_levels(calc: Calc, text: str, messages: Sequence[str]) -> None:
    calc.part("X")
    error = refused(calc, InputError, LEVELS, lambda: calc.levels(text, source="S-201"))
    assert isinstance(error, InputError)
    assert len(error.faults) == len(messages)
    for fault, message in zip(error.faults, messages, strict=True):
        assert re.search(message, str(fault)), str(fault)


def test_levels_from_a_file(calc: Calc, tmp_path: Any, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    message = "no.csv: needed a readable file beside the notebook; given No such file or directory"
    refused(calc, InputError, message, lambda: calc.levels("@no.csv", source="S-201"))
    message = "needed a path inside the notebook's folder; given ../other.csv"
    refused(calc, InputError, message, lambda: calc.levels("@../other.csv", source="S-201"))


# one id, one line


def test_id_twice_in_one_run(calc: Calc) -> None:
    calc.given("h_n", "62 ft", source="S-201")
    message = "line 'h_n' is written twice in one run of a cell; give one of them another id"
    refused(calc, DuplicateError, message, lambda: calc.given("h_n", "64 ft", source="S-201"))
    calc.document("S-201", title="Framing elevations")
    with pytest.raises(DuplicateError, match="document 'S-201' is declared twice with different entries"):
        calc.document("S-201", title="Other drawings")


# title block, notes, overrides


def test_title_block_all_at_once() -> None:
    with pytest.raises(InputError, match=r"^Calc: project") as caught:
        Calc(project=" ", units="XX", paper="A3", status="final", date="yesterday", supplements=["a"], firm=3)  # type: ignore[arg-type, list-item]
    assert {fault.symbol for fault in caught.value.faults} == {
        "project", "units", "paper", "status", "date", "supplements", "firm",
    }  # fmt: skip
    with pytest.raises(UnknownNameError, match="standard 'ASCE 7-05' is not known; known: ASCE 7-16"):
        Calc(project="Demo", standard="ASCE 7-05")


def test_words_that_must_not_be_blank(calc: Calc) -> None:
    refused(
        calc,
        InputError,
        "override C_s: needed a reason; .*\n .*needed a name",
        lambda: calc.override("C_s", 0.1, reason="", by=" "),
    )
    refused(calc, InputError, "judge J-1: needed a statement.*\n.*needed a basis", lambda: calc.judge("J-1", "", " "))
    refused(calc, InputError, "note N-1: needed text", lambda: calc.note("N-1", " "))
    refused(calc, InputError, "N 1: needed an id of letters, digits, - and _", lambda: calc.note("N 1", "text"))
    refused(
        calc, InputError, "confirm by: needed text", lambda: calc.confirm("12.8.1", "the standard", "", "2026-10-02")
    )
    refused(
        calc, InputError, "revise reason: needed text", lambda: calc.revise("B", date="2026-10-02", reason="", by="A")
    )
    refused(calc, InputError, "figure alt: needed text", lambda: calc.figure(None, caption="A figure", alt=""))
    refused(
        calc, InputError, "needed a matplotlib Figure; given NoneType", lambda: calc.figure(None, caption="A", alt="B")
    )
    with pytest.raises(InputError, match="title: needed text; given blank"):
        calc.document("G-1", title=" ")
    assert "G-1" not in calc.sources.documents


def test_override(calc: Calc) -> None:
    message = r"C_s \(seismic response coefficient\): needed a finite number above 0 to 5; given 7"
    refused(calc, InputError, message, lambda: calc.override("C_s", 7, reason="a reason", by="A. Person"))
    message = "override C_s: document in source 'Z-9' is not known"
    refused(calc, UnknownNameError, message, lambda: calc.override("C_s", 0.1, reason="r", by="b", document="Z-9"))
    assert calc.overrides == {}


def test_part(calc: Calc) -> None:
    for id_, message in (
        ("1X", "needed an id of letters and digits"),
        ("V", "needed an id that is no symbol of the standard"),
    ):
        refused(calc, InputError, message, lambda id_=id_: calc.part(id_))
    assert calc.parts == {}


def test_name_that_is_not_there(calc: Calc) -> None:
    calc.given("h_n", "62 ft", source="S-201")
    refused(calc, UnknownNameError, "line 'h_m' is not known; known: h_n", lambda: calc["h_m"])
    refused(calc, UnknownNameError, "question 'H1z' is not known; known: H1", lambda: calc.answer("H1z", "yes"))


# steps of the standard


def test_missing_inputs_of_a_step_together(calc: Calc) -> None:
    error = refused(calc, InputError, r"^asce7\.base_shear: S_DS", lambda: calc.asce7.base_shear())
    assert isinstance(error, InputError)
    assert [fault.symbol for fault in error.faults] == ["S_DS", "S_D1", "S_1", "T_L", "T_S", "R", "I_e", "T", "W"]
    W, T = error.faults[-1], error.faults[-2]
    assert str(W) == (
        "W (effective seismic weight): needed a number in kip; given nothing; "
        "cure: supply it with asce7.seismic_weight()"
    )
    assert (
        str(T)
        == "T (period used for strength): needed a number in s; given nothing; cure: supply it with asce7.period()"
    )


@pytest.mark.parametrize(
    ("step", "symbols"),
    [
        ("design_spectrum", ["S_S", "S_1", "T_L", "site_class"]),
        ("design_category", ["risk_category", "S_DS", "S_D1", "S_S", "S_1"]),
        ("system", ["system"]),
        ("approximate_period", ["system"]),
        ("period", ["S_D1", "T_a"]),
        ("seismic_weight", ["w_x"]),
        ("vertical_distribution", ["T", "V", "h_x", "w_x", "h_sx"]),
        ("drift", ["risk_category", "drift_class"]),
        ("stability", ["C_d"]),
    ],
)
def test_every_step_without_inputs(calc: Calc, step: str, symbols: list[str]) -> None:
    error = refused(calc, InputError, "needed .*; given nothing; cure: supply it with", getattr(calc.asce7, step))
    assert isinstance(error, InputError)
    assert [fault.symbol for fault in error.faults] == symbols
    assert all(fault.meaning and fault.cure for fault in error.faults)


def test_system_that_is_not_in_the_table(calc: Calc) -> None:
    calc.given("system", "special steel moment frame", source="S-201")
    message = (
        r"system \(seismic force-resisting system\): needed a row of Table 12\.2-1; given special steel moment frame; "
        r"cure: near names: .*moment frame: steel special moment frame"
    )
    refused(calc, InputError, message, calc.asce7.system)


def test_system_named_without_its_family_where_it_is_not_unique(calc: Calc) -> None:
    calc.given("system", "steel special moment frame", source="S-201")
    message = (
        "needed one row of Table 12.2-1; given steel special moment frame; cure: write one of moment frame: .*; dual"
    )
    try:
        calc.asce7.system()
    except InputError as error:
        assert re.search(message, str(error))
    else:
        assert calc["R"].value == 8


def hazard(
    site_class: str, S_1: float, S_S: float = 0.5, supplements: Sequence[int] | None = None, exception: str = ""
) -> Calc:
    """A calculation with a hazard."""
    made = Calc(project="Hazard", supplements=supplements)
    made.document("H-2", title="Hazard printout")
    made.givens(f"S_S, {S_S}, H-2\nS_1, {S_1}, H-2\nT_L, 8 s, H-2\nsite_class, {site_class}, H-2")
    if exception:
        made.answer("study_exception", exception, "as the study says")
    return made


@pytest.mark.parametrize(
    ("made", "message"),
    [
        (
            ("F", 0.2),
            r"site class F: a site response analysis is needed \(11\.4\.8\); set hazard_basis to site-specific",
        ),
        (("E", 0.2), r"site class E with S_1 above 0\.1, supplements not answered: F_v is undefined"),
        (("E", 0.2, 0.5, ()), r"site class E with S_1 above 0\.1, supplements without Supplement 1"),
        (("E", 0.25, 0.5, (1,)), r"site class E with S_1 not less than 0\.2: .*answer study_exception \"exception 3\""),
        (("E", 0.05, 0.9), r"site class E with S_S between 0\.75 and 1\.0: Table 11\.4-1 gives no entry"),
        (("E", 0.05, 1.2), r"site class E with S_S not less than 1\.0: .*answer study_exception \"exception 1\""),
    ],
)
def test_site_class_that_needs_a_study(made: tuple[Any, ...], message: str) -> None:
    calc = hazard(*made)
    refused(calc, ScopeError, message, calc.asce7.design_spectrum)


@pytest.mark.parametrize(
    ("made", "message"),
    [
        (
            ("D", 0.3, 0.5, (), "exception 3"),
            "needed 'exception 2'; given 'exception 3' with supplements none in force",
        ),
        (("D", 0.3, 0.5, (3,), "exception 2"), r"needed 'S_M1 increased'; given 'exception 2' with supplements \[3\]"),
        (("C", 0.3, 0.5, (3,), "study made"), 'cure: set hazard_basis to "site-specific" and give its S_DS and S_D1'),
    ],
)
def test_exception_that_does_not_fit_the_supplements(made: tuple[Any, ...], message: str) -> None:
    calc = hazard(*made)
    refused(calc, InputError, r"study_exception: .*" + message, calc.asce7.design_spectrum)


def test_periods_of_a_spectrum(calc: Calc) -> None:
    calc = hazard("C", 0.26)
    calc.asce7.design_spectrum()
    message = r"T_r \(period at which the spectrum is read\): needed a period not below 0, in seconds; given -1"
    refused(calc, InputError, message, lambda: calc.asce7.spectrum_ordinates([0.0, -1, math.nan]))
    refused(
        calc, InputError, "periods: needed at least one period; given none", lambda: calc.asce7.spectrum_ordinates([])
    )


def test_steps_write_all_or_nothing(monkeypatch: pytest.MonkeyPatch) -> None:
    # the building is worked again and again, each time stopped at another line: what stands is always whole steps
    steps: list[int] = []
    monkeypatch.setattr(display, "show", lambda *shown: steps.append(len(written(current()))))
    whole = written(Building().calc())
    assert len(steps) > 25 and len(whole) > 110
    write, left = Book.write, 0

    def stops(book: Book, entry: Entry) -> Entry:
        nonlocal left
        left -= 1
        made = write(book, entry)
        if left == 0:
            raise DigitsError(f"planted at {entry.line.id}")
        return made

    monkeypatch.setattr(Book, "write", stops)
    inside = 0
    for left in range(1, sum(kind == "line" for kind, _ in whole), 3):
        last = left
        with pytest.raises(DigitsError, match="planted"):
            Building().calc()
        found = written(current())
        assert found == whole[: len(found)]
        assert len(found) in {0, *steps}
        inside += sum(kind == "line" for kind, _ in found) < last - 1
    assert inside > 5, "no step was stopped halfway"


def written(calc: Calc | None) -> list[tuple[str, str]]:
    """Lines and tables of a calculation in order."""
    assert calc
    lines = calc.lines
    kept = [(kind, id_) for _, kind, id_ in lines.blocks]
    assert {id_ for kind, id_ in kept if kind == "line"} == set(lines.entries)
    assert {id_ for kind, id_ in kept if kind == "table"} == set(lines.tables)
    return kept
