"""ASME B31.3: flexibility and stress intensification of corners, computed ranges, cold spring.

Texts from memory, confirm against the licensed standard. Plain bends have the same factors by Appendix D of the
editions to 2018 and by ASME B31J, which the 2022 edition refers to.
"""

from typing import Any, Final

import numpy as np

from pipeflex.formulas import Rule, formula

_D300: Final = "ASME B31.3-2018 Table D300 (2022: ASME B31J)"
_319_4: Final = "ASME B31.3-2018 and 2022, para. 319.4.4"
_320_2: Final = "ASME B31.3-2018 and 2022, para. 320.2"
_319_5: Final = "ASME B31.3-2018 and 2022, para. 319.5.1"


@formula("r_2 = (D_o - T_w)/2", ref=_D300)
def mean_radius(D_o: Any, T_w: Any) -> Any:
    """Mean radius of the wall [m]."""
    return (D_o - T_w) / 2


@formula("h = T_w*R/r_2**2", ref=f"{_D300}, elbow or bend")
def bend_characteristic(T_w: Any, R: Any, r_2: Any) -> Any:
    """Flexibility characteristic of a bend of centreline radius R [m]."""
    return T_w * R / r_2**2


@formula("h = s_m*T_w/(2*r_2**2*tan(theta))", ref=f"{_D300}, closely spaced mitre: s < r (1 + tan θ)")
def close_mitre_characteristic(s_m: Any, T_w: Any, r_2: Any, theta: Any) -> Any:
    """Flexibility characteristic of closely spaced mitres; theta at most 22.5 degrees."""
    return s_m * T_w / (2 * r_2**2 * np.tan(theta))


@formula("h = (1 + 1/tan(theta))*T_w/(2*r_2)", ref=f"{_D300}, single or widely spaced mitre")
def wide_mitre_characteristic(T_w: Any, r_2: Any, theta: Any) -> Any:
    """Flexibility characteristic of widely spaced mitres; theta at most 22.5 degrees."""
    return (1 + 1 / np.tan(theta)) * T_w / (2 * r_2)


@formula("h = T_w/r_2", ref=f"{_D300}: an unreinforced square corner as a single mitre of 45 degrees")
def square_characteristic(T_w: Any, r_2: Any) -> Any:
    """Flexibility characteristic of a square corner."""
    return T_w / r_2


@formula("c_f = h**(n_f/6)", ref=f"{_D300} note 7: one flanged end h to the power 1/6, two 1/3")
def flange_correction(h: Any, n_f: Any) -> Any:
    """Factor on k and i of a bend with 0, 1 or 2 flanged ends; at most 1."""
    return h ** (n_f / 6)


@formula("k = max(1, c_f*1.65/h)", ref=_D300)
def bend_flexibility(c_f: Any, h: Any) -> Any:
    """Flexibility factor of a bend, at least 1."""
    return np.maximum(1, c_f * 1.65 / h)


@formula("k = max(1, 1.52/h**(5/6))", ref=_D300)
def mitre_flexibility(h: Any) -> Any:
    """Flexibility factor of a mitre, at least 1."""
    return np.maximum(1, 1.52 / h ** (5 / 6))


@formula("i_i = max(1, c_f*0.9/h**(2/3))", ref=_D300)
def bend_in_plane(c_f: Any, h: Any) -> Any:
    """In-plane stress intensification of a bend, at least 1."""
    return np.maximum(1, c_f * 0.9 / h ** (2 / 3))


@formula("i_o = max(1, c_f*0.75/h**(2/3))", ref=_D300)
def bend_out_of_plane(c_f: Any, h: Any) -> Any:
    """Out-of-plane stress intensification of a bend, at least 1."""
    return np.maximum(1, c_f * 0.75 / h ** (2 / 3))


@formula("i_i = max(1, 0.9/h**(2/3))", ref=_D300)
def mitre_in_plane(h: Any) -> Any:
    """In-plane stress intensification of a mitre or square corner, at least 1."""
    return np.maximum(1, 0.9 / h ** (2 / 3))


@formula("i_o = max(1, 0.9/h**(2/3))", ref=_D300)
def mitre_out_of_plane(h: Any) -> Any:
    """Out-of-plane stress intensification of a mitre or square corner, at least 1."""
    return np.maximum(1, 0.9 / h ** (2 / 3))


@formula("i_i = i_fix", ref=f"{_D300}: socket weld 2.1, threaded joint 2.3, brazed joint 2.1")
def fixed_in_plane(i_fix: Any) -> Any:
    """In-plane stress intensification of a corner fitting that is no bend."""
    return i_fix


@formula("i_o = i_fix", ref=f"{_D300}: socket weld 2.1, threaded joint 2.3, brazed joint 2.1")
def fixed_out_of_plane(i_fix: Any) -> Any:
    """Out-of-plane stress intensification of a corner fitting that is no bend."""
    return i_fix


FIXED: Final = {"socket welded": 2.1, "threaded": 2.3, "brazed": 2.1}
"""Stress intensification of corner fittings that are no bends."""

_MITRE: Final[tuple[Rule, ...]] = (mitre_flexibility, mitre_in_plane, mitre_out_of_plane)

BEND_FACTORS: Final[dict[str, tuple[Rule, ...]]] = {
    "bend": (
        mean_radius,
        bend_characteristic,
        flange_correction,
        bend_flexibility,
        bend_in_plane,
        bend_out_of_plane,
    ),
    "closely spaced mitre": (mean_radius, close_mitre_characteristic, *_MITRE),
    "widely spaced mitre": (mean_radius, wide_mitre_characteristic, *_MITRE),
    "square": (mean_radius, square_characteristic, mitre_in_plane, mitre_out_of_plane),
    **dict.fromkeys(FIXED, (fixed_in_plane, fixed_out_of_plane)),
}
"""Rules of each kind of corner, in order; a chain without k leaves it at 1."""


