"""The published checks of period, weight, drift and stability, run through the public steps.

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

_STEEL = "moment frame: steel special moment frame"


def _levels(calc: Calc, columns: Mapping[str, Sequence[Any]], names: Sequence[Any]) -> None:
    """Type the table of levels."""
    calc.levels(pasted("level", names, columns), source="P")


def _wall_period(given: Given) -> Results:
    """The walls pasted, and the same building by the table; the kind of wall does not enter the quantities checked."""
    results: Results = {}
    walls = {"D_i [ft]": given["D_i"], "t_i [in]": given["t_i_in"]}
    for method in ("walls", "table"):
        calc = start(
            system="bearing wall: special reinforced concrete shear wall", T_a_method=method,
            h_n=f"{given['h_n']} ft", A_B=f"{given['A_B']} ft**2",
        )  # fmt: skip
        calc.rows("walls", pasted("wall", range(1, len(given["D_i"]) + 1), walls), source="P")
        results["T_a_general" if method == "table" else "T_a"] = calc.asce7.approximate_period().value
        if method == "walls":
            results["C_w"] = calc["C_w"].value
    return results


def _period_by_stories(given: Given) -> Results:
    calc = start(system=_STEEL, T_a_method="stories", h_n=f"{given['stories'] * given['h_sx']} ft")
    _levels(calc, {"h_sx [ft]": [given["h_sx"]] * given["stories"]}, range(given["stories"], 0, -1))
    return {"T_a": calc.asce7.approximate_period().value}


def _drift_relief(given: Given) -> Results:
    """The base shear for drift under each relief; S_S and the site class do not enter it."""
    shears = []
    for relief, T_L, S_1 in zip(given["relief"], given["T_L"], given["S_1"], strict=True):
        calc = start(
            hazard_basis="site-specific", S_S=1.5, S_1=S_1, T_L=f"{T_L} s", site_class="C", R=given["R"],
            I_e=given["I_e"], W=f"{given['W']} kip", T=f"{given['T']} s", T_drift=f"{given['T_drift']} s",
        )  # fmt: skip
        calc.asce7.site_specific_values(given["S_DS"], given["S_D1"], source="P")
        calc.asce7.design_spectrum()
        calc.asce7.base_shear()
        calc.answer("drift_relief", relief, basis="stated by the check")
        calc.asce7.analysis_model()
        shears.append(calc["V_drift"].value)
    return {"V_drift": shears}


def _stability(given: Given) -> Results:
    """theta of one story plain, with the shear of a relief, and with P-delta in the model; T does not enter it."""
    results: Results = {}
    cases = {"theta": ("none", "no"), "theta_with_relief": ("floor", "no"), "theta_P_delta_in_model": ("none", "yes")}
    for name, (relief, in_model) in cases.items():
        calc = start(
            system=_STEEL, risk_category="III", drift_class="all other", SDC="C", C_d=given["C_d"], I_e=given["I_e"],
            V=f"{given['V']} kip", T="0.4 s", beta=given["beta"],
        )  # fmt: skip
        if relief != "none":
            calc.given("V_drift", f"{given['V_drift']} kip", source="P")
        calc.answer("drift_relief", relief, basis="stated by the check")
        calc.analysis(with_P_delta=in_model)
        columns = {
            "h_sx [in]": [given["h_sx_in"]], "w_x [kip]": [given["P_x"]], "delta_xe [in]": [given["delta_xe_in"]],
            "P_x [kip]": [given["P_x"]],
        }  # fmt: skip
        _levels(calc, columns, ["Roof"])
        calc.asce7.vertical_distribution()
        calc.asce7.drift()
        calc.asce7.stability()
        results[name] = calc["theta_P" if in_model == "yes" else "theta"].value
        results["theta_max"] = calc["theta_max"].value
    return results


def _drift_limit(given: Given) -> Results:
    calc = start(system=_STEEL, risk_category="II", drift_class="all other", SDC="D", rho=given["rho"])
    _levels(calc, {"h_sx [in]": [given["h_sx_in"]]}, ["Roof"])
    calc.asce7.drift()
    return {"Delta_a_in": calc["Delta_a"].value}


def _separation(given: Given) -> Results:
    calc = start(
        delta_eM=f"{given['delta_e_in']} in", C_d=given["C_d"], I_e=given["I_e"],
        delta_M2=f"{given['delta_M2_in']} in",
    )  # fmt: skip
    calc.asce7.separation()
    return {"delta_M_in": calc["delta_M"].value, "delta_MT_in": calc["delta_MT"].value}


def _weight(given: Given) -> Results:
    """The areas without and with storage as two kinds of area."""
    units = {"A_u": "ft**2", "q_D": "psf", "q_P": "psf", "q_L": "psf", "p_f": "psf", "W_e": "kip"}
    rows = [["level", "area", *(f"{name} [{unit}]" for name, unit in units.items())]]
    for place, level in enumerate(given["level"]):
        main = {name: given[name][place] for name in ("A_u", "q_D", "q_P", "p_f", "W_e")}
        rows.append([level, "deck", *(main.get(name, 0) for name in units)])
        storage = {"A_u": given["A_storage"][place], "q_L": given["q_L"][place]}
        rows.append([level, "storage", *(storage.get(name, 0) for name in units)])
    results: Results = {}
    for name, share in (("w_x", "counted"), ("w_x_left_out", "left out up to 5 %")):
        calc = start(storage_share=share)
        _levels(calc, {"h_sx [ft]": [14] * len(given["level"])}, given["level"])
        made = calc.asce7.weight_take_off("\n".join(", ".join(map(str, row)) for row in rows), source="P")
        results[name] = made.value
    return results


def _period_choice(given: Given) -> Results:
    periods = []
    for choice in (*given["choice"], ""):
        analysis = {"T_analysis": f"{given['T_analysis']} s"} if choice else {}
        calc = start(S_D1=given["S_D1"], T_a=f"{given['T_a']} s", **analysis)
        if choice:
            calc.answer("T_choice", choice, basis="stated by the check")
        calc.asce7.period()
        periods.append(in_force(calc, "T", "s"))
    return {"T": periods[:-1], "T_without_analysis": periods[-1]}


ADAPTERS: dict[str, Callable[[Given], Results]] = {
    "asce7.v.period_choice": _period_choice,
    "asce7.v.wall_period": _wall_period,
    "asce7.v.period_by_stories": _period_by_stories,
    "asce7.v.drift_relief": _drift_relief,
    "asce7.v.stability": _stability,
    "asce7.v.drift_limit_rho": _drift_limit,
    "asce7.v.separation": _separation,
    "asce7.v.weight_take_off": _weight,
}
"""What runs each check, by its id."""
