"""The formulas of the methods, each declared once; those of one mode are declared for mode n.

Knows expression and source. Must not know lines. What array functions work for all modes at once is held against these.
"""

from __future__ import annotations

from calckit.core.formula import Formula
from calckit.core.record import Source

DYNAMICS = Source("structural dynamics", "modes of a structure on moving ground")
CQC = Source("E. L. Wilson, A. Der Kiureghian, E. P. Bayo 1981", "complete quadratic combination, equal damping")

W_TOT = Formula("W_tot", "total(w_x)", DYNAMICS)
W_FROM_RATIO = Formula("W_m", "r_m*W_tot", DYNAMICS)
R_M = Formula("r_m", "W_m/W_tot", DYNAMICS)
R_SUM = Formula("r_sum", "total(r_m)", DYNAMICS)

GAMMA_N = Formula("Gamma_n", "total(w_x*phi_n)/total(w_x*phi_n**2)", DYNAMICS)
W_N = Formula("W_n", "total(w_x*phi_n)**2/total(w_x*phi_n**2)", DYNAMICS)
H_EN = Formula("h_en", "total(w_x*h_x*phi_n)/total(w_x*phi_n)", DYNAMICS)
S_XN = Formula("s_xn", "Gamma_n*w_x*phi_n", DYNAMICS)
D_XN = Formula("d_xn", "Gamma_n*phi_n*g/omega_n**2", DYNAMICS)

RHO = "8*zeta**2*(1 + r_12)*r_12**1.5/((1 - r_12**2)**2 + 4*zeta**2*r_12*(1 + r_12)**2)"


def level_of(result: str, listed: str, row: str) -> Formula:
    """One entry of a list over modes.

    >>> level_of("omega_1", "omega_m", "1").text
    'level(omega_m, "1")'
    """
    return Formula(result, f'level({listed}, "{row}")', DYNAMICS)


def frequency_ratio(i: int, j: int) -> Formula:
    """The frequency of mode i over that of mode j.

    >>> frequency_ratio(1, 2).text
    'level(T_m, "2")/level(T_m, "1")'
    """
    return Formula(f"r_{i}{j}", f'level(T_m, "{j}")/level(T_m, "{i}")', CQC)


def correlation(i: int, j: int) -> Formula:
    """The correlation of modes i and j, both with the damping ratio zeta.

    >>> round(correlation(1, 2).value({"zeta": 0.02, "r_12": 0.9}), 4)
    0.1257
    """
    return Formula(f"rho_{i}{j}", RHO.replace("r_12", f"r_{i}{j}"), CQC)