@formula("S_b = sqrt((i_i*M_i)**2 + (i_o*M_o)**2)/Z", ref=f"{_319_4} eq. (18)")
def resultant_bending(i_i: Any, M_i: Any, i_o: Any, M_o: Any, Z: Any) -> Any:
    """Resultant bending stress [Pa]."""
    return np.sqrt((i_i * M_i) ** 2 + (i_o * M_o) ** 2) / Z


@formula("S_t = i_t*M_t/(2*Z)", ref=_319_4)
def torsional_stress(i_t: Any, M_t: Any, Z: Any) -> Any:
    """Torsional stress [Pa]."""
    return i_t * M_t / (2 * Z)


@formula("S_ax = i_a*F_x/A", ref=_319_4)
def axial_stress(i_a: Any, F_x: Any, A: Any) -> Any:
    """Axial stress [Pa] of the displacement strains."""
    return i_a * F_x / A


@formula("S_E = sqrt((abs(S_ax) + S_b)**2 + (2*S_t)**2)", ref=f"{_319_4} eq. (17)")
def computed_range(S_ax: Any, S_b: Any, S_t: Any) -> Any:
    """Computed displacement stress range [Pa], editions from 2010."""
    return np.sqrt((np.abs(S_ax) + S_b) ** 2 + (2 * S_t) ** 2)


@formula("S_E = sqrt(S_b**2 + (2*S_t)**2)", ref="ASME B31.3 before 2010, para. 319.4.4")
def computed_range_to_2008(S_b: Any, S_t: Any) -> Any:
    """Computed displacement stress range [Pa] of the editions before 2010, which leave the axial stress out."""
    return np.sqrt(S_b**2 + (2 * S_t) ** 2)


@formula("I_i = max(0.75*i_Li, 1)", ref=_320_2)
def sustained_in_plane(i_Li: Any) -> Any:
    """In-plane index of the sustained stress."""
    return np.maximum(0.75 * i_Li, 1)


@formula("I_o = max(0.75*i_Lo, 1)", ref=_320_2)
def sustained_out_of_plane(i_Lo: Any) -> Any:
    """Out-of-plane index of the sustained stress."""
    return np.maximum(0.75 * i_Lo, 1)


@formula("S_la = (F_Lx + P*A_i)/A_c", ref=f"{_320_2}: the pressure acts on closed ends")
def sustained_axial(F_Lx: Any, P: Any, A_i: Any, A_c: Any) -> Any:
    """Sustained axial stress [Pa] of weight and pressure."""
    return (F_Lx + P * A_i) / A_c


@formula("S_lb = sqrt((I_i*M_Li)**2 + (I_o*M_Lo)**2)/Z_c", ref=_320_2)
def sustained_bending(I_i: Any, M_Li: Any, I_o: Any, M_Lo: Any, Z_c: Any) -> Any:
    """Sustained bending stress [Pa]."""
    return np.sqrt((I_i * M_Li) ** 2 + (I_o * M_Lo) ** 2) / Z_c


@formula("S_lt = M_Lt/(2*Z_c)", ref=_320_2)
def sustained_torsion(M_Lt: Any, Z_c: Any) -> Any:
    """Sustained torsional stress [Pa]."""
    return M_Lt / (2 * Z_c)


@formula("S_L = sqrt((abs(S_la) + S_lb)**2 + (2*S_lt)**2)", ref=_320_2)
def sustained_stress(S_la: Any, S_lb: Any, S_lt: Any) -> Any:
    """Sustained stress [Pa] of weight and pressure."""
    return np.sqrt((np.abs(S_la) + S_lb) ** 2 + (2 * S_lt) ** 2)


@formula("R_m = R_F*(1 - 2*C_cs/3)*R_E", ref=f"{_319_5}")
def reaction_hot(R_F: Any, C_cs: Any, R_E: Any) -> Any:
    """Greatest reaction hot [N]; only for two anchors with nothing between."""
    return R_F * (1 - 2 * C_cs / 3) * R_E


@formula("C_1 = max(0, 1 - S_h*E_a/(S_E*E_m))", ref=f"{_319_5}")
def self_spring(S_h: Any, E_a: Any, S_E: Any, E_m: Any) -> Any:
    """Part of the reaction that stays when the line is cold again, by yielding or relaxation; not below 0."""
    return np.maximum(0, 1 - S_h * E_a / (S_E * E_m))


@formula("R_a = R_F*max(C_cs, C_1)", ref=f"{_319_5}: the greater of C R and C_1 R")
def reaction_cold(R_F: Any, C_cs: Any, C_1: Any) -> Any:
    """Greatest reaction cold [N]; only for two anchors with nothing between."""
    return R_F * np.maximum(C_cs, C_1)


EXPANSION_STRESS: Final[tuple[Rule, ...]] = (axial_stress, resultant_bending, torsional_stress, computed_range)
"""Computed range from the moments at one point, editions from 2010."""

SUSTAINED_STRESS: Final[tuple[Rule, ...]] = (
    sustained_in_plane, sustained_out_of_plane, sustained_axial, sustained_bending, sustained_torsion, sustained_stress,
)  # fmt: skip
"""Sustained stress at one point."""

COLD_SPRING: Final[tuple[Rule, ...]] = (reaction_hot, self_spring, reaction_cold)
"""Reactions of a cold-sprung run between two anchors with nothing between."""
