"""Rows B20, B22 and S1 to S22 of the requirements, in the building template issued with its last steps.

What the template does not call itself is added in a cell behind it. The data are the template's own, invented.
"""

from __future__ import annotations

import json
import re
from functools import cache
from html import unescape
from pathlib import Path
from typing import Any

import pytest

from calckit.core.record import Line, Record
from calckit.report import notebook
from calckit.report.issue import Report, produce
from calckit.report.run import Settings
from tests.report.issued_sample import squeezed
from tests.report.sheets import Sheets
from tests.template_runs import TEMPLATE

CALLS = {
    "report_class": 'calc.given("report_class", "C", source="G-1 section 5.2")',
    "site_report": "calc.asce7.site_report()",
    "second_estimate": "x.asce7.second_estimate()\ny.asce7.second_estimate()",
    "end_displacements": (
        'x.rows("ends", "level, d_1plus [in], d_2plus [in]\\nRoof, 2.4, 2.0\\n6, 2.0, 1.8\\n5, 1.6, 1.5\\n'
        '4, 1.2, 1.1\\n3, 0.8, 0.7\\n2, 0.4, 0.3", source="B-1")\nx.asce7.end_displacements()'
    ),
    "Q21": 'calc.answer("Q21", "n/a", basis="steel frames, no section cracks")',
    "reviewers_questions": "calc.asce7.reviewers_questions()",
}
"""What the template may call itself already -> the lines that do it."""


@cache
def report() -> Report:
    """The report, made once."""
    data: dict[str, Any] = json.loads(TEMPLATE.read_text(encoding="utf-8"))
    whole = json.dumps(data)
    added = "\n".join(text for name, text in CALLS.items() if name not in whole)
    cell = {"id": "last-steps", "cell_type": "code", "metadata": {}, "source": added, "outputs": []}
    data["cells"].append({**cell, "execution_count": None})
    return produce(notebook.parse(json.dumps(data), TEMPLATE.stem, Path()), Settings())


def record() -> Record:
    """The record of the report."""
    return report().record


@cache
def sheets() -> Sheets:
    """The PDF taken apart."""
    return Sheets(report().files["pdf"])


@cache
def page() -> str:
    """The source of the HTML file without its style sheet and attachments."""
    text = re.sub(r"<style>.*?</style>", "", report().files["html"].decode(), flags=re.DOTALL)
    return re.sub(r'href="data:[^"]*"', 'href=""', text)


@cache
def texts() -> tuple[str, str]:
    """The words of both files, without blanks."""
    pdf = "".join(squeezed(sheet.extract_text()) for sheet in sheets().reader.pages)
    return pdf, squeezed(unescape(re.sub(r"<[^>]*>", " ", page())))


def note(number: int) -> Line:
    """The note of one question."""
    found = [line for line in record().lines if line.id == f"review_Q{number}"]
    assert len(found) == 1
    return found[0]


def answered_by(number: int) -> set[str]:
    """The symbols and ids of the lines that a question rests on and that stand in the report."""
    inputs = note(number).inputs
    return {id_.rpartition(".")[2] for id_, operand in inputs.items() if not operand.is_absent()}


ASKED = {
    1: {"risk_category", "I_e"}, 2: {"site_class", "site_report"}, 3: {"study_exception"},
    4: {"SDC_DS", "SDC_D1", "SDC"}, 5: {"system_permitted", "R", "Omega_0", "C_d"},
    6: {"H2", "H3", "H4", "H5", "V3", "V4", "V5a", "V5b"}, 7: {"procedure"}, 8: {"weight_contents", "W"},
    9: {"C_t", "x", "T_a", "T_max", "T", "T_drift"}, 10: {"C_sbasic", "C_scap", "C_sfloor", "C_s"}, 11: {"C_sbasic"},
    12: {"k", "sum_of_lateral_forces_equals_base_shear"}, 13: {"torsion", "r_Dplus"}, 14: {"rho"},
    15: {"r_Delta", "drift"}, 16: {"theta_max", "stability"}, 18: {"Omega_0"}, 20: {"V"}, 21: {"Q21"},
}  # fmt: skip
"""Lines of the template on which the note of a question rests, whether they answer it or are waited for."""


@pytest.mark.parametrize("number", range(1, 23), ids=lambda number: f"S{number}")
def test_each_question_prints_in_both_files_with_its_answer_or_as_an_open_item(number: int) -> None:
    line = note(number)
    assert line.meaning.startswith(f"Q{number} ")
    for text in texts():
        assert squeezed(line.meaning) in text
        assert squeezed(line.text) in text and squeezed(line.detail) in text
    assert answered_by(number) >= ASKED.get(number, set())
    items = [item for item in record().open_items if item.line == line.id]
    assert [item.owner for item in items] == (["originator"] if line.detail else [])
    assert line.text or line.detail


def test_references_of_a_question_lead_to_line_and_sheet() -> None:
    text = next(text for text in map(squeezed, (s.extract_text() for s in sheets().reader.pages)) if "Q1riskc" in text)
    first, second = (record().line(name) for name in ("risk_category", "I_e"))
    assert re.search(rf"from{first.n}/\d+,{second.n}/\d+noteQ1riskcategoryandimportancefactor", text)


def test_b20_an_independent_estimate_stands_beside_the_base_shear_with_the_difference() -> None:
    for part in "XY":
        V, V_e, e_V = (record().line(f"{part}.{name}") for name in ("V", "V_e", "e_V"))
        assert isinstance(V.value, float) and isinstance(V_e.value, float)
        assert e_V.value == pytest.approx((V_e.value / V.value - 1) * 100, rel=1e-9)
        assert f"{part}.T_a" not in record().line(f"{part}.T_e").inputs
        for text in texts():
            assert squeezed("differences over 30 % ask for an explanation (common practice, no source)") in text
            assert squeezed(f"{V_e.shown}") in text and squeezed(str(e_V.shown)) in text
            assert squeezed("difference of the second estimate from the base shear, in %") in text


def test_b22_the_geotechnical_report_is_named_and_the_site_class_agrees() -> None:
    line = record().line("site_report")
    assert (line.verdict, line.detail) == ("OK", "G-1 section 5.2 gives class C, which is in use")
    for text in texts():
        assert squeezed(line.detail) in text and squeezed("Geotechnical report") in text
    assert "site_report" in note(2).inputs


def test_margins_stand_in_one_table_of_both_files_with_line_and_sheet() -> None:
    found = [line for line in record().lines if line.margin]
    assert len(found) > 6
    for line in found:
        assert line.margin
        for text in texts():
            assert squeezed(line.meaning) in text and squeezed(f"{line.margin.shown} {line.margin.to}") in text
    answer = "".join(squeezed(sheets().reader.pages[number].extract_text()) for number in (1, 2))
    table = answer.partition("Distancetothenextlimit")[2].partition("Seismicdataforthedrawings")[0]
    assert table.count("ValueMarginLine/sheet") == 2  # two halves side by side
    for line in found:
        assert re.search(rf"(?<!\d){line.n}/\d", table), line.id
    shared = [line.n for line in found if line.symbol == "C_sfloor"]  # the same is said of both directions
    assert re.search(rf"X,Y:seismicresponsecoefficient,lowerlimit.*{shared[0]}/\d+,{shared[1]}/\d", table)
    assert "Margins:" not in answer
    kinds = {line.id.rpartition(".")[2] for line in found}
    assert {"SDC_DS", "SDC_D1", "SDC", "C_s", "C_sfloor", "system_permitted", "r_Dplus"} <= kinds
