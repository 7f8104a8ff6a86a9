"""The demonstration building on its second pass: the template with what an engineer edits once there is a model.

Knows the edits, as (cell, text of the template, text in its place); the model and its results are invented. Must not
know how a notebook is run or issued.
"""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

import nbformat

NAME = "building_second_pass.ipynb"
ANSWERED = ("H1a", "H1b", "V1a", "V1b")
EDITS = (
    ("calculation", 'revision="A"', 'revision="B"'),
    ("calculation", 'date="2026-12-01"', 'date="2026-12-15"'),
    ("calculation", "first pass, before the analysis model", "second pass, with the analysis model"),
    (
        "documents",
        'title="Weight take-off", revision="2", date="2026-11-14")',
        'title="Weight take-off", revision="2", date="2026-11-14")\n'
        'calc.document("M-1", title="Analysis model, input and output of run 3", date="2026-12-11")\n'
        'calc.revise("B", date="2026-12-15", reason="period, displacements and loads of the model", by="originator")',
    ),
    (
        "levels",
        """level, h_x [ft], w_x [kip]
Roof,  80,        880
6,     67,       1020
5,     54,       1020
4,     41,       1020
3,     28,       1020
2,     15,       1100
""",
        """level, h_x [ft], w_x [kip], X.delta_xe [in], Y.delta_xe [in], P_x [kip]
Roof,  80,        880,        2.65,            1.10,            1100
6,     67,       1020,        2.31,            0.90,            2200
5,     54,       1020,        1.90,            0.70,            3300
4,     41,       1020,        1.40,            0.50,            4400
3,     28,       1020,        0.90,            0.30,            5500
2,     15,       1100,        0.45,            0.14,            6600
""",
    ),
    ("levels", "Second pass: add X.delta_xe [in], Y.delta_xe [in], P_x [kip].", "The displacements are those of M-1."),
    ("levels", 'source="S-100"', 'source="S-100", sources={"delta_xe": "M-1 p. 12", "P_x": "M-1 p. 15"}'),
    ("model", "# Second pass: the period of the model, and what was put into it", "# What was put into the model"),
    ("model", ": V_applied, W_model, document, run_date.", ", and the period it gives."),
    ("model", 'x.given("T_analysis", "none: model not run yet", source="B-1 section 6")',
     'x.given("T_analysis", "1.2 s", source="M-1 p. 4")'),
    ("model", 'y.given("T_analysis", "none: model not run yet", source="B-1 section 6")',
     'y.given("T_analysis", "0.7 s", source="M-1 p. 4")'),
    ("model", "x.analysis()",
     'model = {"document": "M-1", "run_date": "2026-12-11", "W_model": "6060 kip", "with_P_delta": "no",\n'
     '         "base": "fixed", "stiffness": "panel zones modeled", "diaphragm": "rigid"}\n'
     'x.analysis(**model, V_applied="205.2 kip")'),
    ("model", "y.analysis()", 'y.analysis(**model, V_applied="468.9 kip")'),
    ("stop", "## Stop: the analysis model", "## The analysis model"),
    ("stop", "The first pass ends here: the forces above go to the analysis model. The second pass brings back its "
     "period, the shear applied, its weight, the displacements and the gravity loads.",
     "The forces above were applied in run 3 of the model M-1; its period, displacements and loads are used here."),
    *(
        (cell, f"{question}; not answered; from the model", f"{question}; no; drifts and stiffnesses; M-1 p. 14")
        for cell in ("questions-x", "questions-y") for question in ANSWERED
    ),
    *(
        (cell, old, new)
        for cell in ("questions-x", "questions-y")
        for old, new in (
            ("rho; not answered; from the model", "rho; 1.0; two bays on each side of the plan; S-201"),
            ("torsion; not answered; from the model", "torsion; yes; mass shifted by 5 % both ways; M-1 p. 2"),
        )
    ),
)  # fmt: skip


OF_7_22 = "building_second_pass_7_22.ipynb"
ORDINATES = """T_n [s], S_aM
0, 0.36
0.01, 0.362
0.02, 0.40
0.03, 0.47
0.05, 0.60
0.075, 0.75
0.1, 0.84
0.15, 0.92
0.2, 0.9333
0.25, 0.92
0.3, 0.89
0.4, 0.82
0.5, 0.73
0.75, 0.55
1, 0.42
1.5, 0.275
2, 0.21
3, 0.135
4, 0.098
5, 0.076
7.5, 0.046
10, 0.030
"""
EDITS_7_22 = (
    ("calculation", 'standard="ASCE 7-16"', 'standard="ASCE 7-22"'),
    ("calculation", 'number="C-101"', 'number="C-102"'),
    ("hazard", '"hazard_basis", "mapped"', '"hazard_basis", "printout"'),
    ("hazard", 'S_MS="none: mapped", S_M1="none: mapped", PGA_M="none: mapped"', 'S_MS=0.84, S_M1=0.42, PGA_M=0.36'),
    ("study", "calc.asce7.design_spectrum()",
     f'calc.asce7.design_spectrum()\ncalc.asce7.printed_ordinates("""\n{ORDINATES}""", source="H-2 p. 3")'),
)  # fmt: skip
"""The same building under ASCE 7-22: the edition and the values of its hazard printout, invented."""

PASSES = {NAME: (), OF_7_22: EDITS_7_22}
"""Notebook -> the edits that it has beside those of the second pass."""


def second_pass(template: Path, more: Sequence[tuple[str, str, str]] = ()) -> nbformat.NotebookNode:
    """The template with every edit made; ValueError if it does not hold what an edit replaces exactly once."""
    notebook = nbformat.read(template, 4)
    cells = {cell["id"]: cell for cell in notebook.cells}
    for cell, old, new in (*EDITS, *more):
        if cells[cell].source.count(old) != 1:
            raise ValueError(f"cell {cell} of {template.name} does not hold exactly once: {old}")
        cells[cell].source = cells[cell].source.replace(old, new)
    return notebook
