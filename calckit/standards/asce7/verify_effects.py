"""The published checks of diaphragm forces, load effects, base and walls, run through the public steps.

Knows how the inputs of a check are typed into a calculation and which line answers each quantity. Must not know what
the check expects.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import Any

from calckit.core.calc import Calc
from calckit.standards.asce7.published import in_force, pasted, start

Given = Mapping[str, Any]
Results = dict[str, Any]


def _levels(calc: Calc, given: Given, **columns: Sequence[Any]) -> None:
    named = {"h_x [ft]": given["h_x"], **{f"{name} [kip]": column for name, column in columns.items()}}
    calc.levels(pasted("level", given["level"], named), source="P")


def _stockton_diaphragm(given: Given) -> Results:
    calc = start(V=f"{given['V']} kip", T="2.2 s", S_DS=given["S_DS"], I_e=given["I_e"], SDC="D", w_px_basis="w_x")
    calc.override("k", given["k"], reason="stated by the check", by="kit")
    _levels(calc, given, w_x=given["w_px"])
    calc.asce7.vertical_distribution()
    calc.asce7.diaphragm_forces()
    lines = {"F_px_basic": "F_pxbasic", "F_px_min": "F_pxmin", "F_px_max": "F_pxmax", "F_px": "F_px"}
    return {quantity: in_force(calc, line, "kip") for quantity, line in lines.items()}


def _diaphragm(given: Given, columns: Sequence[str], H4: str = "no", H2: str = "no") -> Calc:
    calc = start(
        S_DS=given["S_DS"], I_e=given["I_e"], SDC="D", rho=given["rho"], Omega_0=given["Omega_0"], H4=H4, H2=H2,
        diaphragm_material="cast-in-place concrete", **dict.fromkeys(("H1a", "H1b", "H3", "V4"), "no"),
    )  # fmt: skip
    _levels(calc, given, w_x=given["w_x"])
    typed = {f"{name} [kip]": given[name] for name in ("F_x", "w_px", *columns)}
    calc.rows("diaphragms", pasted("level", given["level"], typed), source="P")
    calc.asce7.diaphragm_forces()
    return calc


def _diaphragm_design(given: Given) -> Results:
    both, offset = _diaphragm(given, ("F_pa", "F_tx")), _diaphragm(given, ("F_pa", "F_tx"), H4="yes")
    irregular = _diaphragm(given, (), H2="yes")
    return {
        "F_px_basic": in_force(both, "F_pxbasic", "kip"),
        "F_px": in_force(both, "F_px", "kip"),
        "governs": [int(entry) for entry in in_force(both, "i_px")],
        "F_T_redundant": in_force(both, "F_Tx", "kip"),
        "F_T_overstrength": in_force(offset, "F_Tx", "kip"),
        "F_d": in_force(both, "F_dx", "kip"),
        "F_d_H4": in_force(offset, "F_dx", "kip"),
        "F_d_plain": in_force(irregular, "F_dx", "kip"),
        "F_d_analysis": in_force(_diaphragm(given, ("F_pa",)), "F_dx", "kip"),
        "F_d_transfer": in_force(_diaphragm(given, ("F_tx",)), "F_dx", "kip"),
        "F_joint": in_force(irregular, "F_jx", "kip"),
        "F_c": in_force(both, "F_cx", "kip"),
        "F_c_governs": [int(entry) for entry in in_force(both, "i_cx")],
        "F_c_minimum_increased": in_force(irregular, "F_cm", "kip"),
    }


def _combined(given: Given, standard: str = "ASCE 7-16", **more: Any) -> Calc:
    calc = start(standard, S_DS=given["S_DS"], SDC="D", C_s=given["C_s"], **more)
    for name in ("rho", "Omega_0"):
        calc.given(name, given[name], source="P")
    calc.asce7.load_effects()
    columns = {f"{name} [kip]": given[name] for name in ("D", "L", "S", "Q_E")}
    calc.rows("elements", pasted("element", given["element"], columns), source="P")
    calc.asce7.load_combinations()
    return calc


def _combinations(given: Given) -> Results:
    plain, over = _combined(given), _combined(given, overstrength="yes")
    limited = _combined(given, overstrength="yes", E_cl=f"{given['E_cl']} kip")
    later = _combined(given, "ASCE 7-22")
    results = {name: in_force(plain, name, "kip") for name in ("E_v", "U_max", "U_min", "A_max", "A_min")}
    for name in ("U_6", "U_7", "A_8", "A_9", "A_10"):
        results |= {name: in_force(plain, name, "kip"), f"{name}_reversed": in_force(plain, f"{name}r", "kip")}
    for name in ("U_6", "U_max", "U_min", "A_max", "A_min"):
        results[f"{name}_overstrength"] = in_force(over, name, "kip")
    spectrum = _combined(given, S_av=given["S_av"])
    return results | {
        "E_v_spectrum": in_force(spectrum, "E_v", "kip"),
        "E_mh_limited": in_force(limited, "E_mh", "kip"),
        "U_6_7_22": in_force(later, "U_6", "kip"),
        "A_9_7_22": in_force(later, "A_9", "kip"),
        "Q_E_two_directions": _two_directions(given),
        "C_s_allowable": in_force(plain, "C_sA"),
    }


def _two_directions(given: Given) -> float:
    # D, L, S, rho do not enter the quantity checked
    calc = start(S_DS=given["S_DS"], SDC="D", rho=given["rho"], D="1 kip", L="0 kip", S="0 kip")
    calc.given("Q_Ep", f"{given['Q_E_parallel']} kip", source="P")
    calc.given("Q_Et", f"{given['Q_E_across']} kip", source="P")
    calc.asce7.load_effects()
    calc.asce7.load_combinations()
    return float(in_force(calc, "Q_E", "kip"))


def _base(given: Given, reduced: str = "yes") -> Calc:
    calc = start(
        V=f"{given['V']} kip", rho=given["rho"], d_f=f"{given['d_f']} ft", overturning_reduced=reduced,
        system="building frame: special reinforced masonry",
    )  # fmt: skip
    _levels(calc, given)
    columns = {"F_x [kip]": given["F_x"], "M_x [kip*ft]": given["M_x"]}
    calc.rows("forces", pasted("level", given["level"], columns), source="P")
    calc.asce7.base_reactions()
    return calc


def _base_reactions(given: Given) -> Results:
    calc, whole = _base(given), _base(given, "no")
    moments = {name: in_force(calc, name, "kip*ft") for name in ("M_b", "M_f")}
    forces = {name: in_force(calc, name, "kip") for name in ("V_h", "N_f")}
    return moments | forces | {"M_f_unreduced": in_force(whole, "M_f", "kip*ft")}


def wall(given: Given) -> Results:
    """The wall of the check, out of plane, with the design category of the site."""
    ordinates = start(S_S=given["S_S"], S_1=given["S_1"], T_L="8 s", site_class=given["site_class"])
    ordinates.given("risk_category", given["risk_category"], source="P")
    ordinates.override("F_v", 1.5, reason="printed by the source", by="kit")  # of the 2005 edition
    ordinates.asce7.design_spectrum()
    ordinates.asce7.design_category()
    ordinates.givens(f"w_w, {given['wall_psf']} psf, P\nh_w, {given['wall_height_ft']} ft, P")
    ordinates.asce7.wall_forces()
    return {
        **{name: in_force(ordinates, name) for name in ("F_a", "S_DS", "S_D1", "SDC")},
        "W_wall_plf": in_force(ordinates, "W_wall", "lb/ft"),
        "F_p_wall_plf": in_force(ordinates, "F_wall", "lb/ft"),
        "F_p_wall_psf": in_force(ordinates, "f_w", "psf"),
        "ASD_wall_psf": in_force(ordinates, "f_wA", "psf"),
    }


def _anchored(given: Given, **more: Any) -> Calc:
    calc = start(S_DS=given["S_DS"], I_e=given["I_e"], w_w="80 psf", **more)  # w_w does not enter
    columns = {"L_f [ft]": given["L_f"], "W_pa [lb]": given["W_p_lb"]}
    calc.rows("walls", pasted("wall", given["wall"], columns), source="P")
    calc.asce7.wall_forces()
    return calc


def _anchorage(given: Given) -> Results:
    flexible = _anchored(given, diaphragm="flexible")
    rigid = _anchored(given, diaphragm="rigid", z_a=f"{given['z_a']} ft", h_n=f"{given['h_n']} ft")
    return {
        "k_a": in_force(flexible, "k_a"),
        "F_p_lb": in_force(flexible, "F_an", "lb"),
        "F_p_min_lb": in_force(flexible, "F_anmin", "lb"),
        "F_p_rigid_lb": in_force(rigid, "F_an", "lb"),
    }


ADAPTERS: dict[str, Callable[[Given], Results]] = {
    "asce7.ex01d.stockton_diaphragm": _stockton_diaphragm,
    "asce7.v.diaphragm_design": _diaphragm_design,
    "asce7.v.load_combinations": _combinations,
    "asce7.v.base_reactions": _base_reactions,
    "asce7.v.wall_anchorage": _anchorage,
}
"""What runs each check, by its id."""
