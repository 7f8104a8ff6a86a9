"""The checks of torsion and of the distribution in plan, run through the public steps as an engineer would.

Knows how the inputs of a check are typed into a calculation and which line answers each quantity. Must not know what
the check expects.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import Any

from calckit.core.calc import Calc
from calckit.errors import MismatchError
from calckit.standards.asce7.irregularity_rules import TYPES
from calckit.standards.asce7.published import in_force, start

Given = Mapping[str, Any]
Results = dict[str, Any]


def _story(given: Given, along: str, category: str, *, both: bool = False) -> Calc:
    """One story, the first two walls along the force and the other two across it, worked in plan."""
    across = {"x": "y", "y": "x"}[along]
    spread, depth = given["L_x"], given["L_y"]
    calc = start(SDC=category, **{f"V_p{axis}": f"{given['V']} kip" for axis in ((along, across) if both else along)})
    calc.givens(f"L_{across}, {spread} ft, P\nL_{along}, {depth} ft, P")
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


def _worked(given: Given, along: str) -> Results:
    """The quantities of a check, force along one axis; the case with the larger ratio of the ends is the worst."""
    across = {"x": "y", "y": "x"}[along]
    calc, plain = _story(given, along, "D"), _story(given, along, "B")
    case = max(("plus", "minus"), key=lambda name: in_force(calc, f"r_u{along}{name}"))
    other = {"plus": "minus", "minus": "plus"}[case]
    direct, total = in_force(plain, f"V_dir{along}")[:2], in_force(plain, f"V_i{along}{case}")[:2]
    ends = [in_force(calc, f"u_{end}{along}{case}") for end in (1, 2)]
    ratio = in_force(calc, f"r_u{along}{case}")
    design = in_force(calc, f"V_des{along}")[:2]
    accidental = in_force(calc, f"M_ta{along}") / given["V"]
    return {
        "x_R": in_force(calc, f"{across}_R"),
        "y_R": in_force(calc, f"{along}_R"),
        "e": abs(in_force(calc, f"e_{across}")),
        "e_a": accidental,
        "J": in_force(calc, "J_R"),
        "V_direct": direct,
        "V_torsion": abs(total[0] - direct[0]),
        "V_total_worst": total,
        "delta": ends,
        "delta_avg": max(ends) / ratio,
        "ratio": ratio,
        "torsional_irregularity": in_force(calc, f"plan_{along}") != "none",
        "A_x": in_force(calc, f"A_p{along}"),
        "V_design": design,
        "V_design_B": design[1],
        "V_A_torsion_subtracted": in_force(calc, f"V_i{along}{other}")[0],
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


def _paste(calc: Calc, id_: str, names: Sequence[str], **columns: Sequence[Any]) -> None:
    """Paste a table of rows; a column is headed `symbol [unit]`, the unit after the symbol's last `__`."""
    header = [
        "row",
        *(f"{symbol} [{unit}]" if unit else symbol for symbol, _, unit in (c.partition("__") for c in columns)),
    ]
    rows = zip(names, *columns.values(), strict=True)
    calc.rows(id_, "\n".join(", ".join(map(str, row)) for row in (header, *rows)), source="P")


def _amplification(given: Given) -> Results:
    calc = start(SDC="D")
    columns = dict(zip(("d_1plus__in", "d_2plus__in"), ([d] for d in given["delta"]), strict=True))
    if other := given.get("delta_other_shift"):
        columns |= dict(zip(("d_1minus__in", "d_2minus__in"), ([d] for d in other), strict=True))
    _paste(calc, "ends", ["Roof"], **columns)
    calc.asce7.end_displacements()
    return {"A_x": in_force(calc, "A_x")[0]}


def _both_directions(given: Given) -> Results:
    calc = _story(given, "y", "D", both=True)
    along_it = len(given["position_x"])
    return {
        "V_design_along_y": in_force(calc, "V_desy")[:along_it],
        "V_design_along_x": in_force(calc, "V_desx")[along_it:],
    }


