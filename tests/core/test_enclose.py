"""Pages of documents bound behind the calculation, and what a result rests on: what the kernel hands over."""

from __future__ import annotations

from pathlib import Path

import pytest

from calckit import Calc
from calckit.core import record, settings
from calckit.core.assemble import assemble
from calckit.core.record import Enclosure
from calckit.errors import DuplicateError, InputError, UnknownNameError

ALT = "Printout of the hazard values of the site."


@pytest.fixture
def calc(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Calc:
    """A calculation with a declared document, in a folder that holds a PDF and a text file."""
    monkeypatch.chdir(tmp_path)
    (tmp_path / "files").mkdir()
    (tmp_path / "files" / "hazard.pdf").write_bytes(b"%PDF-1.7\n")
    (tmp_path / "notes.txt").write_text("no PDF", encoding="utf-8")
    calc = Calc(project="Demo", number="D-1")
    calc.document("H-2", title="Hazard printout", date="2026-10-02")
    return calc


def test_enclosure_is_recorded_and_its_file_travels(calc: Calc) -> None:
    calc.enclose("H-2", "files/hazard.pdf", pages="1-3, 7", alt=ALT)
    made = assemble(calc)
    assert made.enclosures == [Enclosure("H-2", "files/hazard.pdf", "1-3, 7", ALT)]
    assert record.from_json(made.to_json()).enclosures == made.enclosures
    assert calc.files == {"files/hazard.pdf": b"%PDF-1.7\n"}


def test_record_without_enclosures_is_read(calc: Calc) -> None:
    text = assemble(calc).to_json()
    assert ' "enclosures": [],\n' in text
    assert record.from_json(text.replace(' "enclosures": [],\n', "")).enclosures == []


def test_enclosed_again_it_replaces(calc: Calc) -> None:
    calc.enclose("H-2", "files/hazard.pdf", pages="1", alt=ALT)
    calc.enclose("H-2", "files/hazard.pdf", pages="2", alt=ALT)
    assert [enclosure.pages for enclosure in calc.enclosures.values()] == ["2"]


def test_twice_in_a_clean_run_is_refused(calc: Calc, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(calc.lines, "settings", settings.Settings(folder=tmp_path))
    calc.enclose("H-2", "files/hazard.pdf", pages="1", alt=ALT)
    with pytest.raises(DuplicateError, match="document 'H-2' is enclosed twice; name all its pages in one call"):
        calc.enclose("H-2", "files/hazard.pdf", pages="2", alt=ALT)


def test_document_must_be_declared(calc: Calc) -> None:
    message = r"enclose: document 'H-3' is not known; known: H-2; cure: declare it: calc\.document"
    with pytest.raises(UnknownNameError, match=message):
        calc.enclose("H-3", "files/hazard.pdf", pages="1", alt=ALT)


def test_everything_wrong_is_said_at_once(calc: Calc) -> None:
    with pytest.raises(InputError, match="enclose H-2") as caught:
        calc.enclose("H-2", "files/none.pdf", pages="4-1", alt=" ")
    assert [fault.symbol for fault in caught.value.faults] == ["alt", "pages", "files/none.pdf"]
    assert calc.enclosures == {}
    message = r"file: needed a PDF; given notes\.txt, which is none; cure: print the document to PDF"
    with pytest.raises(InputError, match=message):
        calc.enclose("H-2", "notes.txt", pages="1", alt=ALT)


@pytest.mark.parametrize(
    ("pages", "numbers"), [("1", [1]), ("1-4", [1, 2, 3, 4]), (" 2 , 5 - 6,9 ", [2, 5, 6, 9]), ("3-3", [3])]
)
def test_pages_read(pages: str, numbers: list[int]) -> None:
    assert Enclosure("H-2", "a.pdf", pages, ALT).page_numbers() == numbers


@pytest.mark.parametrize("pages", ["", "0", "0-2", "2-1", "1,1", "1-3, 2", "3, 1", "1,", "one", "1-", "-2", "1.5", "²"])
def test_pages_refused(calc: Calc, pages: str) -> None:
    message = r'pages: needed pages and ranges, each page once and rising; .*as in "1-3, 7"'
    with pytest.raises(InputError, match=message):
        calc.enclose("H-2", "files/hazard.pdf", pages=pages, alt=ALT)


# what a result rests on


@pytest.fixture
def chain() -> Calc:
    """A calculation in which a list, a check and two parts take part."""
    calc = Calc(project="Demo", number="D-1")
    calc.document("S-1", title="Sketch")
    calc.note("N-1", "rests on nothing")
    calc.given("V", "100 kip", source="S-1")
    calc.levels("level, h_x [ft], w_x [kip]\nRoof, 24, 95\n2, 12, 120", source="S-1")
    x = calc.part("X", "East-west")
    x.line("M_r", "V*level(h_x, 'Roof')", unit="kip*ft", meaning="rough moment")
    x.line("M_h", "M_r/2", unit="kip*ft", meaning="half of it")
    x.check("M_h", "<=", "M_r", title="Demonstration", id="demo")
    return calc


def test_dependency_is_the_lines_above_a_result(chain: Calc) -> None:
    assert chain.dependency("X.demo") == {
        "lines": {
            "V": (2, "V", "100 kip"),
            "h_x": (3, "h_x", "12 to 24 ft"),
            "X.M_r": (6, "X.M_r", "2400 kip·ft"),
            "X.M_h": (7, "X.M_h", "1200 kip·ft"),
            "X.demo": (8, "X: Demonstration", "OK"),
        },
        "edges": [
            ("V", "X.M_r"), ("h_x", "X.M_r"), ("X.M_r", "X.M_h"), ("X.M_h", "X.demo"), ("X.M_r", "X.demo"),
        ],
        "result": "X.demo",
    }  # fmt: skip


def test_dependency_of_an_input_is_itself(chain: Calc) -> None:
    assert chain.dependency("V") == {"lines": {"V": (2, "V", "100 kip")}, "edges": [], "result": "V"}


def test_dependency_of_what_is_not_there(chain: Calc) -> None:
    with pytest.raises(UnknownNameError, match=r"line 'X\.M_q' is not known; known: X\.M_h, X\.M_r"):
        chain.dependency("X.M_q")
