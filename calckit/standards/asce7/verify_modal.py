"""The published checks of modal analysis and its scaling, run through the public steps as an engineer would.

Knows how the inputs of a check are typed into a calculation and which line answers each quantity. Must not know what
the check expects.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import Any

from calckit.core.calc import Calc

Given = Mapping[str, Any]
Results = dict[str, Any]


def _stick(weights: Sequence[float], stiffnesses: Sequence[float], story: str, g: str) -> Calc:
    """A calculation with levels, roof first, and the lateral stiffness of each story."""
    calc = Calc(project="Published check", number="verify")
    calc.document("P", title="The document named by the check")
    names = ["Roof", *(str(number) for number in range(len(weights), 1, -1))]
    levels = "\n".join(f"{name}, {story}, {weight}" for name, weight in zip(names, weights, strict=True))
    calc.levels(f"level, h_sx [ft], w_x [kip]\n{levels}", source="P")
    stories = "\n".join(f"{name}, {k}" for name, k in zip(names, stiffnesses, strict=True))
    calc.rows("stories", f"level, k_x [kip/in]\n{stories}", source="P")
    calc.given("g", g, source="P")
    return calc


def _values(calc: Calc, name: str) -> list[float]:
    value = calc[name].value
    assert isinstance(value, list)
    return value


def _five_stories(given: Given) -> Results:
    def stick(count: int | None = None) -> Calc:
        made = _stick(given["m_kip_per_g"], given["k_kip_per_in"], str(given["h_ft"]), f"{given['g_in_s2']} in/s**2")
        made.methods.modes(count=count)
        return made

    calc = stick()
    calc.given("zeta", given["zeta"], source="P")
    calc.methods.correlation()
    shears = "\n".join(f"{number}, {shear}" for number, shear in enumerate(given["V_bn_kip"], 1))
    calc.rows("shears", f"mode, V_m [kip]\n{shears}", source="P")
    rules = ("SRSS", "ABS", "CQC")
    combined = {rule: calc.methods.combine("V_m", rule=rule, into=f"V_{rule}")[0].value for rule in rules}
    enough = next(count for count in range(1, 6) if float(stick(count)["r_sum"]) >= 0.9)
    return {
        "T": _values(calc, "T_m"),
        "M_eff_over_m": [weight / given["m_kip_per_g"][0] for weight in _values(calc, "W_m")],
        "M_eff_percent": [100 * ratio for ratio in _values(calc, "r_m")],
        "modes_for_90_percent": enough,
        **{f"V_b_{rule}": value for rule, value in combined.items()},
    }


def _two_stories(given: Given) -> Results:
    # story height and g do not enter the quantities checked: weights are the stated masses times g
    g = 386.0
    calc = _stick([m * g for m in given["m_kip_s2_in"]], given["k_kip_per_in"], "12", f"{g} in/s**2")
    calc.methods.modes()
    excited = calc.line("L_1", "total(w_x*phi_1)/g", unit="kip*s**2/in", meaning="mass excited by mode 1")
    first, second = _values(calc, "phi_1"), _values(calc, "phi_2")
    return {
        "omega_squared": [omega**2 for omega in _values(calc, "omega_m")],
        "T": _values(calc, "T_m"),
        "phi_1_floor_over_roof": first[1] / first[0],
        "phi_2_floor_over_roof": second[1] / second[0],
        "L_1": excited.value,
        "M_eff_percent": [100 * ratio for ratio in _values(calc, "r_m")],
    }


def _scaling(given: Given) -> Results:
    calc = Calc(project="Published check", number="verify")
    calc.document("P", title="The document named by the check")
    # S_1 is stated by the note of the check; W does not enter the quantity checked
    calc.givens(f"V, {given['V']} kip, P\nS_1, 0.40, P\nW, 30000 kip, P")
    factors = []
    for direction in ("x", "y"):
        part = calc.part(direction.upper(), direction)
        part.given("V_t", f"{given[f'V_t_{direction}']} kip", source="P")
        factors.append(float(part.asce7.modal_scaling()[0]))
    return {"factor_7_16": factors}


ADAPTERS: dict[str, Callable[[Given], Results]] = {
    "asce7.ex04.five_story_modal": _five_stories,
    "asce7.ex06.two_story_modal": _two_stories,
    "asce7.ex23.modal_scaling": _scaling,
}
"""What runs each check, by its id."""
