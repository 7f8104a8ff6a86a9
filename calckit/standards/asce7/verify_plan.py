"""The checks of torsion and of the distribution in plan, run through the public steps as an engineer would.

Knows how the inputs of a check are typed into a calculation and which line answers each quantity. Must not know what
the check expects.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

from calckit.core.calc import Calc
from calckit.core.handle import Handle
from calckit.errors import MismatchError

Given = Mapping[str, Any]
Results = dict[str, Any]


def _story(given: Given, along: str, category: str) -> Calc:
    """One story, the first two walls along the force and the other two across it, worked in plan."""
    across = {"x": "y", "y": "x"}[along]
    spread, depth = given["L_x"], given["L_y"]
    calc = Calc(project="Published check", number="verify")
    calc.document("P", title="The document named by the check")
    calc.givens(f"SDC, {category}, P\nV_p{along}, {given['V']} kip, P\nL_{across}, {spread} ft, P\nL_{along}, {depth} ft, P")
    calc.givens(f"{across}_m, {spread / 2} ft, P\n{along}_m, {depth / 2} ft, P")
    rows = [f"wall, {across}_i [ft], {along}_i [ft], k_i{along}, k_i{across}"]
    walls = list(zip(given["wall"], given["rigidity"], strict=True))
    positions = [(x, depth / 2) for x in given["position_x"]] + [(spread / 2, y) for y in given["position_y"]]
    for number, ((wall, rigidity), (x, y)) in enumerate(zip(walls, positions, strict=True)):
        along_it = number < len(given["position_x"])
        rows.append(f"{wall}, {x}, {y}, {rigidity if along_it else 0}, {0 if along_it else rigidity}")
    calc.rows("walls", "\n".join(rows), source="P")
    calc.asce7.rigid_distribution()
    return calc


def _value(calc: Calc, name: str) -> Any:
    return Handle(calc, name).value


def _worked(given: Given, along: str) -> Results:
    """The quantities of a check, force along one axis; the case with the larger ratio of the ends is the worst."""
    across = {"x": "y", "y": "x"}[along]
    calc, plain = _story(given, along, "D"), _story(given, along, "B")
    case = max(("plus", "minus"), key=lambda name: _value(calc, f"r_u{along}{name}"))
    other = {"plus": "minus", "minus": "plus"}[case]
    direct, total = _value(plain, f"V_dir{along}")[:2], _value(plain, f"V_i{along}{case}")[:2]
    ends = [_value(calc, f"u_{end}{along}{case}") for end in (1, 2)]
    ratio = _value(calc, f"r_u{along}{case}")
    design = _value(calc, f"V_des{along}")[:2]
    accidental = _value(calc, f"M_ta{along}") / given["V"]
    return {
        "x_R": _value(calc, f"{across}_R"),
        "y_R": _value(calc, f"{along}_R"),
        "e": abs(_value(calc, f"e_{across}")),
        "e_a": accidental,
        "J": _value(calc, "J_R"),
        "V_direct": direct,
        "V_torsion": abs(total[0] - direct[0]),
        "V_total_worst": total,
        "delta": ends,
        "delta_avg": max(ends) / ratio,
        "ratio": ratio,
        "torsional_irregularity": _value(calc, f"plan_{along}") != "none",
        "A_x": _value(calc, f"A_p{along}"),
        "V_design": design,
        "V_design_B": design[1],
        "V_A_torsion_subtracted": _value(calc, f"V_i{along}{other}")[0],
    }


def _numbers(results: Results) -> list[float]:
    values = [value if isinstance(value, list) else [value] for value in results.values()]
    return [float(entry) for value in values for entry in value]


def _plan(given: Given) -> Results:
    """The plan as printed, and turned by a quarter so that the force runs along x: both must agree."""
    printed, turned = _worked(given, "y"), _worked(given, "x")
    for one, other in zip(_numbers(printed), _numbers(turned), strict=True):
        if abs(one - other) > 1e-9 * max(abs(one), 1):
            raise MismatchError(f"the plan turned by a quarter gives {other}, not {one}")
    return printed


def _of(*names: str) -> Callable[[Given], Results]:
    def adapter(given: Given) -> Results:
        results = _plan(given)
        return {name: results[name] for name in names}

    return adapter


def _amplification(given: Given) -> Results:
    calc = Calc(project="Published check", number="verify")
    calc.document("P", title="The document named by the check")
    calc.given("SDC", "D", source="P")
    first, second = given["delta"]
    calc.rows("ends", f"level, d_1plus [in], d_2plus [in]\nRoof, {first}, {second}", source="P")
    calc.asce7.end_displacements()
    return {"A_x": _value(calc, "A_x")[0]}


_COMMON = ("x_R", "y_R", "e", "e_a", "J", "V_direct", "V_torsion", "V_total_worst", "delta", "ratio")
ADAPTERS: dict[str, Callable[[Given], Results]] = {
    "asce7.ex09.rigid_diaphragm_no_irregularity": _of(*_COMMON, "delta_avg", "torsional_irregularity", "V_design"),
    "asce7.ex10.torsional_irregularity_1a": _of(
        *_COMMON, "torsional_irregularity", "A_x", "V_design_B", "V_A_torsion_subtracted"
    ),
    "asce7.v.Ax.1": _amplification,
    "asce7.v.Ax.2": _amplification,
}
"""What runs each check, by its id."""
