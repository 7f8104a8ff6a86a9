"""Each published check of this family, run through the public steps as an engineer would.

Knows how the inputs of a check are typed into a calculation and which line answers each quantity. Must not know what
the check expects.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import Any

from calckit.core.calc import Calc
from calckit.core.handle import Handle
from calckit.errors import MismatchError
from calckit.standards.asce7 import (
    verify_components,
    verify_effects,
    verify_ground,
    verify_modal,
    verify_plan,
    verify_structure,
)
from calckit.standards.asce7.published import in_force, in_unit, start

Given = Mapping[str, Any]
Results = dict[str, Any]

_STEEL = "moment frame: steel special moment frame"
_MASONRY = "building frame: special reinforced masonry"
_HOUSE = "bearing wall: light frame wood with wood panel or steel sheet"


def _site_specific(given: Given, edition: str = "ASCE 7-16", /, **more: Any) -> Calc:
    """Started from design ordinates; S_S, T_L and the site class do not enter the quantities checked."""
    unused = {"S_S": 1.0, "S_1": given["S_1"], "T_L": f"{given.get('T_L', 8)} s", "site_class": "C"}
    calc = start(edition, hazard_basis="site-specific", **unused, **more)
    calc.asce7.site_specific_values(given["S_DS"], given.get("S_D1", given.get("S_D1_rounded")), source="P")
    calc.asce7.design_spectrum()
    return calc


def _mapped(given: Given, **more: Any) -> Calc:
    """Started from mapped values; T_L does not enter the quantities checked."""
    site_class = given["site_class"].replace("(", "").replace(")", "")
    return start(site_class=site_class, S_S=given["S_S"], S_1=given["S_1"], T_L="8 s", **more)


def _levels(calc: Calc, given: Given, **columns: Sequence[Any]) -> None:
    """Type the table of levels; a column is named `h_x_ft` for `h_x [ft]`."""
    split = [name.rpartition("_") for name in columns]
    header = ["level", *(f"{symbol} [{unit}]" for symbol, _, unit in split)]
    rows = zip(given["level"], *columns.values(), strict=True)
    calc.levels("\n".join(", ".join(map(str, row)) for row in (header, *rows)), source="P")


def _same(calc: Calc, given: Given, *names: str) -> None:
    """Hold table values of a step against those the check states."""
    for name in names:
        if in_force(calc, name) != given[name]:
            raise MismatchError(f"{name}: the table gives {in_force(calc, name)}, the check states {given[name]}")


def _stockton_forces(given: Given) -> Results:
    n = len(given["level"])
    calc = _site_specific(given, system=_STEEL, h_n=f"{given['h_n']} ft", T_analysis=f"{given['T_analysis']} s")
    calc.given("I_e", given["I_e"], source="P")
    # the heights do not enter the quantities checked
    _levels(calc, given, h_x_ft=[given["h_n"] * (n - i) / n for i in range(n)], w_x_kip=given["w_x"])
    calc.asce7.system()
    calc.asce7.seismic_weight()
    calc.asce7.approximate_period()
    calc.asce7.period()
    calc.asce7.base_shear()
    calc.asce7.vertical_distribution()
    _same(calc, given, "R", "C_d", "Omega_0", "C_t", "x", "C_u")
    return {
        "W": in_force(calc, "W", "kip"),
        "T_a": in_force(calc, "T_a", "s"),
        "T": in_force(calc, "T", "s"),
        "C_s_basic": in_force(calc, "C_sbasic"),
        "C_s_cap": in_force(calc, "C_scap"),
        "C_s_floor": in_force(calc, "C_sfloor"),
        "C_s": in_force(calc, "C_s"),
        "V": in_force(calc, "V", "kip"),
        "k": in_force(calc, "k"),
    }


def _distributed(given: Given, V: float, **overrides: float) -> Calc:
    """A stated base shear distributed over the height; the period only decides k."""
    calc = start(V=f"{V} kip", T=f"{given.get('T_rounded', 2.2)} s")
    for name, value in overrides.items():
        calc.override(name, value, reason="stated by the check", by="kit")
    _levels(calc, given, h_x_ft=given["h_x"], w_x_kip=given["w_x"])
    calc.asce7.vertical_distribution()
    return calc


def _stockton_distribution(given: Given) -> Results:
    calc = _distributed(given, given["V"], k=given["k"])
    return {
        "w_h_k": in_force(calc, "wh_x"),
        "sum_w_h_k": in_force(calc, "sum_wh"),
        "C_vx": in_force(calc, "C_vx"),
        "F_x": in_force(calc, "F_x", "kip"),
        "V_x": in_force(calc, "V_x", "kip"),
    }


def _stockton_overturning(given: Given) -> Results:
    calc = _distributed(given, given["V"], k=given["k"])
    if in_force(calc, "h_sx", "ft") != given["h_sx"]:
        raise MismatchError("h_sx: the heights of the levels give other story heights than the check states")
    return {"M_x_kip_ft": in_force(calc, "M_x", "kip*ft")}


def _stockton_drift(given: Given) -> Results:
    calc = start(
        system=_STEEL, risk_category="II", drift_class="all other", C_d=given["C_d"], I_e=given["I_e"], SDC="C"
    )
    _levels(calc, given, h_sx_in=given["h_sx_in"], delta_xe_in=given["delta_xe_in"])
    elastic = calc.line("Delta_e", "delta_xe - below(delta_xe)", unit="in", meaning="elastic story drift")
    check = calc.asce7.drift()
    if in_force(calc, "r_Delta") != given["drift_limit"]:
        raise MismatchError(f"drift limit: the table gives {in_force(calc, 'r_Delta')}")
    return {
        "Delta_e_in": in_unit(elastic, "in"),
        "Delta_in": in_force(calc, "Delta", "in"),
        "Delta_a_in": in_force(calc, "Delta_a", "in"),
        "levels_failing_unrelieved": _failing(check),
    } | _stockton_relieved(given)


def _failing(check: Handle) -> list[str]:
    """The levels at which a check is not met."""
    failing = check.line.detail.partition("not met at ")[2].partition(";")[0]
    return failing.split(", ") if failing else []


def _stockton_relieved(given: Given) -> Results:
    """The same drifts by a model run with V, scaled to the base shear without the lower limit of C_s."""
    calc = _site_specific(given, system=_STEEL, h_n=f"{given['h_n']} ft", T_analysis=f"{given['T_analysis']} s")
    for name, value in {"I_e": given["I_e"], "SDC": "C", "risk_category": "II", "drift_class": "all other"}.items():
        calc.given(name, value, source="P")
    calc.answer("drift_relief", "floor", basis="taken by the source")
    _levels(calc, given, h_sx_in=given["h_sx_in"], w_x_kip=given["w_x"], delta_xe_in=given["delta_xe_in"])
    for step in ("system", "seismic_weight", "approximate_period", "period", "base_shear"):
        getattr(calc.asce7, step)()
    calc.analysis(V_applied=f"{in_force(calc, 'V', 'kip')} kip")
    calc.asce7.analysis_model()
    check = calc.asce7.drift()
    return {
        "Delta_relieved_in": in_force(calc, "Delta", "in"),
        "levels_failing_relieved": _failing(check),
    }


def _masonry(given: Given) -> Results:
    calc = _site_specific(given, system=_MASONRY, h_n=f"{given['h_n']} ft")
    calc.given("I_e", given["I_e"], source="P")
    calc.override("T", f"{given['T_rounded']} s", reason="rounded by the source", by="kit")
    _levels(calc, given, h_x_ft=given["h_x"], w_x_kip=given["w_x"])
    calc.asce7.system()
    calc.asce7.seismic_weight()
    calc.asce7.approximate_period()
    calc.asce7.period()
    calc.asce7.base_shear()
    _same(calc, given, "R", "C_t", "x")
    spread = _distributed(given, given["V_for_distribution"])
    return {
        "T_a": in_force(calc, "T_a", "s"),
        "C_s_basic": in_force(calc, "C_sbasic"),
        "C_s_cap_from_rounded_inputs": in_force(calc, "C_scap"),
        "C_s_floor": in_force(calc, "C_sfloor"),
        "C_s": in_force(calc, "C_s"),
        "W": in_force(calc, "W", "kip"),
        "V": in_force(calc, "V", "kip"),
        "F_x": in_force(spread, "F_x", "kip"),
    }


def _ordinates(given: Given) -> Results:
    calc = _mapped(given)
    calc.asce7.design_spectrum()
    names = ("F_a", "F_v", "S_MS", "S_M1", "S_DS", "S_D1")
    return {name: in_force(calc, name) for name in names} | {name: in_force(calc, name, "s") for name in ("T_0", "T_S")}


def _house(given: Given) -> Results:
    # W does not enter the quantities checked
    calc = _mapped(given, system=_HOUSE, h_n=f"{given['h_n']} ft", I_e=given["I_e"], W="100 kip")
    calc.override("F_v", given["F_v_printed"], reason="printed by the source", by="kit")
    calc.asce7.design_spectrum()
    calc.asce7.system()
    calc.asce7.approximate_period()
    calc.asce7.period()
    calc.asce7.base_shear()
    calc.given("rho", 1.0, source="P")  # the sheet prints 0.7 V alone
    calc.asce7.load_effects()
    _same(calc, given, "R", "C_t", "x")
    return _ordinates(given) | {
        "S_M1_with_F_v_printed": in_force(calc, "S_M1"),
        "S_D1_with_F_v_printed": in_force(calc, "S_D1"),
        "T_a": in_force(calc, "T_a", "s"),
        "C_s_basic": in_force(calc, "C_sbasic"),
        "C_s_cap_with_F_v_printed": in_force(calc, "C_scap"),
        "C_s": in_force(calc, "C_s"),
        "ASD_coefficient": in_force(calc, "C_sA"),
    }


def _spectrum(given: Given) -> Results:
    calcs = [_site_specific({"S_1": 0.6, **given}, edition) for edition in ("ASCE 7-16", "ASCE 7-22")]
    first, second = (calc.asce7.spectrum_ordinates(given["T"]).value for calc in calcs)
    if first != second:
        raise MismatchError(f"S_a: 7-16 gives {first}, the two-period spectrum of 7-22 {second}")
    return {"S_a": first}


def _coefficients(given: Given) -> Results:
    results: Results = {"C_s_cap": [], "C_s_floor": [], "C_s": []}
    for T, S_1 in zip(given["T"], given["S_1"], strict=True):
        # W does not enter the quantities checked
        more = {"R": given["R"], "I_e": given["I_e"], "T": f"{T} s", "W": "100 kip"}
        calc = _site_specific({**given, "S_1": S_1}, **more)
        calc.asce7.base_shear()
        for name, line in (("C_s_cap", "C_scap"), ("C_s_floor", "C_sfloor"), ("C_s", "C_s")):
            results[name].append(in_force(calc, line))
    return results


def _period_limit(given: Given) -> Results:
    values = []
    for S_D1 in given["S_D1"]:
        calc = start(S_D1=S_D1, T_a="1 s")  # T_a does not enter the quantity checked
        calc.asce7.period()
        values.append(in_force(calc, "C_u"))
    return {"C_u": values}


def _wall_and_parapet(given: Given) -> Results:
    return verify_components.parapet(given) | verify_effects.wall(given)


ADAPTERS: dict[str, Callable[[Given], Results]] = {
    "asce7.ex01a.stockton_elf": _stockton_forces,
    "asce7.ex01b.stockton_vertical_distribution": _stockton_distribution,
    "asce7.ex01c.stockton_overturning": _stockton_overturning,
    "asce7.ex02.stockton_drift": _stockton_drift,
    "asce7.ex07.masonry_5_story_elf": _masonry,
    "asce7.ex17a.house_elf": _house,
    "asce7.ex17b.wrong_edition_Fv": _ordinates,
    "asce7.v.sitecoef.C_060_022": _ordinates,
    "asce7.v.sitecoef.D_060_022": _ordinates,
    "asce7.v.sitecoef.D_033_008": _ordinates,
    "asce7.v.sitecoef.B_090_030": _ordinates,
    "asce7.v.spectrum": _spectrum,
    "asce7.v.Cs": _coefficients,
    "asce7.v.Cu": _period_limit,
    **verify_effects.ADAPTERS,
    **verify_plan.ADAPTERS,
    **verify_structure.ADAPTERS,
    **verify_ground.ADAPTERS,
    **verify_components.ADAPTERS,
    "asce7.ex11.wall_and_parapet_Fp": _wall_and_parapet,
    **verify_modal.ADAPTERS,
}
"""What runs each check, by its id."""
