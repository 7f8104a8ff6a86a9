"""Checks of chapters 11 and 21 beyond the mapped values, run through the public steps as an engineer would.

Knows how the inputs of a check are typed and which line answers each quantity. Must not know what the check expects.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import Any

from calckit.core.calc import Calc
from calckit.standards.asce7.published import start

Given = Mapping[str, Any]
Results = dict[str, Any]

_QUESTIONS = ("H1a", "H1b", "H2", "H3", "H4", "H5", "V1a", "V1b", "V2", "V3", "V4", "V5a", "V5b")


def _pasted(given: Given, *columns: str) -> str:
    header = ", ".join(["T_n [s]", *columns])
    rows: Sequence[Sequence[float]] = list(zip(given["T_n"], *(given[name] for name in columns), strict=True))
    return "\n".join([header, *(", ".join(map(str, row)) for row in rows)])


def _printout(given: Given, *columns: str, **more: Any) -> Calc:
    """From a 7-22 printout; S_S and S_1 below 0.6 do not enter the quantities checked."""
    names = ("site_class", "S_MS", "S_M1")
    inputs = {"S_S": 1.0, "S_1": 0.4, "T_L": f"{given.get('T_L', 8)} s", **{name: given[name] for name in names}}
    calc = start("ASCE 7-22", **inputs, **more)
    calc.asce7.design_spectrum()
    calc.asce7.printed_ordinates(_pasted(given, *columns), source="P")
    return calc


def _multi_period(given: Given) -> Results:
    results: Results = {"C_s_multi": [], "C_s_basic": [], "C_s": []}
    for T in given["T"]:
        # W does not enter the quantities checked
        more = {"R": given["R"], "I_e": given["I_e"], "T": f"{T} s", "W": "100 kip"}
        calc = _printout(given, "S_aM", **more)
        calc.answer("C_s_method", "multi-period", source="P")
        calc.asce7.base_shear()
        for name, line in (("C_s_multi", "C_smulti"), ("C_s_basic", "C_sbasic"), ("C_s", "C_s")):
            results[name].append(float(calc[line]))
    results["S_a"] = calc.asce7.spectrum_ordinates(given["T_r"]).value
    results |= {f"{name}_from_ordinates": float(calc[line]) for name, line in (("S_DS", "S_DSo"), ("S_D1", "S_D1o"))}
    return results


def _default_envelope(given: Given) -> Results:
    return {"S_aM": _printout(given, "S_aC", "S_aCD", "S_aD")["S_aM"].value}


def _peak_acceleration(given: Given) -> Results:
    results: Results = {"F_PGA": [], "PGA_M": []}
    for site_class, PGA in zip(given["site_class"], given["PGA"], strict=True):
        calc = start("ASCE 7-16", site_class=site_class, PGA=PGA)
        calc.asce7.peak_acceleration()
        for name, values in results.items():
            values.append(float(calc[name]))
    return results


def _study(edition: str, given: Given) -> Calc:
    names = ("S_S", "S_1", "site_class")
    inputs = {name: given.get(name, fallback) for name, fallback in zip(names, (1.0, 0.4, "C"), strict=True)}
    calc = start(edition, hazard_basis="site-specific", T_L=f"{given.get('T_L', 8)} s", **inputs)
    calc.asce7.site_specific_values(given["S_DS"], given["S_D1"], source="P")
    calc.asce7.design_spectrum()
    return calc


def _study_floor(given: Given) -> Results:
    calc = _study("ASCE 7-16", given)
    calc.asce7.printed_ordinates(_pasted(given, "S_an"), source="P")
    checks = calc.asce7.study_floor()
    lines = {
        "S_DS_general": "S_DSg", "S_D1_general": "S_D1g", "S_a_general": "S_ag", "S_DS_from_ordinates": "S_DSo",
        "S_D1_from_ordinates": "S_D1o",
    }  # fmt: skip
    return {name: calc[line].value for name, line in lines.items()} | {"held": [c.line.verdict for c in checks]}


def _study_floor_2022(given: Given) -> Results:
    results: Results = {"S_DS_general": [], "S_D1_general": [], "held": []}
    for S_DS, S_D1 in zip(given["S_DS"], given["S_D1"], strict=True):
        calc = _study("ASCE 7-22", {"S_DS": S_DS, "S_D1": S_D1})
        for name in ("S_MS", "S_M1"):
            calc.given(name, given[name], source="P")
        results["held"] += [check.line.verdict for check in calc.asce7.study_floor()]
        results["S_DS_general"].append(float(calc["S_DSg"]))
        results["S_D1_general"].append(float(calc["S_D1g"]))
    return results


def _limit(given: Given) -> Results:
    results: Results = {"S_DS_limited": [], "C_s_basic": [], "C_s_floor": []}
    answers = {**dict.fromkeys(_QUESTIONS, "no"), "S_DS_limit": "taken"}
    for S_DS in given["S_DS"]:
        # T, W, stories and the site only meet the conditions; they do not enter the quantities checked
        calc = _study("ASCE 7-16", {"S_DS": S_DS, "S_D1": S_DS})
        facts = {"R": given["R"], "I_e": given["I_e"], "T": "0.3 s", "W": "100 kip", "rho": 1.0, "N_grade": 2}
        for name, value in {**facts, "risk_category": "II"}.items():
            calc.given(name, value, source="P")
        for name, word in answers.items():
            calc.answer(name, word, source="P")
        calc.asce7.short_building_limit()
        calc.asce7.base_shear()
        for name, line in (("S_DS_limited", "S_DSlim"), ("C_s_basic", "C_sbasic"), ("C_s_floor", "C_sfloor")):
            results[name].append(float(calc[line]))
    return results


ADAPTERS: dict[str, Callable[[Given], Results]] = {
    "asce7.c.multi_period": _multi_period,
    "asce7.c.default_envelope": _default_envelope,
    "asce7.c.peak_acceleration": _peak_acceleration,
    "asce7.c.study_floor": _study_floor,
    "asce7.c.study_floor_2022": _study_floor_2022,
    "asce7.c.limit_S_DS": _limit,
}
"""What runs each check, by its id."""