def _ratios(given: Given) -> Results:
    (p_x, p_y), (L_x, L_y) = given["p"], given["L"]
    calc = start(
        SDC="D", V=f"{given['V']} kip", p_x=f"{p_x} ft", p_y=f"{p_y} ft", L_x=f"{L_x} ft", L_y=f"{L_y} ft",
        A_open=f"{given['A_open_ft2']} ft**2", A_gross=f"{given['A_gross_ft2']} ft**2",
    )  # fmt: skip
    heights = zip(given["level"], given["h_x"], given["w_x"], given["delta_xe_in"], strict=True)
    rows = "\n".join(", ".join(map(str, row)) for row in heights)
    calc.levels(f"level, h_x [ft], w_x [kip], delta_xe [in]\n{rows}", source="P")
    _paste(
        calc, "stories", given["level"], V_x__kip=given["V_x"], Delta__in=given["Delta_in"], b_s__ft=given["b_s"],
        V_ys__kip=given["V_ys"], **{"K_d__kip/in": given["K_d_kip_in"]},
    )  # fmt: skip
    calc.answers("drift_waiver; yes; as given\nremoval_passes; no; as given\nperimeter_bays; yes; as given")
    calc.asce7.irregularities()
    calc.asce7.redundancy()
    found = [name for name in TYPES if calc.find(f"{name}_found") and calc.word(f"{name}_found") == "yes"]
    lists = ("r_K", "r_K3", "r_w", "r_b", "r_Vy", "r_Kd", "r_q", "r_Vs")
    return {name: in_force(calc, name) for name in lists} | {
        "K_s_kip_in": in_force(calc, "K_s"),
        "r_p": [in_force(calc, "r_px"), in_force(calc, "r_py")],
        "r_open": in_force(calc, "r_open"),
        "types": found,
        "rho": in_force(calc, "rho"),
    }


def _class(given: Given) -> Results:
    calc = start(delta_md=f"{given['delta_md_in']} in", delta_ave=f"{given['delta_ave_in']} in")
    calc.asce7.diaphragm()
    return {"ratio": in_force(calc, "r_d"), "class": in_force(calc, "diaphragm_found")}


def _spans(given: Given) -> Results:
    calc = start(V_p=f"{given['V_p']} kip", F_d=f"{given['F_d']} kip")
    _paste(calc, "lines", [str(n) for n in range(1, len(given["b_i"]) + 1)], b_i__ft=given["b_i"])
    spans = [f"{n} to {n + 1}" for n in range(1, len(given["L_s"]) + 1)]
    _paste(calc, "spans", spans, L_s__ft=given["L_s"], d_s__ft=given["d_s"])
    calc.asce7.flexible_distribution()
    names = {"V_line": "V_line", "V_span": "V_span", "v_span_klf": "v_span", "M_span_kip_ft": "M_span"}
    found = {name: in_force(calc, line) for name, line in (names | {"T_chord": "T_chord"}).items()}
    return found | {"v_span_klf": [force / 1000 for force in found["v_span_klf"]]}


def _pasted(given: Given) -> Results:
    calc = start(V_px=f"{sum(given['V_ax'])} kip", V_py=f"{sum(given['V_ay'])} kip")
    names = [str(n) for n in range(1, len(given["V_ax"]) + 1)]
    _paste(calc, "model", names, V_ax__kip=given["V_ax"], V_ay__kip=given["V_ay"])
    calc.asce7.pasted_distribution()
    return {name: in_force(calc, name) for name in ("sum_Vx", "sum_Vy")}


_COMMON = ("x_R", "y_R", "e", "e_a", "J", "V_direct", "V_torsion", "V_total_worst", "delta", "ratio")
ADAPTERS: dict[str, Callable[[Given], Results]] = {
    "asce7.ex09.rigid_diaphragm_no_irregularity": _of(*_COMMON, "delta_avg", "torsional_irregularity", "V_design"),
    "asce7.ex10.torsional_irregularity_1a": _of(
        *_COMMON, "torsional_irregularity", "A_x", "V_design_B", "V_A_torsion_subtracted"
    ),
    "asce7.v.Ax.1": _amplification,
    "asce7.v.Ax.2": _amplification,
    "asce7.v.Ax.3": _amplification,
    "asce7.v.plan.both_directions": _both_directions,
    "asce7.v.irregularity.ratios": _ratios,
    "asce7.v.diaphragm.class": _class,
    "asce7.v.diaphragm.spans": _spans,
    "asce7.v.diaphragm.pasted": _pasted,
}
"""What runs each check, by its id."""
