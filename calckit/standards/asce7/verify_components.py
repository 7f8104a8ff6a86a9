"""The published checks of nonstructural components, run through the public steps as an engineer would.

Knows how the inputs of a check are typed into a calculation and which line answers each quantity. Must not know what
the check expects.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import Any

from calckit.core.calc import Calc
from calckit.standards.asce7.published import in_force, start

Given = Mapping[str, Any]
Results = dict[str, Any]


def _typed(given: Given, W_p: float, **more: Any) -> Calc:
    """One component of 7-16 with the factors of the check; Omega_0 does not enter the quantities checked."""
    factors = {name: given[name] for name in ("a_p", "R_p", "I_p") if name not in more}
    calc = start(S_DS=given["S_DS"], W_p=f"{W_p} lb", Omega_0p=given.get("Omega_0", 2), **factors, **more)
    calc.asce7.component_force()
    return calc


def _heights(given: Given) -> dict[str, str]:
    return {"z": f"{given['z']} ft", "h": f"{given['h']} ft"}


def _over_weight(calc: Calc, name: str) -> Any:
    return in_force(calc, name, "lb") / in_force(calc, "W_p", "lb")


def parapet(given: Given) -> Results:
    """One foot of the parapet, from the row of the table."""
    site = {name: given[name] for name in ("site_class", "S_S", "S_1", "I_p")}
    calc = start(component="parapet unbraced", W_p=f"{given['W_p_parapet_plf']} lb", r_zh=given["z_over_h"], **site)
    calc.given("T_L", "8 s", source="P")  # does not enter
    calc.asce7.design_spectrum()
    calc.asce7.component_force()
    calc.given("A_w", f"{given['parapet_height_ft']} ft**2", source="P", meaning="face of one foot of parapet")
    calc.line("p_p", "F_p/A_w", unit="psf", meaning="force on each unit of the face")
    calc.line("p_a", "0.7*p_p", unit="psf", meaning="the same for allowable stress", source="ASCE 7-16 2.4.5")
    return {
        "F_a": in_force(calc, "F_a"),
        "S_DS": in_force(calc, "S_DS"),
        "F_p_parapet_over_W_p": _over_weight(calc, "F_p"),
        "F_p_max_over_W_p": _over_weight(calc, "F_pmax"),
        "F_p_min_over_W_p": _over_weight(calc, "F_pmin"),
        "F_p_parapet_plf": in_force(calc, "F_p", "lb"),
        "F_p_parapet_psf": in_force(calc, "p_p", "psf"),
        "ASD_parapet_psf": in_force(calc, "p_a", "psf"),
    }


def _heat_pump(given: Given) -> Results:
    calc = _typed(given, given["W_p_lb"], **_heights(given))
    unclamped = "0.4*a_p*S_DS*W_p/(R_p/I_p)*(1 + 2*z/h)"
    calc.line("F_u", unclamped, unit="lb", meaning="what the source prints: z/h not held to 1")
    lines = {"F_p_lb": "F_p", "F_p_max_lb": "F_pmax", "F_p_min_lb": "F_pmin", "E_v_lb": "F_pv"}
    found: Results = {quantity: in_force(calc, line, "lb") for quantity, line in lines.items()}
    return found | {"F_p_unclamped_lb": in_force(calc, "F_u", "lb")}


def _rooftop_unit(given: Given) -> Results:
    calcs = [_typed(given, weight, **_heights(given)) for weight in given["W_p_lb"]]
    ratios = {"F_p_over_W_p": "F_p", "F_p_max_over_W_p": "F_pmax", "F_p_min_over_W_p": "F_pmin"}
    return {
        **{quantity: _over_weight(calcs[0], line) for quantity, line in ratios.items()},
        "F_p_lb": [in_force(calc, "F_p", "lb") for calc in calcs],
        "E_v_lb": [in_force(calc, "F_pv", "lb") for calc in calcs],
    }


def _panel(given: Given) -> Results:
    calc = _typed(given, given["W_p_lb"], **_heights(given))
    lines = {"F_p_lb": "F_p", "F_p_max_lb": "F_pmax", "F_p_min_lb": "F_pmin"}
    return {quantity: in_force(calc, line, "lb") for quantity, line in lines.items()}


def _fan(given: Given) -> Results:
    calcs = [_typed(given, given["W_p_lb"], r_zh=given["z_over_h"], R_p=R_p) for R_p in given["R_p"]]
    return {"F_p_lb": [in_force(calc, "F_p", "lb") for calc in calcs]}


def _modal(given: Given) -> Results:
    calc = _typed(given, given["W_p_lb"], a_i=given["a_i"], A_xp=given["A_x"])
    lines = {"F_p_basic_lb": "F_pbasic", "F_p_min_lb": "F_pmin", "F_p_max_lb": "F_pmax", "F_p_lb": "F_p"}
    return {quantity: in_force(calc, line, "lb") for quantity, line in (lines | {"F_anchors_lb": "F_pO"}).items()}


# 7-22


def _on_structure(given: Given, **inputs: Any) -> Calc:
    """Started under 7-22 with what the check says of the structure; what it does not say does not enter."""
    of_structure = {"T_a": f"{given.get('T_a', 1)} s"} | {
        name: given.get(name, other) for name, other in (("R", 8), ("Omega_0", 3), ("I_e", 1.0), ("S_DS", 1.0))
    }
    return start("ASCE 7-22", attached="above grade", **of_structure | inputs)


def _amplification(given: Given) -> Results:
    values = []
    for ratio in given["z_over_h"]:
        calc = _on_structure(given, component="generator", W_p="1 kip", I_p=1.0, r_zh=ratio)
        calc.asce7.component_force()
        values.append(in_force(calc, "H_f"))
    return {"H_f": values}


def _ductility(given: Given) -> Results:
    calc = _on_structure(given, component="generator", W_p="1 kip", I_p=1.0, r_zh=1)
    calc.asce7.component_force()
    return {"R_mu": in_force(calc, "R_mu")}


def _generator(given: Given) -> Results:
    calc = _on_structure(given, component="generator", W_p=f"{given['W_p_lb']} lb", I_p=given["I_p"], **_heights(given))
    calc.asce7.component_force()
    lines = {"F_p_lb": "F_p", "F_p_max_lb": "F_pmax", "F_p_min_lb": "F_pmin", "F_anchors_lb": "F_pO"}
    forces = {quantity: in_force(calc, line, "lb") for quantity, line in lines.items()}
    return {name: in_force(calc, name) for name in ("C_AR", "R_po")} | forces


def _list(given: Given) -> Results:
    columns = {"W_p [lb]": "W_p_lb", "z [ft]": "z", "C_AR": "C_AR", "R_po": "R_po", "Omega_0p": "Omega_0p"}
    text = _pasted(["tag", *columns], [given["name"], *(given[name] for name in columns.values())])
    shared = {"h": f"{given['h']} ft", "I_p": given["I_p"], "T_a": "none: not known"}
    known, unknown = (_on_structure(given, **shared | more) for more in ({}, {"R": "none: not known"}))
    for calc in (known, unknown):
        calc.asce7.components(text, source="P")
    return {
        "H_f": in_force(known, "H_f"),
        "R_mu": in_force(known, "R_mu"),
        "R_mu_unknown": in_force(unknown, "R_mu"),
        "F_p_lb": in_force(known, "F_p", "lb"),
        "governs": in_force(known, "i_p"),
    }


def _pasted(header: Sequence[str], columns: Sequence[Sequence[Any]]) -> str:
    rows = zip(*columns, strict=True)
    return "\n".join(", ".join(map(str, row)) for row in (header, *rows))


ADAPTERS: dict[str, Callable[[Given], Results]] = {
    "asce7.ex13.roof_heat_pump_Fp": _heat_pump,
    "asce7.ex14.rooftop_unit_Fp": _rooftop_unit,
    "asce7.ex21a.precast_panel_Fp": _panel,
    "asce7.ex21b.hvac_fan_Fp": _fan,
    "asce7.v.component.modal": _modal,
    "asce7.v.component.generator_7_22": _generator,
    "asce7.v.component.list_7_22": _list,
    "asce7.v.Hf.Ta_040": _amplification,
    "asce7.v.Hf.Ta_100": _amplification,
    "asce7.v.Ru.1": _ductility,
    "asce7.v.Ru.2": _ductility,
}
"""What runs each check, by its id."""
